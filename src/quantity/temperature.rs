//! Temperatures and their differences.

use super::Ratio;
use super::written::{Kind, QuantityError};

/// A temperature, in kelvin, exactly.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Temperature(Ratio);

/// A difference of temperatures, in kelvin, exactly.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct TemperatureStep(Ratio);

/// 0 °C in kelvin.
const ZERO_C: Ratio = Ratio::new_raw(27_315, 100);
/// Hotter than any plant this program knows.
const MOST_K: Ratio = Ratio::new_raw(2000, 1);

const TEMPERATURE: Kind = Kind { name: "a temperature", example: "25C or 77F", known: "C, F, K" };
const STEP: Kind = Kind { name: "a difference of temperature", example: "2K", known: "K, C, F" };

impl Temperature {
    /// Reads `25C`, `77F`, `298.15K`.
    ///
    /// # Errors
    /// No number, an unknown unit, below absolute zero or above 2000 K.
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        let (number, unit) = TEMPERATURE.split(text)?;
        let kelvin = match unit.trim_start_matches('°') {
            "C" | "c" => number + ZERO_C,
            "F" | "f" => (number - Ratio::from_integer(32)) * Ratio::new(5, 9) + ZERO_C,
            "K" | "k" => number,
            _ => return Err(TEMPERATURE.unknown_unit(text, unit)),
        };
        if kelvin <= Ratio::from_integer(0) || kelvin > MOST_K {
            return Err(QuantityError::OutOfRange {
                text: text.to_owned(),
                bound: "temperatures lie above absolute zero and below 2000 K",
            });
        }
        Ok(Self(kelvin))
    }

    pub fn from_celsius(celsius: Ratio) -> Self {
        Self(celsius + ZERO_C)
    }

    pub fn kelvin(self) -> Ratio {
        self.0
    }

    pub fn celsius(self) -> Ratio {
        self.0 - ZERO_C
    }
}

impl TemperatureStep {
    /// Reads `2K`, `2C`, `3.6F`.
    ///
    /// # Errors
    /// No number, an unknown unit, negative or over 2000 K.
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        let (number, unit) = STEP.split(text)?;
        let kelvin = match unit.trim_start_matches('°') {
            "K" | "k" | "C" | "c" => number,
            "F" | "f" => number * Ratio::new(5, 9),
            _ => return Err(STEP.unknown_unit(text, unit)),
        };
        if kelvin < Ratio::from_integer(0) || kelvin > MOST_K {
            return Err(STEP.not_readable(text));
        }
        Ok(Self(kelvin))
    }

    pub fn from_kelvin(kelvin: Ratio) -> Self {
        Self(kelvin)
    }

    pub fn kelvin(self) -> Ratio {
        self.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scales_meet() {
        let read = |text: &str| Temperature::from_written(text).unwrap();
        assert_eq!(read("77F"), read("25C"));
        assert_eq!(read("298.15K"), read("25 °C"));
        assert_eq!(read("-40C"), read("-40F"));
        assert_eq!(TemperatureStep::from_written("3.6F").unwrap(), TemperatureStep::from_written("2K").unwrap());
    }

    #[test]
    fn impossible_temperatures_are_refused() {
        for text in ["25", "-300C", "25X", "", "0K", "3000K"] {
            assert!(Temperature::from_written(text).is_err(), "{text:?}");
        }
        assert!(TemperatureStep::from_written("-2K").is_err());
    }
}
