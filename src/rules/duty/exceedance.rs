//! What follows from a leak rate over its trigger: repair, tests, inspections,
//! a plan; and the report on a chronic leak.

use super::{Duty, DutySource, after_days};
use crate::ledger::{Act, ApplianceFacts};
use crate::quantity::{Mass, Ratio, add_months};
use crate::rules::book::{CountedFrom, DutyKind, DutyRow};
use crate::rules::marks::Mark;
use crate::rules::rate::{LeakRate, Verdict};
use crate::rules::scope::taking;
use chrono::{Datelike, Days, NaiveDate};

/// No inspection series is followed further than this.
const MOST_PERIODS: u32 = 400;

/// The repair and tests that answer an exceedance, as far as they were done.
struct Answer {
    repair: Option<usize>,
    initial: Option<usize>,
    follow_up: Option<usize>,
    /// Last day of the rule that takes the appliance, where it has one: it
    /// ends all that follows.
    ends: Option<NaiveDate>,
}

/// The periods of an inspection series: each from after a day to a day.
struct Periods {
    days: Vec<(NaiveDate, NaiveDate)>,
    ends: NaiveDate,
}

impl DutySource<'_> {
    fn answer(&self, rate: &LeakRate, facts: &ApplianceFacts) -> Answer {
        let history = self.history;
        let start = history.first_charge_of_chain(rate.charge).unwrap_or(rate.charge);
        let before = history.last_charge_before(start);
        let jobs: Vec<&str> = history.chain(rate.charge).flat_map(|work| work.lines.iter()).filter_map(|&line| history.job(line)).collect();
        let earliest = self.earliest_repair(rate, facts);
        let marks = history.marks();
        let answers = |line: usize| history.date(line) >= earliest || history.job(line).is_some_and(|job| jobs.contains(&job));
        let repair = marks.after(Mark::LastingRepair, before).iter().copied().find(|&line| answers(line));
        let initial = repair.and_then(|repair| marks.next(Mark::InitialTestPassed, Some(repair)));
        let follow_up = initial.and_then(|initial| marks.next(Mark::FollowUpThatCounts, Some(initial.max(rate.charge))));
        Answer { repair, initial, follow_up, ends: self.scope_ends(facts, rate.on) }
    }

    /// A duty that answers a rate over the trigger.
    fn answering(&self, rate: &LeakRate, answer: &Answer, duty: Duty) -> Duty {
        Duty { rule_ends: [duty.rule_ends, answer.ends].into_iter().flatten().min(), exceeded_on: Some(rate.on), ..duty }
    }

    /// A repair made shortly before the addition answers it too, as far back as the row says.
    fn earliest_repair(&self, rate: &LeakRate, facts: &ApplianceFacts) -> NaiveDate {
        let days = self.row(DutyKind::Repair, facts, rate.on).and_then(|row| row.days_before).unwrap_or(0);
        rate.on.checked_sub_days(Days::new(days.unsigned_abs())).unwrap_or(NaiveDate::MIN)
    }

    /// Last day of the rule that takes the appliance on a day, where it has one.
    fn scope_ends(&self, facts: &ApplianceFacts, day: NaiveDate) -> Option<NaiveDate> {
        taking(self.book, facts, day).and_then(|row| row.to)
    }

    pub(super) fn after_exceedance(&self, index: usize, rate: &LeakRate, duties: &mut Vec<Duty>) {
        let history = self.history;
        let Some(facts) = history.facts_at(rate.charge) else { return };
        let answer = self.answer(rate, facts);
        for (kind, met_by) in [(DutyKind::Repair, answer.repair), (DutyKind::InitialVerification, answer.initial)] {
            if let Some(row) = self.row(kind, facts, rate.on) {
                let due = Some(after_days(rate.on, row.days));
                let mut duty = self.answering(rate, &answer, self.duty(row, rate.on, Some(rate.charge), due));
                duty.meet(history, met_by);
                self.stop_clock(&mut duty);
                duties.push(duty);
            }
        }
        if let (Some(initial), Some(row)) = (answer.initial, self.row(DutyKind::FollowUpVerification, facts, rate.on)) {
            let latest = self.follow_up_from(rate, initial);
            let due = self.follow_up_runs(rate, initial).then(|| after_days(latest, row.days));
            let mut duty = self.answering(rate, &answer, self.duty(row, history.date(initial), Some(initial), due));
            duty.clock_from = latest;
            duty.meet(history, answer.follow_up);
            self.stop_clock(&mut duty);
            duties.push(duty);
        }
        self.plan(index, rate, &answer, facts, duties);
        self.inspections(rate, &answer, facts, duties);
    }

    /// The latest of the test, the rate's day, the return to normal operation
    /// and, where gas was recovered in between, the charge that followed.
    fn follow_up_from(&self, rate: &LeakRate, initial: usize) -> NaiveDate {
        let history = self.history;
        let normal = history.marks().next(Mark::NormalOperation, Some(initial));
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
        let marks = self.history.marks();
        let emptied = marks.next(Mark::Recovery, Some(rate.charge)).is_some_and(|recovery| recovery < initial);
        emptied.then(|| marks.next(Mark::Charge, Some(initial)))
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
        let inspections = history.marks().after(Mark::LeakInspection, Some(start));
        for (number, (after, end)) in periods.days.into_iter().enumerate() {
            let begins = if number == 0 { from } else { after_days(after, Some(1)) };
            if begins > self.on || answer.ends.is_some_and(|last| begins > last) {
                break;
            }
            let mut duty = self.answering(rate, answer, self.duty(row, from, Some(start), Some(end)));
            duty.period = u32::try_from(number + 1).unwrap_or(u32::MAX);
            // A calendar year's clock starts with the year.
            duty.clock_from = if row.calendar_year { begins } else { from };
            let first = if number == 0 { 0 } else { inspections.partition_point(|&line| history.date(line) <= after) };
            duty.meet(history, inspections.get(first).copied().filter(|&line| history.date(line) <= end));
            if series_ends <= self.on {
                duty.end(series_ends);
            }
            self.stop_clock(&mut duty);
            duties.push(duty);
        }
    }

    /// The periods of a series that begins on a day, and the day it ends on.
    fn inspection_periods(&self, row: &DutyRow, from: NaiveDate) -> Periods {
        let over_within = |after: NaiveDate, end: NaiveDate| {
            let until = self.over.partition_point(|&day| day <= end);
            self.over[..until].last().copied().filter(|&day| day > after)
        };
        if let (Some(needed), Some(months)) = (row.clean_periods, row.months) {
            let (mut days, mut clean, mut after) = (Vec::new(), 0, from);
            for period in 1..=MOST_PERIODS {
                let end = add_months(from, months * period);
                clean = if over_within(after, end).is_some() { 0 } else { clean + 1 };
                days.push((after, end));
                after = end;
                if clean == needed {
                    break;
                }
            }
            return Periods { days, ends: after };
        }
        // A row of a series says after how many clean months it ends: `own::faults`.
        let clean_months = row.clean_months.unwrap_or_default();
        let mut last_over = from;
        while let Some(day) = over_within(last_over, add_months(last_over, clean_months)) {
            last_over = day;
        }
        let ends = add_months(last_over, clean_months);
        let mut days = Vec::new();
        let mut after = from;
        for period in 1..=MOST_PERIODS {
            let end = if row.calendar_year {
                NaiveDate::from_ymd_opt(from.year() + period.cast_signed() - 1, 12, 31).unwrap_or(NaiveDate::MAX)
            } else {
                add_months(from, row.months.unwrap_or(clean_months) * period)
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
        let due = Some(after_days(rate.on, row.days));
        let mut duty = self.answering(rate, answer, self.duty(row, rate.on, Some(rate.charge), due));
        let made = history.marks().next(Mark::PlanMade, Some(rate.charge));
        duty.meet(history, made);
        self.stop_clock(&mut duty);
        if self.over_again(rate, row) {
            duties.push(duty);
            return;
        }
        // Not over again: asked for only where nothing was repaired in time.
        let Some(shown_from) = duty.due.filter(|_| !duty.suspended) else { return };
        let repaired = answer.repair.is_some_and(|line| history.date(line) <= shown_from);
        if repaired || self.on < shown_from {
            return;
        }
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
        let marks = history.marks();
        let Some(test) = marks.last_before(Mark::FollowUpThatCounts, rate.charge) else { return false };
        let Some(repair) = marks.last_before(Mark::LastingRepair, test) else { return false };
        let counted = if row.counted_from == Some(CountedFrom::FollowUpVerification) { test } else { repair };
        if rate.on > add_months(history.date(counted), within) {
            return false;
        }
        // Rates stand in order of their charges.
        let (before, since) = self.rates.split_at(self.rates.partition_point(|other| other.charge < test));
        let since = since.iter().take_while(|other| other.charge < rate.charge);
        let over_before = before.iter().any(|earlier| earlier.verdict == Verdict::Over);
        over_before && !since.into_iter().any(|between| between.verdict == Verdict::Under)
    }

    pub(super) fn chronic_leaks(&self, duties: &mut Vec<Duty>) {
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
                let due = row.due_in_next_year.and_then(|(month, of_month)| NaiveDate::from_ymd_opt(day.year() + 1, month, of_month));
                let mut duty = self.duty(row, day, Some(line), due);
                duty.meet(history, history.first_after(Some(line), |later| matches!(history.lines[later].act, Act::ReportSent)));
                duty.rule_ends = [duty.rule_ends, self.scope_ends(facts, day)].into_iter().flatten().min();
                self.stop_clock(&mut duty);
                duties.push(duty);
            }
        }
    }
}
