//! SIGKILL in the middle of writing: every entry that was said to be saved is
//! there, the open visit is offered again, and the draft is at most a quarter
//! of a second old.

use super::{child, told_path};
use crate::support::plant::{charge, clock, gross, plant_at};
use bubblepoint::app::App;
use bubblepoint::app::testing::CountedIds;
use bubblepoint::store::{OpenMode, Store};
use std::io::{BufRead, BufReader, Write};
use std::process::Stdio;
use std::time::{Duration, Instant};

/// Saves entries and drafts, saying each, until it is killed.
#[test]
#[ignore = "runs only as the child of the test below"]
fn a_child_that_writes() {
    let Some(path) = told_path() else { return };
    let plant = plant_at(&path);
    let visit = plant.begin();
    println!("visit");
    let mut out = std::io::stdout();
    for number in 0_u32..5000 {
        // From 70 lb down in steps of 0.01 lb.
        let weight = |hundredths: u32| format!("{}.{:02}", hundredths / 100, hundredths % 100);
        let (before, after) = (weight(7000 - number), weight(7000 - number - 1));
        plant.app.save_draft(visit.id, None, "note", &number.to_string()).unwrap();
        writeln!(out, "draft {number}").unwrap();
        plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross(&before, &after))).unwrap();
        writeln!(out, "saved {number}").unwrap();
        out.flush().unwrap();
    }
}

fn killed_after(running: Duration) {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    let mut writer = child("faults::killed::a_child_that_writes", &path).stdout(Stdio::piped()).stderr(Stdio::null()).spawn().unwrap();
    let mut drafts: Vec<(Instant, u32)> = Vec::new();
    let mut saved = 0;
    let mut begun: Option<Instant> = None;
    let mut lines = BufReader::new(writer.stdout.take().unwrap()).lines();
    while begun.is_none_or(|begun| begun.elapsed() < running) {
        let line = lines.next().expect("the child goes on until it is killed").unwrap();
        match line.split_once(' ') {
            Some(("draft", number)) => drafts.push((Instant::now(), number.parse().unwrap())),
            Some(("saved", _)) => {
                begun.get_or_insert_with(Instant::now);
                saved += 1;
            }
            _ => {}
        }
    }
    let killed = Instant::now();
    writer.kill().unwrap();
    writer.wait().unwrap();
    // What it said between our last look and its death counts too.
    saved += lines.map_while(Result::ok).filter(|line| line.starts_with("saved ")).count();

    let app =
        App::with(Store::open(&path, OpenMode::MustExist).unwrap(), Box::new(clock()), Box::new(CountedIds::after(1_000_000))).unwrap();
    let open = app.open_visits().unwrap();
    assert_eq!(open.len(), 1, "the visit is offered again");
    let kept = open[0].entries.len();
    assert!(kept == saved || kept == saved + 1, "{saved} were said to be saved, {kept} are there");
    assert!(app.store().check().unwrap().sound());

    let due = drafts.iter().rev().find(|(at, _)| killed.duration_since(*at) >= Duration::from_millis(250)).map(|(_, number)| *number);
    let due = due.expect("the child ran for longer than a quarter of a second");
    let found: u32 = open[0].drafts.iter().find(|draft| draft.action == "note").expect("a draft").body.parse().unwrap();
    assert!(found >= due, "draft {due} was a quarter of a second old, on disk is {found}");
}

#[test]
fn nothing_saved_is_lost_when_the_program_is_killed() {
    for milliseconds in [330, 471, 618] {
        killed_after(Duration::from_millis(milliseconds));
    }
}
