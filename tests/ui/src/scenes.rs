//! The pages with their preview content, each in the states worth looking at:
//! what the pictures show and the sweep goes over.

use crate::place_scenes::PLACE_SCENES;
use bubblepoint_ui::{
    Act, AppWindow, BeginAdapter, ChargeAdapter, ChooseApplianceAdapter, ChooseCylinderAdapter, CloseAdapter, EntryAdapter, EntryStep,
    LeakTestAdapter, Page, Place, Reading, Refusal, RepairAdapter, Shell, VisitAdapter, VisitClosedAdapter, WhenAdapter,
};
use slint::{ComponentHandle, ModelRc, VecModel};

/// One state of one page.
#[derive(Clone, Copy)]
pub struct Scene {
    pub name: &'static str,
    pub set: fn(&AppWindow),
}

/// Every scene: the visit in the order of a day's work, then the places.
pub fn scenes() -> impl Iterator<Item = &'static Scene> {
    VISIT_SCENES.iter().chain(PLACE_SCENES)
}

const VISIT_SCENES: &[Scene] = &[
    Scene { name: "begin", set: |w| open_without_visit(w, false) },
    Scene { name: "begin-add-site", set: |w| open_without_visit(w, true) },
    Scene { name: "visit", set: |w| act(w, Act::None) },
    Scene { name: "visit-first", set: visit_first },
    Scene { name: "visit-two-rulebooks", set: visit_two_rulebooks },
    Scene { name: "visit-facts", set: |w| act(w, Act::Facts) },
    Scene { name: "choose-appliance", set: |w| act(w, Act::ChooseAppliance) },
    Scene {
        name: "add-appliance",
        set: |w| {
            w.global::<ChooseApplianceAdapter>().set_adding(true);
            act(w, Act::ChooseAppliance);
        },
    },
    Scene { name: "cautions", set: |w| act(w, Act::Cautions) },
    Scene { name: "choose-cylinder", set: |w| act(w, Act::ChooseCylinder) },
    Scene {
        name: "add-cylinder",
        set: |w| {
            w.global::<ChooseCylinderAdapter>().set_adding(true);
            act(w, Act::ChooseCylinder);
        },
    },
    Scene { name: "charge", set: |w| act(w, Act::Charge) },
    Scene { name: "charge-pounds-ounces", set: charge_pounds_ounces },
    Scene { name: "charge-refused", set: charge_refused },
    Scene { name: "charge-gap", set: charge_gap },
    Scene { name: "recover", set: |w| act(w, Act::Recover) },
    Scene { name: "when", set: |w| act(w, Act::When) },
    Scene {
        name: "charge-said",
        set: |w| {
            w.global::<WhenAdapter>().set_stamp("31 Mar 12:05".into());
            act(w, Act::Charge);
        },
    },
    Scene { name: "leak-test", set: |w| act(w, Act::LeakTest) },
    Scene {
        name: "leak-test-clean",
        set: |w| {
            let a = w.global::<LeakTestAdapter>();
            a.set_result("no leak".into());
            a.set_scope("part".into());
            a.set_method_words("An indirect method: it is recorded, and is no leak inspection.".into());
            act(w, Act::LeakTest);
        },
    },
    Scene { name: "repair", set: |w| act(w, Act::Repair) },
    Scene {
        name: "repair-initial-test",
        set: |w| {
            w.global::<RepairAdapter>().set_step("initial".into());
            w.global::<RepairAdapter>().set_save_words("Save initial test".into());
            act(w, Act::Repair);
        },
    },
    Scene { name: "pressure", set: |w| act(w, Act::Pressure) },
    Scene { name: "note", set: |w| act(w, Act::Note) },
    Scene { name: "entry", set: |w| act(w, Act::Entry) },
    Scene {
        name: "entry-strike",
        set: |w| {
            w.global::<EntryAdapter>().set_step(EntryStep::Strike);
            act(w, Act::Entry);
        },
    },
    Scene {
        name: "entry-correct",
        set: |w| {
            w.global::<EntryAdapter>().set_can_strike(false);
            w.global::<EntryAdapter>().set_can_correct(true);
            w.global::<EntryAdapter>().set_step(EntryStep::Correct);
            act(w, Act::Entry);
        },
    },
    Scene {
        name: "entry-correct-signing",
        set: |w| {
            w.global::<EntryAdapter>().set_can_strike(false);
            w.global::<EntryAdapter>().set_can_correct(true);
            w.global::<EntryAdapter>().set_step(EntryStep::Correct);
            w.global::<EntryAdapter>().set_signing(true);
            act(w, Act::Entry);
        },
    },
    Scene {
        name: "entry-answer",
        set: |w| {
            w.global::<EntryAdapter>().set_step(EntryStep::Answer);
            act(w, Act::Entry);
        },
    },
    Scene { name: "close", set: |w| act(w, Act::Close) },
    Scene {
        name: "close-caution",
        set: |w| {
            use slint::Model;
            let a = w.global::<CloseAdapter>();
            let mut caution = a.get_cautions().row_data(0).expect("the preview has a caution");
            caution.acknowledged = false;
            a.set_cautions(ModelRc::new(VecModel::from(vec![caution])));
            a.set_onward(false);
            a.set_not_onward("Acknowledge each caution to go on.".into());
            act(w, Act::Close);
        },
    },
    Scene {
        name: "close-signing",
        set: |w| {
            let a = w.global::<CloseAdapter>();
            a.set_signing(true);
            a.set_technician_strokes("M300 700L520 220L640 700L900 330L1100 690L1500 420L1700 640".into());
            a.set_representative("Teodora Vance".into());
            act(w, Act::Close);
        },
    },
    Scene {
        name: "close-refused",
        set: |w| {
            let a = w.global::<CloseAdapter>();
            a.set_signing(true);
            a.set_counterpart("refused".into());
            act(w, Act::Close);
        },
    },
    Scene { name: "visit-closed", set: |w| closed(w, false) },
    Scene { name: "hand-over", set: |w| closed(w, true) },
];

