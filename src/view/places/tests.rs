//! The places followed from an empty store on, tap by tap.

use super::cylinders::Msg as Cylinders;
use super::due::Msg as Due;
use super::plant::{FormMsg, Msg as Plant, Pane};
use super::setup::{Msg as Setup, Pane as SetupPane};
use super::{First, Go, Look, Msg, Office, Overview, Place, signing};
use crate::app::testing::{CountedIds, SetClock};
use crate::app::{App, Appearance, ChargeInput, Common, NewEntry, Setting, TestInput};
use crate::ledger::{
    ApplianceId, ChargePurpose, Counterpart, Ink, LeakPlace, Reading, Scope, Signature, SiteId, TestKind, TestResult, Visit, VisitId,
    WeighingMode,
};
use crate::quantity::{MassUnit, Weighing};
use crate::store::{OpenMode, Store};
use crate::view::shown::{Line, Verdict};
use crate::view::visit::close::InkMsg;
use chrono_tz::Tz;

struct Bench {
    app: App,
    office: Office,
    clock: SetClock,
    _folder: tempfile::TempDir,
}

fn empty() -> Bench {
    bench_on(Store::in_memory().unwrap())
}

fn bench_on(store: Store) -> Bench {
    // 3 March 2026, 08:12 in New York.
    let clock = SetClock::at("2026-03-03T13:12:00Z".parse().unwrap(), Tz::America__New_York);
    let app = App::with(store, Box::new(clock.clone()), Box::new(CountedIds::after(1000))).unwrap();
    let folder = tempfile::tempdir().unwrap();
    let mut office = Office::new(&app, folder.path()).unwrap();
    office.look(&app);
    Bench { app, office, clock, _folder: folder }
}

impl Bench {
    fn tell(&mut self, msg: Msg) -> Vec<Go> {
        self.office.update(&self.app, msg)
    }

    fn type_in(&mut self, form: fn(FormMsg) -> Msg, fields: &[(&str, &str)]) {
        for (field, text) in fields {
            self.tell(form(FormMsg::Edited((*field).to_owned(), (*text).to_owned())));
        }
    }

    fn charge(&mut self, visit: &Visit, appliance: ApplianceId, before: &str, after: &str) {
        let lb = |text: &str| Some(Weighing::new(text, MassUnit::Pound));
        let cylinder = self.app.store().registers().unwrap().cylinders[0].id;
        let input = ChargeInput {
            common: Common::default(),
            cylinder: Some(cylinder),
            purpose: ChargePurpose::Leak,
            reading: Reading { mode: WeighingMode::Gross, before: lb(before), after: lb(after), net: None, scale: None },
            full_hoses: None,
            phase: "liquid".to_owned(),
            short_by: None,
            same_leak_as: None,
            gas_source: String::new(),
            weighing_gap: String::new(),
        };
        self.app.enter(visit.id, appliance, &NewEntry::Charge(input)).unwrap();
    }
}

fn company(msg: FormMsg) -> Msg {
    Msg::Setup(Setup::Company(msg))
}

fn person(msg: FormMsg) -> Msg {
    Msg::Setup(Setup::Person(msg))
}

fn site(msg: FormMsg) -> Msg {
    Msg::Plant(Plant::SiteForm(msg))
}

fn appliance(msg: FormMsg) -> Msg {
    Msg::Plant(Plant::ApplianceForm(msg))
}

fn cylinder(msg: FormMsg) -> Msg {
    Msg::Cylinders(Cylinders::Form(msg))
}

