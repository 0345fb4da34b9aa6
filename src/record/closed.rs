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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::ledger::{
        ApplianceFacts, Category, ChargePurpose, Counterpart, CylinderFacts, CylinderId, CylinderKind, GasStatus, Ink, PersonId, Reading,
        Scope, Signature, SiteFacts, TestKind, TestResult, Transfer, Versions, WeighingMode,
    };
    use crate::quantity::{Mass, MassUnit, Weighing};
    use crate::record::{Party, RecordState, SiteText};
    use uuid::Uuid;

    fn lb(text: &str) -> Weighing {
        Weighing::new(text, MassUnit::Pound)
    }

    fn entry(number: u128, what: Act, detail: Detail) -> ClosedEntry {
        ClosedEntry {
            id: EntryId(Uuid::from_u128(number)),
            appliance: ApplianceId(Uuid::from_u128(2)),
            date: "2026-03-03".parse().unwrap(),
            minute: Some(580),
            job: Some("W-1187".to_owned()),
            written: "2026-03-03T14:40:00Z".parse().unwrap(),
            strikes: None,
            struck_by: None,
            what,
            detail,
        }
    }

    fn entries() -> Vec<ClosedEntry> {
        let transfer = Transfer {
            mass: Mass::from_lb(10),
            cylinder: Some(CylinderId(Uuid::from_u128(3))),
            division: lb("0.1").mass().ok(),
            hoses: Mass::ZERO,
        };
        let reading = Reading { mode: WeighingMode::Gross, before: Some(lb("70.0")), after: Some(lb("60.0")), net: None, scale: None };
        let test = Act::Test {
            kind: TestKind::FollowUpVerification,
            result: Some(TestResult::Pass),
            scope: Some(Scope::Part),
            partial: false,
            running_hundredths: Some(2450),
        };
        let weighed = Detail { reading: Some(reading), gas_status: Some(GasStatus::Virgin), ..Detail::default() };
        let note = Detail { note: "Łącznik \u{201c}B\u{201d}\n2 × dokręcony".to_owned(), ..Detail::default() };
        vec![
            entry(10, Act::Charge { purpose: ChargePurpose::Leak, transfer }, weighed),
            entry(11, test, Detail::default()),
            entry(12, Act::Retrofit { refrigerant: Some("R-448A".to_owned()), full_charge: Some(Mass::from_kg(40)) }, Detail::default()),
            ClosedEntry { strikes: Some(EntryId(Uuid::from_u128(11))), minute: None, job: None, ..entry(13, Act::Note, note) },
        ]
    }

    fn site() -> Site {
        let facts = SiteFacts {
            owner: "Harbour Fish Ltd".to_owned(),
            address: "Quay 3".to_owned(),
            time_zone: "America/New_York".to_owned(),
            ..SiteFacts::under(vec!["us-82f".to_owned()])
        };
        Site { id: SiteId(Uuid::from_u128(1)), name: "Fish market cold store".to_owned(), versions: Versions::always(facts) }
    }

    fn appliance() -> Appliance {
        let facts = ApplianceFacts {
            full_charge: Some(Mass::from_lb(100)),
            full_charge_written: Some(lb("100")),
            ..ApplianceFacts::new(Category::CommercialRefrigeration, "R-22")
        };
        let id = ApplianceId(Uuid::from_u128(2));
        Appliance { id, site: SiteId(Uuid::from_u128(1)), name: "R-1".to_owned(), versions: Versions::always(facts) }
    }

    fn cylinder() -> Cylinder {
        let facts = CylinderFacts {
            refrigerant: Some("R-22".to_owned()),
            gas_status: Some(GasStatus::Virgin),
            gross: Some(Mass::from_lb(70)),
            gross_written: Some(lb("70")),
            water_capacity_l: Some("21.6".to_owned()),
            ..CylinderFacts::new(CylinderKind::Supply, Mass::from_lb(20), lb("20"))
        };
        Cylinder { id: CylinderId(Uuid::from_u128(3)), name: "S-204".to_owned(), versions: Versions::always(facts) }
    }

    fn visit() -> ClosedVisit {
        let day: NaiveDate = "2026-03-03".parse().unwrap();
        let closed: DateTime<Utc> = "2026-03-03T16:20:00Z".parse().unwrap();
        let signature = Signature { name: "Ada Quill".to_owned(), ink: Ink(vec![vec![(100, 500), (200, 400)], vec![(350, 450)]]) };
        let counterpart = Counterpart::Refused { name: "Mara Brandeis".to_owned(), reason: "disputes the weight".to_owned() };
        let person = Person {
            id: PersonId(Uuid::from_u128(4)),
            name: "Ada Quill".to_owned(),
            certificate: "F-17".to_owned(),
            certificate_kind: "608 universal".to_owned(),
            valid_from: None,
            valid_to: None,
            company: String::new(),
            company_certificate: String::new(),
        };
        ClosedVisit {
            visit: VisitFacts {
                id: VisitId(Uuid::from_u128(5)),
                site: SiteId(Uuid::from_u128(1)),
                date: day,
                minute: Some(492),
                time_zone: "America/New_York".to_owned(),
                begun: "2026-03-03T13:12:00Z".parse().unwrap(),
            },
            entries: entries(),
            cautions: vec![CautionSeen { caution: "1".to_owned(), on: None, at_minute: 493, person: None }],
            closing: Closing { closed, date: day, minute: 680, technician: signature, counterpart, handed_over: String::new() },
            site: site(),
            appliances: vec![appliance()],
            cylinders: vec![cylinder()],
            people: vec![person],
            paper: ServiceRecord {
                state: RecordState::Closed { on: day, at: "11:20".to_owned() },
                fingerprint: None,
                copy: 1,
                demonstration: false,
                program: "bubblepoint 0.1.0".to_owned(),
                rulebooks: Vec::new(),
                company: Party::default(),
                site: SiteText::default(),
                jobs: vec!["W-1187".to_owned()],
                first_day: day,
                last_day: day,
                people: Vec::new(),
                appliances: Vec::new(),
                cautions: Vec::new(),
                technician: None,
                counterparty: None,
                handed_over: String::new(),
                remarks: Vec::new(),
            },
        }
    }

    /// FROZEN. If this fails, the change must be undone, or become format 2:
    /// records of format 1 are in the hands of people who signed them.
    #[test]
    fn format_1_is_frozen() {
        let path = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/fixtures/closed-record-1");
        let closed = close(&visit()).unwrap();
        if std::env::var_os("BUBBLEPOINT_WRITE_GOLDEN").is_some() {
            std::fs::write(path, &closed.bytes).unwrap();
        }
        let kept = std::fs::read(path).unwrap();
        assert_eq!(String::from_utf8_lossy(&closed.bytes), String::from_utf8_lossy(&kept));
        assert_eq!(closed.fingerprint, FROZEN);
        assert_eq!(read_closed(&kept).unwrap(), visit());
    }

    const FROZEN: &str = "574d7e001c6ceb6726d568445c70bb42c23d148ea5b0de67d10af9c1fb4820b7";

    #[test]
    fn any_change_changes_the_fingerprint() {
        let mut changed = visit();
        changed.entries[0].minute = Some(581);
        assert_ne!(close(&changed).unwrap().fingerprint, close(&visit()).unwrap().fingerprint);
    }

    #[test]
    fn what_is_no_record_is_told() {
        assert_eq!(read_closed(b"{}"), Err(NotClosed::NoFormat));
        assert_eq!(read_closed(b"one\n{}"), Err(NotClosed::NoFormat));
        assert_eq!(read_closed(b"\xff\n{}"), Err(NotClosed::NoFormat));
        assert_eq!(read_closed(b"2\n{}"), Err(NotClosed::Newer(2)));
        assert!(matches!(read_closed(b"1\n{}"), Err(NotClosed::Unreadable(_))));
    }
}
