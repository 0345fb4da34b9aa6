//! The page of the visit; where and on what work begins; its cautions.

use super::Gui;
use super::rows::{self, text};
use crate::app::AppError;
use crate::view::visit::{Panel, begin, cautions, choose_appliance, choose_cylinder, facts, page, when};
use crate::view::{Desk, Msg, Page};
use bubblepoint_ui::{
    Act, AppWindow, BeginAdapter, CautionsAdapter, ChooseApplianceAdapter, ChooseCylinderAdapter, VisitAdapter, VisitFactsAdapter,
    WhenAdapter,
};
use slint::ComponentHandle;
use std::rc::Rc;

pub fn connect(window: &AppWindow, gui: &Rc<Gui>) {
    let visit = window.global::<VisitAdapter>();
    on!(gui, visit.on_choose_appliance(key) => Msg::Visit(page::Msg::ChooseAppliance(key.into())));
    on!(gui, visit.on_ask(act) => Msg::Visit(page::Msg::Ask(panel(act))));
    on!(gui, visit.on_open_entry(key) => Msg::Visit(page::Msg::OpenEntry(key.into())));
    on!(gui, visit.on_open_item(key) => Msg::Visit(page::Msg::OpenItem(key.into())));
    on!(gui, visit.on_back() => Msg::Back);

    let begins = window.global::<BeginAdapter>();
    on!(gui, begins.on_search_for(typed) => Msg::Begin(begin::Msg::Search(typed.into())));
    on!(gui, begins.on_choose_person(key) => Msg::Begin(begin::Msg::Person(key.into())));
    on!(gui, begins.on_begin(site) => Msg::Begin(begin::Msg::Begin(site.into())));
    on!(gui, begins.on_begin_adding() => Msg::Begin(begin::Msg::BeginAdding));
    on!(gui, begins.on_edited(field, typed) => Msg::Begin(begin::Msg::Edited(field.into(), typed.into())));
    on!(gui, begins.on_add_and_begin() => Msg::Begin(begin::Msg::AddAndBegin));
    on!(gui, begins.on_back() => Msg::Back);

    let about = window.global::<VisitFactsAdapter>();
    on!(gui, about.on_set_at_work(key, at_work) => Msg::Facts(facts::Msg::SetAtWork(key.into(), at_work)));
    on!(gui, about.on_edited(_field, typed) => Msg::Facts(facts::Msg::Job(typed.into())));
    on!(gui, about.on_open(key) => Msg::Facts(facts::Msg::Open(key.into())));
    on!(gui, about.on_go_on() => Msg::Facts(facts::Msg::GoOn));
    on!(gui, about.on_back() => Msg::Back);

    let choose = window.global::<ChooseApplianceAdapter>();
    on!(gui, choose.on_search_for(typed) => Msg::ChooseAppliance(choose_appliance::Msg::Search(typed.into())));
    on!(gui, choose.on_choose(key) => Msg::ChooseAppliance(choose_appliance::Msg::Choose(key.into())));
    on!(gui, choose.on_begin_adding() => Msg::ChooseAppliance(choose_appliance::Msg::BeginAdding));
    on!(gui, choose.on_choose_gas(key) => Msg::ChooseAppliance(choose_appliance::Msg::Gas(key.into())));
    on!(gui, choose.on_edited(field, typed) => Msg::ChooseAppliance(choose_appliance::Msg::Edited(field.into(), typed.into())));
    on!(gui, choose.on_add() => Msg::ChooseAppliance(choose_appliance::Msg::Add));
    on!(gui, choose.on_back() => Msg::Back);

    let before = window.global::<CautionsAdapter>();
    on!(gui, before.on_acknowledge(key) => Msg::Cautions(cautions::Msg::Acknowledge(key.into())));
    on!(gui, before.on_go_on() => Msg::Cautions(cautions::Msg::GoOn));
    on!(gui, before.on_back() => Msg::Back);

    let when = window.global::<WhenAdapter>();
    on!(gui, when.on_open() => Msg::When(when::Msg::Open));
    on!(gui, when.on_choose_person(key) => Msg::When(when::Msg::Person(key.into())));
    on!(gui, when.on_step(part, by) => Msg::When(when::Msg::Step(part.into(), by)));
    on!(gui, when.on_today() => Msg::When(when::Msg::Today));
    on!(gui, when.on_key(key) => Msg::When(when::Msg::Key(key.into())));
    on!(gui, when.on_now() => Msg::When(when::Msg::Now));
    on!(gui, when.on_done() => Msg::When(when::Msg::Done));
}

