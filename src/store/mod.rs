//! The SQLite file.
//!
//! Registers keep every version; entries are append-only; a closed visit is
//! frozen by triggers. Nothing here is computed: balances, rates and duties
//! follow from what is read.

mod cylinder_entries;
mod drafts;
mod entries;
mod error;
mod migrations;
mod opening;
mod records;
mod registers;
#[cfg(test)]
mod samples;
mod settings;
mod sql_types;
mod upkeep;
mod visits;
mod writing;

pub use drafts::{AFTER_CLOSING, Draft, DraftWriter};
pub use error::StoreError;
pub use opening::OpenMode;
pub use records::{ClosedRecord, Countersignature, FurtherCopy, HandOver, Since};
pub use settings::{Import, fingerprint_of};
pub use upkeep::{RecordCheck, Report};
pub use visits::VisitFilter;
pub use writing::Writing;

use chrono::{DateTime, Utc};
use rusqlite::{Connection, Transaction, TransactionBehavior};
use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};
use std::time::Duration;

/// An open store: one connection. A second thread opens its own with
/// [`Store::another`].
pub struct Store {
    connection: Connection,
    /// `None` for a store in memory.
    path: Option<PathBuf>,
    /// Taken by whoever of this program writes. SQLite alone would let a busy
    /// writer keep another out for long: who waits there asks again at
    /// growing intervals, who waits here is woken.
    turn: Arc<Mutex<()>>,
}

impl Store {
    /// Where the file is; `None` for a store in memory.
    pub fn path(&self) -> Option<&Path> {
        self.path.as_deref()
    }

    /// Runs `act` in one transaction: all of it is on disk when this returns
    /// `Ok`, none of it otherwise. What is read inside sees what was written inside.
    ///
    /// # Errors
    /// That of `act`, or the store's own: busy, full, read-only, damaged.
    pub fn write<T, E: From<StoreError>>(&self, now: DateTime<Utc>, act: impl FnOnce(&Writing<'_>) -> Result<T, E>) -> Result<T, E> {
        let (_turn, transaction) = self.begin_writing()?;
        let writing = Writing::begin(self, now)?;
        let done = act(&writing)?;
        writing.count_rows()?;
        transaction.commit().map_err(|e| self.told(e))?;
        Ok(done)
    }

    /// Limits the file to so many pages, so that a full disk can be tried out.
    ///
    /// # Errors
    /// The store's own.
    pub fn limit_pages(&self, pages: u32) -> Result<(), StoreError> {
        self.read(|connection| connection.pragma_update_and_check(None, "max_page_count", pages, |_| Ok(())))
    }

    /// Pages of the file, for [`Store::limit_pages`].
    ///
    /// # Errors
    /// The store's own.
    pub fn pages(&self) -> Result<i64, StoreError> {
        self.read(|connection| connection.pragma_query_value(None, "page_count", |row| row.get(0)))
    }

    /// How long a write waits for another program's before it gives up; five seconds unless set.
    ///
    /// # Errors
    /// The store's own.
    pub fn wait_at_most(&self, patience: Duration) -> Result<(), StoreError> {
        self.read(|connection| connection.busy_timeout(patience))
    }

    /// Dropped without commit, the transaction rolls back; then the turn is over.
    fn begin_writing(&self) -> Result<(Option<MutexGuard<'_, ()>>, Transaction<'_>), StoreError> {
        // Inside a transaction the turn is ours already, and SQLite says what is wrong.
        let turn = self.connection.is_autocommit().then(|| self.turn.lock().unwrap_or_else(PoisonError::into_inner));
        let transaction = Transaction::new_unchecked(&self.connection, TransactionBehavior::Immediate).map_err(|e| self.told(e))?;
        Ok((turn, transaction))
    }

    fn read<T>(&self, query: impl FnOnce(&Connection) -> rusqlite::Result<T>) -> Result<T, StoreError> {
        query(&self.connection).map_err(|e| self.told(e))
    }

    /// Several queries of one moment; inside [`Store::write`] they are that already.
    fn read_moment<T>(&self, queries: impl FnOnce(&Connection) -> rusqlite::Result<T>) -> Result<T, StoreError> {
        self.read(|connection| {
            let moment = connection.is_autocommit().then(|| connection.unchecked_transaction()).transpose()?;
            let found = queries(connection)?;
            moment.map_or(Ok(()), Transaction::finish)?;
            Ok(found)
        })
    }

    fn told(&self, error: rusqlite::Error) -> StoreError {
        StoreError::from_sqlite(error, self.path.as_deref())
    }
}

#[cfg(test)]
mod tests {
    use super::samples::{at, charge, entry, ids, now, store_with_visit};
    use super::*;
    use crate::ledger::{Act, CautionSeen, Closing, Counterpart, Detail, EntryId, Ink, Signature, VisitState};

