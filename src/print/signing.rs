//! Signatures as drawn, or the reason why there is none.

use super::fonts::Fonts;
use super::layout::Flow;
use super::plate::{Field, grid};
use super::sheet::{self, Block, Mark, Style, paragraph};
use super::words;
use crate::ledger::Ink;
use crate::record::{Counterparty, RecordState, ServiceRecord, SignedBy};

const GUTTER: f32 = 20.0;
/// Height of the field for the strokes; its width follows from the ink's own.
const FIELD: f32 = 42.0;

/// `foot` is the height of what follows and must not stand on a page alone.
pub(super) fn signatures(flow: &mut Flow, fonts: &Fonts, record: &ServiceRecord, foot: f32) {
    let state = match &record.state {
        RecordState::Closed { on, at } => format!("{}, {at}", words::day(*on)),
        RecordState::Open | RecordState::Imported { .. } => "not signed".to_owned(),
    };
    let inner = flow.inner();
    let half = (inner - GUTTER) / 2.0;
    let why_none = match &record.state {
        RecordState::Imported { .. } => words::NEVER_SIGNED,
        RecordState::Open | RecordState::Closed { .. } => words::NOT_SIGNED_YET,
    };
    let left = match &record.technician {
        Some(signed) => drawn(fonts, half, TECHNICIAN, signed),
        None => absent(fonts, half, TECHNICIAN, why_none, "", "", false),
    };
    let right = match &record.counterparty {
        Some(Counterparty::Signed { signed }) => drawn(fonts, half, REPRESENTATIVE, signed),
        Some(Counterparty::NobodyPresent) => absent(fonts, half, REPRESENTATIVE, words::NOBODY_PRESENT, "", "", false),
        Some(Counterparty::Refused { name, reason }) => absent(fonts, half, REPRESENTATIVE, words::REFUSED, reason, name, false),
        Some(Counterparty::SignsLater { name }) => absent(fonts, half, REPRESENTATIVE, words::SIGNS_LATER, "", name, true),
        None => absent(fonts, half, REPRESENTATIVE, why_none, "", "", false),
    };
    let mut both = Block::empty(left.height.max(right.height));
    both.lay(left, 0.0, 0.0);
    both.line((half + GUTTER / 2.0, 0.0), (half + GUTTER / 2.0, both.height), 0.25);
    both.lay(right, half + GUTTER, 0.0);
    let over = if record.handed_over.is_empty() { words::NOT_HANDED_OVER } else { &record.handed_over };
    let rows = grid(fonts, inner, 6, &[Field::required("record handed over", over)]);
    let handed: f32 = rows.iter().map(|row| row.height).sum();
    flow.open_plate("Signatures", &state, both.height + 8.0 + handed + foot);
    flow.put(both);
    flow.space(3.0);
    for (index, row) in rows.into_iter().enumerate() {
        flow.put(if index == 0 { Block::empty(5.0).below(0.0, row).parted(inner, 0.25) } else { row });
    }
    flow.close_plate();
}

const TECHNICIAN: &str = "technician";
const REPRESENTATIVE: &str = "owner\u{2019}s or operator\u{2019}s representative";

fn base(fonts: &Fonts, width: f32, caption: &str, name: &str, line: bool) -> Block {
    let top = Style::CAPTION.leading();
    let name = paragraph(fonts, name, Style::STRONG, width);
    let mut block = Block::empty(top + FIELD + 2.5 + name.height.max(Style::STRONG.leading()) + 2.0);
    block.text(0.0, Style::CAPTION.ascent(), caption, Style::CAPTION);
    if line {
        block.line((0.0, top + FIELD), (width, top + FIELD), 0.5);
    }
    block.lay(name, 0.0, top + FIELD + 2.5);
    block
}

/// The strokes in their own proportions, standing on the base line.
fn drawn(fonts: &Fonts, width: f32, caption: &str, signed: &SignedBy) -> Block {
    let mut block = base(fonts, width, caption, &signed.name, true);
    let scale = (width / Ink::WIDTH as f32).min(FIELD / Ink::HEIGHT as f32);
    let top = Style::CAPTION.leading();
    for stroke in signed.ink.0.iter().filter(|stroke| !stroke.is_empty()) {
        let mut points: Vec<(f32, f32)> = stroke.iter().map(|(x, y)| (*x as f32 * scale, top + *y as f32 * scale)).collect();
        if let [dot] = points[..] {
            // A dot of the pen is a stroke to itself; a round end shows it.
            points.push((dot.0 + 0.01, dot.1));
        }
        block.marks.push(Mark::Path { points: thinned(points), width: 1.1, ink: sheet::Ink::Black, closed: false });
    }
    block
}

/// Leaves out points that lie less than a quarter of a point from the one
/// before: finer than the pen, and half the file. First and last stay.
fn thinned(points: Vec<(f32, f32)>) -> Vec<(f32, f32)> {
    let last = points.len().saturating_sub(1);
    let mut kept: Vec<(f32, f32)> = Vec::with_capacity(points.len());
    for (index, point) in points.into_iter().enumerate() {
        let near = kept.last().is_some_and(|(x, y)| (x - point.0).hypot(y - point.1) < 0.25);
        if !near || (index == last && index < 2) {
            kept.push(point);
        }
    }
    kept
}

fn absent(fonts: &Fonts, width: f32, caption: &str, why: &str, reason: &str, name: &str, line: bool) -> Block {
    let mut block = base(fonts, width, caption, name, line);
    let mut text = paragraph(fonts, why, Style::LEAD, width);
    if !reason.is_empty() {
        text = text.below(1.0, paragraph(fonts, &format!("Reason: {reason}"), Style::BODY, width));
    }
    let top = Style::CAPTION.leading() + 6.0;
    // A long reason pushes the name down instead of running over it.
    let over = (text.height + 6.0 - FIELD).max(0.0);
    if over > 0.0 {
        block = Block::empty(0.0);
        block.text(0.0, Style::CAPTION.ascent(), caption, Style::CAPTION);
        let name = paragraph(fonts, name, Style::STRONG, width);
        block.height = top + text.height + 3.0 + name.height + 2.0;
        block.lay(name, 0.0, top + text.height + 3.0);
    }
    block.lay(text, 0.0, top);
    block
}
