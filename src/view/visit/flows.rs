//! Whole flows over the desk, without a window.

use super::close::{self, InkMsg, NOBODY, Signer};
use super::{
    Panel, begin, cautions, charge, choose_appliance, choose_cylinder, closed, entry, facts, leak_test, note, page, recover, repair,
    weighing, when,
};
use crate::app::testing::{CountedIds, SetClock};
use crate::app::{App, NewSite};
use crate::ledger::{
    ApplianceFacts, ApplianceId, Category, CylinderFacts, CylinderId, CylinderKind, GasStatus, Person, PersonId, RateMethod, SiteFacts,
    SiteId,
};
use crate::quantity::{MassUnit, Weighing};
use crate::store::{OpenMode, Store};
use crate::view::{Desk, DeskOptions, Msg, Page};
use std::cell::RefCell;
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// A store on disk, its folder for records, and what was handed to the platform.
struct Bench {
    folder: tempfile::TempDir,
    clock: SetClock,
    opened: Rc<RefCell<Vec<PathBuf>>>,
}

struct Plant {
    site: SiteId,
    r1: ApplianceId,
    f1: ApplianceId,
    cylinder: CylinderId,
}

fn weighing(text: &str) -> Option<Weighing> {
    Some(Weighing::new(text, MassUnit::Kilogram))
}

pub fn appliance(gas: &str, full_charge: &str) -> ApplianceFacts {
    ApplianceFacts {
        full_charge: weighing(full_charge).and_then(|written| written.mass().ok()),
        full_charge_written: weighing(full_charge),
        installed_on: "2020-05-01".parse().ok(),
        place: "cold room 2".to_owned(),
        ..ApplianceFacts::new(Category::CommercialRefrigeration, gas)
    }
}

fn cylinder(gas: Option<&str>, gross: Option<&str>) -> CylinderFacts {
    let mass = |text: &str| Weighing::new(text, MassUnit::Kilogram).mass().unwrap();
    CylinderFacts {
        refrigerant: gas.map(str::to_owned),
        gas_status: gas.map(|_| GasStatus::Virgin),
        gross: gross.map(mass),
        gross_written: gross.and_then(weighing),
        water_capacity_l: Some("26.2".to_owned()),
        service_pressure_psig: Some("400".to_owned()),
        location: "van 3".to_owned(),
        ..CylinderFacts::new(
            if gas.is_some() { CylinderKind::Supply } else { CylinderKind::Recovery },
            mass("10"),
            Weighing::new("10", MassUnit::Kilogram),
        )
    }
}

impl Bench {
    fn new() -> Self {
        let clock = SetClock::at("2026-04-01T09:05:00Z".parse().unwrap(), chrono_tz::Europe::Lisbon);
        Self { folder: tempfile::tempdir().unwrap(), clock, opened: Rc::default() }
    }

    fn app(&self) -> App {
        let store = Store::open(&self.folder.path().join("store.db"), OpenMode::Create).unwrap();
        let ids = CountedIds::after(u64::try_from(store.last_position().unwrap()).unwrap() * 1000 + 1);
        App::with(store, Box::new(self.clock.clone()), Box::new(ids)).unwrap()
    }

    fn desk(&self, app: App) -> Desk {
        let opened = Rc::clone(&self.opened);
        let options = DeskOptions {
            documents: self.folder.path().join("documents"),
            open: Box::new(move |path| {
                opened.borrow_mut().push(path.to_path_buf());
                Ok(())
            }),
        };
        Desk::new(app, options).unwrap()
    }

    fn with_plant(&self) -> (Desk, Plant) {
        let app = self.app();
        let person = Person {
            id: PersonId(uuid::Uuid::nil()),
            name: "Mara Lindqvist".to_owned(),
            certificate: "4711-A".to_owned(),
            certificate_kind: "category I".to_owned(),
            valid_from: None,
            valid_to: None,
            company: String::new(),
            company_certificate: String::new(),
        };
        app.add_person(person).unwrap();
        let facts = SiteFacts {
            owner: "Harbour Fish Ltd".to_owned(),
            address: "Quay 7".to_owned(),
            time_zone: "America/New_York".to_owned(),
            ..SiteFacts::under(vec!["us-82f".to_owned()])
        };
        let site = app.add_site(NewSite { name: "Fish market".to_owned(), facts }).unwrap();
        let r1 = app.add_appliance_with(site, "R-1", appliance("R-22", "45.36")).unwrap();
        let f1 = app.add_appliance_with(site, "F-1", appliance("R-22", "30")).unwrap();
        let cylinder = app.add_cylinder("S-204", cylinder(Some("R-22"), Some("24.18"))).unwrap();
        (self.desk(app), Plant { site, r1, f1, cylinder })
    }
}

