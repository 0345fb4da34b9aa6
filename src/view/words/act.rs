//! The six actions: rates, verdicts, duties and what an entry says.

use crate::ledger::{ChargePurpose, RateMethod};
use crate::view::visit::Panel;
use crate::view::visit::repair::Step;

pub fn appliance(name: &str, gas: &str, full_charge: &str) -> String {
    format!("{name}, {gas}, {full_charge}")
}

pub fn appliance_plate(name: &str, gas: &str, full_charge: &str) -> String {
    format!("{name}   {gas}   {full_charge}")
}

pub fn cylinder_plate(name: &str, gas: &str, status: &str) -> String {
    [name, gas, status].into_iter().filter(|part| !part.is_empty()).collect::<Vec<_>>().join("   ")
}

pub fn percent_a_year() -> String {
    "% a year".to_owned()
}

pub fn no_rate_due() -> String {
    "no rate due".to_owned()
}

pub fn verdict(word: &str, within_error: bool) -> String {
    if within_error { format!("{word}, by less than the weighing error") } else { word.to_owned() }
}

pub fn duty_stands(next: &str) -> String {
    if next.is_empty() { "The duty stands.".to_owned() } else { format!("The duty stands: {next}") }
}

pub fn duty_by(duty: &str, day: &str, source: &str) -> String {
    format!("{duty} {day} ({source})")
}

pub fn no_addition_yet() -> String {
    "no addition has asked for a rate yet".to_owned()
}

pub fn no_rate_without_full_charge() -> String {
    "The full charge is not known yet, so no rate can be worked out.".to_owned()
}

pub fn no_rulebook() -> String {
    "No rulebook is set for this site.".to_owned()
}

/// Why an addition asks for no rate.
pub fn why_no_rate(purpose: ChargePurpose) -> String {
    match purpose {
        ChargePurpose::Installation => "Charged at installation.",
        ChargePurpose::FactoryCharge => "Factory charge.",
        ChargePurpose::Trim => "Trimmed at commissioning.",
        ChargePurpose::Retrofit => "Charged after a retrofit.",
        ChargePurpose::Seasonal => "Returned for the season: as much was recovered before.",
        ChargePurpose::Mothball => "Put back after mothballing: as much was recovered before.",
        ChargePurpose::Returned | ChargePurpose::Replacement | ChargePurpose::Leak | ChargePurpose::SameLeak => {
            "Put back: as much was recovered in this work."
        }
    }
    .to_owned()
}

pub fn trigger_title(trigger: &str) -> String {
    format!("Trigger {trigger}")
}

pub fn annualizing_title() -> String {
    "Annualizing method".to_owned()
}

pub fn annualizing_text() -> String {
    "Gas added, over full charge, times 365 over the days since the last addition before this work (at most 365).".to_owned()
}

pub fn rolling_title() -> String {
    "Rolling average method".to_owned()
}

pub fn rolling_text() -> String {
    "Gas added on the last 365 days, or since the last follow-up test that counts, over full charge.".to_owned()
}

/// The sum of a rate, as the window works it through.
pub fn sum(year: i64, added: &str, full_charge: &str, days: Option<i64>) -> String {
    match days {
        Some(days) => format!("100 \u{d7} {year} \u{d7} {added} / ({full_charge} \u{d7} {days})"),
        None => format!("100 \u{d7} {added} / {full_charge}"),
    }
}

pub fn applies_because(rulebook: &str, applies: bool) -> String {
    if applies { format!("{rulebook} applies") } else { format!("{rulebook} does not apply") }
}

pub fn co2e(set: &str) -> String {
    format!("CO\u{2082} equivalent, {set}")
}

pub fn odp_weighted() -> String {
    "ODP-weighted".to_owned()
}

pub fn not_in_table() -> String {
    "no value in this table".to_owned()
}

pub fn tonnes(figure: &str) -> String {
    format!("{figure} t")
}

pub fn kilograms(figure: &str) -> String {
    format!("{figure} kg")
}

pub fn to_full_charge() -> String {
    "to full charge".to_owned()
}

pub fn short_by(amount: &str) -> String {
    if amount.is_empty() { "short of full charge".to_owned() } else { format!("short by about {amount}") }
}

pub fn short_amount_missing() -> String {
    "Write by about how much it is short, with its unit.".to_owned()
}

pub fn glide_words(gas: &str) -> String {
    format!("{gas} fractionates: taking vapour changes what is left. Take liquid.")
}

pub fn cannot_be_charged() -> String {
    "This cannot be charged".to_owned()
}

pub fn cannot_be_recovered() -> String {
    "This cylinder cannot be filled".to_owned()
}

pub fn left_to_judgement() -> String {
    "Left to your judgement".to_owned()
}

pub fn say_why_it_differs() -> String {
    "Say why the cylinder weighs otherwise.".to_owned()
}

pub fn reason_missing() -> String {
    "Going on needs a reason, which is printed.".to_owned()
}

pub fn level_to_reach() -> String {
    "level to reach".to_owned()
}

pub fn level_to_reach_by(source: &str) -> String {
    format!("level to reach, {source}")
}

pub fn level_by_maker() -> String {
    "as the maker and local law ask".to_owned()
}

pub fn indirect_method() -> String {
    "An indirect method: it shows that gas is missing, not where. It is no leak inspection.".to_owned()
}

