//! Masses as exact integers.

use super::{NotADecimal, Ratio, decimal_text, parse_decimal};
use serde::{Deserialize, Serialize};
use std::fmt;
use std::iter::Sum;
use std::ops::{Add, AddAssign, Neg, Sub, SubAssign};

/// A mass, counted in 10⁻¹⁴ kg.
///
/// The step is the coarsest in which every scale reading in kg, in pounds to
/// six decimals (1 lb = 0.453 592 37 kg, the international avoirdupois pound)
/// and in ounces to 0.01 is a whole number. A reading stays below
/// [`Mass::MOST`]; sums are 128 bits wide and cannot reach their end.
#[derive(Clone, Copy, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Mass(i128);

const UNITS_PER_KG: i128 = 100_000_000_000_000;
const UNITS_PER_LB: i128 = 45_359_237_000_000;
/// [`Mass::MOST`] in grams, the smallest unit.
const MOST_IN_ANY_UNIT: i128 = 90_000_000;

/// Units in which masses are weighed and written.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum MassUnit {
    #[serde(rename = "kg")]
    Kilogram,
    #[serde(rename = "g")]
    Gram,
    #[serde(rename = "lb")]
    Pound,
    #[serde(rename = "oz")]
    Ounce,
    /// Pounds and ounces, written `12 4.5`.
    #[serde(rename = "lb-oz")]
    PoundOunce,
}

/// A reading as it was typed, and what it comes to.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Weighing {
    /// The digits as typed.
    pub typed: String,
    pub unit: MassUnit,
}

#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum MassError {
    #[error(transparent)]
    NotANumber(#[from] NotADecimal),
    #[error("\u{201c}{text}\u{201d} {unit} is finer than this program can keep; write at most {places} decimals")]
    TooFine { text: String, unit: MassUnit, places: u32 },
    #[error("\u{201c}{text}\u{201d} {unit} is over the largest mass this program takes, 90 t")]
    TooLarge { text: String, unit: MassUnit },
    #[error("\u{201c}{0}\u{201d} is not pounds and ounces such as 12 4.5, with less than 16 ounces")]
    NotPoundsAndOunces(String),
    #[error("\u{201c}{0}\u{201d} is not a unit; known are kg, g, lb, oz and lb-oz")]
    UnknownUnit(String),
}

impl MassUnit {
    pub const ALL: [Self; 5] = [Self::Kilogram, Self::Gram, Self::Pound, Self::Ounce, Self::PoundOunce];

    /// The unit's name as written in files and on screen.
    pub fn name(self) -> &'static str {
        match self {
            Self::Kilogram => "kg",
            Self::Gram => "g",
            Self::Pound => "lb",
            Self::Ounce => "oz",
            Self::PoundOunce => "lb-oz",
        }
    }

    /// # Errors
    /// [`MassError::UnknownUnit`] names the units there are.
    pub fn from_name(name: &str) -> Result<Self, MassError> {
        Self::ALL.into_iter().find(|unit| unit.name() == name).ok_or_else(|| MassError::UnknownUnit(name.to_owned()))
    }

    fn units(self) -> Ratio {
        match self {
            Self::Kilogram => Ratio::from_integer(UNITS_PER_KG),
            Self::Gram => Ratio::from_integer(UNITS_PER_KG / 1000),
            Self::Pound | Self::PoundOunce => Ratio::from_integer(UNITS_PER_LB),
            Self::Ounce => Ratio::new(UNITS_PER_LB, 16),
        }
    }

    /// Decimals that are always exact in this unit.
    fn exact_places(self) -> u32 {
        match self {
            Self::Kilogram => 14,
            Self::Gram => 11,
            Self::Pound => 6,
            Self::Ounce | Self::PoundOunce => 2,
        }
    }
}

impl fmt::Display for MassUnit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

impl Mass {
    pub const ZERO: Self = Self(0);
    /// The named bound of one reading: 90 t. It fits 64 bits in the store.
    pub const MOST: Self = Self(90_000 * UNITS_PER_KG);

    /// `units` of 10⁻¹⁴ kg.
    pub const fn from_units(units: i128) -> Self {
        Self(units)
    }

    pub const fn units(self) -> i128 {
        self.0
    }

    /// For the store: 64 bits hold every mass up to [`Mass::MOST`] and a little more.
    pub fn to_i64(self) -> Option<i64> {
        i64::try_from(self.0).ok()
    }

    pub const fn from_i64(units: i64) -> Self {
        Self(units as i128)
    }

