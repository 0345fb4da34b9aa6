//! The program's own window on a store of its own, by taps: from *begin work*
//! to a closed visit whose record lies on disk.

use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{App, NewSite};
use bubblepoint::gui::{Gui, desk_options};
use bubblepoint::ledger::{
    ApplianceFacts, Category, CylinderFacts, CylinderKind, GasStatus, Instrument, InstrumentId, InstrumentKind, Person, PersonId, SiteFacts,
};
use bubblepoint::quantity::{MassUnit, Weighing};
use bubblepoint::store::{OpenMode, Store};
use bubblepoint::view::{Desk, DeskOptions};
use bubblepoint_ui::{AppWindow, Appearance, Page, Shell};
use bubblepoint_ui_tests::{PHONE, Size, TABLET, acting, drag, open, press, press_key, settle, sweep};
use slint::ComponentHandle;
use std::cell::{Cell, RefCell};
use std::path::{Path, PathBuf};
use std::rc::Rc;

pub const CHECKS: &[super::Check] = &[
    ("flow::a_top_up_takes_at_most_twelve_taps", a_top_up_takes_at_most_twelve_taps),
    ("flow::with_a_leak_test_it_takes_at_most_eighteen", with_a_leak_test_it_takes_at_most_eighteen),
    ("flow::an_empty_store_leads_to_a_first_closed_visit", an_empty_store_leads_to_a_first_closed_visit),
    ("flow::a_sudden_end_loses_nothing_that_was_typed", a_sudden_end_loses_nothing_that_was_typed),
    ("flow::pages_with_real_content_are_sound", pages_with_real_content_are_sound),
];

/// A window on a store, with its taps counted.
struct Work {
    window: AppWindow,
    gui: Rc<Gui>,
    taps: Cell<u32>,
    opened: Rc<RefCell<Vec<PathBuf>>>,
}

impl Work {
    fn at(folder: &Path, size: Size) -> Self {
        let window = open(size, Appearance::Light, 1.0);
        let opened: Rc<RefCell<Vec<PathBuf>>> = Rc::default();
        let seen = Rc::clone(&opened);
        let options = DeskOptions {
            open: Box::new(move |path| {
                seen.borrow_mut().push(path.to_path_buf());
                Ok(())
            }),
            ..desk_options(Some(folder.join("documents")))
        };
        let gui = Gui::attach(&window, Desk::new(app(folder), options).expect("the desk opens"));
        settle();
        Self { window, gui, taps: Cell::new(0), opened }
    }

    fn labels(&self) -> Vec<String> {
        acting(&self.window).into_iter().map(|one| one.label).collect()
    }

    /// A tap that counts, on what is labelled so or begins so.
    fn tap(&self, label: &str) {
        self.taps.set(self.taps.get() + 1);
        self.touch(label);
    }

    /// A tap that does not count: a digit, a caution.
    fn touch(&self, label: &str) {
        let labels = self.labels();
        let found = labels.iter().find(|known| *known == label).or_else(|| labels.iter().find(|known| known.starts_with(label)));
        let Some(found) = found.cloned() else {
            panic!("nothing begins with \u{201c}{label}\u{201d}; the message is {:?}; there are {labels:?}", self.message());
        };
        press(&self.window, &found);
    }

    fn message(&self) -> String {
        self.window.global::<Shell>().get_message().into()
    }

    fn digits(&self, figure: &str) {
        for digit in figure.chars() {
            self.touch(&if digit == '.' { "decimal sign".to_owned() } else { digit.to_string() });
        }
    }

    /// Types into a field by the keyboard.
    fn write(&self, field: &str, text: &str) {
        self.touch(field);
        for letter in text.chars() {
            press_key(&self.window, letter);
        }
    }

    fn acknowledge_all(&self) {
        for label in ["Locked off", "All three agree", "Gloves and goggles", "Liquid only"] {
            if self.labels().iter().any(|known| known.starts_with(label)) {
                self.touch(label);
            }
        }
        // Part of the cautions.
        self.touch("Go on");
    }

    fn sign(&self, who: &str) {
        drag(&self.window, who, &[(0.1, 0.5), (0.3, 0.2), (0.5, 0.8), (0.8, 0.4)]);
    }

    fn page(&self) -> Page {
        self.window.global::<Shell>().get_page()
    }