/// An empty store, led by its one action from the company to the cylinder.
fn led() -> Bench {
    let mut bench = empty();
    assert_eq!(bench.office.first(), First::Company);
    assert_eq!(bench.office.due_page().begin_words, "Write down the company");
    bench.tell(Msg::Due(Due::Begin));
    assert_eq!((bench.office.place, bench.office.setup.pane), (Place::Setup, SetupPane::Company));
    bench.type_in(company, &[("name", "Quill Cooling")]);
    bench.tell(company(FormMsg::Save));
    assert_eq!(bench.office.setup.pane, SetupPane::PersonForm, "the company leads to the first person");
    bench.type_in(person, &[("name", "Ada Quill"), ("certificate", "F-17")]);
    bench.tell(person(FormMsg::Save));
    assert_eq!((bench.office.place, bench.office.plant.pane), (Place::Plant, Pane::SiteForm));
    bench.type_in(site, &[("name", "Fish market"), ("owner", "Harbour Fish Ltd"), ("time-zone", "America/New_York")]);
    bench.tell(site(FormMsg::Chosen("rulebook", "us-82f".to_owned())));
    bench.tell(site(FormMsg::Save));
    assert_eq!(bench.office.plant.pane, Pane::ApplianceForm);
    assert_eq!(bench.office.appliance_form_subject(), "Fish market");
    bench.type_in(appliance, &[("identification", "R-1"), ("gas", "r22"), ("full-charge", "100 lb")]);
    bench.tell(appliance(FormMsg::Save));
    assert_eq!((bench.office.place, bench.office.cylinders.pane), (Place::Cylinders, super::cylinders::Pane::Form));
    bench.type_in(
        cylinder,
        &[("identification", "S-204"), ("gas", "R-22"), ("tare", "20 lb"), ("gross", "70 lb"), ("water-capacity", "47.7 lb")],
    );
    bench.tell(cylinder(FormMsg::Save));
    assert_eq!((bench.office.place, bench.office.first(), bench.office.overview.is_some()), (Place::Due, First::Visit, true));
    assert_eq!(bench.office.message, None);
    bench
}

impl Bench {
    fn ids(&self) -> (SiteId, ApplianceId) {
        let registers = self.app.store().registers().unwrap();
        (registers.sites[0].id, registers.appliances[0].id)
    }

    fn begin(&self) -> Visit {
        let person = self.app.store().registers().unwrap().people[0].id;
        self.app.begin_visit(self.ids().0, person).unwrap()
    }
}

#[test]
fn a_first_start_leads_to_the_first_visit() {
    let mut bench = led();
    assert_eq!(bench.office.due_page().begin_words, "Begin work here");
    assert_eq!(bench.tell(Msg::Due(Due::Begin)), [Go::Begin { site: None, appliance: None }]);
    let plant = bench.office.plant_page();
    assert_eq!(plant.summary, "1 site, 1 appliance");
    let rows: Vec<_> = plant.lines.iter().map(|row| (row.name.as_str(), row.facts.as_str(), row.state.as_str())).collect();
    assert_eq!(rows, [("Fish market", "", "1"), ("R-1", "R-22, 100 lb", "none due")]);
}

#[test]
fn going_elsewhere_ends_the_leading() {
    let mut bench = empty();
    bench.tell(Msg::Due(Due::Begin));
    bench.tell(Msg::Go(Place::Plant));
    bench.tell(Msg::Plant(Plant::AddSite));
    bench.type_in(site, &[("name", "Ice rink")]);
    bench.tell(site(FormMsg::Save));
    assert!(matches!(bench.office.plant.pane, Pane::Site(_)), "{:?}", bench.office.plant.pane);
}

#[test]
fn what_cannot_be_read_is_said_at_its_field() {
    let mut bench = led();
    bench.tell(Msg::Plant(Plant::AddAppliance));
    assert!(!bench.office.appliance_form_ready().ready);
    bench.type_in(appliance, &[("identification", "R-1"), ("gas", "R-999"), ("full-charge", "much"), ("installed-on", "May")]);
    bench.tell(appliance(FormMsg::Save));
    let form = &bench.office.plant.appliance_form;
    assert!(
        form.error("gas").contains("R-999") && form.error("full-charge").contains("much") && form.error("installed-on").contains("May")
    );
    assert!(form.more, "the wrong day stands among the further facts, which must be seen");
    bench.type_in(appliance, &[("gas", "R-22"), ("full-charge", ""), ("installed-on", "2019-05-04")]);
    bench.tell(appliance(FormMsg::Save));
    // The identification is taken: the store says so, in a message line.
    assert!(bench.office.message.as_ref().is_some_and(|message| message.grave), "{:?}", bench.office.message);
    bench.type_in(appliance, &[("identification", "R-2")]);
    bench.tell(appliance(FormMsg::Save));
    assert_eq!(bench.app.store().registers().unwrap().appliances.len(), 2);
    assert_eq!(bench.office.message, None);
}

