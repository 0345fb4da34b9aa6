//! A company's own rulebook: added as a file, kept in the store, judged alike
//! by every command.

use super::{Desk, stocked};
use serde_json::Value;

const EXAMPLE: &str = include_str!("../../packaging/house-rules.toml");
const SITES: &str = "site,rulebooks,time_zone\nQuay,us-82f house-rules,UTC\n";
const APPLIANCES: &str = "appliance,site,category,refrigerant,full_charge,unit,installed_on\n\
    C-1,Quay,commercial refrigeration,R-22,100,lb,2026-01-31\n";
const LOG: &str = "date,appliance,what,amount,unit,result\n2026-03-01,C-1,charge,1,lb,\n2026-06-01,C-1,charge,2,lb,\n\
    2026-06-10,C-1,leak inspection,,,leak found\n";

fn desk() -> Desk {
    let desk = Desk::new();
    let said = desk.import(&[("log.csv", LOG), ("a.csv", APPLIANCES), ("s.csv", SITES), ("house.toml", EXAMPLE)]);
    assert!(said.contains("imported: 1 rulebook, 1 site, 1 appliance, 3 entries"), "{said}");
    desk
}

fn assessed(desk: &Desk) -> Value {
    serde_json::from_str(&desk.on_store(&["assess", "--on", "2026-06-11", "--format", "json"]).done()).unwrap()
}

#[test]
fn it_adds_its_triggers_intervals_and_duties() {
    let found = assessed(&desk());
    let own = &found["appliances"][0]["rulebooks"][1];
    assert_eq!((own["id"].as_str(), own["applies"].as_bool()), (Some("house-rules"), Some(true)));
    // 36500 × 2 / (100 × 92) against 5 %; under 20 % by 82.157.
    let rate = &own["rate"];
    assert_eq!(
        (rate["percent"].as_str(), rate["trigger_percent"].as_str(), rate["verdict"].as_str()),
        (Some("7.93"), Some("5"), Some("over trigger"))
    );
    assert_eq!(found["appliances"][0]["rulebooks"][0]["rate"]["verdict"], "under trigger");
    let duties: Vec<(&str, &str, &str)> = found["appliances"][0]["duties"]
        .as_array()
        .unwrap()
        .iter()
        .filter(|duty| duty["rulebook"] == "house-rules")
        .map(|duty| (duty["duty"].as_str().unwrap(), duty["due"].as_str().unwrap(), duty["source"].as_str().unwrap()))
        .collect();
    assert_eq!(
        duties,
        [
            // 1 lb after 29 days is over 5 % too.
            ("repair", "2026-03-08", "House rules, section 6"),
            ("repair", "2026-06-08", "House rules, section 6"),
            ("repair of a found leak", "2026-06-12", "House rules, section 4"),
            ("leak check", "2026-12-10", "House rules, section 3"),
        ]
    );
}

#[test]
fn it_stays_in_the_store_and_travels_with_it() {
    let desk = desk();
    desk.on_store(&["backup", "copy.db"]).done();
    let of = |store: &str| desk.run(&["--store", store, "assess", "--on", "2026-06-11", "--format", "json"]).done();
    assert_eq!(of("store.db"), of("copy.db"));
    // A later register line may name it, long after its file was added.
    desk.import(&[("more.csv", "site,rulebooks\nPier,house-rules\n")]);
}

#[test]
fn faults_name_file_line_and_field_and_nothing_is_taken() {
    let desk = Desk::new();
    desk.write("s.csv", SITES);
    desk.write("house.toml", &EXAMPLE.replace("months = 3", "munths = 3"));
    let refused = desk.on_store(&["import", "s.csv", "house.toml"]).refused();
    let line = EXAMPLE.lines().position(|line| line == "months = 3").unwrap() + 1;
    assert!(refused.contains(&format!("house.toml, line {line}: field munths: ")), "{refused}");
    assert!(refused.contains("nothing was imported"), "{refused}");
    assert!(!desk.path("store.db").exists());
}

#[test]
fn a_site_cannot_be_under_a_book_that_was_never_added() {
    let desk = stocked();
    desk.write("s.csv", SITES);
    let refused = desk.on_store(&["import", "s.csv"]).refused();
    assert!(refused.contains("\u{201c}house-rules\u{201d} is not a rulebook; known are us-82f, us-84c"), "{refused}");
}

#[test]
fn a_changed_file_takes_the_place_of_the_one_before_and_says_so() {
    let desk = desk();
    let said = desk.import(&[("stricter.toml", &EXAMPLE.replace("percent = \"5\"", "percent = \"8\""))]);
    assert!(said.contains("takes the place of the rulebook \u{201c}house-rules\u{201d}"), "{said}");
    assert_eq!(assessed(&desk)["appliances"][0]["rulebooks"][1]["rate"]["verdict"], "under trigger");
}
