//! The five places: Due, Plant, Cylinders, Account, Setup.

use crate::quantity::days_between;
use crate::rules::DutyKind;
use crate::view::format;
use chrono::NaiveDate;

/// The same in the few letters of a row.
pub fn none_due() -> String {
    "none due".to_owned()
}

pub fn trigger(figure: &str) -> String {
    format!("trigger {figure}")
}

pub fn month(day: NaiveDate) -> String {
    day.format("%B %Y").to_string()
}

pub fn history(additions: usize, over: usize, from: &str, to: &str, trigger: &str) -> String {
    let additions = if additions == 1 { "One addition".to_owned() } else { format!("{additions} additions") };
    let over = if over == 0 { "none".to_owned() } else { over.to_string() };
    format!("{additions} from {from} to {to}, {over} over the trigger of {trigger}")
}

/// `Wednesday 1 April 2026`.
pub fn weekday(day: NaiveDate) -> String {
    day.format("%A %-d %B %Y").to_string()
}

/// A duty in the few letters of a row; the page says the law's own name.
pub fn duty_short(kind: DutyKind) -> &'static str {
    match kind {
        DutyKind::Repair => "Repair",
        DutyKind::InitialVerification => "Initial test",
        DutyKind::FollowUpVerification => "Follow-up test",
        DutyKind::Plan => "Plan",
        DutyKind::LeakInspection => "Inspection",
        DutyKind::ChronicLeakReport => "Leak report",
        DutyKind::LeakCheck => "Leak check",
        DutyKind::ReCheck => "Re-check",
        DutyKind::RepairOfFoundLeak => "Leak repair",
        DutyKind::DetectionSystemCheck => "Detection system check",
        DutyKind::DetermineFullCharge => "Full charge",
    }
}

/// What a duty asks for; `percent` is its row's share of the full charge, where it has one.
pub fn duty_asks(kind: DutyKind, percent: &str) -> String {
    let asks = match kind {
        DutyKind::Repair => {
            "Repair the leaks until the rate is back under the trigger, then prove it by an initial and a follow-up verification test."
        }
        DutyKind::InitialVerification => {
            "Test every repaired leak before the appliance is charged again, and write the test down as its own entry."
        }
        DutyKind::FollowUpVerification => {
            "Test the repaired leaks again once the appliance is back in normal operation. The test must find no leak."
        }
        DutyKind::Plan => "Make a dated plan to retrofit or retire this appliance, keep it at the site, and enter that it was made.",
        DutyKind::LeakInspection => "Inspect all parts that can be seen and reached, with a direct method. Indirect methods do not count.",
        DutyKind::ChronicLeakReport => {
            return format!("Report that {percent} of full charge or more were added within a calendar year, and what was done about it.");
        }
        DutyKind::LeakCheck => "Check the appliance for leaks, the parts most likely to leak first. Inspections of this rulebook count.",
        DutyKind::ReCheck => "Check the repaired place again, to see that the repair holds.",
        DutyKind::RepairOfFoundLeak => "A leak was found: repair it without undue delay. Isolating it is no repair.",
        DutyKind::DetectionSystemCheck => "Check that the leakage detection system still raises its alarm.",
        DutyKind::DetermineFullCharge => "Determine the full charge and write down how: without it no leak rate can be judged.",
    };
    asks.to_owned()
}

/// `tomorrow`, `in 5 days`, `5 days late`.
pub fn until(due: NaiveDate, today: NaiveDate) -> String {
    match days_between(today, due) {
        0 => "today".to_owned(),
        1 => "tomorrow".to_owned(),
        days if days > 1 => format!("in {days} days"),
        -1 => "1 day late".to_owned(),
        days => format!("{} days late", -days),
    }
}

pub fn late() -> String {
    "Late".to_owned()
}

pub fn later() -> String {
    "Later".to_owned()
}

pub fn mothballed() -> String {
    "mothballed".to_owned()
}

pub fn in_use() -> String {
    "in use".to_owned()
}

pub fn retired() -> String {
    "retired".to_owned()
}

pub fn open_leaks() -> String {
    "Open leaks".to_owned()
}

pub fn met_lately() -> String {
    "Met lately".to_owned()
}

pub fn leak() -> String {
    "Leak".to_owned()
}

pub fn leak_of(appliance: &str) -> String {
    format!("Leak, {appliance}")
}

