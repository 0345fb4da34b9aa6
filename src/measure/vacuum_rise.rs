//! A vacuum rise: the valve to the pump is shut, the gauge is read for a while, and the shape of the rise says why it rises.

/// One reading: minutes since the pump was shut off, Pa absolute.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VacuumReading {
    pub minutes: f64,
    pub pascal: f64,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum VacuumVerdict {
    /// Dry enough and not rising; no proof of tightness.
    Holds,
    /// Moisture, or refrigerant that leaves the oil.
    LevelsOff,
    /// A leak, or much gas still in the oil.
    KeepsRising,
    CannotTell,
}

impl VacuumVerdict {
    pub fn name(self) -> &'static str {
        match self {
            Self::Holds => "holds",
            Self::LevelsOff => "levels off",
            Self::KeepsRising => "keeps rising",
            Self::CannotTell => "cannot tell yet",
        }
    }
}

/// Why a series says nothing yet.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum VacuumDoubt {
    FewReadings,
    TooShort,
    /// Neither straight nor bent enough.
    Between,
    /// Not rising, but not dry enough either.
    StillWet,
    Falling,
}

/// The series and what stands behind the verdict.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VacuumAnswer {
    pub verdict: VacuumVerdict,
    pub doubt: Option<VacuumDoubt>,
    /// Pa from the first reading to the last.
    pub rise: f64,
    /// Pa/h, straight line through the first half and through the second, by least squares.
    pub first_slope: f64,
    pub second_slope: f64,
    /// Pa/h, straight line through all.
    pub slope: f64,
    /// Pa, where a rise that dies away exponentially ends; known when it levels off.
    pub level: Option<f64>,
}

/// Below this a system counts as dry enough: RD 552/2019, IF-09 1.6; EN 378-2:2016 (from memory).
pub const DRY_PASCAL: f64 = 270.0;
/// A rise up to this is none: RD 552/2019, IF-09 1.6.
pub const STILL_PASCAL: f64 = 2.0;
/// Fewer readings, or a shorter watch, show no shape (own choice).
pub const LEAST_READINGS: usize = 5;
pub const LEAST_MINUTES: f64 = 10.0;
/// The second half rises at most this part of the first when a rise levels off, at least this when it keeps rising (own choice).
pub const LEVELLING: f64 = 0.25;
pub const STRAIGHT: f64 = 0.6;

/// Judges a series in order of time; `None` without two readings at different times, or out of order.
pub fn vacuum_rise(readings: &[VacuumReading]) -> Option<VacuumAnswer> {
    let (first, last) = (readings.first()?, readings.last()?);
    if readings.windows(2).any(|pair| pair[0].minutes >= pair[1].minutes) || readings.len() < 2 {
        return None;
    }
    // The middle reading belongs to both halves, so that both have the same length.
    let middle = readings.len() / 2;
    let halves = (&readings[..=middle], &readings[readings.len() - 1 - middle..]);
    let mut answer = VacuumAnswer {
        verdict: VacuumVerdict::CannotTell,
        doubt: None,
        rise: last.pascal - first.pascal,
        first_slope: slope(halves.0),
        second_slope: slope(halves.1),
        slope: slope(readings),
        level: None,
    };
    match shape(readings, last.minutes - first.minutes, &answer) {
        Ok(verdict) => answer.verdict = verdict,
        Err(doubt) => answer.doubt = Some(doubt),
    }
    if answer.verdict == VacuumVerdict::LevelsOff {
        answer.level = level(last.pascal, answer.first_slope, answer.second_slope, (last.minutes - first.minutes) / 60.0);
    }
    Some(answer)
}

fn shape(readings: &[VacuumReading], minutes: f64, answer: &VacuumAnswer) -> Result<VacuumVerdict, VacuumDoubt> {
    if readings.len() < LEAST_READINGS {
        return Err(VacuumDoubt::FewReadings);
    }
    if minutes < LEAST_MINUTES {
        return Err(VacuumDoubt::TooShort);
    }
    if answer.rise < -STILL_PASCAL {
        return Err(VacuumDoubt::Falling);
    }
    let highest = readings.iter().map(|reading| reading.pascal).fold(0.0, f64::max);
    let lowest = readings.iter().map(|reading| reading.pascal).fold(f64::INFINITY, f64::min);
    if highest - lowest <= STILL_PASCAL {
        return if highest <= DRY_PASCAL { Ok(VacuumVerdict::Holds) } else { Err(VacuumDoubt::StillWet) };
    }
    if answer.first_slope <= 0.0 {
        // Still at first, rising later: nothing that levels off does that.
        return if answer.second_slope > 0.0 { Ok(VacuumVerdict::KeepsRising) } else { Err(VacuumDoubt::Falling) };
    }
    match answer.second_slope / answer.first_slope {
        ratio if ratio <= LEVELLING => Ok(VacuumVerdict::LevelsOff),
        ratio if ratio >= STRAIGHT => Ok(VacuumVerdict::KeepsRising),
        _ => Err(VacuumDoubt::Between),
    }
}

