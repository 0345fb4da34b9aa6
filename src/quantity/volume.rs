//! Volumes.

use super::written::{Kind, QuantityError};
use super::{Mass, Ratio};

/// A volume, in litres, exactly. Never negative.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Volume(Ratio);

/// Larger than any room this program knows.
const MOST_LITRES: Ratio = Ratio::new_raw(1_000_000_000_000, 1);

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

    /// `None` for a volume not above zero.
    pub fn from_litres(litres: Ratio) -> Option<Self> {
        (litres > Ratio::from_integer(0)).then_some(Self(litres))
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
}
