//! A visit: its page, its actions, its closing.

pub mod begin;
pub mod cautions;
pub mod charge;
pub mod choose_appliance;
pub mod choose_cylinder;
pub mod close;
pub mod closed;
pub mod correction;
pub mod entry;
pub mod facts;
#[cfg(test)]
mod flows;
mod judging;
pub mod leak_test;
pub mod note;
pub mod page;
pub mod pressure;
pub mod recover;
pub mod repair;
pub mod weighing;
pub mod when;

pub use judging::{Judging, duty_due, duty_line, judge};

use super::desk::Desk;
use crate::app::{AppError, OpenVisit};
use crate::ledger::{ApplianceId, CautionSeen, Entry, InstrumentKind, PersonId, Visit};
use crate::record::CautiousAct;
use crate::view::{format, shown, words};
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// What is open beside the visit, or on a phone over it.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Hash, Serialize, Deserialize)]
pub enum Panel {
    #[default]
    None,
    Begin,
    Facts,
    ChooseAppliance,
    Cautions,
    ChooseCylinder,
    /// When an entry was made, and by whom.
    When,
    Charge,
    Recover,
    LeakTest,
    Repair,
    Pressure,
    Note,
    Entry,
    Close,
}

impl Panel {
    /// The acts that cautions come before.
    fn cautious(self) -> Option<CautiousAct> {
        match self {
            Self::Charge => Some(CautiousAct::Charge),
            Self::Recover => Some(CautiousAct::Recover),
            Self::LeakTest => Some(CautiousAct::LeakTest),
            Self::Repair => Some(CautiousAct::Repair),
            Self::Pressure => Some(CautiousAct::Pressure),
            _ => None,
        }
    }

    /// Something is typed here that a draft keeps.
    fn has_form(self) -> bool {
        matches!(self, Self::Charge | Self::Recover | Self::LeakTest | Self::Repair | Self::Pressure | Self::Note | Self::Close)
    }

    fn acts_on_an_appliance(self) -> bool {
        self.has_form() && self != Self::Close
    }

    /// What is asked here is asked about the appliance in hand: nothing of it stays when another is taken.
    fn speaks_of_an_appliance(self) -> bool {
        self.acts_on_an_appliance() || matches!(self, Self::Cautions | Self::ChooseCylinder | Self::When)
    }

    /// The key of its draft; the same as the action of the entry it becomes.
    fn action(self) -> &'static str {
        match self {
            Self::Charge => "charge",
            Self::Recover => "recover",
            Self::LeakTest => "leak test",
            Self::Repair => "repair",
            Self::Pressure => "pressure",
            Self::Note => "note",
            Self::Close => "close",
            _ => "place",
        }
    }
}

/// The open visit, what is on disk of it and what is being typed.
#[derive(Debug)]
pub struct Work {
    pub visit: Visit,
    pub entries: Vec<Entry>,
    pub cautions: Vec<CautionSeen>,
    pub place: WorkPlace,
    /// Where cautions or a choice lead to.
    pub next: Panel,
    pub choose_appliance: choose_appliance::State,
    pub choose_cylinder: choose_cylinder::State,
    pub charge: Option<charge::Form>,
    pub recover: Option<recover::Form>,
    pub leak_test: Option<leak_test::Form>,
    pub repair: Option<repair::Form>,
    pub pressure: Option<pressure::Form>,
    pub note: Option<note::Form>,
    pub close: close::Form,
}

/// Where in the visit one is; kept as a draft of its own.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct WorkPlace {
    pub appliance: Option<ApplianceId>,
    /// Appliances taken up, in order; those with entries come in anyway.
    pub taken_up: Vec<ApplianceId>,
    pub panel: Panel,
    pub job: String,
    /// Whoever was named last as the one who does what is entered.
    pub person: Option<PersonId>,
    /// Days and times said for what is being filled in; without one it is now.
    pub said: Vec<when::Said>,
}

