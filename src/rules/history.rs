//! How a log is read: order, works, chains, and what of each charge is *added*.
//!
//! Where the law allows two readings, `DEVELOPERS.md` says which was taken.

use super::book::season_months;
use super::marks::{Mark, Marks};
use crate::ledger::{Act, Appliance, ApplianceFacts, ChargePurpose, Line, RecoveryPurpose, TestKind, TestResult, Transfer};
use crate::quantity::{Mass, add_months};
use chrono::NaiveDate;
use std::collections::HashMap;

/// An appliance's lines up to a day, in order, with all that follows from
/// them alone.
#[derive(Debug)]
pub struct History<'a> {
    pub appliance: &'a Appliance,
    pub lines: Vec<&'a Line>,
    /// Per line: what it added, after netting; zero for all but charges.
    pub added: Vec<Mass>,
    /// Per line: a charge for which a rate is due.
    pub counted: Vec<bool>,
    /// Per line: the charge belongs to the same leak as an earlier work.
    same_leak: Vec<bool>,
    /// Per line: index of its work.
    work_of: Vec<usize>,
    pub works: Vec<Work>,
    /// Per line: a follow-up verification test that counts.
    follow_up_counts: Vec<bool>,
    marks: Marks,
    retired_on: Option<NaiveDate>,
    /// Facts that hold from a place in `lines` on, by place.
    facts: Vec<(NaiveDate, Option<usize>, ApplianceFacts)>,
}

/// Lines that belong together: one job, or one day without a job.
#[derive(Debug, Default)]
pub struct Work {
    pub lines: Vec<usize>,
    /// First charge of any purpose.
    pub first_charge: Option<usize>,
    /// First charge for which a rate is due.
    pub first_counted: Option<usize>,
    /// The number of the first work of the leak that this one is about: works
    /// of one leak have one rate.
    leak: usize,
    /// Later works of the leak, at its first.
    joined: Vec<usize>,
}

impl<'a> History<'a> {
    /// Reads the appliance's lines, those after `on` left out. `lines` may be
    /// in any order; struck entries must have been left out.
    pub fn new(appliance: &'a Appliance, lines: &'a [Line], on: NaiveDate) -> Self {
        let lines = in_order(lines.iter().filter(|line| line.at.date <= on).collect());
        let count = lines.len();
        let facts = facts_over_time(appliance, &lines);
        let follow_up_counts = follow_ups_that_count(&lines);
        let mut history = Self {
            appliance,
            added: vec![Mass::ZERO; count],
            counted: vec![false; count],
            same_leak: vec![false; count],
            work_of: vec![0; count],
            works: Vec::new(),
            marks: Marks::of(&lines, &follow_up_counts),
            follow_up_counts,
            retired_on: lines.iter().find(|line| matches!(line.act, Act::Retire)).map(|line| line.at.date),
            lines,
            facts,
        };
        history.gather_works();
        history.net();
        history.find_chains();
        history
    }

    pub fn date(&self, index: usize) -> NaiveDate {
        self.lines[index].at.date
    }

    /// Facts in force at a line; `None` before the first version.
    pub fn facts_at(&self, index: usize) -> Option<&ApplianceFacts> {
        let day = self.date(index);
        self.facts
            .iter()
            .rev()
            .find(|(from, line, _)| *from < day || (*from == day && line.is_none_or(|line| line <= index)))
            .map(|(_, _, facts)| facts)
    }

    /// Facts in force just before a line.
    pub fn facts_before(&self, index: usize) -> Option<&ApplianceFacts> {
        let day = self.date(index);
        self.facts
            .iter()
            .rev()
            .find(|(from, line, _)| *from < day || (*from == day && line.is_none_or(|line| line < index)))
            .map(|(_, _, facts)| facts)
    }

    /// Facts in force at the end of a day.
    pub fn facts_on(&self, day: NaiveDate) -> Option<&ApplianceFacts> {
        self.facts.iter().rev().find(|(from, _, _)| *from <= day).map(|(_, _, facts)| facts)
    }

