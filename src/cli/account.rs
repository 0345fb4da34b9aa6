//! `account`: the annual account.

use super::file::write_whole;
use super::record::PaperSize;
use super::table::TextTable;
use super::{Answer, open};
use crate::app::{App, account_file_name};
use crate::print::Paper;
use crate::quantity::{Mass, Ratio, rounded_text};
use crate::record::{AccountLine, AnnualAccount, WeightedLoss, account_csv, account_json};
use crate::store::OpenMode;
use clap::{Args, ValueEnum};
use std::path::{Path, PathBuf};

#[derive(Debug, Args)]
pub struct AccountArgs {
    /// The calendar year, as 2026
    #[arg(value_name = "YEAR")]
    year: i32,
    /// Only what this owner owns; without it, all owners
    #[arg(long)]
    owner: Option<String>,
    #[arg(long, value_enum, default_value_t)]
    format: AccountFormat,
    /// Where it is written; without it, a PDF goes into this folder and all else to standard output
    #[arg(long, value_name = "FILE")]
    into: Option<PathBuf>,
    /// For a PDF; without it, as set on this device, else letter where all masses are in pounds, else A4
    #[arg(long, value_enum)]
    paper: Option<PaperSize>,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub enum AccountFormat {
    #[default]
    Pdf,
    Csv,
    Json,
    Table,
}

impl AccountFormat {
    pub const FILES: [Self; 3] = [Self::Pdf, Self::Csv, Self::Json];

    pub fn extension(self) -> &'static str {
        match self {
            Self::Pdf => "pdf",
            Self::Csv => "csv",
            Self::Json => "json",
            Self::Table => "txt",
        }
    }
}

pub fn run(store: Option<&Path>, args: &AccountArgs) -> anyhow::Result<Answer> {
    let app = open(store, OpenMode::MustExist)?;
    let account = made(&app, args.year, args.owner.as_deref())?;
    let bytes = written(&app, &account, args.format, args.paper.map(Paper::from))?;
    let path = match (&args.into, args.format) {
        (Some(path), _) => path.clone(),
        (None, AccountFormat::Pdf) => PathBuf::from(account_file_name(&account, args.format.extension())),
        (None, _) => return Ok(Answer::well(String::from_utf8(bytes)?)),
    };
    write_whole(&path, &bytes)?;
    Ok(Answer::well(format!("{}\n", path.display())))
}

pub fn made(app: &App, year: i32, owner: Option<&str>) -> anyhow::Result<AnnualAccount> {
    Ok(app.annual_account(year, owner)?)
}

/// The account in a format, as bytes.
pub fn written(app: &App, account: &AnnualAccount, format: AccountFormat, paper: Option<Paper>) -> anyhow::Result<Vec<u8>> {
    Ok(match format {
        AccountFormat::Pdf => app.account_pdf(account, paper)?,
        AccountFormat::Csv => account_csv(account).into_bytes(),
        AccountFormat::Json => account_json(account)?.into_bytes(),
        AccountFormat::Table => table(account).into_bytes(),
    })
}

fn table(account: &AnnualAccount) -> String {
    let whose = account.owner.as_deref().unwrap_or("all owners");
    let mut text = format!("annual account {} to {}, {whose}, masses in kg\n", account.year, account.to);
    if account.demonstration {
        text.push_str("DEMONSTRATION: every name and figure is invented\n");
    }
    let mut gases = TextTable::new(&["gas", ">opening", ">charged", ">recovered", ">lost", ">closing", ">ODP kg", ">CO\u{2082}e t"]);
    let mut others = TextTable::new(&["gas", ">bought", ">sent away", ">lost from cylinders", ">without a cylinder", ">not explained"]);
    for gas in &account.gases {
        gases.row(cells(vec![gas.refrigerant.clone()], &gas.line, &gas.loss));
        let line = &gas.line;
        let figures = [line.bought, line.sent_away, line.lost_from_cylinders, Some(line.past_cylinders), line.unexplained()];
        others.row([gas.refrigerant.clone()].into_iter().chain(figures.map(held)));
    }
    let mut appliances = TextTable::new(&[
        "site",
        "appliance",
        "gas",
        ">opening",
        ">charged",
        ">recovered",
        ">lost",
        ">closing",
        ">ODP kg",
        ">CO\u{2082}e t",
    ]);
    for one in &account.appliances {
        let names = vec![one.site.clone(), one.appliance.clone(), one.refrigerant.clone()];
        appliances.row(cells(names, &one.line, &one.loss));
    }
    let mut duties = TextTable::new(&["duty", "rulebook", ">in time", ">late", ">not done", ">open"]);
    for tally in &account.duties {
        let counts = tally.counts;
        let figures = [counts.in_time, counts.late, counts.not_done, counts.open].map(|count| count.to_string());
        duties.row([tally.duty.clone(), tally.rulebook.clone()].into_iter().chain(figures));
    }
    for (title, table) in [
        ("gas: opening and closing are the cylinders' content", &gases),
        ("what came and went besides", &others),
        ("appliances: opening and closing are their full charge", &appliances),
        ("duties that fell due, and those open", &duties),
    ] {
        if !table.is_empty() {
            text.push_str(&format!("\n{title}\n{}", table.text()));
        }
    }
    if !account.remarks.is_empty() {
        text.push('\n');
    }
    for remark in &account.remarks {
        text.push_str(&format!("note: {}\n", remark.text));
    }
    text
}

fn held(mass: Option<Mass>) -> String {
    mass.map_or_else(|| "?".to_owned(), |mass| rounded_text(mass.kg(), 3))
}

fn cells(names: Vec<String>, line: &AccountLine, loss: &WeightedLoss) -> Vec<String> {
    let mass = |mass: Mass| rounded_text(mass.kg(), 3);
    let maybe = held;
    let weighted = |value: Option<Ratio>| value.map_or_else(|| "?".to_owned(), |value| rounded_text(value, 3));
    let figures = [
        maybe(line.opening),
        mass(line.charged),
        mass(line.recovered),
        mass(line.lost),
        maybe(line.closing),
        weighted(loss.odp_kg),
        weighted(loss.co2e_t),
    ];
    names.into_iter().chain(figures).collect()
}
