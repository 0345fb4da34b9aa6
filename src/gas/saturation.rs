//! Saturated liquid and vapour: pressures and liquid density between the table's points.

use super::blend::Gas;
use super::source::float;
use super::table::{self, Row};
use crate::quantity::{AbsolutePressure, Ratio, parse_decimal};
use std::sync::LazyLock;

/// Kelvin at 0 °C.
const ZERO_C: f64 = 273.15;

/// Points of one quantity, by temperature in °C, rising.
#[derive(Debug, Default, Clone)]
struct Curve(Vec<(f64, f64)>);

/// What is known of a gas between its liquid and its vapour.
#[derive(Debug, Default)]
pub(super) struct Saturation {
    bubble: Curve,
    dew: Curve,
    density: Curve,
    /// Densities other sources give at the very temperature.
    second: Vec<(f64, f64)>,
}

impl Curve {
    /// The four points about `x` (fewer at the ends of a short table); `None` outside the table.
    fn near(&self, t: f64) -> Option<&[(f64, f64)]> {
        let points = &self.0;
        let (first, last) = (points.first()?.0, points.last()?.0);
        if !(first..=last).contains(&t) {
            return None;
        }
        let above = points.partition_point(|point| point.0 < t).max(1);
        let from = above.saturating_sub(2).min(points.len().saturating_sub(4));
        points.get(from..(from + 4).min(points.len()))
    }

    /// Cubic through the four nearest points, in `x(t)` against `y(value)`.
    fn at(&self, t: f64, x: impl Fn(f64) -> f64, y: impl Fn(f64) -> f64) -> Option<f64> {
        let points = self.near(t)?;
        if let Some(exact) = points.iter().find(|point| point.0 == t) {
            return Some(y(exact.1));
        }
        let mut sum = 0.0;
        for (i, a) in points.iter().enumerate() {
            let others = points.iter().enumerate().filter(|(j, _)| *j != i);
            sum += y(a.1) * others.map(|(_, b)| (x(t) - x(b.0)) / (x(a.0) - x(b.0))).product::<f64>();
        }
        Some(sum)
    }

    /// Pressures run almost straight as ln p against 1/T.
    fn pressure(&self, t: f64) -> Option<f64> {
        self.at(t, |t| 1.0 / (t + ZERO_C), f64::ln).map(f64::exp)
    }

    fn plain(&self, t: f64) -> Option<f64> {
        self.at(t, |t| t, |value| value)
    }

    /// The temperature at which the pressure is `p`, by halving; `None` outside the table.
    fn temperature(&self, p: f64) -> Option<f64> {
        let (mut low, mut high) = (self.0.first()?.0, self.0.last()?.0);
        if !(self.pressure(low)?..=self.pressure(high)?).contains(&p) {
            return None;
        }
        for _ in 0..60 {
            let middle = f64::midpoint(low, high);
            if self.pressure(middle)? < p {
                low = middle;
            } else {
                high = middle;
            }
        }
        Some(f64::midpoint(low, high))
    }

    fn put(&mut self, t: f64, value: Option<f64>) {
        if let Some(value) = value {
            let place = self.0.partition_point(|point| point.0 < t);
            if self.0.get(place).is_none_or(|point| point.0 != t) {
                self.0.insert(place, (t, value));
            }
        }
    }
}

/// A row of the two tables: designation, °C, and the row.
fn by_temperature(text: &'static str) -> Vec<(String, f64, Row)> {
    let rows = table::rows(text).into_iter();
    rows.filter_map(|row| Some((row.get("designation").to_owned(), float(row.number("t_c")?), row))).collect()
}

static POINTS: LazyLock<Vec<(String, f64, Row)>> = LazyLock::new(|| by_temperature(include_str!("data/saturation.csv")));
static SECOND: LazyLock<Vec<(String, f64, Row)>> = LazyLock::new(|| by_temperature(include_str!("data/second_densities.csv")));

impl Saturation {
    pub(super) fn read(designation: &str, row: &Row) -> Self {
        let number = |row: &Row, name: &str| parse_decimal(row.get(name)).ok().map(float);
        let mut read = Self::default();
        for (_, t, point) in POINTS.iter().filter(|(gas, _, _)| gas == designation) {
            read.bubble.put(*t, number(point, "p_bubble_bar_abs"));
            read.dew.put(*t, number(point, "p_dew_bar_abs"));
            read.density.put(*t, number(point, "rho_liq_kg_m3"));
        }
        // Gases without a table still have their figures at 25 °C and 54.4 °C.
        read.bubble.put(25.0, number(row, "bubble_25c"));
        read.dew.put(25.0, number(row, "dew_25c"));
        read.density.put(25.0, number(row, "density_25c"));
        read.density.put(54.4, number(row, "density_54_4c"));
        for (_, t, point) in SECOND.iter().filter(|(gas, _, _)| gas == designation) {
            read.second.extend(number(point, "rho_liq_kg_m3").map(|rho| (*t, rho)));
        }
        read
    }
}

