//! Registers and logs as CSV. Reading a file checks every line by itself;
//! what lines mean together is for the use case that takes them in.

mod log;
mod registers;
mod table;

pub use log::{LogRow, LogWhat};
pub use registers::{ApplianceRow, CylinderRow, PersonRow, SiteRow};
pub use table::{BadLine, Kind, Table, read_table};

/// The rows of one file, by kind.
#[derive(Debug)]
pub enum Rows {
    Sites(Vec<SiteRow>),
    Appliances(Vec<ApplianceRow>),
    Cylinders(Vec<CylinderRow>),
    People(Vec<PersonRow>),
    Log(Vec<LogRow>),
}

/// A file as far as it can be read.
#[derive(Debug)]
pub struct Reading {
    /// Also lines with faults, with stand-ins for what could not be read.
    pub rows: Rows,
    /// Every bad line there is, with its line and column.
    pub bad: Vec<BadLine>,
    /// Every line is among the rows: a name that is not there is not in the file.
    pub complete: bool,
    pub kind: Kind,
}

/// Reads a file: kind from its header, every line checked.
///
/// # Errors
/// Where nothing can be read: why.
pub fn read(file: &str, bytes: &[u8]) -> Result<Reading, Vec<BadLine>> {
    let mut table = read_table(file, bytes)?;
    let rows = match table.kind {
        Kind::Sites => Rows::Sites(table.rows(registers::site_row)),
        Kind::Appliances => Rows::Appliances(table.rows(registers::appliance_row)),
        Kind::Cylinders => Rows::Cylinders(table.rows(registers::cylinder_row)),
        Kind::People => Rows::People(table.rows(registers::person_row)),
        Kind::Log => Rows::Log(table.rows(log::log_row)),
    };
    Ok(Reading { rows, bad: table.bad, complete: table.complete, kind: table.kind })
}
