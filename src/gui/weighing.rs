//! Charge and recover, and the cylinder they take.

use super::Gui;
use super::rows::{self, text};
use crate::app::AppError;
use crate::view::visit::{charge, choose_cylinder, recover, weighing};
use crate::view::{Desk, Msg};
use bubblepoint_ui::{AppWindow, ChargeAdapter, ChargeChoice, ChooseCylinderAdapter, RecoverAdapter, Weighing, WeighingChoice};
use slint::{ComponentHandle, SharedString};
use std::rc::Rc;

pub fn connect(window: &AppWindow, gui: &Rc<Gui>) {
    let charges = window.global::<ChargeAdapter>();
    on!(gui, charges.on_key(key) => charged(weighing::Msg::Key(key.into())));
    on!(gui, charges.on_next_reading() => charged(weighing::Msg::Next));
    on!(gui, charges.on_choose_weighing(what, key) => charged(chosen(what, &key)));
    on!(gui, charges.on_choose(what, key) => Msg::Charge(match what {
        ChargeChoice::Purpose => charge::Msg::Purpose(key.into()),
        ChargeChoice::Earlier => charge::Msg::Earlier(key.into()),
        ChargeChoice::Phase => charge::Msg::Phase(key.into()),
        ChargeChoice::Fill => charge::Msg::Fill(key.into()),
    }));
    on!(gui, charges.on_set_hoses_emptied(emptied) => charged(weighing::Msg::HosesEmptied(emptied)));
    on!(gui, charges.on_edited(field, typed) => match field.as_str() {
        "hose length" => charged(weighing::Msg::HoseLength(typed.into())),
        "hose bore" => charged(weighing::Msg::HoseBore(typed.into())),
        "short by" => Msg::Charge(charge::Msg::ShortBy(typed.into())),
        "gas source" => Msg::Charge(charge::Msg::GasSource(typed.into())),
        _ => Msg::Charge(charge::Msg::Reason(typed.into())),
    });
    on!(gui, charges.on_choose_cylinder() => Msg::Charge(charge::Msg::ChooseCylinder));
    on!(gui, charges.on_save() => Msg::Charge(charge::Msg::Save));
    on!(gui, charges.on_save_next_appliance() => Msg::Charge(charge::Msg::SaveNextAppliance));
    on!(gui, charges.on_save_next_cylinder() => Msg::Charge(charge::Msg::SaveNextCylinder));
    on!(gui, charges.on_back() => Msg::Back);

    let recovers = window.global::<RecoverAdapter>();
    on!(gui, recovers.on_key(key) => recovered(weighing::Msg::Key(key.into())));
    on!(gui, recovers.on_next_reading() => recovered(weighing::Msg::Next));
    on!(gui, recovers.on_choose_weighing(what, key) => recovered(chosen(what, &key)));
    on!(gui, recovers.on_choose_purpose(key) => Msg::Recover(recover::Msg::Purpose(key.into())));
    on!(gui, recovers.on_set_hoses_emptied(emptied) => recovered(weighing::Msg::HosesEmptied(emptied)));
    on!(gui, recovers.on_edited(field, typed) => match field.as_str() {
        "hose length" => recovered(weighing::Msg::HoseLength(typed.into())),
        "hose bore" => recovered(weighing::Msg::HoseBore(typed.into())),
        "level reached" => Msg::Recover(recover::Msg::LevelReached(typed.into())),
        "level after waiting" => Msg::Recover(recover::Msg::LevelAfterWaiting(typed.into())),
        _ => Msg::Recover(recover::Msg::Reason(typed.into())),
    });
    on!(gui, recovers.on_choose_cylinder() => Msg::Recover(recover::Msg::ChooseCylinder));
    on!(gui, recovers.on_save() => Msg::Recover(recover::Msg::Save));
    on!(gui, recovers.on_save_next_cylinder() => Msg::Recover(recover::Msg::SaveNextCylinder));
    on!(gui, recovers.on_back() => Msg::Back);

    let choose = window.global::<ChooseCylinderAdapter>();
    on!(gui, choose.on_search_for(typed) => Msg::ChooseCylinder(choose_cylinder::Msg::Search(typed.into())));
    on!(gui, choose.on_choose(key) => Msg::ChooseCylinder(choose_cylinder::Msg::Choose(key.into())));
    on!(gui, choose.on_go_without() => Msg::ChooseCylinder(choose_cylinder::Msg::GoWithout));
    on!(gui, choose.on_begin_adding() => Msg::ChooseCylinder(choose_cylinder::Msg::BeginAdding));
    on!(gui, choose.on_choose_kind(key) => Msg::ChooseCylinder(choose_cylinder::Msg::Kind(key.into())));
    on!(gui, choose.on_choose_state(key) => Msg::ChooseCylinder(choose_cylinder::Msg::Status(key.into())));
    on!(gui, choose.on_edited(field, typed) => Msg::ChooseCylinder(choose_cylinder::Msg::Edited(field.into(), typed.into())));
    on!(gui, choose.on_add() => Msg::ChooseCylinder(choose_cylinder::Msg::Add));
    on!(gui, choose.on_back() => Msg::Back);
}

fn charged(msg: weighing::Msg) -> Msg {
    Msg::Charge(charge::Msg::Weighing(msg))
}

fn recovered(msg: weighing::Msg) -> Msg {
    Msg::Recover(recover::Msg::Weighing(msg))
}

fn chosen(what: WeighingChoice, key: &SharedString) -> weighing::Msg {
    let key = key.to_string();
    match what {
        WeighingChoice::Reading => weighing::Msg::Reading(key),
        WeighingChoice::Mode => weighing::Msg::Mode(key),
        WeighingChoice::Unit => weighing::Msg::Unit(key),
        WeighingChoice::Scale => weighing::Msg::Scale(key),
        WeighingChoice::GapReason => weighing::Msg::GapReason(key),
    }
}

