//! `import`: registers and logs from CSV, and a company's own rulebooks.

use super::{Answer, place};
use crate::app::{App, FreshIds, SystemClock};
use crate::store::{OpenMode, Store};
use clap::Args;
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct ImportArgs {
    /// CSV files in any order, the kind told from the header; company rulebooks as .toml
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
}

pub fn run(store: Option<&Path>, args: &ImportArgs) -> anyhow::Result<Answer> {
    let files = read(&args.files)?;
    if !place::store_path(store)?.exists() {
        // Tried out in memory first: where nothing is taken in, no store is
        // made, and what another program may have made meanwhile is not touched.
        App::with(Store::in_memory()?, Box::new(SystemClock), Box::new(FreshIds))?.import(&files)?;
    }
    let taken = App::open(&place::store_path_to_make(store)?, OpenMode::Create)?.import(&files)?;
    let mut text = String::new();
    for remark in &taken.remarks {
        text.push_str(&format!("{}, line {}: remark: {}\n", remark.file, remark.line, remark.message));
    }
    let counts = [
        (taken.rulebooks, "rulebook"),
        (taken.sites, "site"),
        (taken.appliances, "appliance"),
        (taken.cylinders, "cylinder"),
        (taken.people, "person"),
        (taken.entries, "entry"),
    ];
    let parts: Vec<String> = counts.iter().filter(|(count, _)| *count > 0).map(|(count, what)| counted(*count, what)).collect();
    let summary = if parts.is_empty() { "nothing new".to_owned() } else { parts.join(", ") };
    text.push_str(&format!("imported: {summary}\n"));
    if !taken.remarks.is_empty() {
        text.push_str(&format!("{} to look at, taken all the same\n", counted(taken.remarks.len(), "remark")));
    }
    Ok(Answer::well(text))
}

/// Each file with its bytes; all that cannot be read are named.
fn read(paths: &[PathBuf]) -> anyhow::Result<Vec<(String, Vec<u8>)>> {
    let (mut files, mut unreadable) = (Vec::new(), Vec::new());
    for path in paths {
        match std::fs::read(path) {
            Ok(bytes) => files.push((path.display().to_string(), bytes)),
            Err(error) => unreadable.push(format!("{} cannot be read: {error}", path.display())),
        }
    }
    if unreadable.is_empty() {
        return Ok(files);
    }
    anyhow::bail!("{}\nnothing was imported; correct the names, or see that you may read the files", unreadable.join("\n"))
}

fn counted(count: usize, what: &str) -> String {
    match (count, what) {
        (1, what) => format!("1 {what}"),
        (count, "person") => format!("{count} people"),
        (count, "entry") => format!("{count} entries"),
        (count, what) => format!("{count} {what}s"),
    }
}
