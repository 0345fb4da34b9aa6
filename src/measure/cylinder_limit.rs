//! How much of a gas a cylinder may take.
//!
//! Every limit is worked out, and the least that applies binds. A limit that comes from a density is rounded down once,
//! to the gram, and is an exact mass from then on.

use crate::gas::Gas;
use crate::quantity::{AbsolutePressure, GaugePressure, Mass, Ratio, Volume, decimal_text, rounded_text};
use num_traits::{One, Zero};

/// The kinds of limit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LimitKind {
    /// Liquid fills 80 % of the water volume at 25 °C.
    EightyPercent,
    /// Liquid leaves [`room_for_vapour`] of the cylinder at 55 °C.
    LiquidFull,
    /// The filling density that 49 CFR names for this gas.
    FillingDensity,
    /// The ADR filling ratio: by density, or as P200 names it for a gas near its critical temperature.
    FillingRatio,
    /// The maximum stamped on the cylinder.
    Stamped,
}

impl LimitKind {
    pub fn name(self) -> &'static str {
        match self {
            Self::EightyPercent => "80 % of the volume at 25 °C",
            Self::LiquidFull => "not full of liquid at 55 °C",
            Self::FillingDensity => "filling density for this gas",
            Self::FillingRatio => "ADR filling ratio",
            Self::Stamped => "stamped maximum",
        }
    }

    /// The text that asks for it.
    pub fn basis(self) -> &'static str {
        match self {
            Self::EightyPercent => "common practice",
            Self::LiquidFull => "49 CFR 173.304(b); 2 % left for vapour is own choice",
            Self::FillingDensity => "table 1 to 49 CFR 173.304a(a)(2)",
            Self::FillingRatio => "ADR 4.1.4.1, P200: the lesser of 0.95 of the liquid density at 50 °C and the liquid density at 60 °C",
            Self::Stamped => "stamp on the cylinder",
        }
    }
}

/// Which law the cylinder was made and stamped under.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CylinderLaw {
    /// 49 CFR.
    UnitedStates,
    /// ADR; its filling ratio then counts.
    Adr,
}

/// The cylinder and what it stands for.
#[derive(Debug, Clone, Copy)]
pub struct Cylinder {
    pub water_capacity: Option<Volume>,
    pub tare: Option<Mass>,
    /// Net mass of gas.
    pub stamped_maximum: Option<Mass>,
    pub service_pressure: Option<GaugePressure>,
    /// ADR test pressure.
    pub test_pressure: Option<GaugePressure>,
    pub law: CylinderLaw,
}

/// One limit.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Limit {
    pub kind: LimitKind,
    /// Rounded down to the gram.
    pub net: Mass,
    /// kg of gas per litre of water capacity, where the limit comes from one.
    pub kg_per_litre: Option<Ratio>,
    /// What was left of it for gas beside oil; 1 for clean gas, and for a stamp.
    pub oil_factor: Ratio,
    /// Whether it counts here; a limit of another law is shown without counting.
    pub counts: bool,
    /// What a reader must know, such as an estimated density.
    pub remark: Option<&'static str>,
}

impl Limit {
    /// What limits, with what was taken off for oil.
    pub fn name(&self) -> String {
        let name = self.kind.name();
        if self.oil_factor.is_one() {
            return name.to_owned();
        }
        let factor = decimal_text(self.oil_factor).unwrap_or_else(|| rounded_text(self.oil_factor, 3));
        format!("{name}, \u{d7} {factor} for oil")
    }
}

/// Why a limit that people expect is not there.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Missing {
    /// The 80 % rule, for a gas near or above its critical temperature.
    EightyPercentNearCritical,
    /// No liquid density at this temperature in °C.
    Density(i16),
    /// The cylinder's water capacity.
    WaterCapacity,
    /// The test pressure, by which P200 names the filling ratio of this gas.
    TestPressure,
}

