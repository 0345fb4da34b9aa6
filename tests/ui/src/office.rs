//! The five places on a real store.

use crate::window::{Size, open, settle};
use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{App, demonstration_in_memory};
use bubblepoint::gui::places::{Out, Places, WithApp};
use bubblepoint::store::Store;
use bubblepoint::view::places::plant::Msg as Plant;
use bubblepoint::view::places::setup::{Msg as Setup, Pane};
use bubblepoint::view::places::{Go, Look, Msg, Office, Place, account, cylinders, due};
use bubblepoint_ui::{AppWindow, Appearance, Page, Shell};
use chrono_tz::Tz;
use slint::ComponentHandle;
use std::cell::RefCell;
use std::path::Path;
use std::rc::Rc;

/// A window on the places of one store.
pub struct OfficeWindow {
    pub window: AppWindow,
    pub places: Rc<Places>,
    pub app: Rc<App>,
    /// Where the places sent whoever tapped.
    pub gone: Rc<RefCell<Vec<Go>>>,
}

/// The demonstration as of 1 April 2026.
///
/// # Panics
/// When it cannot be built: it is made of nothing but this program.
pub fn demonstration() -> Rc<App> {
    let today = "2026-04-01".parse().expect("a day");
    Rc::new(demonstration_in_memory(today, Tz::America__New_York).expect("the demonstration can be built"))
}

/// A store in which nothing has been written yet.
///
/// # Panics
/// When SQLite gives no memory.
pub fn empty() -> Rc<App> {
    let clock = SetClock::at("2026-04-01T13:00:00Z".parse().expect("an instant"), Tz::America__New_York);
    let store = Store::in_memory().expect("a store in memory");
    Rc::new(App::with(store, Box::new(clock), Box::new(CountedIds::after(1))).expect("use cases"))
}

/// Opens the places as they were last set up in the store.
pub fn office(app: &Rc<App>, size: Size, documents: &Path) -> OfficeWindow {
    let look = Look::read(app).expect("settings can be read");
    office_as(app, size, look, documents)
}

/// Opens the places in these colours and this size of text.
///
/// # Panics
/// When the store cannot be read.
pub fn office_as(app: &Rc<App>, size: Size, look: Look, documents: &Path) -> OfficeWindow {
    let window = open(size, Appearance::Light, 1.0);
    window.global::<Shell>().set_page(Page::Due);
    let lent = Rc::clone(app);
    let with_app: WithApp = Rc::new(move |act| act(&lent));
    let gone = Rc::new(RefCell::new(Vec::new()));
    let seen = Rc::clone(&gone);
    let out: Out = Rc::new(move |_, go| seen.borrow_mut().push(go));
    let office = Office::new(app, documents).expect("the store can be read");
    let places = Places::open(&window, office, look, with_app, out);
    places.appear(&window);
    places.take_shell(&window);
    settle();
    OfficeWindow { window, places, app: Rc::clone(app), gone }
}

/// One page of the places, reached by messages.
#[derive(Clone, Copy)]
pub struct OfficePage {
    pub name: &'static str,
    pub reach: fn(&OfficeWindow),
}

impl OfficeWindow {
    pub fn tell(&self, msg: Msg) {
        self.places.update(msg);
    }

    fn appliance(&self, name: &str) {
        self.tell(Msg::Go(Place::Plant));
        let key = self.places.office().plant_page().lines.into_iter().find(|row| row.name == name).map(|row| row.key);
        self.tell(Msg::Plant(Plant::Open(key.unwrap_or_default())));
    }

    /// The appliance with the longest line of rates.
    fn busiest(&self) -> String {
        let office = self.places.office();
        let overview = office.overview.as_ref().expect("the store was looked through");
        let rates = |judged: &bubblepoint::view::places::Judged| judged.foremost().map_or(0, |judgement| judgement.rates.len());
        overview.appliances.iter().max_by_key(|judged| rates(judged)).map(|judged| judged.appliance.name.clone()).unwrap_or_default()
    }

