//! The commands, one file each: parse, act, answer, exit code.

mod account;
pub mod assess;
pub mod calc;
mod check;
mod demo;
mod file;
mod import;
mod place;
mod record;
mod table;
mod visits;
mod window;

use crate::app::{App, Clock, SystemClock};
use crate::store::{OpenMode, Store};
use chrono::NaiveDate;
use clap::{Parser, Subcommand, ValueEnum};
use std::path::{Path, PathBuf};
use std::process::ExitCode;

/// Leak rates, duties, service records and refrigerant accounts.
///
/// Without a command the window opens.
#[derive(Debug, Parser)]
#[command(name = "bubblepoint", version, max_term_width = 100)]
pub struct Arguments {
    /// The store; without it, the one in this device's data folder
    #[arg(long, global = true, value_name = "FILE")]
    pub store: Option<PathBuf>,
    #[command(subcommand)]
    pub command: Option<Command>,
}

#[derive(Debug, Subcommand)]
pub enum Command {
    /// Build a demonstration, print its records and account, open it
    Demo(demo::DemoArgs),
    /// Read registers and logs from CSV, all or nothing
    Import(import::ImportArgs),
    /// Leak rates, verdicts, duties and losses as of a day
    Assess(assess::AssessArgs),
    /// Visits with their ids, state and fingerprint
    Visits(visits::VisitsArgs),
    /// Service records as PDF
    Record(record::RecordArgs),
    /// The account of one calendar year
    Account(account::AccountArgs),
    /// The store's integrity and every closed record; or saved records
    Check(check::CheckArgs),
    /// A consistent copy of the store while it is in use
    Backup(check::BackupArgs),
    /// Field calculations
    Calc(Box<calc::CalcArgs>),
}

/// How a listing is printed.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub enum Format {
    #[default]
    Table,
    Json,
    Csv,
}

/// What a command answers.
pub struct Answer {
    /// For standard output.
    pub text: String,
    /// For standard error: what could not be done, one line each.
    pub failures: Vec<String>,
    /// Whether all was well; `check` can answer that it was not.
    pub well: bool,
}

impl Answer {
    fn well(text: String) -> Self {
        Self { text, failures: Vec::new(), well: true }
    }
}

/// Parses the arguments, runs the command, prints its answer.
pub fn main() -> ExitCode {
    let arguments = Arguments::parse();
    match run(&arguments) {
        Ok(answer) => {
            let printed = print(&answer.text);
            for failure in &answer.failures {
                eprintln!("bubblepoint: {failure}");
            }
            if printed.is_err() || !answer.well || !answer.failures.is_empty() { ExitCode::from(1) } else { ExitCode::SUCCESS }
        }
        Err(sentence) => {
            eprintln!("bubblepoint: {sentence:#}");
            ExitCode::from(1)
        }
    }
}

/// A reader that went away (`| head`) is no failure of ours, but no panic either.
fn print(text: &str) -> std::io::Result<()> {
    use std::io::Write;
    let mut out = std::io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Err(error) if error.kind() == std::io::ErrorKind::BrokenPipe => Ok(()),
        done => done,
    }
}

fn run(arguments: &Arguments) -> anyhow::Result<Answer> {
    let store = arguments.store.as_deref();
    match &arguments.command {
        Some(Command::Demo(args)) => demo::run(store, args),
        Some(Command::Import(args)) => import::run(store, args),
        Some(Command::Assess(args)) => assess::run(store, args),
        Some(Command::Visits(args)) => visits::run(store, args),
        Some(Command::Record(args)) => record::run(store, args),
        Some(Command::Account(args)) => account::run(store, args),
        Some(Command::Check(args)) => check::check(store, args),
        Some(Command::Backup(args)) => check::backup(store, args),
        Some(Command::Calc(args)) => Ok(Answer::well(calc::run(args)?)),
        None => window::run(store),
    }
}

/// Opens the named store, or the default one.
fn open(store: Option<&Path>, mode: OpenMode) -> anyhow::Result<App> {
    Ok(App::open(&place::store_path(store)?, mode)?)
}

/// Opens for reading; the store must be there.
fn open_store(store: Option<&Path>) -> anyhow::Result<Store> {
    Ok(Store::open(&place::store_path(store)?, OpenMode::MustExist)?)
}

fn today() -> NaiveDate {
    SystemClock.now().with_timezone(&SystemClock.zone()).date_naive()
}

/// A day from the command line.
fn day(text: &str) -> Result<NaiveDate, String> {
    text.parse().map_err(|_| format!("\u{201c}{text}\u{201d} is not a date such as 2026-03-31"))
}