fn weighed(shown: &weighing::Shown) -> Weighing {
    Weighing {
        cylinder: text(&shown.cylinder),
        cylinder_state: text(&shown.cylinder_state),
        mass: rows::mass(&shown.mass),
        first: rows::reading(&shown.first),
        second: rows::reading(&shown.second),
        first_ounces: rows::reading(&shown.first_ounces),
        second_ounces: rows::reading(&shown.second_ounces),
        two_part: shown.two_part,
        active: text(&shown.active),
        error: text(&shown.error),
        net_caption: text(&shown.net_caption),
        net: text(&shown.net),
        net_unit: text(&shown.net_unit),
        net_error: text(&shown.net_error),
        mode: text(&shown.mode),
        unit: text(&shown.unit),
        scale: text(&shown.scale),
        scale_words: text(&shown.scale_words),
        hoses_emptied: shown.hoses_emptied,
        gap_words: text(&shown.gap_words),
        gap_reason: text(&shown.gap_reason),
    }
}

pub fn show_charge(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.charge_shown()?;
    let charges = window.global::<ChargeAdapter>();
    charges.set_appliance(text(&shown.appliance));
    charges.set_without_cylinder(shown.without_cylinder);
    charges.set_weighing(weighed(&shown.weighing));
    list!(charges.get_scales, set_scales, rows::choices(&shown.scales));
    list!(charges.get_gap_reasons, set_gap_reasons, rows::choices(&shown.gap_reasons));
    charges.set_hose_length(text(&shown.hose_length));
    charges.set_hose_bore(text(&shown.hose_bore));
    charges.set_summary(text(&shown.summary));
    list!(charges.get_purposes, set_purposes, rows::choices(&shown.purposes));
    charges.set_purpose(text(&shown.purpose));
    list!(charges.get_earlier_charges, set_earlier_charges, rows::choices(&shown.earlier_charges));
    charges.set_earlier(text(&shown.earlier));
    charges.set_phase(text(&shown.phase));
    charges.set_phase_words(text(&shown.phase_words));
    charges.set_fill(text(&shown.fill));
    charges.set_short_by(text(&shown.short_by));
    charges.set_asks_gas_source(shown.asks_gas_source);
    charges.set_gas_source(text(&shown.gas_source));
    list!(charges.get_after, set_after, rows::rates(&shown.after));
    list!(charges.get_follows, set_follows, rows::facts(&shown.follows));
    charges.set_refusal(rows::refusal(&shown.refusal));
    charges.set_reason(text(&shown.reason));
    charges.set_ready(shown.ready.ready);
    charges.set_why_not(text(&shown.ready.why_not));
    charges.set_can_go_on_to_next(shown.can_go_on);
    Ok(())
}

pub fn show_recover(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.recover_shown()?;
    let recovers = window.global::<RecoverAdapter>();
    recovers.set_appliance(text(&shown.appliance));
    recovers.set_weighing(weighed(&shown.weighing));
    list!(recovers.get_scales, set_scales, rows::choices(&shown.scales));
    list!(recovers.get_gap_reasons, set_gap_reasons, rows::choices(&shown.gap_reasons));
    recovers.set_hose_length(text(&shown.hose_length));
    recovers.set_hose_bore(text(&shown.hose_bore));
    recovers.set_summary(text(&shown.summary));
    list!(recovers.get_purposes, set_purposes, rows::choices(&shown.purposes));
    recovers.set_purpose(text(&shown.purpose));
    recovers.set_room(text(&shown.room));
    recovers.set_room_words(text(&shown.room_words));
    recovers.set_over_limit(shown.over_limit);
    list!(recovers.get_follows, set_follows, rows::facts(&shown.follows));
    recovers.set_level_reached(text(&shown.level_reached));
    recovers.set_level_after_waiting(text(&shown.level_after_waiting));
    recovers.set_refusal(rows::refusal(&shown.refusal));
    recovers.set_reason(text(&shown.reason));
    recovers.set_ready(shown.ready.ready);
    recovers.set_why_not(text(&shown.ready.why_not));
    recovers.set_can_go_on_to_next(shown.can_go_on);
    Ok(())
}

pub fn show_choose_cylinder(window: &AppWindow, desk: &Desk) -> Result<(), AppError> {
    let shown = desk.choose_cylinder_shown()?;
    let choose = window.global::<ChooseCylinderAdapter>();
    choose.set_purpose(text(&shown.purpose));
    choose.set_search(text(&shown.search));
    list!(choose.get_fitting, set_fitting, rows::lines(&shown.fitting));
    list!(choose.get_others, set_others, rows::lines(&shown.others));
    choose.set_empty_words(text(&shown.empty_words));
    choose.set_can_go_without(shown.can_go_without);
    choose.set_adding(shown.adding);
    choose.set_identification(text(&shown.identification));
    choose.set_identification_error(SharedString::new());
    list!(choose.get_kinds, set_kinds, rows::choices(&shown.kinds));
    choose.set_kind(text(&shown.kind));
    list!(choose.get_states, set_states, rows::choices(&shown.states));
    choose.set_state(text(&shown.state));
    choose.set_tare(text(&shown.tare));
    choose.set_tare_error(text(&shown.tare_error));
    choose.set_water_capacity(text(&shown.water_capacity));
    choose.set_water_capacity_error(text(&shown.water_capacity_error));
    choose.set_ready(shown.ready.ready);
    choose.set_why_not(text(&shown.ready.why_not));
    Ok(())
}
