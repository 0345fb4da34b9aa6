//! The desk: what the window is about. It holds the store's use cases, the
//! page that is shown, the open visit and what is being typed.
//!
//! The window sends messages and reads view models; it decides nothing.

use super::shown::Message;
use super::visit::{
    self, Panel, Work, begin, cautions, charge, choose_appliance, choose_cylinder, close, closed, entry, facts, leak_test, note, page,
    pressure, recover, repair, when,
};
use super::words;
use crate::app::{App, AppError};
use crate::ledger::{Registers, SiteId};
use std::path::{Path, PathBuf};

/// The pages of the window.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, Hash)]
pub enum Page {
    #[default]
    Due,
    Plant,
    Cylinders,
    Account,
    Setup,
    Visit,
    Closed,
}

/// Hands a file or folder to the platform.
pub type Open = Box<dyn Fn(&Path) -> Result<(), String>>;

/// What the desk needs of the machine.
pub struct DeskOptions {
    /// The folder for documents; records go to `Bubblepoint` in it.
    pub documents: PathBuf,
    pub open: Open,
}

/// Everything that can be done in the visit, screen by screen.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    /// Back by one step: closes an open action first, then leaves the page.
    Back,
    PutMessageAway,
    Begin(begin::Msg),
    Visit(page::Msg),
    Facts(facts::Msg),
    ChooseAppliance(choose_appliance::Msg),
    Cautions(cautions::Msg),
    ChooseCylinder(choose_cylinder::Msg),
    When(when::Msg),
    Charge(charge::Msg),
    Recover(recover::Msg),
    LeakTest(leak_test::Msg),
    Repair(repair::Msg),
    Pressure(pressure::Msg),
    Note(note::Msg),
    Entry(entry::Msg),
    Close(close::Msg),
    Closed(closed::Msg),
}

/// See the module.
pub struct Desk {
    pub(super) app: App,
    pub(super) options: DeskOptions,
    /// As last read; read again after each change of a register.
    pub(super) registers: Registers,
    page: Page,
    message: Option<Message>,
    pub(super) panel: Panel,
    pub(super) begin: begin::State,
    pub(super) work: Option<Work>,
    pub(super) entry: Option<entry::State>,
    pub(super) closed: Option<closed::State>,
    changes: u64,
}

impl Desk {
    /// Opens the desk on a store, at the visit that is still open, if there is one.
    ///
    /// # Errors
    /// The store's own.
    pub fn new(app: App, options: DeskOptions) -> Result<Self, AppError> {
        let registers = app.store().registers()?;
        let mut desk = Self {
            app,
            options,
            registers,
            page: Page::default(),
            message: None,
            panel: Panel::None,
            begin: begin::State::default(),
            work: None,
            entry: None,
            closed: None,
            changes: 0,
        };
        desk.start()?;
        Ok(desk)
    }

    /// An open visit is offered again, with what was being typed; an empty store asks for its first site.
    fn start(&mut self) -> Result<(), AppError> {
        let open = self.app.store().open_visits()?;
        if let Some(visit) = open.iter().max_by_key(|visit| visit.begun) {
            self.take_up(visit.id)?;
            if self.panel != Panel::None {
                let site = self.site_name(visit.site);
                self.say(Message::told(words::taken_up_again(&site)));
            }
            return Ok(());
        }
        self.start_page()
    }

    /// Where one is when nothing is open.
    pub(super) fn start_page(&mut self) -> Result<(), AppError> {
        if self.registers.sites.is_empty() {
            return self.ask_where();
        }
        self.go(Page::Due);
        Ok(())
    }

    pub fn app(&self) -> &App {
        &self.app
    }

    /// Where records, accounts and backups are written.
    pub fn documents(&self) -> PathBuf {
        self.options.documents.join("Bubblepoint")
    }

    /// Hands a file or folder to the platform.
    ///
    /// # Errors
    /// The platform's own words.
    pub fn open_with_platform(&self, path: &Path) -> Result<(), String> {
        (self.options.open)(path)
    }

    pub fn registers(&self) -> &Registers {
        &self.registers
    }

    /// Reads the registers again, after one was changed.
    ///
    /// # Errors
    /// The store's own.
    pub fn reload_registers(&mut self) -> Result<(), AppError> {
        self.registers = self.app.store().registers()?;
        self.changed();
        Ok(())
    }

    /// Counts what was written: a page that was shown at the same count is still right.
    pub fn changes(&self) -> u64 {
        self.changes
    }

    pub fn changed(&mut self) {
        self.changes += 1;
    }

    pub fn page(&self) -> Page {
        self.page
    }

    /// Shows a page. The visit keeps what is open in it.
    pub fn go(&mut self, page: Page) {
        self.page = page;
    }

    pub fn panel(&self) -> Panel {
        self.panel
    }

