//! A CSV file as lines of named fields.

use crate::ledger::UnknownWord;
use crate::quantity::{Mass, MassUnit, Ratio, Weighing, parse_decimal};
use chrono::NaiveDate;
use std::collections::HashMap;
use std::fmt;

/// No appliance has run for longer: a thousand years.
const MOST_HUNDREDTHS: i64 = 876_600_000;

/// A line that cannot be taken, and why.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct BadLine {
    pub file: String,
    /// Line in the file, the header being 1; 0 speaks of the whole file.
    pub line: u64,
    /// Empty when the whole line is meant.
    pub column: String,
    pub message: String,
}

impl fmt::Display for BadLine {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.file)?;
        if self.line > 0 {
            write!(f, ", line {}", self.line)?;
        }
        if !self.column.is_empty() {
            write!(f, ", column {}", self.column)?;
        }
        write!(f, ": {}", self.message)
    }
}

/// What a file holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    Sites,
    Appliances,
    Cylinders,
    People,
    Log,
}

impl Kind {
    /// In the order in which headers are tried.
    const ALL: [Self; 5] = [Self::Log, Self::Cylinders, Self::Appliances, Self::Sites, Self::People];

    /// With its article.
    fn name(self) -> &'static str {
        match self {
            Self::Sites => "a sites file",
            Self::Appliances => "an appliances file",
            Self::Cylinders => "a cylinders file",
            Self::People => "a people file",
            Self::Log => "a log",
        }
    }

    /// Columns that must be there and filled in.
    pub(super) fn required(self) -> &'static [&'static str] {
        match self {
            Self::Sites => &["site", "rulebooks"],
            Self::Appliances => &["appliance", "site", "category", "refrigerant"],
            Self::Cylinders => &["cylinder", "kind", "tare", "unit"],
            Self::People => &["person"],
            Self::Log => &["date", "appliance", "what"],
        }
    }

    fn optional(self) -> &'static [&'static str] {
        match self {
            Self::Sites => &["owner", "operator", "address", "rate_method", "time_zone", "valid_from"],
            Self::Appliances => &[
                "full_charge",
                "unit",
                "charge_method",
                "installed_on",
                "equipment",
                "assembly",
                "description",
                "serial",
                "place",
                "labelled_hermetically_sealed",
                "residential",
                "leakage_detection_system",
                "residential_or_light_commercial_ac",
                "product_below_minus_50c",
                "military",
                "room_volume_m3",
                "valid_from",
            ],
            Self::Cylinders => &[
                "refrigerant",
                "gas_status",
                "gross",
                "water_capacity",
                "water_capacity_unit",
                "stamped_maximum",
                "service_pressure_psig",
                "test_pressure_bar",
                "requalify_by",
                "owner",
                "gas_owner",
                "where",
            ],
            Self::People => &["certificate", "certificate_kind", "valid_from", "valid_to", "company", "company_certificate"],
            Self::Log => &[
                "time",
                "site",
                "job",
                "amount",
                "unit",
                "cylinder",
                "purpose",
                "result",
                "scope",
                "method",
                "place",
                "running_hours",
                "person",
                "new_refrigerant",
                "new_full_charge",
                "new_unit",
                "note",
            ],
        }
    }

    fn knows(self, column: &str) -> bool {
        self.required().contains(&column) || self.optional().contains(&column)
    }

    /// The columns of such a file, the required ones first.
    pub fn columns(self) -> impl Iterator<Item = &'static str> {
        self.required().iter().chain(self.optional()).copied()
    }

    fn of_header(columns: &[String]) -> Option<Self> {
        Self::ALL.into_iter().find(|kind| kind.required().iter().all(|needed| columns.iter().any(|column| column == needed)))
    }

    /// The kind that most of the header's columns belong to, for an error message.
    fn closest(columns: &[String]) -> Self {
        let known = |kind: &Self| columns.iter().filter(|column| kind.knows(column)).count();
        Self::ALL.into_iter().rev().max_by_key(known).unwrap_or(Self::Log)
    }
}

