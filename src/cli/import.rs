//! `import`: registers and logs from CSV.

use super::{Answer, open, place};
use crate::store::OpenMode;
use anyhow::Context;
use clap::Args;
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct ImportArgs {
    /// CSV files in any order; the kind is told from the header
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
}

pub fn run(store: Option<&Path>, args: &ImportArgs) -> anyhow::Result<Answer> {
    let files = args
        .files
        .iter()
        .map(|path| {
            let bytes = std::fs::read(path).with_context(|| format!("{} cannot be read; nothing was imported", path.display()))?;
            Ok((path.display().to_string(), bytes))
        })
        .collect::<anyhow::Result<Vec<_>>>()?;
    let path = place::store_path(store)?;
    let was_there = path.exists();
    let imported = open(store, OpenMode::Create).and_then(|app| Ok(app.import(&files)?));
    if imported.is_err() && !was_there {
        // Nothing was taken in: no empty store stays behind either.
        for ending in ["", "-wal", "-shm"] {
            let mut file = path.clone().into_os_string();
            file.push(ending);
            let _ = std::fs::remove_file(file);
        }
    }
    let taken = imported?;
    let mut text = String::new();
    for remark in &taken.remarks {
        text.push_str(&format!("{}, line {}: remark: {}\n", remark.file, remark.line, remark.message));
    }
    let counts = [
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

fn counted(count: usize, what: &str) -> String {
    match (count, what) {
        (1, what) => format!("1 {what}"),
        (count, "person") => format!("{count} people"),
        (count, "entry") => format!("{count} entries"),
        (count, what) => format!("{count} {what}s"),
    }
}