    /// The site of the visit that is under way.
    pub fn site_at_work(&self) -> Option<SiteId> {
        self.work.as_ref().map(|work| work.visit.site)
    }

    pub fn message(&self) -> Option<&Message> {
        self.message.as_ref()
    }

    /// Says something until it is put away.
    pub fn say(&mut self, message: Message) {
        self.message = Some(message);
    }

    /// Tells a failure, whatever it is, as a sentence.
    pub fn tell(&mut self, outcome: Result<(), AppError>) {
        if let Err(error) = outcome {
            self.say(Message::grave(error.to_string()));
        }
    }

    pub(super) fn site_name(&self, site: SiteId) -> String {
        self.registers.site(site).map(|site| site.name.clone()).unwrap_or_default()
    }

    /// Does what was asked. A failure becomes a message; nothing typed is lost by it.
    pub fn update(&mut self, msg: Msg) {
        let outcome = match msg {
            Msg::Back => self.back(),
            Msg::PutMessageAway => {
                self.message = None;
                Ok(())
            }
            Msg::Begin(msg) => self.update_begin(msg),
            Msg::Visit(msg) => self.update_visit(msg),
            Msg::Facts(msg) => self.update_facts(msg),
            Msg::ChooseAppliance(msg) => self.update_choose_appliance(msg),
            Msg::Cautions(msg) => self.update_cautions(msg),
            Msg::ChooseCylinder(msg) => self.update_choose_cylinder(msg),
            Msg::When(msg) => self.update_when(msg),
            Msg::Charge(msg) => self.update_charge(msg),
            Msg::Recover(msg) => self.update_recover(msg),
            Msg::LeakTest(msg) => self.update_leak_test(msg),
            Msg::Repair(msg) => self.update_repair(msg),
            Msg::Pressure(msg) => self.update_pressure(msg),
            Msg::Note(msg) => self.update_note(msg),
            Msg::Entry(msg) => self.update_entry(msg),
            Msg::Close(msg) => self.update_close(msg),
            Msg::Closed(msg) => self.update_closed(msg),
        };
        self.tell(outcome);
    }

    /// Back by one step.
    fn back(&mut self) -> Result<(), AppError> {
        if self.page == Page::Closed {
            return self.update_closed(closed::Msg::Done);
        }
        if self.page != Page::Visit {
            return Ok(());
        }
        match self.panel {
            // Leaving the visit does not end it: it stays open and stands on top of Due.
            Panel::None | Panel::Begin => {
                self.panel = Panel::None;
                self.go(Page::Due);
                Ok(())
            }
            Panel::Entry => {
                let signing = self.entry.as_ref().is_some_and(|state| state.step == entry::Step::Correct && state.signatures.signing);
                let step = self.entry.as_ref().map(|state| (state.step, state.from));
                match step {
                    _ if signing => self.update_entry(entry::Msg::Signing(false)),
                    Some((entry::Step::Strike | entry::Step::Correct | entry::Step::Answer, _)) => {
                        self.update_entry(entry::Msg::Step(entry::Step::Read))
                    }
                    Some((entry::Step::Read, from)) => {
                        self.entry = None;
                        self.open_panel(Panel::None)?;
                        if self.work.is_none() || from != Page::Visit {
                            self.go(if from == Page::Visit { Page::Due } else { from });
                        }
                        Ok(())
                    }
                    None => self.open_panel(Panel::None),
                }
            }
            Panel::Close if self.work.as_ref().is_some_and(|work| work.close.signing) => self.update_close(close::Msg::Signing(false)),
            Panel::ChooseCylinder => self.back_from_cylinder(),
            Panel::When => self.update_when(when::Msg::Done),
            _ => self.open_panel(Panel::None),
        }
    }

    /// From the list of cylinders back to the act, where it has one already.
    fn back_from_cylinder(&mut self) -> Result<(), AppError> {
        let Some(work) = &self.work else { return self.open_panel(Panel::None) };
        let chosen = match work.next {
            Panel::Recover => work.recover.as_ref().and_then(|form| form.weighing.cylinder),
            _ => work.charge.as_ref().and_then(|form| form.weighing.cylinder),
        };
        let next = work.next;
        self.open_panel(if chosen.is_some() { next } else { visit::Panel::None })
    }

    /// The closing page went from its summary to the signatures, or back.
    pub fn take_over_signing(&mut self, signing: bool) {
        if self.work.as_ref().is_some_and(|work| work.close.signing != signing) {
            self.update(Msg::Close(close::Msg::Signing(signing)));
        }
    }

    /// The page of the closed visit opened its part for handing over.
    pub fn take_over_handing(&mut self, handing_over: bool) {
        if let Some(closed) = &mut self.closed {
            closed.handing_over = handing_over;
        }
    }

    /// Waits until every draft is on disk: before the program ends.
    pub fn flush(&mut self) {
        let outcome = self.app.flush_drafts();
        self.tell(outcome);
    }
}
