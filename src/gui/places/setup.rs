//! Setup: its list, registers, forms, units, appearance, store, about.

use super::Send;
use crate::app::{Appearance as Light, Setting, paper_name};
use crate::gui::rows;
use crate::view::places::plant::FormMsg;
use crate::view::places::setup::{Msg as Setup, Pane, mass_units, papers, pressure_units, sources, temperature_units, vacuum_units};
use crate::view::places::setup_forms::{asks_division, asks_holds, kinds};
use crate::view::places::{Look, Msg, Office, setup};
use bubblepoint_ui::{
    AboutAdapter, AppWindow, Appearance, AppearanceAdapter, CompanyAdapter, InstrumentFormAdapter, PersonFormAdapter, SetupAdapter,
    SetupLine, SetupPane, StoreAdapter, UnitsAdapter,
};
use slint::ComponentHandle;

const PANES: [(Pane, SetupPane); 11] = [
    (Pane::None, SetupPane::None),
    (Pane::Company, SetupPane::Company),
    (Pane::People, SetupPane::People),
    (Pane::PersonForm, SetupPane::PersonForm),
    (Pane::Instruments, SetupPane::Instruments),
    (Pane::InstrumentForm, SetupPane::InstrumentForm),
    (Pane::Rulebooks, SetupPane::Rulebooks),
    (Pane::Units, SetupPane::Units),
    (Pane::Appearance, SetupPane::Appearance),
    (Pane::Store, SetupPane::Store),
    (Pane::About, SetupPane::About),
];

fn pane(shown: SetupPane) -> Pane {
    PANES.iter().find(|(_, screen)| *screen == shown).map_or(Pane::None, |(pane, _)| *pane)
}

fn shown(pane: Pane) -> SetupPane {
    PANES.iter().find(|(own, _)| *own == pane).map_or(SetupPane::None, |(_, screen)| *screen)
}

fn light(appearance: Appearance) -> Light {
    match appearance {
        Appearance::Light => Light::Light,
        Appearance::Dark => Light::Dark,
        Appearance::Sunlight => Light::Sunlight,
    }
}

/// What the page of units calls a setting.
fn setting(what: &str) -> Option<Setting> {
    Some(match what {
        "mass" => Setting::Mass,
        "pressure" => Setting::Pressure,
        "vacuum" => Setting::Vacuum,
        "temperature" => Setting::Temperature,
        "paper" => Setting::Paper,
        _ => return None,
    })
}

/// Offered are four sizes; the nearest is meant.
fn percent(factor: f32) -> u32 {
    Look::SIZES.into_iter().min_by_key(|size| (*size as f32 - factor * 100.0).abs() as u32).unwrap_or(100)
}

pub fn connect(window: &AppWindow, send: &Send) {
    let a = window.global::<SetupAdapter>();
    on!(a, send, on_open, |to| Msg::Setup(Setup::Open(pane(to))));
    on!(a, send, on_open_line, |key| Msg::Setup(Setup::OpenLine(key.into())));
    on!(a, send, on_add, || Msg::Setup(Setup::Add));

    let a = window.global::<CompanyAdapter>();
    on!(a, send, on_edited, |field, text| Msg::Setup(Setup::Company(FormMsg::Edited(field.into(), text.into()))));
    on!(a, send, on_save, || Msg::Setup(Setup::Company(FormMsg::Save)));

    let a = window.global::<PersonFormAdapter>();
    on!(a, send, on_edited, |field, text| Msg::Setup(Setup::Person(FormMsg::Edited(field.into(), text.into()))));
    on!(a, send, on_save, || Msg::Setup(Setup::Person(FormMsg::Save)));

    let a = window.global::<InstrumentFormAdapter>();
    on!(a, send, on_choose_kind, |key| Msg::Setup(Setup::Instrument(FormMsg::Chosen("kind", key.into()))));
    on!(a, send, on_edited, |field, text| Msg::Setup(Setup::Instrument(FormMsg::Edited(field.into(), text.into()))));
    on!(a, send, on_save, || Msg::Setup(Setup::Instrument(FormMsg::Save)));

    let a = window.global::<UnitsAdapter>();
    let choosing = std::rc::Rc::clone(send);
    a.on_choose(move |what, key| {
        if let Some(setting) = setting(&what) {
            choosing(Msg::Setup(Setup::Set(setting, key.into())));
        }
    });

    let a = window.global::<AppearanceAdapter>();
    on!(a, send, on_changed_appearance, |appearance| Msg::Setup(Setup::Appearance(light(appearance))));
    on!(a, send, on_changed_text_factor, |factor| Msg::Setup(Setup::TextSize(percent(factor))));

    let a = window.global::<StoreAdapter>();
    on!(a, send, on_back_up, || Msg::Setup(Setup::BackUp));
    on!(a, send, on_check, || Msg::Setup(Setup::Check));
    on!(a, send, on_show_folder, || Msg::Setup(Setup::ShowFolder));
}