    fn close_with_two_signatures(&self) {
        self.tap("Close visit");
        // The caution for the way home.
        self.touch("Upright, tied, capped");
        self.tap("On to the signatures");
        self.sign("technician, Mara Lindqvist, not signed yet");
        if self.labels().iter().any(|label| label == "On to the representative") {
            self.tap("On to the representative");
        }
        self.tap("name");
        for letter in "Otto Prins".chars() {
            press_key(&self.window, letter);
        }
        self.sign("representative, Otto Prins, not signed yet");
        // Beside the panel the visit's own button stands under the same name.
        self.taps.set(self.taps.get() + 1);
        let all = acting(&self.window);
        let last = all.iter().rfind(|one| one.label == "Close visit").expect("the visit can be closed");
        last.element.mock_single_click(slint::platform::PointerEventButton::Left);
        settle();
        assert_eq!(self.page(), Page::VisitClosed, "{}", self.message());
        self.tap("Open record");
    }

    fn opened_pdf(&self) -> Vec<u8> {
        let opened = self.opened.borrow();
        let [file] = opened.as_slice() else { panic!("{opened:?} was opened; {}", self.message()) };
        std::fs::read(file).expect("the record lies on disk")
    }
}

fn app(folder: &Path) -> App {
    let store = Store::open(&folder.join("store.db"), OpenMode::Create).expect("the store opens");
    let written = u64::try_from(store.last_position().expect("it can be read")).unwrap_or(0);
    let clock = SetClock::at("2026-04-01T13:05:00Z".parse().expect("a time"), chrono_tz::America::New_York);
    App::with(store, Box::new(clock), Box::new(CountedIds::after(written * 1000 + 1))).expect("the app opens")
}

fn kilograms(text: &str) -> Weighing {
    Weighing::new(text, MassUnit::Kilogram)
}

