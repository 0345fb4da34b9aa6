//! Leak rates as bars and as a line over time.

use crate::quantity::Ratio;
use crate::rules::{self, LeakRate};
use crate::view::shown::{Rate, Verdict};
use crate::view::{format, words};
use chrono::NaiveDate;
use num_traits::ToPrimitive;

use super::overview::Judged;
use super::row::Bar;

/// Ends of a scale in percent; beyond the last, hundreds.
const ROUND: [f64; 14] = [5.0, 10.0, 20.0, 30.0, 40.0, 50.0, 60.0, 80.0, 100.0, 120.0, 160.0, 200.0, 300.0, 400.0];
/// Beyond so many triggers a bar is broken.
const MOST_TRIGGERS: f64 = 4.0;

/// The rate at each addition over time.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct RateHistory {
    pub steps: Vec<RateStep>,
    /// Where repairs were made, along the time.
    pub repairs: Vec<f32>,
    pub trigger: f32,
    pub trigger_words: String,
    pub from: String,
    pub to: String,
    pub words: String,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct RateStep {
    pub at: f32,
    pub rate: f32,
    pub low: f32,
    pub high: f32,
    pub verdict: Verdict,
}

pub fn verdict(verdict: rules::Verdict) -> Verdict {
    match verdict {
        rules::Verdict::Under => Verdict::Under,
        rules::Verdict::At => Verdict::At,
        rules::Verdict::Over => Verdict::Over,
    }
}

/// For drawing alone.
pub fn number(value: Ratio) -> f64 {
    value.numer().to_f64().unwrap_or(0.0) / value.denom().to_f64().unwrap_or(1.0)
}

fn error(rate: &LeakRate) -> f64 {
    rate.error.as_ref().map_or(0.0, |band| band.hundredths.to_f64().unwrap_or(0.0) / 100.0)
}

/// The next round figure above a percentage.
fn round_above(percent: f64) -> f64 {
    ROUND.into_iter().find(|end| *end > percent).unwrap_or_else(|| ((percent / 100.0).floor() + 1.0) * 100.0)
}

struct Scale {
    end: f64,
    broken: bool,
}

impl Scale {
    fn of(rate: &LeakRate) -> Self {
        let (percent, trigger) = (number(rate.percent), number(rate.trigger));
        let broken = percent > MOST_TRIGGERS * trigger;
        let most = if broken { MOST_TRIGGERS * trigger } else { percent + error(rate) };
        Self { end: round_above(most.max(trigger)), broken }
    }

    /// Drawing only: a share of the scale.
    fn at(&self, percent: f64) -> f32 {
        (percent / self.end).clamp(0.0, 1.0) as f32
    }
}

/// The small bar of a row.
pub fn row_bar(rate: &LeakRate) -> Bar {
    let scale = Scale::of(rate);
    let (percent, error) = (number(rate.percent), error(rate));
    let drawn = error > 0.0 && !scale.broken;
    Bar::Rate {
        fill: if scale.broken { 1.0 } else { scale.at(percent) },
        notch: scale.at(number(rate.trigger)),
        error_from: if drawn { scale.at(percent - error) } else { 0.0 },
        error_to: if drawn { scale.at(percent + error) } else { 0.0 },
    }
}

/// The bar of one rulebook: the latest rate, or why none is due.
pub fn bar(judged: &Judged, book: usize, today: NaiveDate) -> Option<Rate> {
    let judgement = judged.books.get(book)?;
    let title = rules::rulebook(&judgement.id).map_or_else(|| judgement.id.clone(), |book| book.title.clone());
    judgement.method?;
    let Some(rate) = judgement.rate() else {
        let consequence = match (judgement.applies, judged.facts.full_charge) {
            (false, _) => words::sentence(&judgement.why),
            (true, None) => words::office::rate_needs_full_charge(),
            (true, Some(_)) => words::office::no_addition_yet(),
        };
        return Some(Rate { rulebook: title, word: words::office::no_rate_due(), consequence, ..Rate::default() });
    };
    let scale = Scale::of(rate);
    let (percent, error) = (number(rate.percent), error(rate));
    let within = rate.error.as_ref().is_some_and(|band| band.holds_trigger);
    let drawn = error > 0.0 && !scale.broken;
    Some(Rate {
        rulebook: title,
        figure: format::percent(rate.percent),
        unit: words::office::percent_a_year(),
        trigger: format::trigger(rate.trigger),
        verdict: verdict(rate.verdict),
        word: words::office::verdict(rate.verdict.name(), within),
        consequence: words::office::consequence(
            rate.verdict == rules::Verdict::Over && within,
            &judged.next_of(&judgement.id).map(|duty| words::office::duty_by(duty, judged.on, today)).unwrap_or_default(),
        ),
        rate_at: if scale.broken { 1.0 } else { scale.at(percent) },
        trigger_at: scale.at(number(rate.trigger)),
        error_from: if drawn { scale.at(percent - error) } else { 0.0 },
        error_to: if drawn { scale.at(percent + error) } else { 0.0 },
        broken: scale.broken,
    })
}

/// The line over time of the rulebook that judges last; `None` where no addition asked for a rate.
pub fn history(judged: &Judged) -> Option<RateHistory> {
    let rates = &judged.foremost()?.rates;
    let (first, last) = (rates.first()?, rates.last()?);
    let begin = judged.repairs.iter().copied().fold(first.on, NaiveDate::min);
    let end = judged.repairs.iter().copied().fold(last.on, NaiveDate::max);
    let span = (end - begin).num_days().to_f64().unwrap_or(0.0);
    // Inset, so that no mark is cut in half at an end.
    let along = |day: NaiveDate| {
        let part = if span > 0.0 { (day - begin).num_days().to_f64().unwrap_or(0.0) / span } else { 0.5 };
        (0.02 + 0.96 * part) as f32
    };
    let trigger = number(last.trigger);
    let highest = rates.iter().map(|rate| number(rate.percent) + error(rate)).fold(trigger, f64::max);
    let scale = Scale { end: round_above(highest.min(MOST_TRIGGERS * trigger)), broken: false };
    let steps = rates.iter().map(|rate| {
        let (percent, error) = (number(rate.percent), error(rate));
        RateStep {
            at: along(rate.on),
            rate: scale.at(percent),
            low: scale.at(percent - error),
            high: scale.at(percent + error),
            verdict: verdict(rate.verdict),
        }
    });
    let over = rates.iter().filter(|rate| rate.verdict == rules::Verdict::Over).count();
    Some(RateHistory {
        steps: steps.collect(),
        repairs: judged.repairs.iter().map(|day| along(*day)).collect(),
        trigger: scale.at(trigger),
        trigger_words: words::office::trigger(&format::trigger(last.trigger)),
        from: words::office::month(begin),
        to: words::office::month(end),
        words: words::office::history(
            rates.len(),
            over,
            &format::full_day(first.on),
            &format::full_day(last.on),
            &format::trigger(last.trigger),
        ),
    })
}
