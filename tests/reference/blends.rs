//! Blends, computed from composition, against values listed elsewhere.
//!
//! `listed_blends.csv`: a list of all 60 blends drawn up beforehand from the same compositions and tables, in binary floating
//! point and with parts that have no value counted as 0. `computed_blends.csv`: independent sums with the missing mass fraction.

use super::{Row, table, within};
use bubblepoint::gas::{GwpSet, all};
use bubblepoint::quantity::Ratio;

const SETS: [(&str, GwpSet); 6] = [
    ("ar4", GwpSet::IpccAr4),
    ("ar5", GwpSet::IpccAr5),
    ("ar6", GwpSet::IpccAr6),
    ("eu573", GwpSet::Eu573),
    ("gb517", GwpSet::Gb517),
    ("us84", GwpSet::Us84),
];

/// The list keeps seven significant digits.
fn agrees(ours: Ratio, row: &Row, column: &str) -> bool {
    let printed = row.number(column);
    within(ours, printed, printed / 1_000_000 + Ratio::new(1, 1_000_000))
}

#[test]
fn every_blend_is_listed() {
    let rows = table(include_str!("listed_blends.csv"));
    assert_eq!(rows.len(), all().iter().filter(|gas| gas.is_blend()).count());
}

#[test]
fn ozone_depletion_agrees() {
    for row in table(include_str!("listed_blends.csv")) {
        assert!(within(row.gas().odp(), row.number("odp"), Ratio::new(1, 1_000_000)), "{}", row.text("gas"));
    }
}

/// Differences would be named in `DIFFERENCES`; there is none, and a new one fails.
#[test]
fn warming_agrees_in_every_set() {
    let mut differences = Vec::new();
    for row in table(include_str!("listed_blends.csv")) {
        let gas = row.gas();
        for (column, set) in SETS {
            let (sum, missing) = gas.gwp_at_least(set);
            let nothing_known = missing == Ratio::from_integer(1);
            if !row.has(column) {
                // An empty cell means that the list could not say; then a part must be missing here as well.
                if gas.gwp(set).is_some() {
                    differences.push(format!("{} {column}: only we", gas.designation()));
                }
            } else if nothing_known || !agrees(sum, &row, column) {
                differences.push(format!("{} {column}: ours {sum}, listed {}", gas.designation(), row.text(column)));
            }
        }
    }
    assert_eq!(differences, DIFFERENCES);
}

const DIFFERENCES: [&str; 0] = [];

#[test]
fn independent_sums_agree() {
    for row in table(include_str!("computed_blends.csv")) {
        let set = match row.text("set") {
            "AR4" => GwpSet::IpccAr4,
            "AR5" => GwpSet::IpccAr5,
            "AR6" => GwpSet::IpccAr6,
            _ => GwpSet::Eu573,
        };
        let (sum, missing) = row.gas().gwp_at_least(set);
        assert!(within(sum, row.number("at_least"), row.number("tolerance")), "{} {}: {sum}", row.text("gas"), row.text("set"));
        if set != GwpSet::Eu573 {
            assert_eq!(missing, row.number("missing_fraction"), "{} {}", row.text("gas"), row.text("set"));
        }
    }
}
