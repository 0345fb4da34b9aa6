//! 40 CFR 82.152 (*leak rate*, *seasonal variance*), 82.157(b) to (j) and
//! 84.106(b): vectors derived from the regulation's own steps with exact
//! fractions. They are computed, not published by the agency.

use super::table;
use crate::support::story::{Story, day, mass, rate, ratio, told};
use bubblepoint::ledger::Category;
use bubblepoint::quantity::{MassUnit, rounded_text};
use bubblepoint::rules::{Verdict, annualized};

use Category::{ComfortCooling, CommercialRefrigeration, IndustrialProcessRefrigeration};

fn at_trigger(percent: &str) -> Category {
    match percent {
        "30" => IndustrialProcessRefrigeration,
        "20" => CommercialRefrigeration,
        _ => ComfortCooling,
    }
}

#[test]
fn the_annualizing_method_is_exact() {
    for row in table(include_str!("annualizing.csv")) {
        let (added, full) = (mass(&format!("{} lb", row.text("added_lb"))), mass(&format!("{} lb", row.text("full_charge_lb"))));
        let percent = annualized(added, full, row.text("days").parse().unwrap(), 365);
        assert_eq!(percent, ratio(row.text("exact_percent")), "{}", row.text("id"));
        assert_eq!(rounded_text(percent, 2), row.text("two_decimals"), "{}", row.text("id"));
        assert_eq!(Verdict::of(percent, ratio(row.text("trigger"))).name(), row.text("verdict"), "{}", row.text("id"));
    }
}

/// The same vectors through a log, each scaled up so that the appliance is in
/// scope of 40 CFR 82.157 (50 lb): the rate does not depend on the scale.
#[test]
fn a_log_gives_the_same_rates() {
    for row in table(include_str!("annualizing.csv")) {
        let scaled = |name: &str| row.number(name) * bubblepoint::quantity::Ratio::from_integer(50);
        let text = |name: &str| bubblepoint::quantity::decimal_text(scaled(name)).unwrap();
        let days: u64 = row.text("days").parse().unwrap();
        let second = day("2026-11-01");
        let first = second.checked_sub_days(chrono::Days::new(days)).unwrap();
        let log = format!("{first} charge 1 lb\n{second} charge {} lb", text("added_lb"));
        let story = Story::new("us-82f", at_trigger(row.text("trigger")), "R-22", &format!("{} lb", text("full_charge_lb"))).log(&log);
        let assessed = story.on("2026-11-01");
        let found = rate(&assessed, "us-82f").unwrap();
        assert_eq!(found.percent, ratio(row.text("exact_percent")), "{}", row.text("id"));
        assert_eq!(found.verdict.name(), row.text("verdict"), "{}", row.text("id"));
        let has_duty = assessed.duties.iter().any(|duty| duty.from == second);
        assert_eq!(has_duty, found.verdict == Verdict::Over, "{}: only over the trigger has duties", row.text("id"));
    }
}

/// A7: the first calculation under part 84 takes 365 days (84.106(b)(1)).
#[test]
fn part_84_first_calculation_takes_365_days() {
    let story = Story::new("us-84c", CommercialRefrigeration, "R-448A", "40 lb").log("2025-12-01 charge 1 lb\n2026-02-10 charge 8 lb");
    let assessed = story.on("2026-02-10");
    let found = rate(&assessed, "us-84c").unwrap();
    assert_eq!((found.percent, found.verdict), (ratio("20"), Verdict::At));
}

/// A8: 6 lb, then 4 lb three days later, the last charge 120 days before.
#[test]
fn charges_for_the_same_leak_are_one_rate() {
    let before = "2026-01-01 charge 1 lb\n2026-05-01 charge 6 lb\n";
    let alone = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(&format!("{before}2026-05-04 charge 4 lb"));
    assert_eq!(rate(&alone.on("2026-05-01"), "us-82f").unwrap().percent, ratio("73/4"));
    assert_eq!(rate(&alone.on("2026-05-04"), "us-82f").unwrap().percent, ratio("1460/3"));
    let linked = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(&format!("{before}2026-05-04 charge 4 lb same leak"));
    assert_eq!(rate(&linked.on("2026-05-04"), "us-82f").unwrap().percent, ratio("3650/123"));
}

/// R1 to R3: the rolling average method.
#[test]
fn the_rolling_average_sums_a_year_or_since_the_follow_up_test() {
    let plain = Story::new("us-82f", CommercialRefrigeration, "R-22", "200 lb")
        .rolling()
        .log("2026-01-10 charge 10 lb\n2026-03-10 charge 12 lb\n2026-06-10 charge 5 lb");
    assert_eq!(rate(&plain.on("2026-06-10"), "us-82f").unwrap().percent, ratio("27/2"));

    let tested = Story::new("us-82f", CommercialRefrigeration, "R-22", "200 lb").rolling().log(
        "2026-03-01 charge 20 lb
         2026-05-20 repair
         2026-05-21 initial verification test: pass
         2026-06-01 follow-up verification test: pass
         2026-07-10 charge 10 lb",
    );
    assert_eq!(rate(&tested.on("2026-07-10"), "us-82f").unwrap().percent, ratio("5"));

    let first = Story::new("us-84c", ComfortCooling, "R-134a", "30 lb").rolling().log("2025-11-01 charge 8 lb\n2026-02-15 charge 3 lb");
    let assessed = first.on("2026-02-15");
    let found = rate(&assessed, "us-84c").unwrap();
    assert_eq!((found.percent, found.verdict), (ratio("10"), Verdict::At));
}

