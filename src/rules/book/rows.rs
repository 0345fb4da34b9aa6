//! The kinds of row that a rulebook has.

use super::read::{day, optional_day, optional_mass, optional_month_day, optional_ratio, ratio};
use super::words::{Basis, CountedFrom, DutyKind, EquipmentTest, GasTest};
use crate::ledger::{Category, Equipment};
use crate::quantity::{Mass, Ratio};
use chrono::NaiveDate;
use serde::Deserialize;

/// One way into a rulebook.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Scope {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
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

/// A way out of a rulebook: all that is named must hold.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Exemption {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
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

/// How leak rates are calculated.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct RateRow {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
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
    /// A follow-up test begins the rolling period anew while it is less than
    /// so many calendar months ago.
    pub follow_up_months: u32,
    /// Why the method cannot be changed at will; empty where the text is silent.
    #[serde(default)]
    pub method_lock: String,
    #[serde(default)]
    pub method_lock_source: String,
}

/// The leak rate over which duties arise; the first row that fits holds.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Trigger {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    /// `None` takes every other category.
    pub category: Option<Category>,
    #[serde(deserialize_with = "ratio")]
    pub percent: Ratio,
    pub source: String,
}

/// Within how many calendar months a seasonal removal and its return lie.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Season {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    pub months: u32,
    pub source: String,
}

/// An interval of leak checks.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Band {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
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

/// One duty with its numbers; the first row that fits the appliance holds.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct DutyRow {
    pub duty: DutyKind,
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    pub days: Option<i64>,
    /// How long before the duty began it may have been met.
    pub days_before: Option<i64>,
    pub months: Option<u32>,
    /// Periods in a row without a rate over the trigger that end a series.
    pub clean_periods: Option<usize>,
    /// Calendar months without one that end it, where no periods are counted.
    pub clean_months: Option<u32>,
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
    /// Later due days that hold where somebody can show their reason.
    #[serde(default, rename = "extension")]
    pub extensions: Vec<Extension>,
    pub source: String,
}

/// A later due day, counted from the same day as the duty's own.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Extension {
    pub days: i64,
    /// What must be the case, as a clause: `an industrial process shutdown is needed`.
    pub when: String,
    pub source: String,
}

/// A leakage detection system that must be there.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Detection {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    #[serde(default)]
    pub categories: Vec<Category>,
    #[serde(default)]
    pub equipment: Vec<Equipment>,
    #[serde(default, deserialize_with = "optional_mass")]
    pub charge_at_least: Option<Mass>,
    /// What is measured, and from how much on a system must be there.
    pub basis: Option<Basis>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub at_least: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_day")]
    pub installed_from: Option<NaiveDate>,
    #[serde(default, deserialize_with = "optional_day")]
    pub installed_to: Option<NaiveDate>,
    /// The alarm's mass: the smaller of the two.
    #[serde(default, deserialize_with = "optional_mass")]
    pub alerts_at: Option<Mass>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub alerts_at_percent: Option<Ratio>,
    pub why: String,
    pub source: String,
}

/// How long records are kept.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Retention {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    pub years: u32,
    /// What is kept so long, from which day on.
    pub what: String,
    pub source: String,
}

/// How a leak check is made, where a text says so.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Practice {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    pub text: String,
    pub source: String,
}

/// Disposals of which the recovered gas is added up by month and kind.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Disposal {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    #[serde(default, deserialize_with = "optional_mass")]
    pub charge_over: Option<Mass>,
    #[serde(default, deserialize_with = "optional_mass")]
    pub charge_below: Option<Mass>,
    pub source: String,
}

/// A release that must be reported.
#[derive(Debug, Clone, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Release {
    #[serde(deserialize_with = "day")]
    pub from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    pub to: Option<NaiveDate>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub kg_over: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub kg_at_least: Option<Ratio>,
    #[serde(default, deserialize_with = "optional_ratio")]
    pub kg_below: Option<Ratio>,
    /// How and by when it is reported.
    pub report: String,
    pub source: String,
}
