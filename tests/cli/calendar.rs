//! `assess --format ics`, read back by the rules of RFC 5545.

use super::{Desk, stocked};
use std::collections::{BTreeMap, BTreeSet};

/// The events of a calendar by id, each property by name.
fn events(text: &str) -> BTreeMap<String, BTreeMap<String, String>> {
    assert!(text.starts_with("BEGIN:VCALENDAR\r\nVERSION:2.0\r\nPRODID:") && text.ends_with("END:VCALENDAR\r\n"), "{text}");
    assert!(!text.replace("\r\n", "").contains(['\r', '\n']), "every line ends with CR LF");
    assert!(text.split_terminator("\r\n").all(|line| line.len() <= 75), "no line is longer than 75 octets");
    let mut events = BTreeMap::new();
    let mut event: Option<BTreeMap<String, String>> = None;
    for line in text.replace("\r\n ", "").split_terminator("\r\n") {
        let (name, value) = line.split_once(':').unwrap();
        match (name, value, &mut event) {
            ("BEGIN", "VEVENT", None) => event = Some(BTreeMap::new()),
            ("END", "VEVENT", Some(found)) => {
                let id = found["UID"].clone();
                assert!(events.insert(id.clone(), std::mem::take(found)).is_none(), "{id} stands twice");
                event = None;
            }
            (name, value, Some(found)) => assert!(found.insert(name.to_owned(), value.to_owned()).is_none(), "{name} stands twice"),
            _ => {}
        }
    }
    events
}

fn exported(desk: &Desk, on: &str) -> BTreeMap<String, BTreeMap<String, String>> {
    let text = desk.on_store(&["assess", "--on", on, "--format", "ics"]).done();
    assert_eq!(text, desk.on_store(&["assess", "--on", on, "--format", "ics"]).done(), "the same store and day give the same bytes");
    events(&text)
}

fn summaries(events: &BTreeMap<String, BTreeMap<String, String>>, status: &str) -> Vec<(String, String)> {
    let of_status = events.values().filter(|event| event["STATUS"] == status);
    let mut found: Vec<_> = of_status.map(|event| (event["DTSTART;VALUE=DATE"].clone(), event["SUMMARY"].clone())).collect();
    found.sort();
    found
}

const AFTER: &str = "date,appliance,what,result\n2026-03-20,R-1,repair,\n2026-03-20,R-1,initial verification test,pass\n";

#[test]
fn duties_stand_on_their_due_days() {
    let desk = stocked();
    let found = exported(&desk, "2026-03-10");
    assert_eq!(
        summaries(&found, "CONFIRMED"),
        [
            ("20260402".to_owned(), "Initial verification test: R-1".to_owned()),
            ("20260402".to_owned(), "Repair: R-1".to_owned()),
            ("20261231".to_owned(), "Leak inspection: R-1".to_owned()),
        ]
    );
    let repair = found.values().find(|event| event["SUMMARY"] == "Repair: R-1").unwrap();
    assert_eq!(
        (repair["DTSTAMP"].as_str(), repair["DTEND;VALUE=DATE"].as_str(), repair["LOCATION"].as_str()),
        ("20260310T000000Z", "20260403", "Fish market cold store")
    );
    assert_eq!(repair["DESCRIPTION"], "40 CFR part 82 subpart F\\n40 CFR 82.157(d)\\nSince 2026-03-03\\, due 2026-04-02: open");
}

#[test]
fn a_second_export_updates_and_does_not_duplicate() {
    let desk = stocked();
    let first = exported(&desk, "2026-03-10");
    desk.import(&[("after.csv", AFTER)]);
    let second = exported(&desk, "2026-03-21");
    let ids = |events: &BTreeMap<String, BTreeMap<String, String>>| events.keys().cloned().collect::<BTreeSet<_>>();
    assert!(ids(&first).is_subset(&ids(&second)), "what was exported is updated, not left behind");
    assert_eq!(ids(&second).len(), ids(&first).len() + 1, "the follow-up test is new");
    for id in ids(&first) {
        let number = |event: &BTreeMap<String, String>| event["SEQUENCE"].parse::<u64>().unwrap();
        assert!(number(&second[&id]) > number(&first[&id]), "the later export counts");
    }
    let met = summaries(&second, "CANCELLED");
    assert_eq!(met.iter().map(|(_, summary)| summary.as_str()).collect::<Vec<_>>(), ["Initial verification test: R-1", "Repair: R-1"]);
    let open = summaries(&second, "CONFIRMED");
    assert!(open.contains(&("20260330".to_owned(), "Follow-up verification test: R-1".to_owned())), "{open:?}");
}

/// Of a check that recurs only the next is known: its event moves on.
#[test]
fn a_recurring_check_keeps_its_event() {
    let desk = Desk::new();
    desk.import(&[
        ("sites.csv", "site,rulebooks,time_zone\nQuay,eu-573,UTC\n"),
        (
            "appliances.csv",
            "appliance,site,category,refrigerant,full_charge,unit,installed_on\nF-1,Quay,commercial refrigeration,R-404A,62,kg,2026-01-31\n",
        ),
    ]);
    let first = exported(&desk, "2026-02-01");
    desk.import(&[("log.csv", "date,appliance,what,result\n2026-05-20,F-1,leak inspection,no leak\n")]);
    let second = exported(&desk, "2026-05-21");
    assert_eq!(summaries(&first, "CONFIRMED"), [("20260731".to_owned(), "Leak check: F-1".to_owned())]);
    assert_eq!(summaries(&second, "CONFIRMED"), [("20261120".to_owned(), "Leak check: F-1".to_owned())]);
    assert_eq!(first.keys().collect::<Vec<_>>(), second.keys().collect::<Vec<_>>());
}
