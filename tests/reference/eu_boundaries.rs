//! Regulation (EU) 2024/573 Art. 5 and (EU) 2024/590 Art. 21(3); Canada's
//! SOR/2022-110 s. 17: charges and days at their boundaries, worked from the
//! articles.

use crate::support::story::{Story, day, mass, told};
use bubblepoint::ledger::Category::CommercialRefrigeration;
use bubblepoint::quantity::decimal_text;

/// Months of the leak check interval, or 0 where the rulebook does not apply.
fn interval(book: &str, gas: &str, charge: &str, change: impl FnOnce(&mut bubblepoint::ledger::ApplianceFacts)) -> u32 {
    let story = Story::new(book, CommercialRefrigeration, gas, charge).with(change).installed("2026-01-15");
    let assessed = story.on("2026-02-01");
    match assessed.duties.iter().find(|duty| duty.kind.name() == "leak check") {
        None => 0,
        Some(duty) => {
            let due = duty.due.unwrap();
            (1..=24).find(|&months| bubblepoint::quantity::add_months(duty.from, months) == due).unwrap()
        }
    }
}

fn plain(_: &mut bubblepoint::ledger::ApplianceFacts) {}

#[test]
fn co2_equivalent_bands_compare_unrounded() {
    for (charge, months) in [("1.2749", 0), ("1.2750", 12), ("12.75", 6), ("127.5", 3)] {
        assert_eq!(interval("eu-573", "R-404A", &format!("{charge} kg"), plain), months, "{charge} kg");
    }
    assert_eq!(interval("eu-573", "R-404A", "127.5 kg", |facts| facts.leakage_detection_system = true), 6);
}

#[test]
fn labelled_hermetic_equipment_is_exempt_below_its_limits() {
    let hermetic = |facts: &mut bubblepoint::ledger::ApplianceFacts| facts.labelled_hermetically_sealed = true;
    let at_home = |facts: &mut bubblepoint::ledger::ApplianceFacts| {
        facts.labelled_hermetically_sealed = true;
        facts.residential = true;
    };
    assert_eq!(interval("eu-573", "R-404A", "2.549 kg", hermetic), 0);
    assert_eq!(interval("eu-573", "R-404A", "2.550 kg", hermetic), 12);
    assert_eq!(interval("eu-573", "R-410A", "2.99 kg", at_home), 0);
    assert_eq!(interval("eu-573", "R-410A", "3.00 kg", at_home), 0);
    assert_eq!(interval("eu-573", "R-404A", "2.9 kg", at_home), 0);
    assert_eq!(interval("eu-573", "R-404A", "3.0 kg", at_home), 12);
    // A blend needs both limits: 9.30 t, but 6.22 kg of HFO.
    assert_eq!(interval("eu-573", "R-454B", "20 kg", hermetic), 12);
    assert_eq!(interval("eu-590", "R-22", "5.99 kg", hermetic), 0);
    assert_eq!(interval("eu-590", "R-22", "6.0 kg", hermetic), 12);
}

#[test]
fn unsaturated_gases_count_by_mass() {
    for (charge, months) in [("0.999", 0), ("1.0", 12), ("9.99", 12), ("10", 6), ("100", 3)] {
        assert_eq!(interval("eu-573", "R-1234ze(E)", &format!("{charge} kg"), plain), months, "{charge} kg");
    }
    assert_eq!(interval("eu-573", "R-1234ze(E)", "1.999 kg", |facts| facts.labelled_hermetically_sealed = true), 0);
    assert_eq!(interval("eu-573", "R-448A", "60 kg", plain), 6);
    assert_eq!(interval("eu-573", "R-454B", "20 kg", plain), 12);
}

#[test]
fn ozone_depleting_gases_count_by_their_whole_mass() {
    for (charge, months) in [("2.99", 0), ("3.0", 12), ("29.99", 12), ("30", 6), ("300", 3)] {
        assert_eq!(interval("eu-590", "R-22", &format!("{charge} kg"), plain), months, "{charge} kg");
    }
    // Detection systems do not double the interval here.
    assert_eq!(interval("eu-590", "R-22", "300 kg", |facts| facts.leakage_detection_system = true), 3);
}

#[test]
fn due_days_clip_to_the_month_end() {
    let check = Story::new("eu-573", CommercialRefrigeration, "R-404A", "62.00 kg").log("2026-08-31 leak inspection: no leak");
    assert_eq!(told(&check.on("2026-09-01")), ["eu-573 leak check 2026-08-31 due 2027-02-28 open"]);
    let repair = Story::new("eu-573", CommercialRefrigeration, "R-404A", "62.00 kg").log("2027-01-31 repair");
    assert!(told(&repair.on("2027-02-01")).contains(&"eu-573 re-check 2027-02-01 due 2027-02-28 open".to_owned()));
}

