//! Every fixed word and sentence on paper, and how days and numbers are written.

use crate::ledger::RateMethod;
use crate::quantity::{Mass, MassUnit, Ratio, rounded_text};
use crate::record::{DutyStep, Finding, Way};
use chrono::{Datelike, NaiveDate};

pub(super) const SERVICE_RECORD: &str = "Service record";
pub(super) const ANNUAL_ACCOUNT: &str = "Annual account";
pub(super) const DUE_LIST: &str = "Due";
pub(super) const TO_COMPLETE: &str = "to complete";
pub(super) const CONTINUED: &str = "continued";
pub(super) const DRAFT: &str = "draft";
pub(super) const DRAFT_BELOW: &str = "visit still open, not signed";
pub(super) const IMPORTED: &str = "imported history";
pub(super) const IMPORTED_BELOW: &str = "read from a file, never signed here";
pub(super) const NET_AS_IMPORTED: &str = "net as imported";
pub(super) const NET_AS_CORRECTED: &str = "net as corrected";
/// A factory charge: the maker's figure, by plate or papers.
pub(super) const NET_FROM_THE_MAKER: &str = "net as the maker states it";
pub(super) const NET_AS_STATED: &str = "net as stated";
pub(super) const UNKNOWN_ERROR: &str = "weighing error unknown";
pub(super) const LEAK_RATE: &str = "Leak rate";
pub(super) const LATEST_LEAK_RATE: &str = "Latest leak rate; no addition of this visit asked for one";
pub(super) const DEMONSTRATION: &str = "Demonstration: people, companies, places and figures are invented.";
pub(super) const OVER_WITHIN_ERROR: &str = "Over trigger by less than the weighing error. The duty stands.";
pub(super) const AT_WITHIN_ERROR: &str = "At trigger; the weighing error reaches to both sides of it.";
pub(super) const UNDER_WITHIN_ERROR: &str = "Under trigger by less than the weighing error.";
pub(super) const BAND_UNKNOWN: &str = "The weighing error of this rate is not known.";
pub(super) const NO_ENTRIES: &str = "Nothing was entered for this appliance.";
pub(super) const NO_CAUTIONS: &str = "None was acknowledged.";
pub(super) const NO_APPLIANCES: &str = "No work on an appliance was entered in this visit.";
pub(super) const NOBODY_PRESENT: &str = "Nobody present to sign.";
pub(super) const REFUSED: &str = "Refused to sign.";
pub(super) const SIGNS_LATER: &str = "Signs later.";
pub(super) const NOT_SIGNED_YET: &str = "Not signed: the visit is still open.";
pub(super) const NEVER_SIGNED: &str = "Not signed: history read from a file.";
pub(super) const NOT_HANDED_OVER: &str = "Not handed over yet.";
pub(super) const LOCAL_CODES: &str = "Where local codes, site rules or the maker\u{2019}s manual ask for more, they come first. This record \
     supports the judgement of licensed people and does not replace it.";
pub(super) const CORRECTIONS: &str = "A closed record is never changed; a mistake is mended by a correction that names it.";
pub(super) const DOES_NOT_BALANCE: &str = "does not balance";
pub(super) const DASH: &str = "\u{2013}";
pub(super) const DOT: &str = "  \u{b7}  ";

const MONTHS: [&str; 12] = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];

/// `3 Mar 2026`: cannot be read the wrong way round in any country.
pub(super) fn day(day: NaiveDate) -> String {
    format!("{} {} {}", day.day(), MONTHS[day.month0() as usize], day.year())
}

/// `3 Mar 2026`, `3\u{2013}5 Mar 2026`, `30 Mar \u{2013} 2 Apr 2026`.
pub(super) fn days(first: NaiveDate, last: NaiveDate) -> String {
    if first == last {
        day(first)
    } else if (first.year(), first.month()) == (last.year(), last.month()) {
        format!("{}\u{2013}{}", first.day(), day(last))
    } else {
        format!("{} \u{2013} {}", day(first), day(last))
    }
}

