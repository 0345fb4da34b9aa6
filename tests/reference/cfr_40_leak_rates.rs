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

/// While an appliance is mothballed no clock runs: what is done then is in time, and what was done or had ended before stays
/// where it stood (82.157(d)(1), the definition of *mothball* in 82.152).
#[test]
fn a_stopped_clock_moves_only_what_was_open() {
    let log = "2020-11-30 charge 10 lb\n2021-02-27 charge 10 lb\n";
    let on = |more: &str, day: &str| told(&Story::new("us-82f", ComfortCooling, "R-22", "100 lb").log(&format!("{log}{more}")).on(day));
    let has = |told: Vec<String>, line: &str| assert!(told.contains(&line.to_owned()), "{line}: {told:#?}");

    let meanwhile = "2021-02-28 mothball\n2021-08-03 repair\n2021-08-04 initial verification test: pass\n";
    has(on(meanwhile, "2021-08-02"), "us-82f repair 2021-02-27 due none suspended");
    has(on(meanwhile, "2021-09-01"), "us-82f repair 2021-02-27 due none met 2021-08-03");
    let resumed = format!("{meanwhile}2021-10-08 charge 2 lb trim");
    has(on(&resumed, "2021-11-10"), "us-82f repair 2021-02-27 due 2021-11-06 met 2021-08-03");

    let planned = "2021-03-01 plan made\n2021-03-05 mothball\n2021-10-08 charge 2 lb trim";
    has(on(planned, "2021-11-10"), "us-82f retrofit or retirement plan 2021-02-27 due 2021-03-29 met 2021-03-01");

    let ended = "2022-05-05 mothball\n2022-06-08 charge 2 lb trim";
    for day in ["2022-06-01", "2022-07-01"] {
        has(on(ended, day), "us-82f leak inspection 2021-02-27 due 2022-12-31 ended");
    }
}

/// *Same leak* joins works whichever comes first: a later day of the earlier job has the joined work's gas in its rate too.
#[test]
fn works_of_one_leak_have_one_rate() {
    let log = "2023-08-27 J1 charge 21.9 lb\n2024-12-31 charge 46 lb same leak\n2026-01-06 J1 charge 21.9 lb";
    let story = Story::new("us-82f", IndustrialProcessRefrigeration, "R-408A", "73 lb").log(log);
    for (day, added) in [("2024-12-31", "67.9 lb"), ("2026-01-06", "89.8 lb")] {
        assert_eq!(rate(&story.on(day), "us-82f").map(|rate| rate.added), Some(mass(added)), "{day}");
    }
}

/// 82.157(d)(1), (e)(1), (f)(1)(iii) and 84.106(d), (e), (f), from t0 2026-03-03: 120 days where a process shutdown is
/// needed; parts that are not to be had, at most 180 and 270. The duty's own day stays.
#[test]
fn later_due_days_are_told_and_not_taken() {
    for (book, gas) in [("us-82f", "R-22"), ("us-84c", "R-448A")] {
        let log = "2026-02-01 charge 1 lb\n2026-03-03 charge 40 lb";
        let story = Story::new(book, IndustrialProcessRefrigeration, gas, "100 lb").log(log);
        let assessed = story.on("2026-03-04");
        assert!(told(&assessed).contains(&format!("{book} repair 2026-03-03 due 2026-04-02 open")), "{:?}", told(&assessed));
        for kind in ["repair", "initial verification test"] {
            let duty = assessed.duties.iter().find(|duty| duty.kind.name() == kind).unwrap();
            let days: Vec<String> = duty.extensions().map(|(day, _)| day.to_string()).collect();
            assert_eq!(days, ["2026-07-01", "2026-08-30", "2026-11-28"], "{book} {kind}");
        }
        let follow_up =
            assessed.duties.iter().any(|duty| duty.kind.name() == "follow-up verification test" && duty.extensions().count() > 0);
        assert!(!follow_up);
    }
}

/// A later due day moves with its duty while the appliance is mothballed.
#[test]
fn mothballing_moves_the_later_due_days_too() {
    let log = "2025-09-04 charge 1 lb\n2026-03-03 charge 10 lb\n2026-03-13 mothball\n2026-05-01 charge 90 lb mothball";
    let story = Story::new("us-82f", CommercialRefrigeration, "R-22", "100 lb").log(log);
    let assessed = story.on("2026-05-02");
    let repair = assessed.duties.iter().find(|duty| duty.kind.name() == "repair" && duty.from == day("2026-03-03")).unwrap();
    assert_eq!(repair.due, Some(day("2026-05-21")));
    assert_eq!(repair.extensions().next().unwrap().0, day("2026-08-19"), "120 and 49 days");
}

/// 82.157(g)(4): an indirect system alerts at a loss of 50 lb or 10 % of the full charge, whichever is less.
#[test]
fn detection_systems_alert_at_the_lesser_mass() {
    let book = bubblepoint::rules::rulebook("us-82f").unwrap();
    for (full_charge, alert) in [("400 lb", "40 lb"), ("500 lb", "50 lb"), ("2000 lb", "50 lb")] {
        let story = Story::new("us-82f", CommercialRefrigeration, "R-22", full_charge).with(|facts| facts.leakage_detection_system = true);
        let assessed = story.installed("2020-01-01");
        let assessed = assessed.on("2026-06-01");
        assert_eq!(bubblepoint::rules::alert_mass(&book.detections[0], &assessed.facts), Some(mass(alert)));
        let said: Vec<String> = bubblepoint::rules::points(&assessed).into_iter().map(|point| point.text).collect();
        let words = format!("one that measures losses alerts at {alert}");
        assert!(said.iter().any(|text| text.contains(&words)), "{said:#?}");
    }
}

