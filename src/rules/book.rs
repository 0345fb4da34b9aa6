//! Rulebooks: the rules of one legal text as dated rows, each with its article.
//!
//! The rows are data (`books/*.toml`), so that a threshold has a first and a
//! last day and no constant of the law stands in code.

use crate::gas::Weighting;
use crate::ledger::{Category, Equipment};
use crate::quantity::{Mass, MassUnit, Ratio, parse_decimal};
use chrono::NaiveDate;
use serde::{Deserialize, Deserializer};
use std::sync::LazyLock;

/// One legal text.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Rulebook {
    /// As written in registers: `us-82f`.
    pub id: String,
    pub title: String,
    /// Whose GWP and ODP tables weight losses at sites under this text.
    #[serde(deserialize_with = "weighting")]
    pub weights: Weighting,
    /// Years for which records are kept.
    pub retention_years: u32,
    /// How far the text itself was read; empty when read in full.
    #[serde(default)]
    pub confidence: String,
    /// Present where the text has a leak rate.
    #[serde(default, rename = "rate")]
    pub rates: Vec<RateRow>,
    #[serde(default, rename = "season")]
    pub seasons: Vec<Season>,
    #[serde(default, rename = "scope")]
    pub scopes: Vec<Scope>,
    #[serde(default, rename = "trigger")]
    pub triggers: Vec<Trigger>,
    #[serde(default, rename = "band")]
    pub bands: Vec<Band>,
    #[serde(default, rename = "exemption")]
    pub exemptions: Vec<Exemption>,
    #[serde(default, rename = "duty")]
    pub duties: Vec<DutyRow>,
}

/// How leak rates are calculated.
#[derive(Debug, Clone, Deserialize)]
pub struct RateRow {
    #[serde(flatten)]
    pub validity: Validity,
    /// Neither the days since the last addition nor the rolling period count more.
    pub longest_days: i64,
    pub source: String,
    /// Days that the first annualized rate takes instead of those passed.
    pub first_days: Option<i64>,
    #[serde(default)]
    pub first_days_source: String,
    /// The first rolling rate counts nothing added before this day.
    #[serde(default, deserialize_with = "optional_day")]
    pub first_added_from: Option<NaiveDate>,
    #[serde(default)]
    pub first_added_from_source: String,
}

/// Within how many calendar months a seasonal removal and its return lie.
#[derive(Debug, Clone, Deserialize)]
pub struct Season {
    #[serde(flatten)]
    pub validity: Validity,
    pub months: u32,
    pub source: String,
}

/// When a row holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub struct Validity {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    /// Last day; `None` while in force.
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
}

impl Validity {
    pub fn holds_on(&self, day: NaiveDate) -> bool {
        self.from <= day && self.to.is_none_or(|to| day <= to)
    }
}

/// Which gases a scope row takes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum GasTest {
    /// A gas with a CFC, HCFC or halon part.
    #[serde(rename = "ozone-depleting")]
    OzoneDepleting,
    /// A gas with an HFC, PFC or HFO part.
    #[serde(rename = "substitute")]
    Substitute,
    /// A listed HFC in any proportion (42 U.S.C. 7675(c)), or a substitute with
    /// a GWP over the row's; not solely ozone-depleting.
    #[serde(rename = "regulated or substitute")]
    RegulatedOrSubstitute,
    /// An HFC, PFC or HFO part and no ozone-depleting one.
    #[serde(rename = "fluorinated")]
    Fluorinated,
    /// An HFC or PFC part and no ozone-depleting one.
    #[serde(rename = "fluorinated, Annex I")]
    FluorinatedAnnexI,
    /// An ozone-depleting, HFC or PFC part.
    #[serde(rename = "halocarbon")]
    Halocarbon,
}

/// Which equipment a scope row takes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Deserialize)]
pub enum EquipmentTest {
    #[default]
    #[serde(rename = "any")]
    Any,
    /// Refrigeration, air conditioning, heat pumps, fire protection.
    #[serde(rename = "stationary")]
    Stationary,
    #[serde(rename = "stationary, trucks and trailers")]
    StationaryTrucksAndTrailers,
    #[serde(rename = "other mobile")]
    OtherMobile,
}

/// One way into a rulebook.
#[derive(Debug, Clone, Deserialize)]
pub struct Scope {
    #[serde(flatten)]
    pub validity: Validity,
    pub gas: GasTest,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub gwp_over: Option<Ratio>,
    #[serde(default)]
    pub equipment: EquipmentTest,
    #[serde(default, deserialize_with = "optional_mass")]
    pub charge_at_least: Option<Mass>,
    #[serde(default)]
    pub not_categories: Vec<Category>,
    #[serde(default)]
    pub not_residential_or_light_commercial_ac: bool,
    pub source: String,
    pub why: String,
}