fn act(window: &AppWindow, act: Act) {
    let shell = window.global::<Shell>();
    shell.set_place(Place::Due);
    shell.set_page(Page::Visit);
    window.global::<VisitAdapter>().set_act(act);
}

fn open_without_visit(window: &AppWindow, adding: bool) {
    window.global::<VisitAdapter>().set_under_way(false);
    window.global::<BeginAdapter>().set_adding(adding);
    window.global::<BeginAdapter>().set_asks_technician(adding);
    act(window, Act::Begin);
}

/// A visit just begun: what is still open here, and the one next step.
fn visit_first(window: &AppWindow) {
    let visit = window.global::<VisitAdapter>();
    visit.set_appliance("".into());
    visit.set_appliances(ModelRc::default());
    visit.set_entries(ModelRc::default());
    visit.set_leaks(ModelRc::default());
    visit.set_duties(ModelRc::default());
    visit.set_reasons(ModelRc::default());
    window.global::<Shell>().set_message("The visit is open. It is kept on this device until it is closed.".into());
    act(window, Act::None);
}

fn visit_two_rulebooks(window: &AppWindow) {
    use slint::Model;
    let visit = window.global::<VisitAdapter>();
    let mut first = visit.get_rates().row_data(0).expect("the preview has a rate");
    let mut second = first.clone();
    second.rulebook = "40 CFR 84.106".into();
    second.figure = "".into();
    second.unit = "".into();
    second.trigger = "".into();
    second.verdict = bubblepoint_ui::Verdict::None;
    second.word = "no rate due".into();
    second.consequence = "Gas was added to replace gas recovered in this job.".into();
    first.broken = true;
    first.rate_at = 1.0;
    first.trigger_at = 0.2;
    first.error_from = 0.0;
    first.error_to = 0.0;
    first.figure = "131.40".into();
    first.word = "over trigger".into();
    visit.set_rates(ModelRc::new(VecModel::from(vec![first, second])));
    act(window, Act::None);
}

fn charge_pounds_ounces(window: &AppWindow) {
    let charge = window.global::<ChargeAdapter>();
    let mut weighing = charge.get_weighing();
    let reading = |key: &str, caption: &str, text: &str, unit: &str| Reading {
        key: key.into(),
        caption: caption.into(),
        text: text.into(),
        unit: unit.into(),
        ..Reading::default()
    };
    weighing.two_part = true;
    weighing.unit = "lb oz".into();
    weighing.first = reading("before", "gross before", "53", "lb");
    weighing.first_ounces = reading("before oz", "and", "4.9", "oz");
    weighing.second = reading("after", "gross after", "43", "lb");
    weighing.second_ounces = reading("after oz", "and", "", "oz");
    weighing.active = "after oz".into();
    weighing.second_ounces.wrong = true;
    weighing.error = "16 oz and more are a pound: type 15.99 at most.".into();
    charge.set_weighing(weighing);
    act(window, Act::Charge);
}

fn charge_refused(window: &AppWindow) {
    let charge = window.global::<ChargeAdapter>();
    charge.set_refusal(Refusal {
        title: "Another gas".into(),
        text: "S-301 holds R-448A, R-1 is on R-22. Take another cylinder, or enter the retrofit first.".into(),
        with_reason: true,
    });
    charge.set_ready(false);
    charge.set_why_not("Say why this is gone on with.".into());
    act(window, Act::Charge);
}

fn charge_gap(window: &AppWindow) {
    let charge = window.global::<ChargeAdapter>();
    let mut weighing = charge.get_weighing();
    weighing.gap_words = "S-204 reads 0.35 kg less than when last weighed".into();
    weighing.hoses_emptied = false;
    charge.set_weighing(weighing);
    act(window, Act::Charge);
}

fn closed(window: &AppWindow, handing_over: bool) {
    let shell = window.global::<Shell>();
    shell.set_place(Place::Due);
    shell.set_page(Page::VisitClosed);
    window.global::<VisitClosedAdapter>().set_handing_over(handing_over);
}
