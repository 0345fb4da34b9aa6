//! Settings of this device, and which files have been taken in.

use super::sql_types::Day;
use super::{Store, StoreError, Writing};
use chrono::NaiveDate;
use rusqlite::{OptionalExtension, params};
use uuid::Uuid;

/// A file that was taken in.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Import {
    /// Of the file's bytes, in hex.
    pub sha256: String,
    pub day: NaiveDate,
    pub file_name: String,
}

impl Store {
    /// A setting as it was last put.
    ///
    /// # Errors
    /// The store's own, as for all below.
    pub fn setting(&self, key: &str) -> Result<Option<String>, StoreError> {
        self.read(|c| c.prepare_cached("SELECT value FROM settings WHERE key = ?1")?.query_row([key], |row| row.get(0)).optional())
    }

    /// The file with this SHA-256, if it was taken in before.
    pub fn import_of(&self, sha256: &str) -> Result<Option<Import>, StoreError> {
        Ok(self.imports()?.into_iter().find(|import| import.sha256 == sha256))
    }

    /// All files taken in, the first one first.
    pub fn imports(&self) -> Result<Vec<Import>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached("SELECT sha256, day, file_name FROM imports ORDER BY position")?;
            let imports = statement.query_map([], |row| {
                let Day(day) = row.get(1)?;
                Ok(Import { sha256: row.get(0)?, day, file_name: row.get(2)? })
            })?;
            imports.collect()
        })
    }

    /// This device's own id, drawn when the store was made.
    pub fn device(&self) -> Result<Uuid, StoreError> {
        self.read(|c| c.query_row("SELECT id FROM devices WHERE own = 1", [], |row| row.get::<_, [u8; 16]>(0)).map(Uuid::from_bytes))
    }
}

impl Writing<'_> {
    /// # Errors
    /// The store's own.
    pub fn put_setting(&self, key: &str, value: &str) -> Result<(), StoreError> {
        self.run(|c| {
            c.prepare_cached("INSERT INTO settings (key, value) VALUES (?1, ?2) ON CONFLICT (key) DO UPDATE SET value = excluded.value")?
                .execute([key, value])
                .map(drop)
        })
    }

    /// # Errors
    /// [`StoreError::Taken`] when this file was taken in before.
    pub fn add_import(&self, import: &Import) -> Result<(), StoreError> {
        self.run(|c| {
            c.execute(
                "INSERT INTO imports (sha256, day, file_name) VALUES (?1, ?2, ?3)",
                params![import.sha256, Day(import.day), import.file_name],
            )
            .map(drop)
        })
    }
}
