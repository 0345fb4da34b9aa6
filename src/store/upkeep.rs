//! Checking the store, and copying it while it is in use.

use super::{Store, StoreError};
use crate::ledger::VisitId;
use crate::record::fingerprint;
use rusqlite::Connection;
use rusqlite::backup::Backup;
use std::fs::File;
use std::path::Path;
use std::time::Duration;

/// What a check of the store found.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Report {
    /// What is wrong with the file itself; empty when sound.
    pub damage: Vec<String>,
    /// Rows that point to rows that are not there.
    pub dangling: Vec<String>,
    /// Every closed record.
    pub records: Vec<RecordCheck>,
    /// Closed visits without a record, which cannot be but would be worst.
    pub without_record: Vec<VisitId>,
    pub entries: i64,
}

/// One closed record, its fingerprint calculated again.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RecordCheck {
    pub visit: VisitId,
    pub fingerprint: String,
    /// The bytes still have the fingerprint they were closed with.
    pub sound: bool,
}

impl Report {
    pub fn sound(&self) -> bool {
        self.damage.is_empty() && self.dangling.is_empty() && self.without_record.is_empty() && self.records.iter().all(|r| r.sound)
    }
}

impl Store {
    /// Reads the whole file and recalculates every closed record's fingerprint.
    ///
    /// # Errors
    /// Only where the check itself cannot be done; what it finds is in the [`Report`].
    pub fn check(&self) -> Result<Report, StoreError> {
        let damage = self.read(|c| {
            let mut statement = c.prepare("PRAGMA integrity_check")?;
            let lines: Vec<String> = statement.query_map([], |row| row.get(0))?.collect::<Result<_, _>>()?;
            Ok(if lines == ["ok"] { Vec::new() } else { lines })
        })?;
        let dangling = self.foreign_key_faults()?;
        let records = self.read(|c| {
            let mut statement = c.prepare("SELECT visit, record, fingerprint FROM closed_records ORDER BY visit")?;
            let mut rows = statement.query([])?;
            let mut records = Vec::new();
            while let Some(row) = rows.next()? {
                let closed_with: String = row.get(2)?;
                let sound = fingerprint(row.get_ref(1)?.as_blob()?) == closed_with;
                records.push(RecordCheck { visit: row.get(0)?, fingerprint: closed_with, sound });
            }
            Ok(records)
        })?;
        let without_record = self.read(|c| {
            let mut statement = c.prepare(
                "SELECT id FROM visits WHERE state = 'closed' AND id NOT IN (SELECT visit FROM closed_records INTERSECT SELECT visit FROM closings)",
            )?;
            statement.query_map([], |row| row.get(0))?.collect()
        })?;
        let entries = self.read(|c| c.query_row("SELECT count(*) FROM entries", [], |row| row.get(0)))?;
        Ok(Report { damage, dangling, records, without_record, entries })
    }

    /// A consistent copy of the store, made while it may be in use. The copy
    /// appears whole or not at all.
    ///
    /// # Errors
    /// [`StoreError::Exists`] when there is a file at `target`.
    pub fn backup(&self, target: &Path) -> Result<(), StoreError> {
        let own = self.path().unwrap_or(Path::new("The store in memory"));
        copy_to(&self.connection, own, target)
    }

    pub(super) fn foreign_key_faults(&self) -> Result<Vec<String>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare("PRAGMA foreign_key_check")?;
            let lines = statement.query_map([], |row| {
                let (table, parent): (String, String) = (row.get(0)?, row.get(2)?);
                Ok(match row.get::<_, Option<i64>>(1)? {
                    Some(number) => format!("row {number} of {table} points to a row of {parent} that is not there"),
                    None => format!("a row of {table} points to a row of {parent} that is not there"),
                })
            })?;
            lines.collect()
        })
    }
}

/// Copies the database at `own` to `target` through a temporary file in
/// the same folder: written, synced, then named.
pub(super) fn copy_to(connection: &Connection, own: &Path, target: &Path) -> Result<(), StoreError> {
    if target.exists() {
        return Err(StoreError::Exists { path: target.to_owned() });
    }
    let cannot = |detail: String| StoreError::CannotWrite { path: target.to_owned(), detail };
    let folder = match target.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    let temporary = tempfile::Builder::new().prefix(".bubblepoint-").tempfile_in(folder).map_err(|e| cannot(e.to_string()))?;
    {
        let mut copy = Connection::open(temporary.path()).map_err(|e| cannot(e.to_string()))?;
        {
            let backup = Backup::new(connection, &mut copy).map_err(|e| StoreError::from_sqlite(e, Some(own)))?;
            // In one step, so that the copy is of one moment.
            backup.run_to_completion(i32::MAX, Duration::from_millis(20), None).map_err(|e| {
                match StoreError::from_sqlite(e, Some(target)) {
                    StoreError::Damaged { detail, .. } => StoreError::Damaged { path: own.to_owned(), detail },
                    other => other,
                }
            })?;
        }
        copy.close().map_err(|(_, e)| cannot(e.to_string()))?;
    }
    temporary.as_file().sync_all().map_err(|e| cannot(e.to_string()))?;
    temporary.persist_noclobber(target).map_err(|e| match e.error.kind() {
        std::io::ErrorKind::AlreadyExists => StoreError::Exists { path: target.to_owned() },
        _ => cannot(e.error.to_string()),
    })?;
    // The name itself is on disk once the folder is; folders cannot be synced everywhere.
    if let Ok(folder) = File::open(folder) {
        let _ = folder.sync_all();
    }
    Ok(())
}