#[test]
fn a_charge_over_the_trigger_shows_in_due_and_plant() {
    let mut bench = led();
    let (_, id) = bench.ids();
    let visit = bench.begin();
    bench.charge(&visit, id, "70", "50");
    let found = TestInput {
        common: Common::default(),
        kind: TestKind::LeakTest,
        result: Some(TestResult::LeakFound),
        scope: Some(Scope::Whole),
        method: "bubble test".to_owned(),
        instrument: None,
        parts: String::new(),
        place: String::new(),
        leaks: vec![LeakPlace { place: "flare".to_owned(), state: "isolated".to_owned() }],
        repair: None,
        partial: false,
        running_hours: String::new(),
    };
    bench.app.enter(visit.id, id, &NewEntry::Test(found)).unwrap();
    bench.tell(Msg::Go(Place::Due));
    bench.office.look(&bench.app);

    // 82.152: 365 × 20 lb / (100 lb × 365 days), first addition of this appliance: 20 % exactly is at the trigger.
    let page = bench.office.due_page();
    assert_eq!(page.visits[0].state, "2 entries");
    let rate = bench.office.overview.as_ref().unwrap().appliances[0].rate().unwrap().percent;
    let row = bench.office.plant_page().lines[1].clone();
    assert_eq!(row.state, format!("{} %", crate::view::format::percent(rate)));
    let leak = page.lines.iter().find(|row| row.name == "Leak, R-1").unwrap();
    assert_eq!((leak.state.as_str(), leak.facts.as_str()), ("isolated", "Flare"));

    // Ten days later 10 lb more: far over 20 % a year.
    bench.clock.forward(chrono::Duration::days(10));
    bench.charge(&visit, id, "50", "40");
    bench.office.look(&bench.app);
    let page = bench.office.due_page();
    assert_eq!(page.today, "Friday 13 March 2026");
    let row = bench.office.plant_page().lines[1].clone();
    assert_eq!(row.verdict, Some(Verdict::Over));
    // Repair within 30 days: under 7 days' horizon it comes later, under 30 it is soon.
    let under = |page: &super::due::Page, name: &str| {
        let at = page.lines.iter().position(|row| row.name == name).unwrap();
        page.lines[..at].iter().rev().find(|row| row.heading).unwrap().name.clone()
    };
    assert_eq!(under(&page, "Repair"), "Later");
    bench.tell(Msg::Due(Due::Horizon("30".to_owned())));
    let page = bench.office.due_page();
    assert_eq!(under(&page, "Repair"), "By 12 Apr");
    let repair = page.lines.iter().find(|row| row.name == "Repair").unwrap().clone();
    assert_eq!((repair.state.as_str(), repair.aside.as_str()), ("12 Apr", "in 30 days"));
    bench.tell(Msg::Due(Due::Open(repair.key)));
    let item = bench.office.due_page().item.unwrap();
    assert_eq!((item.name.as_str(), item.subject.as_str()), ("Repair", "R-1, Fish market"));
    assert!(item.facts.iter().any(|fact| fact.caption == "trigger" && fact.value == "20 %"), "{:?}", item.facts);
    assert!(item.source.contains("82.157"), "{}", item.source);

    // Past its day it is late.
    bench.clock.forward(chrono::Duration::days(31));
    bench.office.look(&bench.app);
    let page = bench.office.due_page();
    assert_eq!(under(&page, "Repair"), "Late");
    assert_eq!(page.lines.iter().find(|row| row.name == "Repair").unwrap().aside, "1 day late");

    // The appliance's page: bar, line over time, duties, leak, record.
    bench.tell(Msg::Due(Due::ShowAppliance));
    assert_eq!(bench.office.place, Place::Plant);
    let page = bench.office.plant.appliance.clone().unwrap();
    assert_eq!(page.rates[0].verdict, Verdict::Over);
    assert!(page.rates[0].broken && page.rates[0].rate_at == 1.0, "more than four triggers break the bar: {:?}", page.rates[0]);
    let history = page.history.unwrap();
    assert_eq!(history.steps.len(), 2);
    assert!(history.steps[0].at < history.steps[1].at);
    assert_eq!(page.leaks.len(), 1);
    assert_eq!((page.records[0].state.as_str(), page.records.len()), ("open", 1));
}

