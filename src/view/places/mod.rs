//! The five places: what each shows, and what a tap in it does.
//!
//! [`Office`] holds the state of all five. [`Office::update`] does what a
//! [`Msg`] asks and says where to go from there; each place's file has its
//! page as a view model of finished strings.

pub mod account;
pub mod appliance;
pub mod appliance_form;
pub mod cylinder;
pub mod cylinder_form;
pub mod cylinders;
pub mod due;
mod due_list;
mod form;
mod overview;
pub mod plant;
mod rates;
pub mod record;
pub mod setup;
pub mod setup_forms;
pub mod signing;
mod site;
pub mod site_form;
#[cfg(test)]
mod tests;

pub use form::Form;
pub use overview::{Judged, LifeState, OpenVisit, Overview};
pub use rates::{RateHistory, RateStep};
pub use site::SitePage;

use crate::app::{App, AppError};
pub use crate::app::{Look, Units};
use crate::ledger::{ApplianceId, EntryId, SiteId, VisitId};
use crate::view::shown::Message;
use crate::view::words;
use chrono::NaiveDate;
use std::path::{Path, PathBuf};
use uuid::Uuid;

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Place {
    #[default]
    Due,
    Plant,
    Cylinders,
    Account,
    Setup,
}

/// What was tapped, typed or found out.
#[derive(Debug)]
pub enum Msg {
    Go(Place),
    Back,
    /// A reading of the store has come in.
    Looked(Box<Overview>),
    Due(due::Msg),
    Plant(plant::Msg),
    Cylinders(cylinders::Msg),
    Account(account::Msg),
    Setup(setup::Msg),
    PutMessageAway,
}

/// Where to go next: what the places cannot do themselves.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Go {
    /// Begins work; without a site it is asked where.
    Begin {
        site: Option<SiteId>,
        appliance: Option<ApplianceId>,
    },
    Visit(VisitId),
    Entry(VisitId, EntryId),
    /// The store has changed, or time has passed: look through it again.
    Look,
    /// Hands a file or folder to the platform.
    Open(PathBuf),
    /// Colours and text size have changed.
    Appear(Look),
    /// Back from a place's first page.
    Leave,
    /// Another place has come to the front by itself.
    At(Place),
}

/// The next thing that a new user needs before the first visit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum First {
    Company,
    Person,
    Site,
    Appliance,
    Cylinder,
    Visit,
}

/// State of the five places.
#[derive(Debug)]
pub struct Office {
    pub place: Place,
    /// `None` until the store has been looked through.
    pub overview: Option<Overview>,
    pub units: Units,
    pub message: Option<Message>,
    pub due: due::State,
    pub plant: plant::State,
    pub cylinders: cylinders::State,
    pub account: account::State,
    pub setup: setup::State,
    pub today: NaiveDate,
    /// Where records, accounts and backups are written.
    pub documents: PathBuf,
    /// Each thing that is saved leads to the next that is needed.
    leading: bool,
}

impl Office {
    /// Reads settings; the rest of the store is looked through later ([`Go::Look`]).
    ///
    /// # Errors
    /// The store's own.
    pub fn new(app: &App, documents: &Path) -> Result<Self, AppError> {
        Ok(Self {
            place: Place::Due,
            overview: None,
            units: app.units()?,
            message: None,
            due: due::State::default(),
            plant: plant::State::default(),
            cylinders: cylinders::State::default(),
            account: account::State::default(),
            setup: setup::State::default(),
            today: app.today(),
            documents: documents.to_owned(),
            leading: false,
        })
    }

    /// Looks through the store here and now: for stores in memory and for tests.
    pub fn look(&mut self, app: &App) {
        match Overview::read(app.store(), app.now(), app.today()) {
            Ok(overview) => self.take(app, overview),
            Err(error) => self.fail(&error),
        }
    }

    fn take(&mut self, app: &App, overview: Overview) {
        self.today = app.today();
        self.overview = Some(overview);
        self.refresh_cylinders(app);
        self.refresh_pages(app);
    }