/// Why an indirect method is no inspection, in the few letters of a choice.
pub fn indirect() -> String {
    "indirect method".to_owned()
}

pub fn no_detector() -> String {
    "no detector".to_owned()
}

pub fn check_overdue(day: &str) -> String {
    format!("check is overdue since {day}")
}

pub fn checked(day: &str) -> String {
    format!("checked {day}")
}

pub fn add_the_place() -> String {
    "Add the place where the leak is.".to_owned()
}

pub fn say_the_parts() -> String {
    "Write which parts were looked at.".to_owned()
}

pub fn leaks_found(count: usize) -> String {
    if count == 1 { "1 leak".to_owned() } else { format!("{count} leaks") }
}

pub fn place_known(place: &str) -> String {
    format!("\u{201c}{place}\u{201d} is on the list already.")
}

pub fn another_place() -> String {
    "another place".to_owned()
}

pub fn say_what_was_done() -> String {
    "Write what was done.".to_owned()
}

pub fn say_where() -> String {
    "Write where it was repaired.".to_owned()
}

pub fn no_repair_yet() -> String {
    "Enter the repair first.".to_owned()
}

pub fn repaired(when: &str) -> String {
    format!("repaired {when}")
}

pub fn save_repair() -> String {
    "Save repair".to_owned()
}

pub fn save_initial_test() -> String {
    "Save initial test".to_owned()
}

pub fn save_follow_up_test() -> String {
    "Save follow-up test".to_owned()
}

pub fn save_normal_operation() -> String {
    "Save normal operation".to_owned()
}

pub fn asked_for_by() -> String {
    "asked for by".to_owned()
}

pub fn temporary() -> String {
    "temporary".to_owned()
}

pub fn take_a_reading() -> String {
    "Take at least two readings.".to_owned()
}

/// A series of readings is kept; its shape is not judged here.
pub fn kept_as_read() -> String {
    "kept as read, not judged".to_owned()
}

pub fn reading_not_a_number(text: &str) -> String {
    format!("\u{201c}{text}\u{201d} is not a number.")
}

pub fn note_empty() -> String {
    "Write the note.".to_owned()
}

/// What a dated fact does to duties.
pub fn note_kind(kind: &str) -> String {
    match kind {
        "normal operation" => "The follow-up test counts its days from here.",
        "mothball" => "The clock of open duties stands still until gas is added again.",
        "retrofit" => "From here on another gas: duties of the old one end, the account begins anew.",
        "retire" => "The appliance leaves service; its duties end. Nothing more is entered on it.",
        "detection system check" => "Meets the yearly check of the leakage detection system.",
        "plan made" => "Meets the duty of a retrofit or retirement plan.",
        "report sent" => "Meets the duty of a chronic leak report.",
        "recycle" => "The whole recovered content of the cylinder counts as recycled from here.",
        _ => "",
    }
    .to_owned()
}

/// What a dated fact is called among the choices of a note.
pub fn note_name(kind: &str) -> &str {
    match kind {
        "mothball" => "mothballed",
        "retrofit" => "retrofitted",
        "retire" => "retired",
        "detection system check" => "detection system checked",
        "recycle" => "gas recycled",
        other => other,
    }
}

/// The action, as a heading.
pub fn act(panel: Panel) -> String {
    match panel {
        Panel::Recover => "Recover",
        Panel::LeakTest => "Leak test",
        Panel::Repair => "Repair",
        Panel::Pressure => "Pressure or vacuum",
        _ => "Charge",
    }
    .to_owned()
}

pub fn repair_step(step: Step) -> &'static str {
    match step {
        Step::Repair => "repair",
        Step::Initial => "initial test",
        Step::FollowUp => "follow-up test",
        Step::NormalOperation => "normal operation",
    }
}

/// Why gas was added, in the trade's words; files keep the short ones.
pub fn charge_purpose(purpose: ChargePurpose) -> &'static str {
    match purpose {
        ChargePurpose::Trim => "commissioning trim",
        ChargePurpose::Retrofit => "after retrofit",
        ChargePurpose::Seasonal => "seasonal return",
        ChargePurpose::Mothball => "after mothballing",
        ChargePurpose::Returned => "recovered gas put back",
        ChargePurpose::Replacement => "replaces gas recovered in this job",
        ChargePurpose::Leak | ChargePurpose::SameLeak | ChargePurpose::Installation | ChargePurpose::FactoryCharge => purpose.name(),
    }
}

/// What stands above a leak rate: by which method, where one is due.
pub fn leak_rate(method: Option<RateMethod>) -> String {
    match method {
        Some(RateMethod::Annualizing) => "leak rate, annualizing method",
        Some(RateMethod::RollingAverage) => "leak rate, rolling average method",
        None => "leak rate",
    }
    .to_owned()
}

pub fn reading_taken() -> String {
    "reading taken".to_owned()
}

pub fn pressure_absolute() -> String {
    "pressure, absolute".to_owned()
}

pub fn pressure_gauge() -> String {
    "pressure, gauge".to_owned()
}

pub fn pipe_temperature() -> String {
    "pipe temperature".to_owned()
}

pub fn minutes() -> String {
    "minutes".to_owned()
}

pub fn change() -> String {
    "change".to_owned()
}
