//! What the rules for new entries refuse, through the same door as everyone.

use crate::support::plant::{Plant, charge, gross, lb, plant, plant_under, recover, zeroed};
use bubblepoint::app::{AppError, ChargeInput, Common, Kind, NewAppliance, RetrofitInput, SimpleAct};
use bubblepoint::ledger::{Category, ChargePurpose, Moment, Reading, VisitId, WeighingMode};
use bubblepoint::store::Store;

fn refused<T: std::fmt::Debug>(result: Result<T, AppError>) -> Vec<Kind> {
    match result {
        Err(AppError::Refused(refusals)) => refusals.into_iter().map(|refusal| refusal.kind).collect(),
        other => panic!("{other:?}"),
    }
}

fn field<T: std::fmt::Debug>(result: Result<T, AppError>) -> &'static str {
    match result {
        Err(AppError::Input { field, .. }) => field,
        other => panic!("{other:?}"),
    }
}

fn on(day: &str) -> Common {
    Common { at: Some(Moment { date: day.parse().unwrap(), minute: Some(600) }), ..Common::default() }
}

fn nothing_was_saved(plant: &Plant, visit: VisitId) {
    assert_eq!(plant.app.store().entries_of_visit(visit).unwrap(), []);
}

#[test]
fn readings_that_cannot_be_are_refused_and_nothing_is_saved() {
    let plant = plant();
    let visit = plant.begin();
    let charged = |reading: Reading| plant.app.charge(visit.id, plant.appliance, charge(plant.supply, reading));
    assert_eq!(field(charged(gross("60", "70"))), "after", "grows heavier");
    assert_eq!(field(charged(gross("70", "70"))), "after", "zero");
    assert_eq!(field(charged(zeroed("0", "10"))), "after", "the minus is missing");
    assert_eq!(field(charged(gross("70", "-1"))), "after", "negative gross");
    assert_eq!(field(charged(gross("seventy", "60"))), "before");
    assert_eq!(field(charged(Reading { after: None, ..gross("70", "60") })), "after");
    assert_eq!(refused(charged(gross("70", "19.9"))), [Kind::BelowTare]);
    let recovered = plant.app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("35", "25")));
    assert_eq!(field(recovered), "after", "grows lighter");
    let net = Reading { mode: WeighingMode::NetOnly, before: None, after: None, net: Some(lb("10")), scale: None };
    assert_eq!(field(charged(net.clone())), "before", "a cylinder is weighed twice");
    let factory = ChargeInput { cylinder: None, ..charge(plant.supply, net) };
    assert_eq!(field(plant.app.charge(visit.id, plant.appliance, factory.clone())), "cylinder");
    nothing_was_saved(&plant, visit.id);
    let factory = ChargeInput { purpose: ChargePurpose::FactoryCharge, ..factory };
    plant.app.charge(visit.id, plant.appliance, factory).unwrap();
}

#[test]
fn days_that_cannot_be_are_refused() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    let installed = app.store().appliance(plant.appliance).unwrap().unwrap();
    let mut facts = installed.versions.latest().clone();
    facts.installed_on = Some("2025-06-01".parse().unwrap());
    app.change_appliance(plant.appliance, facts, "2025-06-01".parse().unwrap(), "name plate read").unwrap();
    let charged = |day: &str| {
        let input = ChargeInput { common: on(day), ..charge(plant.supply, gross("70", "60")) };
        app.charge(visit.id, plant.appliance, input)
    };
    assert_eq!(refused(charged("2026-03-04")), [Kind::InTheFuture]);
    assert_eq!(refused(charged("2025-05-31")), [Kind::BeforeInstallation]);
    nothing_was_saved(&plant, visit.id);
    charged("2025-06-01").unwrap();
}

#[test]
fn the_day_is_the_sites_own() {
    let plant = plant();
    let visit = plant.begin();
    // 4 March 04:30 UTC is still 3 March in New York.
    plant.clock.set("2026-03-04T04:30:00Z".parse().unwrap());
    let note = |common: Common| plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, Common { note: "late".to_owned(), ..common });
    assert_eq!(refused(note(on("2026-03-04"))), [Kind::InTheFuture]);
    let entry = note(Common::default()).unwrap();
    assert_eq!((entry.line.at.date.to_string().as_str(), entry.line.at.minute), ("2026-03-03", Some(23 * 60 + 30)));
}

