//! `assess`: leak rates, verdicts, duties and losses as of a day.

mod answer;
mod sheet;

use super::visits::{appliance_named, site_named};
use super::{Answer, day, open_store, today};
use crate::app::{assess_all, duty_calendar};
use crate::ledger::{ApplianceId, by_appliance};
use chrono::NaiveDate;
use clap::{Args, ValueEnum};
use std::path::Path;

#[derive(Debug, Args)]
pub struct AssessArgs {
    /// As of this day; without it, today
    #[arg(long, value_parser = day, value_name = "DATE")]
    on: Option<NaiveDate>,
    /// Only this site
    #[arg(long)]
    site: Option<String>,
    /// Only this appliance
    #[arg(long)]
    appliance: Option<String>,
    /// Spell out the sums and readings behind each figure
    #[arg(long)]
    explain: bool,
    #[arg(long, value_enum, default_value_t)]
    format: AssessFormat,
}

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
pub enum AssessFormat {
    #[default]
    Table,
    Json,
    Csv,
    /// Duties as an iCalendar file
    Ics,
}

pub fn run(store: Option<&Path>, args: &AssessArgs) -> anyhow::Result<Answer> {
    let store = open_store(store)?;
    let registers = store.registers()?;
    let on = args.on.unwrap_or_else(today);
    let site = args.site.as_deref().map(|name| site_named(&registers, name)).transpose()?;
    let appliance = args.appliance.as_deref().map(|name| appliance_named(&registers, name, site)).transpose()?;
    let lines = match appliance {
        Some(appliance) => store.lines_of(appliance.id)?,
        None => store.lines()?,
    };
    let lines = by_appliance(lines);
    let wanted = |id: ApplianceId| appliance.is_none_or(|appliance| appliance.id == id);
    let assessments =
        assess_all(&registers, &lines, on, |appliance| wanted(appliance.id) && site.is_none_or(|site| appliance.site == site));
    let text = match args.format {
        AssessFormat::Json => answer::json(on, &assessments, args.explain)?,
        AssessFormat::Table => sheet::text(on, &assessments, args.explain),
        AssessFormat::Csv => sheet::csv(&assessments)?,
        AssessFormat::Ics => duty_calendar(&assessments, on, store.rows_written()?),
    };
    Ok(Answer::well(text))
}
