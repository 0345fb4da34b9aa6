//! ADR 4.1.4.1, packing instruction P200: filling ratio of low-pressure liquefied gases, the lesser of 0.95 of the liquid density at
//! 50 °C and the liquid density at 60 °C. Computed with CoolProp 8.0.0, to 0.5 %. The column `p200` is table 2's printed ratio, from memory,
//! two decimals: within 0.011.

use super::{close, table};
use bubblepoint::measure::{Cylinder, CylinderLaw, LimitKind, cylinder_limit};
use bubblepoint::quantity::{Ratio, Volume};

#[test]
fn filling_ratios() {
    let cylinder = Cylinder {
        water_capacity: Volume::from_written("100l").ok(),
        tare: None,
        stamped_maximum: None,
        service_pressure: None,
        test_pressure: None,
        law: CylinderLaw::Adr,
    };
    for row in table(include_str!("un_p200.csv")) {
        let gas = row.gas();
        close(gas.liquid_density(50.0).unwrap() * 0.95e-3, row.float("density_50_c_times_0_95"), 0.5, gas.designation());
        close(gas.liquid_density(60.0).unwrap() * 1e-3, row.float("density_60_c"), 0.5, gas.designation());
        let limit = cylinder_limit(gas, &cylinder, Ratio::from_integer(1));
        let one = limit.limits.iter().find(|one| one.kind == LimitKind::FillingRatio).unwrap();
        let ratio = one.kg_per_litre.unwrap();
        let ours = *ratio.numer() as f64 / *ratio.denom() as f64;
        close(ours, row.float("ratio"), 0.5, gas.designation());
        if row.has("p200") {
            assert!((ours - row.float("p200")).abs() < 0.011, "{}: {ours}", gas.designation());
        }
    }
}

/// A cylinder of 26.2 l for R-404A: 80 % at 20 °C would allow 22.4 kg, the ratio allows 21.3 kg.
#[test]
fn the_ratio_binds_where_the_eighty_per_cent_rule_is_too_generous() {
    let cylinder = Cylinder {
        water_capacity: Volume::from_written("26.2l").ok(),
        tare: None,
        stamped_maximum: None,
        service_pressure: None,
        test_pressure: None,
        law: CylinderLaw::Adr,
    };
    let binding = cylinder_limit(super::find("R-404A").unwrap(), &cylinder, Ratio::from_integer(1)).binding.unwrap();
    assert_eq!((binding.kind, binding.net.kg_text()), (LimitKind::FillingRatio, "21.3".into()));
}