#[test]
fn search_finds_by_identification_site_gas_serial_and_job() {
    let mut bench = led();
    bench.tell(Msg::Plant(Plant::AddAppliance));
    bench.type_in(appliance, &[("identification", "H-7"), ("gas", "R-513A"), ("serial", "BW-7731")]);
    bench.tell(appliance(FormMsg::Save));
    let found = |bench: &mut Bench, text: &str| {
        bench.tell(Msg::Plant(Plant::Search(text.to_owned())));
        let page = bench.office.plant_page();
        page.lines.into_iter().filter(|row| !row.heading).map(|row| row.name).collect::<Vec<_>>()
    };
    assert_eq!(found(&mut bench, "h7"), ["H-7"]);
    assert_eq!(found(&mut bench, "513"), ["H-7"]);
    assert_eq!(found(&mut bench, "bw7731"), ["H-7"]);
    assert_eq!(found(&mut bench, "r22"), ["R-1"]);
    assert_eq!(found(&mut bench, "fish").len(), 2);
    assert_eq!(found(&mut bench, "nowhere"), Vec::<String>::new());
    assert!(bench.office.plant_page().empty_words.contains("nowhere"));
}

#[test]
fn a_change_of_facts_has_its_day_and_reason() {
    let mut bench = led();
    let (_, id) = bench.ids();
    bench.tell(Msg::Plant(Plant::Open(id.to_string())));
    bench.tell(Msg::Plant(Plant::EditAppliance));
    bench.type_in(appliance, &[("full-charge", "110 lb"), ("valid-from", "2026-03-01")]);
    assert!(!bench.office.appliance_form_ready().ready, "a change without its reason");
    bench.type_in(appliance, &[("reason", "receiver replaced")]);
    bench.tell(appliance(FormMsg::Save));
    let page = bench.office.plant.appliance.clone().unwrap();
    assert_eq!(page.changes.len(), 1, "{:?}", page.changes);
    assert_eq!((page.changes[0].name.as_str(), page.changes[0].state.as_str()), ("Full charge 110 lb", "1 Mar 2026"));
    assert_eq!(page.changes[0].facts, "was 100 lb; receiver replaced");
}

