//! What happens when things go wrong: nothing saved is lost, nothing foreign
//! is touched, and a sentence says so.

mod damaged;
mod full_disk;
mod killed;
mod not_ours;
mod read_only;
mod two_writers;

use std::process::{Command, Stdio};

/// This test binary again, to run one ignored test in a process of its own.
/// `path` reaches it through the environment.
fn child(test: &str, path: &std::path::Path) -> Command {
    let mut command = Command::new(std::env::current_exe().unwrap());
    command
        .args([test, "--exact", "--ignored", "--nocapture", "--test-threads", "1"])
        .env("BUBBLEPOINT_TEST_PATH", path)
        .stdin(Stdio::null());
    command
}

/// Where the parent test told this child to work; `None` when it is no child.
fn told_path() -> Option<std::path::PathBuf> {
    std::env::var_os("BUBBLEPOINT_TEST_PATH").map(Into::into)
}
