//! The entries of an appliance's part: what was done, in order of time.

use super::fonts::Fonts;
use super::layout::Flow;
use super::plate::{Field, dashed, grid, heading};
use super::sheet::{Block, Style, paragraph, wrap};
use super::words;
use crate::ledger::WeighingMode;
use crate::record::{AppliancePart, EntryFacts, TestFacts, TransferFacts, Work};

/// Day, time and person stand in this column at the left.
const MARGIN: f32 = 66.0;
const COLUMNS: usize = 5;

/// `jobs` are those of the record: one alone stands in its title and is not said again.
pub(super) fn entries(flow: &mut Flow, fonts: &Fonts, part: &AppliancePart, jobs: &[String]) {
    let inner = flow.inner();
    let head = heading(fonts, inner, "Work done", "");
    if part.entries.is_empty() {
        flow.put_together(vec![head, paragraph(fonts, words::NO_ENTRIES, Style::BODY, inner), Block::empty(6.0)]);
        return;
    }
    for (index, facts) in part.entries.iter().enumerate() {
        let block = one(fonts, inner, facts, jobs);
        if index == 0 {
            flow.put_together(vec![head.clone(), block]);
        } else {
            flow.put(Block::empty(5.0).below(0.0, block).parted(inner, 0.25));
        }
    }
    flow.space(3.0);
}

/// What an entry says, before it is set.
struct Said {
    headline: String,
    after: String,
    figure: String,
    beside_figure: String,
    fields: Vec<Field>,
    lines: Vec<String>,
}

fn one(fonts: &Fonts, width: f32, facts: &EntryFacts, jobs: &[String]) -> Block {
    let said = say(facts, jobs);
    let mut margin = Block::default();
    let time = if facts.at.is_empty() { words::day(facts.on) } else { facts.at.clone() };
    margin.text(0.0, Style::STRONG.ascent(), &fonts.visible(&time), Style::STRONG);
    margin.height = Style::STRONG.leading();
    let mut small: Vec<&str> = Vec::new();
    let day = words::day(facts.on);
    if !facts.at.is_empty() {
        small.push(&day);
    }
    small.extend([facts.person.as_str()].into_iter().filter(|text| !text.is_empty()));
    for text in small {
        margin = margin.below(0.0, paragraph(fonts, text, Style::CAPTION, MARGIN - 8.0));
    }
    let body = body(fonts, width - MARGIN, facts, &said);
    let mut block = Block::empty(margin.height.max(body.height) + 3.0);
    block.lay(margin, 0.0, 0.0);
    block.lay(body, MARGIN, 0.0);
    block
}

fn body(fonts: &Fonts, width: f32, facts: &EntryFacts, said: &Said) -> Block {
    let mut block = Block::empty(Style::STRONG.leading() + 3.0);
    let room = figure(fonts, width, facts, said, &mut block);
    let headline = fonts.visible(&words::headline(&said.headline));
    let lead = Style { size: 10.0, ..Style::LEAD };
    block.text(0.0, Style::STRONG.ascent() + 0.4, &headline, lead);
    let end = fonts.width(&headline, lead.face, lead.size);
    let after = fonts.visible(&said.after);
    if end + 6.0 + fonts.width(&after, Style::BODY.face, Style::BODY.size) <= room {
        block.text(end + 6.0, Style::STRONG.ascent() + 0.4, &after, Style::BODY);
    } else if !after.is_empty() {
        block = block.below(0.0, paragraph(fonts, &after, Style::BODY, width));
        block.height += 2.0;
    }
    if facts.struck {
        block.line((-2.0, 5.6), (end + 2.0, 5.6), 1.0);
        let why = if facts.struck_because.is_empty() { "struck: left out of sums" } else { &facts.struck_because };
        block = block.below(0.0, paragraph(fonts, why, Style::STRONG, width));
        block.height += 2.0;
    }
    for row in grid(fonts, width, COLUMNS, &said.fields) {
        block = block.below(0.0, row);
    }
    for line in &said.lines {
        block = block.below(0.0, dashed(fonts, width, line));
    }
    if !said.lines.is_empty() {
        block.height += 3.0;
    }
    block
}

/// The figure at the right end of the headline, what qualifies it in small
/// print before it. Gives the width that is left of the two; figures too long
/// for half the line go on in lines of their own.
fn figure(fonts: &Fonts, width: f32, facts: &EntryFacts, said: &Said, block: &mut Block) -> f32 {
    let big = Style { size: 12.0, ..Style::LEAD };
    let text = fonts.visible(&said.figure);
    let small = fonts.visible(&said.beside_figure);
    let (wide, beside) = (fonts.width(&text, big.face, big.size), fonts.width(&small, Style::CAPTION.face, Style::CAPTION.size));
    let baseline = Style::STRONG.ascent() + 0.8;
    if wide + beside + 6.0 <= width * 0.6 {
        block.text(width - wide, baseline, &text, big);
        block.text(width - wide - 6.0 - beside, baseline, &small, Style::CAPTION);
        if facts.struck {
            block.line((width - wide - 2.0, 5.8), (width + 2.0, 5.8), 1.0);
        }
        return width - wide - beside - 18.0;
    }
    for line in wrap(fonts, &[text, small].join(" "), Style::STRONG, width) {
        block.text(0.0, block.height + Style::STRONG.ascent(), &line, Style::STRONG);
        block.height += Style::STRONG.leading();
    }
    width
}