fn acknowledge_all(desk: &mut Desk) {
    assert_eq!(desk.panel(), Panel::Cautions, "{:?}", desk.message());
    for caution in desk.cautions_shown().unwrap().cautions {
        desk.update(Msg::Cautions(cautions::Msg::Acknowledge(caution.key)));
    }
    assert!(desk.cautions_shown().unwrap().ready.ready);
    desk.update(Msg::Cautions(cautions::Msg::GoOn));
}

fn charge_keys(desk: &mut Desk, keys: &str) {
    for key in keys.chars() {
        desk.update(Msg::Charge(charge::Msg::Weighing(weighing::Msg::Key(key.to_string()))));
    }
}

fn next_reading(desk: &mut Desk) {
    desk.update(Msg::Charge(charge::Msg::Weighing(weighing::Msg::Next)));
}

fn sign(desk: &mut Desk, who: Signer) {
    for (x, y, first) in [(100, 500, true), (900, 300, false), (1400, 700, false)] {
        desk.update(Msg::Close(close::Msg::Ink(who, InkMsg::Point { x, y, first })));
    }
    desk.update(Msg::Close(close::Msg::Ink(who, InkMsg::Lifted)));
}

fn begin_charge(desk: &mut Desk, plant: &Plant) {
    desk.ask_where().unwrap();
    desk.update(Msg::Begin(begin::Msg::Begin(plant.site.to_string())));
    assert_eq!(desk.panel(), Panel::ChooseAppliance);
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Choose(plant.r1.to_string())));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    acknowledge_all(desk);
    assert_eq!(desk.panel(), Panel::Charge, "the only cylinder that fits is taken");
}

/// What was charged, in kg, as sums count it.
fn charged(desk: &Desk, appliance: ApplianceId) -> Vec<String> {
    let lines = desk.app().store().lines_of(appliance).unwrap();
    lines.iter().filter_map(|line| line.act.transfer()).map(|transfer| transfer.mass.kg_text()).collect()
}

fn fine(desk: &Desk) {
    assert!(desk.message().is_none_or(|message| !message.grave), "{:?}", desk.message());
}

#[test]
fn a_charge_shows_what_follows_before_it_is_saved() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    let empty = desk.charge_shown().unwrap();
    assert!(!empty.ready.ready && empty.after.is_empty());
    assert_eq!(empty.weighing.first.last, "last 24.18 kg");
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "14.18");
    let shown = desk.charge_shown().unwrap();
    assert!(shown.ready.ready, "{:?}", shown.ready);
    assert_eq!((shown.weighing.net.as_str(), shown.weighing.net_unit.as_str()), ("10", "kg"));
    // 10 ÷ 45.36 × 365 ÷ 365 = 22.05 %: over the 20 % of commercial refrigeration.
    assert_eq!((shown.after[0].figure.as_str(), shown.after[0].trigger.as_str()), ("22.05", "20 %"));
    assert_eq!(shown.after[0].word, "over trigger");
    let follows: Vec<(&str, &str)> = shown.follows.iter().map(|fact| (fact.caption.as_str(), fact.value.as_str())).collect();
    assert!(follows.contains(&("starts: repair", "by 1 May")), "{follows:?}");
    assert!(follows.contains(&("ODP-weighted", "0.550 kg")), "{follows:?}");
    assert!(follows.contains(&("left in S-204", "4.18 kg")), "{follows:?}");
    // Nothing is saved by looking.
    assert!(desk.app().store().lines_of(plant.r1).unwrap().is_empty());
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    assert_eq!(desk.panel(), Panel::None);
    let page = desk.visit_shown().unwrap();
    assert_eq!((page.entries.len(), page.entries[0].state.as_str()), (1, "10 kg"));
    assert_eq!((page.rates[0].figure.as_str(), page.rates[0].caption.as_str()), ("22.05", "leak rate, annualizing method"));
    assert!(page.can_close);
}

#[test]
fn a_leak_rate_says_by_which_method_and_none_says_none() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    let site = desk.app().store().site(plant.site).unwrap().unwrap();
    let facts = SiteFacts { rate_method: RateMethod::RollingAverage, ..site.versions.latest().clone() };
    desk.app().change_site(plant.site, facts, "2020-01-01".parse().unwrap(), "chosen").unwrap();
    begin_charge(&mut desk, &plant);
    assert_eq!(desk.visit_shown().unwrap().rates[0].caption, "leak rate", "none is due yet");
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "14.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    assert_eq!(desk.visit_shown().unwrap().rates[0].caption, "leak rate, rolling average method");
}

