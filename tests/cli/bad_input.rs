//! Bad input gets a clear error, and nothing is half done.

use super::{Desk, stocked};

/// A log line that is refused, with what must be said about it.
#[track_caller]
fn refused(line: &str, column: &str, said: &str) {
    let desk = stocked();
    let before = desk.on_store(&["visits"]).done();
    desk.write("bad.csv", &format!("date,appliance,what,amount,unit,new_refrigerant\n2026-05-01,R-1,note,,,\n{line}\n"));
    let error = desk.on_store(&["import", "bad.csv"]).refused();
    assert!(error.contains(&format!("bad.csv, line 3, column {column}: ")) && error.contains(said), "{error}");
    assert_eq!(desk.on_store(&["visits"]).done(), before, "the good line was not taken either");
}

#[test]
fn lines_that_cannot_be_true() {
    refused("2026-05-01,R-1,retrofit,,,R-999Q", "new_refrigerant", "R-999Q");
    refused("2026-05-01,R-1,charge,0,lb,", "amount", "0");
    refused("2026-05-01,R-1,charge,-4.5,lb,", "amount", "-4.5");
    refused("2999-01-01,R-1,charge,1,lb,", "date", "2999-01-01 is after today");
    refused("2015-04-30,R-1,charge,1,lb,", "date", "before the appliance was installed, 2015-05-01");
    refused("2026-02-30,R-1,charge,1,lb,", "date", "2026-02-30");
    refused("2026-05-01,R-1,charge,1,stone,", "unit", "stone");
    refused("2026-05-01,R-7,charge,1,lb,", "appliance", "R-7");
}

#[test]
fn a_gross_below_the_tare() {
    let desk = stocked();
    desk.write("c2.csv", "cylinder,kind,tare,unit,gross\nS-2,supply,28.0,lb,27.9\n");
    let error = desk.on_store(&["import", "c2.csv"]).refused();
    assert!(error.contains("c2.csv, line 2, column gross: "), "{error}");
}

#[test]
fn a_store_of_a_newer_program_is_left_alone() {
    let desk = stocked();
    let mut bytes = std::fs::read(desk.path("store.db")).unwrap();
    // `user_version` in the file's header.
    bytes[60..64].copy_from_slice(&999_i32.to_be_bytes());
    std::fs::write(desk.path("store.db"), &bytes).unwrap();
    for command in [&["assess"][..], &["check"], &["import", "log.csv"], &["demo", "--no-window", "--into", "out"]] {
        let error = desk.on_store(command).refused();
        assert!(error.contains("store.db was written by a newer program (schema 999"), "{error}");
    }
    assert_eq!(std::fs::read(desk.path("store.db")).unwrap(), bytes);
}

#[test]
fn a_file_that_is_no_store_is_left_alone() {
    let desk = Desk::new();
    desk.write("store.db", "a shopping list");
    for command in [&["visits"][..], &["demo", "--no-window", "--into", "out"]] {
        let error = desk.on_store(command).refused();
        assert!(error.contains("store.db is not a store"), "{error}");
    }
    assert_eq!(std::fs::read_to_string(desk.path("store.db")).unwrap(), "a shopping list");
}

/// Root may write in a folder that is read-only; nobody may write in `/proc`.
#[cfg(target_os = "linux")]
#[test]
fn a_folder_that_cannot_be_written() {
    let desk = stocked();
    let error = desk.run(&["--store", "/proc/store.db", "import", "sites.csv"]).refused();
    assert!(error.contains("/proc/store.db") && error.contains("you may write in it"), "{error}");
    let error = desk.on_store(&["account", "2026", "--into", "/proc/account.pdf"]).refused();
    assert!(error.contains("/proc/account.pdf could not be written"), "{error}");
    let error = desk.on_store(&["record", "--all", "--into", "/proc/records"]).refused();
    assert!(error.contains("the folder /proc/records could not be made"), "{error}");
    let error = desk.run(&["demo", "--no-window", "--into", "/proc/demo"]).refused();
    assert!(error.contains("/proc/demo"), "{error}");
}
