//! The closed record: the bytes that were signed and their fingerprint.
//!
//! The bytes are the number of the format, a line feed, and what the format
//! says. Old formats are read for ever.
//!
//! FORMAT 1 IS FROZEN. It is the canonical JSON (`canonical.rs`) of
//! [`ClosedVisit`]; the fingerprint is the SHA-256 of all bytes, the number
//! included, in lower-case hex. Fields may be added to the types below only if
//! they are left out where they say nothing, so that a record closed before
//! still reads; a field is never renamed and never changes its meaning. A
//! change beyond that is format 2.

use super::{NotCanonical, ServiceRecord, canonical_json};
use crate::ledger::{
    Act, Appliance, ApplianceId, CautionSeen, Closing, Cylinder, Detail, Entry, EntryId, Person, Site, SiteId, Visit, VisitId,
};
use chrono::{DateTime, NaiveDate, Utc};
use serde::{Deserialize, Serialize};
use sha2::{Digest, Sha256};

/// The format that is written.
pub const FORMAT: u32 = 1;

/// What is closed: the facts as entered, with their ids, and what was
/// printed from them and signed.
///
/// FROZEN: see the module.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ClosedVisit {
    pub visit: VisitFacts,
    /// In the order in which they were written, struck ones included.
    pub entries: Vec<ClosedEntry>,
    pub cautions: Vec<CautionSeen>,
    pub closing: Closing,
    /// The register lines that the entries speak of, with their versions.
    pub site: Site,
    pub appliances: Vec<Appliance>,
    pub cylinders: Vec<Cylinder>,
    pub people: Vec<Person>,
    /// The service record as it read when it was signed.
    pub paper: ServiceRecord,
}

/// FROZEN: see the module.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct VisitFacts {
    pub id: VisitId,
    pub site: SiteId,
    pub date: NaiveDate,
    pub minute: Option<u16>,
    pub time_zone: String,
    pub begun: DateTime<Utc>,
}

/// FROZEN: see the module.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct ClosedEntry {
    pub id: EntryId,
    pub appliance: ApplianceId,
    pub date: NaiveDate,
    pub minute: Option<u16>,
    pub job: Option<String>,
    pub written: DateTime<Utc>,
    pub strikes: Option<EntryId>,
    pub struck_by: Option<EntryId>,
    pub what: Act,
    pub detail: Detail,
}

impl From<&Visit> for VisitFacts {
    fn from(visit: &Visit) -> Self {
        Self {
            id: visit.id,
            site: visit.site,
            date: visit.date,
            minute: visit.minute,
            time_zone: visit.time_zone.clone(),
            begun: visit.begun,
        }
    }
}

impl From<&Entry> for ClosedEntry {
    fn from(entry: &Entry) -> Self {
        Self {
            id: entry.line.entry,
            appliance: entry.line.appliance,
            date: entry.line.at.date,
            minute: entry.line.at.minute,
            job: entry.line.job.as_deref().map(str::to_owned),
            written: entry.written,
            strikes: entry.strikes,
            struck_by: entry.struck_by,
            what: entry.line.act.clone(),
            detail: entry.detail.clone(),
        }
    }
}

/// Bytes with their fingerprint.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Closed {
    pub bytes: Vec<u8>,
    /// SHA-256 of the bytes, 64 lower-case hex digits.
    pub fingerprint: String,
}

/// Why bytes are no closed record.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum NotClosed {
    #[error("this does not begin with the number of a closed record's format")]
    NoFormat,
    #[error("this closed record has format {0}, which is newer than this program; the newer program reads it")]
    Newer(u32),
    #[error("this closed record cannot be read: {0}")]
    Unreadable(String),
}

/// Writes what is to be signed.
///
/// # Errors
/// [`NotCanonical`], which no fact of this program's can cause.
pub fn close(visit: &ClosedVisit) -> Result<Closed, NotCanonical> {
    let bytes = format!("{FORMAT}\n{}", canonical_json(visit)?).into_bytes();
    let fingerprint = fingerprint(&bytes);
    Ok(Closed { bytes, fingerprint })
}

/// SHA-256 of a closed record's bytes, in hex; of any format.
pub fn fingerprint(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|byte| format!("{byte:02x}")).collect()
}

/// Reads a closed record. Whether it is the one that was signed, its
/// [`fingerprint`] says.
///
/// # Errors
/// [`NotClosed`]: no closed record, or one of a newer program.
pub fn read_closed(bytes: &[u8]) -> Result<ClosedVisit, NotClosed> {
    let text = std::str::from_utf8(bytes).map_err(|_| NotClosed::NoFormat)?;
    let (format, rest) = text.split_once('\n').ok_or(NotClosed::NoFormat)?;
    match format.parse().map_err(|_| NotClosed::NoFormat)? {
        FORMAT => serde_json::from_str(rest).map_err(|e| NotClosed::Unreadable(e.to_string())),
        newer => Err(NotClosed::Newer(newer)),
    }
}