    /// The first day on which this appliance is known to have been there.
    pub fn installed_on(&self) -> Option<NaiveDate> {
        self.facts.iter().rev().find_map(|(_, _, facts)| facts.installed_on)
    }

    pub fn work(&self, index: usize) -> &Work {
        &self.works[self.work_of[index]]
    }

    pub fn job(&self, index: usize) -> Option<&str> {
        self.lines[index].job.as_deref()
    }

    /// The works of one leak: that of a line and all that were joined to it by
    /// the end of the line's day, whichever of them came first.
    pub fn chain(&self, index: usize) -> impl Iterator<Item = &Work> {
        let (work, day) = (self.work_of[index], self.date(index));
        let first = self.works[work].leak;
        std::iter::once(first).chain(self.works[first].joined.iter().copied()).filter_map(move |number| {
            let begun = self.works[number].first_counted.is_some_and(|first| self.date(first) <= day);
            (number == work || begun).then(|| &self.works[number])
        })
    }

    /// The first charge, of any purpose, of the work or chain of a line.
    pub fn first_charge_of_chain(&self, index: usize) -> Option<usize> {
        self.chain(index).filter_map(|work| work.first_charge).min()
    }

    /// The last charge, of any purpose, before a line.
    pub fn last_charge_before(&self, index: usize) -> Option<usize> {
        self.marks.last_before(Mark::Charge, index)
    }

    pub fn is_charge(&self, index: usize) -> bool {
        matches!(self.lines[index].act, Act::Charge { .. })
    }

    pub fn is_recovery(&self, index: usize) -> bool {
        matches!(self.lines[index].act, Act::Recover { .. })
    }

    /// A repair that is for good.
    pub fn is_lasting_repair(&self, index: usize) -> bool {
        matches!(self.lines[index].act, Act::Repair { temporary: false })
    }

    pub fn is_passed_initial_test(&self, index: usize) -> bool {
        matches!(self.lines[index].act, Act::Test { kind: TestKind::InitialVerification, result: Some(TestResult::Pass), .. })
    }

    /// A follow-up verification test that counts: passed, not partial, and an
    /// initial test passed between the latest repair before it and itself.
    pub fn is_follow_up_that_counts(&self, index: usize) -> bool {
        self.follow_up_counts[index]
    }

    /// The latest repair of any kind before a line.
    pub fn repair_before(&self, index: usize) -> Option<usize> {
        (0..index).rev().find(|&i| matches!(self.lines[i].act, Act::Repair { .. }))
    }

    /// The first line after `index` (or from the start) for which `test` holds.
    pub fn first_after(&self, index: Option<usize>, test: impl Fn(usize) -> bool) -> Option<usize> {
        (index.map_or(0, |i| i + 1)..self.lines.len()).find(|&i| test(i))
    }

    /// The day on which the appliance was retired.
    pub fn retired_on(&self) -> Option<NaiveDate> {
        self.retired_on
    }

    /// Where each kind of line stands.
    pub fn marks(&self) -> &Marks {
        &self.marks
    }

    fn gather_works(&mut self) {
        let mut groups = Groups::new();
        let mut by_job: HashMap<&str, usize> = HashMap::new();
        let mut by_day: HashMap<NaiveDate, usize> = HashMap::new();
        let mut group_of = Vec::with_capacity(self.lines.len());
        for line in &self.lines {
            let group = match line.job.as_deref() {
                Some(job) => *by_job.entry(job).or_insert_with(|| groups.add()),
                None => *by_day.entry(line.at.date).or_insert_with(|| groups.add()),
            };
            group_of.push(group);
        }
        // Two works that charge on the same day are one.
        let mut charging: HashMap<NaiveDate, usize> = HashMap::new();
        for (index, &group) in group_of.iter().enumerate() {
            if self.is_charge(index) {
                let first = *charging.entry(self.date(index)).or_insert(group);
                groups.join(first, group);
            }
        }
        let mut numbers: HashMap<usize, usize> = HashMap::new();
        for (index, &group) in group_of.iter().enumerate() {
            let number = *numbers.entry(groups.root(group)).or_insert_with(|| {
                let leak = self.works.len();
                self.works.push(Work { leak, ..Work::default() });
                leak
            });
            self.work_of[index] = number;
            self.works[number].lines.push(index);
        }
    }

