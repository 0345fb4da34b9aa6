//! The cautions that come before an act, numbered, each with its basis.
//!
//! The site's own rules, the maker's manual and local codes come first.

use crate::gas::Gas;
use crate::quantity::{Mass, Ratio};

/// One caution.
#[derive(Debug, PartialEq, Eq)]
pub struct CautionText {
    /// As kept in the store and on closed records.
    pub number: &'static str,
    pub text: &'static str,
    pub basis: &'static str,
    /// What is said by acknowledging it.
    pub acknowledge: &'static str,
}

/// Acts that have cautions.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum CautiousAct {
    Charge,
    Recover,
    LeakTest,
    Repair,
    Pressure,
    Close,
}

/// What an act is done on.
#[derive(Debug, Clone, Copy)]
pub struct Circumstances<'a> {
    pub act: CautiousAct,
    pub gas: Option<&'a Gas>,
    /// Where the appliance stands, as written.
    pub place: &'a str,
    /// The cylinder is, or may become, full.
    pub heavy_cylinder: bool,
}

/// Never more than this many before one act.
const MOST: usize = 3;

pub const CATALOGUE: [CautionText; 16] = [
    CautionText {
        number: "1",
        text: "Isolated and locked off? Gas alarm quiet, way out free, and someone knows where you are? Refrigerant vapour is heavier than \
               air and takes the air away in low rooms.",
        basis: "common practice; EN 378-3",
        acknowledge: "Locked off, way out free",
    },
    CautionText {
        number: "2",
        text: "Do label, nameplate and pressure say the same gas? Unknown or mixed gas is identified first.",
        basis: "common practice",
        acknowledge: "All three agree",
    },
    CautionText {
        number: "3",
        text: "Fill by weight only, with the limit in view. Never leave a running recovery. A full cylinder needs two people.",
        basis: "49 CFR 173.304a; common practice",
        acknowledge: "By weight, limit in view",
    },
    CautionText {
        number: "4",
        text: "Cylinder warm or pressure high: stop, cool, check for air, never vent. Warm a cylinder only with warm water or a blanket \
               with thermostat, never with a flame.",
        basis: "40 CFR 82.154(a); common practice",
        acknowledge: "I stop when it runs warm",
    },
    CautionText {
        number: "5",
        text: "This blend fractionates: vapour leaves it changed. Take liquid only.",
        basis: "common practice; temperature glide in the gas catalogue",
        acknowledge: "Liquid only",
    },
    CautionText {
        number: "6",
        text: "Liquid shut in between two valves bursts hoses and pipes.",
        basis: "EN 378-2; common practice",
        acknowledge: "No liquid shut in",
    },
    CautionText {
        number: "7",
        text: "Dry nitrogen through a regulator, set to the test pressure of the weakest part, in steps. Never oxygen, never compressed air.",
        basis: "EN 378-2; common practice",
        acknowledge: "Nitrogen, regulator set",
    },
    CautionText {
        number: "8",
        text: "A flame near halogenated gas makes hydrogen fluoride and phosgene. Gas out first, nitrogen through, hot-work permit.",
        basis: "EN 378-3; common practice",
        acknowledge: "Gas out, permit in hand",
    },
    CautionText {
        number: "9",
        text: "Flammable gas: no ignition source, ventilation on, detector on, tools and cylinder rated for it. Look at the charge against \
               the room before the first kilogram.",
        basis: "ISO 5149-1; EN 378-1",
        acknowledge: "No ignition source, air moves",
    },
    CautionText {
        number: "10",
        text: "Pumping down with a leak on the low side draws in air.",
        basis: "common practice",
        acknowledge: "Low side is tight",
    },
    CautionText {
        number: "11",
        text: "No compressor runs or is switched on under vacuum.",
        basis: "common practice",
        acknowledge: "Compressor stays off",
    },
    CautionText {
        number: "12",
        text: "CO\u{2082}: know the pressure at standstill, watch for dry-ice plugs, and leave when the alarm reaches its level.",
        basis: "EN 378-3; common practice",
        acknowledge: "Pressure and alarm known",
    },
    CautionText {
        number: "13",
        text: "Ammonia: mask within reach, a second person outside.",
        basis: "EN 378-3; common practice",
        acknowledge: "Mask here, second person there",
    },
    CautionText {
        number: "14",
        text: "Toxic gas of group B: ventilation on before you enter, and on until you leave.",
        basis: "ISO 5149-3; EN 378-3",
        acknowledge: "Ventilation is on",
    },
    CautionText {
        number: "15",
        text: "Liquid burns by cold: gloves and goggles on before a hose comes off.",
        basis: "common practice",
        acknowledge: "Gloves and goggles on",
    },
    CautionText {
        number: "16",
        text: "Cylinders upright, tied, capped, and the load space ventilated on the way.",
        basis: "49 CFR 177.834, 173.301(a)(12); ADR 7.5.11 CV36; common practice",
        acknowledge: "Upright, tied, capped",
    },
];

