//! Weighing: readings, cylinders, gaps, limits.

pub fn last_known(gross: &str) -> String {
    format!("last {gross}")
}

pub fn calculated_last(gross: &str) -> String {
    format!("by the record {gross}")
}

pub fn gross_before() -> String {
    "gross before".to_owned()
}

pub fn gross_after() -> String {
    "gross after".to_owned()
}

/// The last reading is taken after the line is off (49 CFR 173.304a(c)).
pub fn line_off_after() -> String {
    "gross after, line off".to_owned()
}

pub fn reading_at_start() -> String {
    "zeroed, at start".to_owned()
}

pub fn reading_at_end() -> String {
    "at end".to_owned()
}

pub fn ounces() -> String {
    "and ounces".to_owned()
}

pub fn by_the_plate() -> String {
    "charged by the maker".to_owned()
}

pub fn net_charged() -> String {
    "net charged".to_owned()
}

pub fn net_recovered() -> String {
    "net recovered".to_owned()
}

pub fn plus_minus(error: &str) -> String {
    format!("\u{b1} {error}")
}

pub fn last_digit_counts() -> String {
    "no scale named: the last digit typed counts as its division".to_owned()
}

pub fn no_scale() -> String {
    "another scale".to_owned()
}

pub fn not_weighed() -> String {
    "not weighed".to_owned()
}

pub fn limit_binds(mass: &str, name: &str) -> String {
    format!("limit {mass}, {name}")
}

pub fn damaged(what: &str) -> String {
    format!("damaged: {what}")
}

pub fn tare_lost() -> String {
    "5 % or more of its tare lost: to be requalified".to_owned()
}

pub fn no_limit_for_gas() -> String {
    "no limit is known for this gas".to_owned()
}

pub fn no_limit() -> String {
    "limit unknown: water capacity to complete".to_owned()
}

pub fn gap(cylinder: &str, known: &str, difference: &str, more: bool) -> String {
    let way = if more { "more" } else { "less" };
    format!("{cylinder} weighed {known} when last known; this is {difference} {way}.")
}

pub fn for_charging(appliance: &str, gas: &str) -> String {
    format!("for charging {appliance}, {gas}")
}

pub fn for_recovery(appliance: &str, gas: &str) -> String {
    format!("for recovering {gas} from {appliance}")
}

pub fn no_cylinder_fits(gas: &str) -> String {
    format!("No cylinder with {gas} is known. Add the one you have.")
}

pub fn choose_the_cylinder() -> String {
    "Choose the cylinder.".to_owned()
}

pub fn cylinder_facts(status: &str, place: &str) -> String {
    super::super::format::commas([status, place])
}

pub fn another_gas() -> String {
    "another gas".to_owned()
}

pub fn no_gas_known() -> String {
    "no gas written down".to_owned()
}

pub fn empty() -> String {
    "empty".to_owned()
}

pub fn hose_name(length: &str, bore: &str, gas: &str) -> String {
    format!("Hose {length} m, {bore} mm, {gas}")
}

pub fn hose_figures_missing() -> String {
    "Write the length and bore of the hoses that were not emptied.".to_owned()
}

pub fn hose_content_unknown(gas: &str) -> String {
    format!("What hoses of {gas} can hold is not known: no liquid density. Empty them, or take a set of hoses from Setup.")
}

pub fn tare_missing() -> String {
    "Write the tare stamped on it, with its unit.".to_owned()
}

pub fn room_left_in(cylinder: &str, limit: &str) -> String {
    format!("of room left in {cylinder}; {limit} binds")
}

pub fn room_over(cylinder: &str, limit: &str) -> String {
    format!("over the limit of {cylinder} ({limit}): stop, and empty it at once")
}

pub fn room_unknown() -> String {
    "The room left is not known: write down the cylinder\u{2019}s water capacity or stamped maximum.".to_owned()
}

pub fn left_in(cylinder: &str) -> String {
    format!("left in {cylinder}")
}

pub fn scale_zeroed() -> &'static str {
    "scale zeroed"
}

pub fn gross_twice() -> &'static str {
    "gross before, after"
}

pub fn say_the_cylinder() -> String {
    "Write the identification stamped on the cylinder.".to_owned()
}

pub fn room(mass: &str) -> String {
    format!("room {mass}")
}

pub fn out_of_use(why: &str) -> String {
    format!("out of use: {why}")
}

pub fn mixed_gas() -> String {
    "mixed gas".to_owned()
}

pub fn recovered_gas() -> String {
    "recovered gas, not recycled or reclaimed".to_owned()
}

pub fn overdue(day: &str) -> String {
    format!("to be requalified by {day}")
}

pub fn cylinder(name: &str) -> String {
    format!("cylinder {name}")
}