#[test]
fn a_cylinder_shows_its_limits_and_is_scrapped() {
    let mut bench = led();
    let row = bench.office.cylinders_page().lines[1].clone();
    assert_eq!((row.name.as_str(), row.state.as_str()), ("S-204", "22.68 kg"));
    bench.tell(Msg::Cylinders(Cylinders::Open(row.key)));
    let page = bench.office.cylinders.cylinder.clone().unwrap();
    let bar = page.mass.unwrap();
    // 47.7 lb of water: 50 lb of gas is more than it may ever hold.
    assert!(bar.limits.iter().any(|limit| limit.binding), "{bar:?}");
    assert_eq!(page.refused, "No room is left up to the limit that binds.");
    // A dent is written down, and stays when the form changes something else.
    let id = bench.app.store().registers().unwrap().cylinders[0].id;
    let known = bench.app.store().cylinder(id).unwrap().unwrap().versions.latest().clone();
    let dented = crate::ledger::CylinderFacts { damage: "dent at the foot".to_owned(), ..known };
    bench.app.change_cylinder(id, dented, bench.app.today(), "").unwrap();
    bench.tell(Msg::Cylinders(Cylinders::Open(id.to_string())));
    let page = bench.office.cylinders.cylinder.clone().unwrap();
    assert!(page.refused.contains("dent at the foot") && page.refused.contains("180.205(d)"), "{}", page.refused);
    bench.tell(Msg::Cylinders(Cylinders::Edit));
    bench.tell(cylinder(FormMsg::Save));
    let page = bench.office.cylinders.cylinder.clone().unwrap();
    assert!(page.refused.contains("dent at the foot"), "{}", page.refused);
    // Saved without a gross, it was not weighed.
    assert_eq!(bench.app.store().cylinder(id).unwrap().unwrap().versions.latest().weighed.map(|mark| mark.after), Some(0));
    bench.tell(Msg::Cylinders(Cylinders::Edit));
    bench.type_in(cylinder, &[("scrapped", "valve bent"), ("requalify-by", "2029-06")]);
    bench.tell(cylinder(FormMsg::Save));
    let page = bench.office.cylinders.cylinder.clone().unwrap();
    assert!(page.refused.contains("valve bent"), "{}", page.refused);
    assert!(page.facts.iter().any(|fact| fact.value == "30 Jun 2029"));
    assert_eq!(bench.office.cylinders_page().summary, "0 cylinders");
}

#[test]
fn settings_are_kept() {
    let mut bench = empty();
    let look = Look { appearance: Appearance::Sunlight, text_size: 115 };
    bench.tell(Msg::Setup(Setup::Appearance(Appearance::Sunlight)));
    assert_eq!(bench.tell(Msg::Setup(Setup::TextSize(115))), [Go::Appear(look)]);
    bench.tell(Msg::Setup(Setup::Set(Setting::Mass, "lb".to_owned())));
    let again = Office::new(&bench.app, &bench.office.documents).unwrap();
    assert_eq!((Look::read(&bench.app).unwrap(), again.units.mass), (look, MassUnit::Pound));
}

#[test]
fn backup_and_check_answer() {
    let folder = tempfile::tempdir().unwrap();
    let mut bench = bench_on(Store::open(&folder.path().join("s.db"), OpenMode::Create).unwrap());
    bench.tell(Msg::Setup(Setup::BackUp));
    let answer = bench.office.setup.store.answer.clone();
    let copy = bench.office.documents.join("Backups").join("bubblepoint 2026-03-03 0812.db");
    assert!(!bench.office.setup.store.grave && copy.exists(), "{answer}");
    assert!(Store::open(&copy, OpenMode::MustExist).unwrap().check().unwrap().sound());
    // The same minute again: what is there is not written over.
    bench.tell(Msg::Setup(Setup::BackUp));
    assert!(bench.office.setup.store.grave, "{}", bench.office.setup.store.answer);
    bench.tell(Msg::Setup(Setup::Check));
    assert!(bench.office.setup.store.answer.ends_with("nothing is wrong."), "{}", bench.office.setup.store.answer);
}

#[test]
fn a_second_connection_sees_the_same() {
    let folder = tempfile::tempdir().unwrap();
    let mut bench = bench_on(Store::open(&folder.path().join("s.db"), OpenMode::Create).unwrap());
    bench.tell(Msg::Plant(Plant::AddSite));
    bench.type_in(site, &[("name", "Ice rink")]);
    assert_eq!(bench.tell(site(FormMsg::Save)), [Go::Look]);
    let another = bench.app.store().another().unwrap();
    let (now, today) = (bench.app.now(), bench.app.today());
    let overview = std::thread::spawn(move || Overview::read(&another, now, today).unwrap()).join().unwrap();
    bench.tell(Msg::Looked(Box::new(overview)));
    assert_eq!(bench.office.plant_page().summary, "1 site, 0 appliances");
}

