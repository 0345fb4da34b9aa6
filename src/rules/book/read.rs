//! How the values of a rulebook's rows are written: days, decimals, masses.

use crate::gas::Weighting;
use crate::quantity::{Mass, MassUnit, Ratio, parse_decimal};
use chrono::NaiveDate;
use serde::{Deserialize, Deserializer};

pub(in crate::rules) fn day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<NaiveDate, D::Error> {
    let text = String::deserialize(deserializer)?;
    text.parse().map_err(|_| serde::de::Error::custom(format!("\u{201c}{text}\u{201d} is not a day such as 2026-01-01")))
}

pub(in crate::rules) fn optional_day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<NaiveDate>, D::Error> {
    day(deserializer).map(Some)
}

pub(in crate::rules) fn optional_month_day<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<(u32, u32)>, D::Error> {
    let text = String::deserialize(deserializer)?;
    let parts = text.split_once('-').and_then(|(month, day)| Some((month.parse().ok()?, day.parse().ok()?)));
    // A leap year, so that 02-29 could be written.
    let known = parts.filter(|&(month, day)| NaiveDate::from_ymd_opt(2024, month, day).is_some());
    known.map(Some).ok_or_else(|| serde::de::Error::custom(format!("\u{201c}{text}\u{201d} is not a month and day such as 03-01")))
}

pub(in crate::rules) fn ratio<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Ratio, D::Error> {
    parse_decimal(&String::deserialize(deserializer)?).map_err(serde::de::Error::custom)
}

pub(in crate::rules) fn optional_ratio<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Ratio>, D::Error> {
    ratio(deserializer).map(Some)
}

pub(in crate::rules) fn optional_mass<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Mass>, D::Error> {
    let text = String::deserialize(deserializer)?;
    let (number, unit) = text.split_once(' ').ok_or_else(|| serde::de::Error::custom("a mass needs a unit, as in 50 lb"))?;
    let unit = MassUnit::from_name(unit).map_err(serde::de::Error::custom)?;
    Mass::parse(number, unit).map(Some).map_err(serde::de::Error::custom)
}

pub(in crate::rules) fn weighting<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Weighting, D::Error> {
    match String::deserialize(deserializer)?.as_str() {
        "us" => Ok(Weighting::UnitedStates),
        "eu" => Ok(Weighting::EuropeanUnion),
        "gb" => Ok(Weighting::GreatBritain),
        other => Err(serde::de::Error::custom(format!("\u{201c}{other}\u{201d} is not a set of weights; known are us, eu, gb"))),
    }
}