/// The leak rate over which duties arise; the first row that fits holds.
#[derive(Debug, Clone, Deserialize)]
pub struct Trigger {
    #[serde(flatten)]
    pub validity: Validity,
    /// `None` takes every other category.
    pub category: Option<Category>,
    #[serde(deserialize_with = "ratio")]
    pub percent: Ratio,
    pub source: String,
}

/// What a band of leak check intervals measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum Basis {
    /// Tonnes of CO₂ equivalent of the whole gas, where it has an HFC or PFC part.
    #[serde(rename = "t CO2e")]
    TonnesCo2e,
    /// Kilograms of the parts listed in 2024/573 Annex II section 1.
    #[serde(rename = "kg of Annex II section 1 gas")]
    KgOfHfo,
    /// Kilograms of the whole gas.
    #[serde(rename = "kg")]
    Kg,
}

/// An interval of leak checks.
#[derive(Debug, Clone, Deserialize)]
pub struct Band {
    #[serde(flatten)]
    pub validity: Validity,
    pub basis: Basis,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub at_least: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub over: Option<Ratio>,
    pub months: u32,
    pub months_with_detection: Option<u32>,
    /// Also due by the last day of the calendar year after the last check.
    #[serde(default)]
    pub or_end_of_next_year: bool,
    pub source: String,
}

/// A way out of a rulebook: all that is named must hold.
#[derive(Debug, Clone, Deserialize)]
pub struct Exemption {
    #[serde(flatten)]
    pub validity: Validity,
    #[serde(default)]
    pub labelled_hermetically_sealed: bool,
    #[serde(default)]
    pub residential: bool,
    pub equipment: Option<Equipment>,
    /// Kilograms of the whole gas.
    #[serde(default, deserialize_with = "optional_ratio")]
    pub kg_below: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub co2e_t_below: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub hfo_kg_below: Option<Ratio>,
    pub source: String,
    pub why: String,
}

/// The kinds of duty this program can follow.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Deserialize)]
pub enum DutyKind {
    #[serde(rename = "repair")]
    Repair,
    #[serde(rename = "initial verification test")]
    InitialVerification,
    #[serde(rename = "follow-up verification test")]
    FollowUpVerification,
    #[serde(rename = "retrofit or retirement plan")]
    Plan,
    #[serde(rename = "leak inspection")]
    LeakInspection,
    #[serde(rename = "chronic leak report")]
    ChronicLeakReport,
    #[serde(rename = "leak check")]
    LeakCheck,
    #[serde(rename = "re-check")]
    ReCheck,
    #[serde(rename = "repair of a found leak")]
    RepairOfFoundLeak,
    #[serde(rename = "leakage detection system check")]
    DetectionSystemCheck,
    #[serde(rename = "determine full charge")]
    DetermineFullCharge,
}

impl DutyKind {
    pub const fn name(self) -> &'static str {
        match self {
            Self::Repair => "repair",
            Self::InitialVerification => "initial verification test",
            Self::FollowUpVerification => "follow-up verification test",
            Self::Plan => "retrofit or retirement plan",
            Self::LeakInspection => "leak inspection",
            Self::ChronicLeakReport => "chronic leak report",
            Self::LeakCheck => "leak check",
            Self::ReCheck => "re-check",
            Self::RepairOfFoundLeak => "repair of a found leak",
            Self::DetectionSystemCheck => "leakage detection system check",
            Self::DetermineFullCharge => "determine full charge",
        }
    }
}

/// From which event a duty's months are counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum CountedFrom {
    #[serde(rename = "rate")]
    Rate,
    #[serde(rename = "repair")]
    Repair,
    #[serde(rename = "follow-up verification test")]
    FollowUpVerification,
}

/// One duty with its numbers; the first row that fits the appliance holds.
#[derive(Debug, Clone, Deserialize)]
pub struct DutyRow {
    pub duty: DutyKind,
    #[serde(flatten)]
    pub validity: Validity,
    pub days: Option<i64>,
    /// How long before the duty began it may have been met.
    pub days_before: Option<i64>,
    pub months: Option<u32>,
    /// Periods in a row without a rate over the trigger that end a series.
    pub clean_periods: Option<usize>,
    /// Month and day of the next calendar year.
    #[serde(default, deserialize_with = "optional_month_day")]
    pub due_in_next_year: Option<(u32, u32)>,
    pub hours: Option<i64>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub percent: Option<Ratio>,
    pub counted_from: Option<CountedFrom>,
    #[serde(default)]
    pub starts_after_days: i64,
    #[serde(default)]
    pub calendar_year: bool,
    #[serde(default)]
    pub categories: Vec<Category>,
    #[serde(default, deserialize_with = "optional_mass")]
    pub charge_at_least: Option<Mass>,
    pub source: String,
}

