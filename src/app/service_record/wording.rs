//! Days, times and masses as a record writes them.

use crate::gas::{self, Weighting};
use crate::ledger::{ApplianceFacts, Entry};
use crate::measure::Uncertainty;
use crate::quantity::{Mass, MassUnit, Ratio, decimal_text, rounded_text};
use chrono::NaiveDate;

/// `3 Mar 2026`.
pub fn day(day: NaiveDate) -> String {
    day.format("%-d %b %Y").to_string()
}

/// A clause as a sentence: `Days are counted.`
pub fn sentence(clause: &str) -> String {
    let mut letters = clause.chars();
    letters.next().map(|first| format!("{}{}.", first.to_uppercase(), letters.as_str())).unwrap_or_default()
}

/// `09:40`; empty where nobody said.
pub fn clock(minute: Option<u16>) -> String {
    minute.map(|minute| format!("{:02}:{:02}", minute / 60, minute % 60)).unwrap_or_default()
}

/// `3 Mar 2026, 09:40`.
pub fn at(date: NaiveDate, minute: Option<u16>) -> String {
    match clock(minute) {
        time if time.is_empty() => day(date),
        time => format!("{}, {time}", day(date)),
    }
}

/// `charge of 3 Mar 2026, 09:40`.
pub fn entry_name(entry: &Entry) -> String {
    format!("{} of {}", entry.line.act.name(), at(entry.line.at.date, entry.line.at.minute))
}

/// The unit in which an entry was weighed.
pub fn unit_of(entry: &Entry) -> MassUnit {
    let reading = entry.detail.reading.as_ref();
    let written = reading.and_then(|reading| reading.after.as_ref().or(reading.net.as_ref()));
    written.map_or(MassUnit::Kilogram, |written| written.unit)
}

/// Decimals beyond which a mass from another unit is rounded on paper.
const PLACES: u32 = 4;

/// A mass in a unit: exact where that is short, else rounded half up.
pub fn mass(mass: Mass, unit: MassUnit) -> String {
    if unit == MassUnit::PoundOunce {
        let ounces = mass.in_unit(MassUnit::Ounce);
        let pounds = (ounces / Ratio::from_integer(16)).trunc();
        return format!("{} lb {} oz", pounds.to_integer(), short(ounces - pounds * Ratio::from_integer(16)));
    }
    format!("{} {unit}", short(mass.in_unit(unit)))
}

/// The weighing error (k = 2) of a net in its own unit, as `± 0.008 kg`.
pub fn error(division: Mass, hoses: Mass, unit: MassUnit) -> String {
    let (unit, places) = match unit {
        MassUnit::Kilogram => (unit, 3),
        MassUnit::Gram => (unit, 1),
        MassUnit::Pound => (unit, 2),
        MassUnit::PoundOunce | MassUnit::Ounce => (MassUnit::Ounce, 1),
    };
    // Per 10⁻¹⁴ kg.
    let factor = Mass::from_units(1).in_unit(unit);
    format!("\u{b1} {} {unit}", Uncertainty::of_net(division, hoses).expanded_text(factor, places))
}

fn short(value: Ratio) -> String {
    let exact = decimal_text(value).filter(|text| text.split_once('.').is_none_or(|(_, part)| part.len() <= PLACES as usize));
    exact.unwrap_or_else(|| rounded_text(value, 3))
}

/// The full charge as written; empty: not determined.
pub fn full_charge(facts: &ApplianceFacts) -> String {
    match (&facts.full_charge_written, facts.full_charge) {
        (Some(written), Some(_)) => written.text(),
        (None, Some(charge)) => mass(charge, MassUnit::Kilogram),
        (_, None) => String::new(),
    }
}

/// `class A1, ODP 0.055, GWP 1810 (40 CFR 84.64, else IPCC AR4)`, by the
/// site's own tables; empty for a gas that the catalogue does not know.
pub fn gas_facts(refrigerant: &str, weights: Weighting) -> String {
    let Some(gas) = gas::find(refrigerant) else { return String::new() };
    let class = gas.safety_class().map(|class| format!("class {}", class.name()));
    let odp = decimal_text(gas.odp()).map(|odp| format!("ODP {odp}"));
    let gwp = gas.weight(weights).and_then(decimal_text).map(|gwp| format!("GWP {gwp} ({})", weights.name()));
    [class, odp, gwp].into_iter().flatten().collect::<Vec<_>>().join(", ")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn masses_keep_their_unit() {
        let ten_pounds = Mass::from_lb(10);
        assert_eq!(mass(ten_pounds, MassUnit::Pound), "10 lb");
        assert_eq!(mass(ten_pounds, MassUnit::Kilogram), "4.536 kg");
        assert_eq!(mass(Mass::parse("12 4.5", MassUnit::PoundOunce).unwrap(), MassUnit::PoundOunce), "12 lb 4.5 oz");
        assert_eq!(mass(Mass::parse("4.54", MassUnit::Kilogram).unwrap(), MassUnit::Kilogram), "4.54 kg");
    }

    #[test]
    fn errors_speak_in_the_unit_of_the_weighing() {
        let (tenth, none) = (Mass::parse("0.1", MassUnit::Pound).unwrap(), Mass::ZERO);
        assert_eq!(error(tenth, none, MassUnit::Pound), "\u{b1} 0.08 lb");
        assert_eq!(error(tenth, none, MassUnit::Kilogram), "\u{b1} 0.037 kg");
        assert_eq!(error(tenth, none, MassUnit::PoundOunce), "\u{b1} 1.3 oz");
    }

    #[test]
    fn days_and_times_read_plainly() {
        let date = "2026-03-03".parse().unwrap();
        assert_eq!(at(date, Some(580)), "3 Mar 2026, 09:40");
        assert_eq!(at(date, None), "3 Mar 2026");
    }
}