    pub fn update(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::Go(place) => {
                self.place = place;
                self.leading = false;
                match place {
                    Place::Account => self.refresh_account(app),
                    Place::Setup => self.refresh_store_facts(app),
                    _ => {}
                }
                vec![Go::Look]
            }
            Msg::Looked(overview) => {
                self.take(app, *overview);
                Vec::new()
            }
            Msg::Back => self.back(),
            Msg::PutMessageAway => {
                self.message = None;
                Vec::new()
            }
            Msg::Due(msg) => self.update_due(app, msg),
            Msg::Plant(msg) => self.update_plant(app, msg),
            Msg::Cylinders(msg) => self.update_cylinders(app, msg),
            Msg::Account(msg) => self.update_account(app, msg),
            Msg::Setup(msg) => self.update_setup(app, msg),
        }
    }

    fn back(&mut self) -> Vec<Go> {
        self.leading = false;
        let moved = match self.place {
            Place::Due => self.due.open.take().is_some(),
            Place::Plant => self.plant.back(),
            Place::Cylinders => self.cylinders.back(),
            Place::Account => false,
            Place::Setup => self.setup.back(),
        };
        if moved { Vec::new() } else { vec![Go::Leave] }
    }

    pub(super) fn fail(&mut self, error: &dyn std::fmt::Display) {
        self.message = Some(Message::grave(words::sentence(&error.to_string())));
    }

    fn tell(&mut self, outcome: Result<(), AppError>) {
        if let Err(error) = outcome {
            self.fail(&error);
        }
    }

    /// What was being typed in the form of this name; a form that changes something known, and one
    /// of which nothing is kept, stay as they are.
    fn taken_up(&mut self, app: &App, name: &str, form: Form) -> Form {
        if form.changing {
            return form;
        }
        Form::kept(app, name, form.clone()).unwrap_or_else(|error| {
            self.fail(&error);
            form
        })
    }

    fn forget(&mut self, app: &App, name: &str) {
        let forgotten = app.forget_form(name);
        self.tell(forgotten);
    }

    pub(super) fn say(&mut self, text: String) {
        self.message = Some(Message::told(text));
    }

    /// Says what went wrong at the field it went wrong with, where the form has that field.
    fn fault(&mut self, error: AppError, form: impl FnOnce(&mut Self) -> &mut Form, fields: &[(&str, &str)]) {
        if let AppError::Input { field, sentence } = &error
            && let Some((_, own)) = fields.iter().find(|(known, _)| known == field)
        {
            form(self).wrong(own, sentence.clone());
            return;
        }
        self.fail(&error);
    }

    /// What a new user needs next; [`First::Visit`] when all is there. Where
    /// there is a site and someone to work, a visit can begin: it takes in
    /// appliances and cylinders on the spot.
    pub fn first(&self) -> First {
        let Some(registers) = self.overview.as_ref().map(|overview| &overview.registers) else { return First::Visit };
        if !self.leading && !registers.sites.is_empty() && !registers.people.is_empty() {
            First::Visit
        } else if registers.company.is_none() {
            First::Company
        } else if registers.people.is_empty() {
            First::Person
        } else if registers.sites.is_empty() {
            First::Site
        } else if registers.appliances.is_empty() {
            First::Appliance
        } else if registers.cylinders.is_empty() {
            First::Cylinder
        } else {
            First::Visit
        }
    }

    /// Opens the form of what is needed next.
    fn lead(&mut self, app: &App) -> Vec<Go> {
        self.leading = true;
        match self.first() {
            First::Company => {
                self.place = Place::Setup;
                self.update_setup(app, setup::Msg::Open(setup::Pane::Company))
            }
            First::Person => {
                self.place = Place::Setup;
                self.update_setup(app, setup::Msg::Open(setup::Pane::People));
                self.update_setup(app, setup::Msg::Add)
            }
            First::Site => {
                self.place = Place::Plant;
                self.update_plant(app, plant::Msg::AddSite)
            }
            First::Appliance => {
                self.place = Place::Plant;
                self.update_plant(app, plant::Msg::AddAppliance)
            }
            First::Cylinder => {
                self.place = Place::Cylinders;
                self.update_cylinders(app, cylinders::Msg::Add)
            }
            First::Visit => {
                self.leading = false;
                self.place = Place::Due;
                vec![Go::Begin { site: None, appliance: None }]
            }
        }
    }

    /// After something was written: look again, and on a first start go on to the next thing.
    fn written(&mut self, app: &App) -> Vec<Go> {
        self.message = None;
        let led = self.leading;
        self.look_if_quick(app);
        if led {
            // What was just written counts also where the worker has not come back yet.
            if let (Some(overview), Ok(registers)) = (&mut self.overview, app.store().registers()) {
                overview.registers = registers;
            }
            if self.first() == First::Visit {
                self.leading = false;
                self.place = Place::Due;
            } else {
                let mut go = self.lead(app);
                go.push(Go::Look);
                return go;
            }
        }
        vec![Go::Look]
    }

    /// A store in memory has no second connection: it is read at once.
    fn look_if_quick(&mut self, app: &App) {
        if app.store().path().is_none() {
            self.look(app);
        }
    }
}

/// The id in a row's key.
fn id(key: &str) -> Option<Uuid> {
    key.parse().ok()
}
