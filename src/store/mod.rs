//! The SQLite file.