impl Work {
    /// Takes up an open visit with everything that was being typed.
    fn of(open: OpenVisit) -> Self {
        // A draft that this program cannot read is left aside; it is no fact yet.
        fn form<T: for<'de> Deserialize<'de>>(open: &OpenVisit, panel: Panel) -> Option<T> {
            let draft = open.drafts.iter().find(|draft| draft.action == panel.action())?;
            serde_json::from_str(&draft.body).ok()
        }
        let mut place: WorkPlace = form(&open, Panel::None).unwrap_or_default();
        if place.appliance.is_none() {
            place.appliance = open.entries.last().map(|entry| entry.line.appliance);
        }
        if place.job.is_empty() {
            place.job = open.entries.last().and_then(|entry| entry.line.job.as_deref()).unwrap_or_default().to_owned();
        }
        Self {
            charge: form(&open, Panel::Charge),
            recover: form(&open, Panel::Recover),
            leak_test: form(&open, Panel::LeakTest),
            repair: form(&open, Panel::Repair),
            pressure: form(&open, Panel::Pressure),
            note: form(&open, Panel::Note),
            close: form(&open, Panel::Close).unwrap_or_default(),
            choose_appliance: choose_appliance::State::default(),
            choose_cylinder: choose_cylinder::State::default(),
            next: Panel::None,
            place,
            visit: open.visit,
            entries: open.entries,
            cautions: open.cautions,
        }
    }

    /// The appliances of the visit in the order in which they were taken up.
    pub fn appliances(&self) -> Vec<ApplianceId> {
        let mut all: Vec<ApplianceId> = Vec::new();
        for id in self.place.taken_up.iter().copied().chain(self.entries.iter().map(|entry| entry.line.appliance)) {
            if !all.contains(&id) {
                all.push(id);
            }
        }
        all
    }

    /// Entries that are shown: a strike is said at the entry that it strikes.
    pub fn entries_of(&self, appliance: ApplianceId) -> Vec<&Entry> {
        let own = self.entries.iter().filter(|entry| entry.line.appliance == appliance);
        let mut own: Vec<&Entry> = own.filter(|entry| entry.strikes.is_none()).collect();
        own.sort_by_key(|entry| (entry.line.at, entry.line.position));
        own
    }
}

impl Desk {
    /// The open visit; acts without one say so.
    pub(super) fn work(&self) -> Result<&Work, AppError> {
        self.work.as_ref().ok_or(AppError::Unknown { what: "open visit" })
    }

    pub(super) fn work_mut(&mut self) -> Result<&mut Work, AppError> {
        self.work.as_mut().ok_or(AppError::Unknown { what: "open visit" })
    }

    pub(super) fn appliance_in_hand(&self) -> Result<ApplianceId, AppError> {
        self.work()?.place.appliance.ok_or(AppError::Unknown { what: "appliance in this visit" })
    }

    /// Today at the site of the open visit.
    pub(super) fn today_there(&self) -> Result<NaiveDate, AppError> {
        self.app.today_at(self.work()?.visit.id)
    }

    /// Goes into a visit that is open.
    ///
    /// # Errors
    /// Unknown visit; the store's own.
    pub fn take_up(&mut self, visit: crate::ledger::VisitId) -> Result<(), AppError> {
        self.reload_registers()?;
        let work = Work::of(self.app.visit(visit)?);
        self.panel = if work.place.panel.has_form() { work.place.panel } else { Panel::None };
        self.work = Some(work);
        self.changed();
        self.go(super::desk::Page::Visit);
        Ok(())
    }

    /// Reads again what is on disk of the visit.
    pub(super) fn reload_visit(&mut self) -> Result<(), AppError> {
        let id = self.work()?.visit.id;
        let open = self.app.visit(id)?;
        let work = self.work_mut()?;
        work.visit = open.visit;
        work.entries = open.entries;
        work.cautions = open.cautions;
        self.changed();
        Ok(())
    }

    /// Opens a panel and remembers it for the next start.
    pub(super) fn open_panel(&mut self, panel: Panel) -> Result<(), AppError> {
        self.panel = panel;
        let Some(work) = &mut self.work else { return Ok(()) };
        let shown = if panel == Panel::When { work.next } else { panel };
        let kept = if shown.has_form() { shown } else { Panel::None };
        if work.place.panel != kept {
            work.place.panel = kept;
            self.keep_place()?;
        }
        Ok(())
    }

