use crate::support::plant::{charge, gross, plant, plant_at, recover, signature, signed_by_both};
use bubblepoint::app::{AppError, Common, RepairInput, SimpleAct, TestInput};
use bubblepoint::ledger::{
    Content, Counterpart, GasStatus, Ink, LeakPlace, PersonId, Scope, Signature, TestKind, TestResult, VisitState, open_leaks,
};
use bubblepoint::quantity::Mass;
use bubblepoint::record::{Counterparty, Finding, RecordState, Verdict, fingerprint, read_closed};
use chrono::Duration;

fn found_a_leak() -> TestInput {
    TestInput {
        common: Common::default(),
        kind: TestKind::LeakInspection,
        result: Some(TestResult::LeakFound),
        scope: Some(Scope::Whole),
        method: "electronic detector".to_owned(),
        instrument: None,
        parts: "all joints".to_owned(),
        place: String::new(),
        leaks: vec![LeakPlace { place: "flare at drier".to_owned(), state: "isolated".to_owned() }],
        repair: None,
        partial: false,
        running_hours: String::new(),
    }
}

/// The worked example of the contract: 10 lb into 100 lb, history unknown,
/// so 365 days and a rate of 10 %.
#[test]
fn a_visit_from_leak_to_closed_record() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    assert_eq!((visit.date.to_string().as_str(), visit.minute), ("2026-03-03", Some(8 * 60 + 12)));
    app.acknowledge(visit.id, "1", None).unwrap();

    app.test(visit.id, plant.appliance, found_a_leak()).unwrap();
    plant.clock.forward(Duration::minutes(20));
    let charged = app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70.0", "60.0"))).unwrap();
    assert_eq!(charged.line.act.transfer().unwrap().mass, Mass::from_lb(10));
    assert_eq!(charged.detail.gas_status, Some(GasStatus::Virgin));
    let today = visit.date;
    let supply = app.cylinder_standing(plant.supply, today).unwrap();
    assert_eq!(supply.balance.content, Content::Known(Mass::from_lb(40)));

    plant.clock.forward(Duration::minutes(20));
    let repair = RepairInput { place: "flare at drier".to_owned(), done: "flare remade".to_owned(), ..RepairInput::default() };
    let repair = app.repair(visit.id, plant.appliance, repair).unwrap();
    let verification = TestInput {
        kind: TestKind::InitialVerification,
        result: Some(TestResult::Pass),
        leaks: Vec::new(),
        repair: Some(repair.line.entry),
        ..found_a_leak()
    };
    app.test(visit.id, plant.appliance, verification).unwrap();
    assert_eq!(open_leaks(&app.store().entries_of_appliance(plant.appliance).unwrap(), today), []);

    let draft = app.service_record(visit.id).unwrap();
    assert_eq!(draft.state, RecordState::Open);

    let (technician, counterpart) = signed_by_both();
    let closed = app.close_visit(visit.id, technician, counterpart).unwrap().record;
    assert_eq!(fingerprint(&closed.bytes), closed.fingerprint);
    let kept = app.store().closed_record(visit.id).unwrap().unwrap();
    assert_eq!((kept.bytes.as_slice(), &kept.fingerprint), (closed.bytes.as_slice(), &closed.fingerprint));
    assert_eq!(read_closed(&closed.bytes).unwrap().entries.len(), 4);
    assert!(app.store().check().unwrap().sound());

    let record = app.service_record(visit.id).unwrap();
    assert_eq!(record.fingerprint.as_ref().unwrap().full, closed.fingerprint);
    assert!(matches!(&record.counterparty, Some(Counterparty::Signed { signed }) if signed.name == "Mara Brandeis"));
    assert_eq!(record.cautions.len(), 1);
    let part = &record.appliances[0];
    assert_eq!((part.finding, part.entries.len()), (Finding::LeaksRepaired, 4));
    let rate = &part.leak_rates[0];
    assert_eq!((rate.percent, rate.verdict), (bubblepoint::quantity::Ratio::from_integer(10), Verdict::Under));
    assert_eq!(rate.working, "10 lb ÷ 100 lb × 365 ÷ 365 × 100 % = 10 %");
    // 10 lb of R-22: 4.5359237 kg × ODP 0.055.
    let charged = part.amounts.iter().find(|amount| amount.what == "charged").unwrap();
    assert_eq!(bubblepoint::quantity::decimal_text(charged.odp_kg.unwrap()).unwrap(), "0.2494758035");
}

#[test]
fn an_open_visit_is_taken_up_again_and_takes_in_a_second_person() {
    let plant = plant();
    let first = plant.begin();
    plant.clock.forward(Duration::days(2));
    let again = plant.app.begin_visit(plant.site, plant.ben).unwrap();
    assert_eq!((again.id, again.people), (first.id, vec![plant.ada, plant.ben]));
    assert_eq!(plant.app.open_visits().unwrap().len(), 1);
    assert!(plant.app.join_visit(first.id, plant.ben).is_err());
    assert!(matches!(plant.app.join_visit(first.id, PersonId(uuid::Uuid::nil())), Err(AppError::Unknown { what: "person" })));
}

