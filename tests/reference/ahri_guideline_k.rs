//! AHRI Guideline K-2004, worked example as printed in the trade press: water capacity 1000 lb, R-22 of specific gravity 1.197 at 77 °F,
//! tare 380 lb: net 957.60 lb, gross 1337.60 lb.

use super::close;
use bubblepoint::gas::find;
use bubblepoint::measure::{Cylinder, CylinderLaw, LimitKind, cylinder_limit, eighty_percent};
use bubblepoint::quantity::{Mass, MassUnit, Ratio, Volume, rounded_text};

#[test]
fn the_printed_fill() {
    let net = eighty_percent(Ratio::new(1197, 1000)) * 1000;
    assert_eq!(rounded_text(net, 2), "957.60");
    assert_eq!(rounded_text(net + 380, 2), "1337.60");
}

/// DIFFERENCE: the catalogue takes the lower density where sources differ, 1190.65 against 1197 kg/m³, so the program allows half a
/// per cent less than the example prints.
#[test]
fn the_program_allows_half_a_per_cent_less() {
    let cylinder = Cylinder {
        water_capacity: Volume::of_water(Mass::from_lb(1000)),
        tare: Some(Mass::from_lb(380)),
        stamped_maximum: None,
        service_pressure: None,
        test_pressure: None,
        law: CylinderLaw::UnitedStates,
    };
    let limit = cylinder_limit(find("R-22").unwrap(), &cylinder, Ratio::from_integer(1));
    let binding = limit.binding.unwrap();
    assert_eq!(binding.kind, LimitKind::EightyPercent);
    let pounds = binding.net.in_unit(MassUnit::Pound);
    let ours = *pounds.numer() as f64 / *pounds.denom() as f64;
    assert!(ours < 957.60);
    close(ours, 957.60, 0.6, "net");
    assert_eq!(limit.gross, Some(binding.net + Mass::from_lb(380)));
}