fn panel(act: Act) -> Panel {
    match act {
        Act::None => Panel::None,
        Act::Begin => Panel::Begin,
        Act::Facts => Panel::Facts,
        Act::ChooseAppliance => Panel::ChooseAppliance,
        Act::Cautions => Panel::Cautions,
        Act::ChooseCylinder => Panel::ChooseCylinder,
        Act::When => Panel::When,
        Act::Charge => Panel::Charge,
        Act::Recover => Panel::Recover,
        Act::LeakTest => Panel::LeakTest,
        Act::Repair => Panel::Repair,
        Act::Pressure => Panel::Pressure,
        Act::Note => Panel::Note,
        Act::Entry => Panel::Entry,
        Act::Close => Panel::Close,
    }
}

fn act(panel: Panel) -> Act {
    match panel {
        Panel::None => Act::None,
        Panel::Begin => Act::Begin,
        Panel::Facts => Act::Facts,
        Panel::ChooseAppliance => Act::ChooseAppliance,
        Panel::Cautions => Act::Cautions,
        Panel::ChooseCylinder => Act::ChooseCylinder,
        Panel::When => Act::When,
        Panel::Charge => Act::Charge,
        Panel::Recover => Act::Recover,
        Panel::LeakTest => Act::LeakTest,
        Panel::Repair => Act::Repair,
        Panel::Pressure => Act::Pressure,
        Panel::Note => Act::Note,
        Panel::Entry => Act::Entry,
        Panel::Close => Act::Close,
    }
}

/// The panels that go back from adding to the list by themselves.
pub fn take_over(window: &AppWindow, desk: &mut Desk) {
    if desk.page() != Page::Visit {
        return;
    }
    match desk.panel() {
        Panel::Begin if !window.global::<BeginAdapter>().get_adding() => desk.update(Msg::Begin(begin::Msg::StopAdding)),
        Panel::ChooseAppliance if !window.global::<ChooseApplianceAdapter>().get_adding() => {
            desk.update(Msg::ChooseAppliance(choose_appliance::Msg::StopAdding));
        }
        Panel::ChooseCylinder if !window.global::<ChooseCylinderAdapter>().get_adding() => {
            desk.update(Msg::ChooseCylinder(choose_cylinder::Msg::StopAdding));
        }
        _ => {}
    }
}

/// What is open is set last: by then all that it shows is in place.
pub fn show_act(window: &AppWindow, desk: &Desk) {
    let visit = window.global::<VisitAdapter>();
    visit.set_act(act(desk.panel()));
}

pub fn show_page(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.visit_shown()?;
    let visit = window.global::<VisitAdapter>();
    visit.set_under_way(shown.under_way);
    visit.set_site(text(&shown.site));
    visit.set_since(text(&shown.since));
    visit.set_still_open(text(&shown.still_open));
    list!(visit.get_appliances, set_appliances, rows::lines(&shown.appliances));
    visit.set_appliance(text(&shown.appliance));
    visit.set_name(text(&shown.name));
    visit.set_place(text(&shown.place));
    list!(visit.get_rates, set_rates, rows::rates(&shown.rates));
    list!(visit.get_entries, set_entries, rows::lines(&shown.entries));
    visit.set_no_entry_words(text(&shown.no_entry_words));
    list!(visit.get_leaks, set_leaks, rows::lines(&shown.leaks));
    list!(visit.get_duties, set_duties, rows::lines(&shown.duties));
    list!(visit.get_reasons, set_reasons, rows::reasons(&shown.reasons));
    visit.set_can_close(shown.can_close);
    Ok(())
}

