//! Why: the facts behind a verdict or a duty, the sum worked through, the
//! reading taken, and the article.

use super::shown::{Fact, Reason};
use super::{format, words};
use crate::ledger::RateMethod;
use crate::quantity::MassUnit;
use crate::rules::{Judgement, LeakRate, Point, rulebook};

/// A rulebook's title.
pub fn title(id: &str) -> String {
    rulebook(id).map_or_else(|| id.to_owned(), |book| book.title.clone())
}

/// A rate with the readings taken for it, and its trigger; without a rate, why the rulebook applies or not.
pub fn of_rate(judgement: &Judgement, rate: Option<&LeakRate>, readings: &[String], unit: MassUnit) -> Vec<Reason> {
    let text = words::sentence(&judgement.why);
    let Some(rate) = rate else {
        return vec![Reason { title: words::applies_because(&title(&judgement.id), judgement.applies), text, ..Reason::default() }];
    };
    let trigger = words::trigger_title(&format::trigger(rate.trigger));
    vec![working(rate, readings, unit), Reason { title: trigger, text, source: rate.trigger_source.clone(), ..Reason::default() }]
}

/// What else the rulebooks ask: detection systems, records, later due days, gas that may not be used.
pub fn of_points(points: &[Point]) -> Vec<Reason> {
    let reason = |point: &Point| Reason {
        title: title(&point.rulebook),
        text: words::sentence(&point.text),
        source: point.source.clone(),
        ..Reason::default()
    };
    points.iter().map(reason).collect()
}

fn working(rate: &LeakRate, readings: &[String], unit: MassUnit) -> Reason {
    let (title, text) = match rate.method {
        RateMethod::Annualizing => (words::annualizing_title(), words::annualizing_text()),
        RateMethod::RollingAverage => (words::rolling_title(), words::rolling_text()),
    };
    let (added, full_charge) = (format::mass(rate.added, unit), format::mass(rate.full_charge, unit));
    let mut inputs = vec![Fact::new("added", &added), Fact::new("full charge", &full_charge)];
    if let Some(days) = rate.days {
        inputs.push(Fact::new("days", days.to_string()));
    }
    if let Some(from) = rate.window_from {
        inputs.push(Fact::new("counted from", format::full_day(from)));
    }
    inputs.extend(rate.notes.iter().map(|note| Fact::new(words::reading_taken(), note)));
    inputs.extend(readings.iter().map(|reading| Fact::new(words::reading_taken(), reading)));
    inputs.push(Fact::new("sum", words::sum(rate.longest_days, &added, &full_charge, rate.days)));
    inputs.push(Fact::new("leak rate", format!("{} %", format::percent(rate.percent))));
    if let Some(band) = &rate.error {
        inputs.push(Fact::new("weighing error, k = 2", words::plus_minus(&format!("{} %", band.percent))));
    }
    Reason { title, text, inputs, source: rate.source.clone() }
}
