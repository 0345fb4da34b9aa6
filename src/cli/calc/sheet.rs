//! An answer as aligned text: headings, columns, and numbered sources at the foot.

use crate::gas::Source;
use serde_json::{Value, json};

/// An answer being written.
#[derive(Debug, Default)]
pub(super) struct Sheet {
    text: String,
    sources: Vec<String>,
}

impl Sheet {
    pub(super) fn titled(title: &str) -> Self {
        Self { text: format!("{title}\n"), sources: Vec::new() }
    }

    /// The mark of a source, `[1]`; the same source keeps its number.
    pub(super) fn cite(&mut self, source: &str) -> String {
        let place = self.sources.iter().position(|known| known == source).unwrap_or_else(|| {
            self.sources.push(source.to_owned());
            self.sources.len() - 1
        });
        format!("[{}]", place + 1)
    }

    pub(super) fn cite_all<'a>(&mut self, sources: impl IntoIterator<Item = &'a Source>) -> String {
        sources.into_iter().map(|source| self.cite(&source.to_string())).collect()
    }

    /// A block of rows under a heading. Columns are as wide as their widest cell; those that hold numbers stand right.
    pub(super) fn rows(&mut self, heading: &str, rows: &[Vec<String>]) {
        if rows.is_empty() {
            return;
        }
        self.text.push('\n');
        if !heading.is_empty() {
            self.text.push_str(heading);
            self.text.push('\n');
        }
        let columns = rows.iter().map(Vec::len).max().unwrap_or(0);
        let cell = |row: &Vec<String>, column: usize| row.get(column).cloned().unwrap_or_default();
        let widths: Vec<usize> =
            (0..columns).map(|column| rows.iter().map(|row| cell(row, column).chars().count()).max().unwrap_or(0)).collect();
        let right: Vec<bool> = (0..columns).map(|column| rows.iter().skip(1).any(|row| is_number(&cell(row, column)))).collect();
        for row in rows {
            let mut line = String::from(" ");
            for (column, &width) in widths.iter().enumerate().filter(|(_, width)| **width > 0) {
                let text = cell(row, column);
                let pad = " ".repeat(width - text.chars().count());
                line.push(' ');
                line.push_str(&if right[column] { format!("{pad}{text} ") } else { format!("{text}{pad} ") });
            }
            self.text.push_str(line.trim_end());
            self.text.push('\n');
        }
    }

    /// A sentence of its own, broken at blanks to stay readable.
    pub(super) fn note(&mut self, sentence: &str) {
        const WIDTH: usize = 100;
        self.text.push('\n');
        let mut length = 0;
        for word in sentence.split(' ') {
            let size = word.chars().count();
            if length > 0 && length + 1 + size > WIDTH {
                self.text.push('\n');
                length = 0;
            } else if length > 0 {
                self.text.push(' ');
                length += 1;
            }
            self.text.push_str(word);
            length += size;
        }
        self.text.push('\n');
    }

    /// The text with its sources, ending in one line end.
    pub(super) fn finish(mut self) -> String {
        let rows: Vec<Vec<String>> =
            self.sources.iter().enumerate().map(|(place, source)| vec![format!("[{}]", place + 1), source.clone()]).collect();
        self.rows("Sources", &rows);
        self.text
    }
}

fn is_number(cell: &str) -> bool {
    !cell.is_empty()
        && cell.chars().all(|c| c.is_ascii_digit() || matches!(c, '.' | '-' | '%' | ' '))
        && cell.contains(|c: char| c.is_ascii_digit())
}

/// A row of text cells.
pub(super) fn row<const N: usize>(cells: [&str; N]) -> Vec<String> {
    cells.iter().map(|cell| (*cell).to_owned()).collect()
}

/// Distinct sources in the order met.
pub(super) fn distinct<'a>(sources: impl Iterator<Item = &'a Source>) -> Vec<&'a Source> {
    let mut seen: Vec<&Source> = Vec::new();
    for source in sources {
        if !seen.contains(&source) {
            seen.push(source);
        }
    }
    seen
}

pub(super) fn json_text(value: &Value) -> String {
    // Values built here always print.
    serde_json::to_string_pretty(value).map(|text| text + "\n").unwrap_or_default()
}

pub(super) fn json_sources<'a>(sources: impl IntoIterator<Item = &'a Source>) -> Value {
    json!(sources.into_iter().map(ToString::to_string).collect::<Vec<_>>())
}

/// A number for people: `digits` significant ones, no more zeros than they are worth.
pub(super) fn significant(value: f64, digits: i32) -> String {
    if value == 0.0 || !value.is_finite() {
        return "0".to_owned();
    }
    let magnitude = value.abs().log10().floor() as i32;
    if !(-4..7).contains(&magnitude) {
        return format!("{value:.*e}", usize::try_from(digits - 1).unwrap_or(0));
    }
    format!("{value:.*}", usize::try_from(digits - 1 - magnitude).unwrap_or(0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_stand_in_line() {
        let mut sheet = Sheet::titled("Title");
        let mark = sheet.cite("a book");
        assert_eq!((sheet.cite("a law"), sheet.cite("a book")), ("[2]".into(), "[1]".into()));
        sheet.rows("Head", &[row(["limit", "kg", &mark]), row(["short", "1.5", ""]), row(["a long one", "21.25", "x"])]);
        assert_eq!(
            sheet.finish(),
            "Title\n\nHead\n  limit          kg  [1]\n  short         1.5\n  a long one  21.25  x\n\nSources\n  [1]  a book\n  [2]  a law\n"
        );
    }

    #[test]
    fn numbers_keep_their_digits() {
        assert_eq!(significant(13.2013, 4), "13.20");
        assert_eq!(significant(0.000_123_45, 3), "0.000123");
        assert_eq!(significant(2.273e-6, 4), "2.273e-6");
        assert_eq!(significant(59_921.5, 4), "59922");
    }
}
