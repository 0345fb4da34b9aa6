//! Two programs on one store.

use super::{child, told_path};
use crate::support::plant::{clock, plant_at};
use bubblepoint::app::testing::CountedIds;
use bubblepoint::app::{App, AppError, Common, SimpleAct};
use bubblepoint::store::{OpenMode, Store, StoreError};
use std::process::Stdio;
use std::time::Duration;

const EACH: usize = 40;

fn write_notes(app: &App, word: &str) {
    let visit = app.open_visits().unwrap().remove(0).visit;
    let appliance = app.store().registers().unwrap().appliances[0].id;
    for number in 0..EACH {
        let note = Common { note: format!("{word} {number}"), ..Common::default() };
        app.simple(visit.id, appliance, SimpleAct::Note, note).unwrap();
    }
}

#[test]
#[ignore = "runs only as the child of the test below"]
fn a_second_program() {
    let Some(path) = told_path() else { return };
    let store = Store::open(&path, OpenMode::MustExist).unwrap();
    write_notes(&App::with(store, Box::new(clock()), Box::new(CountedIds::after(2_000_000))).unwrap(), "second");
}

#[test]
fn two_programs_write_in_turn() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    let plant = plant_at(&path);
    plant.begin();
    let mut second = child("faults::two_writers::a_second_program", &path).stdout(Stdio::null()).spawn().unwrap();
    write_notes(&plant.app, "first");
    assert!(second.wait().unwrap().success());
    let notes: Vec<String> = plant.app.open_visits().unwrap()[0].entries.iter().map(|entry| entry.detail.note.clone()).collect();
    for word in ["first", "second"] {
        let of_one: Vec<&String> = notes.iter().filter(|note| note.starts_with(word)).collect();
        assert_eq!(of_one.len(), EACH, "{word}");
    }
    assert!(plant.app.store().check().unwrap().sound());
}

#[test]
fn a_writer_that_holds_on_is_waited_for_and_then_named() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    let plant = plant_at(&path);
    let visit = plant.begin();
    let other = rusqlite::Connection::open(&path).unwrap();
    other.execute_batch("BEGIN IMMEDIATE").unwrap();
    plant.app.store().wait_at_most(Duration::from_millis(50)).unwrap();
    let note = || Common { note: "now".to_owned(), ..Common::default() };
    let refused = plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, note());
    assert!(matches!(refused, Err(AppError::Store(StoreError::Busy { .. }))), "{refused:?}");
    assert!(refused.unwrap_err().to_string().contains("a.store"));
    other.execute_batch("ROLLBACK").unwrap();
    plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, note()).unwrap();
}
