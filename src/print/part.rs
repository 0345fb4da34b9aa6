//! An appliance's part of the service record: what it is, what came out, what was done.

use super::chart::leak_rate_bar;
use super::fonts::Fonts;
use super::layout::Flow;
use super::plate::{Cell, Column, Field, grid, heading, statement, table};
use super::service::COLUMNS;
use super::sheet::{Block, Style, paragraph};
use super::{entry, words};
use crate::record::{AppliancePart, LeakRate, ServiceRecord, Verdict};

/// One appliance of the record as a plate.
pub(super) fn appliance(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord, part: &AppliancePart) {
    let facts = &part.appliance;
    let strip: Vec<&str> =
        [&facts.name, &facts.refrigerant, &facts.full_charge].into_iter().map(String::as_str).filter(|text| !text.is_empty()).collect();
    let mut strip = strip.join(words::DOT);
    let inner = flow.inner();
    let mut fields = Vec::new();
    if flow.strip_cuts(&strip, words::finding(part.finding)) {
        // Gas and charge give way, and where the strip must cut even the name, it stands in full below.
        strip.clone_from(&facts.name);
        fields.push(Field::required("appliance", &facts.name).strong());
    }
    fields.extend([
        Field::required("refrigerant", &facts.refrigerant).strong(),
        Field::required("full charge", &facts.full_charge).strong(),
        Field::required("how determined", &facts.full_charge_method),
        Field::required("place", &facts.place),
        Field::required("category", &facts.category),
    ]);
    fields.extend(Field::known("equipment", &facts.equipment));
    fields.extend(Field::known("serial", &facts.serial));
    fields.extend(Field::known("assembly", &facts.assembly));
    // 84.106(l)(2)(ii).
    fields.push(Field::required("installed", &facts.installed_on.map(words::day).unwrap_or_default()));
    fields.extend(Field::known("charged at installation", &facts.charged_at_installation));
    fields.extend(Field::known("description", &facts.description));
    fields.extend(Field::known("refrigerant facts", &facts.refrigerant_facts));
    fields.extend(Field::known("declared", &facts.declared.join(", ")));
    let rows = grid(fonts, inner, COLUMNS, &fields);
    flow.open_plate(&strip, words::finding(part.finding), rows.iter().map(|row| row.height).sum::<f32>() + 30.0);
    for row in rows {
        flow.put(row);
    }
    // What came out first, then what was done: as on the screens.
    for rate in &part.leak_rates {
        leak_rate(flow, fonts, rate, record.first_day);
    }
    no_rates(flow, fonts, part);
    open_leaks(flow, fonts, part);
    duties(flow, fonts, part);
    amounts(flow, fonts, part);
    entry::entries(flow, fonts, part, &record.jobs);
    readings(flow, fonts, part);
    flow.close_plate();
}

/// A rate of an addition before `first_day` is the latest there is, and not of this visit.
fn leak_rate(flow: &mut Flow, fonts: &Fonts, rate: &LeakRate, first_day: chrono::NaiveDate) {
    let inner = flow.inner();
    let name = if rate.on < first_day { words::LATEST_LEAK_RATE } else { words::LEAK_RATE };
    let mut head = heading(fonts, inner, name, &format!("{}, {} method", rate.source, rate.method));
    let mut figures = Block::empty(34.0);
    let half = inner / COLUMNS as f32;
    let top = Style::CAPTION.ascent();
    figures.text(0.0, top, words::rate_caption(rate.method), Style::CAPTION);
    figures.text(0.0, 28.0, &words::percent(rate.percent), Style::FIGURE);
    let at = half * 2.0;
    figures.text(at, top, "trigger", Style::CAPTION);
    figures.text(at, 28.0, &words::trigger(rate.trigger), Style { size: 14.0, ..Style::LEAD });
    let at = half * 3.0;
    figures.text(at, top, "verdict", Style::CAPTION);
    figures.text(at, 28.0, rate.verdict.words(), Style { size: 14.0, ..Style::LEAD });
    let error = rate.band.map_or_else(|| "unknown".to_owned(), |band| format!("\u{b1} {}", words::percent(band)));
    let at = half * 5.0;
    figures.text(at, top, "weighing error", Style::CAPTION);
    figures.text(at, 28.0, &error, Style::BODY);
    head = head.below(0.0, figures).below(3.0, leak_rate_bar(fonts, inner, rate));
    head.height += 5.0;
    let mut rows = vec![head];
    if rate.within_weighing_error {
        let text = match rate.verdict {
            Verdict::Over => words::OVER_WITHIN_ERROR,
            Verdict::At => words::AT_WITHIN_ERROR,
            Verdict::Under => words::UNDER_WITHIN_ERROR,
        };
        rows.push(paragraph(fonts, text, Style::STRONG, inner));
    }
    if rate.band.is_none() {
        rows.push(paragraph(fonts, words::BAND_UNKNOWN, Style::BODY, inner));
    }
    flow.put_together(rows);
    flow.space(3.0);
    let mut inputs: Vec<Field> = vec![Field::required("addition of", &words::day(rate.on))];
    for input in &rate.inputs {
        let value = if input.from.is_empty() { input.value.clone() } else { format!("{}, {}", input.value, input.from) };
        inputs.push(Field::required(&input.caption, &value));
    }
    inputs.extend(Field::known("worked out", &rate.working));
    for row in grid(fonts, inner, COLUMNS, &inputs) {
        flow.put(row);
    }
    let because: Vec<&str> = [rate.applies_because.as_str(), rate.trigger_source.as_str()].into_iter().filter(|t| !t.is_empty()).collect();
    if !because.is_empty() {
        flow.put(paragraph(fonts, &because.join("; trigger: "), Style::CAPTION, inner));
    }
    flow.space(7.0);
}

