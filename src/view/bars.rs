//! Leak rates and cylinders as bars: places along them from 0 to 1. Floats are
//! for drawing alone; nothing drawn is compared.

use super::shown::{Bar, MassBar, MassLimit, Rate, Verdict};
use super::{format, words};
use crate::measure::{CylinderLimit, LimitKind, Missing};
use crate::quantity::{Mass, MassUnit, Ratio};
use crate::rules::{self, LeakRate};
use num_traits::ToPrimitive;

/// Ends of a scale in percent; beyond the last, hundreds.
const ROUND: [f64; 14] = [5.0, 10.0, 20.0, 30.0, 40.0, 50.0, 60.0, 80.0, 100.0, 120.0, 160.0, 200.0, 300.0, 400.0];
/// Beyond so many triggers a bar is broken.
pub const MOST_TRIGGERS: f64 = 4.0;

pub fn verdict(verdict: rules::Verdict) -> Verdict {
    match verdict {
        rules::Verdict::Under => Verdict::Under,
        rules::Verdict::At => Verdict::At,
        rules::Verdict::Over => Verdict::Over,
    }
}

/// The weighing error of a rate, in percent.
pub fn error(rate: &LeakRate) -> f64 {
    rate.error.as_ref().map_or(0.0, |band| band.hundredths.to_f64().unwrap_or(0.0) / 100.0)
}

/// A scale that begins at zero and ends at a round figure.
pub struct Scale {
    end: f64,
    broken: bool,
}

impl Scale {
    /// Ends at the next round figure above a percentage.
    pub fn to(percent: f64) -> Self {
        let round = ROUND.into_iter().find(|end| *end > percent);
        Self { end: round.unwrap_or_else(|| ((percent / 100.0).floor() + 1.0) * 100.0), broken: false }
    }

    /// Ends above rate and trigger; beyond four times the trigger it is broken.
    fn of(rate: &LeakRate) -> Self {
        let (percent, trigger) = (format::float(rate.percent), format::float(rate.trigger));
        let broken = percent > MOST_TRIGGERS * trigger;
        let most = if broken { MOST_TRIGGERS * trigger } else { percent + error(rate) };
        Self { broken, ..Self::to(most.max(trigger)) }
    }

    pub fn at(&self, percent: f64) -> f32 {
        (percent / self.end).clamp(0.0, 1.0) as f32
    }
}

/// Places along the leak-rate bar.
pub fn rate_bar(rate: &LeakRate) -> Rate {
    let scale = Scale::of(rate);
    let (percent, error) = (format::float(rate.percent), error(rate));
    let drawn = error > 0.0 && !scale.broken;
    Rate {
        rate_at: if scale.broken { 1.0 } else { scale.at(percent) },
        trigger_at: scale.at(format::float(rate.trigger)),
        error_from: if drawn { scale.at(percent - error) } else { 0.0 },
        error_to: if drawn { scale.at(percent + error) } else { 0.0 },
        broken: scale.broken,
        ..Rate::default()
    }
}

/// The same in a row.
pub fn small_rate_bar(rate: &LeakRate) -> Bar {
    let bar = rate_bar(rate);
    Bar::Rate { fill: bar.rate_at, notch: bar.trigger_at, error_from: bar.error_from, error_to: bar.error_to }
}

/// A mass at the two decimals of a list or a bar.
pub fn rounded(mass: Mass, unit: MassUnit) -> String {
    if unit == MassUnit::PoundOunce {
        return format::mass(mass, unit);
    }
    let places = if unit == MassUnit::Gram { 0 } else { 2 };
    format!("{} {}", crate::quantity::rounded_text(mass.in_unit(unit), places), format::unit(unit)).replace('-', "\u{2212}")
}

/// A cylinder's bar: from empty to full of water.
pub fn mass_bar(
    content: Option<Mass>,
    heel: Option<Mass>,
    capacity: Option<Ratio>,
    limit: Option<&CylinderLimit>,
    unit: MassUnit,
) -> MassBar {
    let kg = |mass: Mass| format::float(mass.kg());
    let binding = limit.and_then(|limit| limit.binding.as_ref());
    // Without a water capacity the bar ends a quarter above what there is to show.
    let end = capacity.map(format::float).filter(|end| *end > 0.0).unwrap_or_else(|| {
        let most: f64 = content.map_or(0.0, kg).max(binding.map_or(0.0, |binding| kg(binding.net)));
        if most > 0.0 { most * 1.25 } else { 1.0 }
    });
    let at = |mass: Mass| (kg(mass) / end).clamp(0.0, 1.0) as f32;
    // Without a water capacity that is what is missing; with one, the gas has no limit.
    let capacity_known = limit.is_some_and(|limit| !limit.missing.contains(&Missing::WaterCapacity));
    let without_limit = || if capacity_known { words::no_limit_for_gas() } else { words::no_limit() };
    let limits = limit.map_or(&[][..], |limit| &limit.limits).iter().filter(|limit| limit.counts);
    MassBar {
        heel: content.and(heel).map_or(0.0, at),
        content: content.map_or(0.0, at),
        limits: limits
            .map(|limit| MassLimit { name: short(limit.kind).to_owned(), at: at(limit.net), binding: Some(limit) == binding })
            .collect(),
        words: content.map_or_else(words::not_weighed, |content| rounded(content, unit)),
        binding: binding.map_or_else(without_limit, |binding| words::limit_binds(&rounded(binding.net, unit), &binding.name())),
    }
}

/// The same in a row: what is in it, and the limit that binds.
pub fn small_mass_bar(bar: &MassBar) -> Bar {
    let binding = bar.limits.iter().find(|limit| limit.binding);
    Bar::Mass { fill: bar.content, notch: binding.map_or(0.0, |limit| limit.at) }
}

/// A limit's name at its mark.
fn short(kind: LimitKind) -> &'static str {
    match kind {
        LimitKind::EightyPercent => "80 %",
        LimitKind::LiquidFull => "55 °C",
        LimitKind::FillingDensity => "density",
        LimitKind::FillingRatio => "ADR",
        LimitKind::Stamped => "stamped",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scales_end_at_round_figures() {
        for (value, end) in [(22.0, 30.0), (9.4, 10.0), (0.3, 5.0), (40.0, 50.0), (41.0, 50.0), (180.0, 200.0), (415.0, 500.0)] {
            assert_eq!(Scale::to(value).end, end, "{value}");
        }
    }

    #[test]
    fn a_cylinder_without_facts_has_a_bar_all_the_same() {
        let bar = mass_bar(None, None, None, None, MassUnit::Kilogram);
        assert_eq!((bar.content, bar.words.as_str()), (0.0, "not weighed"));
        let half = mass_bar(Some(Mass::from_kg(10)), Some(Mass::from_kg(1)), Some(Ratio::from_integer(20)), None, MassUnit::Kilogram);
        assert_eq!((half.content, half.heel), (0.5, 0.05));
        assert_eq!(small_mass_bar(&half), Bar::Mass { fill: 0.5, notch: 0.0 });
    }

    #[test]
    fn masses_in_lists_have_two_decimals() {
        assert_eq!(rounded(Mass::from_lb(10), MassUnit::Kilogram), "4.54 kg");
        assert_eq!(rounded(-Mass::from_lb(10), MassUnit::Kilogram), "\u{2212}4.54 kg");
        assert_eq!(rounded(Mass::from_lb(10), MassUnit::Gram), "4536 g");
    }
}