/// Pa/h by least squares; 0 for a single reading.
fn slope(readings: &[VacuumReading]) -> f64 {
    let count = readings.len() as f64;
    let mean = |value: fn(&VacuumReading) -> f64| readings.iter().map(value).sum::<f64>() / count;
    let (time, pressure) = (mean(|reading| reading.minutes), mean(|reading| reading.pascal));
    let spread: f64 = readings.iter().map(|reading| (reading.minutes - time).powi(2)).sum();
    if spread == 0.0 {
        return 0.0;
    }
    readings.iter().map(|reading| (reading.minutes - time) * (reading.pascal - pressure)).sum::<f64>() / spread * 60.0
}

/// An exponential whose slope falls by `ratio` from half to half rises by what a geometric series still adds.
fn level(last: f64, first_slope: f64, second_slope: f64, hours: f64) -> Option<f64> {
    let ratio = second_slope / first_slope;
    let second_rise = second_slope * hours / 2.0;
    (0.0..1.0).contains(&ratio).then(|| last + second_rise * ratio / (1.0 - ratio))
}

/// Pa·m³/s: `Q = V Δp/Δt`, for a rise of `pascal_per_hour` in `volume` m³.
pub fn leak_of_rise(pascal_per_hour: f64, volume: f64) -> f64 {
    pascal_per_hour / 3600.0 * volume
}

/// Pa over liquid water at a temperature in °C: the Magnus form with the coefficients of the WMO guide (WMO-No. 8, annex 4.B), 0 to 60 °C.
pub fn water_vapour_pressure(celsius: f64) -> f64 {
    611.2 * (17.62 * celsius / (243.12 + celsius)).exp()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn series(minutes: &[f64], pascal: impl Fn(f64) -> f64) -> Vec<VacuumReading> {
        minutes.iter().map(|&minutes| VacuumReading { minutes, pascal: pascal(minutes) }).collect()
    }

    const EVERY_FIVE: [f64; 7] = [0.0, 5.0, 10.0, 15.0, 20.0, 25.0, 30.0];

    fn verdict(readings: &[VacuumReading]) -> (VacuumVerdict, Option<VacuumDoubt>) {
        let answer = vacuum_rise(readings).unwrap();
        (answer.verdict, answer.doubt)
    }

    #[test]
    fn the_shape_tells() {
        assert_eq!(verdict(&series(&EVERY_FIVE, |t| 60.0 + t / 30.0)), (VacuumVerdict::Holds, None));
        assert_eq!(verdict(&series(&EVERY_FIVE, |t| 60.0 + 4.0 * t)), (VacuumVerdict::KeepsRising, None));
        assert_eq!(verdict(&series(&EVERY_FIVE, |t| 60.0 + t * t / 10.0)), (VacuumVerdict::KeepsRising, None));
        let wet = vacuum_rise(&series(&EVERY_FIVE, |t| 60.0 + 400.0 * (1.0 - (-t / 6.0).exp()))).unwrap();
        assert_eq!(wet.verdict, VacuumVerdict::LevelsOff);
        assert!((wet.level.unwrap() - 460.0).abs() < 10.0, "{wet:?}");
    }

    #[test]
    fn what_shows_no_shape_is_not_judged() {
        let doubt = |readings: &[VacuumReading]| verdict(readings);
        let cannot = |doubt| (VacuumVerdict::CannotTell, Some(doubt));
        assert_eq!(doubt(&series(&EVERY_FIVE[..4], |t| 60.0 + t)), cannot(VacuumDoubt::FewReadings));
        assert_eq!(doubt(&series(&[0.0, 1.0, 2.0, 3.0, 4.0], |t| 60.0 + t)), cannot(VacuumDoubt::TooShort));
        assert_eq!(doubt(&series(&EVERY_FIVE, |_| 400.0)), cannot(VacuumDoubt::StillWet));
        assert_eq!(doubt(&series(&EVERY_FIVE, |t| 400.0 - t)), cannot(VacuumDoubt::Falling));
        // A leak and moisture together: straight and bent at once.
        assert_eq!(doubt(&series(&EVERY_FIVE, |t| 60.0 + 2.0 * t + 60.0 * (1.0 - (-t / 6.0).exp()))), cannot(VacuumDoubt::Between));
    }

    #[test]
    fn a_series_needs_its_order() {
        assert!(vacuum_rise(&[]).is_none());
        assert!(vacuum_rise(&series(&[5.0, 0.0], |_| 60.0)).is_none());
        assert!(vacuum_rise(&series(&[0.0, 0.0], |_| 60.0)).is_none());
    }
}
