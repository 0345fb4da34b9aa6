//! A folder in which nothing may be written.

#![cfg(unix)]

use super::{child, told_path};
use crate::support::plant::plant_at;
use bubblepoint::store::{OpenMode, Store};
use std::os::unix::fs::{MetadataExt, PermissionsExt};
use std::os::unix::process::CommandExt;
use std::path::Path;

/// `nobody` on the systems at hand; any user but the owner does.
const NOBODY: u32 = 65534;

#[test]
#[ignore = "runs only as the child of the test below"]
fn somebody_without_rights() {
    let Some(folder) = told_path() else { return };
    for (name, mode) in [("new.store", OpenMode::Create), ("a.store", OpenMode::MustExist)] {
        let path = folder.join(name);
        // Opening may succeed only as far as reading goes; it never may.
        let error = Store::open(&path, mode).err().expect("a read-only folder takes no store");
        let text = error.to_string();
        assert!(text.contains(&path.display().to_string()), "{text}");
        assert!(text.contains("read-only") || text.contains("may write in"), "{text}");
    }
    println!("both refused");
}

fn set_mode(path: &Path, mode: u32) {
    std::fs::set_permissions(path, std::fs::Permissions::from_mode(mode)).unwrap();
}

/// Root may write everywhere, so under root the child runs as somebody else.
#[test]
fn a_read_only_folder_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("a.store");
    drop(plant_at(&path));
    let before = std::fs::read(&path).unwrap();
    // The child's own copy of this program, where it may be run from.
    let tools = tempfile::tempdir().unwrap();
    let program = tools.path().join("tests");
    std::fs::copy(std::env::current_exe().unwrap(), &program).unwrap();
    for (what, mode) in [(tools.path(), 0o755), (program.as_path(), 0o755), (path.as_path(), 0o444), (folder.path(), 0o555)] {
        set_mode(what, mode);
    }
    let mut somebody = std::process::Command::new(&program);
    somebody.args(child("faults::read_only::somebody_without_rights", folder.path()).get_args());
    somebody.env("BUBBLEPOINT_TEST_PATH", folder.path());
    if folder.path().metadata().unwrap().uid() == 0 {
        somebody.uid(NOBODY).gid(NOBODY);
    }
    let output = somebody.output().unwrap();
    set_mode(folder.path(), 0o755);
    let said = String::from_utf8_lossy(&output.stdout);
    assert!(output.status.success() && said.contains("both refused"), "{said}{}", String::from_utf8_lossy(&output.stderr));
    assert_eq!(std::fs::read(&path).unwrap(), before);
    let names: Vec<_> = std::fs::read_dir(folder.path()).unwrap().map(|entry| entry.unwrap().file_name()).collect();
    assert_eq!(names, ["a.store"]);
}
