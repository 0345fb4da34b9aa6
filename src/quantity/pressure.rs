//! Pressures. Gauge and absolute are different types: nothing converts one to the other by accident.

use super::Ratio;
use super::written::{Kind, QuantityError};

/// Pressure against vacuum, in pascal, exactly.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct AbsolutePressure(Ratio);

/// Pressure against the air around, in pascal, exactly.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct GaugePressure(Ratio);

/// A difference of pressures, or a gauge's division, in pascal, exactly.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct PressureStep(Ratio);

/// A pressure as written, which says what it is against.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum WrittenPressure {
    Gauge(GaugePressure),
    Absolute(AbsolutePressure),
}

/// Standard atmosphere, Pa. Real air pressure differs by a few per cent with weather and by a tenth per kilometre of height.
const ATMOSPHERE: Ratio = Ratio::new_raw(101_325, 1);

/// 1 lbf/in² = 0.453 592 37 kg × 9.806 65 m/s² / (0.0254 m)², in Pa.
const PSI: Ratio = Ratio::new_raw(8_896_443_230_521, 1_290_320_000);

/// A thousandth of a millimetre of mercury by convention, 0.133 322 387 415 Pa.
const MICRON: Ratio = Ratio::new_raw(26_664_477_483, 200_000_000_000);

/// Above any pressure of the trade.
const MOST_PA: Ratio = Ratio::new_raw(1_000_000_000, 1);
const BOUND: &str = "pressures go to 10000 bar";

const PRESSURE: Kind =
    Kind { name: "a pressure", example: "25barg, 26bara, 150psig or 500micron", known: "bar, mbar, kPa, MPa, Pa, psi, micron, torr" };
const STEP: Kind = Kind { name: "a difference of pressure", example: "0.1bar or 1psi", known: "bar, mbar, kPa, MPa, Pa, psi" };

fn unit(name: &str) -> Option<Ratio> {
    Some(match name {
        "bar" => Ratio::from_integer(100_000),
        "mbar" | "hPa" => Ratio::from_integer(100),
        "MPa" => Ratio::from_integer(1_000_000),
        "kPa" => Ratio::from_integer(1_000),
        "Pa" => Ratio::from_integer(1),
        "psi" => PSI,
        "micron" | "microns" => MICRON,
        "torr" | "Torr" => MICRON * 1000,
        _ => return None,
    })
}

fn bounded(text: &str, pascal: Ratio) -> Result<Ratio, QuantityError> {
    if pascal > MOST_PA || pascal < -MOST_PA {
        return Err(QuantityError::OutOfRange { text: text.to_owned(), bound: BOUND });
    }
    Ok(pascal)
}

impl WrittenPressure {
    /// Reads `25barg`, `26bara`, `150psig`, `164.7psia`, `2500kPag`; vacuum, always absolute: `500micron`, `67Pa`.
    ///
    /// # Errors
    /// No number, an unknown unit, neither gauge nor absolute, below vacuum, or over 10 000 bar.
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        let (number, name) = PRESSURE.split(text)?;
        // A bare unit of vacuum is absolute; `Pag` and `Paa` are understood too.
        let (name, gauge) = match name {
            "micron" | "microns" | "torr" | "Torr" | "Pa" | "mbar" | "hPa" => (name, false),
            _ => match (name.strip_suffix('g'), name.strip_suffix('a').filter(|rest| unit(rest).is_some())) {
                (Some(rest), _) => (rest, true),
                (_, Some(rest)) => (rest, false),
                _ if unit(name).is_some() => return Err(QuantityError::GaugeOrAbsolute { text: text.trim().to_owned() }),
                _ => return Err(PRESSURE.unknown_unit(text, name)),
            },
        };
        let pascal = bounded(text, number * unit(name).ok_or_else(|| PRESSURE.unknown_unit(text, name))?)?;
        let written = if gauge { Self::Gauge(GaugePressure(pascal)) } else { Self::Absolute(AbsolutePressure(pascal)) };
        if written.absolute().0 < Ratio::from_integer(0) {
            return Err(QuantityError::OutOfRange { text: text.to_owned(), bound: "nothing is below vacuum" });
        }
        Ok(written)
    }

    /// Against vacuum, at the standard atmosphere of 1.01325 bar.
    pub fn absolute(self) -> AbsolutePressure {
        match self {
            Self::Gauge(gauge) => gauge.absolute(),
            Self::Absolute(absolute) => absolute,
        }
    }

    /// Against the standard atmosphere of 1.01325 bar.
    pub fn gauge(self) -> GaugePressure {
        match self {
            Self::Gauge(gauge) => gauge,
            Self::Absolute(absolute) => absolute.gauge(),
        }
    }
}

impl AbsolutePressure {
    /// Pounds-force per square inch against vacuum, as the law writes `45 psia`.
    pub fn from_psia(psia: Ratio) -> Self {
        Self(psia * PSI)
    }

    pub fn from_pascal(pascal: Ratio) -> Self {
        Self(pascal)
    }

    pub fn pascal(self) -> Ratio {
        self.0
    }

    pub fn bar(self) -> Ratio {
        self.0 / 100_000
    }

    /// Against the standard atmosphere of 1.01325 bar.
    pub fn gauge(self) -> GaugePressure {
        GaugePressure(self.0 - ATMOSPHERE)
    }
}

