//! Plant: its list, the pages of sites, appliances and records, and their forms.

use super::Send;
use crate::gui::rows::{self, inner, verdict};
use crate::view::gases::gases_like;
use crate::view::places::appliance::AppliancePage;
use crate::view::places::appliance_form::{categories, charge_methods, equipment};
use crate::view::places::plant::{FormMsg, Msg as Plant, Pane};
use crate::view::places::record::RecordPage;
use crate::view::places::site_form::methods;
use crate::view::places::{Msg, Office, RateStep, SitePage, signing};
use crate::view::visit::close::{InkMsg, path};
use bubblepoint_ui as ui;
use bubblepoint_ui::{
    AppWindow, ApplianceAdapter, ApplianceFormAdapter, PlantAdapter, PlantPane, RecordAdapter, SiteAdapter, SiteFormAdapter,
};
use slint::ComponentHandle;

pub fn connect(window: &AppWindow, send: &Send) {
    let a = window.global::<PlantAdapter>();
    on!(a, send, on_search_for, |text| Msg::Plant(Plant::Search(text.into())));
    on!(a, send, on_open, |key| Msg::Plant(Plant::Open(key.into())));
    on!(a, send, on_add_site, || Msg::Plant(Plant::AddSite));
    on!(a, send, on_add_appliance, || Msg::Plant(Plant::AddAppliance));

    let a = window.global::<SiteAdapter>();
    on!(a, send, on_open_appliance, |key| Msg::Plant(Plant::Open(key.into())));
    on!(a, send, on_open_visit, |key| Msg::Plant(Plant::OpenVisit(key.into())));
    on!(a, send, on_add_appliance, || Msg::Plant(Plant::AddAppliance));
    on!(a, send, on_edit, || Msg::Plant(Plant::EditSite));
    on!(a, send, on_begin, || Msg::Plant(Plant::BeginAtSite));

    let a = window.global::<ApplianceAdapter>();
    on!(a, send, on_begin, || Msg::Plant(Plant::BeginAtAppliance));
    on!(a, send, on_edit, || Msg::Plant(Plant::EditAppliance));
    on!(a, send, on_open_item, |key| Msg::Plant(Plant::OpenItem(key.into())));
    on!(a, send, on_open_record, |key| Msg::Plant(Plant::OpenRecord(key.into())));

    let a = window.global::<RecordAdapter>();
    on!(a, send, on_open_record, || Msg::Plant(Plant::OpenRecordFile));
    on!(a, send, on_open_folder, || Msg::Plant(Plant::OpenRecordFolder));
    let sign = |msg| Msg::Plant(Plant::Signing(msg));
    on!(a, send, on_begin_signing, || sign(signing::Msg::Begin));
    on!(a, send, on_signer_edited, |text| sign(signing::Msg::Name(text.into())));
    on!(a, send, on_point, |x, y, first| sign(signing::Msg::Ink(InkMsg::Point { x, y, first })));
    on!(a, send, on_lifted, || sign(signing::Msg::Ink(InkMsg::Lifted)));
    on!(a, send, on_cleared, || sign(signing::Msg::Ink(InkMsg::Cleared)));
    on!(a, send, on_sign, || sign(signing::Msg::Sign));
    on!(a, send, on_open_entry, |key| Msg::Plant(Plant::OpenEntry(key.into())));

    let a = window.global::<ApplianceFormAdapter>();
    let form = |msg| Msg::Plant(Plant::ApplianceForm(msg));
    on!(a, send, on_choose_gas, |key| form(FormMsg::Chosen("gas", key.into())));
    on!(a, send, on_choose_charge_method, |key| form(FormMsg::Chosen("charge-method", key.into())));
    on!(a, send, on_choose_category, |key| form(FormMsg::Chosen("category", key.into())));
    on!(a, send, on_choose_equipment, |key| form(FormMsg::Chosen("equipment", key.into())));
    on!(a, send, on_edited, |field, text| form(FormMsg::Edited(field.into(), text.into())));
    on!(a, send, on_switched, |field, is_on| form(FormMsg::Switched(field.into(), is_on)));
    on!(a, send, on_begin_anew, || form(FormMsg::Anew));
    on!(a, send, on_save, || form(FormMsg::Save));

    let a = window.global::<SiteFormAdapter>();
    let form = |msg| Msg::Plant(Plant::SiteForm(msg));
    on!(a, send, on_edited, |field, text| form(FormMsg::Edited(field.into(), text.into())));
    on!(a, send, on_switch_rulebook, |key| form(FormMsg::Chosen("rulebook", key.into())));
    on!(a, send, on_choose_method, |key| form(FormMsg::Chosen("method", key.into())));
    on!(a, send, on_begin_anew, || form(FormMsg::Anew));
    on!(a, send, on_save, || form(FormMsg::Save));
}