#[test]
fn the_account_follows_the_charges_and_is_exported() {
    let mut bench = led();
    let (_, id) = bench.ids();
    let visit = bench.begin();
    bench.charge(&visit, id, "70", "50");
    bench.tell(Msg::Setup(Setup::Set(Setting::Mass, "lb".to_owned())));
    bench.tell(Msg::Go(Place::Account));
    let page = bench.office.account_page();
    assert_eq!((page.lost.as_str(), page.lost_unit.as_str()), ("20.00", "lb"));
    assert_eq!((page.losses[0].name.as_str(), page.losses[0].share), ("R-1", 1.0));
    let charged = page.plates[0].figures.iter().find(|figure| figure.0 == "charged").unwrap();
    assert_eq!(charged.1, "\u{2212}20.00");
    for ending in ["pdf", "csv", "json"] {
        bench.tell(Msg::Account(super::account::Msg::Export(ending.to_owned())));
        assert!(!bench.office.account_page().export_grave, "{}", bench.office.account_page().export_words);
        let path = bench.office.documents.join("2026").join(format!("account 2026.{ending}"));
        assert!(std::fs::metadata(&path).unwrap().len() > 100, "{}", path.display());
    }
    bench.tell(Msg::Account(super::account::Msg::Gas("R-410A".to_owned())));
    assert_eq!(bench.office.account_page().plates, []);
}

fn signature(name: &str) -> Signature {
    Signature { name: name.to_owned(), ink: Ink(vec![vec![(10, 20), (30, 40)]]) }
}

/// A visit with one charge, closed with a representative who signs later, and its record's page.
fn closed_for_later() -> (Bench, VisitId) {
    let mut bench = led();
    let (_, id) = bench.ids();
    let visit = bench.begin();
    bench.charge(&visit, id, "70", "50");
    let later = Counterpart::SignsLater { name: "Teodora Vance".to_owned() };
    bench.app.close_visit(visit.id, signature("Ada Quill"), later).unwrap();
    bench.office.look(&bench.app);
    bench.tell(Msg::Go(Place::Plant));
    bench.tell(Msg::Plant(Plant::Open(id.to_string())));
    bench.tell(Msg::Plant(Plant::OpenRecord(visit.id.to_string())));
    (bench, visit.id)
}

#[test]
fn who_signs_later_signs_on_the_record() {
    let (mut bench, visit) = closed_for_later();
    let page = bench.office.plant.record.clone().unwrap();
    assert!(page.can_sign && page.facts.iter().any(|fact| fact.value == "Teodora Vance, signs later"), "{:?}", page.facts);
    let opened = |bench: &mut Bench| match bench.tell(Msg::Plant(Plant::OpenRecordFile)).as_slice() {
        [Go::Open(path)] => std::fs::read(path).unwrap(),
        other => panic!("{other:?}"),
    };
    let unsigned = opened(&mut bench);

    bench.tell(Msg::Plant(Plant::Signing(signing::Msg::Begin)));
    assert_eq!(bench.office.plant.signing.as_ref().unwrap().name, "Teodora Vance");
    assert!(!bench.office.plant.signing.as_ref().unwrap().ready().ready, "nothing is drawn yet");
    // Back leaves the signature, not the record.
    assert_eq!(bench.tell(Msg::Back), []);
    assert!(bench.office.plant.signing.is_none() && matches!(bench.office.plant.pane, Pane::Record(..)));

    bench.tell(Msg::Plant(Plant::Signing(signing::Msg::Begin)));
    for (x, first) in [(100, true), (900, false)] {
        bench.tell(Msg::Plant(Plant::Signing(signing::Msg::Ink(InkMsg::Point { x, y: 500, first }))));
    }
    bench.tell(Msg::Plant(Plant::Signing(signing::Msg::Sign)));
    assert_eq!(bench.office.message, None);
    assert_eq!(bench.app.store().countersignature(visit).unwrap().unwrap().signature.name, "Teodora Vance");
    let page = bench.office.plant.record.clone().unwrap();
    assert!(!page.can_sign && bench.office.plant.signing.is_none());
    assert!(page.facts.iter().any(|fact| fact.value.starts_with("Teodora Vance, signed later, 3 Mar 2026")), "{:?}", page.facts);
    // The same name opens the record as it now stands.
    let signed = opened(&mut bench);
    assert_ne!(signed, unsigned);
    assert_eq!(signed, bench.app.print_record(visit, None).unwrap().bytes);
}

