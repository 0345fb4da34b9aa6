//! What a new entry has to say, and entries that are saved together or not at all.

use crate::support::plant::{Plant, charge, gross, plant};
use bubblepoint::app::{AppError, ChargeInput, Common, GapAnswerInput, Kind, NewEntry, RepairInput, TestInput};
use bubblepoint::ledger::{
    Act, ChargePurpose, CylinderId, GAP_UNKNOWN, GasStatus, LeakPlace, Moment, Scope, TestKind, TestResult, VisitId, open_gaps,
};

fn test(kind: TestKind) -> TestInput {
    TestInput {
        common: Common::default(),
        kind,
        result: Some(TestResult::NoLeak),
        scope: Some(Scope::Whole),
        method: "bubbles".to_owned(),
        instrument: None,
        parts: String::new(),
        place: String::new(),
        leaks: Vec::new(),
        repair: None,
        partial: false,
        running_hours: String::new(),
    }
}

fn repair(place: &str, done: &str) -> RepairInput {
    RepairInput { place: place.to_owned(), done: done.to_owned(), ..RepairInput::default() }
}

fn field<T: std::fmt::Debug>(result: Result<T, AppError>) -> &'static str {
    match result {
        Err(AppError::Input { field, .. }) => field,
        other => panic!("{other:?}"),
    }
}

fn refused<T: std::fmt::Debug>(result: Result<T, AppError>) -> Vec<Kind> {
    match result {
        Err(AppError::Refused(refusals)) => refusals.into_iter().map(|refusal| refusal.kind).collect(),
        other => panic!("{other:?}"),
    }
}

fn nothing_was_saved(plant: &Plant, visit: VisitId) {
    assert_eq!(plant.app.store().entries_of_visit(visit).unwrap(), []);
}

#[test]
fn a_repair_says_where_and_what() {
    let plant = plant();
    let visit = plant.begin();
    assert_eq!(field(plant.app.repair(visit.id, plant.appliance, repair(" ", "brazed"))), "place");
    assert_eq!(field(plant.app.repair(visit.id, plant.appliance, repair("flare at drier", ""))), "done");
    nothing_was_saved(&plant, visit.id);
    plant.app.repair(visit.id, plant.appliance, repair("flare at drier", "brazed")).unwrap();
}

#[test]
fn a_test_names_its_parts_its_repair_and_a_method_that_fits() {
    let plant = plant();
    let visit = plant.begin();
    let enter = |input: TestInput| plant.app.test(visit.id, plant.appliance, input);
    assert_eq!(field(enter(TestInput { scope: Some(Scope::Part), ..test(TestKind::LeakTest) })), "parts");
    assert_eq!(field(enter(TestInput { result: Some(TestResult::Pass), ..test(TestKind::InitialVerification) })), "repair");
    let blank = vec![LeakPlace { place: " ".to_owned(), state: String::new() }];
    assert_eq!(field(enter(TestInput { result: Some(TestResult::LeakFound), leaks: blank, ..test(TestKind::LeakTest) })), "leaks");
    let indirect = |kind| TestInput { method: "sight glass".to_owned(), ..test(kind) };
    assert_eq!(refused(enter(indirect(TestKind::LeakInspection))), [Kind::IndirectMethod]);
    nothing_was_saved(&plant, visit.id);
    let looked = enter(indirect(TestKind::LeakTest)).unwrap();
    let of_no_repair = TestInput { repair: Some(looked.line.entry), ..test(TestKind::FollowUpVerification) };
    assert!(matches!(enter(of_no_repair), Err(AppError::Unknown { what: "repair" })), "what it verifies is a repair");
    let repaired = plant.app.repair(visit.id, plant.appliance, repair("flare at drier", "brazed")).unwrap();
    enter(TestInput { repair: Some(repaired.line.entry), ..test(TestKind::InitialVerification) }).unwrap();
}

#[test]
fn gas_for_the_same_leak_names_the_charge_it_belongs_to() {
    let plant = plant();
    let visit = plant.begin();
    let same = |reading, of| ChargeInput { purpose: ChargePurpose::SameLeak, same_leak_as: of, ..charge(plant.supply, reading) };
    assert_eq!(refused(plant.app.charge(visit.id, plant.appliance, same(gross("70", "65"), None))), [Kind::NotSaid]);
    nothing_was_saved(&plant, visit.id);
    let first = plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "65"))).unwrap();
    plant.app.charge(visit.id, plant.appliance, same(gross("65", "60"), Some(first.line.entry))).unwrap();
}

