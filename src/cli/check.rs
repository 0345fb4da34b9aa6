//! `check` and `backup`.

use super::{Answer, open, open_store};
use crate::app::{App, KnownPrint, Recognised};
use crate::ledger::VisitId;
use crate::store::OpenMode;
use anyhow::Context;
use clap::Args;
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct CheckArgs {
    /// Saved records: PDFs printed here, or closed records as bytes; without any, the store itself
    #[arg(value_name = "FILE")]
    files: Vec<PathBuf>,
}

#[derive(Debug, Args)]
pub struct BackupArgs {
    /// Where the copy goes; an existing file is never overwritten
    #[arg(value_name = "FILE")]
    file: PathBuf,
}

pub fn check(store: Option<&Path>, args: &CheckArgs) -> anyhow::Result<Answer> {
    if !args.files.is_empty() {
        return saved(&open(store, OpenMode::MustExist)?, &args.files);
    }
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
    Ok(Answer { text, failures: Vec::new(), well: report.sound() })
}

/// Each file compared with what the store holds and prints.
fn saved(app: &App, files: &[PathBuf]) -> anyhow::Result<Answer> {
    let (mut text, mut failures, mut well) = (String::new(), Vec::new(), true);
    for file in files {
        let bytes = match std::fs::read(file) {
            Ok(bytes) => bytes,
            Err(why) => {
                failures.push(format!("{} cannot be read: {why}", file.display()));
                continue;
            }
        };
        let (verdict, sound) = judged(app, app.recognise(&bytes)?)?;
        text.push_str(&format!("{}: {verdict}\n", file.display()));
        well &= sound;
    }
    Ok(Answer { text, failures, well })
}

fn judged(app: &App, found: Recognised) -> anyhow::Result<(String, bool)> {
    Ok(match found {
        Recognised::Print(print) => (told(&print, &named(app, print.visit)?), true),
        Recognised::Closed(visit) => (format!("sound; the very bytes that were signed for {}", named(app, visit)?), true),
        Recognised::OtherPrint(visit) => (
            format!(
                "NOT verified; it bears the mark of {} but is no print of it, neither of today nor of an earlier state. The file was \
                 changed, or another version of the program printed it. Print it again with bubblepoint record {visit} and compare",
                named(app, visit)?
            ),
            false,
        ),
        Recognised::Broken(visit) => {
            (format!("NOT verified; in the store itself {} does not have its fingerprint", named(app, visit)?), false)
        }
        Recognised::Foreign { fingerprint } => {
            (format!("a closed record with the fingerprint {fingerprint}, which is not in this store; name its store with --store"), false)
        }
        Recognised::Unknown => ("NOT verified; no closed record of this store is in it".to_owned(), false),
    })
}

/// What a print that is known turned out to be: which copy, and what came since.
fn told(print: &KnownPrint, record: &str) -> String {
    let copy = if print.copy > 1 { format!(" as copy {}", print.copy) } else { String::new() };
    let (then, now) = (print.then, print.now);
    let mut since = Vec::new();
    if now.countersigned && !then.countersigned {
        since.push("signed by the representative");
    }
    if now.hand_overs > then.hand_overs {
        since.push("handed over");
    }
    if now.corrections > then.corrections {
        since.push("corrected by another record");
    }
    if since.is_empty() {
        format!("sound; byte for byte what this store prints for {record}{copy}")
    } else {
        format!("sound; byte for byte what this store printed earlier for {record}{copy}; since then it was {}", since.join(", "))
    }
}

/// `record 3f9ac1d2 of 2026-03-03, Fish market`.
fn named(app: &App, visit: VisitId) -> anyhow::Result<String> {
    let visit = app.store().visit(visit)?.context("the visit is gone")?;
    let site = app.store().site(visit.site)?.map(|site| site.name).unwrap_or_default();
    let fingerprint: String = visit.fingerprint.unwrap_or_default().chars().take(8).collect();
    Ok(format!("record {fingerprint} of {}, {site}", visit.date))
}

pub fn backup(store: Option<&Path>, args: &BackupArgs) -> anyhow::Result<Answer> {
    let store = open_store(store)?;
    store.backup(&args.file)?;
    Ok(Answer::well(format!("backed up to {}\n", args.file.display())))
}