    pub const fn from_kg(kg: i64) -> Self {
        Self(kg as i128 * UNITS_PER_KG)
    }

    pub const fn from_lb(lb: i64) -> Self {
        Self(lb as i128 * UNITS_PER_LB)
    }

    /// Reads a mass as typed. May be negative (a zeroed scale runs below zero).
    ///
    /// # Errors
    /// Not a number, finer than the unit's exact decimals, or over [`Mass::MOST`].
    pub fn parse(text: &str, unit: MassUnit) -> Result<Self, MassError> {
        if unit == MassUnit::PoundOunce {
            return Self::parse_pounds_and_ounces(text);
        }
        let value = parse_decimal(text)?;
        // Before multiplying: thirty digits times the unit would leave the 128 bits.
        if value.numer().abs() / value.denom() > MOST_IN_ANY_UNIT {
            return Err(MassError::TooLarge { text: text.to_owned(), unit });
        }
        if *value.denom() > UNITS_PER_KG {
            return Err(MassError::TooFine { text: text.to_owned(), unit, places: unit.exact_places() });
        }
        let exact = value * unit.units();
        if !exact.is_integer() {
            return Err(MassError::TooFine { text: text.to_owned(), unit, places: unit.exact_places() });
        }
        let mass = Self(exact.to_integer());
        if mass.magnitude() > Self::MOST {
            return Err(MassError::TooLarge { text: text.to_owned(), unit });
        }
        Ok(mass)
    }

    fn parse_pounds_and_ounces(text: &str) -> Result<Self, MassError> {
        let refuse = || MassError::NotPoundsAndOunces(text.to_owned());
        let trimmed = text.trim();
        let (negative, digits) = match trimmed.strip_prefix(['-', '\u{2212}']) {
            Some(rest) => (true, rest.trim_start()),
            None => (false, trimmed),
        };
        let mut parts = digits.split_whitespace();
        let pounds = parts.next().ok_or_else(refuse)?;
        let ounces = parts.next().unwrap_or("0");
        let whole = |s: &str| s.bytes().all(|b| b.is_ascii_digit());
        if parts.next().is_some() || !whole(pounds) || ounces.starts_with('-') {
            return Err(refuse());
        }
        if parse_decimal(ounces).map_err(|_| refuse())? >= Ratio::from_integer(16) {
            return Err(refuse());
        }
        let sum = Self::parse(pounds, MassUnit::Pound)? + Self::parse(ounces, MassUnit::Ounce)?;
        if sum > Self::MOST {
            return Err(MassError::TooLarge { text: text.to_owned(), unit: MassUnit::PoundOunce });
        }
        Ok(if negative { -sum } else { sum })
    }

    pub fn is_positive(self) -> bool {
        self.0 > 0
    }

    pub fn is_negative(self) -> bool {
        self.0 < 0
    }

    pub fn is_zero(self) -> bool {
        self.0 == 0
    }

    pub fn magnitude(self) -> Self {
        Self(self.0.abs())
    }

    /// This mass in kilograms, exactly.
    pub fn kg(self) -> Ratio {
        Ratio::new(self.0, UNITS_PER_KG)
    }

    /// This mass in `unit` (pounds for pounds-and-ounces), exactly.
    pub fn in_unit(self, unit: MassUnit) -> Ratio {
        Ratio::from_integer(self.0) / unit.units()
    }

    /// The exact decimal in kilograms, without trailing zeros.
    pub fn kg_text(self) -> String {
        // A power of ten always divides out; the fallback is unreachable.
        decimal_text(self.kg()).unwrap_or_default()
    }

    /// The largest mass, in whole steps of `step`, that is not over this one.
    /// Limits are rounded down, to the safe side.
    pub fn floor_to(self, step: Self) -> Self {
        Self(self.0.div_euclid(step.0) * step.0)
    }
}

impl fmt::Debug for Mass {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{} kg", self.kg_text())
    }
}

impl Add for Mass {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self(self.0 + other.0)
    }
}

impl AddAssign for Mass {
    fn add_assign(&mut self, other: Self) {
        self.0 += other.0;
    }
}

impl Sub for Mass {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        Self(self.0 - other.0)
    }
}

impl SubAssign for Mass {
    fn sub_assign(&mut self, other: Self) {
        self.0 -= other.0;
    }
}

impl Neg for Mass {
    type Output = Self;
    fn neg(self) -> Self {
        Self(-self.0)
    }
}