#[test]
fn readings_that_cannot_be_are_said_and_not_saved() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "25");
    let wrong_way = desk.charge_shown().unwrap();
    assert!(wrong_way.weighing.error.contains("heavier") && !wrong_way.ready.ready, "{:?}", wrong_way.weighing.error);
    charge_keys(&mut desk, "back");
    for _ in 0..2 {
        desk.update(Msg::Charge(charge::Msg::Weighing(weighing::Msg::Key("back".to_owned()))));
    }
    charge_keys(&mut desk, "9.5");
    let below = desk.charge_shown().unwrap();
    assert!(below.refusal.text.contains("weighs empty") && !below.refusal.with_reason && !below.ready.ready);
    desk.update(Msg::Charge(charge::Msg::Save));
    assert!(desk.message().is_some_and(|message| message.grave));
    assert!(desk.app().store().lines_of(plant.r1).unwrap().is_empty());
}

#[test]
fn a_cylinder_that_weighs_otherwise_is_asked_about() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "23.00");
    next_reading(&mut desk);
    charge_keys(&mut desk, "20.00");
    let asked = desk.charge_shown().unwrap();
    assert!(asked.weighing.gap_words.contains("1.18 kg less"), "{}", asked.weighing.gap_words);
    assert!(!asked.ready.ready);
    desk.update(Msg::Charge(charge::Msg::Weighing(weighing::Msg::GapReason("do not know".to_owned()))));
    assert!(desk.charge_shown().unwrap().ready.ready);
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    // Not knowing leaves it open at the site.
    assert!(desk.facts_shown().unwrap().still_open.iter().any(|line| line.state == "unanswered"));
}

#[test]
fn one_weighing_serves_as_after_and_before() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "22.18");
    desk.update(Msg::Charge(charge::Msg::SaveNextAppliance));
    fine(&desk);
    assert_eq!(desk.panel(), Panel::ChooseAppliance);
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Choose(plant.f1.to_string())));
    assert_eq!(desk.panel(), Panel::Charge);
    let shown = desk.charge_shown().unwrap();
    assert_eq!((shown.weighing.first.text.as_str(), shown.weighing.active.as_str()), ("22.18", "after"));
    assert!(shown.appliance.starts_with("F-1"));
    charge_keys(&mut desk, "21.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    assert_eq!(desk.app().store().lines_of(plant.f1).unwrap().len(), 1);
    let standing = desk.app().cylinder_standing(plant.cylinder, "2026-04-01".parse().unwrap()).unwrap();
    assert_eq!(standing.balance.content.mass().unwrap().kg_text(), "11.18");
}

#[test]
fn a_visit_is_closed_printed_opened_and_handed_over() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "22.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Close)));
    let shown = desk.close_shown().unwrap();
    assert_eq!(shown.parts.len(), 1);
    let home = shown.cautions.iter().find(|caution| caution.key == "16").expect("the way home is read about");
    assert!(!home.acknowledged && !shown.onward.ready && !shown.ready.ready);
    desk.update(Msg::Close(close::Msg::Acknowledge("16".to_owned())));
    assert!(desk.close_shown().unwrap().onward.ready);
    let seen = desk.app().visit(desk.work().unwrap().visit.id).unwrap().cautions;
    assert!(seen.iter().any(|seen| seen.caution == "16"), "and kept with the others");
    desk.update(Msg::Close(close::Msg::Signing(true)));
    sign(&mut desk, Signer::Technician);
    desk.update(Msg::Close(close::Msg::Edited("representative".to_owned(), "Otto Prins".to_owned())));
    sign(&mut desk, Signer::Representative);
    assert!(desk.close_shown().unwrap().ready.ready);
    desk.update(Msg::Close(close::Msg::Close));
    fine(&desk);
    assert_eq!(desk.page(), Page::Closed);
    desk.update(Msg::Closed(closed::Msg::OpenRecord));
    let opened = bench.opened.borrow().clone();
    let [file] = opened.as_slice() else { panic!("{opened:?}") };
    assert!(file.starts_with(bench.folder.path().join("documents/Bubblepoint/2026/Fish market")), "{}", file.display());
    assert!(file.file_name().unwrap().to_string_lossy().starts_with("2026-04-01 R-1 "));
    assert!(std::fs::read(file).unwrap().starts_with(b"%PDF-"));
    desk.update(Msg::Closed(closed::Msg::ToWhom("Otto Prins".to_owned())));
    desk.update(Msg::Closed(closed::Msg::HandOver));
    fine(&desk);
    assert_eq!(desk.closed_shown().unwrap().handed_over[0].value, "Otto Prins, as a file");
    desk.update(Msg::Back);
    assert_eq!(desk.page(), Page::Due);
}

