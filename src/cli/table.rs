//! Plain tables for a terminal, and CSV.

/// A table: a header and rows of the same width.
pub struct TextTable {
    header: Vec<&'static str>,
    /// Columns of figures stand at the right.
    figures: Vec<bool>,
    rows: Vec<Vec<String>>,
}

impl TextTable {
    /// Column names; one that begins with `>` holds figures.
    pub fn new(columns: &[&'static str]) -> Self {
        let figures = columns.iter().map(|name| name.starts_with('>')).collect();
        let header = columns.iter().map(|name| name.trim_start_matches('>')).collect();
        Self { header, figures, rows: Vec::new() }
    }

    pub fn row<I: IntoIterator<Item = String>>(&mut self, fields: I) {
        self.rows.push(fields.into_iter().collect());
    }

    pub fn is_empty(&self) -> bool {
        self.rows.is_empty()
    }

    /// Aligned columns, two blanks apart.
    pub fn text(&self) -> String {
        let widths: Vec<usize> = (0..self.header.len())
            .map(|column| {
                let widest = self.rows.iter().map(|row| row[column].chars().count()).max().unwrap_or(0);
                widest.max(self.header[column].chars().count())
            })
            .collect();
        let line = |fields: &mut dyn Iterator<Item = &str>| {
            let mut text = String::new();
            for (column, field) in fields.enumerate() {
                let blanks = " ".repeat(widths[column].saturating_sub(field.chars().count()));
                if self.figures[column] {
                    text.extend([&blanks, field, "  "]);
                } else {
                    text.extend([field, &blanks, "  "]);
                }
            }
            text.truncate(text.trim_end().len());
            text.push('\n');
            text
        };
        let mut text = line(&mut self.header.iter().copied());
        for row in &self.rows {
            text.push_str(&line(&mut row.iter().map(String::as_str)));
        }
        text
    }

    /// The same as CSV, column names with underscores.
    pub fn csv(&self) -> anyhow::Result<String> {
        let mut writer = csv::Writer::from_writer(Vec::new());
        writer.write_record(self.header.iter().map(|name| name.replace(' ', "_")))?;
        for row in &self.rows {
            writer.write_record(row)?;
        }
        Ok(String::from_utf8(writer.into_inner()?)?)
    }
}