impl Sum for Mass {
    fn sum<I: Iterator<Item = Self>>(masses: I) -> Self {
        masses.fold(Self::ZERO, Add::add)
    }
}

/// Files carry a mass as its exact decimal in kilograms.
impl Serialize for Mass {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(&self.kg_text())
    }
}

impl<'de> Deserialize<'de> for Mass {
    fn deserialize<D: serde::Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let text = String::deserialize(deserializer)?;
        Self::parse(&text, MassUnit::Kilogram).map_err(serde::de::Error::custom)
    }
}

impl Weighing {
    pub fn new(typed: impl Into<String>, unit: MassUnit) -> Self {
        Self { typed: typed.into(), unit }
    }

    /// # Errors
    /// As [`Mass::parse`].
    pub fn mass(&self) -> Result<Mass, MassError> {
        Mass::parse(&self.typed, self.unit)
    }

    /// One step of the last digit typed: the finest division the scale can
    /// have shown. For pounds and ounces, of the ounces.
    pub fn last_digit(&self) -> Mass {
        let places = self.typed.split_once(['.', ',']).map_or(0, |(_, part)| part.trim_end().len());
        let unit = if self.unit == MassUnit::PoundOunce { MassUnit::Ounce } else { self.unit };
        let step = unit.units() / Ratio::from_integer(10_i128.pow(u32::try_from(places).unwrap_or(14).min(14)));
        Mass(step.to_integer())
    }

    /// The digits and the unit: `4.54 kg`, `12 lb 4.5 oz`.
    pub fn text(&self) -> String {
        match (self.unit, self.typed.trim().split_once(' ')) {
            (MassUnit::PoundOunce, Some((pounds, ounces))) => format!("{pounds} lb {} oz", ounces.trim()),
            (MassUnit::PoundOunce, None) => format!("{} lb", self.typed.trim()),
            _ => format!("{} {}", self.typed.trim(), self.unit),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_exact() {
        assert_eq!(Mass::parse("1", MassUnit::Pound).unwrap().kg_text(), "0.45359237");
        assert_eq!(Mass::parse("0.000001", MassUnit::Pound).unwrap().units(), 45_359_237);
        assert_eq!(Mass::parse("0.01", MassUnit::Ounce).unwrap().units(), 28_349_523_125);
        assert_eq!(Mass::parse("10", MassUnit::Pound).unwrap().kg_text(), "4.5359237");
        assert_eq!(Mass::parse("12 4.5", MassUnit::PoundOunce).unwrap(), Mass::parse("196.5", MassUnit::Ounce).unwrap());
    }

    #[test]
    fn readings_out_of_bounds_are_refused() {
        assert!(matches!(Mass::parse("90001", MassUnit::Kilogram), Err(MassError::TooLarge { .. })));
        assert!(matches!(Mass::parse("0.001", MassUnit::Ounce), Err(MassError::TooFine { .. })));
        assert!(matches!(Mass::parse("12 16", MassUnit::PoundOunce), Err(MassError::NotPoundsAndOunces(_))));
        assert!(matches!(Mass::parse("12.5 1", MassUnit::PoundOunce), Err(MassError::NotPoundsAndOunces(_))));
    }

    #[test]
    fn thirty_digits_are_refused_in_every_unit() {
        for unit in MassUnit::ALL {
            for text in ["999999999999999999999999999999", "0.999999999999999999999999999999", "99999999999999.9999999999999999"] {
                assert!(Mass::parse(text, unit).is_err(), "{text} {unit}");
            }
        }
    }

    #[test]
    fn the_last_digit_gives_the_division() {
        assert_eq!(Weighing::new("10.0", MassUnit::Pound).last_digit(), Mass::parse("0.1", MassUnit::Pound).unwrap());
        assert_eq!(Weighing::new("12 4.5", MassUnit::PoundOunce).last_digit(), Mass::parse("0.1", MassUnit::Ounce).unwrap());
        assert_eq!(Weighing::new("24", MassUnit::Kilogram).last_digit(), Mass::from_kg(1));
    }

    #[test]
    fn sixty_four_bits_hold_the_bound() {
        assert_eq!(Mass::MOST.to_i64(), Some(9_000_000_000_000_000_000));
    }

    #[test]
    fn limits_round_down() {
        let step = Mass::parse("0.1", MassUnit::Kilogram).unwrap();
        assert_eq!(Mass::parse("40.46", MassUnit::Kilogram).unwrap().floor_to(step).kg_text(), "40.4");
    }
}
