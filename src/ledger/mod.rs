//! The ledger: what exists (registers), what was done (entries of visits), and
//! the fold from entries to balances. Gas moves only by transfers.

mod balance;
mod cylinder_entry;
mod entry;
mod gaps;
mod leaks;
mod methods;
mod register;
mod registers;
mod visit;
mod words;

pub use balance::{Content, CylinderBalance, KnownGross, Movement, MovementKind, cylinder_balance, follow_cylinder};
pub use cylinder_entry::{CylinderAct, CylinderDetail, CylinderEntry};
pub use entry::{Act, CautionSeen, Detail, Entry, LeakPlace, Line, Moment, Position, Reading, Transfer, WeighingMode, by_appliance};
pub use gaps::{GAP_REASONS, GAP_UNKNOWN, open_gaps};
pub use leaks::{OpenLeak, open_leaks};
pub use methods::LeakMethod;
pub use register::{
    Appliance, ApplianceFacts, Company, Cylinder, CylinderFacts, Dated, Instrument, InstrumentKind, Person, ReadAt, Site, SiteFacts,
    Versions,
};
pub use registers::Registers;
pub use visit::{Closing, Counterpart, Ink, Signature, Visit, VisitState};
pub use words::{
    Category, ChargeMethod, ChargePurpose, CylinderKind, Equipment, GasStatus, RateMethod, RecoveryPurpose, Scope, TestKind, TestResult,
    UnknownWord,
};

use serde::{Deserialize, Serialize};
use std::fmt;
use uuid::Uuid;

macro_rules! ids {
    ($($(#[$doc:meta])* $name:ident;)*) => {$(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
        #[serde(transparent)]
        pub struct $name(pub Uuid);

        impl fmt::Display for $name {
            fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
                self.0.fmt(f)
            }
        }
    )*};
}

ids! {
    /// A site.
    SiteId;
    /// An appliance: one independent circuit.
    ApplianceId;
    /// A cylinder.
    CylinderId;
    /// A person who does or signs work.
    PersonId;
    /// A scale, detector, gauge, recovery machine or hose set.
    InstrumentId;
    /// A visit.
    VisitId;
    /// An entry of a visit, or of a cylinder's own book.
    EntryId;
}