pub fn leak_asks() -> String {
    "Found and not yet repaired for good. A temporary repair, or shutting the section, meets no duty.".to_owned()
}

pub fn at_site(appliance: &str, site: &str) -> String {
    format!("{appliance}, {site}")
}

pub fn days(days: u32) -> String {
    format!("{days} days")
}

pub fn due_summary(late: usize, soon: usize, by: &str) -> String {
    match (late, soon) {
        (0, 0) => format!("nothing by {by}"),
        (0, soon) => format!("{soon} by {by}"),
        (late, 0) => format!("{late} late"),
        (late, soon) => format!("{late} late, {soon} by {by}"),
    }
}

pub fn reading_store() -> String {
    "Looking through the store\u{2026}".to_owned()
}

pub fn nothing_due() -> String {
    "Nothing is due. Duties, open leaks and open visits stand here.".to_owned()
}

pub fn begin() -> String {
    "Begin work here".to_owned()
}

pub fn first_company() -> (String, String) {
    ("Welcome. Records carry your company's name: write that down first.".to_owned(), "Write down the company".to_owned())
}

pub fn first_person() -> (String, String) {
    ("Next: who works. Each entry names a person and their certificate.".to_owned(), "Add a person".to_owned())
}

pub fn first_site() -> (String, String) {
    ("Next: where you work, and by which rules.".to_owned(), "Add a site".to_owned())
}

pub fn first_appliance() -> (String, String) {
    ("Next: the first appliance of that site. Identification and gas are enough.".to_owned(), "Add an appliance".to_owned())
}

pub fn first_cylinder() -> (String, String) {
    ("Next: a cylinder to charge from or recover into.".to_owned(), "Add a cylinder".to_owned())
}

pub fn first_visit() -> (String, String) {
    ("All is ready. Duties, open leaks and open visits will stand here.".to_owned(), begin())
}

pub fn count(number: usize, one: &str, many: &str) -> String {
    format!("{number} {}", if number == 1 { one } else { many })
}

pub fn plant_summary(sites: usize, appliances: usize) -> String {
    format!("{}, {}", count(sites, "site", "sites"), count(appliances, "appliance", "appliances"))
}

pub fn nothing_fits(text: &str) -> String {
    format!("Nothing fits \u{201c}{text}\u{201d}. Search by identification, site, serial, gas or job.")
}

pub fn no_cylinder_found(text: &str) -> String {
    format!("Nothing fits \u{201c}{text}\u{201d}. Search by identification, gas, status or where it is.")
}

pub fn plant_empty() -> String {
    "Sites stand here, and under each its appliances.".to_owned()
}

pub fn cylinders_empty() -> String {
    "Cylinders stand here, each with what is in it and what it may take.".to_owned()
}

pub fn account_empty() -> String {
    "The year's account grows from closed visits. Begin with one.".to_owned()
}

pub fn people_empty() -> String {
    "People who work stand here, each with their certificate.".to_owned()
}

pub fn instruments_empty() -> String {
    "Scales, detectors, gauges, recovery machines and hoses stand here. A scale's division is part of every weighing's error.".to_owned()
}

pub fn rulebooks_empty() -> String {
    "Each site is judged by its own rulebooks. Add a site in Plant.".to_owned()
}

pub fn visit_of(day: &str) -> String {
    format!("Visit of {day}")
}

pub fn was(value: &str) -> String {
    if value.is_empty() { "not written down before".to_owned() } else { format!("was {value}") }
}

pub fn not_a_day(text: &str) -> String {
    format!("\u{201c}{text}\u{201d} is not a day such as 2026-03-31.")
}

pub fn name_it(what: &str) -> String {
    format!("Write down how the {what} is called.")
}

pub fn choose_gas() -> String {
    "Choose a gas.".to_owned()
}

pub fn give_tare() -> String {
    "Write down the tare stamped on the cylinder.".to_owned()
}

pub fn why_it_changes() -> String {
    "Say why it changes: the history keeps it.".to_owned()
}

pub fn amend() -> String {
    "Amend what is marked.".to_owned()
}

pub fn choose_site_first() -> String {
    "Add a site first: an appliance stands at one.".to_owned()
}

pub fn lasts_from() -> String {
    "Say from which day it holds.".to_owned()
}

pub fn gas_left(mass: &str) -> String {
    format!("room {mass}")
}

pub fn overdue() -> String {
    "overdue".to_owned()
}

pub fn scrapped() -> String {
    "out of use".to_owned()
}

