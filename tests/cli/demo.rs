use super::{Desk, pdfs};
use std::collections::HashSet;

#[test]
fn without_a_display_it_builds_prints_and_says_where() {
    let desk = Desk::new();
    let told = desk.run(&["demo"]).done();
    assert!(told.contains("bubblepoint-demo/demonstration.db"), "{told}");
    let records = pdfs(&desk.path("bubblepoint-demo/service records"));
    assert!(records.len() >= 12 && told.contains(&format!("service records  {} in ", records.len())), "{told}");
    let accounts: Vec<String> = std::fs::read_dir(desk.path("bubblepoint-demo"))
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .filter(|name| name.starts_with("account "))
        .collect();
    let kinds: HashSet<&str> = accounts.iter().filter_map(|name| name.rsplit('.').next()).collect();
    assert_eq!(kinds, HashSet::from(["pdf", "csv", "json"]));
    assert!(accounts.iter().all(|name| told.contains(name)), "{told}");

    let second = desk.run(&["demo", "--no-window"]).done();
    assert!(second.contains("bubblepoint-demo-2/demonstration.db"), "a new folder each time: {second}");
}

#[test]
fn an_earlier_demonstration_is_replaced_and_no_other_store() {
    let desk = Desk::new();
    desk.run(&["demo", "--no-window", "--into", "out"]).done();
    let before: Vec<_> = pdfs(&desk.path("out/service records")).iter().map(|path| std::fs::read(path).unwrap()).collect();
    desk.run(&["demo", "--no-window", "--into", "out"]).done();
    let after: Vec<_> = pdfs(&desk.path("out/service records")).iter().map(|path| std::fs::read(path).unwrap()).collect();
    assert_eq!(before, after, "the same day gives the same bytes");

    desk.import(&[("sites.csv", super::SITES)]);
    let bytes = std::fs::read(desk.path("store.db")).unwrap();
    let error = desk.on_store(&["demo", "--no-window", "--into", "out"]).refused();
    assert!(error.contains("is a store that is no demonstration. It was not touched"), "{error}");
    assert_eq!(std::fs::read(desk.path("store.db")).unwrap(), bytes);
    // What is refused leaves no folder behind; a file without content is no demonstration either.
    desk.write("empty.db", "");
    for store in ["store.db", "empty.db", "no/such/folder/new.db"] {
        desk.run(&["--store", store, "demo", "--no-window", "--into", "refused"]).refused();
        assert!(!desk.path("refused").exists(), "{store}");
    }
    desk.run(&["--store", "new.db", "demo", "--no-window", "--into", "out"]).done();
    desk.run(&["--store", "new.db", "check"]).done();
}

#[test]
fn it_can_be_asked_like_any_store() {
    let desk = Desk::new();
    desk.run(&["--store", "store.db", "demo", "--no-window", "--into", "out"]).done();
    let assessed = desk.on_store(&["assess"]).done();
    for verdict in ["under trigger", "at trigger", "over trigger", "no rate due", "by less than the weighing error", "suspended"] {
        assert!(assessed.contains(verdict), "{verdict}: {assessed}");
    }
    let visits = desk.on_store(&["visits", "--format", "csv"]).done();
    assert_eq!(visits.lines().filter(|line| line.contains(",open,")).count(), 1, "{visits}");
    desk.on_store(&["backup", "copy.db"]).done();
    assert!(desk.run(&["--store", "copy.db", "check"]).done().contains("0 with a fault; the store is sound"));
}