    fn closing() -> Closing {
        Closing {
            closed: now(),
            date: at("2026-03-03", 610).date,
            minute: 610,
            technician: Signature { name: "Ada Quill".to_owned(), ink: Ink(vec![vec![(1, 2), (3, 4)]]) },
            counterpart: Counterpart::NobodyPresent,
            handed_over: String::new(),
        }
    }

    fn record(bytes: &[u8]) -> ClosedRecord {
        let fingerprint = crate::record::fingerprint(bytes);
        ClosedRecord { bytes: bytes.to_vec(), fingerprint, rulebooks: "1".to_owned(), program: "bubblepoint".to_owned() }
    }

    #[test]
    fn entries_read_back_as_written() {
        let store = store_with_visit();
        let written = samples::every_act();
        store.write(now(), |tx| written.iter().try_for_each(|entry| tx.add_entry(entry).map(drop))).unwrap();
        let read = store.entries_of_visit(ids::VISIT).unwrap();
        assert_eq!(read.len(), written.len());
        for (position, (read, mut written)) in (1..).zip(read.into_iter().zip(written)) {
            written.line.position = position;
            assert_eq!(read, written);
        }
    }

    #[test]
    fn lines_leave_out_what_is_struck() {
        let store = store_with_visit();
        let (first, second) = (entry(1, charge("1.5")), entry(2, charge("2")));
        let strike = Entry { strikes: Some(first.line.entry), ..entry(3, Act::Note) };
        store.write(now(), |tx| [&first, &second, &strike].into_iter().try_for_each(|e| tx.add_entry(e).map(drop))).unwrap();

        let ids = |lines: Vec<crate::ledger::Line>| lines.into_iter().map(|line| line.entry).collect::<Vec<_>>();
        assert_eq!(ids(store.lines().unwrap()), [second.line.entry, strike.line.entry]);
        assert_eq!(ids(store.lines_of(ids::APPLIANCE).unwrap()), [second.line.entry, strike.line.entry]);
        let moved: Vec<EntryId> = store.movements_of(ids::CYLINDER).unwrap().into_iter().map(|movement| movement.entry).collect();
        assert_eq!(moved, [second.line.entry]);
        assert_eq!(store.entry(first.line.entry).unwrap().unwrap().struck_by, Some(strike.line.entry));

        let again = Entry { strikes: Some(first.line.entry), ..entry(4, Act::Note) };
        let refused = store.write(now(), |tx| tx.add_entry(&again));
        assert!(matches!(refused, Err(StoreError::Refused { .. })), "{refused:?}");
    }

    use crate::ledger::Entry;

    #[test]
    fn a_closed_visit_is_frozen() {
        let store = store_with_visit();
        let only = entry(1, charge("1.5"));
        store.write(now(), |tx| tx.add_entry(&only)).unwrap();
        store.write(now(), |tx| tx.close_visit(ids::VISIT, &closing(), &record(b"1 what was signed"))).unwrap();

        let visit = store.visit(ids::VISIT).unwrap().unwrap();
        assert_eq!((visit.state, visit.closing), (VisitState::Closed, Some(closing())));
        for sql in [
            "UPDATE entries SET mass = 1",
            "DELETE FROM entries",
            "UPDATE visits SET state = 'open'",
            "DELETE FROM visits",
            "UPDATE closed_records SET record = x'00'",
            "DELETE FROM closed_records",
            "UPDATE closings SET minute = 1",
            "DELETE FROM closings",
            "DELETE FROM visit_people",
        ] {
            let refused = store.read(|c| c.execute(sql, []));
            assert!(matches!(refused, Err(StoreError::Refused { .. })), "{sql}: {refused:?}");
        }
        let late = store.write(now(), |tx| tx.add_entry(&entry(2, Act::Note)));
        assert!(matches!(late, Err(StoreError::Refused { .. })), "{late:?}");
        let seen = CautionSeen { caution: "1".to_owned(), on: None, at_minute: 5, person: None };
        assert!(store.write(now(), |tx| tx.acknowledge(ids::VISIT, &seen)).is_err());
        let twice = store.write(now(), |tx| tx.close_visit(ids::VISIT, &closing(), &record(b"1 something else")));
        assert!(matches!(twice, Err(StoreError::Refused { .. })), "{twice:?}");
        assert_eq!(store.closed_record(ids::VISIT).unwrap(), Some(record(b"1 what was signed")));
    }

