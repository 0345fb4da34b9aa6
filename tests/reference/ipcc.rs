//! IPCC, Working Group I: AR4 (2007) Table 2.14, AR5 (2013) Table 8.A.1, AR6 (2021) chapter 7 supplement Table 7.SM.7.
//! The tables' own figures as carried by the open data set globalwarmingpotentials 0.13.2.

use super::table;
use bubblepoint::gas::GwpSet;

fn same(text: &str, set: GwpSet) {
    for row in table(text) {
        let gas = row.gas();
        assert_eq!(gas.gwp(set), Some(row.number("gwp")), "{} in {}", gas.designation(), set.name());
    }
}

#[test]
fn fourth_report() {
    same(include_str!("ipcc_ar4.csv"), GwpSet::IpccAr4);
}

#[test]
fn fifth_report() {
    same(include_str!("ipcc_ar5.csv"), GwpSet::IpccAr5);
}

#[test]
fn sixth_report() {
    same(include_str!("ipcc_ar6.csv"), GwpSet::IpccAr6);
}
