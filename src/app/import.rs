//! Taking in registers and history from CSV, and a company's own rulebooks: one
//! transaction, all or nothing.
//!
//! History is taken as it happened. Refused is only what cannot be true or
//! cannot be read; what the law forbade is taken and remarked on.

mod columns;
mod doubles;
mod history;
mod log;
mod people;
mod registers;
mod remarks;
mod rulebooks;

use super::App;
use crate::exchange::csv::{self, BadLine, Kind, Rows};
use crate::rules::{Adopted, OwnBook};
use crate::store::{Import, StoreError, fingerprint_of};
use chrono::NaiveDate;
use std::collections::HashSet;
use std::fmt;

/// What was taken in.
#[derive(Debug, Default)]
pub struct Imported {
    pub sites: usize,
    pub appliances: usize,
    pub cylinders: usize,
    pub people: usize,
    pub entries: usize,
    /// A company's own.
    pub rulebooks: usize,
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
    /// Nothing was taken.
    #[error(transparent)]
    Refused(#[from] RefusedImport),
    #[error(transparent)]
    Store(#[from] StoreError),
}

/// All that stands against an import.
#[derive(Debug, Default)]
pub struct RefusedImport {
    pub files: Vec<BadFile>,
    /// Every bad line there is, in order of file and line.
    pub lines: Vec<BadLine>,
}

impl std::error::Error for RefusedImport {}

/// A file that is not to be taken, whatever stands in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum BadFile {
    TakenBefore { file: String, day: NaiveDate, taken_as: String },
    NamedTwice { file: String, other: String },
}

impl fmt::Display for BadFile {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TakenBefore { file, day, taken_as } => {
                write!(f, "{file} was taken in already, on {day} as {taken_as}; leave it out")
            }
            Self::NamedTwice { file, other } => write!(f, "{file} and {other} are the same file; name it once"),
        }
    }
}

impl fmt::Display for RefusedImport {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        // A line may have several faults; a file that cannot be read has no line.
        let places: HashSet<(&str, u64)> = self.lines.iter().map(|line| (line.file.as_str(), line.line)).collect();
        let lines = places.iter().filter(|(_, line)| *line > 0).count();
        let files = self.files.len() + places.len() - lines;
        let counted = |count: usize, what: &str| match count {
            0 => None,
            1 => Some(format!("1 {what}")),
            count => Some(format!("{count} {what}s")),
        };
        let what: Vec<String> = [counted(files, "file"), counted(lines, "line")].into_iter().flatten().collect();
        write!(f, "{} cannot be taken; nothing was imported.", what.join(" and "))?;
        self.files.iter().try_for_each(|file| write!(f, "\n{file}"))?;
        self.lines.iter().try_for_each(|line| write!(f, "\n{line}"))
    }
}

impl App {
    /// Takes in files, each a name and its bytes, in any order: rulebooks
    /// (`.toml`) first, then registers, then logs, these in order of their files' names. Where a day's
    /// lines on an appliance stand in two logs, that is their order.
    ///
    /// # Errors
    /// See [`ImportError`]; nothing is changed then.
    pub fn import(&self, files: &[(String, Vec<u8>)]) -> Result<Imported, ImportError> {
        let mut files: Vec<(&str, &[u8])> = files.iter().map(|(name, bytes)| (name.as_str(), bytes.as_slice())).collect();
        // Sites may name a rulebook that comes with them.
        files.sort_unstable_by_key(|&(file, bytes)| (!rulebooks::is_rulebook(file), file, bytes));
        let mut refused = RefusedImport::default();
        let mut parts = Parts::default();
        let mut sums: Vec<(String, &str)> = Vec::new();
        // Unless all is taken, none stays known.
        let mut adopted = Vec::new();
        for (file, bytes) in files {
            let sha256 = fingerprint_of(bytes);
            if let Some((_, other)) = sums.iter().find(|(sum, _)| *sum == sha256) {
                refused.files.push(BadFile::NamedTwice { file: file.to_owned(), other: (*other).to_owned() });
            } else if let Some(before) = self.store().import_of(&sha256)? {
                refused.files.push(BadFile::TakenBefore { file: file.to_owned(), day: before.day, taken_as: before.file_name });
            } else {
                if rulebooks::is_rulebook(file) {
                    adopted.extend(parts.read_rulebook(file, bytes, &mut refused.lines));
                } else {
                    parts.read(file, bytes, &mut refused.lines);
                }
                sums.push((sha256, file));
            }
        }
        let taken = self.take(&parts, &sums, refused)?;
        adopted.into_iter().for_each(Adopted::keep);
        Ok(taken)
    }

    /// Where something is bad already, the rest is looked at all the same,
    /// and nothing stays.
    fn take(&self, parts: &Parts, sums: &[(String, &str)], mut refused: RefusedImport) -> Result<Imported, ImportError> {
        self.store().write(self.now(), |tx| {
            for (sha256, file) in sums {
                // Another program may have been faster.
                if let Some(before) = tx.import_of(sha256)? {
                    refused.files.push(BadFile::TakenBefore { file: (*file).to_owned(), day: before.day, taken_as: before.file_name });
                    return Err(refused.into());
                }
            }
            let mut taken = Imported::default();
            let strays = registers::take(tx, self, parts, &mut refused.lines, &mut taken)?;
            people::take(tx, self, &parts.people, &mut refused.lines, &mut taken)?;
            let entries = log::take(tx, self, parts, &strays, &mut refused.lines, &mut taken)?;
            if !refused.files.is_empty() || !refused.lines.is_empty() {
                refused.lines.sort_by(|a, b| (&a.file, a.line).cmp(&(&b.file, b.line)));
                return Err(refused.into());
            }
            rulebooks::take(tx, &parts.rulebooks, &mut taken)?;
            remarks::look(tx, self, parts, &entries, &mut taken)?;
            for (sha256, file) in sums {
                tx.add_import(&Import { sha256: sha256.clone(), day: self.today(), file_name: (*file).to_owned() })?;
            }
            Ok(taken)
        })
    }
}

/// The rows of all files, by kind.
#[derive(Default)]
struct Parts {
    /// Each with its file.
    rulebooks: Vec<(String, OwnBook)>,
    sites: Vec<csv::SiteRow>,
    appliances: Vec<csv::ApplianceRow>,
    cylinders: Vec<csv::CylinderRow>,
    people: Vec<csv::PersonRow>,
    log: Vec<csv::LogRow>,
    /// Kinds of which a file could not be read whole.
    unread: Vec<Kind>,
    /// Of some file not even the kind could be told.
    unknown: bool,
}

impl Parts {
    fn read(&mut self, file: &str, bytes: &[u8], bad: &mut Vec<BadLine>) {
        let mut reading = match csv::read(file, bytes) {
            Ok(reading) => reading,
            Err(mut lines) => {
                bad.append(&mut lines);
                self.unknown = true;
                return;
            }
        };
        bad.append(&mut reading.bad);
        if !reading.complete {
            self.unread.push(reading.kind);
        }
        match reading.rows {
            Rows::Sites(mut rows) => self.sites.append(&mut rows),
            Rows::Appliances(mut rows) => self.appliances.append(&mut rows),
            Rows::Cylinders(mut rows) => self.cylinders.append(&mut rows),
            Rows::People(mut rows) => self.people.append(&mut rows),
            Rows::Log(mut rows) => self.log.append(&mut rows),
        }
    }

    /// A line of this kind may stand in what could not be read: that a name
    /// is not there is then no fault of the line that names it.
    fn may_miss(&self, kind: Kind) -> bool {
        self.unknown || self.unread.contains(&kind)
    }
}