impl GaugePressure {
    pub fn from_pascal(pascal: Ratio) -> Self {
        Self(pascal)
    }

    /// Reads a gauge pressure as a number alone, as in a column that names the unit, `psi` or `bar`.
    ///
    /// # Errors
    /// No number, more than 15 digits, not above zero, or over 10 000 bar.
    pub fn from_psi_text(text: &str) -> Result<Self, QuantityError> {
        Self::from_text(text, "psi", "400", PSI)
    }

    /// # Errors
    /// As [`GaugePressure::from_psi_text`].
    pub fn from_bar_text(text: &str) -> Result<Self, QuantityError> {
        Self::from_text(text, "bar", "40", Ratio::from_integer(100_000))
    }

    fn from_text(text: &str, unit: &'static str, example: &'static str, pascal: Ratio) -> Result<Self, QuantityError> {
        let bound = "pressures are above zero and go to 10000 bar, with up to 15 digits";
        let not = || QuantityError::NotInUnit { text: text.to_owned(), kind: PRESSURE.name, unit, example, bound };
        Kind::bare(text).map(|number| number * pascal).filter(|pascal| *pascal <= MOST_PA).map(Self).ok_or_else(not)
    }

    /// Pounds-force per square inch, as stamped on a cylinder.
    pub fn from_psi(psi: Ratio) -> Self {
        Self(psi * PSI)
    }

    pub fn pascal(self) -> Ratio {
        self.0
    }

    pub fn bar(self) -> Ratio {
        self.0 / 100_000
    }

    pub fn psi(self) -> Ratio {
        self.0 / PSI
    }

    /// Against vacuum, at the standard atmosphere of 1.01325 bar.
    pub fn absolute(self) -> AbsolutePressure {
        AbsolutePressure(self.0 + ATMOSPHERE)
    }

    pub fn times(self, factor: Ratio) -> Self {
        Self(self.0 * factor)
    }
}

impl PressureStep {
    /// Reads `0.1bar`, `1psi`.
    ///
    /// # Errors
    /// No number, an unknown unit, negative, or over 10 000 bar.
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        let (number, name) = STEP.split(text)?;
        let pascal = bounded(text, number * unit(name).ok_or_else(|| STEP.unknown_unit(text, name))?)?;
        if pascal < Ratio::from_integer(0) {
            return Err(STEP.not_readable(text));
        }
        Ok(Self(pascal))
    }

    pub fn pascal(self) -> Ratio {
        self.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{decimal_text, rounded_text};

    fn pascal(text: &str) -> String {
        rounded_text(WrittenPressure::from_written(text).unwrap().absolute().pascal(), 3)
    }

    #[test]
    fn pressures_say_what_they_are_against() {
        assert_eq!(pascal("25barg"), "2601325.000");
        assert_eq!(pascal("26bara"), "2600000.000");
        assert_eq!(pascal("2500kPag"), "2601325.000");
        assert_eq!(pascal("67Pa"), "67.000");
        assert_eq!(pascal("500micron"), "66.661");
        assert_eq!(pascal("164.7psia"), "1135566.526");
        assert_eq!(pascal("150psig"), "1135538.594");
        assert_eq!(pascal("-0.5barg"), "51325.000");
    }

    #[test]
    fn the_pound_per_square_inch_is_exact() {
        // 0.45359237 × 9.80665 / 0.00064516
        let exact = Ratio::new(45_359_237, 100_000_000) * Ratio::new(980_665, 100_000) / Ratio::new(64_516, 100_000_000);
        assert_eq!(PSI, exact);
        assert_eq!(GaugePressure::from_psi(Ratio::from_integer(400)).psi(), Ratio::from_integer(400));
        assert_eq!(decimal_text(MICRON).unwrap(), "0.133322387415");
    }

    #[test]
    fn unclear_pressures_are_refused() {
        let message = |text: &str| WrittenPressure::from_written(text).unwrap_err().to_string();
        assert_eq!(message("25bar"), "\u{201c}25bar\u{201d} does not say whether it is gauge or absolute; write 25barg or 25bara");
        assert!(message("25furlongg").contains("unknown unit"));
        assert!(message("-2barg").contains("vacuum"));
        assert!(message("25").contains("25barg"));
        assert!(message("99999999999bara").contains("10000 bar"));
    }

    #[test]
    fn pressures_in_a_known_unit_are_bounded() {
        assert_eq!(GaugePressure::from_psi_text("400").unwrap().psi(), Ratio::from_integer(400));
        assert_eq!(GaugePressure::from_bar_text("40,5").unwrap().bar(), Ratio::new(81, 2));
        for text in ["0", "-1", "400psig", "", "10000.1", "12345678901234.56", "999999999999999999999999999999"] {
            assert!(GaugePressure::from_bar_text(text).is_err(), "{text:?}");
        }
        let message = GaugePressure::from_psi_text("x").unwrap_err().to_string();
        assert!(message.starts_with("\u{201c}x\u{201d} is not a pressure in psi such as 400; pressures"), "{message}");
    }

    #[test]
    fn divisions_need_no_reference() {
        assert_eq!(PressureStep::from_written("0.1bar").unwrap().pascal(), Ratio::from_integer(10_000));
        assert!(PressureStep::from_written("-0.1bar").is_err());
    }
}
