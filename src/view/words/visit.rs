//! The visit: where, who, what is still open, what is missing, closing.

pub fn charge_unknown() -> String {
    "full charge to complete".to_owned()
}

pub fn visit_since(since: &str) -> String {
    format!("open since {since}")
}

pub fn site_since(site: &str, since: &str) -> String {
    format!("{site}, since {since}")
}

pub fn still_open_here(count: usize) -> String {
    if count == 0 { String::new() } else { format!("{count} still open here") }
}

pub fn appliances_here(count: usize, address: &str) -> String {
    let count = match count {
        0 => "no appliance yet".to_owned(),
        1 => "1 appliance".to_owned(),
        more => format!("{more} appliances"),
    };
    if address.is_empty() { count } else { format!("{count}, {address}") }
}

pub fn visit_open_there() -> String {
    "visit open".to_owned()
}

pub fn no_site_fits(search: &str) -> String {
    if search.trim().is_empty() {
        "No site yet. Add the first one.".to_owned()
    } else {
        format!("No site fits \u{201c}{}\u{201d}.", search.trim())
    }
}

pub fn no_appliance_fits(search: &str) -> String {
    if search.trim().is_empty() {
        "No appliance here yet. Add the one you stand at.".to_owned()
    } else {
        format!("No appliance here fits \u{201c}{}\u{201d}.", search.trim())
    }
}

pub fn say_your_name() -> String {
    "Write your name: it stands on the record.".to_owned()
}

pub fn say_the_site() -> String {
    "Write how the site is called.".to_owned()
}

pub fn say_the_identification() -> String {
    "Write the appliance\u{2019}s identification.".to_owned()
}

pub fn say_the_gas() -> String {
    "Write which gas it holds.".to_owned()
}

pub fn unknown_gas(gas: &str, like: &[&str]) -> String {
    let hint = if like.is_empty() { String::new() } else { format!(" Do you mean {}?", like.join(", ")) };
    format!("\u{201c}{gas}\u{201d} is not in the gas catalogue.{hint}")
}

/// Which law was taken for a new site, and where to change it.
pub fn rulebooks_taken(rulebooks: &str) -> String {
    if rulebooks.is_empty() {
        "No rulebook is set for this site: no leak rate is due. Choose its law in Plant.".to_owned()
    } else {
        format!("Judged here by {rulebooks}. If another law holds, change it in Plant.")
    }
}

pub fn nothing_entered() -> String {
    "Nothing entered yet. Choose what you did.".to_owned()
}

pub fn entries(count: usize) -> String {
    match count {
        0 => "no entry yet".to_owned(),
        1 => "1 entry".to_owned(),
        count => format!("{count} entries"),
    }
}

pub fn struck(why: &str) -> String {
    if why.is_empty() { "struck".to_owned() } else { format!("struck: {why}") }
}

pub fn corrected(why: &str) -> String {
    if why.is_empty() { "corrected".to_owned() } else { format!("corrected: {why}") }
}

pub fn open_leak_at(appliance: &str) -> String {
    format!("Open leak, {appliance}")
}

pub fn leak_place(place: &str) -> String {
    if place.is_empty() { "place not written down".to_owned() } else { place.to_owned() }
}

pub fn since(day: &str) -> String {
    format!("since {day}")
}

pub fn leak_state(state: &str) -> String {
    if state.is_empty() { "open".to_owned() } else { state.to_owned() }
}

pub fn duty_at(duty: &str, appliance: &str) -> String {
    format!("{duty}, {appliance}")
}

pub fn by_day(day: &str) -> String {
    format!("by {day}")
}

pub fn late_since(day: &str) -> String {
    format!("late since {day}")
}

pub fn without_undue_delay() -> String {
    "without undue delay".to_owned()
}

pub fn no_day_yet() -> String {
    "no day yet".to_owned()
}

pub fn suspended() -> String {
    "suspended".to_owned()
}

pub fn unanswered() -> String {
    "unanswered".to_owned()
}

pub fn weighed_otherwise(cylinder: &str) -> String {
    format!("cylinder {cylinder} weighed otherwise than last known")
}

pub fn certificate(kind: &str, number: &str) -> String {
    match (kind.is_empty(), number.is_empty()) {
        (_, true) => "certificate to complete".to_owned(),
        (true, false) => format!("certificate {number}"),
        (false, false) => format!("{kind}, certificate {number}"),
    }
}

pub fn stays_at_work() -> String {
    "Who is at work in a visit stays on its record.".to_owned()
}

pub fn acknowledge_each() -> String {
    "Acknowledge each caution to go on.".to_owned()
}