#[test]
fn what_was_typed_is_there_after_a_sudden_end() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "19.6");
    desk.app().flush_drafts().unwrap();
    // The desk is not ended: another one opens the same file, as after a kill.
    let again = bench.desk(bench.app());
    assert_eq!((again.page(), again.panel()), (Page::Visit, Panel::Charge));
    let shown = again.charge_shown().unwrap();
    assert_eq!((shown.weighing.first.text.as_str(), shown.weighing.second.text.as_str()), ("24.18", "19.6"));
    assert!(shown.weighing.cylinder.starts_with("S-204"));
    assert!(again.message().is_some_and(|message| !message.grave && message.text.contains("Fish market")));
}

#[test]
fn a_leak_is_found_repaired_and_tested() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    desk.begin_at(plant.site).unwrap();
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Choose(plant.r1.to_string())));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::LeakTest)));
    acknowledge_all(&mut desk);
    desk.update(Msg::LeakTest(leak_test::Msg::Result("leak found".to_owned())));
    assert!(!desk.leak_test_shown().unwrap().ready.ready);
    desk.update(Msg::LeakTest(leak_test::Msg::Edited("place".to_owned(), "flare at drier".to_owned())));
    desk.update(Msg::LeakTest(leak_test::Msg::Save));
    fine(&desk);
    assert_eq!(desk.visit_shown().unwrap().leaks.len(), 1);
    desk.update(Msg::Visit(page::Msg::OpenItem("leak/flare at drier".to_owned())));
    acknowledge_all(&mut desk);
    let shown = desk.repair_shown().unwrap();
    assert_eq!((shown.step.as_str(), shown.leak.as_str()), ("repair", "flare at drier"));
    desk.update(Msg::Repair(repair::Msg::Edited("done".to_owned(), "flare made anew".to_owned())));
    desk.update(Msg::Repair(repair::Msg::Save));
    fine(&desk);
    assert!(desk.visit_shown().unwrap().leaks.is_empty());
    // The visit is not complete without its initial test; the repair page begins with it.
    assert!(desk.close_shown().unwrap().missing.iter().any(|missing| missing.contains("initial verification test")));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Repair)));
    assert_eq!(desk.repair_shown().unwrap().step, "initial");
    desk.update(Msg::Repair(repair::Msg::Save));
    fine(&desk);
    assert!(!desk.close_shown().unwrap().missing.iter().any(|missing| missing.contains("initial verification test")));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Repair)));
    assert_eq!(desk.repair_shown().unwrap().step, "follow-up");
    let names: Vec<String> = desk.visit_shown().unwrap().entries.into_iter().map(|line| line.name).collect();
    assert_eq!(names, ["Leak inspection", "Repair", "Initial verification test"]);
}

#[test]
fn a_recovery_shows_its_room_and_stops_at_the_limit() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    desk.app().add_cylinder("V-12", cylinder(None, None)).unwrap();
    desk.reload_registers().unwrap();
    desk.begin_at(plant.site).unwrap();
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Choose(plant.r1.to_string())));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Recover)));
    acknowledge_all(&mut desk);
    // The supply cylinder holds the same gas: both could take it.
    assert_eq!(desk.panel(), Panel::ChooseCylinder);
    let choice = desk.choose_cylinder_shown().unwrap();
    let empty = choice.fitting.iter().find(|line| line.name == "V-12").unwrap().key.clone();
    desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Choose(empty)));
    let key = |desk: &mut Desk, keys: &str| {
        for key in keys.chars() {
            desk.update(Msg::Recover(recover::Msg::Weighing(weighing::Msg::Key(key.to_string()))));
        }
    };
    key(&mut desk, "10.00");
    desk.update(Msg::Recover(recover::Msg::Weighing(weighing::Msg::Next)));
    key(&mut desk, "13.50");
    let shown = desk.recover_shown().unwrap();
    assert!(shown.ready.ready && !shown.over_limit, "{:?}", shown.ready);
    assert_eq!(shown.weighing.net, "3.5");
    // 0.8 × 1.1907 kg/l × 26.2 l × 0.9 for oil is some 22.4 kg, less 3.5 kg.
    assert!(shown.room.starts_with("18.9") || shown.room.starts_with("19.0"), "{}", shown.room);
    for _ in 0..5 {
        desk.update(Msg::Recover(recover::Msg::Weighing(weighing::Msg::Key("back".to_owned()))));
    }
    key(&mut desk, "35.50");
    let over = desk.recover_shown().unwrap();
    assert!(over.over_limit && !over.ready.ready && over.refusal.with_reason);
    desk.update(Msg::Recover(recover::Msg::Reason("valve stuck open".to_owned())));
    assert!(desk.recover_shown().unwrap().ready.ready, "what has happened can be written down");
}