/// 84.108 (second-hand): 1,500 lb or more, commercial or process refrigeration, by the day of installation.
#[test]
fn large_appliances_need_a_detection_system() {
    let asked = |category, charge: &str, installed: &str| {
        let story = Story::new("us-84c", category, "R-448A", charge).installed(installed);
        let found = bubblepoint::rules::points(&story.on("2026-06-01"));
        found.into_iter().filter(|point| point.source.starts_with("40 CFR 84.108")).map(|point| point.text).collect::<Vec<_>>()
    };
    let old = asked(CommercialRefrigeration, "1500 lb", "2017-01-01");
    assert!(old.len() == 1 && old[0].contains("by 2027-01-01; none is declared"), "{old:?}");
    let new = asked(IndustrialProcessRefrigeration, "1500 lb", "2026-01-01");
    assert!(new.len() == 1 && new[0].contains("within 30 days"), "{new:?}");
    assert_eq!(asked(CommercialRefrigeration, "1499.9 lb", "2026-01-01"), [""; 0]);
    assert_eq!(asked(CommercialRefrigeration, "1500 lb", "2016-12-31"), [""; 0]);
    assert_eq!(asked(ComfortCooling, "1500 lb", "2026-01-01"), [""; 0]);
}

/// 82.156(a)(3): over 5 and under 50 lb, by calendar month and gas.
#[test]
fn disposals_of_middle_size_are_added_up_by_month() {
    let office = crate::support::office::taken(
        "site,rulebooks\nYard,us-82f",
        "appliance,site,category,refrigerant,full_charge,unit
         A,Yard,other,R-22,5,lb
         B,Yard,other,R-22,5.1,lb
         C,Yard,other,R-22,49.9,lb
         D,Yard,other,R-22,50,lb
         E,Yard,other,R-410A,20,lb
         F,Yard,other,R-22,20,lb",
        "date,appliance,what,amount,unit,purpose
         2026-05-04,A,recover,4,lb,retire\n2026-05-04,A,retire,,,
         2026-05-04,B,recover,4,lb,retire\n2026-05-04,B,retire,,,
         2026-05-30,C,recover,40.5,lb,retire\n2026-05-31,C,retire,,,
         2026-05-04,D,recover,48,lb,retire\n2026-05-04,D,retire,,,
         2026-05-04,E,recover,18,lb,retire\n2026-05-04,E,retire,,,
         2026-06-01,F,recover,15,lb,retire\n2026-06-01,F,retire,,,",
    );
    let totals = bubblepoint::rules::monthly_disposals(&office.on("2026-12-01"));
    let found: Vec<_> =
        totals.iter().map(|total| (total.month.to_string(), total.refrigerant.as_str(), total.recovered, total.appliances)).collect();
    assert_eq!(
        found,
        [
            ("2026-05-01".to_owned(), "R-22", mass("44.5 lb"), 2),
            ("2026-05-01".to_owned(), "R-410A", mass("18 lb"), 1),
            ("2026-06-01".to_owned(), "R-22", mass("15 lb"), 1),
        ]
    );
    assert!(totals.iter().all(|total| total.source == "40 CFR 82.156(a)(3)"));
}

/// 84.106(a): the exempt subsector is a declaration, told with the reason that was given for it.
#[test]
fn the_exempt_subsector_is_declared_with_a_reason() {
    let mut story = Story::new("us-84c", ComfortCooling, "R-410A", "60 lb");
    let mut declared = story.appliance.versions.latest().clone();
    let before = declared.clone();
    declared.residential_or_light_commercial_ac = true;
    let dated = |from: Option<&str>, reason: Option<&str>, facts| bubblepoint::ledger::Dated {
        from: from.map(day),
        reason: reason.map(str::to_owned),
        facts,
    };
    story.appliance.versions = bubblepoint::ledger::Versions::new(vec![
        dated(None, None, before),
        dated(Some("2026-03-01"), Some("packaged rooftop unit of a small shop"), declared),
    ])
    .unwrap();
    assert!(story.on("2026-02-28").rulebooks[0].applies);
    let after = story.on("2026-03-01");
    assert!(!after.rulebooks[0].applies && after.rulebooks[0].why.contains("84.106(a)"), "{}", after.rulebooks[0].why);
    let said: Vec<String> = bubblepoint::rules::points(&after).into_iter().map(|point| point.text).collect();
    assert!(said.iter().any(|text| text.contains("from 2026-03-01 on") && text.ends_with("reason: packaged rooftop unit of a small shop")));
}

/// 84.106(a) with 84.64(b): what is counted as nothing is said.
#[test]
fn the_scope_says_what_it_counted_as_nothing() {
    let why = |gas: &str| {
        let story = Story::new("us-84c", CommercialRefrigeration, gas, "200 lb");
        let assessed = story.on("2026-06-01");
        (assessed.rulebooks[0].applies, assessed.rulebooks[0].why.clone())
    };
    for (gas, applies) in [("R-408A", true), ("R-406A", false), ("R-414B", false)] {
        let (found, why) = why(gas);
        assert!(found == applies && why.contains("ozone-depleting parts count 0"), "{gas}: {why}");
    }
    let (applies, unknown) = why("R-1336mzz(E)");
    assert!(!applies && unknown.contains("is not known and counts as not over 53"), "{unknown}");
    let (_, known) = why("R-1234yf");
    assert!(known.contains("not over 53") && !known.contains("ozone"), "{known}");
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
