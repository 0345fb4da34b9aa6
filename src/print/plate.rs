//! Fields, tables and lines: what plates are filled with.

use super::fonts::Fonts;
use super::sheet::{Block, Ink, Style, paragraph, wrap};
use super::words;

/// A caption with its value below.
#[derive(Debug, Clone)]
pub(super) struct Field {
    caption: String,
    value: String,
    style: Style,
}

impl Field {
    /// A field that the law asks for: *to complete* where nothing is known.
    pub(super) fn required(caption: &str, value: &str) -> Self {
        let shown = if value.trim().is_empty() { words::TO_COMPLETE } else { value };
        Self { caption: caption.to_owned(), value: shown.to_owned(), style: Style::BODY }
    }

    /// A field that is left out where nothing is known.
    pub(super) fn known(caption: &str, value: &str) -> Option<Self> {
        (!value.trim().is_empty()).then(|| Self { caption: caption.to_owned(), value: value.to_owned(), style: Style::BODY })
    }

    pub(super) fn strong(mut self) -> Self {
        self.style = Style::STRONG;
        self
    }
}

/// Space between the columns of a grid.
const GUTTER: f32 = 10.0;
const CAPTION_HEIGHT: f32 = 9.5;
const ROW_FOOT: f32 = 5.0;

/// Sets fields in a strict grid of `columns`; a field takes as many columns as
/// its value needs. One block a row.
pub(super) fn grid(fonts: &Fonts, width: f32, columns: usize, fields: &[Field]) -> Vec<Block> {
    let column = (width - GUTTER * (columns as f32 - 1.0)) / columns as f32;
    let span_width = |span: usize| column * span as f32 + GUTTER * (span as f32 - 1.0);
    let needs = |field: &Field| {
        let value = fonts.visible(&field.value);
        let one_line = |span: usize| {
            !value.contains('\n')
                && fonts.width(&value, field.style.face, field.style.size) <= span_width(span)
                && fonts.width(&field.caption, Style::CAPTION.face, Style::CAPTION.size) <= span_width(span)
        };
        (1..=columns).find(|span| one_line(*span)).unwrap_or(columns)
    };
    let mut rows: Vec<Vec<(usize, usize, &Field)>> = Vec::new();
    let mut used = columns;
    for field in fields {
        let span = needs(field);
        if used + span > columns {
            rows.push(Vec::new());
            used = 0;
        }
        if let Some(row) = rows.last_mut() {
            row.push((used, span, field));
        }
        used += span;
    }
    rows.into_iter()
        .map(|row| {
            let mut block = Block::default();
            for (start, span, field) in row {
                let x = (column + GUTTER) * start as f32;
                let value = paragraph(fonts, &field.value, field.style, span_width(span));
                block.height = block.height.max(CAPTION_HEIGHT + value.height + ROW_FOOT);
                block.text(x, Style::CAPTION.ascent(), &fonts.visible(&field.caption), Style::CAPTION);
                block.lay(value, x, CAPTION_HEIGHT);
            }
            block
        })
        .collect()
}