/// C1 to C3: 125 % in a calendar year (82.157(j)).
#[test]
fn chronic_leaks_are_reported_by_march() {
    let chronic = |log: &str| {
        let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(log);
        told(&story.on("2027-02-01")).into_iter().filter(|line| line.contains("chronic")).collect::<Vec<_>>()
    };
    let reached = "2026-02-01 charge 60 lb\n2026-05-01 charge 40 lb\n2026-09-01 charge 25 lb";
    assert_eq!(chronic(reached), ["us-82f chronic leak report 2026-09-01 due 2027-03-01 open"]);
    assert!(chronic("2026-02-01 charge 60 lb\n2026-05-01 charge 40 lb\n2026-09-01 charge 24.9 lb").is_empty());
    assert!(chronic("2026-12-31 charge 100 lb\n2027-01-01 charge 100 lb").is_empty());
}

/// S1 to S4: seasonal variance (82.152).
#[test]
fn seasonal_returns_ask_for_no_rate_within_their_limits() {
    let rated = |log: &str, on: &str| {
        let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "400 lb").log(log);
        rate(&story.on(on), "us-82f").map(|rate| rate.added)
    };
    let removed = "2026-10-15 recover 30 lb seasonal\n";
    assert_eq!(rated(&format!("{removed}2027-04-20 charge 28 lb seasonal"), "2027-04-20"), None);
    assert_eq!(rated(&format!("{removed}2027-04-20 charge 30 lb seasonal"), "2027-04-20"), None);
    // S3, literally: the whole addition counts, not the 5 lb over.
    assert_eq!(rated(&format!("{removed}2027-04-20 charge 35 lb seasonal"), "2027-04-20"), Some(mass("35 lb")));
    let late = "2026-04-01 recover 30 lb seasonal\n2027-04-02 charge 28 lb seasonal";
    assert_eq!(rated(late, "2027-04-02"), Some(mass("28 lb")));
}

/// Deadlines from 2026-03-03, and a clock that mothballing stops.
#[test]
fn deadlines_run_from_the_addition() {
    let log = "2025-09-04 charge 1 lb\n2026-03-03 charge 10 lb\n";
    let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(log);
    let open = told(&story.on("2026-04-02"));
    assert!(open.contains(&"us-82f repair 2026-03-03 due 2026-04-02 open".to_owned()), "{open:?}");
    let late = told(&story.on("2026-04-03"));
    assert!(late.contains(&"us-82f repair 2026-03-03 due 2026-04-02 late".to_owned()), "{late:?}");

    let tested = format!("{log}2026-03-19 repair\n2026-03-20 initial verification test: pass");
    let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(&tested);
    let told_now = told(&story.on("2026-03-21"));
    assert!(told_now.contains(&"us-82f follow-up verification test 2026-03-20 due 2026-03-30 open".to_owned()), "{told_now:?}");

    let mothballed = format!("{log}2026-03-13 recover 90 lb mothball\n2026-03-13 mothball\n2026-05-01 charge 90 lb mothball");
    let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(&mothballed);
    assert!(told(&story.on("2026-04-20")).contains(&"us-82f repair 2026-03-03 due none suspended".to_owned()));
    assert!(told(&story.on("2026-05-02")).contains(&"us-82f repair 2026-03-03 due 2026-05-21 open".to_owned()));
}

/// Section 3 of the law's scope: 15.0 and 50.0 lb are in, R-22 is out of part 84.
#[test]
fn scope_is_by_full_charge_and_gas() {
    let applies = |book: &str, gas: &str, charge: &str, on: &str| {
        let story = Story::new(book, CommercialRefrigeration, gas, charge);
        story.on(on).rulebooks[0].applies
    };
    assert!(applies("us-82f", "R-22", "200 lb", "2026-06-01"));
    assert!(!applies("us-84c", "R-22", "200 lb", "2026-06-01"));
    assert!(!applies("us-82f", "R-22", "49.9 lb", "2026-06-01"));
    assert!(applies("us-82f", "R-22", "50.0 lb", "2026-06-01"));
    assert!(applies("us-84c", "R-134a", "15.0 lb", "2026-01-01"));
    assert!(!applies("us-84c", "R-134a", "15.0 lb", "2025-12-31"));
    assert!(!applies("us-84c", "R-1234yf", "100 lb", "2026-06-01"));
    assert!(applies("us-84c", "R-408A", "30 lb", "2026-06-01") && !applies("us-82f", "R-408A", "30 lb", "2026-06-01"));
    assert!(applies("us-82f", "R-408A", "60 lb", "2026-06-01") && applies("us-84c", "R-408A", "60 lb", "2026-06-01"));
    // A substitute, before and after it left the rule.
    assert!(applies("us-82f", "R-134a", "60 lb", "2020-04-09") && !applies("us-82f", "R-134a", "60 lb", "2020-04-10"));
}

/// The contract's own sample: 10 lb to 100 lb after 180 days, scale of 0.1 lb.
#[test]
fn the_weighing_error_stands_beside_the_rate() {
    let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log("2025-09-04 charge 1.0 lb\n2026-03-03 charge 10.0 lb");
    let assessed = story.on("2026-06-30");
    let found = rate(&assessed, "us-82f").unwrap();
    let band = found.error.as_ref().unwrap();
    assert_eq!((band.percent.as_str(), band.holds_trigger), ("0.17", false));
    assert_eq!(assessed.this_year.lost.in_unit(MassUnit::Pound), ratio("10"));
    assert_eq!(bubblepoint::quantity::decimal_text(assessed.this_year.odp_kg.unwrap()).unwrap(), "0.2494758035");
    assert_eq!(bubblepoint::quantity::decimal_text(assessed.this_year.co2e_t.unwrap()).unwrap(), "8.210021897");
}
