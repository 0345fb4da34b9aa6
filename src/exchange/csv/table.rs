//! A CSV file as lines of named fields.

use crate::ledger::UnknownWord;
use crate::quantity::{Mass, MassUnit, Ratio, Weighing, parse_decimal};
use chrono::NaiveDate;
use std::collections::HashMap;
use std::fmt;

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

    fn name(self) -> &'static str {
        match self {
            Self::Sites => "sites",
            Self::Appliances => "appliances",
            Self::Cylinders => "cylinders",
            Self::People => "people",
            Self::Log => "log",
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
    file: String,
    columns: HashMap<String, usize>,
    /// Decimal commas are read only where semicolons part the columns.
    comma_decimals: bool,
    lines: Vec<(u64, ::csv::StringRecord)>,
}

/// Reads the header and parts the lines.
///
/// # Errors
/// Not UTF-8, an empty file, an unknown or missing column, a line with too many fields.
pub fn read_table(file: &str, bytes: &[u8]) -> Result<Table, Vec<BadLine>> {
    let whole = |message: String| vec![BadLine { file: file.to_owned(), line: 0, column: String::new(), message }];
    let text = std::str::from_utf8(bytes).map_err(|error| {
        let line = bytes[..error.valid_up_to()].iter().filter(|&&byte| byte == b'\n').count() as u64 + 1;
        vec![BadLine {
            file: file.to_owned(),
            line,
            column: String::new(),
            message: "is not UTF-8 text; save the file as UTF-8".to_owned(),
        }]
    })?;
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    let header = text.lines().next().unwrap_or_default();
    if header.trim().is_empty() {
        return Err(whole("the file is empty; its first line must name the columns".to_owned()));
    }
    let semicolons = header.contains(';');
    let mut reader = ::csv::ReaderBuilder::new()
        .delimiter(if semicolons { b';' } else { b',' })
        .flexible(true)
        .has_headers(false)
        .trim(::csv::Trim::All)
        .from_reader(text.as_bytes());
    let mut records = reader.records();
    let unreadable = |error: ::csv::Error| {
        let line = error.position().map_or(0, ::csv::Position::line);
        vec![BadLine { file: file.to_owned(), line, column: String::new(), message: format!("cannot be read as CSV: {error}") }]
    };
    let names: Vec<String> = match records.next() {
        Some(record) => record.map_err(unreadable)?.iter().map(str::to_owned).collect(),
        None => return Err(whole("the file is empty; its first line must name the columns".to_owned())),
    };
    let kind = check_header(file, &names)?;
    let columns = names.iter().enumerate().map(|(index, name)| (name.clone(), index)).collect();
    let (mut lines, mut bad) = (Vec::new(), Vec::new());
    for record in records {
        match record {
            Ok(record) if record.iter().all(str::is_empty) => {}
            Ok(record) => {
                let line = record.position().map_or(0, ::csv::Position::line);
                if record.len() > names.len() {
                    let message =
                        format!("has {} fields where the header names {} columns; is a quotation mark missing?", record.len(), names.len());
                    bad.push(BadLine { file: file.to_owned(), line, column: String::new(), message });
                } else {
                    lines.push((line, record));
                }
            }
            Err(error) => bad.extend(unreadable(error)),
        }
    }
    if bad.is_empty() { Ok(Table { kind, file: file.to_owned(), columns, comma_decimals: semicolons, lines }) } else { Err(bad) }
}

fn check_header(file: &str, names: &[String]) -> Result<Kind, Vec<BadLine>> {
    let bad = |column: &str, message: String| BadLine { file: file.to_owned(), line: 1, column: column.to_owned(), message };
    let kind = Kind::of_header(names);
    let closest = kind.unwrap_or_else(|| Kind::closest(names));
    let known = || [closest.required(), closest.optional()].concat().join(", ");
    let mut faults = Vec::new();
    for (index, name) in names.iter().enumerate() {
        if !closest.knows(name) {
            faults.push(bad(name, format!("is not a column of a {} file; known are {}", closest.name(), known())));
        } else if names[..index].contains(name) {
            faults.push(bad(name, "is named twice".to_owned()));
        }
    }
    if kind.is_none() {
        for needed in closest.required().iter().filter(|needed| !names.iter().any(|name| name == *needed)) {
            faults.push(bad(needed, format!("is missing; a {} file needs {}", closest.name(), closest.required().join(", "))));
        }
    }
    match kind {
        Some(kind) if faults.is_empty() => Ok(kind),
        _ => Err(faults),
    }
}

impl Table {
    /// Reads every line with `read`.
    ///
    /// # Errors
    /// Every fault of every line.
    pub(super) fn rows<T>(&self, read: impl Fn(&mut Fields) -> T) -> Result<Vec<T>, Vec<BadLine>> {
        let mut bad = Vec::new();
        let mut rows = Vec::with_capacity(self.lines.len());
        for (line, record) in &self.lines {
            let mut fields = Fields { table: self, line: *line, record, bad: Vec::new() };
            for column in self.kind.required() {
                if fields.text(column).is_empty() {
                    fields.fault(column, "is empty; it must be filled in".to_owned());
                }
            }
            let row = read(&mut fields);
            bad.append(&mut fields.bad);
            rows.push(row);
        }
        // A fault that two checks both saw is told once.
        bad.dedup_by(|a, b| a.line == b.line && a.column == b.column);
        if bad.is_empty() { Ok(rows) } else { Err(bad) }
    }
}

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

    pub fn fault(&mut self, column: &str, message: String) {
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
            other => Err(format!("\u{201c}{other}\u{201d} is neither yes nor no")),
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

    fn plain_decimal(&self, text: &str) -> Result<Ratio, String> {
        if text.contains(',') && !self.table.comma_decimals {
            return Err(format!("\u{201c}{text}\u{201d} has a decimal comma; write a point, or part the columns by semicolons"));
        }
        parse_decimal(text).map_err(|error| error.to_string())
    }

    /// A decimal that may not be negative.
    pub fn decimal(&mut self, column: &str) -> Option<Ratio> {
        let value = match self.text(column) {
            "" => return None,
            text => self.plain_decimal(text).and_then(|value| {
                if value < Ratio::from_integer(0) { Err(format!("\u{201c}{text}\u{201d} is below zero")) } else { Ok(value) }
            }),
        };
        value.map_err(|message| self.fault(column, message)).ok()
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
        let unit = self.read(unit_column, MassUnit::from_name)?;
        let text = self.text(column).to_owned();
        if text.contains(',') && !self.table.comma_decimals {
            self.fault(column, format!("\u{201c}{text}\u{201d} has a decimal comma; write a point, or part the columns by semicolons"));
            return None;
        }
        let weighing = Weighing::new(text, unit);
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
            self.fault(column, format!("\u{201c}{}\u{201d} is not above zero", weighing.typed));
            return None;
        }
        Some((mass, weighing))
    }

    /// A gas of the catalogue, by its designation there.
    pub fn gas(&mut self, column: &str) -> Option<String> {
        self.read(column, |text| {
            crate::gas::find(text)
                .map(|gas| gas.designation().to_owned())
                .ok_or_else(|| format!("\u{201c}{text}\u{201d} is not in the gas catalogue; write a designation such as R-448A"))
        })
    }
}