/// A small heading with a hairline above it, to part what a plate holds.
pub(super) fn heading(fonts: &Fonts, width: f32, text: &str, right: &str) -> Block {
    let mut block = Block::empty(17.5).parted(width, 0.5);
    block.text(0.0, 11.5, &fonts.visible(text), Style::STRONG);
    block.text_right(fonts, width, 11.5, &fonts.visible(right), Style::CAPTION);
    block
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Align {
    Left,
    Right,
}

/// A column of a table: its caption, its share of the width, its side.
#[derive(Debug, Clone)]
pub(super) struct Column {
    pub(super) caption: String,
    pub(super) share: f32,
    pub(super) align: Align,
}

impl Column {
    pub(super) fn left(caption: &str, share: f32) -> Self {
        Self { caption: caption.to_owned(), share, align: Align::Left }
    }

    pub(super) fn right(caption: &str, share: f32) -> Self {
        Self { caption: caption.to_owned(), share, align: Align::Right }
    }
}

/// One cell: text, whether it is bold, and small print below it.
#[derive(Debug, Clone)]
pub(super) struct Cell {
    text: String,
    strong: bool,
    small: String,
}

impl Cell {
    pub(super) fn plain(text: impl Into<String>) -> Self {
        Self { text: text.into(), strong: false, small: String::new() }
    }

    pub(super) fn strong(text: impl Into<String>) -> Self {
        Self { text: text.into(), strong: true, small: String::new() }
    }

    /// The same with a line of small print below.
    pub(super) fn with(self, small: &str) -> Self {
        Self { small: small.to_owned(), ..self }
    }

    pub(super) fn bold(self) -> Self {
        Self { strong: true, ..self }
    }
}

/// Head and rows of a table, each row a block with a hairline below it.
pub(super) struct Table {
    pub(super) head: Block,
    pub(super) rows: Vec<Block>,
}

pub(super) fn table(fonts: &Fonts, width: f32, columns: &[Column], rows: &[Vec<Cell>], size: f32) -> Table {
    const GUTTER: f32 = 7.0;
    let shares: f32 = columns.iter().map(|column| column.share).sum();
    let gutters = GUTTER * (columns.len() as f32 - 1.0);
    let widths: Vec<f32> = columns.iter().map(|column| (width - gutters) * column.share / shares).collect();
    let lefts: Vec<f32> = widths
        .iter()
        .scan(0.0, |x, width| {
            let left = *x;
            *x += width + GUTTER;
            Some(left)
        })
        .collect();
    let place = |block: &mut Block, index: usize, y: f32, text: &str, style: Style| match columns[index].align {
        Align::Left => block.text(lefts[index], y, text, style),
        Align::Right => block.text_right(fonts, lefts[index] + widths[index], y, text, style),
    };
    let mut head = Block::default();
    let captions: Vec<Vec<String>> =
        columns.iter().zip(&widths).map(|(column, width)| wrap(fonts, &column.caption, Style::CAPTION, *width)).collect();
    let lines = captions.iter().map(Vec::len).max().unwrap_or(1);
    head.height = Style::CAPTION.leading() * lines as f32 + 3.0;
    for (index, caption) in captions.iter().enumerate() {
        for (line, text) in caption.iter().enumerate() {
            let row = (lines - caption.len() + line) as f32;
            place(&mut head, index, Style::CAPTION.leading() * row + Style::CAPTION.ascent(), text, Style::CAPTION);
        }
    }
    head.line((0.0, head.height), (width, head.height), 0.5);
    let rows = rows
        .iter()
        .enumerate()
        .map(|(number, cells)| {
            let mut block = Block::default();
            if number > 0 {
                block = block.parted(width, 0.25);
            }
            for (index, cell) in cells.iter().enumerate() {
                let mut style = Style { face: if cell.strong { Style::STRONG.face } else { Style::BODY.face }, size };
                let text = fonts.visible(&cell.text);
                if columns[index].align == Align::Right {
                    // A figure is never broken over two lines: a long one is set smaller.
                    let wide = fonts.width(&text, style.face, size);
                    style.size = (size * widths[index] / wide.max(widths[index]) * 4.0).floor() / 4.0;
                }
                let lines = if columns[index].align == Align::Right { vec![text] } else { wrap(fonts, &text, style, widths[index]) };
                let mut y = 3.0;
                for line in &lines {
                    place(&mut block, index, y + style.ascent(), line, style);
                    y += style.leading();
                }
                if !cell.small.is_empty() {
                    for line in wrap(fonts, &fonts.visible(&cell.small), Style::CAPTION, widths[index]) {
                        place(&mut block, index, y + Style::CAPTION.ascent(), &line, Style::CAPTION);
                        y += Style::CAPTION.leading();
                    }
                }
                block.height = block.height.max(y + 3.0);
            }
            block
        })
        .collect();
    Table { head, rows }
}

/// A statement with its source in small print after it.
pub(super) fn statement(fonts: &Fonts, width: f32, text: &str, source: &str) -> Block {
    let mut block = paragraph(fonts, text, Style::BODY, width);
    if !source.is_empty() {
        block = block.below(0.0, paragraph(fonts, source, Style::CAPTION, width));
    }
    block.height += 4.0;
    block
}

/// A filled square as a list's mark would be lost in copies; a dash is not.
pub(super) fn dashed(fonts: &Fonts, width: f32, text: &str) -> Block {
    let mut block = Block::default();
    let body = paragraph(fonts, text, Style::BODY, width - 10.0);
    block.height = body.height + 1.0;
    block.rect(0.0, 5.2, 5.0, 0.8, Ink::Black);
    block.lay(body, 10.0, 0.0);
    block
}
