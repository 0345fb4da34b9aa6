//! The five places with their preview content: full, with each page open, and
//! empty as a new user finds them.

use crate::scenes::Scene;
use bubblepoint_ui::{
    AccountAdapter, AppWindow, ApplianceFormAdapter, CylinderFormAdapter, CylindersAdapter, CylindersPane, DueAdapter, Page, Place,
    PlantAdapter, PlantPane, RecordAdapter, SetupAdapter, SetupPane, Shell, SiteFormAdapter,
};
use slint::{ComponentHandle, ModelRc};

/// Every scene of the places.
pub const PLACE_SCENES: &[Scene] = &[
    Scene { name: "due", set: |w| due(w, false) },
    Scene { name: "due-item", set: |w| due(w, true) },
    Scene {
        name: "due-list",
        set: |w| {
            w.global::<DueAdapter>().set_choosing(true);
            due(w, false);
        },
    },
    Scene { name: "due-empty", set: due_empty },
    Scene { name: "plant", set: |w| plant(w, PlantPane::None) },
    Scene { name: "plant-empty", set: plant_empty },
    Scene { name: "site", set: |w| plant(w, PlantPane::Site) },
    Scene { name: "appliance", set: |w| plant(w, PlantPane::Appliance) },
    Scene { name: "record", set: |w| plant(w, PlantPane::Record) },
    Scene {
        name: "record-signing",
        set: |w| {
            w.global::<RecordAdapter>().set_signing(true);
            plant(w, PlantPane::Record);
        },
    },
    Scene { name: "appliance-form", set: |w| plant(w, PlantPane::ApplianceForm) },
    Scene {
        name: "appliance-form-change",
        set: |w| {
            let form = w.global::<ApplianceFormAdapter>();
            form.set_changing(true);
            form.set_more(true);
            form.set_ready(false);
            form.set_why_not("Say why it changes.".into());
            form.set_reason_error("Say why, in a few words: the reason stands beside the change.".into());
            plant(w, PlantPane::ApplianceForm);
        },
    },
    Scene { name: "site-form", set: |w| plant(w, PlantPane::SiteForm) },
    Scene {
        name: "site-form-change",
        set: |w| {
            w.global::<SiteFormAdapter>().set_changing(true);
            plant(w, PlantPane::SiteForm);
        },
    },
    Scene { name: "cylinders", set: |w| cylinders(w, CylindersPane::None) },
    Scene { name: "cylinders-empty", set: cylinders_empty },
    Scene { name: "cylinder", set: |w| cylinders(w, CylindersPane::Cylinder) },
    Scene {
        name: "cylinder-form",
        set: |w| {
            let form = w.global::<CylinderFormAdapter>();
            form.set_taken_up_again(true);
            form.set_last_gross("last known 24.18 kg, 3 Mar 2026".into());
            cylinders(w, CylindersPane::Form);
        },
    },
    Scene { name: "account", set: |w| page(w, Place::Account, Page::Account) },
    Scene {
        name: "account-choosing",
        set: |w| {
            w.global::<AccountAdapter>().set_choosing(true);
            page(w, Place::Account, Page::Account);
        },
    },
    Scene {
        name: "account-empty",
        set: |w| {
            w.global::<AccountAdapter>().set_plates(ModelRc::default());
            page(w, Place::Account, Page::Account);
        },
    },
    Scene { name: "setup", set: |w| setup(w, SetupPane::None) },
    Scene { name: "setup-company", set: |w| setup(w, SetupPane::Company) },
    Scene { name: "setup-people", set: |w| setup(w, SetupPane::People) },
    Scene {
        name: "setup-people-empty",
        set: |w| {
            w.global::<SetupAdapter>().set_register(ModelRc::default());
            setup(w, SetupPane::People);
        },
    },
    Scene { name: "setup-person", set: |w| setup(w, SetupPane::PersonForm) },
    Scene { name: "setup-instrument", set: |w| setup(w, SetupPane::InstrumentForm) },
    Scene { name: "setup-units", set: |w| setup(w, SetupPane::Units) },
    Scene { name: "setup-appearance", set: |w| setup(w, SetupPane::Appearance) },
    Scene { name: "setup-store", set: |w| setup(w, SetupPane::Store) },
    Scene { name: "setup-about", set: |w| setup(w, SetupPane::About) },
];

fn page(window: &AppWindow, place: Place, page: Page) {
    let shell = window.global::<Shell>();
    shell.set_place(place);
    shell.set_page(page);
}

fn due(window: &AppWindow, item_open: bool) {
    window.global::<DueAdapter>().set_item_open(item_open);
    page(window, Place::Due, Page::Due);
}

fn due_empty(window: &AppWindow) {
    let due_adapter = window.global::<DueAdapter>();
    due_adapter.set_visits(ModelRc::default());
    due_adapter.set_lines(ModelRc::default());
    due_adapter.set_summary("".into());
    due(window, false);
}

fn plant(window: &AppWindow, pane: PlantPane) {
    let plant = window.global::<PlantAdapter>();
    plant.set_pane(pane);
    match pane {
        PlantPane::None => plant.set_chosen("".into()),
        PlantPane::Site | PlantPane::SiteForm => plant.set_chosen("s1".into()),
        _ => plant.set_chosen("r1".into()),
    }
    page(window, Place::Plant, Page::Plant);
}

fn plant_empty(window: &AppWindow) {
    let adapter = window.global::<PlantAdapter>();
    adapter.set_lines(ModelRc::default());
    adapter.set_summary("".into());
    adapter.set_nothing_yet(true);
    plant(window, PlantPane::None);
}

fn cylinders(window: &AppWindow, pane: CylindersPane) {
    window.global::<CylindersAdapter>().set_pane(pane);
    page(window, Place::Cylinders, Page::Cylinders);
}

fn cylinders_empty(window: &AppWindow) {
    let adapter = window.global::<CylindersAdapter>();
    adapter.set_lines(ModelRc::default());
    adapter.set_summary("".into());
    adapter.set_nothing_yet(true);
    cylinders(window, CylindersPane::None);
}

fn setup(window: &AppWindow, pane: SetupPane) {
    window.global::<SetupAdapter>().set_pane(pane);
    page(window, Place::Setup, Page::Setup);
}
