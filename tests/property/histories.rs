//! Random histories: what must not change a judgement does not.

use crate::support::story::{Story, day, told};
use bubblepoint::ledger::Category::CommercialRefrigeration;
use bubblepoint::quantity::{Ratio, add_months};
use bubblepoint::rules::{DutyKind, DutyState, Judgement};
use chrono::{Days, NaiveDate};
use proptest::prelude::*;

/// A line of a random history: days after the first, and what was done.
fn line() -> impl Strategy<Value = (u64, String)> {
    let act = prop_oneof![
        4 => (1_u32..400, prop::sample::select(vec!["leak", "same leak", "replacement", "returned", "seasonal"]))
            .prop_map(|(tenths, purpose)| format!("charge {}.{} lb {purpose}", tenths / 10, tenths % 10)),
        2 => (1_u32..400, prop::sample::select(vec!["repair", "seasonal"]))
            .prop_map(|(tenths, purpose)| format!("recover {}.{} lb {purpose}", tenths / 10, tenths % 10)),
        2 => Just("repair".to_owned()),
        2 => Just("initial verification test: pass".to_owned()),
        2 => Just("follow-up verification test: pass".to_owned()),
        1 => Just("leak inspection: no leak".to_owned()),
        1 => Just("leak inspection: leak found".to_owned()),
        1 => Just("normal operation".to_owned()),
        1 => Just("plan made".to_owned()),
        1 => Just("mothball".to_owned()),
    ];
    (0_u64..700, act)
}

fn story(lines: &[(u64, String)]) -> Story {
    let mut lines = lines.to_vec();
    lines.sort_by_key(|(after, _)| *after);
    let first = day("2025-01-01");
    let log: Vec<String> =
        lines.iter().map(|(after, act)| format!("{} {act}", first.checked_add_days(Days::new(*after)).unwrap())).collect();
    // A blend that every one of these takes.
    let books = "us-82f us-84c eu-590 gb-1005 ca-halocarbon";
    Story::new(books, CommercialRefrigeration, "R-408A", "220 lb").installed("2025-01-01").log(&log.join("\n"))
}

proptest! {
    #![proptest_config(super::cases(128))]

    /// A note belongs to nothing and changes nothing; nor does a check of a
    /// detection system that nobody declared.
    #[test]
    fn an_irrelevant_entry_changes_no_duty_and_no_loss(
        lines in prop::collection::vec(line(), 1..25),
        at in 0_u64..700,
        what in prop::sample::select(vec!["note", "detection system check"]),
    ) {
        let mut with_more = lines.clone();
        with_more.push((at, what.to_owned()));
        let (plain, more) = (story(&lines), story(&with_more));
        let (before, after) = (plain.on("2026-12-05"), more.on("2026-12-05"));
        prop_assert_eq!(told(&before), told(&after));
        prop_assert_eq!(&before.this_year, &after.this_year);
        for (before, after) in before.rulebooks.iter().zip(&after.rulebooks) {
            prop_assert_eq!(rates(before), rates(after));
        }
    }

    /// One day's charge written as two is the same charge.
    #[test]
    fn splitting_a_charge_in_two_changes_nothing(lines in prop::collection::vec(line(), 1..20), which in any::<prop::sample::Index>()) {
        let whole = story(&lines);
        let charges: Vec<usize> = (0..lines.len()).filter(|&i| lines[i].1.starts_with("charge") && !lines[i].1.ends_with("seasonal")).collect();
        prop_assume!(!charges.is_empty());
        let index = *which.get(&charges);
        let words: Vec<&str> = lines[index].1.splitn(4, ' ').collect();
        let tenths: u32 = words[1].replace('.', "").parse().unwrap();
        prop_assume!(tenths > 1);
        let part = |tenths: u32| format!("charge {}.{} lb {}", tenths / 10, tenths % 10, words[3]);
        let mut split = lines.clone();
        split[index].1 = part(tenths / 2);
        split.insert(index + 1, (lines[index].0, part(tenths - tenths / 2)));
        let split = story(&split);
        let (a, b) = (whole.on("2026-12-01"), split.on("2026-12-01"));
        prop_assert_eq!(told(&a), told(&b));
        prop_assert_eq!(&a.this_year, &b.this_year);
        for (a, b) in a.rulebooks.iter().zip(&b.rulebooks) {
            prop_assert_eq!(rates(a), rates(b));
        }
    }

    /// What is late stays late or is met late; a met day never moves; no duty
    /// vanishes but twelve months after it was done with.
    #[test]
    fn time_alone_turns_no_late_duty_open(lines in prop::collection::vec(line(), 1..20), wait in 1_u64..800) {
        let story = story(&lines);
        // After the last line of every history.
        let (now, later) = ("2026-12-05", day("2026-12-05").checked_add_days(Days::new(wait)).unwrap().to_string());
        let (before, after) = (story.on(now), story.on(&later));
        for duty in &before.duties {
            let same = after.duties.iter().find(|other| {
                (other.kind, &other.rulebook, other.from, other.exceeded_on, other.period, other.from_line)
                    == (duty.kind, &duty.rulebook, duty.from, duty.exceeded_on, duty.period, duty.from_line)
            });
            let Some(same) = same else {
                let done = duty.met_on.or(duty.ended_on);
                let gone = done.is_some_and(|done| add_months(done, 12) < after.on);
                // What was open here may have ended in between: a series of inspections does, twelve months before.
                let ended = duty.kind == DutyKind::LeakInspection && after.on > add_months(before.on, 12);
                prop_assert!(gone || ended, "{} {} from {} vanished", duty.rulebook, duty.kind.name(), duty.from);
                continue;
            };
            prop_assert_eq!(duty.met_on, same.met_on);
            // A clock that stands still has no due day until the duty ends.
            if duty.state(before.on) != DutyState::Suspended {
                prop_assert_eq!(duty.due, same.due);
            }
            if duty.ended_on.is_some() {
                prop_assert_eq!(duty.ended_on, same.ended_on);
            }
            if duty.state(before.on) == DutyState::Late {
                prop_assert!(matches!(same.state(after.on), DutyState::Late | DutyState::Ended), "{:?}", same.state(after.on));
            }
        }
    }

    /// The other way round: whatever is late or met on a day was no less so for having been asked about earlier.
    #[test]
    fn each_day_agrees_with_the_day_before(lines in prop::collection::vec(line(), 1..12), at in 0_u64..760) {
        let story = story(&lines);
        let first = day("2025-01-01").checked_add_days(Days::new(at)).unwrap();
        let next = first.succ_opt().unwrap();
        // Nothing was written down on the second day.
        prop_assume!(!story.lines.iter().any(|line| line.at.date == next));
        let (before, after) = (story.on(&first.to_string()), story.on(&next.to_string()));
        for duty in before.duties.iter().filter(|duty| duty.state(before.on) == DutyState::Late) {
            let same = after.duties.iter().find(|other| {
                (other.kind, &other.rulebook, other.from, other.exceeded_on, other.period)
                    == (duty.kind, &duty.rulebook, duty.from, duty.exceeded_on, duty.period)
            });
            let state = same.map(|same| same.state(after.on));
            prop_assert!(matches!(state, Some(DutyState::Late | DutyState::Ended)), "{} from {}: {state:?}", duty.kind.name(), duty.from);
        }
    }
}

fn rates(judgement: &Judgement) -> Vec<(NaiveDate, Ratio)> {
    judgement.rates.iter().map(|rate| (rate.on, rate.percent)).collect()
}
