//! Pages: blocks put one below the other, plates that go on over a page's end,
//! running heads and feet.

use super::fonts::Fonts;
use super::mark::rising_bubbles;
use super::sheet::{Block, Ink, Mark, Paper, Style};
use super::words;

/// Left and right margin.
const SIDE: f32 = 42.0;
const TOP: f32 = 34.0;
/// Where the first page's plates may begin is up to its title block; later
/// pages carry a running head of this height.
const RUNNING_HEAD: f32 = 34.0;
const FOOT: f32 = 46.0;
/// From a plate's border to what is in it.
pub(super) const INSET: f32 = 8.0;
const STRIP: f32 = 19.0;
const BORDER: f32 = 0.9;
/// Rows of a table up to this height stay on one page.
pub(super) const SHORT: f32 = 150.0;

/// What stands on every page.
#[derive(Debug, Clone, Default)]
pub(super) struct Running {
    /// Head of later pages, left.
    pub(super) head: String,
    /// A stamp in a box at the top right: *draft*.
    pub(super) stamp: Option<Stamp>,
    /// At the right of the head of later pages, where there is no stamp.
    pub(super) head_right: String,
    /// Foot, left; the page's number stands at its right.
    pub(super) foot: String,
    /// A second line of the foot, in bold: the demonstration.
    pub(super) foot_notice: String,
}

#[derive(Debug, Clone)]
pub(super) struct Stamp {
    pub(super) word: String,
    pub(super) below: String,
}

struct OpenPlate {
    title: String,
    state: String,
    top: f32,
}

/// Pages being filled.
pub(super) struct Flow {
    fonts: &'static Fonts,
    paper: Paper,
    running: Running,
    pages: Vec<Vec<Mark>>,
    y: f32,
    plate: Option<OpenPlate>,
    /// A table's head, repeated when its rows go on over a page.
    table_head: Option<Block>,
    /// Nothing but a head stands on the page yet.
    fresh: bool,
}

/// Finished pages.
pub(super) struct Pages {
    pub(super) paper: Paper,
    pub(super) pages: Vec<Vec<Mark>>,
}

impl Flow {
    pub(super) fn new(fonts: &'static Fonts, paper: Paper, running: Running) -> Self {
        Self { fonts, paper, running, pages: vec![Vec::new()], y: TOP, plate: None, table_head: None, fresh: true }
    }

    /// Width between the margins.
    pub(super) fn width(&self) -> f32 {
        self.paper.size().0 - 2.0 * SIDE
    }

    /// Width inside a plate.
    pub(super) fn inner(&self) -> f32 {
        self.width() - 2.0 * INSET
    }

    fn bottom(&self) -> f32 {
        self.paper.size().1 - FOOT - if self.plate.is_some() { INSET } else { 0.0 }
    }

    fn left(&self) -> f32 {
        if self.plate.is_some() { SIDE + INSET } else { SIDE }
    }

    fn lay(&mut self, block: Block) {
        let (left, y) = (self.left(), self.y);
        self.y += block.height;
        let mut carrier = Block::default();
        if let Some((width, thickness)) = block.parting.filter(|_| !self.fresh) {
            carrier.line((left, y), (left + width, y), thickness);
        }
        self.fresh = false;
        carrier.lay(block, left, y);
        if let Some(page) = self.pages.last_mut() {
            page.append(&mut carrier.marks);
        }
    }

    /// Goes on to the next page if less than `height` is left on this one.
    fn need(&mut self, height: f32) {
        if !self.fresh && self.y + height > self.bottom() {
            self.turn();
        }
    }

    fn turn(&mut self) {
        let plate = self.plate.take();
        if let Some(plate) = &plate {
            self.border(plate.top, self.y + INSET);
        }
        self.pages.push(Vec::new());
        self.y = TOP + RUNNING_HEAD;
        self.fresh = true;
        if let Some(plate) = plate {
            self.begin(plate.title, plate.state, words::CONTINUED);
        }
        if let Some(head) = self.table_head.clone() {
            self.lay(head);
            self.fresh = true;
        }
    }

    fn border(&mut self, top: f32, bottom: f32) {
        let mut block = Block::default();
        block.outline(SIDE, top, self.width(), bottom - top, BORDER);
        if let Some(page) = self.pages.last_mut() {
            page.append(&mut block.marks);
        }
    }

    /// Puts a block where there is room for it.
    pub(super) fn put(&mut self, block: Block) {
        self.need(block.height);
        let mut rest = block;
        while self.y + rest.height > self.bottom() {
            match rest.split(self.bottom() - self.y) {
                Ok((first, after)) => {
                    self.lay(first);
                    self.turn();
                    rest = after;
                }
                Err(whole) => {
                    rest = whole;
                    break;
                }
            }
        }
        self.lay(rest);
    }

    /// Puts blocks that must not be parted, if one page can hold them.
    pub(super) fn put_together(&mut self, blocks: Vec<Block>) {
        self.need(blocks.iter().map(|block| block.height).sum());
        for block in blocks {
            self.put(block);
        }
    }

    /// Puts a heading, its table's head and rows; the heading stays with the first row, the
    /// head is repeated on every page that the rows reach.
    pub(super) fn put_table(&mut self, heading: Option<Block>, head: Block, rows: Vec<Block>) {
        // A short table is not parted at all.
        let whole: f32 = rows.iter().map(|row| row.height).sum();
        let first = if whole <= SHORT { whole } else { rows.first().map_or(0.0, |row| row.height) };
        self.need(heading.as_ref().map_or(0.0, |block| block.height) + head.height + first);
        if let Some(heading) = heading {
            self.lay(heading);
        }
        self.lay(head.clone());
        self.table_head = Some(head);
        for row in rows {
            self.put(row);
        }
        self.table_head = None;
    }