#[test]
fn a_wrong_entry_is_struck_and_a_closed_one_corrected() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "22.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    let key = desk.visit_shown().unwrap().entries[0].key.clone();
    desk.update(Msg::Visit(page::Msg::OpenEntry(key)));
    assert!(desk.entry_shown().unwrap().can_strike);
    desk.update(Msg::Entry(entry::Msg::Step(entry::Step::Strike)));
    desk.update(Msg::Entry(entry::Msg::Edited("reason".to_owned(), "wrong cylinder".to_owned())));
    desk.update(Msg::Entry(entry::Msg::Strike));
    fine(&desk);
    let page = desk.visit_shown().unwrap();
    assert!(page.entries[0].struck && page.entries[0].facts.contains("wrong cylinder"));
    assert_eq!(charged(&desk, plant.r1), [""; 0], "struck entries are left out of sums");

    desk.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "20.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    let second = desk.visit_shown().unwrap().entries[1].key.clone();
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Close)));
    sign(&mut desk, Signer::Technician);
    desk.update(Msg::Close(close::Msg::Counterpart(NOBODY.to_owned())));
    desk.update(Msg::Close(close::Msg::Close));
    fine(&desk);
    desk.open_entry(super::id(&second, crate::ledger::EntryId).unwrap()).unwrap();
    let shown = desk.entry_shown().unwrap();
    assert!(!shown.can_strike && shown.can_correct);
    desk.update(Msg::Entry(entry::Msg::Step(entry::Step::Correct)));
    desk.update(Msg::Entry(entry::Msg::Edited("instead".to_owned(), "3.5 kg".to_owned())));
    desk.update(Msg::Entry(entry::Msg::Edited("reason".to_owned(), "misread".to_owned())));
    desk.update(Msg::Entry(entry::Msg::Signing(true)));
    desk.update(Msg::Entry(entry::Msg::Ink(Signer::Technician, InkMsg::Point { x: 5, y: 5, first: true })));
    assert!(!desk.entry_shown().unwrap().ready.ready, "the representative signs, or it is said why not");
    desk.update(Msg::Entry(entry::Msg::Counterpart(close::LATER.to_owned())));
    desk.update(Msg::Entry(entry::Msg::Edited("representative".to_owned(), "Otto Prins".to_owned())));
    assert!(desk.entry_shown().unwrap().ready.ready);
    desk.update(Msg::Entry(entry::Msg::Correct));
    fine(&desk);
    assert_eq!(charged(&desk, plant.r1), ["3.5"]);
    let visits = desk.app().store().visits(&crate::store::VisitFilter::default()).unwrap();
    let correction = visits.into_iter().filter_map(|visit| visit.closing).next_back().unwrap();
    assert_eq!(correction.counterpart, crate::ledger::Counterpart::SignsLater { name: "Otto Prins".to_owned() });
}

/// Takes R-1 in hand at a visit that has begun.
fn begin_at_r1(desk: &mut Desk, plant: &Plant) {
    desk.begin_at(plant.site).unwrap();
    if desk.panel() == Panel::Facts {
        desk.update(Msg::Facts(facts::Msg::GoOn));
    }
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Choose(plant.r1.to_string())));
}

fn second_person(desk: &mut Desk) -> PersonId {
    let person = Person {
        id: PersonId(uuid::Uuid::nil()),
        name: "Ibrahim Keller".to_owned(),
        certificate: "4712-A".to_owned(),
        certificate_kind: "category I".to_owned(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    };
    let person = desk.app().add_person(person).unwrap();
    desk.reload_registers().unwrap();
    person
}

#[test]
fn what_leads_to_an_act_closes_when_another_appliance_is_taken() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    desk.app().add_cylinder("S-205", cylinder(Some("R-22"), Some("20"))).unwrap();
    desk.reload_registers().unwrap();
    begin_at_r1(&mut desk, &plant);
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    assert_eq!(desk.panel(), Panel::Cautions);
    desk.update(Msg::Visit(page::Msg::ChooseAppliance(plant.f1.to_string())));
    assert_eq!(desk.panel(), Panel::None, "cautions of R-1 do not stand over F-1");
    desk.update(Msg::Visit(page::Msg::ChooseAppliance(plant.r1.to_string())));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    acknowledge_all(&mut desk);
    assert_eq!(desk.panel(), Panel::ChooseCylinder, "two fit");
    desk.update(Msg::Visit(page::Msg::ChooseAppliance(plant.f1.to_string())));
    assert_eq!(desk.panel(), Panel::None);
    // A tap that was under way when the page changed goes nowhere.
    desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Choose(plant.cylinder.to_string())));
    assert_eq!(desk.panel(), Panel::None);
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Choose(plant.cylinder.to_string())));
    assert!(desk.charge_shown().unwrap().appliance.starts_with("F-1"));
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "22.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    assert_eq!((charged(&desk, plant.f1).len(), charged(&desk, plant.r1).len()), (1, 0));
}

