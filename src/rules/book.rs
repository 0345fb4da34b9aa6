//! Rulebooks: the rules of one legal text as dated rows, each with its article.
//!
//! The rows are data (`books/*.toml`), so that a threshold has a first and a
//! last day and no constant of the law stands in code.

pub(super) mod read;

use super::ban::{InstallationBan, ServiceBan};
use crate::gas::Weighting;
use crate::ledger::{Category, Equipment};
use crate::quantity::{Mass, Ratio};
use chrono::NaiveDate;
use read::{day, optional_day, optional_mass, optional_month_day, optional_ratio, ratio, weighting};
use serde::Deserialize;
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
    /// How far the text itself was read; empty when read in full.
    #[serde(default)]
    pub confidence: String,
    /// Which edition of the book this is: the program's version, or the
    /// fingerprint of a company's own file.
    #[serde(skip)]
    pub version: String,
    #[serde(default, rename = "retention")]
    pub retentions: Vec<Retention>,
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
    /// Leakage detection systems that must be there, and what they must notice.
    #[serde(default, rename = "detection")]
    pub detections: Vec<Detection>,
    /// Gas that may not be used to service what.
    #[serde(default, rename = "service_ban")]
    pub service_bans: Vec<ServiceBan>,
    /// Gas with which what may not be put into operation.
    #[serde(default, rename = "installation_ban")]
    pub installation_bans: Vec<InstallationBan>,
    /// Disposals whose recovered gas is added up by month.
    #[serde(default, rename = "disposal")]
    pub disposals: Vec<Disposal>,
    /// Releases that must be reported.
    #[serde(default, rename = "release")]
    pub releases: Vec<Release>,
    /// How a leak check is made.
    #[serde(default, rename = "practice")]
    pub practices: Vec<Practice>,
}

/// A row of the law: it holds from its first to its last day.
pub trait Dated {
    /// First day, and last day; `None` while in force.
    fn days(&self) -> (NaiveDate, Option<NaiveDate>);

    fn holds_on(&self, day: NaiveDate) -> bool {
        let (from, to) = self.days();
        from <= day && to.is_none_or(|to| day <= to)
    }
}

/// The article of a row, and its days.
pub(super) trait Row: Dated {
    /// What the file calls it.
    const NAME: &'static str;

    fn source(&self) -> &str;
}

macro_rules! rows {
    ($($name:ident $file_name:literal,)*) => {$(
        impl Dated for $name {
            fn days(&self) -> (NaiveDate, Option<NaiveDate>) {
                (self.from, self.to)
            }
        }

        impl Row for $name {
            const NAME: &'static str = $file_name;

            fn source(&self) -> &str {
                &self.source
            }
        }
    )*};
}

rows! {
    Retention "retention",
    RateRow "rate",
    Season "season",
    Scope "scope",
    Trigger "trigger",
    Band "band",
    Exemption "exemption",
    DutyRow "duty",
    Detection "detection",
    ServiceBan "service_ban",
    InstallationBan "installation_ban",
    Disposal "disposal",
    Release "release",
    Practice "practice",
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

/// Which gases a scope row takes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize)]
pub enum GasTest {
    /// Every gas of the catalogue.
    #[serde(rename = "any")]
    Any,
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
        .map(|book| Rulebook { version: env!("CARGO_PKG_VERSION").to_owned(), ..book })
        .collect()
    });
    &BOOKS
}

/// Months within which a seasonal removal and its return must lie, by the law
/// of the day of the return; before the first row by that row.
pub fn season_months(day: NaiveDate) -> Option<u32> {
    let mut rows = built_in().iter().flat_map(|book| &book.seasons);
    rows.clone().find(|row| row.holds_on(day)).or_else(|| rows.next()).map(|row| row.months)
}

impl Rulebook {
    /// How rates are calculated on a day; `None` where the text has no leak rate then.
    pub fn rate_row(&self, day: NaiveDate) -> Option<&RateRow> {
        self.rates.iter().find(|row| row.holds_on(day))
    }

    /// How long records are kept by the law of a day.
    pub fn retention(&self, day: NaiveDate) -> Option<&Retention> {
        self.retentions.iter().find(|row| row.holds_on(day))
    }

    /// The first day on which any of its rules held.
    pub fn begins(&self) -> Option<NaiveDate> {
        self.scopes.iter().map(|row| row.from).min()
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

    /// Also that no row ends before it begins, and all else that is asked of a company's own book.
    #[test]
    fn every_built_in_book_is_sound() {
        for book in built_in() {
            let faults = super::super::own::faults(book);
            assert!(faults.is_empty(), "{}: {faults:?}", book.id);
        }
    }
}