/// Whether the cylinder is rated for the gas.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Rating {
    Judged {
        /// What the gas does at the temperature of the rule, rounded up to 100 Pa.
        pressure: GaugePressure,
        /// °C.
        at: i16,
        allowed: GaugePressure,
        suffices: bool,
        basis: &'static str,
    },
    /// A table names the pressure that a cylinder for this gas is made for; nothing less will do.
    Named { needed: GaugePressure, given: GaugePressure, suffices: bool, basis: &'static str },
    /// No service or test pressure was given.
    NotGiven,
    /// The catalogue has no pressure at the temperature of the rule.
    NoPressure,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct CylinderLimit {
    pub limits: Vec<Limit>,
    pub missing: Vec<Missing>,
    /// The least limit that counts.
    pub binding: Option<Limit>,
    /// Tare and binding limit.
    pub gross: Option<Mass>,
    pub rating: Rating,
}

/// Share of a limit that is left for gas when an unknown amount of oil came with it (own choice).
pub fn default_oil_factor() -> Ratio {
    Ratio::new(9, 10)
}

/// ADR 2.2.2.1.2: above this critical temperature, in °C, a liquefied gas is a low-pressure one. Below it the liquid is
/// near critical in a warm cylinder, its density moves fast, and the 80 % rule would let the cylinder run full.
const LOW_PRESSURE_ABOVE: i128 = 65;

/// A row of table 1 to 49 CFR 173.304a(a)(2).
struct Named {
    gas: &'static str,
    /// Per cent of the water's weight.
    percent: i128,
    /// Lowest service pressure named, in psig.
    psig: i128,
    /// The table names no welded recovery cylinder (4BA, 4BW): only this pressure will do, whatever the gas shows at 55 °C.
    alone: bool,
}

const fn named_row(gas: &'static str, percent: i128, psig: i128, alone: bool) -> Named {
    Named { gas, percent, psig, alone }
}

/// The service pressures of are from memory.
const FILLING_DENSITIES: [Named; 8] = [
    named_row("R-12", 119, 225, false),
    named_row("R-13", 100, 1800, true),
    named_row("R-13B1", 124, 400, false),
    named_row("R-22", 105, 240, false),
    named_row("R-115", 110, 225, false),
    named_row("R-142b", 100, 225, false),
    // 54 for every cylinder the table names.
    named_row("R-717", 54, 480, true),
    // 68 to 74.5 by service pressure; the lowest is safe in all.
    named_row("R-744", 68, 1800, true),
];

/// ADR 4.1.4.1, P200, table 2, from memory: gases near or above their critical temperature at 65 °C, the lowest test
/// pressure named in bar and its filling ratio in hundredths of kg/l; where editions differ the lower ratio.
const HIGH_PRESSURE: [(&str, i128, i128); 5] =
    [("R-13", 100, 83), ("R-23", 190, 87), ("R-116", 200, 110), ("R-503", 100, 64), ("R-744", 190, 66)];

/// Share of the water volume that liquid may fill at 55 °C. The law asks for less than all; how much less is our own
/// choice, and covers what densities are uncertain by.
pub fn room_for_vapour() -> Ratio {
    Ratio::new(2, 100)
}

const RATING_49: &str = "49 CFR 173.301(a)(8): pressure at 55 °C at most 5/4 of service pressure";
const RATING_TABLE: &str = "table 1 to 49 CFR 173.304a(a)(2) names this service pressure for the gas";
const RATING_P200: &str = "ADR 4.1.4.1, P200, table 2 (from memory) names this test pressure for the gas";
const RATING_ADR: &str = "ADR 4.1.4.1, P200: test pressure at least the pressure at 65 °C less 1 bar";

const FROM_MEMORY: &str = "P200's ratio for this gas, from memory";
const ESTIMATE: &str = "no density at 55 °C at hand: that at 54.4 °C less 3 %";

/// All limits of one gas in one cylinder. `oil_factor` (0 to 1) makes room for oil in recovered gas; 1 for clean gas.
pub fn cylinder_limit(gas: &Gas, cylinder: &Cylinder, oil_factor: Ratio) -> CylinderLimit {
    let mut limits = Vec::new();
    let mut missing = Vec::new();
    if let Some(water) = cylinder.water_capacity {
        for (kind, per_litre, remark) in density_limits(gas, cylinder, &mut missing) {
            let counts = kind != LimitKind::FillingRatio || cylinder.law == CylinderLaw::Adr;
            let net = floor_to_gram(per_litre * oil_factor * water.litres());
            limits.push(Limit { kind, net, kg_per_litre: Some(per_litre), oil_factor, counts, remark });
        }
    } else {
        missing.push(Missing::WaterCapacity);
    }
    if let Some(net) = cylinder.stamped_maximum {
        limits.push(Limit { kind: LimitKind::Stamped, net, kg_per_litre: None, oil_factor: Ratio::one(), counts: true, remark: None });
    }
    let binding = limits.iter().filter(|limit| limit.counts).min_by_key(|limit| limit.net).cloned();
    let gross = cylinder.tare.zip(binding.as_ref()).map(|(tare, limit)| tare + limit.net);
    CylinderLimit { limits, missing, binding, gross, rating: rating(gas, cylinder) }
}

type DensityLimit = (LimitKind, Ratio, Option<&'static str>);

fn density_limits(gas: &Gas, cylinder: &Cylinder, missing: &mut Vec<Missing>) -> Vec<DensityLimit> {
    let mut found = Vec::new();
    if is_near_critical(gas) {
        missing.push(Missing::EightyPercentNearCritical);
    } else if let Some(density) = kg_per_litre(gas, 25.0) {
        found.push((LimitKind::EightyPercent, eighty_percent(density), None));
    } else {
        missing.push(Missing::Density(25));
    }
    let filled = Ratio::one() - room_for_vapour();
    if let Some(density) = kg_per_litre(gas, 55.0) {
        found.push((LimitKind::LiquidFull, density * filled, None));
    } else if let Some(density) = kg_per_litre(gas, 54.4) {
        found.push((LimitKind::LiquidFull, density * Ratio::new(97, 100) * filled, Some(ESTIMATE)));
    } else {
        missing.push(Missing::Density(55));
    }
    if let Some(row) = named(gas) {
        found.push((LimitKind::FillingDensity, Ratio::new(row.percent, 100), None));
    }
    if let Some((test, hundredths)) = high_pressure(gas) {
        match cylinder.test_pressure {
            Some(given) if given >= test => found.push((LimitKind::FillingRatio, Ratio::new(hundredths, 100), Some(FROM_MEMORY))),
            Some(_) => {}
            None => missing.push(Missing::TestPressure),
        }
    } else if !is_near_critical(gas) {
        match (kg_per_litre(gas, 50.0), kg_per_litre(gas, 60.0)) {
            (Some(at_50), Some(at_60)) => found.push((LimitKind::FillingRatio, (at_50 * Ratio::new(95, 100)).min(at_60), None)),
            (None, _) => missing.push(Missing::Density(50)),
            _ => missing.push(Missing::Density(60)),
        }
    }
    found
}

/// kg per litre of water capacity by the 80 % rule, from the liquid's density at 25 °C (77 °F) in kg/l.
pub fn eighty_percent(density: Ratio) -> Ratio {
    density * Ratio::new(4, 5)
}

fn named(gas: &Gas) -> Option<&'static Named> {
    FILLING_DENSITIES.iter().find(|row| row.gas == gas.designation())
}

fn high_pressure(gas: &Gas) -> Option<(GaugePressure, i128)> {
    let (_, bar, hundredths) = HIGH_PRESSURE.iter().find(|(name, _, _)| *name == gas.designation())?;
    Some((GaugePressure::from_pascal(Ratio::from_integer(bar * 100_000)), *hundredths))
}

/// Whether a warm cylinder of the gas is near its critical point or above it: no rule of densities and no
/// saturation pressure tells then what it holds.
pub fn is_near_critical(gas: &Gas) -> bool {
    gas.t_crit().is_none_or(|critical| critical.value <= Ratio::from_integer(LOW_PRESSURE_ABOVE))
}

/// The least density any source gives, rounded down to 0.01 kg/m³.
fn kg_per_litre(gas: &Gas, celsius: f64) -> Option<Ratio> {
    let hundredths = (gas.least_liquid_density(celsius)? * 100.0 + 1e-6).floor();
    // Densities lie between 0 and a few thousand, so the cast is exact.
    (hundredths > 0.0).then(|| Ratio::new(hundredths as i128, 100_000))
}

fn floor_to_gram(kg: Ratio) -> Mass {
    let grams = (kg * 1000).floor().to_integer();
    Mass::from_units(grams * (Mass::from_kg(1).units() / 1000))
}

fn rating(gas: &Gas, cylinder: &Cylinder) -> Rating {
    let tested = cylinder.test_pressure.filter(|_| cylinder.law == CylinderLaw::Adr);
    if let Some((given, (needed, _))) = tested.zip(high_pressure(gas)) {
        return Rating::Named { needed, given, suffices: given >= needed, basis: RATING_P200 };
    }
    if let Some(service) = cylinder.service_pressure {
        let row = named(gas).map(|row| (row, GaugePressure::from_psi(Ratio::from_integer(row.psig))));
        if let Some((_, needed)) = row.filter(|(row, _)| row.alone) {
            return Rating::Named { needed, given: service, suffices: service >= needed, basis: RATING_TABLE };
        }
        let allowed = service.times(Ratio::new(5, 4));
        let by_table = row.is_some_and(|(_, needed)| service >= needed);
        return judge(gas, 55, allowed, GaugePressure::from_pascal(Ratio::zero()), by_table, RATING_49);
    }
    if let Some(test) = tested {
        // The rule compares the absolute pressure less 1 bar with the gauge pressure of the test.
        let correction = GaugePressure::from_pascal(Ratio::from_integer(1325));
        return judge(gas, 65, test, correction, false, RATING_ADR);
    }
    Rating::NotGiven
}

fn judge(gas: &Gas, at: i16, allowed: GaugePressure, correction: GaugePressure, by_table: bool, basis: &'static str) -> Rating {
    let Some(bar) = gas.bubble_pressure(f64::from(at)) else { return Rating::NoPressure };
    // Up to the next 100 Pa, to the safe side. At most some hundred bar, so the cast is exact.
    let absolute = AbsolutePressure::from_pascal(Ratio::from_integer((bar * 1000.0).ceil() as i128 * 100));
    let pressure = GaugePressure::from_pascal(absolute.gauge().pascal() + correction.pascal());
    let fits = pressure <= allowed;
    Rating::Judged { pressure, at, allowed, suffices: fits || by_table, basis: if by_table && !fits { RATING_TABLE } else { basis } }
}

/// Checks an oil factor given as a share.
pub fn oil_factor_is_sound(factor: Ratio) -> bool {
    factor > Ratio::zero() && factor <= Ratio::one()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::{all, find};
    use crate::quantity::MassUnit;

    fn cylinder(water: &str) -> Cylinder {
        let water_capacity = Volume::from_written(water).ok().or_else(|| Volume::of_water(Mass::from_written(water).unwrap()));
        let law = if water.ends_with("lb") { CylinderLaw::UnitedStates } else { CylinderLaw::Adr };
        Cylinder { water_capacity, tare: None, stamped_maximum: None, service_pressure: None, test_pressure: None, law }
    }

    fn psig(psi: i128) -> Option<GaugePressure> {
        Some(GaugePressure::from_psi(Ratio::from_integer(psi)))
    }

    fn limit(name: &str, cylinder: &Cylinder) -> CylinderLimit {
        cylinder_limit(find(name).unwrap(), cylinder, Ratio::one())
    }

    #[test]
    fn a_recovery_cylinder_in_pounds() {
        let one = Cylinder { tare: Some(Mass::from_written("27.4lb").unwrap()), service_pressure: psig(400), ..cylinder("47.7lb") };
        let limit = limit("R-410A", &one);
        let binding = limit.binding.as_ref().unwrap();
        assert_eq!(binding.kind, LimitKind::EightyPercent);
        // 0.8 × 1.05862 × 47.7 lb = 40.397 lb
        assert_eq!(binding.net.kg_text(), "18.323");
        assert_eq!(rounded_text(limit.gross.unwrap().in_unit(MassUnit::Pound), 1), "67.8");
        let Rating::Judged { pressure, suffices, .. } = limit.rating else { panic!("judged") };
        assert!(suffices);
        assert_eq!(rounded_text(pressure.psi(), 0), "484");
    }

    #[test]
    fn five_quarters_of_service_pressure() {
        let suffices = |name: &str, psi| match limit(name, &Cylinder { service_pressure: psig(psi), ..cylinder("47.7lb") }).rating {
            Rating::Judged { suffices, .. } => suffices,
            other => panic!("{other:?}"),
        };
        assert!(suffices("R-410A", 400) && !suffices("R-410A", 350));
        assert!(suffices("R-125", 350) && suffices("R-134a", 225));
        // 300.8 psig is over 5/4 of 240, but the table names 240 psig for R-22.
        assert!(suffices("R-22", 240) && !suffices("R-22", 225));
        assert_eq!(limit("R-410A", &cylinder("47.7lb")).rating, Rating::NotGiven);
    }

    /// What a gas above its critical point shows at 55 °C goes by how much is in the cylinder: only a pressure that a
    /// table names shows that it suffices.
    #[test]
    fn gases_near_the_critical_point_need_the_pressure_that_a_table_names() {
        let named = |rating: &Rating| match rating {
            Rating::Named { suffices, .. } => Some(*suffices),
            _ => None,
        };
        let american = |name, psi| limit(name, &Cylinder { service_pressure: psig(psi), ..cylinder("20lb") }).rating;
        assert_eq!(named(&american("R-744", 1800)), Some(true));
        assert_eq!(named(&american("R-744", 400)), Some(false));
        assert_eq!(named(&american("R-13", 400)), Some(false));
        // 5/4 of 300 psig is more than ammonia shows, but the table names no welded cylinder for it.
        assert_eq!(named(&american("R-717", 300)), Some(false));
        assert_eq!(american("R-23", 1800), Rating::NoPressure);
        let tested = |name, bar: i128| {
            let test_pressure = Some(GaugePressure::from_pascal(Ratio::from_integer(bar * 100_000)));
            limit(name, &Cylinder { test_pressure, ..cylinder("26.2l") })
        };
        let carbon_dioxide = tested("R-744", 250);
        assert_eq!(named(&carbon_dioxide.rating), Some(true));
        let binding = carbon_dioxide.binding.unwrap();
        assert_eq!((binding.kind, binding.net.kg_text()), (LimitKind::FillingRatio, "17.292".into()));
        assert_eq!(named(&tested("R-23", 48).rating), Some(false));
        assert!(tested("R-23", 48).binding.is_none());
        assert_eq!(tested("R-508B", 190).rating, Rating::NoPressure);
    }

    #[test]
    fn eighty_per_cent_of_r125_would_fill_the_cylinder() {
        let binding = limit("R-125", &cylinder("47.7lb")).binding.unwrap();
        assert_eq!(binding.kind, LimitKind::LiquidFull);
    }

    #[test]
    fn the_adr_ratio_counts_where_the_law_applies() {
        let metric = limit("R-404A", &cylinder("26.2l")).binding.unwrap();
        // 0.81301 kg/l × 26.2 l
        assert_eq!((metric.kind, metric.net.kg_text()), (LimitKind::FillingRatio, "21.3".into()));
        let american = limit("R-404A", &Cylinder { law: CylinderLaw::UnitedStates, ..cylinder("26.2l") });
        assert_eq!(american.binding.as_ref().unwrap().kind, LimitKind::EightyPercent);
        // Shown all the same.
        let shown = american.limits.iter().find(|one| one.kind == LimitKind::FillingRatio).unwrap();
        assert!(!shown.counts && shown.net == metric.net);
    }

    #[test]
    fn no_eighty_per_cent_rule_near_the_critical_point() {
        for gas in all() {
            let limit = cylinder_limit(gas, &cylinder("20l"), Ratio::one());
            let has = limit.limits.iter().any(|one| one.kind == LimitKind::EightyPercent);
            let never = ["R-13", "R-23", "R-116", "R-744", "R-503", "R-508B"].contains(&gas.designation());
            assert_eq!(has, !never, "{}", gas.designation());
            assert_eq!(never, limit.missing.contains(&Missing::EightyPercentNearCritical), "{}", gas.designation());
        }
        // What is left for carbon dioxide is the table's own figure.
        let carbon_dioxide = limit("R-744", &cylinder("20lb")).binding.unwrap();
        assert_eq!((carbon_dioxide.kind, carbon_dioxide.net.kg_text()), (LimitKind::FillingDensity, "6.168".into()));
        assert!(limit("R-23", &cylinder("20l")).binding.is_none());
    }

    /// Whatever binds leaves room for vapour at 55 °C: a cylinder that is just full of liquid bursts a degree later.
    #[test]
    fn what_binds_is_never_liquid_full() {
        let most = 1.0 - *room_for_vapour().numer() as f64 / *room_for_vapour().denom() as f64;
        assert!(most < 0.99);
        for gas in all() {
            for water in ["20lb", "20l"] {
                let one = cylinder(water);
                let Some(density) = gas.least_liquid_density(55.0) else { continue };
                let Some(binding) = cylinder_limit(gas, &one, Ratio::one()).binding else { continue };
                let litres = one.water_capacity.unwrap().litres();
                let kg_per_l =
                    *binding.net.kg().numer() as f64 / *binding.net.kg().denom() as f64 / (*litres.numer() as f64 / *litres.denom() as f64);
                assert!(kg_per_l * 1000.0 <= density * most, "{}", gas.designation());
            }
        }
    }

    #[test]
    fn stamp_and_oil_lower_the_limit() {
        let stamped = Cylinder { stamped_maximum: Some(Mass::from_kg(12)), ..cylinder("26.2l") };
        assert_eq!(limit("R-404A", &stamped).binding.unwrap().kind, LimitKind::Stamped);
        let oily = cylinder_limit(find("R-404A").unwrap(), &cylinder("26.2l"), default_oil_factor());
        assert_eq!(oily.binding.unwrap().net.kg_text(), "19.17");
        let bare = Cylinder { water_capacity: None, ..stamped };
        assert_eq!(limit("R-404A", &bare).binding.unwrap().net, Mass::from_kg(12));
        assert_eq!(limit("R-404A", &bare).missing, [Missing::WaterCapacity]);
    }

    #[test]
    fn adr_rates_by_test_pressure() {
        let tested = |bar: i128| Cylinder {
            test_pressure: Some(GaugePressure::from_pascal(Ratio::from_integer(bar * 100_000))),
            ..cylinder("26.2l")
        };
        let suffices = |bar| matches!(limit("R-134a", &tested(bar)).rating, Rating::Judged { suffices: true, at: 65, .. });
        // R-134a at 65 °C: 18.9 bar absolute.
        assert!(suffices(18) && !suffices(17));
    }
}