fn say(facts: &EntryFacts, jobs: &[String]) -> Said {
    let mut said = match &facts.work {
        Work::Transfer(transfer) => say_transfer(transfer, facts),
        Work::Test(test) => say_test(test),
        Work::Repair(repair) => Said {
            headline: "repair".into(),
            after: repair.done.clone(),
            figure: if repair.temporary { "temporary".into() } else { String::new() },
            beside_figure: if repair.temporary { "meets no duty".into() } else { String::new() },
            fields: Field::known("place", &repair.place).into_iter().collect(),
            lines: Vec::new(),
        },
        Work::Other { name, text, figure, fields } => Said {
            headline: name.clone(),
            after: text.clone(),
            figure: figure.clone(),
            beside_figure: String::new(),
            fields: fields.iter().map(|named| Field::required(&named.caption, &named.value)).collect(),
            lines: Vec::new(),
        },
    };
    said.fields.extend(Field::known("parts", &facts.parts));
    if !matches!(jobs, [only] if *only == facts.job) {
        said.fields.extend(Field::known("job", &facts.job));
    }
    said.fields.extend(Field::known("reason", &facts.reason));
    said.fields.extend(Field::known("note", &facts.note));
    said.fields.extend(Field::known("corrects", &facts.corrects));
    said.fields.extend(Field::known("read from", &facts.imported_from));
    said
}

/// Why a transfer is known by its net alone.
fn net_only(transfer: &TransferFacts, facts: &EntryFacts) -> &'static str {
    if !facts.imported_from.is_empty() {
        words::NET_AS_IMPORTED
    } else if !facts.corrects.is_empty() {
        words::NET_AS_CORRECTED
    } else if transfer.cylinder.is_empty() {
        words::NET_FROM_THE_MAKER
    } else {
        words::NET_AS_STATED
    }
}

fn say_transfer(transfer: &TransferFacts, facts: &EntryFacts) -> Said {
    let (before, after) = match transfer.weighing {
        WeighingMode::Gross => ("gross before", "gross after"),
        WeighingMode::Zeroed => ("zeroed: at start", "at end"),
        WeighingMode::NetOnly => ("before", "after"),
    };
    let mut fields: Vec<Field> = Vec::new();
    let status = [&transfer.gas_status, &transfer.phase].into_iter().filter(|t| !t.is_empty()).cloned().collect::<Vec<_>>().join(", ");
    fields.extend(Field::known("cylinder", &transfer.cylinder));
    fields.extend(Field::known("gas", &status));
    if transfer.weighing != WeighingMode::NetOnly {
        fields.push(Field::required(before, &transfer.before));
        fields.push(Field::required(after, &transfer.after));
    }
    fields.extend(Field::known("scale", &transfer.scale));
    fields.extend(Field::known("hoses", &transfer.hoses));
    fields.extend(Field::known("filled", &transfer.fill));
    fields.extend(Field::known("level to reach", &transfer.level_required));
    fields.extend(Field::known("level reached", &transfer.level_reached));
    fields.extend(Field::known("source of the gas", &transfer.gas_source));
    fields.extend(Field::known("first gross differs", &transfer.weighing_gap));
    let error = if transfer.error.is_empty() { words::UNKNOWN_ERROR.to_owned() } else { transfer.error.clone() };
    Said {
        headline: words::way(transfer.way).into(),
        after: [&transfer.refrigerant, &transfer.purpose].into_iter().filter(|t| !t.is_empty()).cloned().collect::<Vec<_>>().join(", "),
        figure: transfer.net.clone(),
        beside_figure: match transfer.weighing {
            WeighingMode::NetOnly => format!("{}; {error}", net_only(transfer, facts)),
            WeighingMode::Gross | WeighingMode::Zeroed => error,
        },
        fields,
        lines: Vec::new(),
    }
}

fn say_test(test: &TestFacts) -> Said {
    let kind = test.direct.map_or("", |direct| if direct { "direct" } else { "indirect" });
    let mut fields: Vec<Field> = vec![Field::required(["method", kind].join(", ").trim_end_matches(", "), &test.method)];
    fields.push(Field::required("scope", &test.scope));
    fields.extend(Field::known("place", &test.place));
    fields.extend(Field::known("instrument", &test.instrument));
    fields.extend(Field::known("running hours", &test.running_hours));
    fields.extend(Field::known("tests the", &test.of_repair));
    let mut lines = test.leaks.clone();
    lines.extend([&test.certification, &test.does_not_count].into_iter().filter(|text| !text.is_empty()).cloned());
    let count = test.leaks.len();
    Said {
        headline: test.kind.clone(),
        after: String::new(),
        figure: if test.result.is_empty() { "no result".into() } else { test.result.clone() },
        beside_figure: match count {
            0 => String::new(),
            1 => "1 place".into(),
            _ => format!("{count} places"),
        },
        fields,
        lines,
    }
}
