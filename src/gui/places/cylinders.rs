//! Cylinders: the list, a cylinder's page, its form.

use super::Send;
use crate::gui::rows;
use crate::view::gases::gases_like;
use crate::view::places::cylinder::CylinderPage;
use crate::view::places::cylinder_form::{kinds, states};
use crate::view::places::cylinders::{Msg as Cylinders, Pane};
use crate::view::places::plant::FormMsg;
use crate::view::places::{Msg, Office};
use bubblepoint_ui::{AppWindow, CylinderAdapter, CylinderFormAdapter, CylindersAdapter, CylindersPane};
use slint::ComponentHandle;

pub fn connect(window: &AppWindow, send: &Send) {
    let a = window.global::<CylindersAdapter>();
    on!(a, send, on_search_for, |text| Msg::Cylinders(Cylinders::Search(text.into())));
    on!(a, send, on_open, |key| Msg::Cylinders(Cylinders::Open(key.into())));
    on!(a, send, on_add, || Msg::Cylinders(Cylinders::Add));

    let a = window.global::<CylinderAdapter>();
    on!(a, send, on_open_movement, |key| Msg::Cylinders(Cylinders::OpenMovement(key.into())));
    on!(a, send, on_edit, || Msg::Cylinders(Cylinders::Edit));

    let a = window.global::<CylinderFormAdapter>();
    let form = |msg| Msg::Cylinders(Cylinders::Form(msg));
    on!(a, send, on_choose_kind, |key| form(FormMsg::Chosen("kind", key.into())));
    on!(a, send, on_choose_gas, |key| form(FormMsg::Chosen("gas", key.into())));
    on!(a, send, on_choose_status, |key| form(FormMsg::Chosen("status", key.into())));
    on!(a, send, on_edited, |field, text| form(FormMsg::Edited(field.into(), text.into())));
    on!(a, send, on_begin_anew, || form(FormMsg::Anew));
    on!(a, send, on_save, || form(FormMsg::Save));
}

pub fn show(window: &AppWindow, office: &Office) {
    let a = window.global::<CylindersAdapter>();
    let page = office.cylinders_page();
    a.set_summary(page.summary.into());
    a.set_search(page.search.into());
    list!(a.get_lines, set_lines, rows::lines(&page.lines));
    a.set_empty_words(page.empty_words.into());
    a.set_nothing_yet(page.nothing_yet);
    a.set_chosen(page.chosen.into());
    match office.cylinders.pane {
        Pane::None => {}
        Pane::Cylinder(_) => office.cylinders.cylinder.iter().for_each(|page| show_cylinder(window, page)),
        Pane::Form => show_form(window, office, a.get_pane() == CylindersPane::Form),
    }
    a.set_pane(match office.cylinders.pane {
        Pane::None => CylindersPane::None,
        Pane::Cylinder(_) => CylindersPane::Cylinder,
        Pane::Form => CylindersPane::Form,
    });
}

fn show_cylinder(window: &AppWindow, page: &CylinderPage) {
    let a = window.global::<CylinderAdapter>();
    a.set_title((&page.title).into());
    a.set_where((&page.location).into());
    a.set_name((&page.name).into());
    a.set_state((&page.state).into());
    a.set_content((&page.content).into());
    a.set_room((&page.room).into());
    a.set_unit((&page.unit).into());
    a.set_has_mass(page.mass.is_some());
    if let Some(mass) = &page.mass {
        a.set_mass(rows::mass(mass));
    }
    list!(a.get_limits, set_limits, rows::facts(&page.limits));
    a.set_refused((&page.refused).into());
    list!(a.get_facts, set_facts, rows::facts(&page.facts));
    list!(a.get_movements, set_movements, rows::lines(&page.movements));
}

/// `open`: what the screen itself has unfolded stays so.
fn show_form(window: &AppWindow, office: &Office, open: bool) {
    let a = window.global::<CylinderFormAdapter>();
    let form = &office.cylinders.form;
    let ready = office.cylinder_form_ready();
    a.set_changing(form.changing);
    a.set_taken_up_again(form.taken_up_again);
    a.set_last_gross(office.last_gross_words().into());
    a.set_identification(form.text("identification").into());
    a.set_identification_error(form.error("identification").into());
    list!(a.get_kinds, set_kinds, rows::choices(&kinds()));
    a.set_kind(form.text("kind").into());
    a.set_gas(form.text("gas").into());
    a.set_gas_error(form.error("gas").into());
    list!(a.get_gases, set_gases, rows::choices(&gases_like(form.text("gas"))));
    list!(a.get_states, set_states, rows::choices(&states()));
    a.set_status(form.text("status").into());
    a.set_tare(form.text("tare").into());
    a.set_tare_error(form.error("tare").into());
    a.set_gross(form.text("gross").into());
    a.set_gross_error(form.error("gross").into());
    a.set_water_capacity(form.text("water-capacity").into());
    a.set_water_capacity_error(form.error("water-capacity").into());
    a.set_requalify_by(form.text("requalify-by").into());
    a.set_requalify_by_error(form.error("requalify-by").into());
    a.set_location(form.text("location").into());
    a.set_more(form.more || (open && a.get_more()));
    a.set_stamped_maximum(form.text("stamped-maximum").into());
    a.set_stamped_maximum_error(form.error("stamped-maximum").into());
    a.set_service_pressure(form.text("service-pressure").into());
    a.set_service_pressure_error(form.error("service-pressure").into());
    a.set_test_pressure(form.text("test-pressure").into());
    a.set_test_pressure_error(form.error("test-pressure").into());
    a.set_owner(form.text("owner").into());
    a.set_gas_owner(form.text("gas-owner").into());
    a.set_gas_source(form.text("gas-source").into());
    a.set_scrapped(form.text("scrapped").into());
    a.set_ready(ready.ready);
    a.set_why_not(ready.why_not.into());
}
