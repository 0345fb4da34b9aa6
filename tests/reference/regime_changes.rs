//! One appliance, several laws: each fact is judged by the rule of its own
//! day. 40 CFR 82.157(a) (substitutes were in to 2020-04-09), 84.106(a) (from
//! 2026-01-01), 2024/573 (from 2024-03-11), and the repeal of Regulation (EC)
//! No 1516/2007 by (EU) 2026/1444 (last day 2026-07-22).

use crate::support::office::taken;
use crate::support::story::{Story, rate, ratio, told};
use bubblepoint::ledger::Category::{ComfortCooling, CommercialRefrigeration};
use bubblepoint::rules::{Verdict, points};

/// R-134a, 60 lb: a substitute under part 82 in 2019, under no leak repair rule in 2024, a regulated substance under
/// part 84 in 2026, which is a first calculation.
#[test]
fn records_of_2019_2024_and_2026_take_three_rules() {
    let office = taken(
        "site,rulebooks\nHall,us-82f us-84c",
        "appliance,site,category,refrigerant,full_charge,unit\nC-1,Hall,comfort cooling,R-134a,60,lb",
        "date,appliance,what,amount,unit
         2019-01-10,C-1,charge,1,lb
         2019-07-09,C-1,charge,4,lb
         2024-05-05,C-1,charge,4,lb
         2026-05-05,C-1,charge,4,lb",
    );
    let on_2019 = office.one("2019-07-09");
    let found = rate(&on_2019, "us-82f").unwrap();
    // 180 days: 36500 × 4 / (60 × 180).
    assert_eq!((found.percent, found.days, found.verdict), (ratio("365/27"), Some(180), Verdict::Over));
    assert!(rate(&on_2019, "us-84c").is_none());
    assert!(told(&on_2019).iter().any(|duty| duty.starts_with("us-82f repair 2019-07-09")), "{:?}", told(&on_2019));

    let on_2024 = office.one("2024-05-05");
    assert!(on_2024.rulebooks.iter().all(|judgement| !judgement.applies && judgement.rate().is_none()));
    let why: Vec<&str> = on_2024.rulebooks.iter().map(|judgement| judgement.why.as_str()).collect();
    assert!(why[0].contains("no ozone-depleting refrigerant") && why[1].starts_with("begins 2026-01-01"), "{why:?}");

    let on_2026 = office.one("2026-05-05");
    assert!(rate(&on_2026, "us-82f").is_none());
    let found = rate(&on_2026, "us-84c").unwrap();
    assert_eq!((found.percent, found.days, found.verdict), (ratio("20/3"), Some(365), Verdict::Under));
    // And what was judged before is judged the same when looked at later.
    let rates = |id: &str| on_2026.rulebooks.iter().find(|judgement| judgement.id == id).unwrap().rates.clone();
    let found: Vec<_> = rates("us-82f").iter().map(|rate| (rate.on.to_string(), rate.percent)).collect();
    assert_eq!(found[1], ("2019-07-09".to_owned(), ratio("365/27")));
    assert_eq!((found.len(), rates("us-84c").len()), (2, 1));
}

/// The unmet duties of a rule that ends end with it.
#[test]
fn what_a_rule_asked_for_ends_with_it() {
    let story = Story::new("us-82f", ComfortCooling, "R-134a", "60 lb").log("2019-12-01 charge 1 lb\n2020-03-30 charge 20 lb");
    assert!(told(&story.on("2020-04-08")).contains(&"us-82f repair 2020-03-30 due 2020-04-29 open".to_owned()));
    assert!(told(&story.on("2020-04-10")).contains(&"us-82f repair 2020-03-30 due 2020-04-29 ended".to_owned()));
    assert!(rate(&story.on("2020-04-10"), "us-82f").is_none(), "the rulebook does not apply on the day asked about");
}

#[test]
fn part_84_begins_on_new_year_s_day_of_2026() {
    let story = Story::new("us-84c", CommercialRefrigeration, "R-448A", "100 lb").log("2025-12-31 charge 30 lb\n2026-01-01 charge 30 lb");
    assert!(rate(&story.on("2025-12-31"), "us-84c").is_none() && told(&story.on("2025-12-31")).is_empty());
    let first = story.on("2026-01-01");
    let found = rate(&first, "us-84c").unwrap();
    assert_eq!((found.percent, found.days, found.verdict), (ratio("30"), Some(365), Verdict::Over));
}