#[test]
fn each_entry_says_who_did_it_and_when() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_at_r1(&mut desk, &plant);
    let second = second_person(&mut desk);
    desk.update(Msg::Facts(facts::Msg::SetAtWork(second.to_string(), true)));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Note)));
    let stamp = desk.stamp_shown().unwrap();
    assert_eq!((stamp.when.as_str(), stamp.who.as_str()), ("now", "Mara Lindqvist"));
    let note = |desk: &mut Desk, text: &str| {
        desk.update(Msg::Note(note::Msg::Edited("text".to_owned(), text.to_owned())));
        desk.update(Msg::Note(note::Msg::Save));
    };
    // 05:05 in New York: what is still to come is refused, noon of the day before is not.
    let when = |desk: &mut Desk, msg: when::Msg| desk.update(Msg::When(msg));
    when(&mut desk, when::Msg::Open);
    when(&mut desk, when::Msg::Person(second.to_string()));
    for key in ["1", "2", "0", "5"] {
        when(&mut desk, when::Msg::Key(key.to_owned()));
    }
    let shown = desk.when_shown().unwrap();
    assert_eq!((shown.time.text.as_str(), shown.people.len()), ("12:05", 2));
    assert!(shown.error.contains("has not come yet") && !shown.ready.ready, "{}", shown.error);
    when(&mut desk, when::Msg::Step("day".to_owned(), -1));
    assert!(desk.when_shown().unwrap().ready.ready);
    when(&mut desk, when::Msg::Done);
    assert_eq!((desk.panel(), desk.stamp_shown().unwrap().when.as_str()), (Panel::Note, "31 Mar 12:05"));
    note(&mut desk, "looked at noon");
    fine(&desk);
    // The next one is now again, and by the one named last.
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Note)));
    assert_eq!((desk.stamp_shown().unwrap().when.as_str(), desk.stamp_shown().unwrap().who.as_str()), ("now", "Ibrahim Keller"));
    note(&mut desk, "looked now");
    fine(&desk);
    let entries = desk.app().store().entries_of_visit(desk.work().unwrap().visit.id).unwrap();
    let told: Vec<(String, Option<u16>, Option<PersonId>)> =
        entries.into_iter().map(|entry| (entry.line.at.date.to_string(), entry.line.at.minute, entry.detail.person)).collect();
    assert_eq!(told, [("2026-03-31".to_owned(), Some(725), Some(second)), ("2026-04-01".to_owned(), Some(305), Some(second))]);
}

#[test]
fn a_day_before_the_installation_is_said_at_the_action() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_at_r1(&mut desk, &plant);
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Note)));
    desk.update(Msg::Note(note::Msg::Edited("text".to_owned(), "seen".to_owned())));
    assert!(desk.note_shown().unwrap().ready.ready);
    desk.update(Msg::When(when::Msg::Open));
    desk.update(Msg::When(when::Msg::Step("year".to_owned(), -7)));
    desk.update(Msg::When(when::Msg::Done));
    let ready = desk.note_shown().unwrap().ready;
    assert!(!ready.ready && ready.why_not.contains("was installed on 2020-05-01"), "{ready:?}");
    assert!(desk.stamp_shown().unwrap().wrong);
    desk.update(Msg::When(when::Msg::Open));
    desk.update(Msg::When(when::Msg::Now));
    desk.update(Msg::When(when::Msg::Done));
    assert!(desk.note_shown().unwrap().ready.ready);
}