    #[test]
    fn entries_of_an_open_visit_are_struck_not_changed() {
        let store = store_with_visit();
        store.write(now(), |tx| tx.add_entry(&entry(1, charge("1.5")))).unwrap();
        for sql in ["UPDATE entries SET mass = 1", "DELETE FROM entries", "UPDATE visits SET site = x'00'"] {
            let refused = store.read(|c| c.execute(sql, []));
            assert!(matches!(refused, Err(StoreError::Refused { .. })), "{sql}: {refused:?}");
        }
    }

    #[test]
    fn check_finds_a_record_that_was_tampered_with() {
        let store = store_with_visit();
        store.write(now(), |tx| tx.close_visit(ids::VISIT, &closing(), &record(b"1 what was signed"))).unwrap();
        assert!(store.check().unwrap().sound());
        store
            .read(|c| c.execute_batch("DROP TRIGGER closed_records_are_not_changed; UPDATE closed_records SET record = x'3120626164';"))
            .unwrap();
        let report = store.check().unwrap();
        assert!(!report.sound());
        assert_eq!(report.records.iter().map(|r| r.sound).collect::<Vec<_>>(), [false]);
    }

    #[test]
    fn a_failed_write_leaves_nothing() {
        let store = store_with_visit();
        let stranger = Entry { visit: crate::ledger::VisitId(uuid::Uuid::from_u128(99)), ..entry(2, Act::Note) };
        let failed = store.write(now(), |tx| {
            tx.add_entry(&entry(1, charge("1")))?;
            tx.add_entry(&stranger)
        });
        assert!(failed.is_err());
        assert_eq!(store.lines().unwrap(), []);
    }

    #[test]
    fn rows_are_counted_by_device() {
        let store = store_with_visit();
        let counter = |store: &Store| store.read(|c| c.query_row("SELECT counter FROM devices", [], |row| row.get::<_, i64>(0))).unwrap();
        let before = counter(&store);
        store
            .write(now(), |tx| {
                tx.add_entry(&entry(1, Act::Note))?;
                tx.add_entry(&entry(2, Act::Note))
            })
            .unwrap();
        assert_eq!(counter(&store), before + 2);
        let distinct: i64 = store.read(|c| c.query_row("SELECT count(DISTINCT counter) FROM entries", [], |row| row.get(0))).unwrap();
        assert_eq!(distinct, 2);
    }

    #[test]
    fn identifications_are_taken_once() {
        let store = store_with_visit();
        let twice = store.write(now(), |tx| {
            tx.add_site(&crate::ledger::Site { id: crate::ledger::SiteId(uuid::Uuid::from_u128(77)), ..samples::site() })
        });
        assert!(matches!(twice, Err(StoreError::Taken { what: "a site" })), "{twice:?}");
    }

    #[test]
    fn every_table_is_strict() {
        let store = Store::in_memory().unwrap();
        let loose: Vec<String> = store
            .read(|c| {
                c.prepare("SELECT name FROM pragma_table_list WHERE schema = 'main' AND type = 'table' AND strict = 0 AND name NOT LIKE 'sqlite_%'")?
                    .query_map([], |row| row.get(0))?
                    .collect()
            })
            .unwrap();
        assert_eq!(loose, Vec::<String>::new());
    }

    /// A change of the schema shows as a change of this file.
    #[test]
    fn the_schema_is_the_golden_one() {
        let path = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/fixtures/schema.golden.sql");
        let store = Store::in_memory().unwrap();
        let lines: Vec<String> = store
            .read(|c| {
                c.prepare("SELECT sql FROM sqlite_schema WHERE sql IS NOT NULL ORDER BY type DESC, name")?
                    .query_map([], |row| row.get(0))?
                    .collect()
            })
            .unwrap();
        let schema = lines.join(";\n\n") + ";\n";
        if std::env::var_os("BUBBLEPOINT_WRITE_GOLDEN").is_some() {
            std::fs::write(path, &schema).unwrap();
        }
        assert_eq!(schema, std::fs::read_to_string(path).unwrap());
    }

    #[test]
    fn an_entry_id_is_used_once() {
        let store = store_with_visit();
        let one = entry(1, Act::Note);
        store.write(now(), |tx| tx.add_entry(&one)).unwrap();
        assert!(store.write(now(), |tx| tx.add_entry(&one)).is_err());
        assert_eq!(one.line.entry, EntryId(uuid::Uuid::from_u128(1001)));
        assert_eq!(one.detail, Detail::default());
    }
}
