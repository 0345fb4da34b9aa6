//! How the duties of a year were kept.

use crate::ledger::{Appliance, Line, Site};
use crate::record::{DutyCounts, DutyTally};
use crate::rules::{Duty, DutyKind, DutyState, assess};
use chrono::{Days, NaiveDate};
use std::collections::BTreeMap;

/// Days before the year in which a check may already have met a duty that
/// falls due in it: the longest interval is 24 months.
const LOOK_BACK: u64 = 740;

#[derive(Default)]
pub(super) struct Tally(BTreeMap<(&'static str, String), DutyCounts>);

impl Tally {
    /// Counts the duties of one appliance that fell due from `from` to `to`,
    /// and those that are open then.
    pub(super) fn add(&mut self, site: &Site, appliance: &Appliance, lines: &[Line], from: NaiveDate, to: NaiveDate) {
        for duty in self.known(site, appliance, lines, from, to) {
            let due_here = duty.due.is_some_and(|due| (from..=to).contains(&due));
            let state = duty.state(to);
            let unmet = matches!(state, DutyState::Open | DutyState::Suspended);
            if !due_here && !unmet {
                continue;
            }
            let counts = self.0.entry((duty.kind.name(), duty.rulebook.clone())).or_default();
            match state {
                DutyState::Met => counts.in_time += 1,
                DutyState::MetLate => counts.late += 1,
                DutyState::Late => counts.not_done += 1,
                DutyState::Open | DutyState::Suspended => counts.open += 1,
                DutyState::Ended => {}
            }
        }
    }

    /// Every duty as it stood on the last day, met ones of earlier in the year included.
    fn known(&self, site: &Site, appliance: &Appliance, lines: &[Line], from: NaiveDate, to: NaiveDate) -> Vec<Duty> {
        type Key = (&'static str, String, NaiveDate, Option<NaiveDate>);
        // A due day moves while a clock stands still; only the periods of one inspection series differ by it alone.
        let key = |duty: &Duty| -> Key {
            (duty.kind.name(), duty.rulebook.clone(), duty.from, duty.due.filter(|_| duty.kind == DutyKind::LeakInspection))
        };
        let mut known: BTreeMap<Key, Duty> = BTreeMap::new();
        let begin = from.checked_sub_days(Days::new(LOOK_BACK)).unwrap_or(from);
        let mut days: Vec<NaiveDate> = lines.iter().map(|line| line.at.date).filter(|day| (begin..=to).contains(day)).collect();
        days.sort_unstable();
        days.dedup();
        for day in days {
            let eve = day.pred_opt().unwrap_or(day);
            let after = listed(site, appliance, lines, day);
            for mut duty in listed(site, appliance, lines, eve) {
                // Of a series only the next is listed: what the day's work replaced by a new one, it met.
                let next = |next: &Duty| next.kind == duty.kind && next.rulebook == duty.rulebook && next.from == day;
                let replaced = is_series(duty.kind) && duty.from != day && after.iter().any(next);
                if replaced {
                    duty.met_on = Some(day);
                }
                known.insert(key(&duty), duty);
            }
            known.extend(after.into_iter().map(|duty| (key(&duty), duty)));
        }
        for duty in listed(site, appliance, lines, to) {
            known.insert(key(&duty), duty);
        }
        known.into_values().collect()
    }

    pub(super) fn finish(self) -> Vec<DutyTally> {
        let counted = |counts: &DutyCounts| *counts != DutyCounts::default();
        self.0
            .into_iter()
            .filter(|(_, counts)| counted(counts))
            .map(|((duty, rulebook), counts)| DutyTally { duty: duty.to_owned(), rulebook, counts })
            .collect()
    }
}

/// Duties of which only the next one is listed.
fn is_series(kind: DutyKind) -> bool {
    matches!(kind, DutyKind::LeakCheck | DutyKind::DetectionSystemCheck)
}

fn listed(site: &Site, appliance: &Appliance, lines: &[Line], on: NaiveDate) -> Vec<Duty> {
    assess(site, appliance, lines, on).map(|assessment| assessment.duties).unwrap_or_default()
}