#[test]
fn what_is_half_typed_in_a_form_outlives_the_program() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("s.db");
    {
        let mut bench = bench_on(Store::open(&path, OpenMode::Create).unwrap());
        bench.tell(Msg::Plant(Plant::AddSite));
        bench.type_in(site, &[("name", "Ice ri")]);
        bench.tell(site(FormMsg::Chosen("rulebook", "us-82f".to_owned())));
        bench.tell(Msg::Cylinders(Cylinders::Add));
        bench.type_in(cylinder, &[("identification", "S-2")]);
        bench.app.flush_drafts().unwrap();
    }
    let mut bench = bench_on(Store::open(&path, OpenMode::MustExist).unwrap());
    bench.tell(Msg::Cylinders(Cylinders::Add));
    assert_eq!(bench.office.cylinders.form.text("identification"), "S-2");
    bench.tell(Msg::Plant(Plant::AddSite));
    let form = &bench.office.plant.site_form;
    assert!(form.taken_up_again && form.text("name") == "Ice ri" && form.is_on("rulebook us-82f"), "{form:?}");
    bench.type_in(site, &[("name", "Ice rink")]);
    bench.tell(site(FormMsg::Save));
    assert_eq!(bench.app.store().registers().unwrap().sites.len(), 1);
    bench.tell(Msg::Plant(Plant::AddSite));
    assert!(!bench.office.plant.site_form.taken_up_again, "what was saved is no draft any more");

    bench.tell(Msg::Plant(Plant::AddAppliance));
    bench.type_in(appliance, &[("identification", "H-")]);
    bench.tell(Msg::Back);
    bench.tell(Msg::Plant(Plant::AddAppliance));
    assert_eq!(bench.office.plant.appliance_form.text("identification"), "H-");
    bench.tell(appliance(FormMsg::Anew));
    let form = &bench.office.plant.appliance_form;
    assert!(!form.taken_up_again && form.text("identification").is_empty() && !form.text("category").is_empty(), "{form:?}");
}