/// The rulebooks that come with the program.
pub fn built_in() -> &'static [Rulebook] {
    static BOOKS: LazyLock<Vec<Rulebook>> = LazyLock::new(|| {
        [
            include_str!("books/us-82f.toml"),
            include_str!("books/us-84c.toml"),
            include_str!("books/eu-573.toml"),
            include_str!("books/eu-590.toml"),
            include_str!("books/gb-517.toml"),
            include_str!("books/gb-1005.toml"),
            include_str!("books/ca-halocarbon.toml"),
        ]
        .into_iter()
        // A book that does not parse fails the tests, not a user: see below.
        .filter_map(|text| toml::from_str(text).ok())
        .collect()
    });
    &BOOKS
}

/// Months within which a seasonal removal and its return must lie, by the law
/// of the day of the return; before the first row by that row.
pub fn season_months(day: NaiveDate) -> Option<u32> {
    let mut rows = built_in().iter().flat_map(|book| &book.seasons);
    rows.clone().find(|row| row.validity.holds_on(day)).or_else(|| rows.next()).map(|row| row.months)
}

/// The rulebook with this id.
pub fn rulebook(id: &str) -> Option<&'static Rulebook> {
    built_in().iter().find(|book| book.id == id)
}

fn day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<NaiveDate, D::Error> {
    let text = String::deserialize(deserializer)?;
    text.parse().map_err(|_| serde::de::Error::custom(format!("\u{201c}{text}\u{201d} is not a day such as 2026-01-01")))
}

fn optional_day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<NaiveDate>, D::Error> {
    day(deserializer).map(Some)
}

fn optional_month_day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<(u32, u32)>, D::Error> {
    let text = String::deserialize(deserializer)?;
    let parts = text.split_once('-').and_then(|(month, day)| Some((month.parse().ok()?, day.parse().ok()?)));
    // A leap year, so that 02-29 could be written.
    let known = parts.filter(|&(month, day)| NaiveDate::from_ymd_opt(2024, month, day).is_some());
    known.map(Some).ok_or_else(|| serde::de::Error::custom(format!("\u{201c}{text}\u{201d} is not a month and day such as 03-01")))
}

fn ratio<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Ratio, D::Error> {
    parse_decimal(&String::deserialize(deserializer)?).map_err(serde::de::Error::custom)
}

fn optional_ratio<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Ratio>, D::Error> {
    ratio(deserializer).map(Some)
}

fn optional_mass<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Mass>, D::Error> {
    let text = String::deserialize(deserializer)?;
    let (number, unit) = text.split_once(' ').ok_or_else(|| serde::de::Error::custom("a mass needs a unit, as in 50 lb"))?;
    let unit = MassUnit::from_name(unit).map_err(serde::de::Error::custom)?;
    Mass::parse(number, unit).map(Some).map_err(serde::de::Error::custom)
}

fn weighting<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Weighting, D::Error> {
    match String::deserialize(deserializer)?.as_str() {
        "us" => Ok(Weighting::UnitedStates),
        "eu" => Ok(Weighting::EuropeanUnion),
        "gb" => Ok(Weighting::GreatBritain),
        other => Err(serde::de::Error::custom(format!("\u{201c}{other}\u{201d} is not a set of weights; known are us, eu, gb"))),
    }
}

impl Rulebook {
    /// How rates are calculated on a day; `None` where the text has no leak rate then.
    pub fn rate_row(&self, day: NaiveDate) -> Option<&RateRow> {
        self.rates.iter().find(|row| row.validity.holds_on(day))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_built_in_book_parses() {
        let ids: Vec<_> = built_in().iter().map(|book| book.id.as_str()).collect();
        assert_eq!(ids, ["us-82f", "us-84c", "eu-573", "eu-590", "gb-517", "gb-1005", "ca-halocarbon"]);
    }

    #[test]
    fn every_row_names_its_article() {
        for book in built_in() {
            let sources = (book.scopes.iter().map(|row| &row.source))
                .chain(book.triggers.iter().map(|row| &row.source))
                .chain(book.bands.iter().map(|row| &row.source))
                .chain(book.exemptions.iter().map(|row| &row.source))
                .chain(book.duties.iter().map(|row| &row.source))
                .chain(book.rates.iter().map(|row| &row.source))
                .chain(book.seasons.iter().map(|row| &row.source));
            for source in sources {
                assert!(source.chars().any(|c| c.is_ascii_digit()), "{}: {source:?}", book.id);
            }
        }
    }
}