pub fn show(window: &AppWindow, office: &Office) {
    let a = window.global::<PlantAdapter>();
    let page = office.plant_page();
    a.set_summary(page.summary.into());
    a.set_search(page.search.into());
    list!(a.get_lines, set_lines, rows::lines(&page.lines));
    a.set_empty_words(page.empty_words.into());
    a.set_nothing_yet(page.nothing_yet);
    a.set_chosen(page.chosen.into());
    match office.plant.pane {
        Pane::None => {}
        Pane::Site(_) => office.plant.site.iter().for_each(|page| show_site(window, page)),
        Pane::Appliance(_) => office.plant.appliance.iter().for_each(|page| show_appliance(window, page)),
        Pane::Record(..) => office.plant.record.iter().for_each(|page| show_record(window, page, office.plant.signing.as_ref())),
        Pane::ApplianceForm => show_appliance_form(window, office, a.get_pane() == PlantPane::ApplianceForm),
        Pane::SiteForm => show_site_form(window, office),
    }
    a.set_pane(match office.plant.pane {
        Pane::None => PlantPane::None,
        Pane::Site(_) => PlantPane::Site,
        Pane::Appliance(_) => PlantPane::Appliance,
        Pane::Record(..) => PlantPane::Record,
        Pane::ApplianceForm => PlantPane::ApplianceForm,
        Pane::SiteForm => PlantPane::SiteForm,
    });
}

fn show_site(window: &AppWindow, page: &SitePage) {
    let a = window.global::<SiteAdapter>();
    a.set_name((&page.name).into());
    a.set_address((&page.address).into());
    list!(a.get_facts, set_facts, rows::facts(&page.facts));
    list!(a.get_appliances, set_appliances, rows::lines(&page.appliances));
    list!(a.get_visits, set_visits, rows::lines(&page.visits));
}

fn show_appliance(window: &AppWindow, page: &AppliancePage) {
    let a = window.global::<ApplianceAdapter>();
    a.set_title((&page.title).into());
    a.set_site((&page.site).into());
    a.set_name((&page.name).into());
    a.set_state((&page.state).into());
    list!(a.get_rates, set_rates, rows::rates(&page.rates));
    list!(a.get_reasons, set_reasons, rows::reasons(&page.reasons));
    a.set_has_history(page.history.is_some());
    if let Some(history) = &page.history {
        let step =
            |step: &RateStep| ui::RateStep { at: step.at, rate: step.rate, low: step.low, high: step.high, verdict: verdict(step.verdict) };
        a.set_history(ui::RateHistory {
            steps: inner(history.steps.iter().map(step).collect()),
            repairs: inner(history.repairs.clone()),
            trigger: history.trigger,
            trigger_words: (&history.trigger_words).into(),
            from: (&history.from).into(),
            to: (&history.to).into(),
            words: (&history.words).into(),
        });
    }
    list!(a.get_duties, set_duties, rows::lines(&page.duties));
    list!(a.get_leaks, set_leaks, rows::lines(&page.leaks));
    list!(a.get_records, set_records, rows::lines(&page.records));
    list!(a.get_facts, set_facts, rows::facts(&page.facts));
    list!(a.get_changes, set_changes, rows::lines(&page.changes));
}

fn show_record(window: &AppWindow, page: &RecordPage, signing: Option<&signing::State>) {
    let a = window.global::<RecordAdapter>();
    a.set_title((&page.title).into());
    a.set_subject((&page.subject).into());
    a.set_file((&page.file).into());
    a.set_folder((&page.folder).into());
    list!(a.get_facts, set_facts, rows::facts(&page.facts));
    list!(a.get_entries, set_entries, rows::lines(&page.entries));
    list!(a.get_corrections, set_corrections, rows::facts(&page.corrections));
    a.set_can_sign(page.can_sign);
    if let Some(signing) = signing {
        let ready = signing.ready();
        a.set_signer((&signing.name).into());
        a.set_strokes(path(&signing.ink).into());
        a.set_sign_ready(ready.ready);
        a.set_sign_why_not(ready.why_not.into());
    }
    a.set_signing(signing.is_some());
}

