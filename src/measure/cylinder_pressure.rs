//! What the pressure of a still cylinder says about the gas in it.

use crate::gas::Gas;

/// What a reading means beside the bubble pressure at the cylinder's temperature.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum PressureVerdict {
    Fits,
    /// Air, or another gas.
    TooHigh,
    /// No liquid left, a colder cylinder, or another gas.
    TooLow,
}

impl PressureVerdict {
    pub fn name(self) -> &'static str {
        match self {
            Self::Fits => "fits the gas",
            Self::TooHigh => "too high",
            Self::TooLow => "too low",
        }
    }
}

/// The reading against the band that the errors of temperature and gauge leave open. All pressures bar absolute.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PressureCheck {
    pub expected: f64,
    pub lowest: f64,
    pub highest: f64,
    pub verdict: PressureVerdict,
}

/// A still cylinder with liquid shows the bubble pressure, so a blend with glide is compared with that and never with dew.
/// `temperature_error` in K, `division` of the gauge in bar. `None` outside the catalogue's table.
pub fn pressure_check(gas: &Gas, celsius: f64, reading: f64, temperature_error: f64, division: f64) -> Option<PressureCheck> {
    let expected = gas.bubble_pressure(celsius)?;
    // Where the table ends inside the band, its slope at the point itself stands in.
    let slope = slope(gas, celsius, expected);
    let lowest = gas.bubble_pressure(celsius - temperature_error).unwrap_or(expected - slope * temperature_error) - division;
    let highest = gas.bubble_pressure(celsius + temperature_error).unwrap_or(expected + slope * temperature_error) + division;
    let verdict = if reading > highest {
        PressureVerdict::TooHigh
    } else if reading < lowest {
        PressureVerdict::TooLow
    } else {
        PressureVerdict::Fits
    };
    Some(PressureCheck { expected, lowest, highest, verdict })
}

fn slope(gas: &Gas, celsius: f64, expected: f64) -> f64 {
    let below = gas.bubble_pressure(celsius - 0.5).map(|low| (expected - low) / 0.5);
    let above = gas.bubble_pressure(celsius + 0.5).map(|high| (high - expected) / 0.5);
    below.or(above).unwrap_or(0.0)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::find;

    fn verdict(name: &str, celsius: f64, reading: f64) -> PressureVerdict {
        pressure_check(find(name).unwrap(), celsius, reading, 2.0, 0.0).unwrap().verdict
    }

    #[test]
    fn air_shows_as_pressure() {
        assert_eq!(verdict("R-22", 25.0, 10.44), PressureVerdict::Fits);
        assert_eq!(verdict("R-22", 25.0, 11.2), PressureVerdict::TooHigh);
        assert_eq!(verdict("R-22", 25.0, 9.6), PressureVerdict::TooLow);
    }

    /// R-407C at 25 °C: bubble 11.90 bar, dew 10.20 bar. The dew pressure is what a cylinder without liquid shows.
    #[test]
    fn blends_are_held_against_the_bubble_point() {
        assert_eq!(verdict("R-407C", 25.0, 11.9), PressureVerdict::Fits);
        assert_eq!(verdict("R-407C", 25.0, 10.2), PressureVerdict::TooLow);
    }

    #[test]
    fn at_the_end_of_the_table_the_band_is_still_there() {
        let check = pressure_check(find("R-134a").unwrap(), 65.0, 18.9, 2.0, 0.0).unwrap();
        assert!(check.highest > check.expected && check.lowest < check.expected);
        assert!(pressure_check(find("R-134a").unwrap(), 80.0, 18.9, 2.0, 0.0).is_none());
    }
}
