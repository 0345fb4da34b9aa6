//! United Kingdom greenhouse-gas conversion factors, IPCC AR5, without decimals. Each row says whether it is quoted in a public text or
//! from memory.

use super::{table, within};
use bubblepoint::gas::GwpSet;
use bubblepoint::quantity::Ratio;

#[test]
fn blends_agree_to_one() {
    for row in table(include_str!("uk_factors.csv")) {
        let (ours, _) = row.gas().gwp_at_least(GwpSet::IpccAr5);
        assert!(within(ours, row.number("printed"), Ratio::from_integer(1)), "{}: ours {ours}", row.text("gas"));
    }
}
