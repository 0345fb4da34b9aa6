//! Use cases, one function per thing a person does.
//!
//! Every rule for new entries is in [`refusals`]; window and commands ask the
//! same code. Clock and ids are passed in.

mod account;
mod account_file;
mod assessed;
mod clock;
mod closing;
mod cylinder_entries;
mod demonstration;
mod edits;
mod entries;
mod error;
mod file;
mod forms;
mod import;
mod inputs;
mod installation;
mod limits;
mod paper;
mod refusals;
mod service_record;
mod settings;
mod standing;
pub mod testing;
mod visits;
mod weighing;

pub use account_file::account_file_name;
pub use assessed::{assess_all, duty_calendar};
pub use clock::{Clock, FreshIds, IdSource, SystemClock};
pub use closing::{Correction, Ended};
pub use cylinder_entries::{Amount, CylinderWork, Destination, NewCylinderEntry, PreparedCylinderEntry};
pub use demonstration::{DemonstrationError, build_demonstration, demonstration_in_memory, may_become_demonstration};
pub use edits::{NewAppliance, NewSite};
pub use entries::Prepared;
pub use error::AppError;
pub use file::{file_away, write_whole};
pub use import::{ImportError, Imported, Remark};
pub use inputs::{
    ChargeInput, Common, GapAnswerInput, NewEntry, PressureInput, RecoverInput, RecycleInput, RepairInput, RetrofitInput, SimpleAct,
    TestInput,
};
pub use limits::LimitRules;
pub use paper::{KnownPrint, Printed, Recognised, fit};
pub use refusals::{Kind, Refusal, of_condition};
pub use settings::{Appearance, Look, Setting, Units, paper_name};
pub use standing::{ApplianceStanding, CylinderStanding, WeighingGap};
pub use visits::{OpenVisit, Unsaved};

use crate::ledger::{Moment, SiteFacts};
use crate::store::{DraftWriter, OpenMode, Store};
use chrono::{DateTime, NaiveDate, Timelike, Utc};
use chrono_tz::Tz;
use std::path::Path;
use uuid::Uuid;

/// Program and version, as closed records and `assess` name it.
pub const PROGRAM: &str = concat!("bubblepoint ", env!("CARGO_PKG_VERSION"));

/// Everything that acts on one store.
pub struct App {
    store: Store,
    /// `None` for a store in memory, whose drafts are written at once.
    drafts: Option<DraftWriter>,
    clock: Box<dyn Clock>,
    ids: Box<dyn IdSource>,
}

impl App {
    /// Opens the store at `path` with the machine's clock.
    ///
    /// # Errors
    /// The opening rules of [`Store::open`].
    pub fn open(path: &Path, mode: OpenMode) -> Result<Self, AppError> {
        Self::with(Store::open(path, mode)?, Box::new(SystemClock), Box::new(FreshIds))
    }

    /// # Errors
    /// When the drafts' own connection cannot be opened.
    pub fn with(store: Store, clock: Box<dyn Clock>, ids: Box<dyn IdSource>) -> Result<Self, AppError> {
        let drafts = store.path().is_some().then(|| DraftWriter::open(&store)).transpose()?;
        Ok(Self { store, drafts, clock, ids })
    }

    /// For reading, and for import.
    pub fn store(&self) -> &Store {
        &self.store
    }

    pub fn now(&self) -> DateTime<Utc> {
        self.clock.now()
    }

    /// Today where the device is.
    pub fn today(&self) -> NaiveDate {
        self.clock.now().with_timezone(&self.clock.zone()).date_naive()
    }

    /// A new id, as everything written here gets one.
    pub fn new_id(&self) -> Uuid {
        self.ids.fresh(self.clock.now())
    }

    /// The site's zone: its own, or where it has none the device's.
    pub fn zone_of(&self, site: &SiteFacts) -> Tz {
        site.time_zone.parse().unwrap_or_else(|_| self.clock.zone())
    }

    /// This moment on the clock of a zone.
    pub fn moment_in(&self, zone: Tz) -> Moment {
        let local = self.clock.now().with_timezone(&zone);
        let minute = u16::try_from(local.hour() * 60 + local.minute()).ok();
        Moment { date: local.date_naive(), minute }
    }
}