/// A file's lines, not yet read as anything.
#[derive(Debug)]
pub struct Table {
    pub kind: Kind,
    /// What is wrong with the header, and lines that cannot be parted into fields.
    pub bad: Vec<BadLine>,
    file: String,
    columns: HashMap<String, usize>,
    /// Decimal commas are read only where semicolons part the columns.
    comma_decimals: bool,
    lines: Vec<(u64, ::csv::StringRecord)>,
    /// All lines of the file are among `lines`.
    pub complete: bool,
}

/// Reads the header and parts the lines. Columns that are not known are left
/// aside, so that the faults of the others are found too.
///
/// # Errors
/// Not UTF-8, an empty file, or a header that lacks a column: nothing can be read then.
pub fn read_table(file: &str, bytes: &[u8]) -> Result<Table, Vec<BadLine>> {
    let bad = |line: u64, message: String| BadLine { file: file.to_owned(), line, column: String::new(), message };
    let text = std::str::from_utf8(bytes).map_err(|error| {
        let line = Lines::default().at(bytes, error.valid_up_to());
        vec![bad(line, "is not UTF-8 text; save the file as UTF-8".to_owned())]
    })?;
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let header = text.lines().find(|line| !line.is_empty()).unwrap_or_default();
    let empty = || vec![bad(0, "the file is empty; its first line must name the columns".to_owned())];
    if header.trim().is_empty() {
        return Err(empty());
    }
    let semicolons = header.contains(';');
    let delimiter = if semicolons { b';' } else { b',' };
    let mut reader = ::csv::ReaderBuilder::new()
        .delimiter(delimiter)
        .flexible(true)
        .has_headers(false)
        .trim(::csv::Trim::All)
        .from_reader(text.as_bytes());
    let mut records = reader.records();
    let mut lines_of = Lines::default();
    let byte_of = |position: Option<&::csv::Position>| position.map_or(0, |at| usize::try_from(at.byte()).unwrap_or(usize::MAX));
    let mut line_of = |position: Option<&::csv::Position>| lines_of.of_record(text.as_bytes(), byte_of(position));
    let unreadable = |line: u64, error: &::csv::Error| bad(line, format!("cannot be read as CSV: {error}; look at its quotation marks"));
    let (header_line, names): (u64, Vec<String>) = match records.next() {
        Some(Ok(record)) => (line_of(record.position()), record.iter().map(str::to_owned).collect()),
        Some(Err(error)) => return Err(vec![unreadable(line_of(error.position()), &error)]),
        None => return Err(empty()),
    };
    let (kind, mut faults) = check_header(file, header_line, &names);
    let Some(kind) = kind else { return Err(faults) };
    let mut lines = Vec::new();
    let mut complete = true;
    for record in records {
        match record {
            Ok(record) if record.iter().all(str::is_empty) => {}
            Ok(record) if record.len() > names.len() => {
                let (fields, columns) = (record.len(), names.len());
                let message = format!("has {fields} fields where the header names {columns} columns; is a quotation mark missing?");
                faults.push(bad(line_of(record.position()), message));
                complete = false;
            }
            Ok(record) => lines.push((line_of(record.position()), record)),
            Err(error) => {
                faults.push(unreadable(line_of(error.position()), &error));
                complete = false;
            }
        }
    }
    // Lines may have gone into a field whose quotation mark is never closed: the last one then.
    let open = |record: &::csv::StringRecord| opens_a_quotation(text.as_bytes(), byte_of(record.position()), delimiter);
    if complete && let Some((line, _)) = lines.pop_if(|(_, record)| open(record)) {
        faults.push(bad(line, "has a quotation mark that is not closed; close it, or take it out".to_owned()));
        complete = false;
    }
    let columns = names.into_iter().enumerate().filter(|(_, name)| kind.knows(name)).map(|(index, name)| (name, index)).collect();
    Ok(Table { kind, bad: faults, file: file.to_owned(), columns, comma_decimals: semicolons, lines, complete })
}

/// Counts lines as far as was asked. The reader's own count takes blank lines
/// before a record for its beginning.
#[derive(Default)]
struct Lines {
    counted_to: usize,
    ended: u64,
}

