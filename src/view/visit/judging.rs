//! What the rules make of an appliance, as bars, rows and reasons.

use crate::app::ApplianceStanding;
use crate::ledger::{Act, EntryId, Line, RateMethod};
use crate::measure::{CylinderLimit, LimitKind};
use crate::quantity::{Mass, MassUnit, Ratio, parse_decimal};
use crate::rules::{self, Assessment, Duty, DutyState, Judgement, LeakRate, assess, points, rulebook};
use crate::view::shown::{Fact, MassBar, MassLimit, Rate, Reason, Verdict};
use crate::view::{format, shown, words};
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
        (_, None) if duty.rulebook.starts_with("us-") => words::no_day_yet(),
        (_, None) => words::without_delay(),
    }
}

/// A duty as a row.
pub fn duty_line(duty: &Duty, on: NaiveDate) -> shown::Line {
    shown::Line {
        key: format!("{}/{}/{}", duty.rulebook, duty.kind.name(), duty.from),
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
            rates.push(Rate { word: words::no_rate_due(), consequence: why, ..Rate::default() });
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
                rulebook: title(&judgement.id),
                figure: format::percent(rate.percent),
                unit: words::percent_a_year(),
                trigger: format::trigger(rate.trigger),
                verdict: verdict(rate.verdict),
                word: words::verdict(rate.verdict.name(), within_error(rate)),
                consequence: self.consequence(judgement, rate),
                ..rate_bar(rate)
            },
            None => Rate {
                rulebook: title(&judgement.id),
                word: words::no_rate_due(),
                consequence: self.why_no_rate(judgement),
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
        let mut reasons = Vec::new();
        for judgement in &self.assessment.rulebooks {
            let rate = judgement.rate();
            if let Some(rate) = rate {
                reasons.push(self.working(rate));
                reasons.push(Reason {
                    title: words::trigger_title(&format::trigger(rate.trigger)),
                    text: words::sentence(&judgement.why),
                    source: rate.trigger_source.clone(),
                    ..Reason::default()
                });
            } else {
                reasons.push(Reason {
                    title: words::applies_because(&title(&judgement.id), judgement.applies),
                    text: words::sentence(&judgement.why),
                    ..Reason::default()
                });
            }
        }
        // What else the rulebooks ask: detection systems, records, later due days, gas that may not be used.
        reasons.extend(points(self.assessment).into_iter().map(|point| Reason {
            title: title(&point.rulebook),
            text: words::sentence(&point.text),
            source: point.source,
            ..Reason::default()
        }));
        reasons
    }

    fn working(&self, rate: &LeakRate) -> Reason {
        let (title, text) = match rate.method {
            RateMethod::Annualizing => (words::annualizing_title(), words::annualizing_text()),
            RateMethod::RollingAverage => (words::rolling_title(), words::rolling_text()),
        };
        let mut inputs = vec![
            Fact::new("added", format::mass(rate.added, self.unit)),
            Fact::new("full charge", format::mass(rate.full_charge, self.unit)),
        ];
        if let Some(days) = rate.days {
            inputs.push(Fact::new("days", days.to_string()));
        }
        if let Some(from) = rate.window_from {
            inputs.push(Fact::new("counted from", format::full_day(from)));
        }
        inputs.extend(rate.notes.iter().map(|note| Fact::new("taken for granted", note)));
        inputs.push(Fact::new("leak rate", format!("{} %", format::percent(rate.percent))));
        if let Some(band) = &rate.error {
            inputs.push(Fact::new("weighing error, k = 2", words::plus_minus(&format!("{} %", band.percent))));
        }
        Reason { title, text, inputs, source: rate.source.clone() }
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

fn title(id: &str) -> String {
    rulebook(id).map_or_else(|| id.to_owned(), |book| book.title.clone())
}

fn within_error(rate: &LeakRate) -> bool {
    rate.error.as_ref().is_some_and(|band| band.holds_trigger)
}

fn verdict(verdict: rules::Verdict) -> Verdict {
    match verdict {
        rules::Verdict::Under => Verdict::Under,
        rules::Verdict::At => Verdict::At,
        rules::Verdict::Over => Verdict::Over,
    }
}

/// Places along the leak-rate bar. The scale ends at the next round figure
/// above rate and trigger; beyond four times the trigger the bar is broken.
pub fn rate_bar(rate: &LeakRate) -> Rate {
    use format::float;
    let (percent, trigger) = (float(rate.percent), float(rate.trigger));
    let band = rate.error.as_ref().and_then(|band| parse_decimal(&band.percent).ok()).map_or(0.0, float);
    let broken = percent > 4.0 * trigger;
    let end = if broken { round_up(2.0 * trigger) } else { round_up((percent + band).max(trigger * 1.1)) };
    #[allow(clippy::cast_possible_truncation)]
    let at = |value: f64| (value / end).clamp(0.0, 1.0) as f32;
    Rate {
        rate_at: at(percent),
        trigger_at: at(trigger),
        error_from: at(percent - band),
        error_to: at(percent + band),
        broken,
        ..Rate::default()
    }
}

/// 1, 2, 4, 5 or 10 times a power of ten.
fn round_up(value: f64) -> f64 {
    let power = 10_f64.powf(value.max(0.01).log10().floor());
    [1.0, 2.0, 4.0, 5.0, 10.0].into_iter().map(|step| step * power).find(|round| *round >= value).unwrap_or(value)
}

/// A cylinder's bar: from empty to full of water.
pub fn mass_bar(
    content: Option<Mass>,
    heel: Option<Mass>,
    capacity: Option<Ratio>,
    limit: Option<&CylinderLimit>,
    unit: MassUnit,
) -> MassBar {
    let kg = |mass: Mass| format::float(mass.kg());
    let binding = limit.and_then(|limit| limit.binding.as_ref());
    // Without a water capacity the bar ends a quarter above what there is to show.
    let end = capacity.map(format::float).unwrap_or_else(|| {
        let most: f64 = content.map_or(0.0, kg).max(binding.map_or(0.0, |binding| kg(binding.net)));
        if most > 0.0 { most * 1.25 } else { 1.0 }
    });
    #[allow(clippy::cast_possible_truncation)]
    let at = |mass: Mass| (kg(mass) / end).clamp(0.0, 1.0) as f32;
    let limits = limit.map_or(&[][..], |limit| &limit.limits).iter().filter(|limit| limit.counts);
    MassBar {
        heel: content.and(heel).map_or(0.0, at),
        content: content.map_or(0.0, at),
        limits: limits
            .map(|limit| MassLimit { name: short(limit.kind).to_owned(), at: at(limit.net), binding: Some(limit) == binding })
            .collect(),
        words: content.map_or_else(words::not_weighed, |content| format::mass(content, unit)),
        binding: binding.map_or_else(words::no_limit, |binding| words::limit_binds(&format::mass(binding.net, unit), &binding.name())),
    }
}

fn short(kind: LimitKind) -> &'static str {
    match kind {
        LimitKind::EightyPercent => "80 %",
        LimitKind::LiquidFull => "55 °C",
        LimitKind::FillingDensity => "density",
        LimitKind::FillingRatio => "ADR",
        LimitKind::Stamped => "stamp",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn scales_end_at_round_figures() {
        for (value, end) in [(22.0, 40.0), (9.4, 10.0), (0.3, 0.4), (40.0, 40.0), (41.0, 50.0), (180.0, 200.0)] {
            assert!((round_up(value) - end).abs() < 1e-9, "{value} ends at {}", round_up(value));
        }
    }

    #[test]
    fn a_cylinder_without_facts_has_a_bar_all_the_same() {
        let bar = mass_bar(None, None, None, None, MassUnit::Kilogram);
        assert_eq!((bar.content, bar.words.as_str()), (0.0, "never weighed"));
        let half = mass_bar(Some(Mass::from_kg(10)), Some(Mass::from_kg(1)), Some(Ratio::from_integer(20)), None, MassUnit::Kilogram);
        assert_eq!(half.content, 0.5);
    }
}
