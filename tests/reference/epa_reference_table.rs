//! 42 U.S.C. 7675(c): the list of regulated substances with exchange values. And eight figures of the EPA Technology
//! Transitions GWP reference table (second-hand), printed without decimals: exact after rounding half up.

use super::table;
use bubblepoint::gas::{GwpSet, substances};
use bubblepoint::quantity::rounded_text;

#[test]
fn exchange_values_of_the_listed_hfcs() {
    let rows = table(include_str!("usc_7675.csv"));
    for row in &rows {
        assert_eq!(row.gas().gwp(GwpSet::Us84), Some(row.number("exchange_value")), "{}", row.text("substance"));
        assert!(row.gas().has_us_regulated(), "{}", row.text("substance"));
    }
    assert_eq!(rows.len(), substances().iter().filter(|substance| substance.us_regulated()).count());
}

#[test]
fn blends_round_to_the_printed_figure() {
    for row in table(include_str!("epa_reference_table.csv")) {
        assert_eq!(rounded_text(row.gas().gwp(GwpSet::Us84).unwrap(), 0), row.text("printed"), "{}", row.text("gas"));
    }
}
