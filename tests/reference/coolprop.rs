//! CoolProp 8.0.0 (reference equations of state; mixtures at nominal composition): liquid densities, pressures of still cylinders,
//! the 80 % rule on real cylinders, and what that leaves when the cylinder warms. Also the ideal-gas arithmetic of rooms and leaks.

use super::{close, table};
use bubblepoint::measure::{Cylinder, CylinderLaw, Leak, LeakUnit, LimitKind, cylinder_limit, parts_per_million, room_check};
use bubblepoint::quantity::{Mass, MassUnit, Ratio, Volume};

fn float(value: Ratio) -> f64 {
    *value.numer() as f64 / *value.denom() as f64
}

#[test]
fn densities_and_pressures() {
    for row in table(include_str!("coolprop.csv")) {
        let (gas, at) = (row.gas(), row.float("celsius"));
        let ours = if row.text("quantity") == "density" { gas.liquid_density(at) } else { gas.bubble_pressure(at) };
        close(ours.unwrap(), row.float("value"), row.float("tolerance_percent"), &format!("{} {at}", gas.designation()));
    }
}

#[test]
fn the_eighty_per_cent_rule() {
    for row in table(include_str!("eighty_percent.csv")) {
        let written = row.text("water_capacity");
        let water = Volume::from_written(written).ok().or_else(|| Volume::of_water(Mass::from_written(written).unwrap()));
        let cylinder = Cylinder {
            water_capacity: water,
            tare: None,
            stamped_maximum: None,
            service_pressure: None,
            test_pressure: None,
            law: CylinderLaw::UnitedStates,
        };
        let limits = cylinder_limit(row.gas(), &cylinder, Ratio::from_integer(1)).limits;
        let net = limits.iter().find(|limit| limit.kind == LimitKind::EightyPercent).unwrap().net;
        let unit = MassUnit::from_name(row.text("unit")).unwrap();
        let ours = float(net.in_unit(unit));
        close(ours, row.float("net"), row.float("tolerance_percent"), &format!("{} in {written}", row.text("gas")));
        assert!(ours <= row.float("net") * 1.0001, "a limit is rounded down: {}", row.text("gas"));
    }
}

#[test]
fn a_cylinder_filled_to_eighty_per_cent_and_warmed() {
    for row in table(include_str!("warmed_cylinders.csv")) {
        let gas = row.gas();
        let ours = 0.8 * gas.liquid_density(25.0).unwrap() / gas.liquid_density(54.4).unwrap();
        assert!((ours - row.float("share_filled_at_54_4_c")).abs() <= row.float("tolerance"), "{}: {ours}", gas.designation());
    }
}

#[test]
fn a_charge_let_into_a_room() {
    for row in table(include_str!("room.csv")) {
        let gas = row.gas();
        let charge = Mass::parse(row.text("charge_kg"), MassUnit::Kilogram).unwrap();
        let room = Volume::from_written(&format!("{}m3", row.text("room_m3"))).unwrap();
        let kg_m3 = float(room_check(gas, charge, room).concentration);
        let ours = if row.text("quantity") == "ppm" { parts_per_million(gas, kg_m3).unwrap() } else { kg_m3 * 1000.0 };
        close(ours, row.float("value"), 0.1, &format!("{} {}", gas.designation(), row.text("quantity")));
    }
}

#[test]
fn leaks_in_grams_a_year() {
    for row in table(include_str!("leak.csv")) {
        let leak = Leak::new(row.gas(), row.float("pa_m3_s"), LeakUnit::PascalM3S, row.float("celsius") + 273.15).unwrap();
        close(leak.grams_per_year, row.float("grams_per_year"), row.float("tolerance_percent"), row.text("gas"));
    }
}
