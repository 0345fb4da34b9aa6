//! A pressure hold with dry nitrogen: what the gauge should say at the end, and what its reading shows.

use super::nitrogen::{self, GAS_CONSTANT};

/// Leaks are told at this temperature, K.
const LEAK_KELVIN: f64 = 293.15;
const SECONDS_PER_HOUR: f64 = 3600.0;

/// What was read. Pressures in Pa absolute, temperatures in K.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Hold {
    pub start: f64,
    pub start_temperature: f64,
    pub end: f64,
    pub end_temperature: f64,
    pub hours: f64,
    /// One step of the gauge, Pa.
    pub division: f64,
    /// How far each temperature may be off, K: 2 unless a sensor sits on the pipe.
    pub temperature_error: f64,
    /// What the nitrogen fills, m³.
    pub volume: Option<f64>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum HoldVerdict {
    /// No drop that these readings could tell from none.
    Holds,
    Drops,
    /// Higher than the temperatures explain: not settled, a wrong reading, or gas coming in.
    Rises,
}

impl HoldVerdict {
    pub fn name(self) -> &'static str {
        match self {
            Self::Holds => "holds",
            Self::Drops => "drops",
            Self::Rises => "rises",
        }
    }
}

/// What the readings say.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HoldAnswer {
    /// Pa absolute at the end, had nothing been lost: nitrogen at constant density.
    pub expected: f64,
    /// Pa below that. Negative when above.
    pub drop: f64,
    /// Pa, expanded with k = 2.
    pub band: f64,
    pub verdict: HoldVerdict,
    pub leak: Option<HoldLeak>,
}

/// With the volume: what was lost. Leaks in Pa·m³/s at 20 °C.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HoldLeak {
    /// Grams of nitrogen.
    pub grams: f64,
    pub rate: f64,
    /// The smallest leak that this hold could have shown: as large as the band.
    pub smallest: f64,
}

impl HoldLeak {
    /// Hours that a hold with the same gauge needs to show a leak of `rate`, Pa·m³/s at 20 °C.
    pub fn hours_to_show(self, rate: f64, hours: f64) -> f64 {
        self.smallest * hours / rate
    }
}

/// `None` where nitrogen is not known (outside -40 to 80 °C, above 60 bar absolute) or the time is not above zero.
///
/// The band: each pressure has a rectangular distribution of one division, each temperature one of twice its error; combined, and
/// expanded with k = 2 (JCGM 100:2008).
pub fn pressure_hold(hold: &Hold) -> Option<HoldAnswer> {
    if hold.hours <= 0.0 {
        return None;
    }
    let density = nitrogen::density(hold.start, hold.start_temperature)?;
    let left = nitrogen::density(hold.end, hold.end_temperature)?;
    let expected = nitrogen::pressure(density, hold.end_temperature);
    let drop = expected - hold.end;
    let band = band(hold, density)?;
    let verdict = if drop > band {
        HoldVerdict::Drops
    } else if drop < -band {
        HoldVerdict::Rises
    } else {
        HoldVerdict::Holds
    };
    let leak = hold.volume.map(|volume| {
        let seconds = hold.hours * SECONDS_PER_HOUR;
        let lost = (density - left) * volume;
        let rate = |moles: f64| moles * GAS_CONSTANT * LEAK_KELVIN / seconds;
        let hidden = band / expected * density * volume;
        HoldLeak { grams: lost * nitrogen::MOLAR_MASS, rate: rate(lost), smallest: rate(hidden) }
    });
    Some(HoldAnswer { expected, drop, band, verdict, leak })
}

fn band(hold: &Hold, density: f64) -> Option<f64> {
    let rectangular = |width: f64| width / 12_f64.sqrt();
    // How the expected pressure moves with each reading, by differences.
    let warmer_start = nitrogen::density(hold.start, hold.start_temperature + 1.0)
        .or_else(|| nitrogen::density(hold.start, hold.start_temperature - 1.0))?;
    let by_start_temperature =
        (nitrogen::pressure(warmer_start, hold.end_temperature) - nitrogen::pressure(density, hold.end_temperature)).abs();
    let by_end_temperature = nitrogen::pressure(density, hold.end_temperature + 1.0) - nitrogen::pressure(density, hold.end_temperature);
    let by_start = nitrogen::pressure(density, hold.end_temperature) / hold.start;
    let temperature = rectangular(2.0 * hold.temperature_error);
    let division = rectangular(hold.division);
    let parts = [by_start * division, division, by_start_temperature * temperature, by_end_temperature * temperature];
    Some(2.0 * parts.iter().map(|part| part * part).sum::<f64>().sqrt())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn hold(end_bar: f64, end_celsius: f64) -> Hold {
        Hold {
            start: 26.013_25e5,
            start_temperature: 293.15,
            end: end_bar * 1e5,
            end_temperature: 273.15 + end_celsius,
            hours: 24.0,
            division: 0.1e5,
            temperature_error: 0.1,
            volume: Some(0.05),
        }
    }

    #[test]
    fn a_colder_pipe_is_no_leak() {
        let expected = pressure_hold(&hold(26.0, 15.0)).unwrap().expected / 1e5;
        let same = pressure_hold(&hold(expected, 15.0)).unwrap();
        assert_eq!((same.verdict, same.drop.round()), (HoldVerdict::Holds, 0.0));
        assert_eq!(pressure_hold(&hold(expected - 0.2, 15.0)).unwrap().verdict, HoldVerdict::Drops);
        assert_eq!(pressure_hold(&hold(expected + 0.2, 15.0)).unwrap().verdict, HoldVerdict::Rises);
    }

    /// 2 K of doubt hide a drop of a quarter of a bar at 25 bar: without a sensor on the pipe a hold shows little.
    #[test]
    fn doubt_about_temperature_hides_drops() {
        let answer = pressure_hold(&Hold { temperature_error: 2.0, ..hold(25.3, 15.0) }).unwrap();
        assert!(answer.drop > 0.2e5 && answer.drop < answer.band, "{answer:?}");
        assert_eq!(answer.verdict, HoldVerdict::Holds);
    }

    #[test]
    fn the_smallest_leak_is_that_of_the_band() {
        let sharp = hold(25.0, 20.0);
        let answer = pressure_hold(&sharp).unwrap();
        let leak = answer.leak.unwrap();
        let at_band = pressure_hold(&Hold { end: answer.expected - answer.band, ..sharp }).unwrap().leak.unwrap();
        assert!((at_band.rate / leak.smallest - 1.0).abs() < 0.01, "{at_band:?} {leak:?}");
        assert!((leak.hours_to_show(leak.smallest / 2.0, 24.0) - 48.0).abs() < 1e-9);
    }

    #[test]
    fn readings_outside_the_table_have_no_answer() {
        assert_eq!(pressure_hold(&hold(70.0, 15.0)), None);
        assert_eq!(pressure_hold(&Hold { hours: 0.0, ..hold(25.0, 15.0) }), None);
    }
}
