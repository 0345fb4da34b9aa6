//! The list of what is due, as it is printed.

use super::service::Party;
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// What is due in the whole store, as of a day.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct DueList {
    pub on: NaiveDate,
    /// How it is grouped, as `by site`.
    pub grouped: String,
    pub company: Party,
    /// Made by the demonstration: said on every page.
    pub demonstration: bool,
    /// Program and version.
    pub program: String,
    pub groups: Vec<DueGroup>,
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct DueGroup {
    pub name: String,
    /// The oldest first.
    pub rows: Vec<DueRow>,
}

/// All duties of one kind of an appliance, or one open leak.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct DueRow {
    pub what: String,
    /// How many of the kind are open.
    pub count: usize,
    pub appliance: String,
    pub site: String,
    /// `27 Mar 2026`, or why there is no day.
    pub due: String,
    /// `5 days late`, `in 3 days`.
    pub state: String,
    /// Article; empty for a leak.
    pub source: String,
}
