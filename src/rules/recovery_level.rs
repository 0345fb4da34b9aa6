//! The level to which refrigerant is recovered, by the law of the day.

use super::book::read::{day, optional_day, optional_mass, optional_ratio};
use crate::gas::{self, Gas};
use crate::ledger::{ApplianceFacts, RecoveryPurpose};
use crate::quantity::{AbsolutePressure, Mass, Ratio};
use chrono::NaiveDate;
use serde::Deserialize;
use std::sync::LazyLock;

/// A level that must be reached, or fallen below.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RecoveryLevel {
    /// As `10 in Hg vacuum`, in the law's own unit.
    pub level: String,
    /// Article, as `40 CFR 82.156, Table 1`.
    pub source: String,
    /// The row of its table, as `high-pressure, 200 lb or more`.
    pub why: String,
}

/// The level that the rulebooks of a site ask of a recovery on `day` from an
/// appliance with these facts; `None` where none asks for one, or the gas's
/// pressure class is not known. A full charge that is not determined is taken
/// as the larger.
pub fn recovery_level(rulebooks: &[String], facts: &ApplianceFacts, purpose: RecoveryPurpose, day: NaiveDate) -> Option<RecoveryLevel> {
    let class = gas::find(&facts.refrigerant).and_then(pressure_class);
    let fits = |row: &&Row| {
        let charge = facts.full_charge;
        row.from <= day
            && row.to.is_none_or(|to| day <= to)
            && row.rulebooks.iter().any(|id| rulebooks.contains(id))
            && row.purposes.contains(&purpose)
            && (!row.labelled_hermetically_sealed || facts.labelled_hermetically_sealed)
            && row.charge_at_most.is_none_or(|most| charge.is_some_and(|charge| charge <= most))
            && row.charge_at_least.is_none_or(|least| charge.is_none_or(|charge| charge >= least))
            && row.class.as_deref().is_none_or(|wanted| class == Some(wanted))
    };
    let row = BOOK.levels.iter().find(fits)?;
    let assumed = if row.charge_at_least.is_some() && facts.full_charge.is_none() { " (full charge not determined)" } else { "" };
    Some(RecoveryLevel { level: row.level.clone(), source: row.source.clone(), why: format!("{}{assumed}", row.why) })
}

/// The pressure class of 40 CFR 82.152, from the liquid's saturation pressure
/// at 104 °F; `None` where that is not known.
pub fn pressure_class(gas: &Gas) -> Option<&'static str> {
    // 104 °F is 40 °C exactly.
    if gas.t_crit().is_some_and(|critical| critical.value < Ratio::from_integer(40)) {
        return BOOK.classes.last().map(|class| class.name.as_str());
    }
    let pressure = gas.bubble_pressure_at_40c()?;
    let within = |class: &&Class| class.psia_at_most.is_none_or(|most| pressure <= AbsolutePressure::from_psia(most));
    BOOK.classes.iter().find(within).map(|class| class.name.as_str())
}

/// The classes from the lowest up; the levels, the first that fits first.
#[derive(Debug, Default, Deserialize)]
#[serde(deny_unknown_fields)]
struct Book {
    #[serde(rename = "class")]
    classes: Vec<Class>,
    #[serde(rename = "level")]
    levels: Vec<Row>,
}

#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct Class {
    name: String,
    /// `None` takes every higher pressure.
    #[serde(default, deserialize_with = "optional_ratio")]
    psia_at_most: Option<Ratio>,
}

#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct Row {
    #[serde(deserialize_with = "day")]
    from: NaiveDate,
    #[serde(default, deserialize_with = "optional_day")]
    to: Option<NaiveDate>,
    rulebooks: Vec<String>,
    purposes: Vec<RecoveryPurpose>,
    #[serde(default)]
    labelled_hermetically_sealed: bool,
    #[serde(default, deserialize_with = "optional_mass")]
    charge_at_most: Option<Mass>,
    #[serde(default, deserialize_with = "optional_mass")]
    charge_at_least: Option<Mass>,
    class: Option<String>,
    level: String,
    source: String,
    why: String,
}

// A book that does not parse fails the tests, not a user: see below.
static BOOK: LazyLock<Book> = LazyLock::new(|| toml::from_str(include_str!("books/recovery-levels.toml")).unwrap_or_default());

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::Category;

    #[test]
    fn the_book_parses_and_every_class_is_known() {
        let book: Book = toml::from_str(include_str!("books/recovery-levels.toml")).unwrap();
        assert_eq!((book.classes.len(), book.levels.len()), (4, 9));
        for row in &book.levels {
            assert!(row.class.as_ref().is_none_or(|class| book.classes.iter().any(|known| known.name == *class)), "{row:?}");
            assert!(row.rulebooks.iter().all(|id| crate::rules::rulebook(id).is_some()), "{row:?}");
            assert!(row.source.chars().any(|c| c.is_ascii_digit()), "{row:?}");
        }
    }

    #[test]
    fn a_charge_that_nobody_knows_is_taken_as_the_larger() {
        let facts = ApplianceFacts::new(Category::ComfortCooling, "R-134a");
        let level = recovery_level(&["us-84c".to_owned()], &facts, RecoveryPurpose::Repair, "2026-03-03".parse().unwrap()).unwrap();
        assert_eq!(level.level, "15 in Hg vacuum");
        assert_eq!(level.why, "medium-pressure, 200 lb or more (full charge not determined)");
    }
}
