//! The commands end to end: the built program, real files, what it prints and
//! its exit status.

mod account;
mod assess;
mod bad_input;
mod calendar;
mod demo;
mod explain;
mod import;
mod own_rulebook;
mod record;

use std::path::{Path, PathBuf};
use std::process::{Command, Output};
use tempfile::TempDir;

/// A folder to work in, with the store `store.db` that commands are told of.
struct Desk {
    folder: TempDir,
}

/// What a command came to.
struct Came {
    status: i32,
    out: String,
    err: String,
}

impl Desk {
    fn new() -> Self {
        Self { folder: tempfile::tempdir().unwrap() }
    }

    fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    fn write(&self, name: &str, text: &str) -> PathBuf {
        std::fs::write(self.path(name), text).unwrap();
        self.path(name)
    }

    /// Runs the program as given, in the folder, without a display and without a home.
    fn run(&self, arguments: &[&str]) -> Came {
        let Output { status, stdout, stderr } = Command::new(env!("CARGO_BIN_EXE_bubblepoint"))
            .args(arguments)
            .current_dir(self.folder.path())
            .env_remove("DISPLAY")
            .env_remove("WAYLAND_DISPLAY")
            .env_remove("WAYLAND_SOCKET")
            .env("HOME", self.folder.path())
            .env("XDG_DATA_HOME", self.path("data"))
            .output()
            .unwrap();
        let text = |bytes| String::from_utf8(bytes).unwrap();
        Came { status: status.code().unwrap_or(-1), out: text(stdout), err: text(stderr) }
    }

    /// The same on the store `store.db`.
    fn on_store(&self, arguments: &[&str]) -> Came {
        self.run(&[&["--store", "store.db"], arguments].concat())
    }

    /// Imports files that must be taken.
    fn import(&self, files: &[(&str, &str)]) -> String {
        for (name, text) in files {
            self.write(name, text);
        }
        let names: Vec<&str> = files.iter().map(|(name, _)| *name).collect();
        self.on_store(&[&["import"], names.as_slice()].concat()).done()
    }
}

impl Came {
    /// Its answer, where it did what it was asked.
    #[track_caller]
    fn done(self) -> String {
        assert_eq!((self.status, self.err.as_str()), (0, ""), "{}", self.out);
        self.out
    }

    /// Its error, where it could not.
    #[track_caller]
    fn refused(self) -> String {
        assert_eq!((self.status, self.out.as_str()), (1, ""), "{}", self.err);
        self.err
    }
}

fn pdfs(folder: &Path) -> Vec<PathBuf> {
    let mut files: Vec<PathBuf> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    for file in &files {
        let bytes = std::fs::read(file).unwrap();
        assert!(bytes.starts_with(b"%PDF-") && bytes.trim_ascii_end().ends_with(b"%%EOF"), "{}", file.display());
    }
    files
}

const SITES: &str = "site,rulebooks,owner,time_zone\nFish market cold store,us-82f,Harbour Trust,UTC\n";
const APPLIANCES: &str = "appliance,site,category,refrigerant,full_charge,unit,installed_on\n\
    R-1,Fish market cold store,commercial refrigeration,R-22,100,lb,2015-05-01\n";
const CYLINDERS: &str = "cylinder,kind,tare,unit,refrigerant,gas_status,gross\nS-1,supply,28.0,lb,R-22,reclaimed,78.0\n";
const PEOPLE: &str = "person,certificate,certificate_kind\nAda Quill,608-77,608 universal\n";
const LOG: &str = "date,appliance,what,amount,unit,cylinder,person\n\
    2025-09-04,R-1,charge,2.0,lb,S-1,Ada Quill\n2026-03-03,R-1,charge,10.0,lb,S-1,Ada Quill\n";

/// A store with the five kinds of file in it.
fn stocked() -> Desk {
    let desk = Desk::new();
    desk.import(&[("log.csv", LOG), ("people.csv", PEOPLE), ("c.csv", CYLINDERS), ("a.csv", APPLIANCES), ("sites.csv", SITES)]);
    desk
}

#[test]
fn exit_status_says_done_could_not_and_usage() {
    let desk = Desk::new();
    assert_eq!(desk.run(&["--help"]).status, 0);
    assert_eq!(desk.run(&["frobnicate"]).status, 2);
    assert_eq!(desk.on_store(&["record"]).status, 2, "a record of what?");
    assert_eq!(desk.on_store(&["record", "--appliance", "R-1"]).status, 2, "on which day?");
    let missing = desk.on_store(&["assess"]).refused();
    assert!(missing.contains("There is no store at store.db"), "{missing}");
    assert!(!desk.path("store.db").exists(), "asking makes no store");
}
