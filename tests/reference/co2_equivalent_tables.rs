//! CO₂-equivalent tables as regulators print them.
//!
//! - `gov_uk_co2e_table.csv`: gov.uk, "Calculate the carbon dioxide equivalent quantity of an F gas", kilograms at 5, 40, 50 and 500 t.
//! - `gov_uk_leak_checks.csv`: gov.uk, "Checking F gas equipment for leaks", first kilograms of each band, coarsely rounded.
//! - `printed_tonnes.csv`: single printed examples, each with its source.
//!
//! The program compares exact amounts and never these rounded ones.

use super::{Row, table, within};
use bubblepoint::gas::{GwpSet, find};
use bubblepoint::quantity::{Ratio, rounded_text};

/// In the printed table but not in the catalogue: SF6 is no refrigerant, R-423A is not kept. Only the arithmetic is checked.
const NOT_KEPT: [&str; 2] = ["SF6", "R-423A"];

fn one_in_the_last_digit(row: &Row, column: &str) -> Ratio {
    Ratio::new(1, 10_i128.pow(row.places(column)))
}

#[test]
fn kilograms_at_the_thresholds_of_great_britain() {
    for row in table(include_str!("gov_uk_co2e_table.csv")) {
        let name = row.text("gas");
        match find(name) {
            Some(gas) => {
                let agrees = rounded_text(gas.gwp(GwpSet::Gb517).unwrap(), 0) == row.text("printed_gwp");
                // DIFFERENCE: R-438A comes to 2264.533 with the hydrocarbons' values, which are from memory; the page prints 2264.
                assert_eq!(agrees, row.text("difference") != "printed_gwp", "{name}");
            }
            None => assert!(NOT_KEPT.contains(&name), "{name}"),
        }
        for (tonnes, column) in [(5, "at_5_t"), (40, "at_40_t"), (50, "at_50_t"), (500, "at_500_t")] {
            let kg = Ratio::from_integer(tonnes * 1000) / row.number("printed_gwp");
            let agrees = rounded_text(kg, row.places(column)) == row.text(column);
            // DIFFERENCE: R-428A at 50 t is printed 13.8 although 50000 / 3607 = 13.86.
            assert_eq!(agrees, row.text("difference") != column, "{name} at {tonnes} t: ours {kg}");
        }
    }
}

#[test]
fn first_kilograms_of_each_band() {
    for row in table(include_str!("gov_uk_leak_checks.csv")) {
        let gwp = row.gas().gwp(GwpSet::Gb517).unwrap();
        for (tonnes, column) in [(5, "from_5_t"), (50, "from_50_t"), (500, "from_500_t")] {
            let kg = Ratio::from_integer(tonnes * 1000) / gwp;
            let tolerance = one_in_the_last_digit(&row, column);
            assert!(within(kg, row.number(column), tolerance), "{} from {tonnes} t: ours {kg}", row.text("gas"));
        }
    }
}

#[test]
fn printed_examples() {
    for row in table(include_str!("printed_tonnes.csv")) {
        let set = if row.text("set") == "eu573" { GwpSet::Eu573 } else { GwpSet::Gb517 };
        let gwp = row.gas().gwp(set).unwrap();
        let ours = if row.has("kg") { row.number("kg") * gwp / 1000 } else { row.number("tonnes") * 1000 / gwp };
        // O4 cuts 1.27499 to 1.27; half a step either way takes that.
        let tolerance = one_in_the_last_digit(&row, "printed") / 2;
        let agrees = within(ours, row.number("printed"), tolerance);
        // DIFFERENCE rows must still differ, else the mark is stale.
        assert_eq!(agrees, !row.has("difference"), "{} {}: ours {ours}", row.text("id"), row.text("gas"));
    }
}

/// O4: PFC-14 is not in the catalogue; the printed arithmetic with its printed GWP of 7390 for 5 t.
#[test]
fn the_rule_itself() {
    assert_eq!(rounded_text(Ratio::new(5000, 7390), 2), "0.68");
}
