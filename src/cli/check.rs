//! `check` and `backup`.

use super::{Answer, open_store};
use clap::Args;
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct CheckArgs {}

#[derive(Debug, Args)]
pub struct BackupArgs {
    /// Where the copy goes; an existing file is never overwritten
    #[arg(value_name = "FILE")]
    file: PathBuf,
}

pub fn check(store: Option<&Path>, _args: &CheckArgs) -> anyhow::Result<Answer> {
    let store = open_store(store)?;
    let report = store.check()?;
    let mut text = String::new();
    for fault in report.damage.iter().chain(&report.dangling) {
        text.push_str(&format!("store: {fault}\n"));
    }
    for visit in &report.without_record {
        text.push_str(&format!("visit {visit} is closed but has no record\n"));
    }
    let bad: Vec<_> = report.records.iter().filter(|record| !record.sound).collect();
    for record in &bad {
        text.push_str(&format!("record of visit {}: its bytes do not have its fingerprint\n", record.visit));
    }
    let verdict = if report.sound() { "sound" } else { "NOT sound; keep this file, and go back to a backup" };
    text.push_str(&format!("{} closed records, {} with a fault; the store is {verdict}\n", report.records.len(), bad.len()));
    Ok(Answer { text, well: report.sound() })
}

pub fn backup(store: Option<&Path>, args: &BackupArgs) -> anyhow::Result<Answer> {
    let store = open_store(store)?;
    store.backup(&args.file)?;
    Ok(Answer::well(format!("backed up to {}\n", args.file.display())))
}