#[test]
fn used_gas_says_where_it_was_made_fit_and_the_cylinder_keeps_it() {
    let plant = plant();
    let visit = plant.begin();
    let on = |cylinder: CylinderId| plant.app.cylinder_standing(cylinder, visit.date).unwrap().facts;
    let facts = bubblepoint::ledger::CylinderFacts { gas_status: Some(GasStatus::Reclaimed), ..on(plant.supply) };
    plant.app.change_cylinder(plant.supply, facts, visit.date, "reclaimed gas").unwrap();
    let input = charge(plant.supply, gross("70", "65"));
    assert_eq!(refused(plant.app.charge(visit.id, plant.appliance, input.clone())), [Kind::NotSaid]);
    assert!(on(plant.supply).gas_source.is_empty());
    let told = ChargeInput { gas_source: "North Reclaim, batch 12".to_owned(), ..input };
    let entry = plant.app.charge(visit.id, plant.appliance, told).unwrap();
    assert_eq!(entry.detail.gas_source, "North Reclaim, batch 12");
    assert_eq!(on(plant.supply).gas_source, "North Reclaim, batch 12");
    let again = plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("65", "60"))).unwrap();
    assert_eq!(again.detail.gas_source, "North Reclaim, batch 12", "told once");
}

#[test]
fn entries_that_belong_together_are_saved_together_or_not_at_all() {
    let plant = plant();
    let visit = plant.begin();
    let found = TestInput {
        result: Some(TestResult::LeakFound),
        leaks: vec![LeakPlace { place: "flare at drier".to_owned(), state: String::new() }],
        ..test(TestKind::LeakInspection)
    };
    let both = |done: &str| [NewEntry::Test(found.clone()), NewEntry::Repair(repair("flare at drier", done))];
    assert_eq!(field(plant.app.enter_all(visit.id, plant.appliance, &both(""))), "done");
    nothing_was_saved(&plant, visit.id);
    let entered = plant.app.enter_all(visit.id, plant.appliance, &both("flare made anew")).unwrap();
    assert!(matches!(entered[1].line.act, Act::Repair { temporary: false }) && entered[0].line.position < entered[1].line.position);
    assert_eq!(plant.app.store().entries_of_visit(visit.id).unwrap().len(), 2);
}

#[test]
fn a_gap_stays_open_until_somebody_can_explain_it() {
    let plant = plant();
    let visit = plant.begin();
    let input = ChargeInput { weighing_gap: GAP_UNKNOWN.to_owned(), ..charge(plant.supply, gross("68", "60")) };
    let charged = plant.app.charge(visit.id, plant.appliance, input).unwrap();
    let open = || open_gaps(&plant.app.store().entries_of_appliance(plant.appliance).unwrap()).len();
    assert_eq!(open(), 1);
    let answer = |why: &str| {
        let input = GapAnswerInput { common: Common::default(), entry: charged.line.entry, why: why.to_owned() };
        plant.app.enter(visit.id, plant.appliance, &NewEntry::GapAnswer(input))
    };
    assert_eq!(field(answer(GAP_UNKNOWN)), "why");
    let told = answer("used elsewhere").unwrap();
    assert_eq!(told.detail.note, "cylinder S-204 weighed otherwise on 2026-03-03: used elsewhere");
    assert_eq!(open(), 0);
    assert!(answer("wrong weight").is_err(), "answered once");
    // An answer that was wrong is struck, and the question is open again.
    plant.app.strike(told.line.entry, "it was another cylinder", Some(plant.ben)).unwrap();
    assert_eq!(open(), 1);
    answer("wrong weight").unwrap();
}

#[test]
fn a_time_that_has_not_come_is_refused_and_the_one_who_strikes_is_kept() {
    let plant = plant();
    let visit = plant.begin();
    let at = |minute: u16| Moment { date: visit.date, minute: Some(minute) };
    let refused = |at| plant.app.refusals_at(visit.id, plant.appliance, at).unwrap().into_iter().map(|r| r.kind).collect::<Vec<_>>();
    assert_eq!(refused(at(8 * 60 + 12)), []);
    assert_eq!(refused(at(8 * 60 + 13)), [Kind::InTheFuture]);
    let common = |minute| Common { at: Some(at(minute)), person: Some(plant.ben), note: "looked".to_owned(), ..Common::default() };
    let note = |minute| plant.app.simple(visit.id, plant.appliance, bubblepoint::app::SimpleAct::Note, common(minute));
    assert!(matches!(note(9 * 60), Err(AppError::Refused(_))));
    let entry = note(7 * 60).unwrap();
    assert_eq!((entry.detail.person, entry.line.at), (Some(plant.ben), at(7 * 60)));
    let strike = plant.app.strike(entry.line.entry, "twice", Some(plant.ben)).unwrap();
    assert_eq!(strike.detail.person, Some(plant.ben));
}
