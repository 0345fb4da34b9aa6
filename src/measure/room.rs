//! The whole charge let into a room.
//!
//! Passing is no permission: local codes, the maker's manual and the room's own dangers come first.

use crate::gas::{Gas, Source};
use crate::quantity::{Mass, Ratio, Volume};

/// A limit of concentration and how the room stands to it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RoomLimit {
    pub kind: RoomLimitKind,
    /// kg/m³.
    pub limit: Ratio,
    pub source: &'static Source,
    pub passes: bool,
    /// The largest charge that would pass, rounded down to the gram.
    pub largest: Mass,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum RoomLimitKind {
    Rcl,
    Practical,
    FifthOfLfl,
    Lfl,
}

impl RoomLimitKind {
    pub fn name(self) -> &'static str {
        match self {
            Self::Rcl => "RCL",
            Self::Practical => "practical limit",
            Self::FifthOfLfl => "a fifth of the lower flammability limit",
            Self::Lfl => "lower flammability limit",
        }
    }
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RoomCheck {
    /// kg/m³, exactly.
    pub concentration: Ratio,
    pub limits: Vec<RoomLimit>,
    /// The least of the largest charges; `None` where the catalogue has no limit.
    pub largest: Option<Mass>,
}

/// Molar volume of an ideal gas at 25 °C and 101 325 Pa, l/mol.
const MOLAR_VOLUME: f64 = 24.465;

/// Compares `charge` in the smallest space it can reach, doors shut, with every limit the catalogue has.
pub fn room_check(gas: &Gas, charge: Mass, room: Volume) -> RoomCheck {
    let concentration = charge.kg() / room.cubic_metres();
    let known = gas.limits();
    let mut limits = Vec::new();
    let mut put = |kind, limit: Ratio, source| {
        let largest = floor_to_gram(limit * room.cubic_metres());
        limits.push(RoomLimit { kind, limit, source, passes: concentration <= limit, largest });
    };
    if let Some(rcl) = known.rcl_g_m3 {
        put(RoomLimitKind::Rcl, rcl.value / 1000, rcl.source);
    }
    if let Some(practical) = known.practical_kg_m3 {
        put(RoomLimitKind::Practical, practical.value, practical.source);
    }
    if let Some(lfl) = known.lfl_kg_m3 {
        put(RoomLimitKind::FifthOfLfl, lfl.value / 5, lfl.source);
        put(RoomLimitKind::Lfl, lfl.value, lfl.source);
    }
    let largest = limits.iter().map(|limit| limit.largest).min();
    RoomCheck { concentration, limits, largest }
}

/// Parts per million by volume at 25 °C and 1 atm, ideal gas; `None` without a molar mass.
pub fn parts_per_million(gas: &Gas, kg_per_m3: f64) -> Option<f64> {
    Some(kg_per_m3 * MOLAR_VOLUME / gas.molar_mass()?.as_f64() * 1e6)
}

fn floor_to_gram(kg: Ratio) -> Mass {
    Mass::from_units((kg * 1000).floor().to_integer() * (Mass::from_kg(1).units() / 1000))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::find;
    use crate::quantity::decimal_text;

    fn check(gas: &str, charge: &str, room: &str) -> RoomCheck {
        room_check(find(gas).unwrap(), Mass::from_written(charge).unwrap(), Volume::from_written(room).unwrap())
    }

    fn passes(check: &RoomCheck, kind: RoomLimitKind) -> bool {
        check.limits.iter().find(|limit| limit.kind == kind).unwrap().passes
    }

    #[test]
    fn at_the_limit_passes_and_a_gram_more_does_not() {
        assert!(passes(&check("R-410A", "17.6kg", "40m3"), RoomLimitKind::Practical));
        assert!(!passes(&check("R-410A", "17.601kg", "40m3"), RoomLimitKind::Practical));
        // RCL of 420 g/m³ is the stricter one.
        assert_eq!(check("R-410A", "12kg", "40m3").largest.unwrap().kg_text(), "16.8");
        assert_eq!(decimal_text(check("R-410A", "12kg", "40m3").concentration).unwrap(), "0.3");
    }

    #[test]
    fn flammable_gases_meet_their_flammability_limit() {
        let propane = check("R-290", "0.3kg", "30m3");
        assert!(!passes(&propane, RoomLimitKind::FifthOfLfl) && passes(&propane, RoomLimitKind::Lfl));
        assert!(check("R-22", "1kg", "30m3").limits.iter().all(|limit| limit.kind != RoomLimitKind::Lfl));
    }

    #[test]
    fn a_gas_without_limits_says_so() {
        assert_eq!(check("R-503", "1kg", "30m3").largest, None);
    }
}