#[test]
fn recovered_gas_turns_into_recycled_by_an_entry() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("25", "35"))).unwrap();
    let holds = || app.cylinder_standing(plant.recovery, visit.date).unwrap();
    assert_eq!((holds().balance.gas.as_deref(), holds().balance.status), (Some("R-22"), Some(GasStatus::Recovered)));
    assert_eq!(holds().recovered_from.as_deref(), Some("Harbour Fish Ltd"));
    let recycle = bubblepoint::app::RecycleInput {
        common: Common::default(),
        cylinder: plant.recovery,
        method: "machine 2, filter changed".to_owned(),
        instrument: None,
    };
    app.recycle(visit.id, plant.appliance, recycle.clone()).unwrap();
    assert_eq!(holds().balance.status, Some(GasStatus::Recycled));
    assert!(matches!(app.recycle(visit.id, plant.appliance, recycle), Err(AppError::Refused(_))));
    let all = app.cylinders(visit.date).unwrap();
    let named = |name: &str| all.iter().find(|standing| standing.cylinder.name == name).unwrap().balance.clone();
    assert_eq!(named("R-9"), holds().balance);
    assert_eq!(named("S-204").content, Content::Known(Mass::from_lb(50)));
}

#[test]
fn a_visit_ends_in_every_way_a_counterpart_can() {
    for (counterpart, word) in [
        (Counterpart::NobodyPresent, "nobody"),
        (Counterpart::Refused { name: "Mara Brandeis".to_owned(), reason: "disputes the weight".to_owned() }, "refused"),
        (Counterpart::SignsLater { name: "Mara Brandeis".to_owned() }, "later"),
    ] {
        let plant = plant();
        let visit = plant.begin();
        plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, Common { note: word.to_owned(), ..Common::default() }).unwrap();
        plant.app.close_visit(visit.id, signature("Ada Quill"), counterpart.clone()).unwrap();
        let stored = plant.app.store().visit(visit.id).unwrap().unwrap();
        assert_eq!((stored.state, stored.closing.unwrap().counterpart), (VisitState::Closed, counterpart));
    }
}

#[test]
fn closing_asks_for_signatures_and_reasons() {
    let plant = plant();
    let visit = plant.begin();
    let close = |technician: Signature, counterpart: Counterpart| plant.app.close_visit(visit.id, technician, counterpart);
    let field = |result: Result<_, AppError>| match result {
        Err(AppError::Input { field, .. }) => field,
        other => panic!("{other:?}"),
    };
    assert_eq!(field(close(signature("Ada Quill"), Counterpart::NobodyPresent)), "visit", "nothing was entered");
    plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, Common { note: "looked".to_owned(), ..Common::default() }).unwrap();
    let unsigned = Signature { name: "Ada Quill".to_owned(), ink: Ink::default() };
    assert_eq!(field(close(unsigned.clone(), Counterpart::NobodyPresent)), "technician");
    assert_eq!(field(close(signature(" "), Counterpart::NobodyPresent)), "technician");
    assert_eq!(field(close(signature("Ada Quill"), Counterpart::Signed { signature: unsigned })), "representative");
    let refused = Counterpart::Refused { name: "M".to_owned(), reason: " ".to_owned() };
    assert_eq!(field(close(signature("Ada Quill"), refused)), "representative");
    assert_eq!(plant.app.store().visit(visit.id).unwrap().unwrap().state, VisitState::Open);
    close(signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    assert_eq!(field(close(signature("Ada Quill"), Counterpart::NobodyPresent)), "visit", "closed already");
}

#[test]
fn what_comes_after_closing_is_kept_beside_the_record() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    app.simple(visit.id, plant.appliance, SimpleAct::Note, Common { note: "looked".to_owned(), ..Common::default() }).unwrap();
    assert!(app.hand_over(visit.id, "by mail").is_err(), "not closed yet");
    let later = Counterpart::SignsLater { name: "Mara Brandeis".to_owned() };
    let closed = app.close_visit(visit.id, signature("Ada Quill"), later).unwrap().record;
    app.countersign(visit.id, signature("Mara Brandeis")).unwrap();
    assert!(app.countersign(visit.id, signature("Mara Brandeis")).is_err(), "once");
    app.hand_over(visit.id, "Mara Brandeis, on paper").unwrap();

    let record = app.service_record(visit.id).unwrap();
    assert!(matches!(&record.counterparty, Some(Counterparty::Signed { signed }) if signed.name == "Mara Brandeis"));
    assert_eq!(record.handed_over, "Mara Brandeis, on paper, 3 Mar 2026, 08:12");
    assert_eq!(app.store().closed_record(visit.id).unwrap().unwrap().bytes, closed.bytes);
}

#[test]
fn a_draft_is_there_until_its_entry_is_saved() {
    let folder = tempfile::tempdir().unwrap();
    let plant = plant_at(&folder.path().join("a.store"));
    let app = &plant.app;
    let visit = plant.begin();
    app.save_draft(visit.id, Some(plant.appliance), "charge", "before=70").unwrap();
    app.flush_drafts().unwrap();
    assert_eq!(app.open_visits().unwrap()[0].drafts[0].body, "before=70");
    // Still held by the drafts' thread when the entry is saved.
    app.save_draft(visit.id, Some(plant.appliance), "charge", "before=70 after=60").unwrap();
    app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "60"))).unwrap();
    app.flush_drafts().unwrap();
    assert_eq!(app.draft(visit.id, "charge").unwrap(), None);
}
