//! Leaks in the units people use.

use super::nitrogen::GAS_CONSTANT;
use crate::gas::Gas;

/// A year of 365 days.
const SECONDS_PER_YEAR: f64 = 31_536_000.0;
/// Pa·m³/s in one atm·cm³/s.
const ATM_CM3: f64 = 0.101_325;
const GRAMS_PER_OUNCE: f64 = 28.349_523_125;

/// A leak of one gas at one temperature.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Leak {
    /// Pa·m³/s at the temperature.
    pub pascal_m3_s: f64,
    /// g/yr of 365 days.
    pub grams_per_year: f64,
}

/// Units in which a leak is written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LeakUnit {
    PascalM3S,
    MbarLitreS,
    AtmCm3S,
    GramYear,
    KilogramYear,
    OunceYear,
}

impl LeakUnit {
    pub const ALL: [Self; 6] = [Self::PascalM3S, Self::MbarLitreS, Self::AtmCm3S, Self::GramYear, Self::KilogramYear, Self::OunceYear];

    /// As written on a command line.
    pub fn name(self) -> &'static str {
        match self {
            Self::PascalM3S => "Pa.m3/s",
            Self::MbarLitreS => "mbar.l/s",
            Self::AtmCm3S => "atm.cm3/s",
            Self::GramYear => "g/yr",
            Self::KilogramYear => "kg/yr",
            Self::OunceYear => "oz/yr",
        }
    }
}

impl Leak {
    /// `q = Q M t / (R T)`, ideal gas; `None` without a molar mass.
    pub fn new(gas: &Gas, rate: f64, unit: LeakUnit, kelvin: f64) -> Option<Self> {
        let grams_per_pascal_m3_s = gas.molar_mass()?.as_f64() * SECONDS_PER_YEAR / (GAS_CONSTANT * kelvin);
        let pascal_m3_s = match unit {
            LeakUnit::PascalM3S => rate,
            LeakUnit::MbarLitreS => rate * 0.1,
            LeakUnit::AtmCm3S => rate * ATM_CM3,
            LeakUnit::GramYear => rate / grams_per_pascal_m3_s,
            LeakUnit::KilogramYear => rate * 1000.0 / grams_per_pascal_m3_s,
            LeakUnit::OunceYear => rate * GRAMS_PER_OUNCE / grams_per_pascal_m3_s,
        };
        Some(Self { pascal_m3_s, grams_per_year: pascal_m3_s * grams_per_pascal_m3_s })
    }

    pub fn in_unit(self, unit: LeakUnit) -> f64 {
        match unit {
            LeakUnit::PascalM3S => self.pascal_m3_s,
            LeakUnit::MbarLitreS => self.pascal_m3_s * 10.0,
            LeakUnit::AtmCm3S => self.pascal_m3_s / ATM_CM3,
            LeakUnit::GramYear => self.grams_per_year,
            LeakUnit::KilogramYear => self.grams_per_year / 1000.0,
            LeakUnit::OunceYear => self.grams_per_year / GRAMS_PER_OUNCE,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::find;

    #[test]
    fn units_go_there_and_back() {
        let gas = find("R-134a").unwrap();
        let leak = Leak::new(gas, 1e-5, LeakUnit::PascalM3S, 293.15).unwrap();
        assert!((leak.grams_per_year - 13.201).abs() < 0.001, "{leak:?}");
        for unit in LeakUnit::ALL {
            let back = Leak::new(gas, leak.in_unit(unit), unit, 293.15).unwrap();
            assert!((back.pascal_m3_s / 1e-5 - 1.0).abs() < 1e-12, "{unit:?}");
        }
    }
}
