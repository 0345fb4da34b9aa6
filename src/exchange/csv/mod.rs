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

/// Reads a file: kind from its header, every line checked.
///
/// # Errors
/// Every bad line there is, with its line and column.
pub fn read(file: &str, bytes: &[u8]) -> Result<Rows, Vec<BadLine>> {
    let table = read_table(file, bytes)?;
    match table.kind {
        Kind::Sites => table.rows(registers::site_row).map(Rows::Sites),
        Kind::Appliances => table.rows(registers::appliance_row).map(Rows::Appliances),
        Kind::Cylinders => table.rows(registers::cylinder_row).map(Rows::Cylinders),
        Kind::People => table.rows(registers::person_row).map(Rows::People),
        Kind::Log => table.rows(log::log_row).map(Rows::Log),
    }
}
