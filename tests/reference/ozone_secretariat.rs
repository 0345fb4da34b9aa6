//! Ozone Secretariat, reporting system's blend data (2021): ODP and AR4 GWP of blends. The GWP counts only substances of Annexes A, C
//! and F, so that CFC-13, perfluorocarbons, hydrocarbons and HFOs give 0: for a check of composition, never a climate total
//! (R-503 5934.8 against 14560.4).
//! The row with a `difference` is a printed figure that cannot be right; the reason stands beside it.

use super::{table, within};
use bubblepoint::gas::{GwpSet, mixture};

#[test]
fn blends_agree_but_for_named_differences() {
    for row in table(include_str!("ozone_secretariat.csv")) {
        let gas = row.gas();
        let counted = gas.parts().iter().filter(|part| part.substance.annex().is_some_and(|annex| !annex.starts_with('B')));
        let controlled = mixture(counted.map(|part| (part.fraction, part.substance.gwp(GwpSet::IpccAr4).unwrap().value)));
        let ours = if row.text("quantity") == "odp" { gas.odp() } else { controlled };
        let agrees = within(ours, row.number("printed"), row.number("tolerance"));
        // DIFFERENCE rows must still differ, else the mark is stale.
        assert_eq!(agrees, !row.has("difference"), "{} {}: ours {ours}", gas.designation(), row.text("quantity"));
    }
}
