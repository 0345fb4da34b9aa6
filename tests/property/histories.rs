//! Random histories: what must not change a judgement does not.

use crate::support::story::{Story, day, told};
use bubblepoint::ledger::Category::CommercialRefrigeration;
use chrono::Days;
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
    ];
    (0_u64..700, act)
}

fn story(lines: &[(u64, String)]) -> Story {
    let mut lines = lines.to_vec();
    lines.sort_by_key(|(after, _)| *after);
    let first = day("2025-01-01");
    let log: Vec<String> =
        lines.iter().map(|(after, act)| format!("{} {act}", first.checked_add_days(Days::new(*after)).unwrap())).collect();
    Story::new("us-82f us-84c", CommercialRefrigeration, "R-408A", "220 lb").log(&log.join("\n"))
}

proptest! {
    #![proptest_config(super::cases(128))]

    /// A note belongs to nothing and changes nothing.
    #[test]
    fn a_note_changes_no_duty_and_no_loss(lines in prop::collection::vec(line(), 1..25), at in 0_u64..700) {
        let mut with_note = lines.clone();
        with_note.push((at, "note".to_owned()));
        let (plain, noted) = (story(&lines), story(&with_note));
        let (before, after) = (plain.on("2026-12-01"), noted.on("2026-12-01"));
        prop_assert_eq!(told(&before), told(&after));
        prop_assert_eq!(&before.this_year, &after.this_year);
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
        for (a, b) in a.rulebooks.iter().zip(&b.rulebooks) {
            let rates = |rates: &[bubblepoint::rules::LeakRate]| rates.iter().map(|rate| (rate.on, rate.percent)).collect::<Vec<_>>();
            prop_assert_eq!(rates(&a.rates), rates(&b.rates));
        }
    }

    /// What is late stays late or is met late; a met day never moves.
    #[test]
    fn time_alone_turns_no_late_duty_open(lines in prop::collection::vec(line(), 1..20), wait in 1_u64..300) {
        let story = story(&lines);
        let (now, later) = ("2026-12-05", day("2026-12-05").checked_add_days(Days::new(wait)).unwrap().to_string());
        let (before, after) = (story.on(now), story.on(&later));
        for duty in &before.duties {
            let same = after.duties.iter().find(|other| {
                (other.kind, &other.rulebook, other.from, other.due, other.from_line) == (duty.kind, &duty.rulebook, duty.from, duty.due, duty.from_line)
            });
            if let Some(same) = same {
                prop_assert_eq!(duty.met_on, same.met_on);
                if duty.state(before.on).name() == "late" {
                    prop_assert_ne!(same.state(after.on).name(), "open");
                }
            }
        }
    }
}
