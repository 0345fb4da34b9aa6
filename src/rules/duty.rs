//! Duties: what a rule requires by a day, from which entry, met by which.

mod checks;
mod exceedance;

use super::book::{DutyKind, DutyRow, Extension, InForce, Rulebook};
use super::history::History;
use super::marks::Mark;
use super::rate::{LeakRate, Verdict};
use super::scope::taking;
use crate::ledger::{Act, ApplianceFacts, TestKind};
use crate::quantity::{add_months, days_between};
use chrono::{Days, NaiveDate};
use std::collections::HashSet;

/// Months for which a met or ended duty stays listed.
const LISTED_MONTHS: u32 = 12;

#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum DutyState {
    Open,
    Late,
    Met,
    MetLate,
    Suspended,
    Ended,
}

impl DutyState {
    pub const fn name(self) -> &'static str {
        match self {
            Self::Open => "open",
            Self::Late => "late",
            Self::Met => "met",
            Self::MetLate => "met late",
            Self::Suspended => "suspended",
            Self::Ended => "ended",
        }
    }
}

/// Something a rule requires by a day.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Duty {
    pub kind: DutyKind,
    pub rulebook: String,
    pub source: String,
    pub from: NaiveDate,
    /// `None`: without undue delay, or not running.
    pub due: Option<NaiveDate>,
    pub met_on: Option<NaiveDate>,
    pub ended_on: Option<NaiveDate>,
    pub suspended: bool,
    /// Day from which mothballing can stop its clock.
    clock_from: NaiveDate,
    /// Last day of the rule that asks for it, where it has one.
    rule_ends: Option<NaiveDate>,
    /// The day of the rate over the trigger that it answers, where there is one.
    pub exceeded_on: Option<NaiveDate>,
    /// Which of a series' periods it is for, the first being 1; 0: no series.
    pub period: u32,
    /// Days that the row counts, and the later due days it knows.
    days: Option<i64>,
    extensions: &'static [Extension],
    /// The line it comes from.
    pub from_line: Option<usize>,
    /// The line that met it.
    pub met_by: Option<usize>,
}

impl Duty {
    pub fn state(&self, on: NaiveDate) -> DutyState {
        match (self.met_on, self.ended_on, self.due) {
            (Some(met), _, Some(due)) if met > due => DutyState::MetLate,
            (Some(_), _, _) => DutyState::Met,
            (None, Some(_), _) => DutyState::Ended,
            (None, None, _) if self.suspended => DutyState::Suspended,
            (None, None, Some(due)) if on > due => DutyState::Late,
            (None, None, _) => DutyState::Open,
        }
    }

    /// Later due days that the rule knows, each with what must be the case and
    /// its article. Whether it is the case nobody can tell from a log: the
    /// duty's own due day stays what it is.
    pub fn extensions(&self) -> impl Iterator<Item = (NaiveDate, &'static Extension)> + use<'_> {
        let due = self.due.zip(self.days);
        self.extensions.iter().filter_map(move |extension| {
            let (due, days) = due?;
            Some((after_days(due, Some(extension.days - days)), extension))
        })
    }

    /// Whether it is listed on a day: while open, late or suspended, and for
    /// twelve calendar months after it was met or ended.
    pub fn is_listed(&self, on: NaiveDate) -> bool {
        self.met_on.or(self.ended_on).is_none_or(|done| on <= add_months(done, LISTED_MONTHS))
    }

    fn meet(&mut self, history: &History, line: Option<usize>) {
        self.met_by = line;
        self.met_on = line.map(|line| history.date(line));
    }

    fn end(&mut self, day: NaiveDate) {
        if self.met_on.is_none_or(|met| met > day) {
            self.met_on = None;
            self.met_by = None;
            self.ended_on = Some(self.ended_on.map_or(day, |before| before.min(day)));
        }
    }
}

/// Everything that the duties of one appliance under one rulebook are read from.
pub struct DutySource<'a> {
    pub book: &'static Rulebook,
    pub history: &'a History<'a>,
    pub rates: &'a [LeakRate],
    /// Days with a rate over the trigger, in order.
    pub over: &'a [NaiveDate],
    pub on: NaiveDate,
    /// Whether the site is under this rulebook on a day.
    pub at_site: &'a dyn Fn(NaiveDate) -> bool,
}

