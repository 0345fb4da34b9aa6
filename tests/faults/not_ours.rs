//! Files that are not a store of this program are refused and left as they are.

use crate::support::plant::plant_at;
use bubblepoint::store::{OpenMode, Store, StoreError};
use std::path::Path;

fn names(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> =
        std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned()).collect();
    names.sort();
    names
}

/// Refused in either mode, with the file's name in the sentence, and nothing changed in the folder.
fn refused(path: &Path) -> StoreError {
    let before = (std::fs::read(path).unwrap(), names(path.parent().unwrap()));
    let error = Store::open(path, OpenMode::Create).err().unwrap();
    assert!(Store::open(path, OpenMode::MustExist).is_err());
    assert_eq!((std::fs::read(path).unwrap(), names(path.parent().unwrap())), before, "touched");
    assert!(error.to_string().contains(&path.display().to_string()), "{error}");
    error
}

#[test]
fn a_file_of_another_kind() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("notes.txt");
    std::fs::write(&path, "a shopping list\n".repeat(50)).unwrap();
    assert!(matches!(refused(&path), StoreError::NotSqlite { .. }));
    std::fs::write(&path, "short").unwrap();
    assert!(matches!(refused(&path), StoreError::NotSqlite { .. }));
}

#[test]
fn a_database_of_another_program() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("other.db");
    let other = rusqlite::Connection::open(&path).unwrap();
    other.execute_batch("CREATE TABLE songs (title TEXT); INSERT INTO songs VALUES ('x');").unwrap();
    other.close().unwrap();
    assert!(matches!(refused(&path), StoreError::NotAStore { .. }));
}

#[test]
fn a_store_of_a_newer_program() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    drop(plant_at(&path));
    let newer = rusqlite::Connection::open(&path).unwrap();
    newer.pragma_update(None, "user_version", 99).unwrap();
    newer.pragma_update_and_check(None, "journal_mode", "DELETE", |_| Ok(())).unwrap();
    newer.close().unwrap();
    let error = refused(&path);
    assert!(matches!(error, StoreError::Newer { found: 99, .. }), "{error}");
    assert!(error.to_string().contains("newer program"), "{error}");
}

/// The newer schema may still stand in the write-ahead log alone.
#[test]
fn a_store_that_a_newer_program_left_in_a_hurry() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    drop(plant_at(&path));
    let newer = rusqlite::Connection::open(&path).unwrap();
    newer.pragma_update(None, "user_version", 99).unwrap();
    let before = std::fs::read(&path).unwrap();
    assert!(matches!(Store::open(&path, OpenMode::Create), Err(StoreError::Newer { found: 99, .. })));
    assert_eq!(std::fs::read(&path).unwrap(), before);
}

#[test]
fn a_folder_and_a_folder_that_is_not_there() {
    let folder = tempfile::tempdir().unwrap();
    let error = Store::open(folder.path(), OpenMode::Create).err().unwrap();
    assert!(matches!(error, StoreError::CannotOpen { .. }), "{error}");
    let nowhere = folder.path().join("no").join("a.store");
    assert!(matches!(Store::open(&nowhere, OpenMode::MustExist), Err(StoreError::Missing { .. })));
    let error = Store::open(&nowhere, OpenMode::Create).err().unwrap();
    assert!(error.to_string().contains("Check that its folder exists"), "{error}");
    assert!(!folder.path().join("no").exists());
}
