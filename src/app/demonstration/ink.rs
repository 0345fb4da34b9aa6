//! Invented signatures: strokes that a hand might have drawn.
//!
//! Letters are runs of points that a curve is laid through, joined along the
//! baseline, slanted, and smaller towards the end, as people sign.

use crate::ledger::Ink;

/// Points of a joined-up letter: x to the right, y up; the small letter is 1 high.
type Letter = &'static [(f32, f32)];

const A: Letter = &[(0.5, 0.9), (0.15, 0.95), (0.0, 0.45), (0.2, 0.02), (0.48, 0.4), (0.55, 0.98), (0.55, 0.2), (0.75, 0.03)];
const C: Letter = &[(0.5, 0.85), (0.2, 0.98), (0.02, 0.5), (0.2, 0.02), (0.6, 0.12)];
const D: Letter = &[(0.5, 0.9), (0.15, 0.95), (0.0, 0.45), (0.2, 0.02), (0.5, 0.5), (0.66, 2.1), (0.57, 0.2), (0.78, 0.03)];
const E: Letter = &[(0.1, 0.35), (0.42, 0.65), (0.3, 1.0), (0.06, 0.7), (0.12, 0.12), (0.35, 0.0), (0.6, 0.2)];
const G: Letter = &[(0.5, 0.9), (0.15, 0.95), (0.0, 0.5), (0.2, 0.1), (0.55, 0.9), (0.45, -0.8), (0.15, -1.0), (0.15, -0.6), (0.7, 0.1)];
const H: Letter = &[(0.1, 0.4), (0.38, 1.7), (0.26, 2.2), (0.12, 1.5), (0.1, 0.0), (0.2, 0.65), (0.45, 0.98), (0.55, 0.4), (0.62, 0.02)];
const I: Letter = &[(0.15, 0.95), (0.15, 0.25), (0.32, 0.02)];
const L: Letter = &[(0.12, 0.4), (0.38, 1.6), (0.26, 2.2), (0.1, 1.4), (0.12, 0.2), (0.35, 0.0)];
const M: Letter = &[(0.1, 0.9), (0.1, 0.0), (0.3, 0.95), (0.42, 0.7), (0.42, 0.0), (0.62, 0.95), (0.76, 0.7), (0.76, 0.2), (0.92, 0.02)];
const N: Letter = &[(0.1, 0.9), (0.1, 0.0), (0.34, 0.95), (0.5, 0.7), (0.5, 0.2), (0.68, 0.02)];
const O: Letter = &[(0.35, 0.98), (0.05, 0.7), (0.1, 0.1), (0.4, 0.02), (0.55, 0.5), (0.36, 0.95), (0.7, 0.8)];
const R: Letter = &[(0.1, 0.4), (0.2, 1.1), (0.42, 0.9), (0.4, 0.2), (0.58, 0.03)];
const S: Letter = &[(0.1, 0.2), (0.3, 1.05), (0.42, 0.5), (0.3, 0.03), (0.1, 0.12), (0.55, 0.1)];
const T: Letter = &[(0.2, 0.6), (0.32, 1.8), (0.25, 0.3), (0.42, 0.02)];
const U: Letter = &[(0.08, 0.95), (0.08, 0.25), (0.28, 0.02), (0.5, 0.4), (0.54, 0.95), (0.54, 0.2), (0.74, 0.03)];
const W: Letter = &[
    (0.05, 0.95),
    (0.08, 0.25),
    (0.24, 0.02),
    (0.4, 0.4),
    (0.44, 0.95),
    (0.48, 0.25),
    (0.64, 0.02),
    (0.8, 0.4),
    (0.84, 0.95),
    (1.0, 0.85),
];
const Y: Letter = &[(0.05, 0.95), (0.12, 0.3), (0.32, 0.15), (0.52, 0.95), (0.45, -0.7), (0.15, -1.0), (0.2, -0.5), (0.75, 0.15)];
const K: Letter = &[(0.1, 0.4), (0.36, 1.7), (0.24, 2.2), (0.1, 1.2), (0.1, 0.0), (0.42, 0.95), (0.2, 0.5), (0.62, 0.02)];

fn letter(c: char) -> Letter {
    match c.to_ascii_lowercase() {
        'a' | 'q' => A,
        'c' | 'x' => C,
        'd' => D,
        'e' | 'z' => E,
        'g' | 'p' => G,
        'h' | 'b' => H,
        'i' | 'j' => I,
        'k' => K,
        'l' | 'f' => L,
        'm' => M,
        'n' => N,
        'o' => O,
        'r' | 'v' => R,
        's' => S,
        't' => T,
        'w' => W,
        'y' => Y,
        _ => U,
    }
}

/// Steps between two points that are given.
const FINE: u8 = 7;
const BASELINE: f32 = 640.0;
const LEFT: f32 = 220.0;

