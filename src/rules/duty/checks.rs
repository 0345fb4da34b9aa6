//! What recurs or follows from work, whatever the leak rate: leak checks,
//! re-checks, found leaks, detection systems, a full charge to determine.

use super::{Duty, DutySource, after_days, is_inspection};
use crate::ledger::{Act, ApplianceFacts, Scope, TestKind, TestResult};
use crate::quantity::{Mass, add_months};
use crate::rules::book::DutyKind;
use crate::rules::history::History;
use crate::rules::scope::{months, strictest_band};
use chrono::{Datelike, NaiveDate};

impl DutySource<'_> {
    fn today(&self) -> Option<&ApplianceFacts> {
        self.history.facts_on(self.on).filter(|facts| self.applies(facts, self.on))
    }

    /// Only the next leak check is listed.
    pub(super) fn next_leak_check(&self, duties: &mut Vec<Duty>) {
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
    pub(super) fn re_checks(&self, duties: &mut Vec<Duty>) {
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

    pub(super) fn found_leaks(&self, duties: &mut Vec<Duty>) {
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

    pub(super) fn detection_system(&self, duties: &mut Vec<Duty>) {
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
    pub(super) fn full_charge(&self, duties: &mut Vec<Duty>) {
        let Some(facts) = self.history.facts_on(self.on).filter(|facts| facts.full_charge.is_none()) else { return };
        let Some(row) = self.row(DutyKind::DetermineFullCharge, facts, self.on) else { return };
        // Whether the appliance is large enough cannot be known: asked of every one that would be in scope if it were.
        let large = ApplianceFacts { full_charge: Some(Mass::MOST), ..facts.clone() };
        if self.applies(&large, self.on) {
            let from = facts.installed_on.map_or(row.from, |installed| installed.max(row.from));
            duties.push(self.duty(row, from, None, Some(from)));
        }
    }
}

/// A leak inspection, or a leak test of the whole appliance.
fn is_leak_check(history: &History, line: usize) -> bool {
    is_inspection(history, line) || matches!(history.lines[line].act, Act::Test { kind: TestKind::LeakTest, scope: Some(Scope::Whole), .. })
}
