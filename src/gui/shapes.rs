//! Strings and shapes that every page maps alike.

use crate::view::places::{Bar, Row};
use crate::view::shown::{Choice, Fact, MassBar, Rate, Verdict};
use bubblepoint_ui as ui;
use slint::{ModelRc, VecModel};

/// A list for the screens.
pub fn list<T: Clone + 'static>(items: impl IntoIterator<Item = T>) -> ModelRc<T> {
    ModelRc::new(VecModel::from(items.into_iter().collect::<Vec<_>>()))
}

pub fn verdict(verdict: Verdict) -> ui::Verdict {
    match verdict {
        Verdict::None => ui::Verdict::None,
        Verdict::Under => ui::Verdict::Under,
        Verdict::At => ui::Verdict::At,
        Verdict::Over => ui::Verdict::Over,
    }
}

pub fn row(row: &Row) -> ui::Line {
    let bar = match row.bar {
        None => ui::RowBar::default(),
        Some(Bar::Rate { fill, notch, error_from, error_to }) => {
            ui::RowBar { kind: ui::BarKind::Rate, heel: 0.0, fill, notch, error_from, error_to }
        }
        Some(Bar::Mass { fill, notch }) => ui::RowBar { kind: ui::BarKind::Mass, fill, notch, ..ui::RowBar::default() },
    };
    ui::Line {
        key: (&row.key).into(),
        time: (&row.time).into(),
        name: (&row.name).into(),
        facts: (&row.facts).into(),
        state: (&row.state).into(),
        aside: (&row.aside).into(),
        verdict: verdict(row.verdict.unwrap_or_default()),
        judged: row.verdict.is_some(),
        struck: row.struck,
        chosen: false,
        heading: row.heading,
        bar,
    }
}

pub fn rows(rows: &[Row]) -> ModelRc<ui::Line> {
    list(rows.iter().map(row))
}

pub fn facts(facts: &[Fact]) -> ModelRc<ui::FactLine> {
    list(facts.iter().map(|fact| ui::FactLine { caption: (&fact.caption).into(), value: (&fact.value).into() }))
}

pub fn choices(choices: &[Choice]) -> ModelRc<ui::Option> {
    list(choices.iter().map(|choice| ui::Option {
        key: (&choice.key).into(),
        name: (&choice.name).into(),
        facts: (&choice.facts).into(),
        refused: (&choice.refused).into(),
    }))
}

pub fn rate(rate: &Rate) -> ui::LeakRate {
    ui::LeakRate {
        rulebook: (&rate.rulebook).into(),
        figure: (&rate.figure).into(),
        unit: (&rate.unit).into(),
        trigger: (&rate.trigger).into(),
        verdict: verdict(rate.verdict),
        word: (&rate.word).into(),
        consequence: (&rate.consequence).into(),
        rate_at: rate.rate_at,
        trigger_at: rate.trigger_at,
        error_from: rate.error_from,
        error_to: rate.error_to,
        broken: rate.broken,
    }
}

pub fn mass_bar(bar: &MassBar) -> ui::Mass {
    ui::Mass {
        heel: bar.heel,
        content: bar.content,
        limits: list(bar.limits.iter().map(|limit| ui::MassLimit { name: (&limit.name).into(), at: limit.at, binding: limit.binding })),
        words: (&bar.words).into(),
        binding: (&bar.binding).into(),
    }
}
