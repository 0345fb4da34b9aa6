//! The annual account on paper.

use super::fixtures;
use super::read_back::Paper as Read;
use bubblepoint::print::{Paper, annual_account};
use bubblepoint::record::AnnualAccount;

fn text(account: &AnnualAccount) -> String {
    Read::read(&annual_account(account, Paper::Letter).unwrap()).text()
}

#[test]
fn every_figure_is_on_paper() {
    let text = text(&fixtures::account());
    for fact in [
        "Annual account",
        "2026",
        "Skerrow Market Trust",
        "Tolk & Daughters Cooling",
        // A gas's line, rounded half up to the gram.
        "R-22",
        "20.000",
        "30.000",
        "12.500",
        "37.400",
        "9.072",
        "0.4990",
        "16.420",
        // An unknown GWP is said, not shown as zero.
        "not known",
        // What does not add up is said.
        "R-22 does not balance: closing is 0.100 kg less than the movements explain.",
        "CH-1",
        "assumed full at retirement",
        "follow-up verification test",
        "40 CFR 84.64, else IPCC AR4",
        "One visit is still open",
    ] {
        assert!(text.contains(fact), "{fact}: {text}");
    }
    assert!(!text.contains("R-448A does not balance"));
}

/// Gas that left cylinders otherwise, or never was in one, is told, and the rest is what nobody explains.
#[test]
fn losses_from_cylinders_and_charges_without_one_are_told() {
    let mut account = fixtures::account();
    let kg = |text: &str| bubblepoint::quantity::Mass::parse(text, bubblepoint::quantity::MassUnit::Kilogram).unwrap();
    account.gases[0].line.lost_from_cylinders = Some(kg("0.6"));
    account.gases[0].line.past_cylinders = kg("0.5");
    let text: String = text(&account).split_whitespace().collect::<Vec<_>>().join(" ");
    for fact in
        ["R-22: 0.600 kg lost from cylinders, with the reason written down.", "R-22: 0.500 kg charged, less recovered, without a cylinder"]
    {
        assert!(text.contains(fact), "{fact}: {text}");
    }
    // 20 + 30 + 4 − 12.5 + 0.5 − 4 − 0.6 is 37.4, and so is the closing.
    assert!(!text.contains("R-22 does not balance"), "{text}");
}

#[test]
fn pounds_are_shown_where_they_are_asked_for() {
    let account = AnnualAccount { unit: bubblepoint::quantity::MassUnit::Pound, ..fixtures::account() };
    let text = text(&account);
    assert!(text.contains("masses in lb") && text.contains("100.00") && text.contains("20.00"), "{text}");
}

#[test]
fn long_names_stand_in_full() {
    let long =
        |what: &str| format!("{what} of the Outer Breakwater and Lesser Fish Quay Amalgamated Cold Stores, formerly Brandeis & Widow");
    let mut account = fixtures::account();
    account.owner = Some(long("Owners"));
    account.appliances[0].site = long("Store");
    account.appliances[0].owner = long("Trust");
    account.appliances[0].appliance = long("Rack");
    let text: String = text(&account).split_whitespace().collect();
    for name in [long("Owners"), long("Store"), long("Trust"), long("Rack")] {
        assert!(text.contains(&name.split_whitespace().collect::<String>()), "{name}: {text}");
    }
}

#[test]
fn an_empty_year_is_a_page_that_says_so() {
    let account = AnnualAccount { gases: vec![], appliances: vec![], duties: vec![], remarks: vec![], owner: None, ..fixtures::account() };
    let text = text(&account);
    for fact in ["all owners", "No gas was kept or moved", "No appliance was kept", "None fell due", "page 1 of 1"] {
        assert!(text.contains(fact), "{fact}: {text}");
    }
}

#[test]
fn a_year_of_hundreds_of_appliances_keeps_every_line() {
    let mut account = fixtures::account();
    let model = account.appliances[0].clone();
    account.appliances = (0..300)
        .map(|index| {
            let mut line = model.clone();
            line.appliance = format!("Unit-{index:03}");
            line.site = format!("Site {}", index / 20);
            line
        })
        .collect();
    let read = Read::read(&annual_account(&account, Paper::A4).unwrap());
    let text = read.text();
    for index in 0..300 {
        assert!(text.matches(&format!("Unit-{index:03}")).count() >= 2, "table and bars: {index}");
    }
    assert!(read.pages.len() > 5);
}
