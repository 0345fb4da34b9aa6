//! `visits`: which visits there are.

use super::table::TextTable;
use super::{Answer, Format, day, open_store};
use crate::ledger::{Appliance, Registers, SiteId, VisitState};
use crate::store::VisitFilter;
use anyhow::Context;
use chrono::NaiveDate;
use clap::Args;
use serde::Serialize;
use std::path::Path;

#[derive(Debug, Args)]
pub struct VisitsArgs {
    /// Only at this site
    #[arg(long)]
    site: Option<String>,
    /// Only with entries of this appliance
    #[arg(long)]
    appliance: Option<String>,
    /// Only from this day on
    #[arg(long, value_parser = day, value_name = "DATE")]
    from: Option<NaiveDate>,
    /// Only up to this day
    #[arg(long, value_parser = day, value_name = "DATE")]
    to: Option<NaiveDate>,
    #[arg(long, value_enum, default_value_t)]
    format: Format,
}

#[derive(Serialize)]
struct Row {
    visit: String,
    date: String,
    site: String,
    state: VisitState,
    fingerprint: Option<String>,
}

pub fn run(store: Option<&Path>, args: &VisitsArgs) -> anyhow::Result<Answer> {
    let store = open_store(store)?;
    let registers = store.registers()?;
    let site = args.site.as_deref().map(|name| site_named(&registers, name)).transpose()?;
    let appliance = args.appliance.as_deref().map(|name| appliance_named(&registers, name, site)).transpose()?;
    let filter = VisitFilter { site, appliance: appliance.map(|appliance| appliance.id), from: args.from, to: args.to, state: None };
    let rows: Vec<Row> = store
        .visits(&filter)?
        .into_iter()
        .map(|visit| Row {
            visit: visit.id.to_string(),
            date: visit.date.to_string(),
            site: registers.site(visit.site).map(|site| site.name.clone()).unwrap_or_default(),
            state: visit.state,
            fingerprint: visit.fingerprint,
        })
        .collect();
    if args.format == Format::Json {
        return Ok(Answer::well(serde_json::to_string_pretty(&rows)? + "\n"));
    }
    let mut table = TextTable::new(&["date", "site", "state", "visit", "fingerprint"]);
    for row in rows {
        let mut fingerprint = row.fingerprint.unwrap_or_default();
        if args.format == Format::Table {
            // Its beginning, as a record's paper shows it and `record` takes it.
            fingerprint.truncate(8);
        }
        table.row([row.date, row.site, row.state.name().to_owned(), row.visit, fingerprint]);
    }
    Ok(Answer::well(if args.format == Format::Csv {
        table.csv()?
    } else if table.is_empty() {
        "no visits\n".to_owned()
    } else {
        table.text()
    }))
}

/// The site of this name.
pub fn site_named(registers: &Registers, name: &str) -> anyhow::Result<SiteId> {
    registers.site_named(name).map(|site| site.id).with_context(|| format!("there is no site \u{201c}{name}\u{201d} in this store"))
}

/// The appliance of this identification, at a site where several have it.
pub fn appliance_named<'a>(registers: &'a Registers, name: &str, site: Option<SiteId>) -> anyhow::Result<&'a Appliance> {
    let found: Vec<&Appliance> =
        registers.appliances.iter().filter(|appliance| appliance.name == name && site.is_none_or(|site| appliance.site == site)).collect();
    match found.as_slice() {
        [one] => Ok(one),
        [] => anyhow::bail!("there is no appliance \u{201c}{name}\u{201d} in this store"),
        _ => anyhow::bail!("\u{201c}{name}\u{201d} stands at {} sites; name one with --site", found.len()),
    }
}