/// A signature of `name`: the first letter of each word large, the rest
/// written away. The same name gives the same strokes.
pub fn signature(name: &str) -> Ink {
    let words: Vec<Vec<char>> = name.split_whitespace().map(|word| word.chars().filter(|c| c.is_alphabetic()).collect()).collect();
    let letters: usize = words.iter().map(Vec::len).sum();
    #[expect(clippy::cast_precision_loss, reason = "a name has few letters")]
    let width = (2400.0 / (letters as f32 + 2.0)).min(190.0);
    let mut hand = Hand { x: LEFT, width, seed: name.bytes().fold(17_u32, |seed, byte| seed.wrapping_mul(31).wrapping_add(byte.into())) };
    let mut strokes = Vec::new();
    for word in words {
        hand.word(&word, &mut strokes);
    }
    // A line under it, drawn quickly.
    let (from, to) = (LEFT + 180.0, hand.x);
    let under = [(from, 820.0), (from + (to - from) * 0.4, 795.0), (to, 760.0), (to - 120.0, 805.0)];
    strokes.push(curve(&under));
    Ink(strokes)
}

struct Hand {
    x: f32,
    width: f32,
    seed: u32,
}

impl Hand {
    /// Between 0.92 and 1.08: no two letters of a hand are the same.
    fn unsteady(&mut self) -> f32 {
        self.seed = self.seed.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
        0.92 + f32::from((self.seed >> 20) as u16 % 160) / 1000.0
    }

    fn word(&mut self, word: &[char], strokes: &mut Vec<Vec<(i32, i32)>>) {
        let mut points = Vec::new();
        let mut dots = Vec::new();
        let mut size = 1.0_f32;
        for (place, c) in word.iter().enumerate() {
            let capital = place == 0;
            let (wide, high) = if capital { (1.7, 2.1) } else { (size, size) };
            let (dx, dy) = (self.width * wide * self.unsteady(), 150.0 * high * self.unsteady());
            let mut right = 0.0_f32;
            for (x, y) in letter(*c) {
                right = right.max(*x);
                let (x, y) = (x * dx, y.max(-1.0) * dy);
                // Tall letters stay on the field.
                points.push((self.x + x + y * 0.28, BASELINE - y.min(if capital { 480.0 } else { 330.0 })));
            }
            if matches!(c, 'i' | 'j') {
                dots.push((self.x + 0.5 * dx, BASELINE - 1.5 * dy));
            }
            self.x += (right + 0.12) * dx;
            size = (size * 0.955).max(0.62);
        }
        strokes.push(curve(&points));
        for (x, y) in dots {
            strokes.push(curve(&[(x, y), (x + 14.0, y - 6.0), (x + 20.0, y + 4.0)]));
        }
        self.x += self.width * 0.55;
    }
}

/// A smooth line through the points (Catmull and Rom's), on the field of ink.
fn curve(points: &[(f32, f32)]) -> Vec<(i32, i32)> {
    let at = |index: usize| points[index.min(points.len() - 1)];
    let mut drawn = Vec::new();
    for index in 0..points.len().saturating_sub(1) {
        let (before, from, to, after) = (at(index.saturating_sub(1)), at(index), at(index + 1), at(index + 2));
        for step in 0..FINE {
            let t = f32::from(step) / f32::from(FINE);
            let through = |p0: f32, p1: f32, p2: f32, p3: f32| {
                0.5 * (2.0 * p1
                    + (p2 - p0) * t
                    + (2.0 * p0 - 5.0 * p1 + 4.0 * p2 - p3) * t * t
                    + (3.0 * p1 - p0 - 3.0 * p2 + p3) * t * t * t)
            };
            drawn.push(on_field(through(before.0, from.0, to.0, after.0), through(before.1, from.1, to.1, after.1)));
        }
    }
    drawn.extend(points.last().map(|(x, y)| on_field(*x, *y)));
    drawn
}

#[expect(clippy::cast_possible_truncation, reason = "clamped to the field first")]
fn on_field(x: f32, y: f32) -> (i32, i32) {
    ((x.round() as i32).clamp(0, Ink::WIDTH), (y.round() as i32).clamp(0, Ink::HEIGHT))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_signature_stays_on_its_field_and_is_each_time_the_same() {
        for name in ["Wren Castellane", "Bo", "Theodora Quillfeather-Montague of Westquay"] {
            let Ink(strokes) = signature(name);
            assert_eq!(Ink(strokes.clone()), signature(name));
            assert!(strokes.len() > name.split(' ').count(), "a stroke a word and one under all");
            // Clamped points would lie on the edge.
            assert!(strokes.iter().flatten().all(|(x, y)| (1..Ink::WIDTH).contains(x) && (1..Ink::HEIGHT).contains(y)), "{name}");
        }
    }
}