impl Lines {
    /// The line, the first being 1, in which this byte stands. Bytes are asked for in order.
    fn at(&mut self, text: &[u8], byte: usize) -> u64 {
        let to = byte.min(text.len());
        for at in self.counted_to..to {
            let ends = text[at] == b'\n' || (text[at] == b'\r' && text.get(at + 1) != Some(&b'\n'));
            self.ended += u64::from(ends);
        }
        self.counted_to = self.counted_to.max(to);
        self.ended + 1
    }

    /// The line of a record that begins at this byte, or after blank lines there.
    fn of_record(&mut self, text: &[u8], byte: usize) -> u64 {
        let blank = text.get(byte..).unwrap_or_default().iter().take_while(|byte| matches!(byte, b'\n' | b'\r')).count();
        self.at(text, byte.saturating_add(blank))
    }
}

/// Whether a quotation that begins in or after the record at this byte is open at the end of the text.
fn opens_a_quotation(text: &[u8], byte: usize, delimiter: u8) -> bool {
    let (mut quoted, mut at_start) = (false, true);
    let mut rest = text.get(byte..).unwrap_or_default().iter().peekable();
    while let Some(&byte) = rest.next() {
        match byte {
            b'"' if quoted => quoted = rest.next_if(|next| **next == b'"').is_some(),
            b'"' if at_start => quoted = true,
            _ => {}
        }
        at_start = !quoted && (byte == delimiter || matches!(byte, b'\n' | b'\r'));
    }
    quoted
}

/// The kind of file, where the header names all that such a file needs, and what is wrong with it.
fn check_header(file: &str, line: u64, names: &[String]) -> (Option<Kind>, Vec<BadLine>) {
    let bad = |column: &str, message: String| BadLine { file: file.to_owned(), line, column: column.to_owned(), message };
    let kind = Kind::of_header(names);
    let closest = kind.unwrap_or_else(|| Kind::closest(names));
    let known = || closest.columns().collect::<Vec<_>>().join(", ");
    let mut faults = Vec::new();
    for (index, name) in names.iter().enumerate() {
        if !closest.knows(name) {
            faults.push(bad(name, format!("is not a column of {}; known are {}", closest.name(), known())));
        } else if names[..index].contains(name) {
            faults.push(bad(name, "is named twice; take one of the two out".to_owned()));
        }
    }
    if kind.is_none() {
        for needed in closest.required().iter().filter(|needed| !names.iter().any(|name| name == *needed)) {
            faults.push(bad(needed, format!("is missing; {} needs {}", closest.name(), closest.required().join(", "))));
        }
    }
    (kind, faults)
}

impl Table {
    /// Reads every line with `read`, and adds its faults to those of the table.
    pub(super) fn rows<T>(&mut self, read: impl Fn(&mut Fields) -> T) -> Vec<T> {
        let mut rows = Vec::with_capacity(self.lines.len());
        let mut bad = std::mem::take(&mut self.bad);
        for (line, record) in &self.lines {
            let mut fields = Fields { table: self, line: *line, record, bad: Vec::new() };
            for column in self.kind.required() {
                if fields.text(column).is_empty() {
                    fields.fault(column, EMPTY.to_owned());
                }
            }
            for column in self.kind.columns() {
                // No font has them, and no record could be printed.
                if let Some(unseen) = fields.text(column).chars().find(|c| c.is_control() && !matches!(c, '\n' | '\r' | '\t')) {
                    fields.fault(column, format!("has a character that nobody can see, U+{:04X}; take it out", u32::from(unseen)));
                }
            }
            rows.push(read(&mut fields));
            bad.append(&mut fields.bad);
        }
        self.bad = bad;
        rows
    }
}

const EMPTY: &str = "is empty; it must be filled in";

/// One line's fields. A fault is noted and a stand-in returned, so that a line
/// tells all its faults at once.
pub(super) struct Fields<'a> {
    table: &'a Table,
    line: u64,
    record: &'a ::csv::StringRecord,
    bad: Vec<BadLine>,
}