pub fn missing(appliance: &str, what: &str) -> String {
    format!("{appliance}: {what}")
}

pub fn missing_full_charge() -> String {
    "full charge, without which no leak rate is worked out".to_owned()
}

pub fn missing_category() -> String {
    "what it is used for, on which its trigger depends".to_owned()
}

pub fn missing_initial_test() -> String {
    "initial verification test of the repair".to_owned()
}

pub fn missing_certificate(person: &str) -> String {
    format!("certificate of {person}")
}

pub fn missing_company() -> String {
    "name and certificate of your company".to_owned()
}

pub fn not_signed(who: &str) -> String {
    format!("The {who} has not signed yet.")
}

pub fn name_missing() -> String {
    "Write the representative\u{2019}s name.".to_owned()
}

pub fn refusal_reason_missing() -> String {
    "Write why the signature was refused.".to_owned()
}

pub fn nothing_to_close() -> String {
    "Nothing was entered at this visit. Enter what was done, a note at least.".to_owned()
}

pub fn closed_at(when: &str) -> String {
    format!("closed {when}")
}

pub fn starts(duty: &str) -> String {
    format!("starts: {duty}")
}

pub fn met(duty: &str) -> String {
    format!("met: {duty}")
}

/// `charge on R-1`: work that was begun.
pub fn begun_on(action: &str, appliance: &str) -> String {
    format!("{action} on {appliance}")
}

pub fn not_saved(begun: &str) -> String {
    format!("begun and not saved: {begun}; closing drops it")
}

pub fn dropped(begun: &[String]) -> String {
    format!("Not saved, and so not in the record: {}.", begun.join(", "))
}

pub fn handed_over_to(whom: &str, way: &str) -> String {
    format!("{whom}, {way}")
}

pub fn to_whom_missing() -> String {
    "Write to whom.".to_owned()
}

pub fn no_such_visit() -> String {
    "There is no such visit in this store.".to_owned()
}

pub fn record_not_printed(cause: &str) -> String {
    format!("The visit is closed and safe, but its record could not be written: {cause} It can be printed again from the visit.")
}

pub fn cannot_open(path: &str, cause: &str) -> String {
    format!("No program here opens it ({cause}). It lies at {path}.")
}

pub fn taken_up_again(site: &str) -> String {
    format!("The open visit at {site}, with what you were typing.")
}

pub fn say_why() -> String {
    "Say why.".to_owned()
}

pub fn sign_the_correction() -> String {
    "A correction is signed.".to_owned()
}

pub fn correction_saved(fingerprint: &str) -> String {
    format!("The correction is closed as record {fingerprint}; the old entry names it.")
}

pub fn window_failed(cause: &str) -> String {
    format!("The window cannot open: {cause}. The commands work without one; see bubblepoint --help.")
}

pub fn no_display() -> String {
    "There is no display to open a window on. The commands work without one; see bubblepoint --help.".to_owned()
}

pub fn full_charge_in_plant() -> String {
    "Write the full charge, and how it was determined, on the appliance\u{2019}s page in Plant.".to_owned()
}

pub fn now() -> String {
    "now".to_owned()
}

pub fn now_is(time: &str) -> String {
    format!("now, {time}")
}

pub fn time_of_day() -> String {
    "time of day".to_owned()
}

pub fn time_missing() -> String {
    "Type hours and minutes, as 9 4 5 for 9:45.".to_owned()
}

pub fn time_to_complete() -> String {
    "time to complete".to_owned()
}

pub fn no_such_time(typed: &str) -> String {
    format!("{typed} is no time of day.")
}

/// `Apr`: a month among steppers.
pub fn month_short(day: chrono::NaiveDate) -> String {
    day.format("%b").to_string()
}

pub fn signed(name: &str) -> String {
    format!("{name}, signed")
}

pub fn handed_over_at(when: &str) -> String {
    format!("handed over {when}")
}

pub fn only_taken_out() -> String {
    "This entry can only be taken out. What holds instead is entered anew at a visit.".to_owned()
}

pub fn right_net() -> String {
    "right net, with unit".to_owned()
}

pub fn right_work() -> String {
    "what was done, in right words".to_owned()
}

pub fn right_recycling() -> String {
    "machine, filter, check, in right words".to_owned()
}

pub fn right_readings() -> String {
    "right readings".to_owned()
}

pub fn right_words() -> String {
    "right words for the note".to_owned()
}

pub fn say_instead() -> String {
    "Say what is right instead, or that it never happened.".to_owned()
}
