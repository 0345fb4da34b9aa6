//! A store whose bytes went wrong.

use crate::support::plant::{plant_at, signature};
use bubblepoint::app::{Common, SimpleAct};
use bubblepoint::ledger::Counterpart;
use bubblepoint::store::{OpenMode, Store, StoreError};
use std::path::{Path, PathBuf};

/// A store of some size in one file.
fn store(folder: &Path) -> PathBuf {
    let path = folder.join("a.store");
    let plant = plant_at(&path);
    let visit = plant.begin();
    for number in 0..200 {
        let note = Common { note: format!("note {number} {}", "x".repeat(200)), ..Common::default() };
        plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, note).unwrap();
    }
    plant.app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    drop(plant);
    path
}

/// Opening, reading or checking must say that it is damaged; none may panic or claim that all is well.
fn is_told(path: &Path) {
    let store = match Store::open(path, OpenMode::MustExist) {
        Ok(store) => store,
        Err(error) => return assert!(matches!(error, StoreError::Damaged { .. } | StoreError::NotSqlite { .. }), "{error}"),
    };
    let read = store.lines().map(drop).and_then(|()| store.registers().map(drop));
    if let Err(error) = read {
        assert!(matches!(error, StoreError::Damaged { .. }), "{error}");
        assert!(error.to_string().contains("last backup"), "{error}");
    }
    match store.check() {
        Ok(report) => assert!(!report.sound(), "the check found nothing"),
        Err(error) => assert!(matches!(error, StoreError::Damaged { .. }), "{error}"),
    }
}

#[test]
fn pages_overwritten_are_found() {
    let folder = tempfile::tempdir().unwrap();
    let path = store(folder.path());
    let whole = std::fs::read(&path).unwrap();
    assert!(Store::open(&path, OpenMode::MustExist).unwrap().check().unwrap().sound(), "sound before");
    for page in [1, whole.len() / 4096 / 2] {
        let mut damaged = whole.clone();
        damaged[page * 4096..page * 4096 + 512].fill(0xA5);
        std::fs::write(&path, &damaged).unwrap();
        is_told(&path);
    }
}

#[test]
fn a_file_that_was_cut_is_found() {
    let folder = tempfile::tempdir().unwrap();
    let path = store(folder.path());
    let whole = std::fs::read(&path).unwrap();
    for length in [whole.len() / 2, 4096, 50] {
        std::fs::write(&path, &whole[..length]).unwrap();
        is_told(&path);
    }
}

/// One bit inside a signed record, past every database check.
#[test]
fn a_changed_record_is_found_by_its_fingerprint() {
    let folder = tempfile::tempdir().unwrap();
    let path = store(folder.path());
    let mut bytes = std::fs::read(&path).unwrap();
    let needle = b"\"note\":\"note 7 x";
    // The last place is in the closed record, the first in the entries.
    let at = bytes.windows(needle.len()).rposition(|window| window == needle).unwrap();
    bytes[at + needle.len() - 3] = b'8';
    std::fs::write(&path, &bytes).unwrap();
    let report = Store::open(&path, OpenMode::MustExist).unwrap().check().unwrap();
    assert!(report.damage.is_empty(), "the database itself is sound");
    assert!(!report.records[0].sound && !report.sound());
}
