//! Taking in registers and history from CSV: one transaction, all or nothing.
//!
//! History is taken as it happened. Refused is only what cannot be true or
//! cannot be read; what the law forbade is taken and remarked on.

mod history;
mod log;
mod registers;

use super::{App, IdSource};
use crate::exchange::csv::{self, BadLine, Rows};
use crate::store::{Import, Store, StoreError};
use chrono::{DateTime, NaiveDate, Utc};
use sha2::{Digest, Sha256};

/// What was taken in.
#[derive(Debug, Default)]
pub struct Imported {
    pub sites: usize,
    pub appliances: usize,
    pub cylinders: usize,
    pub people: usize,
    pub entries: usize,
    pub remarks: Vec<Remark>,
}

/// Something worth a look that was taken all the same.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Remark {
    pub file: String,
    pub line: u64,
    pub message: String,
}

#[derive(Debug, thiserror::Error)]
pub enum ImportError {
    /// Nothing was taken; every bad line there is.
    #[error("{} cannot be taken; nothing was imported.\n{}", count(.0.len()), list(.0))]
    BadLines(Vec<BadLine>),
    #[error("{file} was taken in already, on {day} as {taken_as}; nothing was imported.")]
    TakenBefore { file: String, day: NaiveDate, taken_as: String },
    #[error("{file} and {other} are the same file; nothing was imported. Name it once.")]
    NamedTwice { file: String, other: String },
    #[error(transparent)]
    Store(#[from] StoreError),
}

fn count(lines: usize) -> String {
    if lines == 1 { "1 line".to_owned() } else { format!("{lines} lines") }
}

fn list(lines: &[BadLine]) -> String {
    lines.iter().map(ToString::to_string).collect::<Vec<_>>().join("\n")
}

impl App {
    /// Takes in files, each a name and its bytes, in any order: registers
    /// first, then logs.
    ///
    /// # Errors
    /// See [`ImportError`]; nothing is changed then.
    pub fn import(&self, files: &[(String, Vec<u8>)]) -> Result<Imported, ImportError> {
        import(self.store(), self.ids.as_ref(), self.now(), self.today(), files)
    }
}

fn import(
    store: &Store,
    ids: &dyn IdSource,
    now: DateTime<Utc>,
    today: NaiveDate,
    files: &[(String, Vec<u8>)],
) -> Result<Imported, ImportError> {
    let mut sums: Vec<(String, &str)> = Vec::new();
    for (file, bytes) in files {
        let sha256: String = Sha256::digest(bytes).iter().map(|byte| format!("{byte:02x}")).collect();
        if let Some((_, other)) = sums.iter().find(|(sum, _)| *sum == sha256) {
            return Err(ImportError::NamedTwice { file: file.clone(), other: (*other).to_owned() });
        }
        if let Some(before) = store.import_of(&sha256)? {
            return Err(ImportError::TakenBefore { file: file.clone(), day: before.day, taken_as: before.file_name });
        }
        sums.push((sha256, file));
    }
    let (mut bad, mut parts) = (Vec::new(), Parts::default());
    for (file, bytes) in files {
        match csv::read(file, bytes) {
            Ok(rows) => parts.add(rows),
            Err(mut lines) => bad.append(&mut lines),
        }
    }
    if !bad.is_empty() {
        return Err(ImportError::BadLines(bad));
    }
    store.write(now, |tx| {
        let mut taken = Imported::default();
        registers::take(tx, ids, &parts, &mut taken)?;
        log::take(tx, ids, today, &parts.log, &mut taken)?;
        for (sha256, file) in &sums {
            tx.add_import(&Import { sha256: sha256.clone(), day: today, file_name: (*file).to_owned() })?;
        }
        Ok(taken)
    })
}

/// The rows of all files, by kind.
#[derive(Default)]
struct Parts {
    sites: Vec<csv::SiteRow>,
    appliances: Vec<csv::ApplianceRow>,
    cylinders: Vec<csv::CylinderRow>,
    people: Vec<csv::PersonRow>,
    log: Vec<csv::LogRow>,
}

impl Parts {
    fn add(&mut self, rows: Rows) {
        match rows {
            Rows::Sites(mut rows) => self.sites.append(&mut rows),
            Rows::Appliances(mut rows) => self.appliances.append(&mut rows),
            Rows::Cylinders(mut rows) => self.cylinders.append(&mut rows),
            Rows::People(mut rows) => self.people.append(&mut rows),
            Rows::Log(mut rows) => self.log.append(&mut rows),
        }
    }
}