    /// What was recovered for repair is used up by the charges that follow in
    /// the same work; only the rest of each charge is added.
    fn net(&mut self) {
        let purposes = effective_purposes(&self.lines);
        for work in &mut self.works {
            let mut credit = Mass::ZERO;
            for &index in &work.lines {
                match &self.lines[index].act {
                    Act::Recover { purpose: RecoveryPurpose::Repair, transfer } => credit += transfer.mass,
                    Act::Charge { transfer, .. } => {
                        work.first_charge.get_or_insert(index);
                        let Some(purpose) = purposes[index] else { continue };
                        let returned = transfer.mass.min(credit);
                        credit -= returned;
                        let rest = transfer.mass - returned;
                        self.added[index] = rest;
                        self.counted[index] = matches!(purpose, ChargePurpose::Leak | ChargePurpose::SameLeak) || rest.is_positive();
                        self.same_leak[index] = purpose == ChargePurpose::SameLeak;
                        if self.counted[index] {
                            work.first_counted.get_or_insert(index);
                        }
                    }
                    _ => {}
                }
            }
        }
    }

    /// A work whose first counted charge is *same leak* is joined to the
    /// latest earlier work with a rate, unless a follow-up test that counts
    /// stands between.
    fn find_chains(&mut self) {
        let mut earlier: Option<usize> = None;
        for index in 0..self.lines.len() {
            if !self.counted[index] {
                continue;
            }
            let number = self.work_of[index];
            let first = self.works[number].first_counted == Some(index);
            if first
                && self.same_leak[index]
                && let Some(previous) = earlier.filter(|&previous| previous != number)
                && let Some(start) = self.works[previous].first_counted
                && !(start + 1..index).any(|i| self.is_follow_up_that_counts(i))
            {
                let leak = self.works[previous].leak;
                self.works[number].leak = leak;
                self.works[leak].joined.push(number);
            }
            earlier = Some(number);
        }
    }
}

/// Per line whether it is a follow-up verification test that counts: one that
/// passed, is not partial, and has an initial test passed since the last repair.
fn follow_ups_that_count(lines: &[&Line]) -> Vec<bool> {
    // Nothing counts before the first repair.
    let (mut repaired, mut tested_since) = (false, false);
    let mut counts = Vec::with_capacity(lines.len());
    for line in lines {
        let mut this = false;
        match line.act {
            Act::Repair { .. } => (repaired, tested_since) = (true, false),
            Act::Test { kind: TestKind::InitialVerification, result: Some(TestResult::Pass), .. } => tested_since = repaired,
            Act::Test { kind: TestKind::FollowUpVerification, result: Some(TestResult::Pass), partial: false, .. } => {
                this = tested_since;
            }
            _ => {}
        }
        counts.push(this);
    }
    counts
}

/// Order of a day: by time, or by position where any line has no time.
fn in_order(mut lines: Vec<&Line>) -> Vec<&Line> {
    lines.sort_by_key(|line| (line.at.date, line.position));
    for day in lines.chunk_by_mut(|a, b| a.at.date == b.at.date) {
        if day.iter().all(|line| line.at.minute.is_some()) {
            day.sort_by_key(|line| line.at.minute);
        }
    }
    lines
}

