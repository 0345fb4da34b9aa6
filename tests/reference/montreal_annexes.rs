//! Montreal Protocol on Substances that Deplete the Ozone Layer, Annexes A, B, C and F: ozone-depleting potentials.
//! HCFC-123 and HCFC-124 by the starred values of the commercial isomers.

use super::table;
use bubblepoint::gas::substances;

#[test]
fn odps_are_the_annexes_own() {
    for row in table(include_str!("montreal_annexes.csv")) {
        let gas = row.gas();
        assert_eq!(gas.odp(), row.number("odp"), "{}", gas.designation());
        assert_eq!(gas.parts()[0].substance.annex(), Some(row.text("annex")), "{}", gas.designation());
    }
}

/// What stands in no annex counts as 0, whatever its formula.
#[test]
fn nothing_else_has_an_annex() {
    let listed: Vec<String> = table(include_str!("montreal_annexes.csv")).iter().map(|row| row.text("substance").to_owned()).collect();
    for substance in substances() {
        let known = listed.iter().any(|name| name == substance.designation());
        assert_eq!(substance.annex().is_some(), known, "{}", substance.designation());
    }
}