impl Gas {
    /// Pressure at which the first bubble forms at `celsius`, bar absolute: what a still cylinder with liquid in it shows.
    /// `None` outside the table.
    pub fn bubble_pressure(&self, celsius: f64) -> Option<f64> {
        self.saturation.bubble.pressure(celsius)
    }

    /// The bubble pressure at 104 °F to the pascal, by which the law parts gases into classes (40 CFR 82.152).
    pub fn bubble_pressure_at_40c(&self) -> Option<AbsolutePressure> {
        let pascal = (self.bubble_pressure(40.0)? * 100_000.0).round();
        // Table pressures are far below 2^53 pascal.
        (pascal.is_finite() && pascal >= 0.0).then(|| AbsolutePressure::from_pascal(Ratio::from_integer(pascal as i128)))
    }

    /// Pressure at which the first drop forms at `celsius`, bar absolute.
    pub fn dew_pressure(&self, celsius: f64) -> Option<f64> {
        self.saturation.dew.pressure(celsius)
    }

    /// Temperature in °C at which the bubble pressure is `bar` (absolute).
    pub fn bubble_temperature(&self, bar: f64) -> Option<f64> {
        self.saturation.bubble.temperature(bar)
    }

    /// Density of the saturated liquid at `celsius`, kg/m³.
    pub fn liquid_density(&self, celsius: f64) -> Option<f64> {
        self.saturation.density.plain(celsius)
    }

    /// As [`Gas::liquid_density`], but the least that any source gives at this temperature: for limits.
    pub fn least_liquid_density(&self, celsius: f64) -> Option<f64> {
        let first = self.liquid_density(celsius)?;
        let others = self.saturation.second.iter().filter(|(t, _)| *t == celsius);
        Some(others.fold(first, |least, (_, rho)| least.min(*rho)))
    }
}

#[cfg(test)]
mod tests {
    use crate::gas::{all, find};

    fn near(value: f64, wanted: f64, relative: f64) {
        assert!((value / wanted - 1.0).abs() < relative, "{value} is not {wanted}");
    }

    #[test]
    fn points_of_the_table_come_back() {
        let gas = find("R-134a").unwrap();
        near(gas.bubble_pressure(25.0).unwrap(), 6.6538, 1e-5);
        near(gas.liquid_density(25.0).unwrap(), 1206.71, 1e-6);
    }

    /// Each inner point left out of its own table and asked for: the true spacing is half of that tried here.
    #[test]
    fn between_points_the_curve_holds() {
        for gas in all() {
            let curve = &gas.saturation.bubble;
            for place in 2..curve.0.len().saturating_sub(2) {
                let mut thinned = curve.clone();
                let (t, p) = thinned.0.remove(place);
                // The table prints four decimals of a bar, and near the critical point curves bend.
                near(thinned.pressure(t).unwrap(), p, 0.002 + 1e-4 / p);
            }
        }
    }

    #[test]
    fn outside_the_table_there_is_no_answer() {
        let gas = find("R-744").unwrap();
        assert!(gas.bubble_pressure(31.0).is_none() && gas.liquid_density(55.0).is_none());
        assert!(find("R-403B").unwrap().bubble_pressure(25.0).is_none());
        assert!(find("R-403B").unwrap().liquid_density(25.0).is_some());
        assert!(gas.bubble_pressure(f64::NAN).is_none());
    }

    #[test]
    fn pressure_and_temperature_are_inverse() {
        let gas = find("R-407C").unwrap();
        let p = gas.bubble_pressure(21.7).unwrap();
        near(gas.bubble_temperature(p).unwrap(), 21.7, 1e-6);
        assert!(gas.dew_pressure(21.7).unwrap() < p);
    }

    #[test]
    fn where_sources_differ_the_lower_density_counts() {
        let gas = find("R-1270").unwrap();
        near(gas.least_liquid_density(60.0).unwrap(), 432.28, 1e-6);
        near(gas.liquid_density(60.0).unwrap(), 433.73, 1e-4);
        near(find("R-22").unwrap().least_liquid_density(25.0).unwrap(), 1190.65, 1e-5);
    }
}