/// `open`: what the screen itself has unfolded stays so.
fn show_appliance_form(window: &AppWindow, office: &Office, open: bool) {
    let a = window.global::<ApplianceFormAdapter>();
    let form = &office.plant.appliance_form;
    let ready = office.appliance_form_ready();
    a.set_changing(form.changing);
    a.set_taken_up_again(form.taken_up_again);
    a.set_subject(office.appliance_form_subject().into());
    a.set_identification(form.text("identification").into());
    a.set_identification_error(form.error("identification").into());
    a.set_gas(form.text("gas").into());
    a.set_gas_error(form.error("gas").into());
    list!(a.get_gases, set_gases, rows::choices(&gases_like(form.text("gas"))));
    a.set_full_charge(form.text("full-charge").into());
    a.set_full_charge_error(form.error("full-charge").into());
    a.set_place(form.text("place").into());
    a.set_more(form.more || (open && a.get_more()));
    list!(a.get_charge_methods, set_charge_methods, rows::choices(&charge_methods()));
    a.set_charge_method(form.text("charge-method").into());
    list!(a.get_categories, set_categories, rows::choices(&categories()));
    a.set_category(form.text("category").into());
    a.set_equipment(form.text("equipment").into());
    list!(a.get_kinds, set_kinds, rows::choices(&equipment()));
    a.set_installed_on(form.text("installed-on").into());
    a.set_installed_on_error(form.error("installed-on").into());
    a.set_assembly(form.text("assembly").into());
    a.set_description(form.text("description").into());
    a.set_serial(form.text("serial").into());
    a.set_room_volume(form.text("room-volume").into());
    a.set_room_volume_error(form.error("room-volume").into());
    a.set_hermetic(form.is_on("hermetic"));
    a.set_residential(form.is_on("residential"));
    a.set_detection_system(form.is_on("detection-system"));
    a.set_light_air_conditioning(form.is_on("light-air-conditioning"));
    a.set_below_minus_50(form.is_on("below-minus-50"));
    a.set_military(form.is_on("military"));
    a.set_valid_from(form.text("valid-from").into());
    a.set_valid_from_error(form.error("valid-from").into());
    a.set_reason(form.text("reason").into());
    a.set_reason_error(form.error("reason").into());
    a.set_ready(ready.ready);
    a.set_why_not(ready.why_not.into());
}

fn show_site_form(window: &AppWindow, office: &Office) {
    let a = window.global::<SiteFormAdapter>();
    let form = &office.plant.site_form;
    let ready = office.site_form_ready();
    a.set_changing(form.changing);
    a.set_taken_up_again(form.taken_up_again);
    a.set_name(form.text("name").into());
    a.set_name_error(form.error("name").into());
    a.set_address(form.text("address").into());
    a.set_owner(form.text("owner").into());
    a.set_operator(form.text("operator").into());
    a.set_time_zone(form.text("time-zone").into());
    a.set_time_zone_error(form.error("time-zone").into());
    let book = |book: crate::view::places::site_form::RulebookChoice| ui::RulebookChoice {
        key: book.key.into(),
        name: book.name.into(),
        facts: book.facts.into(),
        on: book.on,
    };
    list!(a.get_rulebooks, set_rulebooks, office.rulebook_choices().into_iter().map(book).collect());
    a.set_rulebooks_error(form.error("rulebooks").into());
    list!(a.get_methods, set_methods, rows::choices(&methods()));
    a.set_method(form.text("method").into());
    a.set_asks_method(office.site_form_asks_method());
    a.set_valid_from(form.text("valid-from").into());
    a.set_valid_from_error(form.error("valid-from").into());
    a.set_reason(form.text("reason").into());
    a.set_reason_error(form.error("reason").into());
    a.set_ready(ready.ready);
    a.set_why_not(ready.why_not.into());
}