#[test]
fn what_is_open_is_read_first_and_a_gap_can_be_answered_later() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "23.00");
    next_reading(&mut desk);
    charge_keys(&mut desk, "22.00");
    desk.update(Msg::Charge(charge::Msg::Weighing(weighing::Msg::GapReason("do not know".to_owned()))));
    desk.update(Msg::Charge(charge::Msg::Save));
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Close)));
    sign(&mut desk, Signer::Technician);
    desk.update(Msg::Close(close::Msg::Counterpart(NOBODY.to_owned())));
    desk.update(Msg::Close(close::Msg::Close));
    fine(&desk);
    // The next visit begins with what is open here.
    desk.begin_at(plant.site).unwrap();
    assert_eq!(desk.panel(), Panel::Facts);
    let shown = desk.facts_shown().unwrap();
    assert!(shown.goes_on);
    let gap = shown.still_open.iter().find(|line| line.state == "unanswered").expect("the gap is still open").key.clone();
    desk.update(Msg::Facts(facts::Msg::Open(gap)));
    let asked = desk.entry_shown().unwrap();
    assert_eq!((asked.step, asked.answers.len(), asked.ready.ready), (entry::Step::Answer, 4, false));
    desk.update(Msg::Entry(entry::Msg::Answer("used elsewhere".to_owned())));
    desk.update(Msg::Entry(entry::Msg::SaveAnswer));
    fine(&desk);
    assert!(!desk.facts_shown().unwrap().still_open.iter().any(|line| line.state == "unanswered"));
    assert!(desk.visit_shown().unwrap().entries.iter().any(|line| line.facts.contains("used elsewhere")));
}

#[test]
fn a_duty_leads_to_the_act_that_meets_it() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "14.18");
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    let key = |desk: &Desk, name: &str| {
        let duties = desk.visit_shown().unwrap().duties;
        duties.iter().find(|duty| duty.name == name).unwrap_or_else(|| panic!("{duties:?}")).key.clone()
    };
    let initial = key(&desk, "Initial verification test");
    desk.update(Msg::Visit(page::Msg::OpenItem(initial)));
    acknowledge_all(&mut desk);
    assert_eq!((desk.panel(), desk.repair_shown().unwrap().step.as_str()), (Panel::Repair, "initial"));
    let repair = key(&desk, "Repair");
    desk.update(Msg::Visit(page::Msg::OpenItem(repair)));
    assert_eq!(desk.repair_shown().unwrap().step, "repair");
    let inspection = key(&desk, "Leak inspection");
    desk.update(Msg::Visit(page::Msg::OpenItem(inspection)));
    assert!(matches!(desk.panel(), Panel::Cautions | Panel::LeakTest));
}

#[test]
fn what_is_typed_about_an_entry_or_a_hand_over_outlives_a_sudden_end() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_charge(&mut desk, &plant);
    charge_keys(&mut desk, "24.18");
    next_reading(&mut desk);
    charge_keys(&mut desk, "22.18");
    desk.update(Msg::Charge(charge::Msg::SaveNextAppliance));
    fine(&desk);
    let first = desk.work().unwrap().entries[0].line.entry;
    desk.update(Msg::Visit(page::Msg::OpenEntry(first.to_string())));
    desk.update(Msg::Entry(entry::Msg::Step(entry::Step::Strike)));
    desk.update(Msg::Entry(entry::Msg::Edited("reason".to_owned(), "wrong cyl".to_owned())));
    desk.app().flush_drafts().unwrap();

    let mut again = bench.desk(bench.app());
    again.open_entry(first).unwrap();
    let shown = again.entry_shown().unwrap();
    assert_eq!((shown.step, shown.reason.as_str()), (entry::Step::Strike, "wrong cyl"));
    again.update(Msg::Back);
    again.update(Msg::Back);
    // The reading that was carried over is there for whichever appliance comes next.
    again.update(Msg::Visit(page::Msg::ChooseAppliance(plant.f1.to_string())));
    again.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    let charge = again.charge_shown().unwrap();
    assert_eq!((charge.weighing.first.text.as_str(), charge.weighing.active.as_str()), ("22.18", "after"));
    assert!(charge.appliance.starts_with("F-1"));

    again.update(Msg::Visit(page::Msg::Ask(Panel::Close)));
    sign(&mut again, Signer::Technician);
    again.update(Msg::Close(close::Msg::Counterpart(NOBODY.to_owned())));
    again.update(Msg::Close(close::Msg::Close));
    fine(&again);
    let visit = again.app().store().visits(&crate::store::VisitFilter::default()).unwrap()[0].id;
    again.update(Msg::Closed(closed::Msg::ToWhom("Otto Pr".to_owned())));
    again.open_entry(first).unwrap();
    again.update(Msg::Entry(entry::Msg::Step(entry::Step::Correct)));
    again.update(Msg::Entry(entry::Msg::Edited("instead".to_owned(), "1.9 kg".to_owned())));
    again.update(Msg::Entry(entry::Msg::Ink(Signer::Technician, InkMsg::Point { x: 5, y: 5, first: true })));
    again.update(Msg::Entry(entry::Msg::Ink(Signer::Technician, InkMsg::Lifted)));
    again.app().flush_drafts().unwrap();

    let mut third = bench.desk(bench.app());
    third.show_closed(visit).unwrap();
    assert_eq!(third.closed_shown().unwrap().to_whom, "Otto Pr");
    third.open_entry(first).unwrap();
    let shown = third.entry_shown().unwrap();
    assert_eq!((shown.correcting.instead.as_str(), shown.strokes.is_empty()), ("1.9 kg", false));
}

