//! The leak-rate bar and the plain bars of the account, readable in black and white.

use super::fonts::Fonts;
use super::sheet::{Block, Ink, Mark, Style};
use super::words;
use crate::quantity::Ratio;
use crate::record::LeakRate;

const BAR: f32 = 12.0;
/// How far the trigger's notch stands out above and below the bar.
const NOTCH: f32 = 4.0;

/// A fraction as points are: for drawing, never for comparing.
fn drawn(value: Ratio) -> f32 {
    (*value.numer() as f64 / *value.denom() as f64) as f32
}

/// The next round figure above `value`.
fn round_above(value: Ratio) -> Ratio {
    let ten = Ratio::from_integer(10);
    let mut scale = Ratio::from_integer(1);
    while value >= scale * ten {
        scale *= ten;
    }
    for steps in [2, 3, 4, 5, 6, 8, 10, 12, 15, 20] {
        let end = scale * Ratio::new(steps, 2);
        if end > value {
            return end;
        }
    }
    scale * Ratio::from_integer(20)
}

/// The scale's end, and whether the rate lies beyond four times the trigger and
/// its bar is broken.
fn scale(rate: &LeakRate) -> (Ratio, bool) {
    let limit = rate.trigger * Ratio::from_integer(4);
    let broken = rate.trigger > Ratio::from_integer(0) && rate.percent > limit;
    let reach = rate.percent + rate.band.unwrap_or_else(|| Ratio::from_integer(0));
    let end = if broken { round_above(limit) } else { round_above(reach.max(rate.trigger)) };
    (end, broken)
}

/// Baseline, solid bar from zero, trigger as an upright notch across the whole
/// height with its percentage, weighing error as a half-height bar at the end.
pub(super) fn leak_rate_bar(fonts: &Fonts, width: f32, rate: &LeakRate) -> Block {
    let (end, broken) = scale(rate);
    let x_of = |value: Ratio| (drawn(value) / drawn(end) * width).clamp(0.0, width);
    let mut block = Block::empty(NOTCH + BAR + NOTCH + 11.0);
    let top = NOTCH;
    let bottom = top + BAR;
    block.outline(0.0, top, width, BAR, 0.6);
    let tip = if broken { width } else { x_of(rate.percent) };
    block.rect(0.0, top, tip, BAR, Ink::Black);
    block.line((0.0, bottom), (width, bottom), 1.2);
    if broken {
        for at in [width * 0.9, width * 0.9 + 6.0] {
            let stroke = vec![(at - 3.0, bottom + 2.0), (at + 3.0, top - 2.0)];
            block.marks.push(Mark::Path { points: stroke, width: 3.0, ink: Ink::White, closed: false });
        }
    } else if let Some(band) = rate.band {
        let least = 1.0;
        let half = (drawn(band) / drawn(end) * width).max(least);
        let (left, right) = ((tip - half).max(0.0), (tip + half).min(width));
        block.rect(left, top + BAR * 0.25, right - left, BAR * 0.5, Ink::White);
        block.outline(left, top + BAR * 0.25, right - left, BAR * 0.5, 0.7);
    }
    let notch = x_of(rate.trigger);
    block.marks.push(Mark::Path { points: vec![(notch, top + 0.6), (notch, bottom - 0.6)], width: 3.6, ink: Ink::White, closed: false });
    block.rect(notch - 0.8, top - NOTCH, 1.6, BAR + 2.0 * NOTCH, Ink::Black);
    // The labels under the bar: zero, trigger, end; an end label that would
    // touch the trigger's gives way to it.
    let y = bottom + NOTCH + 8.5;
    let style = Style::CAPTION;
    let bold = Style { face: Style::STRONG.face, size: style.size };
    let label = format!("trigger {}", words::trigger(rate.trigger));
    let label_width = fonts.width(&label, bold.face, bold.size);
    let at = (notch - label_width / 2.0).clamp(0.0, width - label_width);
    block.text(at, y, &label, bold);
    let zero = "0 %";
    if at > fonts.width(zero, style.face, style.size) + 6.0 {
        block.text(0.0, y, zero, style);
    }
    // A broken bar's end is no figure of the scale: the rate itself stands there.
    let last = if broken { words::percent(rate.percent) } else { words::trigger(end) };
    let last_at = width - fonts.width(&last, style.face, style.size);
    if at + label_width + 6.0 < last_at {
        block.text(last_at, y, &last, style);
    }
    block
}

/// A plain bar of `share` of the width, for comparing lines of a table.
pub(super) fn plain_bar(width: f32, share: f32) -> Block {
    let mut block = Block::empty(6.0);
    block.line((0.0, 6.0), (width, 6.0), 0.4);
    block.rect(0.0, 0.0, (width * share.clamp(0.0, 1.0)).max(0.0), 6.0, Ink::Black);
    block
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::RateMethod;
    use crate::record::Verdict;

    fn rate(percent: Ratio, trigger: i128, band: Option<Ratio>) -> LeakRate {
        LeakRate {
            source: String::new(),
            applies_because: String::new(),
            on: chrono::NaiveDate::from_ymd_opt(2026, 3, 3).unwrap(),
            method: RateMethod::Annualizing,
            percent,
            trigger: Ratio::from_integer(trigger),
            trigger_source: String::new(),
            band,
            verdict: Verdict::Over,
            within_weighing_error: false,
            inputs: vec![],
            working: String::new(),
        }
    }

    fn black_bar(block: &Block) -> f32 {
        let Some(Mark::Rect { width, .. }) = block.marks.iter().find(|mark| matches!(mark, Mark::Rect { .. })) else { panic!("no bar") };
        *width
    }

    #[test]
    fn the_scale_ends_at_the_next_round_figure() {
        let round = |n: i128, d: i128| round_above(Ratio::new(n, d));
        assert_eq!(round(365, 18), Ratio::from_integer(25));
        assert_eq!(round(20, 1), Ratio::from_integer(25));
        assert_eq!(round(99, 1), Ratio::from_integer(100));
        assert_eq!(round(3, 10), Ratio::from_integer(1));
        assert_eq!(round(145, 1), Ratio::from_integer(150));
    }

    #[test]
    fn bar_and_notch_stand_true_to_scale() {
        let fonts = Fonts::get().unwrap();
        let block = leak_rate_bar(fonts, 500.0, &rate(Ratio::new(365, 18), 20, Some(Ratio::new(17, 100))));
        assert!((black_bar(&block) - 500.0 * (365.0 / 18.0) / 25.0).abs() < 0.01);
        let notch = block.marks.iter().rev().find_map(|mark| match mark {
            Mark::Rect { x, width, height, .. } if *height > BAR => Some(x + width / 2.0),
            _ => None,
        });
        assert!((notch.unwrap() - 400.0).abs() < 0.01);
    }

    #[test]
    fn beyond_four_times_the_trigger_the_bar_is_broken() {
        let strokes = |percent: i128| {
            let block = leak_rate_bar(Fonts::get().unwrap(), 500.0, &rate(Ratio::from_integer(percent), 20, None));
            let slanted = |points: &[(f32, f32)]| points.len() == 2 && points[0].0 != points[1].0 && points[0].1 != points[1].1;
            block.marks.iter().filter(|mark| matches!(mark, Mark::Path { points, .. } if slanted(points))).count()
        };
        assert_eq!(strokes(80), 0, "exactly four times is not beyond");
        assert_eq!(strokes(81), 2);
    }
}
