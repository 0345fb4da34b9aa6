//! Spain, Real Decreto 552/2019, IF-02, appendix 1, table A (a transcription): GWP by Regulation (EU) No 517/2014, some rounded to the unit.

use super::{table, within};
use bubblepoint::gas::GwpSet;
use bubblepoint::quantity::Ratio;

#[test]
fn blends_agree_to_one() {
    for row in table(include_str!("rsif_table_a.csv")) {
        let ours = row.gas().gwp(GwpSet::Gb517).unwrap();
        assert!(within(ours, row.number("printed"), Ratio::from_integer(1)), "{}: ours {ours}", row.text("gas"));
    }
}
