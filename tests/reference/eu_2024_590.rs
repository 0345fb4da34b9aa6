//! Regulation (EU) 2024/590, Annex I: GWP of ozone-depleting substances.

use super::table;
use bubblepoint::gas::{GwpSet, Weighting, find, substances};
use bubblepoint::quantity::decimal_text;

#[test]
fn values_are_the_annexes_own() {
    let rows = table(include_str!("eu_2024_590.csv"));
    for row in &rows {
        assert_eq!(row.gas().gwp(GwpSet::Eu590), Some(row.number("gwp")), "{}", row.text("substance"));
    }
    assert_eq!(rows.len(), substances().iter().filter(|substance| substance.is_ods()).count());
}

/// The EU has no single rule for a blend of ozone-depleting and fluorinated parts: each part by its own regulation.
#[test]
fn mixed_blends_take_each_part_from_its_own_regulation() {
    let weight = |name: &str| decimal_text(find(name).unwrap().weight(Weighting::EuropeanUnion).unwrap()).unwrap();
    assert_eq!(weight("R-401A"), "1257.9");
    assert_eq!(weight("R-408A"), "3222.4");
    assert_eq!(weight("R-409A"), "1670.25");
    assert_eq!(weight("R-502"), "5871.68");
    // 0.738 × 11200 + 0.262 × 124
    assert_eq!(weight("R-500"), "8298.088");
}
