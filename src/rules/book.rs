//! Rulebooks: the rules of one legal text as dated rows, each with its article.
//!
//! The rows are data (`books/*.toml`), so that a threshold has a first and a
//! last day and no constant of the law stands in code.

pub(super) mod read;
mod rows;
mod words;

pub use rows::{Band, Detection, Disposal, DutyRow, Exemption, Extension, Practice, RateRow, Release, Retention, Scope, Season, Trigger};
pub use words::{Basis, CountedFrom, DutyKind, EquipmentTest, GasTest};

use super::ban::{InstallationBan, ServiceBan};
use crate::gas::Weighting;
use chrono::NaiveDate;
use read::weighting;
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
pub trait InForce {
    /// First day, and last day; `None` while in force.
    fn days(&self) -> (NaiveDate, Option<NaiveDate>);

    fn holds_on(&self, day: NaiveDate) -> bool {
        let (from, to) = self.days();
        from <= day && to.is_none_or(|to| day <= to)
    }
}

/// The article of a row, and its days.
pub(super) trait Row: InForce {
    /// What the file calls it.
    const NAME: &'static str;

    fn source(&self) -> &str;
}

macro_rules! rows {
    ($($name:ident $file_name:literal,)*) => {$(
        impl InForce for $name {
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
