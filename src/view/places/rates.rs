//! Leak rates as bars and as a line over time.

use super::due;
use super::overview::Judged;
use crate::rules;
use crate::view::bars::{MOST_TRIGGERS, Scale, error, rate_bar, verdict};
use crate::view::shown::{Rate, Verdict};
use crate::view::{format, words};
use chrono::NaiveDate;
use num_traits::ToPrimitive;

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

/// The bar of one rulebook: the latest rate, or why none is due.
pub fn bar(judged: &Judged, book: usize, today: NaiveDate) -> Option<Rate> {
    let judgement = judged.books.get(book)?;
    let title = rules::rulebook(&judgement.id).map_or_else(|| judgement.id.clone(), |book| book.title.clone());
    judgement.method?;
    let Some(rate) = judgement.rate() else {
        let consequence = match (judgement.applies, judged.facts.full_charge) {
            (false, _) => words::sentence(&judgement.why),
            (true, None) => words::no_rate_without_full_charge(),
            (true, Some(_)) => words::sentence(&words::no_addition_yet()),
        };
        return Some(Rate { rulebook: title, caption: words::leak_rate(None), word: words::no_rate_due(), consequence, ..Rate::default() });
    };
    let within = rate.error.as_ref().is_some_and(|band| band.holds_trigger);
    let next = judged.next_of(&judgement.id).map(|duty| due::by_words(duty, judged.on, today)).unwrap_or_default();
    Some(Rate {
        rulebook: title,
        figure: format::percent(rate.percent),
        unit: words::percent_a_year(),
        trigger: format::trigger(rate.trigger),
        verdict: verdict(rate.verdict),
        word: words::verdict(rate.verdict.name(), within),
        consequence: if rate.verdict == rules::Verdict::Over && within { words::duty_stands(&next) } else { format::capital(&next) },
        caption: words::leak_rate(Some(rate.method)),
        ..rate_bar(rate)
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
    let trigger = format::float(last.trigger);
    let highest = rates.iter().map(|rate| format::float(rate.percent) + error(rate)).fold(trigger, f64::max);
    let scale = Scale::to(highest.min(MOST_TRIGGERS * trigger));
    let steps = rates.iter().map(|rate| {
        let (percent, error) = (format::float(rate.percent), error(rate));
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