    pub(super) fn keep_place(&self) -> Result<(), AppError> {
        self.keep(Panel::None, &self.work()?.place)
    }

    /// Keeps what is being typed, at once.
    pub(super) fn keep<T: Serialize>(&self, panel: Panel, form: &T) -> Result<(), AppError> {
        // Forms are plain words and figures: they always can be written.
        let Ok(body) = serde_json::to_string(form) else { return Ok(()) };
        let work = self.work()?;
        let appliance = work.place.appliance.filter(|_| panel.acts_on_an_appliance());
        self.app.save_draft(work.visit.id, appliance, panel.action(), &body)
    }

    /// Opens an action: first its appliance, then its cautions, then its cylinder.
    pub(super) fn ask(&mut self, panel: Panel) -> Result<(), AppError> {
        if panel.acts_on_an_appliance() && self.work()?.place.appliance.is_none() {
            self.work_mut()?.next = panel;
            return self.open_panel(Panel::ChooseAppliance);
        }
        match panel {
            Panel::ChooseAppliance => {
                let work = self.work_mut()?;
                work.next = Panel::None;
                work.choose_appliance = choose_appliance::State::default();
                self.open_panel(panel)
            }
            Panel::Charge | Panel::Recover | Panel::LeakTest | Panel::Repair | Panel::Pressure => {
                self.work_mut()?.next = panel;
                if self.unacknowledged(panel)? { self.open_panel(Panel::Cautions) } else { self.begin_act(panel) }
            }
            Panel::Note => self.begin_act(panel),
            Panel::Close => {
                self.prepare_close()?;
                self.open_panel(panel)
            }
            other => self.open_panel(other),
        }
    }

    /// Opens an action whose cautions are acknowledged.
    pub(super) fn begin_act(&mut self, panel: Panel) -> Result<(), AppError> {
        match panel {
            Panel::Charge => self.begin_charge(),
            Panel::Recover => self.begin_recovery(),
            Panel::LeakTest => self.begin_leak_test(),
            Panel::Repair => self.begin_repair(),
            Panel::Pressure => self.begin_pressure(),
            Panel::Note => self.begin_note(),
            other => self.open_panel(other),
        }
    }

    /// The entry is on disk: the page shows it, the form is gone, and the next one is made now.
    pub(super) fn entered(&mut self, panel: Panel, appliance: ApplianceId) -> Result<(), AppError> {
        self.work_mut()?.forget_said(panel, appliance);
        self.keep_place()?;
        self.reload_visit()?;
        self.open_panel(Panel::None)
    }

    /// `R-1, R-22, 45.36 kg`: the appliance in hand.
    pub(super) fn appliance_words(&self) -> Result<String, AppError> {
        let standing = self.app.appliance_standing(self.appliance_in_hand()?, self.today_there()?)?;
        Ok(words::appliance(&standing.appliance.name, &standing.facts.refrigerant, &format::full_charge(&standing.facts)))
    }

    /// Instruments of a kind, as choices with what their check says.
    pub(super) fn instruments(&self, kind: InstrumentKind, today: NaiveDate) -> Vec<shown::Choice> {
        let of_kind = self.registers.instruments.iter().filter(|instrument| instrument.kind == kind);
        of_kind
            .map(|instrument| {
                let check = match (instrument.check_due.filter(|due| *due < today), instrument.checked_on) {
                    (Some(due), _) => words::check_overdue(&format::day(due, today)),
                    (None, Some(on)) => words::checked(&format::day(on, today)),
                    (None, None) => String::new(),
                };
                let division = instrument.division.as_ref().map(crate::quantity::Weighing::text).unwrap_or_default();
                shown::Choice::new(instrument.id.to_string(), &instrument.name, format::commas([&*division, &*check]))
            })
            .collect()
    }
}

/// The id that a key of a row or choice stands for.
pub(super) fn id<T>(key: &str, of: impl FnOnce(uuid::Uuid) -> T) -> Option<T> {
    uuid::Uuid::parse_str(key).ok().map(of)
}