/// The caution of this number.
pub fn caution(number: &str) -> Option<&'static CautionText> {
    CATALOGUE.iter().find(|caution| caution.number == number)
}

/// The cautions that fit, the gravest first, three at most.
pub fn fitting(circumstances: &Circumstances) -> Vec<&'static CautionText> {
    let mut numbers: Vec<&str> = Vec::new();
    if circumstances.act != CautiousAct::Close {
        numbers.extend(of_gas(circumstances.gas));
    }
    let glides = circumstances.gas.is_some_and(glides);
    numbers.extend(match circumstances.act {
        CautiousAct::Charge if glides => ["1", "5", "15", "6"].as_slice(),
        CautiousAct::Charge => &["1", "2", "15", "6"],
        CautiousAct::Recover if circumstances.heavy_cylinder => &["3", "4", "1"],
        CautiousAct::Recover => &["3", "4", "15"],
        CautiousAct::LeakTest if is_low(circumstances.place) => &["1", "2"],
        CautiousAct::LeakTest => &["1"],
        CautiousAct::Repair => &["8", "6", "10"],
        CautiousAct::Pressure => &["7", "11", "1"],
        CautiousAct::Close => &["16"],
    });
    numbers.iter().filter_map(|number| caution(number)).take(MOST).collect()
}

/// What the gas itself asks for.
fn of_gas(gas: Option<&Gas>) -> Option<&'static str> {
    let gas = gas?;
    let class = gas.safety_class();
    match gas.designation() {
        "R-717" => Some("13"),
        "R-744" => Some("12"),
        _ if class.is_some_and(crate::gas::SafetyClass::is_flammable) => Some("9"),
        _ if class.is_some_and(crate::gas::SafetyClass::is_toxic) => Some("14"),
        _ => None,
    }
}

/// A blend whose dew point lies more than half a kelvin over its bubble point.
pub fn glides(gas: &Gas) -> bool {
    let glide = gas.boiling_dew().zip(gas.boiling_bubble()).map(|(dew, bubble)| dew.value - bubble.value);
    gas.is_blend() && glide.is_none_or(|glide| glide > Ratio::new(1, 2))
}

/// Whole words that say that a place lies low; a hospital is no pit.
fn is_low(place: &str) -> bool {
    const LOW: [&str; 6] = ["cellar", "basement", "pit", "shaft", "duct", "hold"];
    let place = place.to_lowercase();
    let mut words = place.split(|letter: char| !letter.is_alphanumeric());
    words.any(|word| LOW.contains(&word) || word.strip_suffix('s').is_some_and(|one| LOW.contains(&one)))
}

/// More than one person lifts: 23 kg, the load constant of the NIOSH lifting equation (1994; from memory).
pub fn is_heavy(gross: Mass) -> bool {
    gross > Mass::from_kg(23)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::find;

    fn numbers(act: CautiousAct, gas: &str) -> Vec<&'static str> {
        let circumstances = Circumstances { act, gas: find(gas), place: "plant room", heavy_cylinder: false };
        fitting(&circumstances).into_iter().map(|caution| caution.number).collect()
    }

    #[test]
    fn the_gas_comes_first_and_three_are_enough() {
        assert_eq!(numbers(CautiousAct::Charge, "R-22"), ["1", "2", "15"]);
        assert_eq!(numbers(CautiousAct::Charge, "R-407C"), ["1", "5", "15"]);
        assert_eq!(numbers(CautiousAct::Charge, "R-290"), ["9", "1", "2"]);
        assert_eq!(numbers(CautiousAct::Recover, "R-744"), ["12", "3", "4"]);
        assert_eq!(numbers(CautiousAct::Repair, "R-717"), ["13", "8", "6"]);
        assert_eq!(numbers(CautiousAct::Close, "R-290"), ["16"]);
    }

    #[test]
    fn a_place_is_low_by_whole_words_and_a_cylinder_heavy_by_its_mass() {
        for place in ["Basement 2", "valve pits, north", "cargo hold", "plant room/cellar"] {
            assert!(is_low(place), "{place}");
        }
        for place in ["hospital roof", "household unit", "product line", "threshold"] {
            assert!(!is_low(place), "{place}");
        }
        assert!(!is_heavy(Mass::from_kg(23)) && is_heavy(Mass::from_kg(24)));
        let recover = |heavy_cylinder| Circumstances { act: CautiousAct::Recover, gas: None, place: "", heavy_cylinder };
        assert!(fitting(&recover(true)).iter().any(|caution| caution.number == "1"), "someone is there to help");
    }

    #[test]
    fn sixteen_cautions_are_numbered_through_and_complete() {
        for (index, caution) in CATALOGUE.iter().enumerate() {
            assert_eq!(caution.number, (index + 1).to_string());
            assert!(!caution.text.is_empty() && !caution.basis.is_empty() && !caution.acknowledge.is_empty());
        }
    }

    #[test]
    fn blends_without_glide_may_be_vapour() {
        assert!(glides(find("R-407C").unwrap()));
        assert!(!glides(find("R-22").unwrap()));
        assert!(!glides(find("R-507A").unwrap()));
    }
}
