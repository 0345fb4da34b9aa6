//! The opening rules: what is not ours, or newer than we are, is not touched;
//! what is older is copied first and then brought up to date.

use super::migrations::MIGRATIONS;
use super::upkeep::copy_to;
use super::{Store, StoreError};
use rusqlite::{Connection, OpenFlags, OptionalExtension, Transaction, TransactionBehavior};
use std::fs::File;
use std::io::Read;
use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::Duration;

/// What to do when there is no store at the path.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum OpenMode {
    /// Say that it is missing.
    MustExist,
    /// Make one.
    Create,
}

/// `BbPt`, in the file's header at byte 68.
pub(super) const APPLICATION_ID: i32 = 0x4262_5074;
const MAGIC: &[u8; 16] = b"SQLite format 3\0";
/// How long a writer waits for another.
const PATIENCE: Duration = Duration::from_secs(5);
/// Statements kept prepared.
const PREPARED: usize = 64;

impl Store {
    /// Opens the store at `path`.
    ///
    /// # Errors
    /// [`StoreError`] says which rule refused. A file that is refused is left as it was.
    pub fn open(path: &Path, mode: OpenMode) -> Result<Self, StoreError> {
        Self::open_with(path, mode, MIGRATIONS)
    }

    fn open_with(path: &Path, mode: OpenMode, migrations: &[&str]) -> Result<Self, StoreError> {
        let fresh = match look(path, migrations.len())? {
            Found::Nothing | Found::Empty if mode == OpenMode::MustExist => return Err(StoreError::Missing { path: path.to_owned() }),
            Found::Nothing | Found::Empty => true,
            Found::Store => false,
        };
        let store = Self { connection: connect(path)?, path: Some(path.to_owned()), turn: Arc::default() };
        if fresh {
            store.make(migrations)?;
        } else {
            store.bring_up_to_date(migrations)?;
        }
        store.read(set_up)?;
        let journal: String = store.read(|c| c.pragma_update_and_check(None, "journal_mode", "WAL", |row| row.get(0)))?;
        if journal != "wal" {
            return Err(StoreError::NoSafePlace { path: path.to_owned() });
        }
        store.adopt_rulebooks()?;
        Ok(store)
    }

    /// A setting of the store at `path`, read without opening it for work:
    /// nothing is migrated and no file appears beside it. What another program
    /// wrote and has not yet folded in is not seen.
    ///
    /// # Errors
    /// As [`Store::open`]; `None` also where there is no store yet.
    pub fn peek_setting(path: &Path, key: &str) -> Result<Option<String>, StoreError> {
        if !matches!(look(path, MIGRATIONS.len())?, Found::Store) {
            return Ok(None);
        }
        let told = |e| StoreError::from_sqlite(e, Some(path));
        let file = path.to_string_lossy().replace('%', "%25").replace('?', "%3f").replace('#', "%23");
        let flags = OpenFlags::SQLITE_OPEN_READ_ONLY | OpenFlags::SQLITE_OPEN_URI | OpenFlags::SQLITE_OPEN_NO_MUTEX;
        let connection = Connection::open_with_flags(format!("file:{file}?immutable=1"), flags).map_err(told)?;
        let value = connection.query_row("SELECT value FROM settings WHERE key = ?1", [key], |row| row.get(0));
        value.optional().map_err(told)
    }

    /// A store that lasts as long as it is open, for trying things out.
    ///
    /// # Errors
    /// Out of memory.
    pub fn in_memory() -> Result<Self, StoreError> {
        let connection = Connection::open_in_memory().map_err(|e| StoreError::from_sqlite(e, None))?;
        let store = Self { connection, path: None, turn: Arc::default() };
        store.make(MIGRATIONS)?;
        store.read(set_up)?;
        Ok(store)
    }

    /// A second connection to the same file, for another thread.
    ///
    /// # Errors
    /// As [`Store::open`]; a store in memory has no second connection.
    pub fn another(&self) -> Result<Self, StoreError> {
        let path = self.path.as_deref().ok_or(StoreError::OnlyInMemory { what: "open a second connection" })?;
        Ok(Self { turn: Arc::clone(&self.turn), ..Self::open(path, OpenMode::MustExist)? })
    }

    /// A new store is made in one transaction before the write-ahead log is
    /// switched on, so that from its first moment the file's own header says whose it is.
    fn make(&self, migrations: &[&str]) -> Result<(), StoreError> {
        self.read(|connection| {
            let transaction = Transaction::new_unchecked(connection, TransactionBehavior::Immediate)?;
            // Another program may have been faster.
            if version(connection)? == 0 {
                connection.pragma_update(None, "application_id", APPLICATION_ID)?;
                run(connection, migrations, 0)?;
                connection.execute("INSERT INTO devices (id, own, counter) VALUES (randomblob(16), 1, 0)", [])?;
            }
            transaction.commit()
        })
    }

