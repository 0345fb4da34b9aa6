//! Leak test, repair, pressure or vacuum, note.

use super::Gui;
use super::rows::{self, text};
use crate::app::AppError;
use crate::view::visit::{leak_test, note, pressure, repair};
use crate::view::{Desk, Msg};
use bubblepoint_ui::{
    AppWindow, LeakTestAdapter, LeakTestChoice, NoteAdapter, PressureAdapter, PressureChoice, RepairAdapter, RepairChoice,
};
use slint::ComponentHandle;
use std::rc::Rc;

pub fn connect(window: &AppWindow, gui: &Rc<Gui>) {
    let tests = window.global::<LeakTestAdapter>();
    on!(gui, tests.on_choose(what, key) => Msg::LeakTest(match what {
        LeakTestChoice::Kind => leak_test::Msg::Kind(key.into()),
        LeakTestChoice::Method => leak_test::Msg::Method(key.into()),
        LeakTestChoice::Instrument => leak_test::Msg::Instrument(key.into()),
        LeakTestChoice::Scope => leak_test::Msg::Scope(key.into()),
        LeakTestChoice::Result => leak_test::Msg::Result(key.into()),
        LeakTestChoice::PlaceState => leak_test::Msg::PlaceState(key.into()),
    }));
    on!(gui, tests.on_edited(field, typed) => Msg::LeakTest(leak_test::Msg::Edited(field.into(), typed.into())));
    on!(gui, tests.on_add_place() => Msg::LeakTest(leak_test::Msg::AddPlace));
    on!(gui, tests.on_take_place_back(key) => Msg::LeakTest(leak_test::Msg::TakePlaceBack(key.into())));
    on!(gui, tests.on_save() => Msg::LeakTest(leak_test::Msg::Save));
    on!(gui, tests.on_back() => Msg::Back);

    let repairs = window.global::<RepairAdapter>();
    on!(gui, repairs.on_choose(what, key) => Msg::Repair(match what {
        RepairChoice::Step => repair::Msg::Step(key.into()),
        RepairChoice::Leak => repair::Msg::Leak(key.into()),
        RepairChoice::Repair => repair::Msg::Repair(key.into()),
        RepairChoice::Method => repair::Msg::Method(key.into()),
        RepairChoice::Instrument => repair::Msg::Instrument(key.into()),
        RepairChoice::Result => repair::Msg::Result(key.into()),
    }));
    on!(gui, repairs.on_set_temporary(temporary) => Msg::Repair(repair::Msg::Temporary(temporary)));
    on!(gui, repairs.on_set_partial(partial) => Msg::Repair(repair::Msg::Partial(partial)));
    on!(gui, repairs.on_edited(field, typed) => Msg::Repair(repair::Msg::Edited(field.into(), typed.into())));
    on!(gui, repairs.on_save() => Msg::Repair(repair::Msg::Save));
    on!(gui, repairs.on_back() => Msg::Back);

    let series = window.global::<PressureAdapter>();
    on!(gui, series.on_choose(what, key) => Msg::Pressure(match what {
        PressureChoice::Kind => pressure::Msg::Kind(key.into()),
        PressureChoice::Gauge => pressure::Msg::Gauge(key.into()),
        PressureChoice::Unit => pressure::Msg::Unit(key.into()),
        PressureChoice::Reading => pressure::Msg::Reading(key.into()),
    }));
    on!(gui, series.on_key(key) => Msg::Pressure(pressure::Msg::Key(key.into())));
    on!(gui, series.on_next_reading() => Msg::Pressure(pressure::Msg::Next));
    on!(gui, series.on_take() => Msg::Pressure(pressure::Msg::Take));
    on!(gui, series.on_open_reading(key) => Msg::Pressure(pressure::Msg::OpenReading(key.into())));
    on!(gui, series.on_save() => Msg::Pressure(pressure::Msg::Save));
    on!(gui, series.on_back() => Msg::Back);

    let notes = window.global::<NoteAdapter>();
    on!(gui, notes.on_choose_kind(key) => Msg::Note(note::Msg::Kind(key.into())));
    on!(gui, notes.on_choose_cylinder(key) => Msg::Note(note::Msg::Cylinder(key.into())));
    on!(gui, notes.on_edited(field, typed) => Msg::Note(note::Msg::Edited(field.into(), typed.into())));
    on!(gui, notes.on_save() => Msg::Note(note::Msg::Save));
    on!(gui, notes.on_back() => Msg::Back);
}