fn no_rates(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    let inner = flow.inner();
    for (index, none) in part.no_rates.iter().enumerate() {
        let text = format!("{} on {}: {}", none.amount, words::day(none.on), none.because);
        let line = statement(fonts, inner, &text, &none.source);
        if index == 0 {
            flow.put_together(vec![heading(fonts, inner, "No rate due", ""), line]);
        } else {
            flow.put(line);
        }
    }
    if !part.no_rates.is_empty() {
        flow.space(4.0);
    }
}

fn open_leaks(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    if part.open_leaks.is_empty() {
        return;
    }
    let inner = flow.inner();
    let columns = [Column::left("place", 4.0), Column::left("open since", 1.2), Column::left("state", 2.0)];
    let rows: Vec<Vec<Cell>> = part
        .open_leaks
        .iter()
        .map(|leak| {
            let state = if leak.state.is_empty() { "not isolated" } else { &leak.state };
            vec![Cell::strong(&leak.place), Cell::plain(words::day(leak.since)), Cell::plain(state)]
        })
        .collect();
    let set = table(fonts, inner, &columns, &rows, Style::BODY.size);
    flow.put_table(Some(heading(fonts, inner, "Open leaks", "")), set.head, set.rows);
    flow.space(5.0);
}

fn duties(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    if part.duties.is_empty() {
        return;
    }
    let inner = flow.inner();
    let columns = [
        Column::left("duty", 2.35),
        Column::left("this visit", 0.9),
        Column::left("from", 1.1),
        Column::left("due", 1.1),
        Column::left("state", 1.7),
        Column::left("article", 1.85),
    ];
    let rows: Vec<Vec<Cell>> = part
        .duties
        .iter()
        .map(|duty| {
            let due = duty.due.map_or_else(|| duty.due_words.clone(), words::day);
            // The next column but one says it.
            let due = if due == duty.state { String::new() } else { due };
            let state = duty.met_on.map_or_else(|| duty.state.clone(), |day| format!("{} {}", duty.state, words::day(day)));
            vec![
                Cell::strong(&duty.duty),
                Cell::plain(words::step(duty.step)),
                Cell::plain(words::day(duty.from)),
                Cell::strong(if due.is_empty() { words::DASH.to_owned() } else { due }),
                Cell::plain(state),
                Cell::plain(&duty.source),
            ]
        })
        .collect();
    let set = table(fonts, inner, &columns, &rows, 8.5);
    flow.put_table(Some(heading(fonts, inner, "Duties", "")), set.head, set.rows);
    flow.space(5.0);
}

fn amounts(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    if part.amounts.is_empty() {
        return;
    }
    let inner = flow.inner();
    let columns = [
        Column::left("amount", 3.0),
        Column::right("mass", 1.3),
        Column::right("ODP-weighted, kg", 1.4),
        Column::right("CO\u{2082} equivalent, t", 1.6),
    ];
    let rows: Vec<Vec<Cell>> = part
        .amounts
        .iter()
        .map(|amount| {
            vec![
                Cell::strong(&amount.what),
                Cell::plain(&amount.mass_written),
                Cell::plain(words::weighted(amount.odp_kg, 4)),
                Cell::plain(words::weighted(amount.co2e_t, 3)),
            ]
        })
        .collect();
    let mut set = table(fonts, inner, &columns, &rows, Style::BODY.size);
    let mut tables: Vec<String> = Vec::new();
    for amount in &part.amounts {
        let line = format!("ODP from {}; GWP from {}", or_dash(&amount.odp_table), or_dash(&amount.gwp_table));
        if !tables.contains(&line) {
            tables.push(line);
        }
    }
    // The tables named stay with the last figure.
    if let Some(last) = set.rows.last_mut() {
        for line in &tables {
            *last = std::mem::take(last).below(2.0, paragraph(fonts, line, Style::CAPTION, inner));
        }
    }
    flow.put_table(Some(heading(fonts, inner, "Weighted amounts", "")), set.head, set.rows);
    flow.space(5.0);
}

fn or_dash(text: &str) -> &str {
    if text.is_empty() { words::DASH } else { text }
}

fn readings(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart) {
    let inner = flow.inner();
    for (index, reading) in part.readings.iter().enumerate() {
        let line = statement(fonts, inner, &reading.text, &reading.source);
        if index == 0 {
            flow.put_together(vec![heading(fonts, inner, "The law, as it is read here", ""), line]);
        } else {
            flow.put(line);
        }
    }
}