    fn bring_up_to_date(&self, migrations: &[&str]) -> Result<(), StoreError> {
        let path = self.path.as_deref().unwrap_or(Path::new(""));
        let known = i64::try_from(migrations.len()).unwrap_or(i64::MAX);
        let refuse_newer =
            |found: i64| if found > known { Err(StoreError::Newer { path: path.to_owned(), found, known }) } else { Ok(found) };

        let before = refuse_newer(self.read(version)?)?;
        if before < known {
            copy_before_migrating(&self.connection, path, before)?;
            let transaction = Transaction::new_unchecked(&self.connection, TransactionBehavior::Immediate).map_err(|e| self.told(e))?;
            // Read again under the lock: another program may have been faster.
            let current = refuse_newer(self.read(version)?)?;
            self.read(|connection| run(connection, migrations, current))?;
            let broken = self.foreign_key_faults()?;
            if let Some(first) = broken.first() {
                return Err(StoreError::Damaged { path: path.to_owned(), detail: first.clone() });
            }
            transaction.commit().map_err(|e| self.told(e))?;
        }
        Ok(())
    }
}

enum Found {
    Nothing,
    /// A file without content, or a database without tables: left by a first start that was cut short.
    Empty,
    Store,
}

/// Looks at the file's first bytes without opening it as a database.
fn look(path: &Path, known: usize) -> Result<Found, StoreError> {
    let told = |detail: String| StoreError::CannotOpen { path: path.to_owned(), detail };
    let mut file = match File::open(path) {
        Ok(file) => file,
        Err(e) if e.kind() == std::io::ErrorKind::NotFound => return Ok(Found::Nothing),
        Err(e) => return Err(told(e.to_string())),
    };
    if file.metadata().map_err(|e| told(e.to_string()))?.is_dir() {
        return Err(told("it is a folder".to_owned()));
    }
    let mut header = Vec::with_capacity(100);
    file.by_ref().take(100).read_to_end(&mut header).map_err(|e| told(e.to_string()))?;
    if header.is_empty() {
        return Ok(Found::Empty);
    }
    if header.len() < 100 || &header[..16] != MAGIC {
        return Err(StoreError::NotSqlite { path: path.to_owned() });
    }
    let number = |at: usize| i32::from_be_bytes([header[at], header[at + 1], header[at + 2], header[at + 3]]);
    if number(68) != APPLICATION_ID {
        return Err(StoreError::NotAStore { path: path.to_owned() });
    }
    // Refused here already, because a database that is opened gets files beside it.
    let (found, known) = (i64::from(number(60)), i64::try_from(known).unwrap_or(i64::MAX));
    if found > known {
        return Err(StoreError::Newer { path: path.to_owned(), found, known });
    }
    Ok(Found::Store)
}

fn connect(path: &Path) -> Result<Connection, StoreError> {
    let flags = OpenFlags::SQLITE_OPEN_READ_WRITE | OpenFlags::SQLITE_OPEN_CREATE | OpenFlags::SQLITE_OPEN_NO_MUTEX;
    let connection = Connection::open_with_flags(path, flags).map_err(|e| StoreError::from_sqlite(e, Some(path)))?;
    // Migrations may have to rebuild a table that others point to; references are checked after them.
    let prepared = connection.busy_timeout(PATIENCE).and_then(|()| connection.pragma_update(None, "foreign_keys", false));
    prepared.map_err(|e| StoreError::from_sqlite(e, Some(path)))?;
    Ok(connection)
}

/// What every connection needs once the schema is right. Facts are on disk
/// when a transaction returns (`synchronous=FULL`).
fn set_up(connection: &Connection) -> rusqlite::Result<()> {
    connection.pragma_update(None, "foreign_keys", true)?;
    connection.pragma_update(None, "synchronous", "FULL")?;
    connection.pragma_update(None, "trusted_schema", false)?;
    connection.set_prepared_statement_cache_capacity(PREPARED);
    Ok(())
}

fn version(connection: &Connection) -> rusqlite::Result<i64> {
    connection.pragma_query_value(None, "user_version", |row| row.get(0))
}

