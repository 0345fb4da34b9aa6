//! Volumes.

use super::written::{Kind, QuantityError};
use super::{Mass, Ratio};

/// A volume, in litres, exactly. Never negative.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Volume(Ratio);

/// Larger than any room this program knows.
const MOST_LITRES: Ratio = Ratio::new_raw(1_000_000_000_000, 1);
/// Fifteen decimals: what a scale weighs of water has fourteen. Finer steps
/// could leave the 128 bits when they are multiplied.
const FINEST: i128 = 1_000_000_000_000_000;
const BOUND: &str = "volumes are above zero and go to 1000000000 m\u{b3}, with up to 15 digits";

const VOLUME: Kind = Kind { name: "a volume", example: "26.2l or 40m3", known: "l, ml, m3, ft3" };

impl Volume {
    /// Reads `26.2l`, `40m3`, `500ml`, `30ft3`.
    ///
    /// # Errors
    /// No number, an unknown unit, not above zero, or over a thousand million cubic metres.
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        let (number, unit) = VOLUME.split(text)?;
        let litres = match unit {
            "l" | "L" | "dm3" => number,
            "ml" | "mL" | "cm3" => number / 1000,
            "m3" | "m³" => number * 1000,
            // (0.3048 m)³
            "ft3" | "cuft" => number * Ratio::new(28_316_846_592, 1_000_000_000),
            _ => return Err(VOLUME.unknown_unit(text, unit)),
        };
        if litres <= Ratio::from_integer(0) || litres > MOST_LITRES {
            return Err(VOLUME.not_readable(text));
        }
        Ok(Self(litres))
    }

    /// Reads litres as a number alone, as in a column that names the unit.
    ///
    /// # Errors
    /// No number, more than 15 digits, not above zero, or over a thousand million cubic metres.
    pub fn from_litres_text(text: &str) -> Result<Self, QuantityError> {
        let not = || QuantityError::NotInUnit { text: text.to_owned(), kind: VOLUME.name, unit: "litres", example: "26.2", bound: BOUND };
        Kind::bare(text).and_then(Self::from_litres).ok_or_else(not)
    }

    /// Reads cubic metres, likewise.
    ///
    /// # Errors
    /// As [`Volume::from_litres_text`].
    pub fn from_cubic_metres_text(text: &str) -> Result<Self, QuantityError> {
        let not =
            || QuantityError::NotInUnit { text: text.to_owned(), kind: VOLUME.name, unit: "cubic metres", example: "40", bound: BOUND };
        Kind::bare(text).and_then(|cubic_metres| Self::from_litres(cubic_metres * 1000)).ok_or_else(not)
    }

    /// `None` for a volume not above zero, over a thousand million cubic
    /// metres, or finer than this program works with.
    pub fn from_litres(litres: Ratio) -> Option<Self> {
        let bounded = litres > Ratio::from_integer(0) && litres <= MOST_LITRES && *litres.denom() <= FINEST;
        bounded.then_some(Self(litres))
    }

    /// Volume of a mass of water, 1 kg = 1 l, as water capacities are stamped.
    pub fn of_water(mass: Mass) -> Option<Self> {
        Self::from_litres(mass.kg())
    }

    pub fn litres(self) -> Ratio {
        self.0
    }

    pub fn cubic_metres(self) -> Ratio {
        self.0 / 1000
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn volumes_carry_their_unit() {
        let read = |text: &str| Volume::from_written(text).unwrap();
        assert_eq!(read("40m3").litres(), Ratio::from_integer(40_000));
        assert_eq!(read("26,2 l"), Volume::of_water(Mass::from_written("26.2kg").unwrap()).unwrap());
        assert_eq!(read("1000ml"), read("1L"));
        for text in ["0l", "-1l", "26.2", "26.2x", "l"] {
            assert!(Volume::from_written(text).is_err(), "{text:?}");
        }
    }

    #[test]
    fn volumes_in_a_known_unit_are_bounded() {
        assert_eq!(Volume::from_litres_text("26,2").unwrap(), Volume::from_written("26.2l").unwrap());
        assert_eq!(Volume::from_cubic_metres_text("40").unwrap(), Volume::from_written("40m3").unwrap());
        for text in ["0", "-1", "26.2l", "", "1000000000000001", "0.1234567890123456", "999999999999999999999999999999"] {
            assert!(Volume::from_litres_text(text).is_err(), "{text:?}");
        }
        // A thousand million cubic metres are the most there is.
        assert!(Volume::from_cubic_metres_text("1000000000").is_ok() && Volume::from_cubic_metres_text("1000000000.1").is_err());
        // Water weighed in pounds to six decimals has fourteen in kilograms.
        assert!(Volume::of_water(Mass::from_written("47.700001lb").unwrap()).is_some());
    }
}