#[test]
fn canada_takes_the_earlier_of_fifteen_months_and_the_next_year_end() {
    for (test, due) in [("2025-01-20", "2026-04-20"), ("2025-11-30", "2026-12-31")] {
        let story =
            Story::new("ca-halocarbon", CommercialRefrigeration, "R-134a", "40 kg").log(&format!("{test} leak inspection: no leak"));
        assert_eq!(told(&story.on("2025-12-01")), [format!("ca-halocarbon leak check {test} due {due} open")]);
    }
}

/// SOR/2022-110 s. 24, 25: over 10 kg twice a year, from 100 kg on at once.
#[test]
fn canada_has_releases_reported_by_their_mass() {
    let book = bubblepoint::rules::rulebook("ca-halocarbon").unwrap();
    let report = |kg: &str| bubblepoint::rules::release_row(book, mass(kg), day("2026-06-01")).map(|row| row.source.as_str());
    assert_eq!(report("10.0 kg"), None);
    assert_eq!(report("10.1 kg"), Some("SOR/2022-110 s. 25"));
    assert_eq!(report("99.9 kg"), Some("SOR/2022-110 s. 25"));
    assert_eq!(report("100.0 kg"), Some("SOR/2022-110 s. 24"));
    let story = Story::new("ca-halocarbon", CommercialRefrigeration, "R-134a", "400 kg").log("2026-05-03 charge 100 kg");
    let said: Vec<String> = bubblepoint::rules::points(&story.on("2026-06-01")).into_iter().map(|point| point.text).collect();
    assert!(said.iter().any(|text| text.contains("100.00 kg of R-134a lost") && text.contains("within 24 hours")), "{said:#?}");
}

/// 2024/590 Annex I (ODP, GWP of AR6); 517/2014 by IPCC AR4; the parts of R-502 by ODP 0.055 and 0.6.
#[test]
fn losses_weigh_by_the_law_of_the_site() {
    let lost = |book: &str, gas: &str, kg: &str| {
        let story = Story::new(book, CommercialRefrigeration, gas, "100 kg").log(&format!("2026-03-01 charge {kg} kg"));
        let year = story.on("2026-06-01").this_year;
        (decimal_text(year.odp_kg.unwrap()).unwrap(), year.co2e_t.map(|tonnes| decimal_text(tonnes).unwrap()))
    };
    assert_eq!(lost("eu-590", "R-22", "12"), ("0.66".to_owned(), Some("23.52".to_owned())));
    assert_eq!(lost("gb-1005", "R-22", "12"), ("0.66".to_owned(), Some("21.72".to_owned())));
    // 5 × (0.488 × 0.055 + 0.512 × 0.6).
    assert_eq!(lost("eu-590", "R-502", "5").0, "1.6702");
}

/// The answer shows the figure against its limit and never rounds it up to it.
#[test]
fn why_does_not_contradict_itself_near_a_limit() {
    let why = |book: &str, gas: &str, charge: &str| {
        let story = Story::new(book, CommercialRefrigeration, gas, charge).installed("2026-01-15");
        let assessed = story.on("2026-02-01");
        (assessed.rulebooks[0].applies, assessed.rulebooks[0].why.clone())
    };
    let (applies, under) = why("eu-573", "R-404A", "1.2749 kg");
    assert!(!applies && under.contains("4.999 t of CO₂ equivalent, under 5 t (2024/573 Art. 5(6)(a))"), "{under}");
    let (applies, at) = why("eu-573", "R-404A", "1.275 kg");
    assert!(applies && at.contains("5.00004 t of CO₂ equivalent, at least 5 t"), "{at}");
    let (applies, over) = why("ca-halocarbon", "R-134a", "10.00001 kg");
    assert!(applies && over.contains("10.00001 kg, over 10 kg"), "{over}");
    let (applies, not_over) = why("ca-halocarbon", "R-134a", "10 kg");
    assert!(!applies && not_over.contains("10.000 kg, not over 10 kg"), "{not_over}");
    // A blend that is measured in two ways says both.
    let (applies, both) = why("eu-573", "R-454B", "3 kg");
    assert!(!applies && both.contains("1.395 t of CO₂ equivalent, under 5 t") && both.contains("0.933 kg of Annex II"), "{both}");
}

/// What was read second-hand says so wherever the rulebook speaks.
#[test]
fn second_hand_texts_say_so() {
    for (book, gas, words) in [("gb-517", "R-404A", "second-hand"), ("gb-1005", "R-22", "the retained text was not read")] {
        let story = Story::new(book, CommercialRefrigeration, gas, "60 kg").installed("2026-01-15");
        let why = story.on("2026-02-01").rulebooks[0].why.clone();
        assert!(why.contains(words), "{why}");
    }
}
