//! Entries of a cylinder's own book: what is done with it apart from any
//! appliance and any visit.

use super::{CylinderId, EntryId, GasStatus, Moment, PersonId, Position};
use crate::quantity::{Mass, Weighing};
use chrono::{DateTime, Utc};
use serde::{Deserialize, Serialize};

/// What was done.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum CylinderAct {
    /// Gas came from a supplier, in this cylinder or into it.
    Bought { refrigerant: String, status: GasStatus, mass: Mass },
    /// Weighed where it stands.
    Weighed,
    /// Gas went to a reclaimer or for destruction.
    SentAway { mass: Mass },
    /// The cylinder went back to its owner, with the heel that was in it.
    Returned { heel: Mass },
    /// Leaked or vented.
    Lost { mass: Mass },
    /// Takes back the entry that it strikes.
    Strike,
}

impl CylinderAct {
    /// The word for this act in files and on screen.
    pub const fn name(&self) -> &'static str {
        match self {
            Self::Bought { .. } => "bought",
            Self::Weighed => "weighed",
            Self::SentAway { .. } => "sent away",
            Self::Returned { .. } => "returned",
            Self::Lost { .. } => "lost",
            Self::Strike => "strike",
        }
    }

    /// Gas that came or went.
    pub const fn mass(&self) -> Option<Mass> {
        match self {
            Self::Bought { mass, .. } | Self::SentAway { mass } | Self::Returned { heel: mass } | Self::Lost { mass } => Some(*mass),
            Self::Weighed | Self::Strike => None,
        }
    }
}

/// An entry with all that was written down.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct CylinderEntry {
    pub id: EntryId,
    pub cylinder: CylinderId,
    /// On the device's clock.
    pub at: Moment,
    /// IANA name of the device's zone.
    pub time_zone: String,
    /// In the order of visits' entries and these together.
    pub position: Position,
    pub written: DateTime<Utc>,
    pub act: CylinderAct,
    /// The cylinder with its tare when it was over, where it was weighed.
    pub gross_after: Option<Mass>,
    pub division: Option<Mass>,
    pub strikes: Option<EntryId>,
    /// Struck by a later entry: shown struck through, left out of sums.
    pub struck_by: Option<EntryId>,
    pub detail: CylinderDetail,
}

/// All that was written down beside the figures; absent fields are left out of the stored text.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct CylinderDetail {
    #[serde(skip_serializing_if = "Option::is_none")]
    pub person: Option<PersonId>,
    /// The reading as typed.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub gross: Option<Weighing>,
    /// The mass as an invoice or consignment note says it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub stated: Option<Weighing>,
    /// Supplier, reclaimer, destruction plant, owner.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub party: String,
    /// `reclaimer` or `destruction`.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub destination: String,
    /// Number of an invoice or consignment note.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub paper: String,
    /// Certificate of the gas or of its buyer.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub certificate: String,
    /// Why gas was lost, an entry struck, or a rule gone past for a reason.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub reason: String,
    /// Why the gross differs from the last one known.
    #[serde(skip_serializing_if = "String::is_empty")]
    pub weighing_gap: String,
    #[serde(skip_serializing_if = "String::is_empty")]
    pub note: String,
}