/// All duties listed on the day.
pub fn duties(source: &DutySource) -> Vec<Duty> {
    let mut duties = Vec::new();
    for (index, rate) in source.rates.iter().enumerate().filter(|(_, rate)| rate.verdict == Verdict::Over) {
        source.after_exceedance(index, rate, &mut duties);
    }
    source.chronic_leaks(&mut duties);
    source.next_leak_check(&mut duties);
    source.re_checks(&mut duties);
    source.found_leaks(&mut duties);
    source.detection_system(&mut duties);
    source.full_charge(&mut duties);
    // What would begin later, or only after its rule had ended, is no duty.
    duties.retain(|duty| duty.from <= source.on && duty.rule_ends.is_none_or(|last| duty.from <= last));
    // Two exceedances answered by one follow-up test share its inspections.
    let mut seen = HashSet::new();
    duties.retain(|duty| duty.kind != DutyKind::LeakInspection || seen.insert((duty.from, duty.due, duty.from_line)));
    for duty in &mut duties {
        source.end_with_rule_or_appliance(duty);
    }
    duties.retain(|duty| duty.is_listed(source.on));
    duties
}

impl DutySource<'_> {
    fn row(&self, kind: DutyKind, facts: &ApplianceFacts, day: NaiveDate) -> Option<&'static DutyRow> {
        self.book.duties.iter().find(|row| {
            row.duty == kind
                && row.holds_on(day)
                && (row.categories.is_empty() || row.categories.contains(&facts.category))
                && row.charge_at_least.is_none_or(|least| facts.full_charge.is_some_and(|charge| charge >= least))
        })
    }

    fn applies(&self, facts: &ApplianceFacts, day: NaiveDate) -> bool {
        (self.at_site)(day) && taking(self.book, facts, day).is_some()
    }

    fn duty(&self, row: &'static DutyRow, from: NaiveDate, from_line: Option<usize>, due: Option<NaiveDate>) -> Duty {
        Duty {
            kind: row.duty,
            rulebook: self.book.id.clone(),
            source: row.source.clone(),
            from,
            due,
            met_on: None,
            ended_on: None,
            suspended: false,
            clock_from: from,
            rule_ends: row.to,
            exceeded_on: None,
            period: 0,
            days: row.days,
            extensions: &row.extensions,
            from_line,
            met_by: None,
        }
    }

    /// Mothballing stops an open duty's clock until gas is charged again. What
    /// is done meanwhile is done in time.
    fn stop_clock(&self, duty: &mut Duty) {
        let history = self.history;
        for &line in history.marks().all(Mark::Mothball) {
            let day = history.date(line);
            let resumed = history.marks().next(Mark::Charge, Some(line));
            let over_before_it_began = resumed.is_some_and(|charge| history.date(charge) <= duty.clock_from);
            let done_before = duty.met_by.is_some_and(|met| met < line) || duty.ended_on.or(duty.rule_ends).is_some_and(|end| end <= day);
            let late = duty.due.is_some_and(|due| due < day);
            if over_before_it_began || done_before || late {
                continue;
            }
            match resumed {
                Some(charge) => {
                    let stopped = days_between(day.max(duty.clock_from), history.date(charge));
                    duty.due = duty.due.map(|due| after_days(due, Some(stopped)));
                }
                None => duty.suspended = true,
            }
        }
    }

    /// A rule that ends, and an appliance that is retired, end what is unmet;
    /// a duty whose clock stands still has no due day.
    fn end_with_rule_or_appliance(&self, duty: &mut Duty) {
        if let Some(last) = duty.rule_ends.filter(|&last| last <= self.on) {
            duty.end(last);
        }
        if let Some(retired) = self.history.retired_on().filter(|_| duty.kind != DutyKind::ChronicLeakReport) {
            duty.end(retired);
        }
        if duty.suspended && duty.ended_on.is_none() {
            duty.due = None;
        }
    }
}

fn is_inspection(history: &History, line: usize) -> bool {
    matches!(history.lines[line].act, Act::Test { kind: TestKind::LeakInspection, .. })
}

fn after_days(day: NaiveDate, days: Option<i64>) -> NaiveDate {
    let days = days.and_then(|days| u64::try_from(days).ok()).unwrap_or(0);
    day.checked_add_days(Days::new(days)).unwrap_or(NaiveDate::MAX)
}
