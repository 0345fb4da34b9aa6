//! Visits: work at one site, open until closed.

use super::{PersonId, SiteId, VisitId};
use chrono::{DateTime, NaiveDate, Utc};
use serde::{Deserialize, Serialize};

#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum VisitState {
    #[serde(rename = "open")]
    Open,
    #[serde(rename = "closed")]
    Closed,
    /// History read from a file: never signed here.
    #[serde(rename = "imported")]
    Imported,
}

impl VisitState {
    pub const fn name(self) -> &'static str {
        match self {
            Self::Open => "open",
            Self::Closed => "closed",
            Self::Imported => "imported",
        }
    }
}

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Visit {
    pub id: VisitId,
    pub site: SiteId,
    pub state: VisitState,
    /// Site's local date on which it began; imported history: the day of its entries.
    pub date: NaiveDate,
    /// Minute of that day, where known.
    pub minute: Option<u16>,
    /// IANA name of the site's zone when it began.
    pub time_zone: String,
    pub begun: DateTime<Utc>,
    /// Those at work, the one who began it first.
    pub people: Vec<PersonId>,
    /// `None` until closed.
    pub closing: Option<Closing>,
    /// SHA-256 of the closed record, in hex; `None` until closed.
    pub fingerprint: Option<String>,
}

/// What ended a visit.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Closing {
    pub closed: DateTime<Utc>,
    /// Site's local date and minute.
    pub date: NaiveDate,
    pub minute: u16,
    pub technician: Signature,
    pub counterpart: Counterpart,
    /// To whom, when, how; empty until handed over.
    pub handed_over: String,
}

/// A signature as drawn.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Signature {
    pub name: String,
    pub ink: Ink,
}

/// Strokes on a field [`Ink::WIDTH`] by [`Ink::HEIGHT`] steps, each a run of points from the top left.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
pub struct Ink(pub Vec<Vec<(i32, i32)>>);

impl Ink {
    pub const WIDTH: i32 = 3000;
    pub const HEIGHT: i32 = 1000;

    pub fn is_empty(&self) -> bool {
        self.0.iter().all(Vec::is_empty)
    }
}

/// How the owner's or operator's representative ended the visit.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(tag = "how", rename_all = "kebab-case")]
pub enum Counterpart {
    Signed { signature: Signature },
    NobodyPresent,
    Refused { name: String, reason: String },
    SignsLater { name: String },
}