impl Fields<'_> {
    pub fn line(&self) -> u64 {
        self.line
    }

    pub fn file(&self) -> &str {
        &self.table.file
    }

    /// Empty where the column or the field is missing.
    pub fn text(&self, column: &str) -> &str {
        self.table.columns.get(column).and_then(|&index| self.record.get(index)).unwrap_or_default()
    }

    /// No fault was found in it so far.
    pub fn is_sound(&self) -> bool {
        self.bad.is_empty()
    }

    pub fn fault(&mut self, column: &str, message: String) {
        // Two checks may see the same, and of an empty field no more is to be said.
        if self.bad.iter().any(|told| told.column == column && (told.message == message || told.message == EMPTY)) {
            return;
        }
        self.bad.push(BadLine { file: self.table.file.clone(), line: self.line, column: column.to_owned(), message });
    }

    fn read<T, E: fmt::Display>(&mut self, column: &str, read: impl FnOnce(&str) -> Result<T, E>) -> Option<T> {
        let text = self.text(column);
        if text.is_empty() {
            return None;
        }
        match read(text) {
            Ok(value) => Some(value),
            Err(error) => {
                self.fault(column, error.to_string());
                None
            }
        }
    }

    pub fn word<T>(&mut self, column: &str, from_name: impl Fn(&str) -> Result<T, UnknownWord>) -> Option<T> {
        self.read(column, from_name)
    }

    pub fn yes(&mut self, column: &str) -> bool {
        self.read(column, |text| match text {
            "yes" => Ok(true),
            "no" => Ok(false),
            other => Err(format!("\u{201c}{other}\u{201d} is neither yes nor no; write one of them, or nothing for no")),
        })
        .unwrap_or(false)
    }

    pub fn day(&mut self, column: &str) -> Option<NaiveDate> {
        self.read(column, |text| {
            // Only the ISO form: 2026-3-3 could be mistaken elsewhere.
            let iso = text.len() == 10 && text.as_bytes()[4] == b'-' && text.as_bytes()[7] == b'-';
            text.parse().ok().filter(|_| iso).ok_or_else(|| format!("\u{201c}{text}\u{201d} is not a date such as 2026-03-31"))
        })
    }

    /// Minute of the day from `HH:MM`.
    pub fn minute(&mut self, column: &str) -> Option<u16> {
        self.read(column, |text| {
            let minute = text.split_once(':').and_then(|(hours, minutes)| {
                let digits = |s: &str| !s.is_empty() && s.len() <= 2 && s.bytes().all(|b| b.is_ascii_digit());
                let hour: u16 = hours.parse().ok().filter(|&hour| hour < 24 && digits(hours))?;
                let minute: u16 = minutes.parse().ok().filter(|&minute| minute < 60 && digits(minutes) && minutes.len() == 2)?;
                Some(hour * 60 + minute)
            });
            minute.ok_or_else(|| format!("\u{201c}{text}\u{201d} is not a time such as 14:05"))
        })
    }

    /// A number in the unit that the column's name, or the file, says: `read` knows its bounds.
    pub fn number<T, E: fmt::Display>(&mut self, column: &str, read: impl FnOnce(&str) -> Result<T, E>) -> Option<T> {
        if self.has_foreign_comma(column) {
            return None;
        }
        self.read(column, read)
    }

    /// Hundredths of an hour, rounded down: a duty that asks for 24 hours is not met by 23.999.
    pub fn hundredths_of_hours(&mut self, column: &str) -> Option<i64> {
        self.number(column, |text| {
            let hours = parse_decimal(text).map_err(|error| error.to_string())?;
            let hundredths = (hours * Ratio::from_integer(100)).floor().to_integer();
            let taken = i64::try_from(hundredths).ok().filter(|hundredths| (0..=MOST_HUNDREDTHS).contains(hundredths));
            taken.ok_or_else(|| format!("\u{201c}{text}\u{201d} is not a number of hours that an appliance can have run; correct it"))
        })
    }

    /// A decimal comma in a file whose columns are parted by commas is told as a fault.
    fn has_foreign_comma(&mut self, column: &str) -> bool {
        let text = self.text(column).to_owned();
        let foreign = text.contains(',') && !self.table.comma_decimals;
        if foreign {
            self.fault(column, format!("\u{201c}{text}\u{201d} has a decimal comma; write a point, or part the columns by semicolons"));
        }
        foreign
    }

    /// A unit of mass, also where there is no mass to it.
    pub fn unit(&mut self, column: &str) -> Option<MassUnit> {
        self.read(column, MassUnit::from_name)
    }

    /// A mass with its unit from `unit_column`.
    pub fn mass(&mut self, column: &str, unit_column: &str) -> Option<(Mass, Weighing)> {
        if self.text(column).is_empty() {
            return None;
        }
        if self.text(unit_column).is_empty() {
            self.fault(unit_column, format!("is empty; {column} needs a unit: kg, g, lb, oz or lb-oz"));
            return None;
        }
        let unit = self.unit(unit_column)?;
        if self.has_foreign_comma(column) {
            return None;
        }
        let weighing = Weighing::new(self.text(column), unit);
        match weighing.mass() {
            Ok(mass) => Some((mass, weighing)),
            Err(error) => {
                self.fault(column, error.to_string());
                None
            }
        }
    }

    /// As [`Fields::mass`], and above zero.
    pub fn positive_mass(&mut self, column: &str, unit_column: &str) -> Option<(Mass, Weighing)> {
        let (mass, weighing) = self.mass(column, unit_column)?;
        if !mass.is_positive() {
            self.fault(column, format!("\u{201c}{}\u{201d} is not above zero; correct the mass", weighing.typed));
            return None;
        }
        Some((mass, weighing))
    }

    /// A gas of the catalogue, by its designation there.
    pub fn gas(&mut self, column: &str) -> Option<String> {
        self.read(column, |text| {
            crate::gas::find(text).map(|gas| gas.designation().to_owned()).ok_or_else(|| {
                let like = crate::gas::like(text);
                let hint = if like.is_empty() { String::new() } else { format!("; like it are {}", like.join(", ")) };
                format!("\u{201c}{text}\u{201d} is not in the gas catalogue; write a designation such as R-448A{hint}")
            })
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn lines(text: &str) -> Vec<u64> {
        read_table("f.csv", text.as_bytes()).unwrap().lines.iter().map(|(line, _)| *line).collect()
    }

    #[test]
    fn lines_are_counted_as_an_editor_does() {
        assert_eq!(lines("person\na\n\n\nb\nc\n"), [2, 5, 6]);
        assert_eq!(lines("\n\nperson\r\na\r\n\r\nb"), [4, 6]);
        assert_eq!(lines("person,company\n\"a\nb\",c\nd,e\n,\nf,g"), [2, 4, 6]);
        assert_eq!(lines("person\ra\rb\r"), [2, 3]);
    }

    #[test]
    fn a_quotation_that_is_not_closed_swallows_no_lines() {
        let told = |text: &str| {
            let table = read_table("f.csv", text.as_bytes()).unwrap();
            (table.lines.len(), table.complete, table.bad.iter().map(|bad| bad.line).collect::<Vec<_>>())
        };
        assert_eq!(told("person,company\na,b\nc,\"d\ne,f\n"), (1, false, vec![3]));
        assert_eq!(told("person,company\na,\"say \"\"d\"\"\"\n\"e\",5\" pipe\n"), (2, true, Vec::new()));
        assert_eq!(told("person,company\na,\"d\ne\"\n"), (1, true, Vec::new()));
    }

    #[test]
    fn a_header_tells_what_it_lacks_and_what_it_has_too_much() {
        let told = |text: &str| match read_table("f.csv", text.as_bytes()) {
            Ok(table) => (Some(table.kind), table.bad.len()),
            Err(bad) => (None, bad.len()),
        };
        assert_eq!(told("person,colour,person\n"), (Some(Kind::People), 2));
        assert_eq!(told("site,owner,valid_from\n"), (None, 1));
        assert_eq!(told(""), (None, 1));
        assert_eq!(told("\n  \n"), (None, 1));
    }
}
