//! How sure a weighed mass is.
//!
//! A net weight is the difference of two readings. Each reading has at least a rectangular distribution of one scale
//! division (standard uncertainty d/√12), and where the scale's stated limit of error ±e is known also that (e/√3).
//! Hoses that were not emptied can hide anything up to what they hold (m/√12). Combined as a root of squares and
//! expanded with k = 2 (JCGM 100:2008, the GUM, 4.3.7 and 6.2).

use crate::quantity::{Mass, Ratio, square_root_text};
use num_bigint::BigUint;
use std::cmp::Ordering;

/// A reading of a scale.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct ScaleReading {
    pub mass: Mass,
    /// One step of the display.
    pub division: Mass,
    /// The scale's limit of error, ±, where it is known.
    pub stated_error: Option<Mass>,
}

/// Which way gas went, seen from the cylinder on the scale.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Direction {
    /// Charging: the cylinder grows lighter.
    Out,
    /// Recovery: the cylinder grows heavier.
    Into,
}

/// A weighed mass and its uncertainty.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Net {
    pub mass: Mass,
    pub uncertainty: Uncertainty,
}

#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum WeighingError {
    #[error("the reading does not change, so nothing was weighed")]
    Nothing,
    #[error("the cylinder grows {found} by {by} kg, but {act} makes it {expected}: look at both readings")]
    WrongWay { by: String, act: &'static str, found: &'static str, expected: &'static str },
}

/// The uncertainty of a sum of weighings, kept exactly as twelve times its variance.
///
/// It starts at nothing and only grows: readings and hoses are added, never taken away.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Uncertainty {
    /// 12 u², in squares of 10⁻¹⁴ kg.
    twelvefold: BigUint,
}

/// Net of two readings, gross or zeroed alike. `hoses` is what hoses that were not emptied can hold; zero when emptied.
///
/// # Errors
/// [`WeighingError`] when nothing moved or the readings go the wrong way.
pub fn net(before: ScaleReading, after: ScaleReading, direction: Direction, hoses: Mass) -> Result<Net, WeighingError> {
    let mass = match direction {
        Direction::Out => before.mass - after.mass,
        Direction::Into => after.mass - before.mass,
    };
    if mass.is_zero() {
        return Err(WeighingError::Nothing);
    }
    if mass.is_negative() {
        let by = mass.magnitude().kg_text();
        return Err(match direction {
            Direction::Out => WeighingError::WrongWay { by, act: "charging", found: "heavier", expected: "lighter" },
            Direction::Into => WeighingError::WrongWay { by, act: "recovery", found: "lighter", expected: "heavier" },
        });
    }
    Ok(Net { mass, uncertainty: Uncertainty::default().with_reading(before).with_reading(after).with_hoses(hoses) })
}

fn square(mass: Mass) -> BigUint {
    let units = BigUint::from(mass.units().unsigned_abs());
    &units * &units
}

impl Uncertainty {
    /// Of one net weight with both readings on a scale of this division.
    pub fn of_net(division: Mass, hoses: Mass) -> Self {
        let reading = ScaleReading { mass: Mass::ZERO, division, stated_error: None };
        Self::default().with_reading(reading).with_reading(reading).with_hoses(hoses)
    }

    #[must_use]
    pub fn with_reading(mut self, reading: ScaleReading) -> Self {
        self.twelvefold += square(reading.division);
        // (e/√3)² = 4 e² / 12
        self.twelvefold += square(reading.stated_error.unwrap_or_default()) * 4_u32;
        self
    }

    #[must_use]
    pub fn with_hoses(mut self, hoses: Mass) -> Self {
        self.twelvefold += square(hoses);
        self
    }

    /// Of the sum of two independent weighings.
    #[must_use]
    pub fn and(mut self, other: &Self) -> Self {
        self.twelvefold += &other.twelvefold;
        self
    }

    pub fn is_none(&self) -> bool {
        self.twelvefold == BigUint::ZERO
    }

    /// Twelve times the variance, in squares of 10⁻¹⁴ kg.
    pub fn twelvefold_variance(&self) -> &BigUint {
        &self.twelvefold
    }

    /// The expanded uncertainty (k = 2) in kg with `places` decimals, rounded half up.
    pub fn expanded_kg_text(&self, places: u32) -> String {
        self.expanded_text(Ratio::new(1, Mass::from_kg(1).units()), places)
    }