pub fn show(window: &AppWindow, office: &Office, look: &Look) {
    let a = window.global::<SetupAdapter>();
    let line = |line: setup::SetupLine| SetupLine {
        pane: shown(line.pane),
        name: line.name.into(),
        facts: line.facts.into(),
        state: line.state.into(),
    };
    list!(a.get_lines, set_lines, office.setup_lines(look).into_iter().map(line).collect());
    let register = office.register();
    a.set_register_title(register.title.into());
    list!(a.get_register, set_register, rows::lines(&register.lines));
    a.set_register_empty(register.empty.into());
    a.set_register_add(register.add.into());
    match office.setup.pane {
        Pane::Company => show_company(window, office),
        Pane::PersonForm => show_person(window, office),
        Pane::InstrumentForm => show_instrument(window, office),
        Pane::Units => show_units(window, office),
        Pane::Store => show_store(window, office),
        Pane::About => {
            let a = window.global::<AboutAdapter>();
            a.set_version(env!("CARGO_PKG_VERSION").into());
            list!(a.get_sources, set_sources, rows::facts(&sources()));
        }
        _ => {}
    }
    a.set_pane(shown(office.setup.pane));
}

fn show_company(window: &AppWindow, office: &Office) {
    let a = window.global::<CompanyAdapter>();
    let form = &office.setup.company;
    let ready = office.company_ready();
    a.set_name(form.text("name").into());
    a.set_name_error(form.error("name").into());
    a.set_address(form.text("address").into());
    a.set_certificate(form.text("certificate").into());
    a.set_ready(ready.ready);
    a.set_why_not(ready.why_not.into());
}

fn show_person(window: &AppWindow, office: &Office) {
    let a = window.global::<PersonFormAdapter>();
    let form = &office.setup.person;
    let ready = office.person_ready();
    a.set_changing(form.changing);
    a.set_name(form.text("name").into());
    a.set_name_error(form.error("name").into());
    a.set_certificate(form.text("certificate").into());
    a.set_certificate_kind(form.text("certificate-kind").into());
    a.set_valid_from(form.text("valid-from").into());
    a.set_valid_from_error(form.error("valid-from").into());
    a.set_valid_to(form.text("valid-to").into());
    a.set_valid_to_error(form.error("valid-to").into());
    a.set_company(form.text("company").into());
    a.set_company_certificate(form.text("company-certificate").into());
    a.set_ready(ready.ready);
    a.set_why_not(ready.why_not.into());
}

fn show_instrument(window: &AppWindow, office: &Office) {
    let a = window.global::<InstrumentFormAdapter>();
    let form = &office.setup.instrument;
    let ready = office.instrument_ready();
    a.set_changing(form.changing);
    list!(a.get_kinds, set_kinds, rows::choices(&kinds()));
    a.set_kind(form.text("kind").into());
    a.set_name(form.text("name").into());
    a.set_name_error(form.error("name").into());
    a.set_serial(form.text("serial").into());
    a.set_asks_division(asks_division(form));
    a.set_division(form.text("division").into());
    a.set_division_error(form.error("division").into());
    a.set_asks_holds(asks_holds(form));
    a.set_holds(form.text("holds").into());
    a.set_holds_error(form.error("holds").into());
    a.set_checked_on(form.text("checked-on").into());
    a.set_checked_on_error(form.error("checked-on").into());
    a.set_check_due(form.text("check-due").into());
    a.set_check_due_error(form.error("check-due").into());
    a.set_ready(ready.ready);
    a.set_why_not(ready.why_not.into());
}

fn show_units(window: &AppWindow, office: &Office) {
    let a = window.global::<UnitsAdapter>();
    list!(a.get_masses, set_masses, rows::choices(&mass_units()));
    a.set_mass(office.units.mass.name().into());
    list!(a.get_pressures, set_pressures, rows::choices(&pressure_units()));
    a.set_pressure(office.units.pressure.name().into());
    list!(a.get_vacuums, set_vacuums, rows::choices(&vacuum_units()));
    a.set_vacuum(office.units.vacuum.name().into());
    list!(a.get_temperatures, set_temperatures, rows::choices(&temperature_units()));
    a.set_temperature(office.units.temperature.name().into());
    list!(a.get_papers, set_papers, rows::choices(&papers()));
    a.set_paper(paper_name(office.units.paper).into());
}

fn show_store(window: &AppWindow, office: &Office) {
    let a = window.global::<StoreAdapter>();
    let page = &office.setup.store;
    a.set_path((&page.path).into());
    list!(a.get_facts, set_facts, rows::facts(&page.facts));
    a.set_answer((&page.answer).into());
    a.set_answer_grave(page.grave);
}