/// The purpose with which each charge counts towards *added*, where it does.
/// Seasonal and mothball charges count as nothing while together they stay
/// within what was recovered for that purpose (seasonal: within the months of
/// the law);
/// one that breaks this counts wholly as leak.
fn effective_purposes(lines: &[&Line]) -> Vec<Option<ChargePurpose>> {
    let mut seasonal: Vec<(NaiveDate, Mass)> = Vec::new();
    let mut mothballed: Vec<(NaiveDate, Mass)> = Vec::new();
    lines
        .iter()
        .map(|line| match &line.act {
            Act::Recover { purpose: RecoveryPurpose::Seasonal, transfer } => {
                seasonal.push((line.at.date, transfer.mass));
                None
            }
            Act::Recover { purpose: RecoveryPurpose::Mothball, transfer } => {
                mothballed.push((line.at.date, transfer.mass));
                None
            }
            Act::Charge { purpose, transfer } => match purpose {
                ChargePurpose::Leak | ChargePurpose::SameLeak | ChargePurpose::Returned | ChargePurpose::Replacement => Some(*purpose),
                ChargePurpose::Installation | ChargePurpose::FactoryCharge | ChargePurpose::Trim | ChargePurpose::Retrofit => None,
                ChargePurpose::Seasonal => {
                    let months = season_months(line.at.date).unwrap_or(0);
                    let oldest = |from: NaiveDate| add_months(from, months) >= line.at.date;
                    (!take_back(&mut seasonal, transfer, oldest)).then_some(ChargePurpose::Leak)
                }
                ChargePurpose::Mothball => (!take_back(&mut mothballed, transfer, |_| true)).then_some(ChargePurpose::Leak),
            },
            _ => None,
        })
        .collect()
}

/// Takes a charge out of what was recovered, oldest first; all or nothing.
fn take_back(recovered: &mut [(NaiveDate, Mass)], transfer: &Transfer, within: impl Fn(NaiveDate) -> bool) -> bool {
    let available: Mass = recovered.iter().filter(|(day, _)| within(*day)).map(|(_, mass)| *mass).sum();
    if available < transfer.mass {
        return false;
    }
    let mut rest = transfer.mass;
    for (_, mass) in recovered.iter_mut().filter(|(day, _)| within(*day)) {
        let taken = rest.min(*mass);
        *mass -= taken;
        rest -= taken;
    }
    true
}

/// Register versions and retrofits as one timeline.
fn facts_over_time(appliance: &Appliance, lines: &[&Line]) -> Vec<(NaiveDate, Option<usize>, ApplianceFacts)> {
    let mut changes: Vec<(NaiveDate, Option<usize>, Option<&ApplianceFacts>)> = appliance
        .versions
        .all()
        .iter()
        .map(|version| (version.from.unwrap_or(NaiveDate::MIN), None, Some(&version.facts)))
        .chain(
            lines
                .iter()
                .enumerate()
                .filter_map(|(index, line)| matches!(line.act, Act::Retrofit { .. }).then_some((line.at.date, Some(index), None))),
        )
        .collect();
    changes.sort_by_key(|(day, line, _)| (*day, *line));
    let mut timeline: Vec<(NaiveDate, Option<usize>, ApplianceFacts)> = Vec::with_capacity(changes.len());
    for (day, line, version) in changes {
        let facts = match (version, line.map(|index| &lines[index].act), timeline.last()) {
            (Some(version), _, _) => version.clone(),
            (None, Some(Act::Retrofit { refrigerant, full_charge }), Some((_, _, before))) => {
                let mut facts = before.clone();
                if let Some(refrigerant) = refrigerant {
                    facts.refrigerant.clone_from(refrigerant);
                }
                if full_charge.is_some() {
                    (facts.full_charge, facts.full_charge_written) = (*full_charge, None);
                }
                facts
            }
            _ => continue,
        };
        timeline.push((day, line, facts));
    }
    timeline
}

/// Disjoint groups that can be joined.
struct Groups(Vec<usize>);

impl Groups {
    fn new() -> Self {
        Self(Vec::new())
    }

    fn add(&mut self) -> usize {
        self.0.push(self.0.len());
        self.0.len() - 1
    }

    fn root(&self, mut group: usize) -> usize {
        while self.0[group] != group {
            group = self.0[group];
        }
        group
    }

    fn join(&mut self, a: usize, b: usize) {
        let (a, b) = (self.root(a), self.root(b));
        self.0[a.max(b)] = a.min(b);
    }
}