#[test]
fn a_cylinder_added_while_recovering_keeps_what_is_in_it() {
    let bench = Bench::new();
    let (mut desk, plant) = bench.with_plant();
    begin_at_r1(&mut desk, &plant);
    let add = |desk: &mut Desk, name: &str, state: Option<&str>| {
        desk.update(Msg::Recover(recover::Msg::ChooseCylinder));
        desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::BeginAdding));
        if let Some(state) = state {
            desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Status(state.to_owned())));
        }
        for (field, text) in [("identification", name), ("tare", "10 kg"), ("water capacity", "26.2 l")] {
            desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Edited(field.to_owned(), text.to_owned())));
        }
        desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Add));
        fine(desk);
        let cylinders = desk.app().cylinders("2026-04-01".parse().unwrap()).unwrap();
        cylinders.into_iter().find(|cylinder| cylinder.cylinder.name == name).unwrap().facts
    };
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Recover)));
    acknowledge_all(&mut desk);
    let empty = add(&mut desk, "V-1", None);
    assert_eq!((empty.refrigerant, empty.gas_status), (None, None), "empty unless said otherwise");
    let held = add(&mut desk, "V-2", Some("recovered"));
    assert_eq!((held.refrigerant.as_deref(), held.gas_status), (Some("R-22"), Some(GasStatus::Recovered)));
    desk.update(Msg::Recover(recover::Msg::ChooseCylinder));
    desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::BeginAdding));
    let missing = desk.choose_cylinder_shown().unwrap().ready.why_not;
    assert!(missing.contains("cylinder") && !missing.contains("machine"), "{missing}");
}

#[test]
fn an_empty_store_leads_to_a_first_closed_visit() {
    let bench = Bench::new();
    let mut desk = bench.desk(bench.app());
    assert_eq!((desk.page(), desk.panel()), (Page::Visit, Panel::Begin));
    let shown = desk.begin_shown().unwrap();
    assert!(shown.adding && shown.asks_technician && !shown.ready.ready);
    for (field, text) in [("technician", "Mara Lindqvist"), ("site name", "Ice rink"), ("owner", "Rink Trust")] {
        desk.update(Msg::Begin(begin::Msg::Edited(field.to_owned(), text.to_owned())));
    }
    desk.update(Msg::Begin(begin::Msg::AddAndBegin));
    fine(&desk);
    // A device in Lisbon: the Union's rules, said at once.
    assert!(desk.message().unwrap().text.contains("2024/573"));
    assert_eq!(desk.panel(), Panel::ChooseAppliance);
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::BeginAdding));
    for (field, text) in [("identification", "H-1"), ("gas", "R-448A"), ("full charge", "30 kg")] {
        desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Edited(field.to_owned(), text.to_owned())));
    }
    assert!(desk.choose_appliance_shown().unwrap().ready.ready);
    desk.update(Msg::ChooseAppliance(choose_appliance::Msg::Add));
    fine(&desk);
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Charge)));
    acknowledge_all(&mut desk);
    assert_eq!(desk.panel(), Panel::ChooseCylinder);
    desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::BeginAdding));
    for (field, text) in [("identification", "C-1"), ("tare", "10 kg"), ("water capacity", "26.2 l")] {
        desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Edited(field.to_owned(), text.to_owned())));
    }
    desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::Add));
    fine(&desk);
    assert_eq!(desk.panel(), Panel::Charge);
    charge_keys(&mut desk, "20.00");
    next_reading(&mut desk);
    charge_keys(&mut desk, "18.00");
    desk.update(Msg::Charge(charge::Msg::Save));
    fine(&desk);
    desk.update(Msg::Visit(page::Msg::Ask(Panel::Close)));
    sign(&mut desk, Signer::Technician);
    desk.update(Msg::Close(close::Msg::Counterpart(NOBODY.to_owned())));
    desk.update(Msg::Close(close::Msg::Close));
    fine(&desk);
    assert_eq!(desk.page(), Page::Closed);
    let file = desk.closed_shown().unwrap();
    assert!(Path::new(&file.folder).join(&file.file).exists());
}
