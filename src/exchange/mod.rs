//! Files that come in and go out: CSV, calendars, exchange files.

pub mod csv;
pub mod ics;
