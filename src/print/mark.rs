//! The mark: three rising circles, the last cut by a line: a bubble at the surface.

use super::sheet::{Block, Ink, Mark};

/// The mark in a square of `side` points, in copper.
pub(super) fn rising_bubbles(side: f32) -> Block {
    let mut block = Block::empty(side);
    let width = side * 0.065;
    for (x, y, radius) in [(0.14, 0.88, 0.07), (0.33, 0.66, 0.115), (0.62, 0.37, 0.2)] {
        block.marks.push(Mark::Circle { x: x * side, y: y * side, radius: radius * side, width, ink: Ink::Copper });
    }
    let surface = side * 0.31;
    block.marks.push(Mark::Path { points: vec![(side * 0.16, surface), (side * 1.02, surface)], width, ink: Ink::Copper, closed: false });
    block
}
