//! What the rules make of an appliance, as bars, rows and reasons.

use crate::app::ApplianceStanding;
use crate::ledger::{Act, EntryId, Line};
use crate::quantity::MassUnit;
use crate::rules::{self, Assessment, Duty, DutyKind, DutyState, Judgement, LeakRate, assess, points, readings};
use crate::view::bars::{rate_bar, verdict};
use crate::view::shown::{Fact, Rate, Reason, Verdict};
use crate::view::{format, shown, why, words};
use chrono::NaiveDate;

/// What the page and the charge page show of an appliance.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Judging {
    /// One per rulebook that applies.
    pub rates: Vec<Rate>,
    pub reasons: Vec<Reason>,
    /// Open and late duties.
    pub duties: Vec<shown::Line>,
    /// Duties that the entry in focus starts or meets.
    pub follows: Vec<Fact>,
    /// The gravest verdict.
    pub verdict: Verdict,
    /// `20.28 %`, or that no rate is due.
    pub state: String,
}

/// Judges as of `on`. With a `focus`, rates are those that this entry asked for, and `follows` what it starts.
pub fn judge(standing: &ApplianceStanding, lines: &[Line], on: NaiveDate, unit: MassUnit, focus: Option<EntryId>) -> Judging {
    let Some(assessment) = assess(&standing.site, &standing.appliance, lines, on) else {
        return Judging { state: words::no_rate_due(), ..Judging::default() };
    };
    let sight = Sight { assessment: &assessment, on, unit, focus };
    let rates = sight.rates();
    let grave = |verdict: Verdict| match verdict {
        Verdict::None => 0,
        Verdict::Under => 1,
        Verdict::At => 2,
        Verdict::Over => 3,
    };
    let gravest = rates.iter().max_by_key(|rate| grave(rate.verdict));
    Judging {
        verdict: gravest.map(|rate| rate.verdict).unwrap_or_default(),
        state: gravest.filter(|rate| !rate.figure.is_empty()).map_or_else(words::no_rate_due, |rate| format!("{} %", rate.figure)),
        reasons: sight.reasons(),
        duties: assessment.duties.iter().filter(|duty| is_open(duty, on)).map(|duty| duty_line(duty, on)).collect(),
        follows: sight.follows(),
        rates,
    }
}

fn is_open(duty: &Duty, on: NaiveDate) -> bool {
    matches!(duty.state(on), DutyState::Open | DutyState::Late | DutyState::Suspended)
}

/// `by 2 Apr`, `late since 2 Apr`, `no day yet`.
pub fn duty_due(duty: &Duty, on: NaiveDate) -> String {
    match (duty.state(on), duty.due) {
        (DutyState::Suspended, _) => words::suspended(),
        (DutyState::Late, Some(due)) => words::late_since(&format::day(due, on)),
        (_, Some(due)) => words::by_day(&format::day(due, on)),
        (_, None) if duty.kind == DutyKind::RepairOfFoundLeak => words::without_undue_delay(),
        (_, None) => words::no_day_yet(),
    }
}

/// What tells a duty of an appliance from its others.
pub fn duty_key(duty: &Duty) -> String {
    format!("{}/{}/{}", duty.rulebook, duty.kind.name(), duty.from)
}

/// A duty as a row.
pub fn duty_line(duty: &Duty, on: NaiveDate) -> shown::Line {
    shown::Line {
        key: duty_key(duty),
        name: format::capital(duty.kind.name()),
        facts: duty.source.clone(),
        state: duty_due(duty, on),
        verdict: (duty.state(on) == DutyState::Late).then_some(Verdict::Over),
        ..shown::Line::default()
    }
}

struct Sight<'a> {
    assessment: &'a Assessment<'a>,
    on: NaiveDate,
    unit: MassUnit,
    focus: Option<EntryId>,
}