    /// White space, dropped at the top of a page.
    pub(super) fn space(&mut self, height: f32) {
        if !self.fresh {
            self.y += height;
        }
    }

    /// Begins a plate; at least `with` points of its content stay with its strip.
    pub(super) fn open_plate(&mut self, title: &str, state: &str, with: f32) {
        self.need(STRIP + with + 2.0 * INSET);
        let title = self.fonts.visible(title);
        let state = self.fonts.visible(state);
        self.begin(title, state, "");
    }

    /// Whether a plate's strip cannot hold its title in full, on a later page either.
    pub(super) fn strip_cuts(&self, title: &str, state: &str) -> bool {
        let wide = |text: &str, style: Style| self.fonts.width(&self.fonts.visible(text), style.face, style.size);
        let room = self.width() - 3.0 * INSET - wide(state, Style::STRONG) - wide(words::CONTINUED, Style::BODY) - 6.0;
        wide(title, Style::LEAD) > room
    }

    fn begin(&mut self, title: String, state: String, after: &str) {
        let width = self.width();
        let mut strip = Block::empty(STRIP + 6.0);
        strip.rect(0.0, 0.0, width, STRIP, Ink::Black);
        let state_width = self.fonts.width(&state, Style::STRONG.face, Style::STRONG.size);
        let after_width = self.fonts.width(after, Style::BODY.face, Style::BODY.size) + 6.0;
        let shown = fit(self.fonts, &title, Style::LEAD, width - 3.0 * INSET - state_width - after_width);
        strip.text_in(INSET, 13.2, &shown, Style::LEAD, Ink::White);
        let end = INSET + self.fonts.width(&shown, Style::LEAD.face, Style::LEAD.size) + 6.0;
        strip.text_in(end, 13.0, after, Style::BODY, Ink::White);
        strip.text_in(width - INSET - state_width, 12.8, &state, Style::STRONG, Ink::White);
        let top = self.y;
        self.lay(strip);
        self.plate = Some(OpenPlate { title, state, top });
        self.fresh = true;
    }

    pub(super) fn close_plate(&mut self) {
        if let Some(plate) = self.plate.take() {
            self.y += 3.0;
            self.border(plate.top, self.y);
            self.fresh = false;
        }
    }

    /// Heads, feet and page numbers.
    pub(super) fn finish(mut self) -> Pages {
        self.close_plate();
        let count = self.pages.len();
        let (width, height) = self.paper.size();
        let (left, right) = (SIDE, width - SIDE);
        for (index, page) in self.pages.iter_mut().enumerate() {
            let mut block = Block::default();
            if index > 0 {
                block.lay(rising_bubbles(15.0), left, TOP - 6.0);
                let room = if self.running.stamp.is_some() { 200.0 } else { 120.0 };
                block.text(left + 22.0, TOP + 6.0, &fit(self.fonts, &self.running.head, Style::STRONG, right - left - room), Style::STRONG);
                if self.running.stamp.is_none() {
                    block.text_right(self.fonts, right, TOP + 6.0, &self.running.head_right, Style::BODY);
                }
                block.line((left, TOP + 18.0), (right, TOP + 18.0), 0.5);
            }
            if let Some(stamp) = &self.running.stamp {
                stamp_into(&mut block, self.fonts, stamp, right, if index == 0 { TOP - 4.0 } else { TOP - 14.0 });
            }
            let foot = height - FOOT + 20.0;
            block.line((left, foot - 10.0), (right, foot - 10.0), 0.5);
            let pages = words::page_of(index + 1, count);
            block.text(left, foot, &fit(self.fonts, &self.running.foot, Style::CAPTION, right - left - 60.0), Style::CAPTION);
            block.text_right(self.fonts, right, foot, &pages, Style { face: Style::STRONG.face, size: Style::CAPTION.size });
            block.text(left, foot + 9.5, &self.running.foot_notice, Style { face: Style::STRONG.face, size: Style::CAPTION.size });
            page.append(&mut block.marks);
        }
        Pages { paper: self.paper, pages: self.pages }
    }
}

fn stamp_into(block: &mut Block, fonts: &Fonts, stamp: &Stamp, right: f32, top: f32) {
    let below = Style::CAPTION;
    let word = Style { face: Style::STRONG.face, size: 15.0 };
    let width = fonts.width(&stamp.below, below.face, below.size).max(fonts.width(&stamp.word, word.face, word.size)) + 16.0;
    let left = right - width;
    block.outline(left, top, width, 30.0, 1.8);
    let centred = |text: &str, style: Style| left + (width - fonts.width(text, style.face, style.size)) / 2.0;
    block.text(centred(&stamp.word, word), top + 14.5, &stamp.word, word);
    block.text(centred(&stamp.below, below), top + 24.5, &stamp.below, below);
}

/// A text cut to one line, with an ellipsis where it was cut. Only for strips
/// and running heads, whose texts stand in full elsewhere on the record.
pub(super) fn fit(fonts: &Fonts, text: &str, style: Style, width: f32) -> String {
    let shown = fonts.visible(text);
    if fonts.width(&shown, style.face, style.size) <= width {
        return shown;
    }
    let mut cut: String = shown;
    while !cut.is_empty() && fonts.width(&format!("{cut}\u{2026}"), style.face, style.size) > width {
        cut.pop();
    }
    format!("{}\u{2026}", cut.trim_end())
}