#[test]
fn one_row_stands_for_all_duties_of_a_kind() {
    let mut bench = led();
    let (_, id) = bench.ids();
    let visit = bench.begin();
    bench.charge(&visit, id, "70", "50");
    bench.clock.forward(chrono::Duration::days(10));
    bench.charge(&visit, id, "50", "40");
    bench.clock.forward(chrono::Duration::days(10));
    bench.charge(&visit, id, "40", "30");
    bench.office.look(&bench.app);
    let pending = |bench: &Bench, name: &str| {
        let judged = &bench.office.overview.as_ref().unwrap().appliances[0];
        judged.pending().filter(|duty| duty.kind.name() == name).count()
    };
    let repairs = pending(&bench, "repair");
    assert!(repairs > 1, "two rates over the trigger, each with its repair: {repairs}");
    let page = bench.office.due_page();
    let rows: Vec<&Line> = page.lines.iter().filter(|row| row.name.starts_with("Repair")).collect();
    assert_eq!((rows.len(), rows[0].name.as_str()), (1, format!("Repair ({repairs})").as_str()));
    let item = {
        bench.tell(Msg::Due(Due::Open(rows[0].key.clone())));
        bench.office.due_page().item.unwrap()
    };
    assert!(item.facts.iter().any(|fact| fact.caption == "also open"), "{:?}", item.facts);
    // The sum is worked through, with its article.
    let sum = item.reasons.iter().flat_map(|reason| &reason.inputs).find(|fact| fact.caption == "sum").expect("a sum");
    assert!(sum.value.contains("365") && item.reasons.iter().any(|reason| reason.source.contains("82.152")), "{:?}", item.reasons);

    for (grouping, heading, facts) in
        [("site", "Fish market", "R-1"), ("person", "Ada Quill", "R-1, Fish market"), ("month", "April 2026", "R-1, Fish market")]
    {
        bench.tell(Msg::Due(Due::Grouping(grouping.to_owned())));
        let lines = bench.office.due_page().lines;
        assert!(lines.iter().any(|row| row.heading && row.name == heading), "{grouping}: {lines:?}");
        assert!(lines.iter().any(|row| row.name.starts_with("Repair") && row.facts == facts), "{grouping}: {lines:?}");
    }
    bench.tell(Msg::Due(Due::PrintList));
    let printed = bench.office.documents.join("due 2026-03-23 by month.pdf");
    assert!(std::fs::read(&printed).unwrap().starts_with(b"%PDF-"), "{}", bench.office.due.written);
    bench.tell(Msg::Due(Due::WriteCalendar));
    let calendar = std::fs::read_to_string(bench.office.documents.join("duties.ics")).unwrap();
    assert!(calendar.starts_with("BEGIN:VCALENDAR") && calendar.contains("R-1"), "{calendar}");
}

#[test]
fn an_account_of_one_owner_counts_that_owners_visits() {
    let mut bench = led();
    let (_, id) = bench.ids();
    let visit = bench.begin();
    bench.charge(&visit, id, "70", "50");
    bench.app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    bench.tell(Msg::Plant(Plant::AddSite));
    bench.type_in(site, &[("name", "Ice rink"), ("owner", "Rink Ltd")]);
    bench.tell(site(FormMsg::Save));
    bench.tell(Msg::Plant(Plant::AddAppliance));
    bench.type_in(appliance, &[("identification", "H-1"), ("gas", "R-22")]);
    bench.tell(appliance(FormMsg::Save));
    bench.tell(Msg::Go(Place::Account));
    assert!(bench.office.account_page().extent.ends_with("from 1 visit"), "{}", bench.office.account_page().extent);
    bench.tell(Msg::Account(super::account::Msg::Owner("Rink Ltd".to_owned())));
    assert!(bench.office.account_page().extent.ends_with("from 0 visits"), "{}", bench.office.account_page().extent);
    bench.tell(Msg::Account(super::account::Msg::Owner("Harbour Fish Ltd".to_owned())));
    assert!(bench.office.account_page().extent.ends_with("from 1 visit"), "{}", bench.office.account_page().extent);
}

#[test]
fn a_cylinder_is_weighed_anew_beside_what_was_last_known() {
    let mut bench = led();
    let key = bench.office.cylinders_page().lines[1].key.clone();
    bench.tell(Msg::Cylinders(Cylinders::Open(key)));
    bench.tell(Msg::Cylinders(Cylinders::Edit));
    assert_eq!(bench.office.cylinders.form.text("gross"), "");
    assert!(bench.office.last_gross_words().starts_with("last known 31.75"), "{}", bench.office.last_gross_words());
}

#[test]
fn a_chronic_leak_is_reported_at_the_laws_own_share() {
    let asks = crate::view::words::office::duty_asks(crate::rules::DutyKind::ChronicLeakReport, "125 %");
    assert!(asks.contains("125 %"), "{asks}");
    let rows = &crate::rules::rulebook("us-82f").unwrap().duties;
    let row = rows.iter().find(|row| row.duty == crate::rules::DutyKind::ChronicLeakReport).unwrap();
    assert_eq!(row.percent.map(crate::view::format::trigger).as_deref(), Some("125 %"), "the window shows the row's own share");
}
