//! Settings of this device, and which files have been taken in.

use super::sql_types::Day;
use super::{Store, StoreError, Writing};
use crate::rules::{adopt, read_own};
use chrono::NaiveDate;
use rusqlite::{OptionalExtension, params};
use sha2::{Digest, Sha256};
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

    /// How many rows this device has written into its registers and ledger:
    /// it only ever grows.
    pub fn rows_written(&self) -> Result<u64, StoreError> {
        let counter: i64 = self.read(|c| c.query_row("SELECT counter FROM devices WHERE own = 1", [], |row| row.get(0)))?;
        Ok(counter.unsigned_abs())
    }

    /// This device's own id, drawn when the store was made.
    pub fn device(&self) -> Result<Uuid, StoreError> {
        self.read(|c| c.query_row("SELECT id FROM devices WHERE own = 1", [], |row| row.get::<_, [u8; 16]>(0)).map(Uuid::from_bytes))
    }
}

/// Before the id of a company's own rulebook.
const RULEBOOK: &str = "rulebook ";

impl Store {
    /// The company's own rulebooks, as the files they were read from, by id.
    pub fn own_rulebooks(&self) -> Result<Vec<String>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached("SELECT value FROM settings WHERE key GLOB ?1 ORDER BY key")?;
            statement.query_map([format!("{RULEBOOK}*")], |row| row.get(0))?.collect()
        })
    }

    /// Makes them known to all who judge.
    pub(super) fn adopt_rulebooks(&self) -> Result<(), StoreError> {
        let mut books = Vec::new();
        for text in self.own_rulebooks()? {
            match read_own(&text, &fingerprint_of(text.as_bytes())) {
                Ok(own) => books.push(own.book),
                Err(faults) => {
                    let detail = faults.first().map(|fault| format!("line {}: {}", fault.line, fault.message)).unwrap_or_default();
                    let path = self.path.clone().unwrap_or_default();
                    return Err(StoreError::UnreadableRulebook { path, detail });
                }
            }
        }
        adopt(books).keep();
        Ok(())
    }
}

/// SHA-256 in hex, as imports are told apart.
pub fn fingerprint_of(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|byte| format!("{byte:02x}")).collect()
}

impl Writing<'_> {
    /// Keeps a company's own rulebook; whether one of the same id gave way.
    ///
    /// # Errors
    /// The store's own.
    pub fn put_rulebook(&self, id: &str, text: &str) -> Result<bool, StoreError> {
        let key = format!("{RULEBOOK}{id}");
        let before = self.setting(&key)?;
        self.put_setting(&key, text)?;
        Ok(before.is_some())
    }

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