/// 84.106(b)(1) and (2) speak of the first use of each method: a site that
/// turns from one to the other has a first calculation of each.
#[test]
fn each_method_has_its_own_first_calculation() {
    let log = "2025-11-01 charge 8 lb\n2026-02-15 charge 3 lb\n2026-06-15 charge 1 lb";
    let mut story = Story::new("us-84c", ComfortCooling, "R-134a", "30 lb").log(log);
    let mut later = story.site.versions.latest().clone();
    later.rate_method = bubblepoint::ledger::RateMethod::RollingAverage;
    let dated = |from: Option<&str>, facts| bubblepoint::ledger::Dated { from: from.map(|day| day.parse().unwrap()), reason: None, facts };
    let first = story.site.versions.latest().clone();
    story.site.versions = bubblepoint::ledger::Versions::new(vec![dated(None, first), dated(Some("2026-04-01"), later)]).unwrap();
    let annualized = story.on("2026-02-15");
    assert_eq!(rate(&annualized, "us-84c").unwrap().percent, ratio("10"), "365 days");
    let rolling = story.on("2026-06-15");
    // 3 + 1 lb since 2026-01-01; the 8 lb of 2025 are left out.
    assert_eq!(rate(&rolling, "us-84c").unwrap().percent, ratio("40/3"));
    let said: Vec<String> =
        points(&rolling).into_iter().filter(|point| point.source == "40 CFR 84.106(b)(3)").map(|point| point.text).collect();
    assert!(said.len() == 1 && said[0].contains("annualizing to rolling average on 2026-04-01"), "{said:?}");
}

/// From 2026-07-23 no text of the Union says how a check is made; Great Britain's does.
#[test]
fn the_repeal_of_1516_2007_is_of_one_day() {
    let says_how = |book: &str, on: &str| {
        let story = Story::new(book, CommercialRefrigeration, "R-404A", "62 kg").installed("2020-05-01");
        points(&story.on(on)).iter().any(|point| point.source.contains("1516/2007"))
    };
    assert!(says_how("eu-573", "2026-07-22") && !says_how("eu-573", "2026-07-23"));
    assert!(says_how("gb-517", "2026-07-23"));
}

/// The owner's category, the charge and the gas are those of the day of each fact.
#[test]
fn a_retrofit_changes_what_the_next_record_is_judged_by() {
    let office = taken(
        "site,rulebooks\nHall,us-82f us-84c",
        "appliance,site,category,refrigerant,full_charge,unit,valid_from
         C-1,Hall,comfort cooling,R-22,100,lb,
         C-1,Hall,industrial process refrigeration,R-22,100,lb,2026-09-01",
        "date,appliance,what,amount,unit,purpose,new_refrigerant,new_full_charge,new_unit
         2025-06-01,C-1,charge,1,lb,,,,
         2026-05-27,C-1,charge,12,lb,,,,
         2026-09-24,C-1,charge,8,lb,,,,
         2026-10-01,C-1,retrofit,,,,R-448A,80,lb
         2026-10-01,C-1,charge,80,lb,retrofit,,,
         2026-10-31,C-1,charge,8,lb,,,,",
    );
    let may = office.one("2026-05-27");
    let found = rate(&may, "us-82f").unwrap();
    assert_eq!((found.trigger, found.verdict), (ratio("10"), Verdict::Over), "comfort cooling");
    let september = office.one("2026-09-24");
    let found = rate(&september, "us-82f").unwrap();
    // 120 days: 36500 × 8 / (100 × 120).
    assert_eq!((found.trigger, found.percent, found.verdict), (ratio("30"), ratio("73/3"), Verdict::Under), "industrial process");
    let october = office.one("2026-10-31");
    assert!(rate(&october, "us-82f").is_none(), "R-448A is no ozone-depleting refrigerant");
    let found = rate(&october, "us-84c").unwrap();
    assert_eq!((found.full_charge.in_unit(bubblepoint::quantity::MassUnit::Pound), found.percent), (ratio("80"), ratio("10")));
}