/// Two appliances, one cylinder that fits, one technician, one detector, one scale.
fn furnish(folder: &Path) {
    let app = app(folder);
    let person = Person {
        id: PersonId(uuid::Uuid::nil()),
        name: "Mara Lindqvist".to_owned(),
        certificate: "4711-A".to_owned(),
        certificate_kind: "section 608, universal".to_owned(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    };
    app.add_person(person).expect("a person");
    let facts = SiteFacts {
        owner: "Harbour Fish Ltd".to_owned(),
        address: "Quay 7".to_owned(),
        time_zone: "America/New_York".to_owned(),
        ..SiteFacts::under(vec!["us-82f".to_owned()])
    };
    let site = app.add_site(NewSite { name: "Fish market cold store".to_owned(), facts }).expect("a site");
    for (name, charge) in [("R-1", "45.36"), ("R-2", "30")] {
        let facts = ApplianceFacts {
            full_charge: kilograms(charge).mass().ok(),
            full_charge_written: Some(kilograms(charge)),
            installed_on: "2020-05-01".parse().ok(),
            place: "cold room 2".to_owned(),
            ..ApplianceFacts::new(Category::CommercialRefrigeration, "R-22")
        };
        app.add_appliance_with(site, name, facts).expect("an appliance");
    }
    let facts = CylinderFacts {
        refrigerant: Some("R-22".to_owned()),
        gas_status: Some(GasStatus::Virgin),
        gross: kilograms("24.18").mass().ok(),
        gross_written: Some(kilograms("24.18")),
        water_capacity_l: Some("26.2".to_owned()),
        location: "van 3".to_owned(),
        ..CylinderFacts::new(CylinderKind::Supply, kilograms("10").mass().expect("a mass"), kilograms("10"))
    };
    app.add_cylinder("S-204", facts).expect("a cylinder");
    for (kind, name, division) in
        [(InstrumentKind::Scale, "Bench scale 1", Some(kilograms("0.005"))), (InstrumentKind::Detector, "Detector D-7", None)]
    {
        let instrument = Instrument {
            id: InstrumentId(uuid::Uuid::nil()),
            kind,
            name: name.to_owned(),
            serial: String::new(),
            division,
            holds: None,
            checked_on: None,
            check_due: None,
        };
        app.add_instrument(instrument).expect("an instrument");
    }
}

fn begin_and_charge(work: &Work) {
    work.tap("Begin work here");
    work.tap("Fish market cold store");
    work.tap("R-1, ");
    work.tap("Charge");
    work.acknowledge_all();
    work.digits("24.18");
    work.tap("gross after");
    work.digits("19.64");
    work.tap("Save charge");
}

fn a_top_up_takes_at_most_twelve_taps() {
    for size in [PHONE, TABLET] {
        let folder = tempfile::tempdir().expect("a folder");
        furnish(folder.path());
        let work = Work::at(folder.path(), size);
        assert_eq!(work.page(), Page::Due);
        begin_and_charge(&work);
        work.close_with_two_signatures();
        assert!(work.opened_pdf().starts_with(b"%PDF-"));
        assert!(work.taps.get() <= 12, "{} taps on a {}", work.taps.get(), size.name);
        println!("    a top-up takes {} taps on a {}, one of them into the representative's name", work.taps.get(), size.name);
    }
}

fn with_a_leak_test_it_takes_at_most_eighteen() {
    let folder = tempfile::tempdir().expect("a folder");
    furnish(folder.path());
    let work = Work::at(folder.path(), PHONE);
    begin_and_charge(&work);
    work.tap("Leak test");
    work.acknowledge_all_or_none();
    work.tap("no leak found");
    work.tap("Save leak test");
    work.close_with_two_signatures();
    assert!(work.opened_pdf().starts_with(b"%PDF-"));
    assert!(work.taps.get() <= 18, "{} taps", work.taps.get());
    println!("    with a leak test it takes {} taps", work.taps.get());
}

impl Work {
    /// Cautions that were acknowledged before are not shown again.
    fn acknowledge_all_or_none(&self) {
        if self.labels().iter().any(|label| label == "Go on") {
            self.acknowledge_all();
        }
    }
}

fn an_empty_store_leads_to_a_first_closed_visit() {
    let folder = tempfile::tempdir().expect("a folder");
    let work = Work::at(folder.path(), PHONE);
    work.write("your name", "Mara Lindqvist");
    work.write("site", "Ice rink");
    work.tap("Begin work here");
    assert!(work.message().contains("40 CFR"), "the law taken for the site is said: {}", work.message());
    work.touch("put this message away");
    work.tap("Add an appliance");
    work.write("identification", "H-1");
    work.write("gas", "R-22");
    work.write("full charge", "30 kg");
    work.tap("Add appliance");
    work.tap("Charge");
    work.acknowledge_all();
    work.tap("Add a cylinder");
    work.write("identification", "C-1");
    work.write("tare", "10 kg");
    work.tap("Add cylinder");
    work.digits("20.00");
    work.tap("gross after");
    work.digits("18.50");
    work.tap("Save charge");
    work.close_with_two_signatures();
    assert!(work.opened_pdf().starts_with(b"%PDF-"));
}

fn a_sudden_end_loses_nothing_that_was_typed() {
    let folder = tempfile::tempdir().expect("a folder");
    furnish(folder.path());
    {
        let work = Work::at(folder.path(), PHONE);
        work.tap("Begin work here");
        work.tap("Fish market cold store");
        work.tap("R-1, ");
        work.tap("Charge");
        work.acknowledge_all();
        work.digits("24.18");
        work.tap("gross after");
        work.digits("19.6");
        work.gui.flush();
        // Nothing is ended here: what is on disk is all that the next start has.
        std::mem::forget(work);
    }
    let again = Work::at(folder.path(), PHONE);
    assert_eq!(again.page(), Page::Visit);
    let labels = again.labels();
    assert!(labels.iter().any(|label| label.starts_with("gross before kg, 24.18")), "{labels:?}");
    assert!(labels.iter().any(|label| label.starts_with("gross after kg, 19.6")), "{labels:?}");
    again.digits("4");
    again.tap("Save charge");
    assert!(again.labels().iter().any(|label| label.contains("Charge, cylinder S-204")), "{:?}", again.labels());
}

fn pages_with_real_content_are_sound() {
    for size in bubblepoint_ui_tests::SIZES {
        let folder = tempfile::tempdir().expect("a folder");
        furnish(folder.path());
        let work = Work::at(folder.path(), size);
        let mut faults = Vec::new();
        let mut look =
            |step: &str| faults.extend(sweep(&work.window).into_iter().map(|fault| format!("{step} on a {}: {fault}", size.name)));
        work.tap("Begin work here");
        look("where");
        work.tap("Fish market cold store");
        look("which appliance");
        work.tap("R-1, ");
        work.tap("Charge");
        look("cautions");
        work.acknowledge_all();
        work.digits("24.18");
        work.tap("gross after");
        work.digits("14.18");
        look("charge");
        work.tap("Save charge");
        look("visit");
        work.tap("Leak test");
        look("leak test");
        assert!(faults.is_empty(), "{} faults:\n{}", faults.len(), faults.join("\n"));
    }
}