    /// The expanded uncertainty (k = 2) times a factor per 10⁻¹⁴ kg, as a leak rate needs it; `places` decimals, half up.
    pub fn expanded_text(&self, factor: Ratio, places: u32) -> String {
        // U² = 4 u² = 12 u² / 3
        let (n, d) = (BigUint::from(factor.numer().unsigned_abs()), BigUint::from(factor.denom().unsigned_abs()));
        square_root_text(&(&self.twelvefold * &n * &n), &(&d * &d * 3_u32), places)
    }

    /// Compares a mass with the expanded uncertainty (k = 2), exactly.
    pub fn compare(&self, mass: Mass) -> Ordering {
        (square(mass) * 3_u32).cmp(&self.twelvefold)
    }

    /// Whether a difference of this size is no more than the expanded uncertainty.
    pub fn covers(&self, difference: Mass) -> bool {
        self.compare(difference) != Ordering::Greater
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::MassUnit;

    fn kg(text: &str) -> Mass {
        Mass::parse(text, MassUnit::Kilogram).unwrap()
    }

    fn reading(mass: &str, division: &str) -> ScaleReading {
        ScaleReading { mass: kg(mass), division: kg(division), stated_error: None }
    }

    #[test]
    fn a_net_weight_is_the_difference_of_its_readings() {
        let charged = net(reading("64.2", "0.02"), reading("59.7", "0.02"), Direction::Out, Mass::ZERO).unwrap();
        assert_eq!(charged.mass, kg("4.5"));
        // 2 √(2 · 0.02²/12) = 0.016 329 9…
        assert_eq!(charged.uncertainty.expanded_kg_text(4), "0.0163");
        // The full cylinder zeroed, the display runs below zero.
        let zeroed = net(reading("0", "0.02"), reading("-4.5", "0.02"), Direction::Out, Mass::ZERO).unwrap();
        assert_eq!(zeroed, charged);
    }

    #[test]
    fn readings_that_go_the_wrong_way_are_refused() {
        let out = net(reading("59.7", "0.02"), reading("64.2", "0.02"), Direction::Out, Mass::ZERO).unwrap_err();
        assert_eq!(out.to_string(), "the cylinder grows heavier by 4.5 kg, but charging makes it lighter: look at both readings");
        let into = net(reading("59.7", "0.02"), reading("59.6", "0.02"), Direction::Into, Mass::ZERO).unwrap_err();
        assert!(into.to_string().contains("recovery makes it heavier"));
        assert_eq!(net(reading("1", "1"), reading("1", "1"), Direction::Into, Mass::ZERO), Err(WeighingError::Nothing));
    }

    /// 10 lb on a scale of 0.1 lb, on an appliance of 100 lb after 180 days: the band of 0.17 percentage points.
    #[test]
    fn the_band_of_a_leak_rate() {
        let tenth = Mass::parse("0.1", MassUnit::Pound).unwrap();
        let factor = Ratio::new(36_500, 180 * Mass::from_lb(100).units());
        assert_eq!(Uncertainty::of_net(tenth, Mass::ZERO).expanded_text(factor, 2), "0.17");
    }

    #[test]
    fn every_part_of_the_error_counts() {
        // 12 u² = 2 · 0.1² + 2 · 4 · 0.05² + 0.3² = 0.13; U = √(0.13 / 3) = 0.208 16…
        let scale = ScaleReading { mass: Mass::ZERO, division: kg("0.1"), stated_error: Some(kg("0.05")) };
        let all = Uncertainty::default().with_reading(scale).with_reading(scale).with_hoses(kg("0.3"));
        assert_eq!(all.expanded_kg_text(5), "0.20817");
        // Two such weighings: √2 of it.
        assert_eq!(all.clone().and(&all).expanded_kg_text(5), "0.29439");
        assert!(Uncertainty::default().is_none() && !all.is_none());
    }

    #[test]
    fn comparisons_are_exact() {
        // Hoses of √3·x are not a decimal, but 12 u² = 3 makes U exactly 1 unit.
        let one = Uncertainty::default().with_hoses(Mass::from_units(1)).with_hoses(Mass::from_units(1)).with_hoses(Mass::from_units(1));
        assert_eq!(one.compare(Mass::from_units(1)), Ordering::Equal);
        assert!(one.covers(Mass::from_units(-1)) && !one.covers(Mass::from_units(2)));
        assert_eq!(Uncertainty::of_net(Mass::MOST, Mass::MOST).expanded_kg_text(0), "90000");
    }
}
