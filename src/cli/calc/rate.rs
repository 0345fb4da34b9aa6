//! `calc rate`: the annualizing method with given figures.

use super::sheet::{Sheet, json_text, row};
use super::{CalcError, CalcFormat, positive_mass};
use crate::ledger::Category;
use crate::quantity::{Mass, Ratio, decimal_text, rounded_text};
use crate::rules::{Rulebook, Verdict, annualized, rulebook};
use clap::Args;
use serde_json::{Value, json};

const SOURCE: &str = "40 CFR 82.152, leak rate, annualizing method";

#[derive(Debug, Args)]
pub struct RateArgs {
    /// Full charge of the appliance: 100lb, 45.4kg
    #[arg(long, value_parser = positive_mass)]
    full_charge: Mass,
    /// What was added to return it to full charge
    #[arg(long, value_parser = positive_mass)]
    added: Mass,
    /// Days since refrigerant was last added; over 365 counts as 365
    #[arg(long, value_parser = clap::value_parser!(i64).range(1..=100_000))]
    days: i64,
    /// Only this category's trigger: "commercial refrigeration"
    #[arg(long, value_parser = category)]
    category: Option<Category>,
    #[arg(long, value_enum, default_value_t)]
    format: CalcFormat,
}

fn category(text: &str) -> Result<Category, String> {
    Category::from_name(text).map_err(|error| error.to_string())
}

/// A trigger and how the rate stands to it.
struct Stand {
    category: String,
    trigger: Ratio,
    source: String,
    verdict: Verdict,
}

pub(super) fn run(args: &RateArgs) -> Result<String, CalcError> {
    let book = rulebook("us-82f").ok_or_else(|| CalcError::Cannot("the rules of us-82f are missing from this build".to_owned()))?;
    let row = book.rates.last().ok_or_else(|| CalcError::Cannot("us-82f has no leak rate in this build".to_owned()))?;
    let percent = annualized(args.added, args.full_charge, args.days, row.longest_days);
    let days = args.days.min(row.longest_days);
    let stands = stands(book, percent, args.category);
    match args.format {
        CalcFormat::Json => Ok(json_text(&answer(args, days, percent, &stands))),
        CalcFormat::Table => Ok(sheet(args, days, percent, &stands)),
    }
}

/// The triggers in force last: of the one category, or of every one that has its own.
fn stands(book: &Rulebook, percent: Ratio, category: Option<Category>) -> Vec<Stand> {
    let in_force = book.triggers.iter().filter(|row| row.to.is_none());
    let rows: Vec<_> = match category {
        Some(category) => in_force.filter(|row| row.category.is_none_or(|own| own == category)).take(1).collect(),
        None => in_force.collect(),
    };
    rows.into_iter()
        .map(|row| Stand {
            category: category.or(row.category).map_or("comfort cooling and all others", Category::name).to_owned(),
            trigger: row.percent,
            source: row.source.clone(),
            verdict: Verdict::of(percent, row.percent),
        })
        .collect()
}

fn sheet(args: &RateArgs, days: i64, percent: Ratio, stands: &[Stand]) -> String {
    let mut sheet = Sheet::titled(&format!("Leak rate {} % a year", rounded_text(percent, 2)));
    let cited = sheet.cite(SOURCE);
    sheet.rows(
        "",
        &[
            row(["added", &args.added.kg_text(), "kg"]),
            row(["full charge", &args.full_charge.kg_text(), "kg"]),
            row(["days", &days.to_string(), if args.days > days { "counted, of more" } else { "" }]),
            row(["rate", &format!("{percent}"), &format!("% a year, exactly  {cited}")]),
        ],
    );
    let rows: Vec<Vec<String>> = stands
        .iter()
        .map(|stand| {
            let cited = sheet.cite(&stand.source);
            row([&stand.category, stand.verdict.name(), &format!("of {} %", exact(stand.trigger)), &cited])
        })
        .collect();
    sheet.rows("Triggers", &rows);
    sheet.finish()
}

fn answer(args: &RateArgs, days: i64, percent: Ratio, stands: &[Stand]) -> Value {
    json!({
        "full_charge_kg": args.full_charge.kg_text(),
        "added_kg": args.added.kg_text(),
        "days": args.days,
        "days_counted": days,
        "percent": rounded_text(percent, 2),
        "numerator": percent.numer().to_string(),
        "denominator": percent.denom().to_string(),
        // Present where one category was asked about.
        "trigger_percent": only(stands).map(|stand| exact(stand.trigger)),
        "verdict": only(stands).map(|stand| stand.verdict.name()),
        "triggers": stands.iter().map(|stand| json!({
            "category": stand.category,
            "trigger_percent": exact(stand.trigger),
            "verdict": stand.verdict.name(),
            "source": stand.source,
        })).collect::<Vec<_>>(),
        "source": SOURCE,
    })
}

fn only(stands: &[Stand]) -> Option<&Stand> {
    if let [one] = stands { Some(one) } else { None }
}

fn exact(value: Ratio) -> String {
    decimal_text(value).unwrap_or_else(|| rounded_text(value, 4))
}