    fn setup(&self, pane: Pane) {
        self.tell(Msg::Go(Place::Setup));
        self.tell(Msg::Setup(Setup::Open(pane)));
    }
}

/// Every page of the places that a store fills.
pub const OFFICE_PAGES: &[OfficePage] = &[
    OfficePage { name: "office-due", reach: |o| o.tell(Msg::Go(Place::Due)) },
    OfficePage {
        name: "office-due-item",
        reach: |o| {
            o.tell(Msg::Go(Place::Due));
            let key = o.places.office().due_page().lines.into_iter().find(|row| !row.heading).map(|row| row.key);
            o.tell(Msg::Due(due::Msg::Open(key.unwrap_or_default())));
        },
    },
    OfficePage { name: "office-plant", reach: |o| o.tell(Msg::Go(Place::Plant)) },
    OfficePage {
        name: "office-site",
        reach: |o| {
            o.tell(Msg::Go(Place::Plant));
            let key = o.places.office().plant_page().lines.into_iter().find(|row| row.heading).map(|row| row.key);
            o.tell(Msg::Plant(Plant::Open(key.unwrap_or_default())));
        },
    },
    OfficePage {
        name: "office-appliance",
        reach: |o| {
            let name = o.busiest();
            o.appliance(&name);
        },
    },
    OfficePage {
        name: "office-appliance-change",
        reach: |o| {
            let name = o.busiest();
            o.appliance(&name);
            o.tell(Msg::Plant(Plant::EditAppliance));
        },
    },
    OfficePage {
        name: "office-record",
        reach: |o| {
            let name = o.busiest();
            o.appliance(&name);
            let key = o.places.office().plant.appliance.as_ref().and_then(|page| page.records.last().map(|row| row.key.clone()));
            o.tell(Msg::Plant(Plant::OpenRecord(key.unwrap_or_default())));
        },
    },
    OfficePage {
        name: "office-site-form",
        reach: |o| {
            o.tell(Msg::Go(Place::Plant));
            o.tell(Msg::Plant(Plant::AddSite));
        },
    },
    OfficePage { name: "office-cylinders", reach: |o| o.tell(Msg::Go(Place::Cylinders)) },
    OfficePage {
        name: "office-cylinder",
        reach: |o| {
            o.tell(Msg::Go(Place::Cylinders));
            let key = o.places.office().cylinders_page().lines.into_iter().find(|row| !row.heading).map(|row| row.key);
            o.tell(Msg::Cylinders(cylinders::Msg::Open(key.unwrap_or_default())));
        },
    },
    OfficePage {
        name: "office-cylinder-change",
        reach: |o| {
            o.tell(Msg::Go(Place::Cylinders));
            let key = o.places.office().cylinders_page().lines.into_iter().find(|row| !row.heading).map(|row| row.key);
            o.tell(Msg::Cylinders(cylinders::Msg::Open(key.unwrap_or_default())));
            o.tell(Msg::Cylinders(cylinders::Msg::Edit));
        },
    },
    OfficePage { name: "office-account", reach: |o| o.tell(Msg::Go(Place::Account)) },
    OfficePage {
        name: "office-account-exported",
        reach: |o| {
            o.tell(Msg::Go(Place::Account));
            o.tell(Msg::Account(account::Msg::StepYear(-1)));
            o.tell(Msg::Account(account::Msg::Export("csv".to_owned())));
        },
    },
    OfficePage { name: "office-setup", reach: |o| o.setup(Pane::None) },
    OfficePage { name: "office-people", reach: |o| o.setup(Pane::People) },
    OfficePage { name: "office-instruments", reach: |o| o.setup(Pane::Instruments) },
    OfficePage { name: "office-rulebooks", reach: |o| o.setup(Pane::Rulebooks) },
    OfficePage { name: "office-units", reach: |o| o.setup(Pane::Units) },
    OfficePage { name: "office-store", reach: |o| o.setup(Pane::Store) },
    OfficePage { name: "office-about", reach: |o| o.setup(Pane::About) },
];