pub fn refuse_scrapped(reason: &str) -> String {
    format!("Out of use: {reason}. It may be emptied, never filled.")
}

pub fn refuse_overdue(day: &str) -> String {
    format!("Requalification was due on {day}. It may be emptied, never filled (49 CFR 180.205(c), 173.301(a)(6)).")
}

pub fn refuse_non_refillable() -> String {
    "Non-refillable: never filled (49 CFR 178.65).".to_owned()
}

pub fn refuse_mixed() -> String {
    "Mixed gas: never charged, and filled only with more for reclamation or destruction.".to_owned()
}

pub fn refuse_full() -> String {
    "No room is left up to the limit that binds.".to_owned()
}

pub fn refuse_rating(pressure: &str, allowed: &str) -> String {
    format!("Not rated for this gas: it reaches {pressure}, the cylinder allows {allowed}.")
}

pub fn refuse_named_rating(needed: &str, given: &str) -> String {
    format!("Not made for this gas: that takes a cylinder of {needed}, this one is stamped {given}.")
}

pub fn cylinders_summary(cylinders: usize, overdue: usize) -> String {
    let cylinders = count(cylinders, "cylinder", "cylinders");
    if overdue == 0 { cylinders } else { format!("{cylinders}, {overdue} overdue") }
}

pub fn account_extent(to: &str, visits: usize) -> String {
    format!("to {to}, from {}", count(visits, "visit", "visits"))
}

pub fn all_owners() -> String {
    "all owners".to_owned()
}

pub fn all_gases() -> String {
    "all gases".to_owned()
}

pub fn written_to(path: &str) -> String {
    format!("Written to {path}")
}

pub fn checked_sound(at: &str, records: usize) -> String {
    let records = match records {
        0 => "no closed record yet".to_owned(),
        1 => "1 closed record with its fingerprint".to_owned(),
        records => format!("{records} closed records, each with its fingerprint"),
    };
    format!("Checked {at}: {records}; nothing is wrong.")
}

pub fn checked_unsound(at: &str, faults: usize) -> String {
    format!("Checked {at}: {} found. Keep this file as it is, and go back to a backup.", count(faults, "fault", "faults"))
}

pub fn backed_up(path: &str) -> String {
    format!("Backed up to {path}")
}

pub fn only_in_memory() -> String {
    "in memory only".to_owned()
}

pub fn gone() -> String {
    "It is no longer there. Look through the list again.".to_owned()
}

pub fn tables(gwp: &str, odp: &str) -> String {
    format!("CO\u{2082} equivalent by {gwp}; ODP by {odp}")
}

pub fn units(mass: &str, pressure: &str, temperature: &str) -> String {
    format!("{mass}, {}, {temperature}", gauge(pressure))
}

pub fn gauge(pressure: &str) -> String {
    format!("{pressure} gauge")
}

pub fn paper_by_law() -> String {
    "by the site\u{2019}s law".to_owned()
}

pub fn look(appearance: &str, text_size: u32) -> String {
    format!("{appearance}, text {text_size} %")
}

pub fn last_gross(gross: &str, day: &str) -> String {
    format::commas([format!("last known {gross}").as_str(), day])
}

pub fn signed_later(name: &str, at: &str) -> String {
    format!("{name}, signed later, {at}")
}

pub fn in_time() -> String {
    "in time".to_owned()
}

pub fn too_late() -> String {
    "late".to_owned()
}

pub fn not_done() -> String {
    "not done".to_owned()
}

pub fn from_a_file() -> String {
    "from a file".to_owned()
}

pub fn corrected_later() -> String {
    "corrected".to_owned()
}

/// `Inspection (3)`.
pub fn counted(name: &str, count: usize) -> String {
    format!("{name} ({count})")
}

pub fn nobody_yet() -> String {
    "nobody yet".to_owned()
}

pub fn without_a_day() -> String {
    "Without a day".to_owned()
}

pub fn grouped_by(grouping: &str) -> String {
    format!("by {grouping}")
}

pub fn list_words(grouping: &str, days_ahead: Option<u32>) -> String {
    let grouped = format::capital(&grouped_by(grouping));
    days_ahead.map_or(grouped.clone(), |ahead| format!("{grouped}, {} ahead", days(ahead)))
}

pub fn and_more() -> String {
    "and more".to_owned()
}

pub fn check_due(day: &str) -> String {
    format!("check due {day}")
}
