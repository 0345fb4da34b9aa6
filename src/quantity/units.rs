//! Units in which pressures and temperatures are shown and typed.

use super::{GaugePressure, Ratio};
use serde::{Deserialize, Serialize};

macro_rules! units {
    ($($(#[$doc:meta])* $name:ident { $first:ident = $first_word:literal, $($variant:ident = $word:literal,)* })*) => {$(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Serialize, Deserialize)]
        pub enum $name { #[default] $first, $($variant,)* }

        impl $name {
            pub const ALL: &'static [Self] = &[Self::$first, $(Self::$variant,)*];

            /// The unit as it is written after a figure.
            pub const fn name(self) -> &'static str {
                match self { Self::$first => $first_word, $(Self::$variant => $word,)* }
            }

            /// `None` where there is no such unit.
            pub fn from_name(name: &str) -> Option<Self> {
                Self::ALL.iter().copied().find(|unit| unit.name() == name)
            }
        }
    )*};
}

units! {
    /// Of gauge pressures.
    PressureUnit { Bar = "bar", Psi = "psi", Kilopascal = "kPa", }
    /// Of a vacuum, absolute.
    VacuumUnit { Pascal = "Pa", Micron = "micron", Millibar = "mbar", }
    TemperatureUnit { Celsius = "\u{b0}C", Fahrenheit = "\u{b0}F", }
}

impl PressureUnit {
    /// The figure of a gauge pressure in this unit.
    pub fn of(self, pressure: GaugePressure) -> Ratio {
        match self {
            Self::Bar => pressure.bar(),
            Self::Psi => pressure.psi(),
            Self::Kilopascal => pressure.pascal() / Ratio::from_integer(1000),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_known_by_their_names() {
        for unit in PressureUnit::ALL {
            assert_eq!(PressureUnit::from_name(unit.name()), Some(*unit));
        }
        assert_eq!(VacuumUnit::from_name("micron"), Some(VacuumUnit::Micron));
        assert_eq!(TemperatureUnit::from_name("\u{b0}F"), Some(TemperatureUnit::Fahrenheit));
        assert_eq!(PressureUnit::from_name("fathom"), None);
        assert_eq!((PressureUnit::default(), VacuumUnit::default()), (PressureUnit::Bar, VacuumUnit::Pascal));
    }

    #[test]
    fn a_gauge_pressure_in_each_unit() {
        let ten = GaugePressure::from_pascal(Ratio::from_integer(1_000_000));
        assert_eq!(PressureUnit::Bar.of(ten), Ratio::from_integer(10));
        assert_eq!(PressureUnit::Kilopascal.of(ten), Ratio::from_integer(1000));
        assert_eq!(crate::quantity::rounded_text(PressureUnit::Psi.of(ten), 1), "145.0");
    }
}
