//! Days, times, masses and shares as the screens write them. Rounding happens
//! here alone, half up, and nothing rounded is compared.

use crate::ledger::{ApplianceFacts, Moment};
use crate::quantity::{Mass, MassUnit, Ratio, decimal_text, rounded_text};
use chrono::{Datelike, NaiveDate};

/// Decimals beyond which a mass from another unit is rounded.
const PLACES: usize = 3;

/// `2 Apr`; with its year where that is another than today's.
pub fn day(day: NaiveDate, today: NaiveDate) -> String {
    let pattern = if day.year() == today.year() { "%-d %b" } else { "%-d %b %Y" };
    day.format(pattern).to_string()
}

/// `2 Apr 2026`.
pub fn full_day(day: NaiveDate) -> String {
    day.format("%-d %b %Y").to_string()
}

/// `09:40`; empty where nobody said.
pub fn clock(minute: Option<u16>) -> String {
    minute.map(|minute| format!("{:02}:{:02}", minute / 60, minute % 60)).unwrap_or_default()
}

/// `today 09:40`, `2 Apr 09:40`.
pub fn moment(at: Moment, today: NaiveDate) -> String {
    let date = if at.date == today { super::words::today() } else { day(at.date, today) };
    [date, clock(at.minute)].into_iter().filter(|part| !part.is_empty()).collect::<Vec<_>>().join(" ")
}

/// The figure of a mass in a unit: exact where that is short, else to the gram or its like.
pub fn mass_figure(mass: Mass, unit: MassUnit) -> String {
    if unit == MassUnit::PoundOunce {
        let ounces = mass.magnitude().in_unit(MassUnit::Ounce);
        let pounds = (ounces / Ratio::from_integer(16)).trunc();
        let sign = if mass.is_negative() { "\u{2212}" } else { "" };
        return format!("{sign}{} lb {}", pounds.to_integer(), short(ounces - pounds * Ratio::from_integer(16)));
    }
    short(mass.in_unit(unit)).replace('-', "\u{2212}")
}

/// The unit after [`mass_figure`].
pub fn unit(unit: MassUnit) -> &'static str {
    if unit == MassUnit::PoundOunce { "oz" } else { unit.name() }
}

/// `4.54 kg`, `10 lb 0.5 oz`.
pub fn mass(mass: Mass, in_unit: MassUnit) -> String {
    format!("{} {}", mass_figure(mass, in_unit), unit(in_unit))
}

fn short(value: Ratio) -> String {
    let exact = decimal_text(value).filter(|text| text.split_once('.').is_none_or(|(_, part)| part.len() <= PLACES));
    exact.unwrap_or_else(|| rounded_text(value, 3))
}

/// `20.28`, for a share in percent.
pub fn percent(share: Ratio) -> String {
    rounded_text(share, 2)
}

/// `8.22`: figures that are looked at, not weighed.
pub fn figure(value: Ratio, places: u32) -> String {
    rounded_text(value, places)
}

/// `20 %`, without trailing zeros.
pub fn trigger(percent: Ratio) -> String {
    format!("{} %", decimal_text(percent).unwrap_or_else(|| rounded_text(percent, 2)))
}

/// The full charge as it was written, or that it is not known.
pub fn full_charge(facts: &ApplianceFacts) -> String {
    match (&facts.full_charge_written, facts.full_charge) {
        (Some(written), Some(_)) => written.text(),
        (None, Some(charge)) => mass(charge, MassUnit::Kilogram),
        (_, None) => super::words::charge_unknown(),
    }
}

/// For drawing and for physics alone.
pub fn float(ratio: Ratio) -> f64 {
    #[allow(clippy::cast_precision_loss)]
    let (numerator, denominator) = (*ratio.numer() as f64, *ratio.denom() as f64);
    numerator / denominator
}

/// `Charge` for `charge`.
pub fn capital(word: &str) -> String {
    let mut letters = word.chars();
    letters.next().map(|first| first.to_uppercase().collect::<String>() + letters.as_str()).unwrap_or_default()
}

/// The parts that are not empty, parted by commas.
pub fn commas<'a>(parts: impl IntoIterator<Item = &'a str>) -> String {
    parts.into_iter().filter(|part| !part.is_empty()).collect::<Vec<_>>().join(", ")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn date(text: &str) -> NaiveDate {
        text.parse().unwrap()
    }

    #[test]
    fn days_leave_out_this_year() {
        assert_eq!(day(date("2026-04-02"), date("2026-12-31")), "2 Apr");
        assert_eq!(day(date("2027-01-01"), date("2026-12-31")), "1 Jan 2027");
        assert_eq!(moment(Moment { date: date("2026-04-02"), minute: Some(580) }, date("2026-04-02")), "today 09:40");
        assert_eq!(moment(Moment { date: date("2026-04-01"), minute: None }, date("2026-04-02")), "1 Apr");
    }

    #[test]
    fn masses_keep_their_unit_and_round_half_up() {
        assert_eq!(mass(Mass::from_lb(10), MassUnit::Pound), "10 lb");
        assert_eq!(mass(Mass::from_lb(10), MassUnit::Kilogram), "4.536 kg");
        let both = Mass::parse("12 4.5", MassUnit::PoundOunce).unwrap();
        assert_eq!(mass(both, MassUnit::PoundOunce), "12 lb 4.5 oz");
        assert_eq!(mass(-Mass::from_kg(1), MassUnit::Kilogram), "\u{2212}1 kg");
    }

    #[test]
    fn shares_have_two_decimals() {
        assert_eq!(percent(Ratio::new(2028, 100)), "20.28");
        assert_eq!(trigger(Ratio::new(20, 1)), "20 %");
        assert_eq!(trigger(Ratio::new(25, 2)), "12.5 %");
    }
}