pub fn show_leak_test(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.leak_test_shown()?;
    let tests = window.global::<LeakTestAdapter>();
    tests.set_appliance(text(&shown.appliance));
    list!(tests.get_kinds, set_kinds, rows::choices(&shown.kinds));
    tests.set_kind(text(&shown.kind));
    list!(tests.get_methods, set_methods, rows::choices(&shown.methods));
    tests.set_method(text(&shown.method));
    tests.set_method_words(text(&shown.method_words));
    list!(tests.get_instruments, set_instruments, rows::choices(&shown.instruments));
    tests.set_instrument(text(&shown.instrument));
    tests.set_scope(text(&shown.scope));
    tests.set_parts(text(&shown.parts));
    tests.set_result(text(&shown.result));
    list!(tests.get_places, set_places, rows::lines(&shown.places));
    tests.set_place(text(&shown.place));
    tests.set_place_error(text(&shown.place_error));
    list!(tests.get_place_states, set_place_states, rows::choices(&shown.place_states));
    tests.set_place_state(text(&shown.place_state));
    tests.set_asks_done(shown.asks_done);
    tests.set_done(text(&shown.done));
    tests.set_ready(shown.ready.ready);
    tests.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_repair(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.repair_shown()?;
    let repairs = window.global::<RepairAdapter>();
    repairs.set_appliance(text(&shown.appliance));
    list!(repairs.get_steps, set_steps, rows::choices(&shown.steps));
    repairs.set_step(text(&shown.step));
    list!(repairs.get_asked, set_asked, rows::facts(&shown.asked));
    list!(repairs.get_leaks, set_leaks, rows::choices(&shown.leaks));
    repairs.set_leak(text(&shown.leak));
    repairs.set_place(text(&shown.place));
    repairs.set_done(text(&shown.done));
    repairs.set_parts(text(&shown.parts));
    repairs.set_temporary(shown.temporary);
    list!(repairs.get_repairs, set_repairs, rows::choices(&shown.repairs));
    repairs.set_repair(text(&shown.repair));
    list!(repairs.get_methods, set_methods, rows::choices(&shown.methods));
    repairs.set_method(text(&shown.method));
    list!(repairs.get_instruments, set_instruments, rows::choices(&shown.instruments));
    repairs.set_instrument(text(&shown.instrument));
    repairs.set_result(text(&shown.result));
    repairs.set_partial(shown.partial);
    repairs.set_asks_running_hours(shown.asks_running_hours);
    repairs.set_running_hours(text(&shown.running_hours));
    repairs.set_running_hours_error(text(&shown.running_hours_error));
    repairs.set_save_words(text(&shown.save_words));
    repairs.set_ready(shown.ready.ready);
    repairs.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_pressure(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.pressure_shown()?;
    let series = window.global::<PressureAdapter>();
    series.set_appliance(text(&shown.appliance));
    series.set_kind(text(&shown.kind));
    list!(series.get_gauges, set_gauges, rows::choices(&shown.gauges));
    series.set_gauge(text(&shown.gauge));
    list!(series.get_units, set_units, rows::choices(&shown.units));
    series.set_unit(text(&shown.unit));
    series.set_pressure(rows::reading(&shown.pressure));
    series.set_temperature(rows::reading(&shown.temperature));
    series.set_active(text(&shown.active));
    series.set_error(text(&shown.error));
    list!(series.get_readings, set_readings, rows::lines(&shown.readings));
    series.set_judged(text(&shown.judged));
    list!(series.get_figures, set_figures, rows::facts(&shown.figures));
    series.set_can_take(shown.can_take);
    series.set_ready(shown.ready.ready);
    series.set_why_not(text(&shown.ready.why_not));
    Ok(())
}

pub fn show_note(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.note_shown()?;
    let notes = window.global::<NoteAdapter>();
    notes.set_appliance(text(&shown.appliance));
    list!(notes.get_kinds, set_kinds, rows::choices(&shown.kinds));
    notes.set_kind(text(&shown.kind));
    notes.set_kind_words(text(&shown.kind_words));
    notes.set_text(text(&shown.text));
    notes.set_asks_gas(shown.asks_gas);
    notes.set_gas(text(&shown.gas));
    notes.set_gas_error(text(&shown.gas_error));
    notes.set_full_charge(text(&shown.full_charge));
    notes.set_full_charge_error(text(&shown.full_charge_error));
    list!(notes.get_cylinders, set_cylinders, rows::choices(&shown.cylinders));
    notes.set_cylinder(text(&shown.cylinder));
    notes.set_ready(shown.ready.ready);
    notes.set_why_not(text(&shown.ready.why_not));
    Ok(())
}
