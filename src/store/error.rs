//! What can go wrong with the store, in sentences.

use rusqlite::ErrorCode;
use std::path::{Path, PathBuf};

/// Each says what happened, with which file, and what to do.
#[derive(Debug, thiserror::Error)]
pub enum StoreError {
    #[error("There is no store at {}. Name another with --store, or make one with import or demo.", path.display())]
    Missing { path: PathBuf },
    #[error("{} is not a store: it is no SQLite file. Nothing was changed. Name another file.", path.display())]
    NotSqlite { path: PathBuf },
    #[error("{} is an SQLite file of another program. Nothing was changed. Name another file.", path.display())]
    NotAStore { path: PathBuf },
    #[error("{} was written by a newer program (schema {found}; this one knows up to {known}). Nothing was changed. Install the newer program to open it.", path.display())]
    Newer { path: PathBuf, found: i64, known: i64 },
    #[error("{} cannot be written: the file or its folder is read-only. Nothing was saved. Change its permissions, or move the store to a folder you may write in.", path.display())]
    ReadOnly { path: PathBuf },
    #[error("{} cannot be opened: {detail}. Check that its folder exists and that you may write in it.", path.display())]
    CannotOpen { path: PathBuf, detail: String },
    #[error("The disk that holds {} is full. This was not saved; all before it was. Free some space and do it again.", path.display())]
    DiskFull { path: PathBuf },
    #[error("{} is being written by another program. This was not saved. Wait until that is done and do it again.", path.display())]
    Busy { path: PathBuf },
    #[error("{} is damaged: {detail}. Nothing was changed. Make a copy of the file, then go back to the last backup.", path.display())]
    Damaged { path: PathBuf, detail: String },
    #[error("{} lies where a database cannot be kept safely (a network share, perhaps). Move the store to a disk of this machine.", path.display())]
    NoSafePlace { path: PathBuf },
    #[error("The company's own rulebook in {} cannot be read by this program: {detail}. Nothing was changed. Open the store with the program that the rulebook was added with.", path.display())]
    UnreadableRulebook { path: PathBuf, detail: String },
    #[error("{} exists already and is not overwritten. Name a new file.", path.display())]
    Exists { path: PathBuf },
    #[error("{} could not be written: {detail}. Check that its folder exists and has room.", path.display())]
    CannotWrite { path: PathBuf, detail: String },
    /// A second line with the same identification.
    #[error("There is already {what} with this identification. Choose another one, or use the one there is.")]
    Taken { what: &'static str },
    /// The database's own rules refused; the sentence says why.
    #[error("{sentence}")]
    Refused { sentence: String },
    #[error("A mass is larger than the store can keep, 90 t. Nothing was saved.")]
    MassTooLarge,
    #[error("A store in memory cannot do this: {what}.")]
    OnlyInMemory { what: &'static str },
    #[error("{}: {detail}. Nothing was changed.", path.display())]
    Other { path: PathBuf, detail: String },
}

/// What a UNIQUE column is the identification of.
const IDENTIFICATIONS: [(&str, &str); 7] = [
    ("sites.name", "a site"),
    ("appliances.site, appliances.name", "an appliance at this site"),
    ("cylinders.name", "a cylinder"),
    ("people.name", "a person"),
    ("instruments.name", "an instrument"),
    ("imports.sha256", "an import of this file"),
    ("visit_people.visit, visit_people.person", "a person at this visit"),
];

impl StoreError {
    pub(super) fn from_sqlite(error: rusqlite::Error, path: Option<&Path>) -> Self {
        let path = || path.map_or_else(|| PathBuf::from("The store in memory"), Path::to_path_buf);
        let (code, message) = match error {
            rusqlite::Error::SqliteFailure(code, message) => (code, message.unwrap_or_else(|| code.to_string())),
            // A row that does not read as what it must be.
            other => return Self::Damaged { path: path(), detail: other.to_string() },
        };
        match code.code {
            ErrorCode::DatabaseBusy | ErrorCode::DatabaseLocked => Self::Busy { path: path() },
            ErrorCode::DiskFull => Self::DiskFull { path: path() },
            ErrorCode::ReadOnly | ErrorCode::PermissionDenied => Self::ReadOnly { path: path() },
            ErrorCode::DatabaseCorrupt => Self::Damaged { path: path(), detail: message },
            ErrorCode::NotADatabase => Self::NotSqlite { path: path() },
            ErrorCode::CannotOpen => Self::CannotOpen { path: path(), detail: message },
            ErrorCode::ConstraintViolation => Self::from_constraint(&code, message, path()),
            _ => Self::Other { path: path(), detail: message },
        }
    }

    fn from_constraint(code: &rusqlite::ffi::Error, message: String, path: PathBuf) -> Self {
        if code.extended_code == rusqlite::ffi::SQLITE_CONSTRAINT_TRIGGER {
            return Self::Refused { sentence: message };
        }
        if message.ends_with("entries.strikes") {
            return Self::Refused {
                sentence: "This entry has been struck already; strike or correct the one that replaced it.".to_owned(),
            };
        }
        let taken = IDENTIFICATIONS.iter().find(|(columns, _)| message.ends_with(columns));
        taken.map_or(Self::Other { path, detail: message }, |(_, what)| Self::Taken { what })
    }
}