/// Runs what comes after schema `current`, inside the caller's transaction.
fn run(connection: &Connection, migrations: &[&str], current: i64) -> rusqlite::Result<()> {
    let done = usize::try_from(current).unwrap_or(0);
    for migration in migrations.iter().skip(done) {
        connection.execute_batch(migration)?;
    }
    connection.pragma_update(None, "user_version", i64::try_from(migrations.len()).unwrap_or(i64::MAX))
}

/// `<name>.schema-<number>` beside the store; a copy that is there already is
/// kept and the new one gets a further number.
fn copy_before_migrating(connection: &Connection, path: &Path, schema: i64) -> Result<PathBuf, StoreError> {
    let name = path.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default();
    let mut target = path.with_file_name(format!("{name}.schema-{schema}"));
    let mut further = 2;
    while target.exists() {
        target = path.with_file_name(format!("{name}.schema-{schema}-{further}"));
        further += 1;
    }
    copy_to(connection, path, &target)?;
    Ok(target)
}

#[cfg(test)]
mod tests {
    use super::super::samples;
    use super::*;

    const LATER: &str = "CREATE TABLE later (id INTEGER PRIMARY KEY) STRICT;";

    fn known() -> i64 {
        i64::try_from(MIGRATIONS.len()).unwrap()
    }

    fn folder() -> tempfile::TempDir {
        tempfile::tempdir().unwrap()
    }

