//! Entries: the lines of a visit. An entry has a lean part, [`Line`], which is
//! all that sums, rates and duties read, and a full part, [`Detail`], which
//! paper and screens print.

use super::{
    ApplianceId, ChargePurpose, CylinderId, EntryId, GasStatus, InstrumentId, PersonId, RecoveryPurpose, Scope, TestKind, TestResult,
    VisitId,
};
use crate::quantity::{Mass, Weighing};
use chrono::{DateTime, NaiveDate, Utc};
use serde::{Deserialize, Serialize};
use std::collections::HashMap;
use std::sync::Arc;

/// When, on the site's own clock.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub struct Moment {
    pub date: NaiveDate,
    /// Minute of the day; `None` where history does not say.
    pub minute: Option<u16>,
}

/// The order in which entries were written; later is larger.
pub type Position = i64;

/// What rates, duties and balances need of an entry.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Line {
    pub entry: EntryId,
    pub appliance: ApplianceId,
    pub at: Moment,
    pub position: Position,
    /// Order number or name that ties entries on an appliance together.
    pub job: Option<Arc<str>>,
    pub act: Act,
}

/// Lines by appliance, each in the order in which they came.
pub fn by_appliance(lines: Vec<Line>) -> HashMap<ApplianceId, Vec<Line>> {
    let mut by_appliance: HashMap<ApplianceId, Vec<Line>> = HashMap::new();
    for line in lines {
        by_appliance.entry(line.appliance).or_default().push(line);
    }
    by_appliance
}

/// What an entry says was done.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(tag = "act", rename_all = "kebab-case")]
pub enum Act {
    /// Gas added to the appliance.
    Charge {
        purpose: ChargePurpose,
        transfer: Transfer,
    },
    /// Gas taken out of the appliance.
    Recover {
        purpose: RecoveryPurpose,
        transfer: Transfer,
    },
    /// A cylinder's whole recovered content turned into recycled gas.
    Recycle {
        cylinder: Option<CylinderId>,
    },
    /// A leak test, leak inspection or verification test.
    Test {
        kind: TestKind,
        result: Option<TestResult>,
        scope: Option<Scope>,
        /// The note begins with `partial`: not all identified leaks were tested.
        partial: bool,
        /// Hundredths of an hour that the appliance ran since the repair.
        running_hundredths: Option<i64>,
    },
    Repair {
        /// Not for good: meets no duty.
        temporary: bool,
    },
    /// Back to normal operating characteristics and conditions.
    NormalOperation,
    DetectionSystemCheck,
    Mothball,
    /// What is not named stays as it was.
    Retrofit {
        refrigerant: Option<String>,
        full_charge: Option<Mass>,
    },
    Retire,
    PlanMade,
    ReportSent,
    Note,
}

/// A mass known by weighing.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub struct Transfer {
    /// Always above zero.
    pub mass: Mass,
    pub cylinder: Option<CylinderId>,
    /// The scale's division; `None`: the error is unknown.
    pub division: Option<Mass>,
    /// What hoses that were not emptied can hold; zero when emptied.
    pub hoses: Mass,
}

/// An entry with all that was written down.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Entry {
    pub line: Line,
    pub visit: VisitId,
    /// The instant it was written; for imported history the instant of import.
    pub written: DateTime<Utc>,
    /// The entry that this one strikes, or corrects.
    pub strikes: Option<EntryId>,
    /// Struck by a later entry: shown struck through, left out of sums.
    pub struck_by: Option<EntryId>,
    pub detail: Detail,
}

/// How the two readings of a transfer were taken.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
pub enum WeighingMode {
    /// Gross before, gross after.
    #[serde(rename = "gross")]
    Gross,
    /// Zeroed: reading at start, reading at end.
    #[serde(rename = "zeroed")]
    Zeroed,
    /// Imported history: the net alone.
    #[serde(rename = "net only")]
    NetOnly,
}

/// The readings of a transfer as typed.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Reading {
    pub mode: WeighingMode,
    /// Absent in net-only history.
    pub before: Option<Weighing>,
    pub after: Option<Weighing>,
    /// Net as typed, in net-only history.
    pub net: Option<Weighing>,
    pub scale: Option<InstrumentId>,
}

/// A place where a leak was found.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct LeakPlace {
    pub place: String,
    /// `isolated`, `section shut`, `repaired temporarily` or empty.
    pub state: String,
}

/// A caution that was shown and acknowledged before the act.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct CautionSeen {
    /// Which caution, as numbered in the catalogue of cautions.
    pub caution: String,
    /// Site's local date; `None` in visits of earlier programs: the visit's first day.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub on: Option<NaiveDate>,
    pub at_minute: u16,
    /// Who acknowledged it; `None` in visits of earlier programs: who began the visit.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub person: Option<PersonId>,
}

/// All that was written down beside the lean part. Absent fields are left out
/// of the stored text, so that a note costs a few bytes.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct Detail {
    #[serde(skip_serializing_if = "Option::is_none")]
    pub person: Option<PersonId>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reading: Option<Reading>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub gas_status: Option<GasStatus>,
    /// Reclaimed or recycled gas: facility, address, batch, certificate.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub gas_source: String,
    /// `liquid` or `vapour`.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub phase: String,
    /// Short of the full charge by about this much, as typed.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub short_by: Option<Weighing>,
    /// The earlier charge whose leak this is.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub same_leak_as: Option<EntryId>,
    #[serde(skip_serializing_if = "String::is_empty")]
    pub method: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub instrument: Option<InstrumentId>,
    /// Parts looked at or worked on.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub parts: String,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub leaks: Vec<LeakPlace>,
    /// The place of a repair or test.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub place: String,
    /// The repair that a verification test tests.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub repair: Option<EntryId>,
    /// Running hours as typed.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub running_hours: String,
    /// Evacuation or recovery level reached, as typed with its unit.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub level_reached: String,
    #[serde(skip_serializing_if = "String::is_empty")]
    pub note: String,
    /// A reason where the law leaves room for judgement, or for a correction.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub reason: String,
    /// Why today's first gross differs from the last one known.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub weighing_gap: String,
    /// The entry whose weighing gap this one explains.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub answers: Option<EntryId>,
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub cautions: Vec<CautionSeen>,
    /// Imported history: file and line.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub imported_from: String,
    /// Retrofit: the new full charge as written.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub new_full_charge: Option<Weighing>,
}

impl Act {
    /// The word for this act in files and on screen.
    pub fn name(&self) -> &'static str {
        match self {
            Self::Charge { .. } => "charge",
            Self::Recover { .. } => "recover",
            Self::Recycle { .. } => "recycle",
            Self::Test { kind, .. } => kind.name(),
            Self::Repair { .. } => "repair",
            Self::NormalOperation => "normal operation",
            Self::DetectionSystemCheck => "detection system check",
            Self::Mothball => "mothball",
            Self::Retrofit { .. } => "retrofit",
            Self::Retire => "retire",
            Self::PlanMade => "plan made",
            Self::ReportSent => "report sent",
            Self::Note => "note",
        }
    }

    /// The cylinder that gas came from or went into.
    pub fn cylinder(&self) -> Option<CylinderId> {
        match self {
            Self::Recycle { cylinder } => *cylinder,
            other => other.transfer().and_then(|transfer| transfer.cylinder),
        }
    }

    /// The mass moved, for charges and recoveries.
    pub fn transfer(&self) -> Option<&Transfer> {
        match self {
            Self::Charge { transfer, .. } | Self::Recover { transfer, .. } => Some(transfer),
            _ => None,
        }
    }
}