pub(super) fn page_of(page: usize, count: usize) -> String {
    format!("page {page} of {count}")
}

pub(super) fn copy(number: u32) -> String {
    format!("copy {number}")
}

/// Percent with two decimals, rounded half up here and nowhere else.
pub(super) fn percent(value: Ratio) -> String {
    format!("{} %", rounded_text(value, 2))
}

/// What the figure of a leak rate is a percentage of: one method reckons to a
/// year, the other counts what was added in its window.
pub(super) const fn rate_caption(method: RateMethod) -> &'static str {
    match method {
        RateMethod::Annualizing => "% of full charge a year",
        RateMethod::RollingAverage => "% of full charge in the period",
    }
}

/// A trigger: its decimals only where it has some.
pub(super) fn trigger(value: Ratio) -> String {
    if value.is_integer() { format!("{} %", value.to_integer()) } else { percent(value) }
}

pub(super) const fn finding(finding: Finding) -> &'static str {
    match finding {
        Finding::NotTested => "no leak test",
        Finding::NoLeak => "no leak found",
        Finding::LeaksRepaired => "leaks found, all repaired",
        Finding::LeaksOpen => "open leaks",
    }
}

pub(super) const fn way(way: Way) -> &'static str {
    match way {
        Way::Charge => "Charge",
        Way::Recover => "Recovery",
    }
}

pub(super) const fn step(step: DutyStep) -> &'static str {
    match step {
        DutyStep::Started => "started",
        DutyStep::Met => "met",
        DutyStep::StillOpen => "unchanged",
        DutyStep::Ended => "ended",
    }
}

/// Decimals with which paper shows a mass in this unit.
const fn places(unit: MassUnit) -> u32 {
    match unit {
        MassUnit::Kilogram => 3,
        MassUnit::Gram => 0,
        MassUnit::Pound | MassUnit::PoundOunce => 2,
        MassUnit::Ounce => 1,
    }
}

/// A mass without its unit; the unit stands in the column's head.
pub(super) fn mass(mass: Mass, unit: MassUnit) -> String {
    rounded_text(mass.in_unit(unit), places(unit))
}

/// The unit as it stands in a column's head; pounds-and-ounces are accounted in pounds.
pub(super) const fn unit(unit: MassUnit) -> &'static str {
    match unit {
        MassUnit::Kilogram => "kg",
        MassUnit::Gram => "g",
        MassUnit::Pound | MassUnit::PoundOunce => "lb",
        MassUnit::Ounce => "oz",
    }
}

/// ODP-weighted mass in kg, CO₂ equivalent in t; *not known* where the table lacks a part.
pub(super) fn weighted(value: Option<Ratio>, places: u32) -> String {
    value.map_or_else(|| "not known".to_owned(), |value| rounded_text(value, places))
}

/// First letter large, for headlines.
pub(super) fn headline(word: &str) -> String {
    let mut letters = word.chars();
    letters.next().map_or_else(String::new, |first| first.to_uppercase().chain(letters).collect())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn days_are_written_for_every_country() {
        let on = |text: &str| text.parse::<NaiveDate>().unwrap();
        assert_eq!(day(on("2026-03-03")), "3 Mar 2026");
        assert_eq!(days(on("2026-03-03"), on("2026-03-03")), "3 Mar 2026");
        assert_eq!(days(on("2026-03-03"), on("2026-03-05")), "3\u{2013}5 Mar 2026");
        assert_eq!(days(on("2025-12-30"), on("2026-01-02")), "30 Dec 2025 \u{2013} 2 Jan 2026");
    }

    #[test]
    fn figures_are_rounded_half_up() {
        assert_eq!(percent(Ratio::new(365, 8)), "45.63 %");
        assert_eq!(trigger(Ratio::from_integer(20)), "20 %");
        assert_eq!(weighted(None, 3), "not known");
    }
}