pub fn show_begin(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.begin_shown()?;
    let begins = window.global::<BeginAdapter>();
    begins.set_search(text(&shown.search));
    list!(begins.get_sites, set_sites, rows::lines(&shown.sites));
    begins.set_empty_words(text(&shown.empty_words));
    list!(begins.get_people, set_people, rows::choices(&shown.people));
    begins.set_person(text(&shown.person));
    begins.set_adding(shown.adding);
    begins.set_site_name(text(&shown.site_name));
    begins.set_site_name_error(text(&shown.site_name_error));
    begins.set_site_address(text(&shown.site_address));
    begins.set_owner(text(&shown.owner));
    begins.set_asks_technician(shown.asks_technician);
    begins.set_technician(text(&shown.technician));
    begins.set_ready(shown.ready.ready);
    begins.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_facts(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.facts_shown()?;
    let about = window.global::<VisitFactsAdapter>();
    about.set_site(text(&shown.site));
    let people = shown.people.iter().map(|person| bubblepoint_ui::PersonAtWork {
        key: text(&person.key),
        name: text(&person.name),
        facts: text(&person.facts),
        at_work: person.at_work,
    });
    list!(about.get_people, set_people, people.collect());
    about.set_job(text(&shown.job));
    list!(about.get_still_open, set_still_open, rows::lines(&shown.still_open));
    about.set_goes_on(shown.goes_on);
    Ok(())
}

pub fn show_choose_appliance(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.choose_appliance_shown()?;
    let choose = window.global::<ChooseApplianceAdapter>();
    choose.set_site(text(&shown.site));
    choose.set_search(text(&shown.search));
    list!(choose.get_appliances, set_appliances, rows::lines(&shown.appliances));
    choose.set_empty_words(text(&shown.empty_words));
    choose.set_adding(shown.adding);
    choose.set_identification(text(&shown.identification));
    choose.set_identification_error(text(&shown.identification_error));
    choose.set_gas(text(&shown.gas));
    choose.set_gas_error(text(&shown.gas_error));
    list!(choose.get_gases, set_gases, rows::choices(&shown.gases));
    choose.set_full_charge(text(&shown.full_charge));
    choose.set_full_charge_error(text(&shown.full_charge_error));
    choose.set_place(text(&shown.place));
    choose.set_ready(shown.ready.ready);
    choose.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_cautions(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.cautions_shown()?;
    let before = window.global::<CautionsAdapter>();
    before.set_act(text(&shown.act));
    before.set_appliance(text(&shown.appliance));
    list!(before.get_cautions, set_cautions, rows::cautions(&shown.cautions));
    before.set_ready(shown.ready.ready);
    before.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

/// Who does what is entered, and when: in the head of every action.
pub fn show_stamp(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let stamp = desk.stamp_shown()?;
    let when = window.global::<WhenAdapter>();
    when.set_stamp(text(&stamp.when));
    when.set_who(text(&stamp.who));
    when.set_wrong(stamp.wrong);
    Ok(())
}

pub fn show_when(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.when_shown()?;
    let when = window.global::<WhenAdapter>();
    when.set_appliance(text(&shown.appliance));
    list!(when.get_people, set_people, rows::choices(&shown.people));
    when.set_person(text(&shown.person));
    when.set_is_now(shown.is_now);
    when.set_now_words(text(&shown.now));
    when.set_day(text(&shown.day));
    when.set_month(text(&shown.month));
    when.set_year(text(&shown.year));
    when.set_day_words(text(&shown.day_words));
    when.set_time(rows::reading(&shown.time));
    when.set_error(text(&shown.error));
    when.set_ready(shown.ready.ready);
    Ok(())
}
