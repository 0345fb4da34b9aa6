//! What a page is made of before it is a PDF: marks in points, measured from
//! the top left corner.

use super::fonts::{Face, Fonts};

/// Paper, portrait.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Paper {
    /// 210 mm by 297 mm.
    A4,
    /// 8.5 in by 11 in.
    Letter,
}

impl Paper {
    /// Width and height in points.
    pub(super) const fn size(self) -> (f32, f32) {
        match self {
            Self::A4 => (595.28, 841.89),
            Self::Letter => (612.0, 792.0),
        }
    }
}

/// Face and size of a run of text.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Style {
    pub(super) face: Face,
    pub(super) size: f32,
}

impl Style {
    pub(super) const CAPTION: Self = Self { face: Face::Regular, size: 7.0 };
    pub(super) const BODY: Self = Self { face: Face::Regular, size: 9.0 };
    pub(super) const STRONG: Self = Self { face: Face::SemiBold, size: 9.0 };
    pub(super) const LEAD: Self = Self { face: Face::SemiBold, size: 11.0 };
    pub(super) const FIGURE: Self = Self { face: Face::SemiBold, size: 21.0 };
    pub(super) const TITLE: Self = Self { face: Face::SemiBold, size: 23.0 };

    /// Distance from one baseline to the next.
    pub(super) fn leading(self) -> f32 {
        (self.size * 1.3 * 4.0).round() / 4.0
    }

    /// From the top of a line to its baseline.
    pub(super) fn ascent(self) -> f32 {
        self.size * 0.96
    }
}

/// Black on white; copper is for the mark alone.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Ink {
    Black,
    White,
    Copper,
}

#[derive(Debug, Clone, PartialEq)]
pub(super) enum Mark {
    /// `y` is the baseline.
    Text {
        x: f32,
        y: f32,
        style: Style,
        ink: Ink,
        text: String,
    },
    Rect {
        x: f32,
        y: f32,
        width: f32,
        height: f32,
        ink: Ink,
    },
    /// Open strokes with round ends.
    Path {
        points: Vec<(f32, f32)>,
        width: f32,
        ink: Ink,
        closed: bool,
    },
    Circle {
        x: f32,
        y: f32,
        radius: f32,
        width: f32,
        ink: Ink,
    },
}

impl Mark {
    /// Top and bottom edge.
    fn extent(&self) -> (f32, f32) {
        match self {
            Self::Text { y, style, .. } => (y - style.ascent(), y + style.size * 0.3),
            Self::Rect { y, height, .. } => (*y, y + height),
            Self::Circle { y, radius, .. } => (y - radius, y + radius),
            Self::Path { points, .. } => points.iter().fold((f32::MAX, f32::MIN), |(top, bottom), (_, y)| (top.min(*y), bottom.max(*y))),
        }
    }

    fn moved(mut self, dx: f32, dy: f32) -> Self {
        match &mut self {
            Self::Text { x, y, .. } | Self::Rect { x, y, .. } | Self::Circle { x, y, .. } => {
                *x += dx;
                *y += dy;
            }
            Self::Path { points, .. } => {
                for (x, y) in points {
                    *x += dx;
                    *y += dy;
                }
            }
        }
        self
    }
}

/// Marks that stay together, measured from the block's own top left corner.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Block {
    pub(super) height: f32,
    pub(super) marks: Vec<Mark>,
    /// Width and thickness of a line along the top that parts this block from
    /// the one before; left out where there is none before it.
    pub(super) parting: Option<(f32, f32)>,
}

impl Block {
    pub(super) fn empty(height: f32) -> Self {
        Self { height, ..Self::default() }
    }

    /// Text with its baseline at `y`.
    pub(super) fn text(&mut self, x: f32, y: f32, text: &str, style: Style) {
        self.text_in(x, y, text, style, Ink::Black);
    }

    pub(super) fn text_in(&mut self, x: f32, y: f32, text: &str, style: Style, ink: Ink) {
        if !text.is_empty() {
            self.marks.push(Mark::Text { x, y, style, ink, text: text.to_owned() });
        }
    }

    /// Text whose right edge is at `x`.
    pub(super) fn text_right(&mut self, fonts: &Fonts, x: f32, y: f32, text: &str, style: Style) {
        self.text(x - fonts.width(text, style.face, style.size), y, text, style);
    }

