//! `demo`: the demonstration company, its records and its account.

use super::account::{self, AccountFormat};
use super::file::{make_folder, write_whole};
use super::{Answer, today, window};
use crate::app::{App, Clock, SystemClock, account_file_name, build_demonstration, may_become_demonstration};
use crate::ledger::VisitState;
use crate::store::{OpenMode, VisitFilter};
use anyhow::Context;
use chrono::{Datelike, NaiveDate};
use clap::Args;
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct DemoArgs {
    /// The folder for the demonstration; without it, a new one here
    #[arg(long, value_name = "DIR")]
    into: Option<PathBuf>,
    /// Only build and print; open no window
    #[arg(long)]
    pub no_window: bool,
}

/// Days of a new year in which the account of the year before is printed too.
const FRESH_YEAR: u32 = 120;

pub fn run(store: Option<&Path>, args: &DemoArgs) -> anyhow::Result<Answer> {
    let folder = match &args.into {
        Some(folder) => folder.clone(),
        None => new_folder()?,
    };
    let path = store.map_or_else(|| folder.join("demonstration.db"), Path::to_path_buf);
    // Asked first: what is refused leaves no empty folder behind.
    may_become_demonstration(&path)?;
    let made = !folder.exists();
    make_folder(&folder)?;
    if let Err(why) = build_demonstration(&path, today(), SystemClock.zone()) {
        if made {
            // Only where nothing is in it.
            let _ = std::fs::remove_dir(&folder);
        }
        return Err(why.into());
    }
    let app = App::open(&path, OpenMode::MustExist)?;
    let records = print_records(&app, &folder.join("service records"))?;
    let accounts = print_accounts(&app, &folder, today())?;
    drop(app);
    let mut text = format!(
        "The demonstration is built. Every person, company and place in it is invented.\n\
         store            {}\n\
         service records  {records} in {}\n",
        path.display(),
        folder.join("service records").display()
    );
    for file in accounts {
        text.push_str(&format!("annual account   {}\n", file.display()));
    }
    text.push_str(&format!("Look into it with: bubblepoint --store \"{}\" assess\n", path.display()));
    if args.no_window || !window::can_open() {
        return Ok(Answer::well(text));
    }
    // What was built is told before the window takes over.
    super::print(&text)?;
    window::open_at(&path, &folder)?;
    Ok(Answer::well(String::new()))
}

/// A folder that is not there yet.
fn new_folder() -> anyhow::Result<PathBuf> {
    const NAME: &str = "bubblepoint-demo";
    let numbered = |number: u32| PathBuf::from(if number == 1 { NAME.to_owned() } else { format!("{NAME}-{number}") });
    (1..=999)
        .map(numbered)
        .find(|folder| !folder.exists())
        .with_context(|| format!("there are too many folders {NAME} here; name one with --into DIR"))
}

/// Closed records and the draft of the open visit; the imported history stays in the store.
fn print_records(app: &App, folder: &Path) -> anyhow::Result<usize> {
    make_folder(folder)?;
    let mut count = 0;
    for visit in app.store().visits(&VisitFilter::default())?.into_iter().filter(|visit| visit.state != VisitState::Imported) {
        let printed = app.print_record(visit.id, None)?;
        write_whole(&folder.join(&printed.file_name), &printed.bytes)?;
        count += 1;
    }
    Ok(count)
}

fn print_accounts(app: &App, folder: &Path, today: NaiveDate) -> anyhow::Result<Vec<PathBuf>> {
    let mut files = Vec::new();
    let first = if today.ordinal() <= FRESH_YEAR { today.year() - 1 } else { today.year() };
    for year in first..=today.year() {
        let made = account::made(app, year, None)?;
        for format in AccountFormat::FILES {
            let path = folder.join(account_file_name(&made, format.extension()));
            write_whole(&path, &account::written(app, &made, format, None)?)?;
            files.push(path);
        }
    }
    Ok(files)
}
