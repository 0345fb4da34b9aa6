//! The window on a large store: the page frame with the open visit against an
//! empty window, and the Due page's worker against reading the entries once.
//!
//! `cargo bench --bench window`; `-- --quick` takes a small store. Drawn by
//! the software renderer without a display.

mod big_store;

use big_store::{fill, today};
use bubblepoint::app::App;
use bubblepoint::gui::{Gui, desk_options};
use bubblepoint::store::{OpenMode, Store};
use bubblepoint::view::Desk;
use bubblepoint::view::places::Overview;
use bubblepoint_ui::{AppWindow, BareWindow};
use bubblepoint_ui_tests::prepare;
use chrono::DateTime;
use slint::{ComponentHandle, LogicalSize};
use std::path::Path;
use std::time::{Duration, Instant};

const RUNS: usize = 7;

fn main() {
    let quick = std::env::args().any(|argument| argument == "--quick");
    let (appliances, each) = if quick { (40, 10) } else { (2_000, 50) };
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = folder.path().join("store.db");
    fill(&path, appliances, each).expect("a store");
    prepare();

    // The first window of a process loads the fonts; it counts for neither.
    bare();
    let empty = fastest(bare);
    let frame = fastest(|| page(&path, folder.path()));
    let store = Store::open(&path, OpenMode::MustExist).expect("the store opens");
    let read = fastest(|| timed(|| drop(std::hint::black_box(store.lines().expect("lines")))));
    let now = DateTime::UNIX_EPOCH + Duration::from_secs(1_796_000_000);
    let due = fastest(|| timed(|| drop(std::hint::black_box(Overview::read(&store, now, today()).expect("an overview")))));
    println!("{appliances} appliances, {} entries", appliances * each);
    report("an empty window, shown and drawn", empty, empty, "");
    report("the open visit's page, store opened, shown and drawn", frame, empty, "(aim 1.5)");
    report("reading the entries once", read, read, "");
    report("the Due page, read and judged by its worker", due, read, "(aim 4)");
}

fn report(what: &str, time: Duration, base: Duration, aim: &str) {
    println!("{what:<56} {:>9.2} ms {:>7.2} × {aim}", time.as_secs_f64() * 1e3, time.as_secs_f64() / base.as_secs_f64());
}

fn timed(act: impl FnOnce()) -> Duration {
    let start = Instant::now();
    act();
    start.elapsed()
}

/// The fastest of several runs: what the work takes when nothing else disturbs it.
fn fastest(mut run: impl FnMut() -> Duration) -> Duration {
    (0..RUNS).map(|_| run()).min().unwrap_or_default()
}

fn drawn(window: &slint::Window) {
    window.set_size(LogicalSize::new(390.0, 844.0));
    let picture = window.take_snapshot().expect("the software renderer draws");
    assert!(picture.width() > 0);
}

fn bare() -> Duration {
    timed(|| {
        let window = BareWindow::new().expect("a window");
        window.show().expect("shown");
        drawn(window.window());
    })
}

/// From the store's file to the first picture of the open visit.
fn page(path: &Path, documents: &Path) -> Duration {
    let start = Instant::now();
    let app = App::open(path, OpenMode::MustExist).expect("the store opens");
    let window = AppWindow::new().expect("a window");
    let gui = Gui::attach(&window, Desk::new(app, desk_options(Some(documents.to_path_buf()))).expect("a desk"));
    window.show().expect("shown");
    drawn(window.window());
    let took = start.elapsed();
    gui.flush();
    took
}
