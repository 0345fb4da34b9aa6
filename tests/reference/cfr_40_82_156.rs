//! 40 CFR 82.156, Table 1 (recovery machines made on or after 15 November 1993)
//! and 82.156(b); pressure classes of 82.152, with the gases it names.

use super::table;
use bubblepoint::gas::find;
use bubblepoint::ledger::{ApplianceFacts, Category, RecoveryPurpose};
use bubblepoint::quantity::{Mass, MassUnit};
use bubblepoint::rules::{pressure_class, recovery_level};
use chrono::NaiveDate;

fn facts(gas: &str, pounds: &str) -> ApplianceFacts {
    let full_charge = Some(Mass::parse(pounds, MassUnit::Pound).unwrap());
    ApplianceFacts { full_charge, ..ApplianceFacts::new(Category::CommercialRefrigeration, gas) }
}

fn day(text: &str) -> NaiveDate {
    text.parse().unwrap()
}

#[test]
fn table_1() {
    let books = ["us-82f".to_owned()];
    for row in table(include_str!("cfr_40_82_156.csv")) {
        let facts = facts(row.text("gas"), row.text("full_charge_lb"));
        let level = recovery_level(&books, &facts, RecoveryPurpose::Repair, day("2026-03-03")).unwrap();
        assert_eq!(level.level, row.text("level"), "{facts:?}");
        assert_eq!(level.source, "40 CFR 82.156, Table 1");
        assert!(level.why.starts_with(row.text("class")), "{}", level.why);
    }
}

/// 82.152 names these; R-32 is not named and is over 355 psia.
#[test]
fn named_gases_are_of_the_class_that_the_law_names() {
    let named = [
        ("low-pressure", ["R-11", "R-123", "R-113", "R-245fa"].as_slice()),
        ("medium-pressure", &["R-114", "R-124", "R-12", "R-134a", "R-500"]),
        ("high-pressure", &["R-22", "R-407A", "R-407C", "R-410A", "R-502"]),
        ("very high-pressure", &["R-13", "R-23", "R-503", "R-508B", "R-32"]),
    ];
    for (class, gases) in named {
        for gas in gases {
            assert_eq!(pressure_class(find(gas).unwrap()), Some(class), "{gas}");
        }
    }
}

#[test]
fn small_appliances_mothballing_and_what_asks_for_no_level() {
    let books = ["us-84c".to_owned()];
    let on = day("2026-03-03");
    let small = ApplianceFacts { labelled_hermetically_sealed: true, ..facts("R-134a", "5") };
    let asked = |facts: &ApplianceFacts, purpose| recovery_level(&books, facts, purpose, on);
    assert_eq!(asked(&small, RecoveryPurpose::Retire).unwrap().source, "40 CFR 82.156(b)");
    let larger = ApplianceFacts { full_charge: Mass::parse("5.01", MassUnit::Pound).ok(), ..small };
    assert_eq!(asked(&larger, RecoveryPurpose::Retire).unwrap().level, "10 in Hg vacuum");
    assert_eq!(asked(&facts("R-22", "300"), RecoveryPurpose::Mothball).unwrap().source, "40 CFR 82.152, mothball");
    for purpose in [RecoveryPurpose::Seasonal, RecoveryPurpose::Surplus] {
        assert_eq!(asked(&facts("R-22", "300"), purpose), None, "the circuit is not opened");
    }
    assert_eq!(recovery_level(&books, &facts("R-22", "300"), RecoveryPurpose::Repair, day("2017-12-31")), None);
    assert_eq!(recovery_level(&["ca-halocarbon".to_owned()], &facts("R-22", "300"), RecoveryPurpose::Repair, on), None);
}

/// RD 552/2019, IF-17 1.8.2.1 b, 1.9.3, 2.4 c: 0.3 bar absolute, 0.6 bar up to 200 l.
#[test]
fn the_european_row_names_spain() {
    let level = recovery_level(&["eu-573".to_owned()], &facts("R-448A", "40"), RecoveryPurpose::Repair, day("2026-03-03")).unwrap();
    assert!(level.level.starts_with("0.3 bar absolute at 20 °C"), "{}", level.level);
    assert!(level.why == "law in Spain, elsewhere practice", "{}", level.why);
}
