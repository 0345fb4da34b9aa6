//! Regulation (EU) 2024/573 Art. 5 and (EU) 2024/590 Art. 21(3); Canada's
//! SOR/2022-110 s. 17: charges and days at their boundaries, worked from the
//! articles.

use crate::support::story::{Story, told};
use bubblepoint::ledger::Category::CommercialRefrigeration;

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
