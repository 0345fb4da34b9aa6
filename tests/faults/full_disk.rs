//! A disk that fills up: what was saved stays, what was not is said, and work
//! goes on once there is room.

use crate::support::plant::plant_at;
use bubblepoint::app::{AppError, Common, SimpleAct};
use bubblepoint::ledger::{Counterpart, VisitState};
use bubblepoint::store::StoreError;

#[test]
fn what_was_saved_before_the_disk_was_full_stays() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    let plant = plant_at(&path);
    let visit = plant.begin();
    let note = || {
        let common = Common { note: "x".repeat(3000), ..Common::default() };
        plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, common)
    };
    note().unwrap();
    let pages = u32::try_from(plant.app.store().pages().unwrap()).unwrap();
    plant.app.store().limit_pages(pages + 10).unwrap();
    let mut saved = 1;
    let error = loop {
        match note() {
            Ok(_) => saved += 1,
            Err(error) => break error,
        }
        assert!(saved < 100, "the limit does not hold");
    };
    assert!(matches!(&error, AppError::Store(StoreError::DiskFull { path: full }) if *full == path), "{error}");
    assert!(error.to_string().contains("Free some space"), "{error}");
    assert_eq!(plant.app.store().entries_of_visit(visit.id).unwrap().len(), saved);

    // Closing does not fit either: the visit stays open, whole and without half a record.
    let closing = plant.app.close_visit(visit.id, crate::support::plant::signature("Ada Quill"), Counterpart::NobodyPresent);
    assert!(matches!(closing, Err(AppError::Store(StoreError::DiskFull { .. }))), "{closing:?}");
    assert_eq!(plant.app.store().visit(visit.id).unwrap().unwrap().state, VisitState::Open);
    assert_eq!(plant.app.store().closed_record(visit.id).unwrap(), None);
    assert!(plant.app.store().check().unwrap().sound());

    plant.app.store().limit_pages(pages + 1000).unwrap();
    note().unwrap();
    plant.app.close_visit(visit.id, crate::support::plant::signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
}
