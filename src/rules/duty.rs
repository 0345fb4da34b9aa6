//! Duties: what a rule requires by a day, from which entry, met by which.

use super::book::{CountedFrom, DutyKind, DutyRow, Rulebook};
use super::history::History;
use super::rate::{LeakRate, Verdict};
use super::scope::{applicability, months, strictest_band};
use crate::ledger::{Act, ApplianceFacts, Scope, TestKind, TestResult};
use crate::quantity::{Mass, Ratio, add_months, days_between};
use chrono::{Datelike, Days, NaiveDate};
use std::collections::HashSet;

/// Months for which a met or ended duty stays listed.
const LISTED_MONTHS: u32 = 12;
/// Clean periods in a row that end three-monthly inspections (82.157(g)(1)).
const CLEAN_PERIODS: usize = 4;
const MONTHS_A_YEAR: u32 = 12;
/// No inspection series is followed further than this.
const MOST_PERIODS: u32 = 400;

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
    pub book: &'a Rulebook,
    pub history: &'a History<'a>,
    pub rates: &'a [LeakRate],
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

/// The repair and tests that answer an exceedance, as far as they were done.
struct Answer {
    repair: Option<usize>,
    initial: Option<usize>,
    follow_up: Option<usize>,
}

impl DutySource<'_> {
    fn row(&self, kind: DutyKind, facts: &ApplianceFacts, day: NaiveDate) -> Option<&DutyRow> {
        self.book.duties.iter().find(|row| {
            row.duty == kind
                && row.validity.holds_on(day)
                && (row.categories.is_empty() || row.categories.contains(&facts.category))
                && row.charge_at_least.is_none_or(|least| facts.full_charge.is_some_and(|charge| charge >= least))
        })
    }

    fn applies(&self, facts: &ApplianceFacts, day: NaiveDate) -> bool {
        (self.at_site)(day) && applicability(self.book, facts, day).applies
    }

    fn duty(&self, row: &DutyRow, from: NaiveDate, from_line: Option<usize>, due: Option<NaiveDate>) -> Duty {
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
            rule_ends: row.validity.to,
            from_line,
            met_by: None,
        }
    }

    fn answer(&self, rate: &LeakRate) -> Answer {
        let history = self.history;
        let start = history.first_charge_of_chain(rate.charge).unwrap_or(rate.charge);
        let before = history.last_charge_before(start);
        let jobs: Vec<&str> = history.chain(rate.charge).flat_map(|work| work.lines.iter()).filter_map(|&line| history.job(line)).collect();
        let earliest = rate.on.checked_sub_days(Days::new(30)).unwrap_or(NaiveDate::MIN);
        let repair = history.first_after(before, |line| {
            history.is_lasting_repair(line) && (history.date(line) >= earliest || history.job(line).is_some_and(|job| jobs.contains(&job)))
        });
        let initial = repair.and_then(|repair| history.first_after(Some(repair), |line| history.is_passed_initial_test(line)));
        let follow_up =
            initial.and_then(|initial| history.first_after(Some(initial.max(rate.charge)), |line| history.is_follow_up_that_counts(line)));
        Answer { repair, initial, follow_up }
    }

    fn after_exceedance(&self, index: usize, rate: &LeakRate, duties: &mut Vec<Duty>) {
        let history = self.history;
        let Some(facts) = history.facts_at(rate.charge) else { return };
        let answer = self.answer(rate);
        let first = duties.len();
        for (kind, met_by) in [(DutyKind::Repair, answer.repair), (DutyKind::InitialVerification, answer.initial)] {
            if let Some(row) = self.row(kind, facts, rate.on) {
                let mut duty = self.duty(row, rate.on, Some(rate.charge), Some(after_days(rate.on, row.days)));
                duty.meet(history, met_by);
                self.stop_clock(&mut duty);
                duties.push(duty);
            }
        }
        if let (Some(initial), Some(row)) = (answer.initial, self.row(DutyKind::FollowUpVerification, facts, rate.on)) {
            let latest = self.follow_up_from(rate, initial);
            let due = self.follow_up_runs(rate, initial).then(|| after_days(latest, row.days));
            let mut duty = self.duty(row, history.date(initial), Some(initial), due);
            duty.clock_from = latest;
            duty.meet(history, answer.follow_up);
            self.stop_clock(&mut duty);
            duties.push(duty);
        }
        self.plan(index, rate, &answer, facts, duties);
        self.inspections(rate, &answer, facts, duties);
        // A rule's end ends all that followed from an exceedance under it.
        let scope_ends = applicability(self.book, facts, rate.on).until;
        for duty in &mut duties[first..] {
            duty.rule_ends = [duty.rule_ends, scope_ends].into_iter().flatten().min();
        }
    }

    /// The latest of the test, the rate's day, the return to normal operation
    /// and, where gas was recovered in between, the charge that followed.
    fn follow_up_from(&self, rate: &LeakRate, initial: usize) -> NaiveDate {
        let history = self.history;
        let normal = history.first_after(Some(initial), |line| matches!(history.lines[line].act, Act::NormalOperation));
        let recharge = self.recharge(rate, initial).flatten();
        [Some(initial), normal, recharge].into_iter().flatten().map(|line| history.date(line)).fold(rate.on, NaiveDate::max)
    }

    /// Not before the appliance was charged again, where it was emptied.
    fn follow_up_runs(&self, rate: &LeakRate, initial: usize) -> bool {
        self.recharge(rate, initial).is_none_or(|charge| charge.is_some())
    }

    /// Where gas was recovered between the exceedance and the test: the charge
    /// after the test, if there was one yet.
    fn recharge(&self, rate: &LeakRate, initial: usize) -> Option<Option<usize>> {
        let history = self.history;
        (rate.charge + 1..initial)
            .any(|line| history.is_recovery(line))
            .then(|| history.first_after(Some(initial), |line| history.is_charge(line)))
    }

    /// Inspections at set periods, until enough of them in a row had no rate over.
    fn inspections(&self, rate: &LeakRate, answer: &Answer, facts: &ApplianceFacts, duties: &mut Vec<Duty>) {
        let history = self.history;
        let after_test = self
            .row(DutyKind::LeakInspection, facts, rate.on)
            .is_some_and(|row| row.counted_from == Some(CountedFrom::FollowUpVerification));
        let start = match (after_test, answer.follow_up) {
            (true, Some(test)) => test,
            (true, None) => return,
            (false, _) => rate.charge,
        };
        let from = history.date(start);
        let Some(facts) = history.facts_at(start) else { return };
        let Some(row) = self.row(DutyKind::LeakInspection, facts, rate.on) else { return };
        let periods = self.inspection_periods(row, from);
        let series_ends = periods.ends;
        let scope_ends = applicability(self.book, facts, rate.on).until;
        for (number, (after, end)) in periods.days.into_iter().enumerate() {
            let begins = if number == 0 { from } else { after_days(after, Some(1)) };
            if begins > self.on || scope_ends.is_some_and(|last| begins > last) {
                break;
            }
            let mut duty = self.duty(row, from, Some(start), Some(end));
            // A calendar year's clock starts with the year.
            duty.clock_from = if row.calendar_year { begins } else { from };
            let inspected = history.first_after(Some(start), |line| {
                let day = history.date(line);
                is_inspection(history, line) && day <= end && (number == 0 || day > after)
            });
            duty.meet(history, inspected);
            self.stop_clock(&mut duty);
            if series_ends <= self.on {
                duty.end(series_ends);
            }
            duties.push(duty);
        }
    }

    /// The periods of a series that begins on a day, and the day it ends on.
    fn inspection_periods(&self, row: &DutyRow, from: NaiveDate) -> Periods {
        let over: Vec<NaiveDate> = self.rates.iter().filter(|rate| rate.verdict == Verdict::Over).map(|rate| rate.on).collect();
        let over_within = |after: NaiveDate, end: NaiveDate| over.iter().copied().filter(|&day| after < day && day <= end).max();
        let months = row.months.unwrap_or(MONTHS_A_YEAR);
        if months < MONTHS_A_YEAR {
            let (mut days, mut clean, mut after) = (Vec::new(), 0, from);
            for period in 1..=MOST_PERIODS {
                let end = add_months(from, months * period);
                clean = if over_within(after, end).is_some() { 0 } else { clean + 1 };
                days.push((after, end));
                after = end;
                if clean == CLEAN_PERIODS {
                    break;
                }
            }
            return Periods { days, ends: after };
        }
        let mut last_over = from;
        while let Some(day) = over_within(last_over, add_months(last_over, MONTHS_A_YEAR)) {
            last_over = day;
        }
        let ends = add_months(last_over, MONTHS_A_YEAR);
        let mut days = Vec::new();
        let mut after = from;
        for period in 1..=MOST_PERIODS {
            let end = if row.calendar_year {
                NaiveDate::from_ymd_opt(from.year() + period.cast_signed() - 1, 12, 31).unwrap_or(NaiveDate::MAX)
            } else {
                add_months(from, months * period)
            };
            days.push((after, end));
            after = end;
            // The next period would begin on the series' last day or after it.
            let next = if row.calendar_year { after_days(end, Some(1)) } else { end };
            if next >= ends {
                break;
            }
        }
        Periods { days, ends }
    }

    fn plan(&self, index: usize, rate: &LeakRate, answer: &Answer, facts: &ApplianceFacts, duties: &mut Vec<Duty>) {
        let history = self.history;
        let Some(row) = self.row(DutyKind::Plan, facts, rate.on) else { return };
        let mut duty = self.duty(row, rate.on, Some(rate.charge), Some(after_days(rate.on, row.days)));
        let made = history.first_after(Some(rate.charge), |line| matches!(history.lines[line].act, Act::PlanMade));
        if self.over_again(rate, row) {
            duty.meet(history, made);
            self.stop_clock(&mut duty);
            duties.push(duty);
            return;
        }
        // Not over again: asked for only where nothing was repaired in time.
        self.stop_clock(&mut duty);
        let Some(shown_from) = duty.due.filter(|_| !duty.suspended) else { return };
        let repaired = answer.repair.is_some_and(|line| history.date(line) <= shown_from);
        if repaired || self.on < shown_from {
            return;
        }
        duty.meet(history, made);
        if let Some(under) = self.rates[index + 1..].iter().find(|later| later.verdict == Verdict::Under) {
            duty.end(under.on);
        }
        duties.push(duty);
    }

    /// The rate is over again after a repair and tests that count, no rate
    /// since was under the trigger, and the repair (or its follow-up test) is
    /// not longer ago than the rule presumes it good.
    fn over_again(&self, rate: &LeakRate, row: &DutyRow) -> bool {
        let history = self.history;
        let Some(within) = row.months else { return false };
        let test = (0..rate.charge).rev().find(|&line| history.is_follow_up_that_counts(line));
        let Some(test) = test else { return false };
        let Some(repair) = (0..test).rev().find(|&line| history.is_lasting_repair(line)) else { return false };
        let counted = if row.counted_from == Some(CountedFrom::FollowUpVerification) { test } else { repair };
        let over_before = self.rates.iter().any(|earlier| earlier.verdict == Verdict::Over && earlier.charge < test);
        let under_since =
            self.rates.iter().any(|between| between.verdict == Verdict::Under && (test..rate.charge).contains(&between.charge));
        over_before && !under_since && rate.on <= add_months(history.date(counted), within)
    }

    /// Mothballing stops an open duty's clock until gas is charged again.
    fn stop_clock(&self, duty: &mut Duty) {
        let history = self.history;
        for (line, entry) in history.lines.iter().enumerate() {
            if !matches!(entry.act, Act::Mothball) {
                continue;
            }
            let day = history.date(line);
            let resumed = history.first_after(Some(line), |after| history.is_charge(after));
            let over_before_it_began = resumed.is_some_and(|charge| history.date(charge) <= duty.clock_from);
            let met_before = duty.met_by.is_some_and(|met| met < line || resumed.is_none_or(|charge| met < charge));
            let late = duty.due.is_some_and(|due| due < day);
            if over_before_it_began || met_before || late {
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

    fn chronic_leaks(&self, duties: &mut Vec<Duty>) {
        let history = self.history;
        let mut year = None;
        let mut sum = Mass::ZERO;
        let mut reported = false;
        for line in 0..history.lines.len() {
            let day = history.date(line);
            if year != Some(day.year()) {
                (year, sum, reported) = (Some(day.year()), Mass::ZERO, false);
            }
            sum += history.added[line];
            if reported || !history.added[line].is_positive() {
                continue;
            }
            let Some(facts) = history.facts_at(line).filter(|facts| self.applies(facts, day)) else { continue };
            let Some(row) = self.row(DutyKind::ChronicLeakReport, facts, day) else { continue };
            let (Some(percent), Some(full)) = (row.percent, facts.full_charge) else { continue };
            if Ratio::new(100 * sum.units(), full.units()) >= percent {
                reported = true;
                let due = NaiveDate::from_ymd_opt(day.year() + 1, 3, 1);
                let mut duty = self.duty(row, day, Some(line), due);
                duty.meet(history, history.first_after(Some(line), |later| matches!(history.lines[later].act, Act::ReportSent)));
                self.stop_clock(&mut duty);
                duty.rule_ends = [duty.rule_ends, applicability(self.book, facts, day).until].into_iter().flatten().min();
                duties.push(duty);
            }
        }
    }

    fn today(&self) -> Option<&ApplianceFacts> {
        self.history.facts_on(self.on).filter(|facts| self.applies(facts, self.on))
    }

    /// Only the next leak check is listed.
    fn next_leak_check(&self, duties: &mut Vec<Duty>) {
        let history = self.history;
        let Some(facts) = self.today() else { return };
        let Some(row) = self.row(DutyKind::LeakCheck, facts, self.on) else { return };
        let Some(band) = strictest_band(self.book, facts, self.on) else { return };
        let last = (0..history.lines.len()).rev().find(|&line| is_leak_check(history, line));
        let first_entry = history.lines.first().map(|line| line.at.date);
        let begun = last.map(|line| history.date(line)).or(facts.installed_on).or(first_entry);
        let Some(from) = begun.filter(|&from| from <= self.on) else { return };
        let mut due = add_months(from, months(band, facts));
        if band.or_end_of_next_year {
            // Once per calendar year: by the end of the year after the last
            // check's, or of the first year where there was none.
            let year = if last.is_some() { from.year() + 1 } else { from.year() };
            due = due.min(NaiveDate::from_ymd_opt(year, 12, 31).unwrap_or(due));
        }
        let mut duty = self.duty(row, from, last, Some(due));
        duty.source.clone_from(&band.source);
        duties.push(duty);
    }

    /// One re-check for each day with a repair that is for good.
    fn re_checks(&self, duties: &mut Vec<Duty>) {
        let history = self.history;
        let mut last_day = None;
        for line in (0..history.lines.len()).filter(|&line| history.is_lasting_repair(line)) {
            let day = history.date(line);
            if last_day == Some(day) {
                continue;
            }
            let Some(facts) = history.facts_at(line).filter(|facts| self.applies(facts, day)) else { continue };
            let Some(row) = self.row(DutyKind::ReCheck, facts, day) else { continue };
            last_day = Some(day);
            let from = after_days(day, Some(row.starts_after_days));
            let mut duty = self.duty(row, from, Some(line), row.months.map(|months| add_months(day, months)));
            let hundredths = row.hours.map(|hours| hours * 100);
            duty.meet(
                history,
                history.first_after(Some(line), |after| {
                    let Act::Test { kind, running_hundredths, .. } = history.lines[after].act else { return false };
                    matches!(kind, TestKind::LeakTest | TestKind::LeakInspection | TestKind::FollowUpVerification)
                        && hundredths.is_none_or(|least| running_hundredths.is_some_and(|ran| ran >= least))
                }),
            );
            duties.push(duty);
        }
    }

    fn found_leaks(&self, duties: &mut Vec<Duty>) {
        let history = self.history;
        let mut open_until = None;
        for (line, entry) in history.lines.iter().enumerate() {
            if !matches!(entry.act, Act::Test { result: Some(TestResult::LeakFound), .. }) || open_until.is_some_and(|until| line < until) {
                continue;
            }
            let day = history.date(line);
            let Some(facts) = history.facts_at(line).filter(|facts| self.applies(facts, day)) else { continue };
            let Some(row) = self.row(DutyKind::RepairOfFoundLeak, facts, day) else { continue };
            let mut duty = self.duty(row, day, Some(line), row.days.map(|days| after_days(day, Some(days))));
            let repair = history.first_after(Some(line), |after| history.is_lasting_repair(after));
            duty.meet(history, repair);
            open_until = Some(repair.unwrap_or(history.lines.len()));
            duties.push(duty);
        }
    }

    fn detection_system(&self, duties: &mut Vec<Duty>) {
        let history = self.history;
        let Some(facts) = self.today().filter(|facts| facts.leakage_detection_system) else { return };
        let Some(row) = self.row(DutyKind::DetectionSystemCheck, facts, self.on) else { return };
        let last = (0..history.lines.len()).rev().find(|&line| matches!(history.lines[line].act, Act::DetectionSystemCheck));
        if let (Some(line), Some(months)) = (last, row.months) {
            let from = history.date(line);
            duties.push(self.duty(row, from, Some(line), Some(add_months(from, months))));
        }
    }

    /// The full charge of a covered appliance must be determined by the first
    /// day of the rule, or on installation if that is later.
    fn full_charge(&self, duties: &mut Vec<Duty>) {
        let Some(facts) = self.history.facts_on(self.on).filter(|facts| facts.full_charge.is_none()) else { return };
        let Some(row) = self.row(DutyKind::DetermineFullCharge, facts, self.on) else { return };
        // Whether the appliance is large enough cannot be known: asked of every one that would be in scope if it were.
        let large = ApplianceFacts { full_charge: Some(Mass::MOST), ..facts.clone() };
        if self.applies(&large, self.on) {
            let from = facts.installed_on.map_or(row.validity.from, |installed| installed.max(row.validity.from));
            duties.push(self.duty(row, from, None, Some(from)));
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
        if duty.suspended && duty.met_on.is_none() && duty.ended_on.is_none() {
            duty.due = None;
        }
    }
}

/// The periods of an inspection series: each from after a day to a day.
struct Periods {
    days: Vec<(NaiveDate, NaiveDate)>,
    ends: NaiveDate,
}

fn is_inspection(history: &History, line: usize) -> bool {
    matches!(history.lines[line].act, Act::Test { kind: TestKind::LeakInspection, .. })
}

/// A leak inspection, or a leak test of the whole appliance.
fn is_leak_check(history: &History, line: usize) -> bool {
    is_inspection(history, line) || matches!(history.lines[line].act, Act::Test { kind: TestKind::LeakTest, scope: Some(Scope::Whole), .. })
}

fn after_days(day: NaiveDate, days: Option<i64>) -> NaiveDate {
    let days = days.and_then(|days| u64::try_from(days).ok()).unwrap_or(0);
    day.checked_add_days(Days::new(days)).unwrap_or(NaiveDate::MAX)
}
