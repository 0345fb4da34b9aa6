//! Where a text allows more than one reading, the one that was taken, told
//! where it mattered; and why an addition asked for no rate.

use super::history::History;
use super::rate::{LeakRate, Verdict};
use crate::ledger::{Act, ChargePurpose, RateMethod};
use crate::quantity::Mass;

/// A reading that a rate rests on.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Reading {
    pub text: String,
    pub source: String,
}

/// The readings that mattered to one rate.
pub fn readings(history: &History, rate: &LeakRate) -> Vec<Reading> {
    let mut readings = Vec::new();
    let mut say = |text: String, source: &str| readings.push(Reading { text, source: source.to_owned() });
    match rate.method {
        RateMethod::Annualizing => say(
            format!("days are counted from the latest day with any charge before this work, and never more than {}", rate.longest_days),
            "40 CFR 82.152, leak rate, annualizing method",
        ),
        RateMethod::RollingAverage => say(
            format!(
                "counted is what was added on the {} days up to the addition, that day among them, or since the last follow-up test that counts",
                rate.longest_days
            ),
            "40 CFR 82.152, leak rate, rolling average method",
        ),
    }
    let works = history.chain(rate.charge).count();
    if works > 1 && rate.method == RateMethod::Annualizing {
        say(
            format!("{works} additions for the same leak are one rate; its days run to the last of them"),
            "40 CFR 82.152, leak rate, annualizing method",
        );
    }
    let put_back = put_back(history, rate);
    if put_back.is_positive() {
        say(
            format!("{} kg that was recovered in the same work was put back and is not added", put_back.kg_text()),
            "40 CFR 82.152, leak rate",
        );
    }
    for line in counted_lines(history, rate) {
        if let Act::Charge { purpose: purpose @ (ChargePurpose::Seasonal | ChargePurpose::Mothball), .. } = &history.lines[line].act {
            say(
                format!("the {purpose} charge of {} is over what was recovered for it, or too late: it counts wholly", history.date(line)),
                "40 CFR 82.152, seasonal variance, mothball",
            );
        }
    }
    if rate.verdict == Verdict::At {
        say("at the trigger is not over it, and not below it: it asks for no repair and proves none".to_owned(), &rate.trigger_source);
    }
    readings
}

/// The counted charges that the rate of a day sums up, as far as its work or chain goes.
fn counted_lines(history: &History, rate: &LeakRate) -> Vec<usize> {
    let lines = history.chain(rate.charge).flat_map(|work| work.lines.iter().copied());
    let mut counted: Vec<usize> = lines.filter(|&line| history.counted[line] && history.date(line) <= rate.on).collect();
    counted.sort_unstable();
    counted
}

fn put_back(history: &History, rate: &LeakRate) -> Mass {
    let lines = history.chain(rate.charge).flat_map(|work| work.lines.iter().copied());
    lines
        .filter(|&line| history.date(line) <= rate.on)
        .filter_map(|line| match &history.lines[line].act {
            Act::Charge { purpose, transfer } if purpose.nets_recovered() => Some(transfer.mass - history.added[line]),
            _ => None,
        })
        .sum()
}

/// Why a charge of this purpose asked for no rate, with the article.
pub fn why_no_rate(purpose: ChargePurpose) -> (&'static str, &'static str) {
    const RATE: &str = "40 CFR 82.157(b), 84.106(b)";
    match purpose {
        ChargePurpose::Installation => ("charged at installation", RATE),
        ChargePurpose::FactoryCharge => ("factory charge", RATE),
        ChargePurpose::Trim => ("trimmed at commissioning", RATE),
        ChargePurpose::Retrofit => ("charged after a retrofit", RATE),
        ChargePurpose::Seasonal => ("returned for the season; as much was recovered before", "40 CFR 82.152, seasonal variance"),
        ChargePurpose::Mothball => ("put back after mothballing; as much was recovered before", "40 CFR 82.152, mothball"),
        ChargePurpose::Returned | ChargePurpose::Replacement | ChargePurpose::Leak | ChargePurpose::SameLeak => {
            ("put back; as much was recovered in this work", "40 CFR 82.152, leak rate")
        }
    }
}