impl Sight<'_> {
    /// The line in focus, as an index into the history.
    fn focus_line(&self) -> Option<usize> {
        let focus = self.focus?;
        self.assessment.history.lines.iter().position(|line| line.entry == focus)
    }

    fn rates(&self) -> Vec<Rate> {
        let mut rates: Vec<Rate> =
            self.assessment.rulebooks.iter().filter(|judgement| judgement.applies).map(|judgement| self.rate(judgement)).collect();
        // Rulebooks without a leak rate say nothing beside one that has one.
        if rates.iter().any(|rate| !rate.figure.is_empty()) {
            rates.retain(|rate| !rate.figure.is_empty() || self.focus.is_some());
        }
        if rates.is_empty() {
            let why = self.assessment.rulebooks.first().map_or_else(words::no_rulebook, |judgement| words::sentence(&judgement.why));
            rates.push(Rate { caption: words::leak_rate(None), word: words::no_rate_due(), consequence: why, ..Rate::default() });
        }
        rates
    }

    fn rate(&self, judgement: &Judgement) -> Rate {
        let day = self.focus_line().map(|line| self.assessment.history.date(line));
        let rate = match day {
            Some(day) => judgement.rates.iter().find(|rate| rate.on == day),
            None => judgement.rate(),
        };
        match rate {
            Some(rate) => Rate {
                rulebook: why::title(&judgement.id),
                figure: format::percent(rate.percent),
                unit: words::percent_a_year(),
                trigger: format::trigger(rate.trigger),
                verdict: verdict(rate.verdict),
                word: words::verdict(rate.verdict.name(), within_error(rate)),
                consequence: self.consequence(judgement, rate),
                caption: words::leak_rate(Some(rate.method)),
                ..rate_bar(rate)
            },
            None => Rate {
                rulebook: why::title(&judgement.id),
                word: words::no_rate_due(),
                consequence: self.why_no_rate(judgement),
                caption: words::leak_rate(None),
                ..Rate::default()
            },
        }
    }

    /// The next duty that this rulebook asks for; that it stands, where the error could turn the verdict.
    fn consequence(&self, judgement: &Judgement, rate: &LeakRate) -> String {
        let next = if rate.verdict == rules::Verdict::Over { self.next_duty(&judgement.id) } else { String::new() };
        if rate.verdict == rules::Verdict::Over && within_error(rate) { words::duty_stands(&next) } else { next }
    }

    fn next_duty(&self, rulebook: &str) -> String {
        let own = self.assessment.duties.iter().filter(|duty| duty.rulebook == rulebook && is_open(duty, self.on));
        own.min_by_key(|duty| (duty.due.is_none(), duty.due))
            .map(|duty| words::duty_by(duty.kind.name(), &duty_due(duty, self.on), &duty.source))
            .unwrap_or_default()
    }

    fn why_no_rate(&self, judgement: &Judgement) -> String {
        if judgement.method.is_none() {
            return self.next_duty(&judgement.id);
        }
        if self.assessment.facts.full_charge.is_none() {
            return words::no_rate_without_full_charge();
        }
        match self.focus_line().map(|line| &self.assessment.history.lines[line].act) {
            Some(Act::Charge { purpose, .. }) => words::why_no_rate(*purpose),
            _ => words::sentence(&words::no_addition_yet()),
        }
    }

    fn reasons(&self) -> Vec<Reason> {
        let of = |judgement: &Judgement| {
            let rate = judgement.rate();
            // The first reading is the method's own, which the text says already.
            let taken = rate.iter().flat_map(|rate| readings(&self.assessment.history, rate).into_iter().skip(1));
            why::of_rate(judgement, rate, &taken.map(|reading| reading.text).collect::<Vec<_>>(), self.unit)
        };
        let rates = self.assessment.rulebooks.iter().flat_map(of);
        rates.chain(why::of_points(&points(self.assessment))).collect()
    }

    fn follows(&self) -> Vec<Fact> {
        let Some(line) = self.focus_line() else { return Vec::new() };
        let starts = self.assessment.duties.iter().filter(|duty| duty.from_line == Some(line) && is_open(duty, self.on));
        let met = self.assessment.duties.iter().filter(|duty| duty.met_by == Some(line));
        starts
            .map(|duty| Fact::new(words::starts(duty.kind.name()), duty_due(duty, self.on)))
            .chain(met.map(|duty| Fact::new(words::met(duty.kind.name()), &duty.source)))
            .collect()
    }
}

fn within_error(rate: &LeakRate) -> bool {
    rate.error.as_ref().is_some_and(|band| band.holds_trigger)
}
