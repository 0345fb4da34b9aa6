//! `record`: service records as PDF.

use super::file::{make_folder, write_whole};
use super::visits::{appliance_named, site_named};
use super::{Answer, day, open};
use crate::app::App;
use crate::ledger::VisitId;
use crate::print::Paper;
use crate::store::{OpenMode, VisitFilter};
use anyhow::Context;
use chrono::NaiveDate;
use clap::{ArgGroup, Args, ValueEnum};
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
#[command(group = ArgGroup::new("which").required(true).args(["visits", "appliance", "all"]))]
pub struct RecordArgs {
    /// Ids from `visits`, or the beginning of a fingerprint
    #[arg(value_name = "VISIT")]
    visits: Vec<String>,
    /// Visits with an entry of this appliance on the day of --on
    #[arg(long, requires = "on")]
    appliance: Option<String>,
    /// The site of the appliance, where its identification occurs at several
    #[arg(long, requires = "appliance")]
    site: Option<String>,
    #[arg(long, requires = "appliance", value_parser = day, value_name = "DATE")]
    on: Option<NaiveDate>,
    /// Every visit, open and imported ones too
    #[arg(long)]
    all: bool,
    /// The folder for the files, made where it is missing; without it, this one
    #[arg(long, value_name = "DIR")]
    into: Option<PathBuf>,
    /// Print a further copy of each closed record, to be handed out: it is counted and says which it is
    #[arg(long, conflicts_with = "all")]
    new_copy: bool,
    /// Print again a copy that was made; without it the filed original, which is copy 1
    #[arg(long, value_name = "NUMBER", conflicts_with_all = ["all", "new_copy"], value_parser = clap::value_parser!(u32).range(1..))]
    copy: Option<u32>,
    /// Without it, as set for the window, else letter at a site under United States rules and A4 elsewhere
    #[arg(long, value_enum)]
    paper: Option<PaperSize>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum PaperSize {
    A4,
    Letter,
}

impl From<PaperSize> for Paper {
    fn from(size: PaperSize) -> Self {
        match size {
            PaperSize::A4 => Self::A4,
            PaperSize::Letter => Self::Letter,
        }
    }
}

pub fn run(store: Option<&Path>, args: &RecordArgs) -> anyhow::Result<Answer> {
    let app = open(store, OpenMode::MustExist)?;
    let visits = wanted(&app, args)?;
    if visits.is_empty() {
        return Ok(Answer::well("no visits\n".to_owned()));
    }
    let folder = args.into.as_deref().unwrap_or(Path::new("."));
    make_folder(folder)?;
    let mut answer = Answer::well(String::new());
    for visit in visits {
        // One that cannot be printed or written does not keep the others from it.
        match filed(&app, visit, args, folder) {
            Ok(path) => answer.text.push_str(&format!("{}\n", path.display())),
            Err(why) => answer.failures.push(format!("visit {visit} was not printed: {why:#}")),
        }
    }
    Ok(answer)
}

fn filed(app: &App, visit: VisitId, args: &RecordArgs, folder: &Path) -> anyhow::Result<PathBuf> {
    let paper = args.paper.map(Paper::from);
    let printed = match args.copy {
        Some(number) => app.print_copy(visit, number, paper)?,
        None if args.new_copy => app.print_copy(visit, app.further_copy(visit)?, paper)?,
        None => app.print_record(visit, paper)?,
    };
    let path = folder.join(&printed.file_name);
    write_whole(&path, &printed.bytes)?;
    Ok(path)
}

fn wanted(app: &App, args: &RecordArgs) -> anyhow::Result<Vec<VisitId>> {
    let store = app.store();
    if args.all {
        return Ok(store.visits(&VisitFilter::default())?.into_iter().map(|visit| visit.id).collect());
    }
    if let (Some(name), Some(on)) = (&args.appliance, args.on) {
        let registers = store.registers()?;
        let site = args.site.as_deref().map(|name| site_named(&registers, name)).transpose()?;
        let appliance = appliance_named(&registers, name, site)?;
        let mut visits: Vec<VisitId> = Vec::new();
        for entry in store.entries_of_appliance(appliance.id)?.into_iter().filter(|entry| entry.line.at.date == on) {
            if !visits.contains(&entry.visit) {
                visits.push(entry.visit);
            }
        }
        anyhow::ensure!(!visits.is_empty(), "nothing was entered for \u{201c}{name}\u{201d} on {on}; see bubblepoint visits");
        return Ok(visits);
    }
    let known = store.visits(&VisitFilter::default())?;
    args.visits
        .iter()
        .map(|asked| {
            if let Some(visit) = known.iter().find(|visit| visit.id.to_string() == asked.to_lowercase()) {
                return Ok(visit.id);
            }
            let digits = asked.replace(' ', "").to_lowercase();
            let long_enough = digits.len() >= 8;
            let by_fingerprint =
                known.iter().filter(|visit| long_enough && visit.fingerprint.as_ref().is_some_and(|full| full.starts_with(&digits)));
            let found: Vec<VisitId> = by_fingerprint.map(|visit| visit.id).collect();
            let [one] = found.as_slice() else { return None.context(unknown(asked)) };
            Ok(*one)
        })
        .collect()
}

fn unknown(asked: &str) -> String {
    format!("there is no visit \u{201c}{asked}\u{201d} in this store; bubblepoint visits lists them with their ids and fingerprints")
}