    pub(super) fn rect(&mut self, x: f32, y: f32, width: f32, height: f32, ink: Ink) {
        self.marks.push(Mark::Rect { x, y, width, height, ink });
    }

    pub(super) fn line(&mut self, from: (f32, f32), to: (f32, f32), width: f32) {
        self.marks.push(Mark::Path { points: vec![from, to], width, ink: Ink::Black, closed: false });
    }

    pub(super) fn outline(&mut self, x: f32, y: f32, width: f32, height: f32, line: f32) {
        let points = vec![(x, y), (x + width, y), (x + width, y + height), (x, y + height)];
        self.marks.push(Mark::Path { points, width: line, ink: Ink::Black, closed: true });
    }

    /// Lays another block into this one.
    pub(super) fn lay(&mut self, other: Self, x: f32, y: f32) {
        self.marks.extend(other.marks.into_iter().map(|mark| mark.moved(x, y)));
    }

    /// Parts a block that no page can hold: what ends above `at`, and the rest.
    ///
    /// # Errors
    /// Gives the block back when nothing ends above `at`.
    pub(super) fn split(self, at: f32) -> Result<(Self, Self), Self> {
        if !self.marks.iter().any(|mark| mark.extent().1 <= at) {
            return Err(self);
        }
        let height = self.height;
        let (first, rest): (Vec<Mark>, Vec<Mark>) = self.marks.into_iter().partition(|mark| mark.extent().1 <= at);
        let top = rest.iter().map(|mark| mark.extent().0).fold(height, f32::min);
        let rest = rest.into_iter().map(|mark| mark.moved(0.0, -top)).collect();
        Ok((Self { height: at, marks: first, parting: self.parting }, Self { height: height - top, marks: rest, parting: None }))
    }

    /// Parts this block from what stands above it by a line.
    pub(super) fn parted(mut self, width: f32, thickness: f32) -> Self {
        self.parting = Some((width, thickness));
        self
    }

    /// The other block below this one.
    pub(super) fn below(mut self, gap: f32, other: Self) -> Self {
        let top = self.height + gap;
        self.height = top + other.height;
        self.lay(other, 0.0, top);
        self
    }
}

/// Breaks text into lines of at most `width` points; a word too long for a line
/// is broken where it must be. Line breaks in the text are kept.
pub(super) fn wrap(fonts: &Fonts, text: &str, style: Style, width: f32) -> Vec<String> {
    let measure = |text: &str| fonts.width(text, style.face, style.size);
    let mut lines = Vec::new();
    for paragraph in text.split('\n') {
        let mut line = String::new();
        for word in paragraph.split_whitespace() {
            let longer = if line.is_empty() { word.to_owned() } else { format!("{line} {word}") };
            if measure(&longer) <= width {
                line = longer;
                continue;
            }
            if !line.is_empty() {
                lines.push(std::mem::take(&mut line));
            }
            for character in word.chars() {
                line.push(character);
                if measure(&line) > width && line.chars().count() > 1 {
                    line.pop();
                    lines.push(std::mem::replace(&mut line, character.to_string()));
                }
            }
        }
        lines.push(line);
    }
    while lines.len() > 1 && lines.last().is_some_and(String::is_empty) {
        lines.pop();
    }
    lines
}

/// A paragraph as a block.
pub(super) fn paragraph(fonts: &Fonts, text: &str, style: Style, width: f32) -> Block {
    let lines = wrap(fonts, &fonts.visible(text), style, width);
    let mut block = Block::empty(style.leading() * lines.len() as f32);
    for (row, line) in lines.iter().enumerate() {
        block.text(0.0, style.leading() * row as f32 + style.ascent(), line, style);
    }
    block
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_line_is_wider_than_its_column() {
        let fonts = Fonts::get().unwrap();
        let text = "Liquid line drier, flare at the outlet Donaudampfschifffahrtselektrizitätenhauptbetriebswerk 0123456789\nsecond";
        for width in [20.0, 60.0, 200.0] {
            let lines = wrap(fonts, text, Style::BODY, width);
            for line in &lines {
                assert!(fonts.width(line, Face::Regular, 9.0) <= width, "{line:?}");
            }
            let joined: String = lines.concat().chars().filter(|c| !c.is_whitespace()).collect();
            let whole: String = text.chars().filter(|c| !c.is_whitespace()).collect();
            assert_eq!(joined, whole, "nothing is lost in breaking");
        }
    }
}