#[test]
fn gas_that_does_not_belong_is_refused() {
    let plant = plant();
    let visit = plant.begin();
    let other = plant.app.charge(visit.id, plant.appliance, charge(plant.other_gas, gross("45", "40")));
    assert_eq!(refused(other), [Kind::OtherGas]);
    let into_other = plant.app.recover(visit.id, plant.appliance, recover(plant.other_gas, gross("45", "50")));
    assert_eq!(refused(into_other), [Kind::OtherGas]);
    let unknown = NewAppliance {
        site: plant.site,
        name: "R-2".to_owned(),
        category: Category::Other,
        refrigerant: "R-2222".to_owned(),
        full_charge: None,
    };
    assert_eq!(field(plant.app.add_appliance(&unknown)), "refrigerant");
    let retrofit = RetrofitInput { common: Common::default(), refrigerant: "R-2222".to_owned(), full_charge: None };
    assert_eq!(field(plant.app.retrofit(visit.id, plant.appliance, retrofit)), "refrigerant");
    nothing_was_saved(&plant, visit.id);
}

#[test]
fn after_a_retrofit_the_new_gas_is_the_one_that_fits() {
    let plant = plant();
    let visit = plant.begin();
    let retrofit = RetrofitInput { common: Common::default(), refrigerant: "R-410A".to_owned(), full_charge: Some(lb("90")) };
    plant.app.retrofit(visit.id, plant.appliance, retrofit).unwrap();
    let old = plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "60")));
    assert_eq!(refused(old), [Kind::OtherGas]);
    let input = ChargeInput { purpose: ChargePurpose::Retrofit, ..charge(plant.other_gas, gross("45", "40")) };
    plant.app.charge(visit.id, plant.appliance, input).unwrap();
}

#[test]
fn hcfc_is_not_charged_in_the_union() {
    let plant = plant_under(Store::in_memory().unwrap(), &["eu-590"]);
    let visit = plant.begin();
    let with_reason = Common { reason: "the owner asks for it".to_owned(), ..Common::default() };
    let input = ChargeInput { common: with_reason, ..charge(plant.supply, gross("70", "60")) };
    let result = plant.app.charge(visit.id, plant.appliance, input);
    let text = result.as_ref().unwrap_err().to_string();
    assert_eq!(refused(result), [Kind::ServiceBan]);
    assert!(text.contains("Regulation (EU) 2024/590 Art. 4(1)"), "{text}");
    nothing_was_saved(&plant, visit.id);
}

#[test]
fn what_is_left_to_judgement_passes_with_a_reason_that_is_kept() {
    let plant = plant();
    let visit = plant.begin();
    // Zeroed, and more than the 50 lb in it.
    let input = charge(plant.supply, zeroed("0", "-51"));
    let prepared = plant.app.prepare(visit.id, plant.appliance, &bubblepoint::app::NewEntry::Charge(input.clone())).unwrap();
    assert!(!prepared.may_be_saved());
    assert_eq!(refused(plant.app.charge(visit.id, plant.appliance, input.clone())), [Kind::MoreThanHeld]);
    let common = Common { reason: "filled at the shop and not written down".to_owned(), ..Common::default() };
    let entry = plant.app.charge(visit.id, plant.appliance, ChargeInput { common, ..input }).unwrap();
    assert_eq!(plant.app.store().entry(entry.line.entry).unwrap().unwrap().detail.reason, "filled at the shop and not written down");
}

#[test]
fn a_first_gross_that_differs_from_the_last_is_asked_about() {
    let plant = plant();
    let visit = plant.begin();
    let input = charge(plant.supply, gross("68.0", "60.0"));
    assert_eq!(refused(plant.app.charge(visit.id, plant.appliance, input.clone())), [Kind::WeighingGap]);
    let input = ChargeInput { weighing_gap: "used elsewhere".to_owned(), ..input };
    plant.app.charge(visit.id, plant.appliance, input).unwrap();
    // From here on 60 lb is known.
    plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("60.0", "59.0"))).unwrap();
}

#[test]
fn nothing_follows_a_retirement() {
    let plant = plant();
    let visit = plant.begin();
    plant.app.simple(visit.id, plant.appliance, SimpleAct::Retire, Common::default()).unwrap();
    let charged = plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "60")));
    assert_eq!(refused(charged), [Kind::Retired]);
    plant.app.simple(visit.id, plant.appliance, SimpleAct::ReportSent, Common::default()).unwrap();
}

#[test]
fn a_mothballed_appliance_is_not_mothballed_again_before_it_is_charged() {
    let plant = plant();
    let visit = plant.begin();
    let mothball = || plant.app.simple(visit.id, plant.appliance, SimpleAct::Mothball, Common::default());
    mothball().unwrap();
    assert_eq!(refused(mothball()), [Kind::AlreadyMothballed]);
    let back = ChargeInput { purpose: ChargePurpose::Mothball, ..charge(plant.supply, gross("70", "60")) };
    plant.app.charge(visit.id, plant.appliance, back).unwrap();
    mothball().unwrap();
}
