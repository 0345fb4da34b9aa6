//! View models as Slint's types; lists that keep their rows.

use crate::view::shown;
use bubblepoint_ui as ui;
use slint::{Model, ModelRc, SharedString, VecModel};

/// Sends a message for a callback.
macro_rules! on {
    ($gui:ident, $adapter:ident.$callback:ident($($argument:ident),*) => $msg:expr) => {{
        let gui = std::rc::Rc::clone($gui);
        $adapter.$callback(move |$($argument),*| gui.tell($msg));
    }};
}

/// Brings a list of an adapter up to date, row by row.
macro_rules! list {
    ($adapter:ident.$get:ident, $set:ident, $rows:expr) => {
        if let Some(model) = $crate::gui::rows::renew(&$adapter.$get(), $rows) {
            $adapter.$set(model);
        }
    };
}

/// Changes the rows that differ, so that focus and place in the list stay.
/// The first time, when the list is not ours yet, a new one is returned.
pub fn renew<T: Clone + PartialEq + 'static>(current: &ModelRc<T>, rows: Vec<T>) -> Option<ModelRc<T>> {
    let Some(model) = current.as_any().downcast_ref::<VecModel<T>>() else {
        return Some(ModelRc::new(VecModel::from(rows)));
    };
    let kept = rows.len().min(model.row_count());
    while model.row_count() > rows.len() {
        model.remove(model.row_count() - 1);
    }
    for (index, row) in rows.into_iter().enumerate() {
        if index >= kept {
            model.push(row);
        } else if model.row_data(index).as_ref() != Some(&row) {
            model.set_row_data(index, row);
        }
    }
    None
}

/// A list inside a row.
pub fn inner<T: Clone + 'static>(rows: Vec<T>) -> ModelRc<T> {
    ModelRc::new(VecModel::from(rows))
}

pub fn text(text: &str) -> SharedString {
    SharedString::from(text)
}

pub fn verdict(verdict: shown::Verdict) -> ui::Verdict {
    match verdict {
        shown::Verdict::None => ui::Verdict::None,
        shown::Verdict::Under => ui::Verdict::Under,
        shown::Verdict::At => ui::Verdict::At,
        shown::Verdict::Over => ui::Verdict::Over,
    }
}

fn row_bar(bar: Option<shown::Bar>) -> ui::RowBar {
    match bar {
        None => ui::RowBar::default(),
        Some(shown::Bar::Rate { fill, notch, error_from, error_to }) => {
            ui::RowBar { kind: ui::BarKind::Rate, heel: 0.0, fill, notch, error_from, error_to }
        }
        Some(shown::Bar::Mass { fill, notch }) => ui::RowBar { kind: ui::BarKind::Mass, fill, notch, ..ui::RowBar::default() },
    }
}

pub fn line(line: &shown::Line) -> ui::Line {
    ui::Line {
        key: text(&line.key),
        time: text(&line.time),
        name: text(&line.name),
        facts: text(&line.facts),
        state: text(&line.state),
        aside: text(&line.aside),
        judged: line.verdict.is_some(),
        verdict: verdict(line.verdict.unwrap_or_default()),
        struck: line.struck,
        chosen: false,
        heading: line.heading,
        bar: row_bar(line.bar),
    }
}

pub fn lines(lines: &[shown::Line]) -> Vec<ui::Line> {
    lines.iter().map(line).collect()
}

pub fn facts(facts: &[shown::Fact]) -> Vec<ui::FactLine> {
    facts.iter().map(|fact| ui::FactLine { caption: text(&fact.caption), value: text(&fact.value) }).collect()
}

pub fn choices(choices: &[shown::Choice]) -> Vec<ui::Option> {
    choices
        .iter()
        .map(|choice| ui::Option {
            key: text(&choice.key),
            name: text(&choice.name),
            facts: text(&choice.facts),
            refused: text(&choice.refused),
        })
        .collect()
}

pub fn rates(rates: &[shown::Rate]) -> Vec<ui::LeakRate> {
    rates
        .iter()
        .map(|rate| ui::LeakRate {
            rulebook: text(&rate.rulebook),
            caption: text(&rate.caption),
            figure: text(&rate.figure),
            unit: text(&rate.unit),
            trigger: text(&rate.trigger),
            verdict: verdict(rate.verdict),
            word: text(&rate.word),
            consequence: text(&rate.consequence),
            rate_at: rate.rate_at,
            trigger_at: rate.trigger_at,
            error_from: rate.error_from,
            error_to: rate.error_to,
            broken: rate.broken,
        })
        .collect()
}

pub fn reasons(reasons: &[shown::Reason]) -> Vec<ui::Reasoning> {
    reasons
        .iter()
        .map(|reason| ui::Reasoning {
            title: text(&reason.title),
            text: text(&reason.text),
            inputs: inner(facts(&reason.inputs)),
            source: text(&reason.source),
        })
        .collect()
}

pub fn mass(bar: &shown::MassBar) -> ui::Mass {
    let limit = |limit: &shown::MassLimit| ui::MassLimit { name: text(&limit.name), at: limit.at, binding: limit.binding };
    ui::Mass {
        heel: bar.heel,
        content: bar.content,
        limits: inner(bar.limits.iter().map(limit).collect()),
        words: text(&bar.words),
        binding: text(&bar.binding),
    }
}

pub fn reading(reading: &shown::Reading) -> ui::Reading {
    ui::Reading {
        key: text(&reading.key),
        caption: text(&reading.caption),
        text: text(&reading.text),
        unit: text(&reading.unit),
        last: text(&reading.last),
        wrong: reading.wrong,
    }
}

pub fn cautions(cautions: &[shown::Caution]) -> Vec<ui::Caution> {
    cautions
        .iter()
        .map(|caution| ui::Caution {
            key: text(&caution.key),
            text: text(&caution.text),
            basis: text(&caution.basis),
            acknowledge: text(&caution.acknowledge),
            acknowledged: caution.acknowledged,
        })
        .collect()
}

pub fn refusal(refusal: &shown::Refusal) -> ui::Refusal {
    ui::Refusal { title: text(&refusal.title), text: text(&refusal.text), with_reason: refusal.with_reason }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_list_keeps_the_rows_that_stay() {
        let model = ModelRc::new(VecModel::from(vec![1, 2, 3]));
        assert!(renew(&model, vec![1, 5]).is_none());
        assert_eq!(model.iter().collect::<Vec<_>>(), [1, 5]);
        assert!(renew(&model, vec![1, 5, 7]).is_none());
        assert_eq!(model.iter().collect::<Vec<_>>(), [1, 5, 7]);
        // A number is a model of as many rows.
        let foreign: ModelRc<i32> = ModelRc::new(2_usize);
        let fresh = renew(&foreign, vec![1]).expect("a list that is not ours is replaced");
        assert_eq!(fresh.iter().collect::<Vec<_>>(), [1]);
    }
}