    fn names(folder: &Path) -> Vec<String> {
        let mut names: Vec<String> =
            std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned()).collect();
        names.sort();
        names
    }

    #[test]
    fn a_missing_store_is_made_only_when_asked() {
        let folder = folder();
        let path = folder.path().join("a.store");
        assert!(matches!(Store::open(&path, OpenMode::MustExist), Err(StoreError::Missing { .. })));
        assert_eq!(names(folder.path()), Vec::<String>::new());
        drop(Store::open(&path, OpenMode::Create).unwrap());
        let again = Store::open(&path, OpenMode::MustExist).unwrap();
        let pragma = |name: &str| again.read(|c| c.pragma_query_value(None, name, |row| row.get::<_, i64>(0))).unwrap();
        assert_eq!((pragma("foreign_keys"), pragma("synchronous"), pragma("busy_timeout")), (1, 2, 5000));
    }

    #[test]
    fn a_first_start_that_was_cut_short_begins_again() {
        let folder = folder();
        let path = folder.path().join("a.store");
        std::fs::write(&path, b"").unwrap();
        assert!(matches!(Store::open(&path, OpenMode::MustExist), Err(StoreError::Missing { .. })));
        assert!(Store::open(&path, OpenMode::Create).is_ok());
    }

    #[test]
    fn an_older_store_is_copied_and_brought_up_to_date() {
        let folder = folder();
        let path = folder.path().join("a.store");
        let store = Store::open(&path, OpenMode::Create).unwrap();
        samples::fill(&store);
        drop(store);

        let newer = [MIGRATIONS, &[LATER]].concat();
        let store = Store::open_with(&path, OpenMode::MustExist, &newer).unwrap();
        assert_eq!(store.read(version).unwrap(), known() + 1);
        assert_eq!(store.registers().unwrap().sites, [samples::site()]);
        drop(store);
        let copy = Store::open(&folder.path().join(format!("a.store.schema-{}", known())), OpenMode::MustExist).unwrap();
        assert_eq!(copy.registers().unwrap().sites, [samples::site()]);

        // And back: what is newer than the program is left alone, byte by byte.
        let before = std::fs::read(&path).unwrap();
        assert!(
            matches!(Store::open(&path, OpenMode::Create), Err(StoreError::Newer { found, known: of, .. }) if found == of + 1 && of == known())
        );
        assert_eq!(std::fs::read(&path).unwrap(), before);
    }

    /// One store of each schema that was ever released, opened by this program.
    #[test]
    fn a_store_of_every_schema_opens() {
        assert_eq!(EARLIER.len() + 1, MIGRATIONS.len(), "a fixture for each schema but the present one");
        for (schema, bytes, entries) in EARLIER {
            let folder = folder();
            let path = folder.path().join("a.store");
            std::fs::write(&path, bytes).unwrap();
            let store = Store::open(&path, OpenMode::MustExist).unwrap();
            assert_eq!(store.read(version).unwrap(), known(), "schema {schema}");
            assert_eq!(store.lines().unwrap().len(), entries);
            assert!(store.check().unwrap().sound());
            assert_eq!(std::fs::read(folder.path().join(format!("a.store.schema-{schema}"))).unwrap()[..16], bytes[..16]);
        }
    }

    /// A store of schema 1 does not say when a gross was read: it was when its line was written.
    #[test]
    fn weighings_of_schema_1_count_from_when_they_were_written() {
        let folder = folder();
        let path = folder.path().join("a.store");
        std::fs::write(&path, include_bytes!("../../tests/fixtures/schema-1.store")).unwrap();
        let store = Store::open(&path, OpenMode::MustExist).unwrap();
        let registers = store.registers().unwrap();
        let content = |name: &str, on: &str| {
            let cylinder = registers.cylinder_named(name).unwrap();
            let gas = |_: &crate::ledger::Movement| Some("R-22".to_owned());
            let balance = crate::ledger::cylinder_balance(cylinder, &store.movements().unwrap(), on.parse().unwrap(), &gas);
            balance.content.mass().map(|mass| mass.in_unit(crate::quantity::MassUnit::Pound).to_string())
        };
        // 60 lb gross with 28 lb of tare, and 15 lb charged before that was read.
        assert_eq!(content("S-1", "2026-12-01").as_deref(), Some("32"));
        assert_eq!(content("S-1", "2025-02-28").as_deref(), Some("47"));
        // Weighed anew on the day, after 2 lb were charged.
        assert_eq!(content("S-2", "2026-12-01").as_deref(), Some("19"));
        assert_eq!(content("V-1", "2026-12-01").as_deref(), Some("4"));
    }

    #[test]
    fn a_migration_that_fails_changes_nothing() {
        let folder = folder();
        let path = folder.path().join("a.store");
        drop(Store::open(&path, OpenMode::Create).unwrap());
        let failing = [MIGRATIONS, &[LATER, "CREATE TABLE later (again INTEGER) STRICT;"]].concat();
        assert!(Store::open_with(&path, OpenMode::MustExist, &failing).is_err());
        let store = Store::open(&path, OpenMode::MustExist).unwrap();
        assert_eq!(store.read(version).unwrap(), known());
        let tables: i64 =
            store.read(|c| c.query_row("SELECT count(*) FROM sqlite_schema WHERE name = 'later'", [], |row| row.get(0))).unwrap();
        assert_eq!(tables, 0);
    }

    #[test]
    fn a_migration_that_breaks_references_is_undone() {
        let folder = folder();
        let path = folder.path().join("a.store");
        let store = Store::open(&path, OpenMode::Create).unwrap();
        samples::fill(&store);
        drop(store);
        let breaking = [MIGRATIONS, &["DELETE FROM people;"]].concat();
        assert!(matches!(Store::open_with(&path, OpenMode::MustExist, &breaking), Err(StoreError::Damaged { .. })));
        assert_eq!(Store::open(&path, OpenMode::MustExist).unwrap().registers().unwrap().people, [samples::person()]);
    }
    /// A store of each earlier schema, as it was written then, with the number of its entries.
    const EARLIER: [(i64, &[u8], usize); 3] = [
        (1, include_bytes!("../../tests/fixtures/schema-1.store"), 5),
        (2, include_bytes!("../../tests/fixtures/schema-2.store"), 1),
        (3, include_bytes!("../../tests/fixtures/schema-3.store"), 1),
    ];

    /// Closed records, hand-overs, cautions and drafts of schema 2.
    #[test]
    fn what_stands_beside_the_entries_of_schema_2_is_kept() {
        use crate::ledger::{ApplianceId, CautionSeen, VisitId, VisitState};
        let folder = folder();
        let path = folder.path().join("a.store");
        std::fs::write(&path, EARLIER[1].1).unwrap();
        let store = Store::open(&path, OpenMode::MustExist).unwrap();
        let visit = |number: u128| VisitId(uuid::Uuid::from_u128(number));
        let closed = store.visit(visit(5)).unwrap().unwrap();
        assert_eq!(closed.state, VisitState::Closed);
        assert_eq!(closed.closing.unwrap().handed_over, "Mara Brandeis, on paper");
        let record = crate::record::read_closed(&store.closed_record(visit(5)).unwrap().unwrap().bytes).unwrap();
        assert_eq!(record.site, store.site(record.site.id).unwrap().unwrap());
        assert_eq!(record.entries[0].detail, store.entries_of_visit(visit(5)).unwrap()[0].detail);
        assert_eq!(store.copies(visit(5)).unwrap(), []);
        let seen = CautionSeen { caution: "1".to_owned(), on: None, at_minute: 493, person: None };
        assert_eq!(store.cautions_seen(visit(6)).unwrap(), [seen]);
        let drafts = store.drafts_of(visit(6)).unwrap();
        assert_eq!(drafts[0].appliance, None);
        assert!(drafts[0].body.contains(&ApplianceId(uuid::Uuid::from_u128(2)).to_string()));
    }
}
