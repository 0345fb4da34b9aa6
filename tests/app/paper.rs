//! What stands on a record's paper, its copies, and telling a saved one later.

use crate::support::plant::{Plant, charge, gross, lb, plant, plant_at, plant_under, recover, signature};
use bubblepoint::app::{
    ChargeInput, Common, Correction, KnownPrint, NewAppliance, NewEntry, PressureInput, Recognised, RecoverInput, RetrofitInput, SimpleAct,
};
use bubblepoint::ledger::{Category, ChargePurpose, Counterpart, Instrument, InstrumentId, InstrumentKind, RecoveryPurpose, VisitId};
use bubblepoint::print::Paper;
use bubblepoint::record::{EntryFacts, TransferFacts, Work};
use bubblepoint::store::{Since, Store};
use chrono::Duration;

fn transfers(entries: &[EntryFacts]) -> Vec<&TransferFacts> {
    let transfer = |entry: &EntryFacts| matches!(entry.work, Work::Transfer(_));
    entries
        .iter()
        .filter(|entry| transfer(entry))
        .map(|entry| match &entry.work {
            Work::Transfer(transfer) => &**transfer,
            _ => unreachable!(),
        })
        .collect()
}

/// A visit with one charge, closed by the technician alone.
fn closed(plant: &Plant) -> VisitId {
    let visit = plant.begin();
    plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "60"))).unwrap();
    let later = Counterpart::SignsLater { name: "Mara Brandeis".to_owned() };
    plant.app.close_visit(visit.id, signature("Ada Quill"), later).unwrap();
    visit.id
}

#[test]
fn a_retrofit_visit_prints_each_transfers_own_gas() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    // The first recovery is entered for the wrong cylinder's reading and struck; its gas stays what it was.
    let old = RecoverInput { purpose: RecoveryPurpose::Retrofit, ..recover(plant.recovery, gross("25", "35")) };
    let struck = app.recover(visit.id, plant.appliance, old.clone()).unwrap();
    app.strike(struck.line.entry, "misread", None).unwrap();
    plant.clock.forward(Duration::minutes(30));
    app.recover(visit.id, plant.appliance, old).unwrap();
    plant.clock.forward(Duration::minutes(30));
    let retrofit = RetrofitInput { common: Common::default(), refrigerant: "R-410A".to_owned(), full_charge: Some(lb("90")) };
    app.retrofit(visit.id, plant.appliance, retrofit).unwrap();
    plant.clock.forward(Duration::minutes(30));
    let new = ChargeInput { purpose: ChargePurpose::Retrofit, ..charge(plant.other_gas, gross("45", "30")) };
    app.charge(visit.id, plant.appliance, new).unwrap();

    let record = app.service_record(visit.id).unwrap();
    let part = &record.appliances[0];
    let gases: Vec<&str> = transfers(&part.entries).iter().map(|transfer| transfer.refrigerant.as_str()).collect();
    assert_eq!(gases, ["R-22", "R-22", "R-410A"]);
    assert_eq!(part.appliance.refrigerant, "R-410A", "the appliance is what it is in the end");
}

#[test]
fn a_recovery_says_the_level_it_had_to_reach() {
    let plant = plant();
    let visit = plant.begin();
    plant.app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("25", "35"))).unwrap();
    let surplus = RecoverInput { purpose: RecoveryPurpose::Surplus, ..recover(plant.recovery, gross("35", "36")) };
    plant.app.recover(visit.id, plant.appliance, surplus).unwrap();
    let record = plant.app.service_record(visit.id).unwrap();
    let levels: Vec<&str> = transfers(&record.appliances[0].entries).iter().map(|transfer| transfer.level_required.as_str()).collect();
    assert_eq!(levels, ["0 in Hg vacuum (0 psig) (40 CFR 82.156, Table 1: high-pressure, under 200 lb)", ""]);
}

#[test]
fn cautions_keep_their_day_and_person() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    app.acknowledge(visit.id, "1", None).unwrap();
    plant.clock.forward(Duration::days(1));
    app.join_visit(visit.id, plant.ben).unwrap();
    app.acknowledge(visit.id, "3", Some(plant.ben)).unwrap();
    app.simple(visit.id, plant.appliance, SimpleAct::Note, Common { note: "looked".to_owned(), ..Common::default() }).unwrap();
    let closed = app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    let told = |record: bubblepoint::record::ServiceRecord| -> Vec<(String, String)> {
        record.cautions.into_iter().map(|caution| (caution.at, caution.person)).collect()
    };
    let expected = [("3 Mar 2026, 08:12", "Ada Quill"), ("4 Mar 2026, 08:12", "Ben Osei")].map(|(at, who)| (at.to_owned(), who.to_owned()));
    assert_eq!(told(app.service_record(visit.id).unwrap()), expected);
    assert_eq!(bubblepoint::record::read_closed(&closed.record.bytes).unwrap().cautions[1].person, Some(plant.ben));
}

#[test]
fn readings_are_printed_with_their_gauge_and_are_not_judged() {
    let plant = plant();
    let visit = plant.begin();
    let gauge = Instrument {
        id: InstrumentId(uuid::Uuid::nil()),
        kind: InstrumentKind::Gauge,
        name: "Gauge 1".to_owned(),
        serial: "G-17".to_owned(),
        division: None,
        holds: None,
        checked_on: None,
        check_due: None,
    };
    let gauge = plant.app.add_instrument(gauge).unwrap();
    let hold = PressureInput {
        method: "pressure hold".to_owned(),
        level_reached: "10:12 10.45 bar; 10:42 10.40 bar".to_owned(),
        instrument: Some(gauge),
        ..PressureInput::default()
    };
    plant.app.pressure(visit.id, plant.appliance, hold).unwrap();
    let record = plant.app.service_record(visit.id).unwrap();
    let Work::Other { name, text, fields, .. } = &record.appliances[0].entries[0].work else { panic!("{record:?}") };
    assert_eq!((name.as_str(), text.as_str()), ("pressure hold", "kept as read, not judged"));
    let fields: Vec<(&str, &str)> = fields.iter().map(|field| (field.caption.as_str(), field.value.as_str())).collect();
    assert_eq!(fields, [("readings, gauge pressure", "10:12 10.45 bar; 10:42 10.40 bar"), ("gauge", "Gauge 1, G-17")]);
}

#[test]
fn closing_names_what_was_begun_and_not_saved() {
    let folder = tempfile::tempdir().unwrap();
    let plant = plant_at(&folder.path().join("a.store"));
    let app = &plant.app;
    let visit = plant.begin();
    app.simple(visit.id, plant.appliance, SimpleAct::Note, Common { note: "looked".to_owned(), ..Common::default() }).unwrap();
    app.save_draft(visit.id, Some(plant.appliance), "charge", "before=70").unwrap();
    app.save_draft(visit.id, None, "close", "half a signature").unwrap();
    app.flush_drafts().unwrap();
    let begun = app.unsaved(visit.id).unwrap();
    assert_eq!(begun.iter().map(|one| (one.action.as_str(), one.name.as_str())).collect::<Vec<_>>(), [("charge", "R-1")]);
    // Typed at the very last moment.
    app.save_draft(visit.id, Some(plant.appliance), "note", "and").unwrap();
    let ended = app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    assert_eq!(ended.unsaved.iter().map(|one| one.action.as_str()).collect::<Vec<_>>(), ["charge", "note"]);
    assert_eq!(app.unsaved(visit.id).unwrap(), []);
}

/// The print of each state is known after everything that came later.
#[test]
fn an_unchanged_print_is_known_whatever_came_later() {
    let plant = plant();
    let app = &plant.app;
    let visit = closed(&plant);
    let known = |saved: &[u8]| match app.recognise(saved).unwrap() {
        Recognised::Print(print) => print,
        other => panic!("{other:?}"),
    };
    let mut prints: Vec<(Vec<u8>, Paper, Since)> = Vec::new();
    let mut keep = |paper: Paper, then: Since| prints.push((app.print_record(visit, Some(paper)).unwrap().bytes, paper, then));
    keep(Paper::A4, Since::default());
    plant.clock.forward(Duration::hours(1));
    app.hand_over(visit, "Mara Brandeis, on paper").unwrap();
    keep(Paper::Letter, Since { hand_overs: 1, ..Since::default() });
    plant.clock.forward(Duration::hours(1));
    app.countersign(visit, signature("Mara Brandeis")).unwrap();
    keep(Paper::A4, Since { hand_overs: 1, countersigned: true, corrections: 0 });
    let wrong = app.store().entries_of_visit(visit).unwrap()[0].line.entry;
    let correction = Correction {
        person: plant.ben,
        why: "misread".to_owned(),
        instead: Some(NewEntry::Charge(charge(plant.supply, gross("70", "61")))),
        technician: signature("Ben Osei"),
        counterpart: Counterpart::NobodyPresent,
    };
    // A clock that was set back spoils nothing.
    plant.clock.forward(Duration::hours(-2));
    app.correct(wrong, &correction).unwrap();
    let now = Since { hand_overs: 1, countersigned: true, corrections: 1 };
    keep(Paper::A4, now);
    for (bytes, paper, then) in &prints {
        assert_eq!(known(bytes), KnownPrint { visit, paper: *paper, copy: 1, then: *then, now });
        let mut changed = bytes.clone();
        let middle = changed.len() / 2;
        changed[middle] ^= 1;
        assert_eq!(app.recognise(&changed).unwrap(), Recognised::OtherPrint(visit));
    }
}

#[test]
fn a_further_copy_says_which_it_is_and_prints_the_same_for_ever() {
    let plant = plant();
    let app = &plant.app;
    let open = plant.begin();
    assert!(app.further_copy(open.id).is_err(), "not closed yet");
    let visit = closed(&plant);
    let original = app.print_record(visit, None).unwrap();
    assert!(app.print_copy(visit, 2, None).is_err(), "none was made");
    assert_eq!(app.further_copy(visit).unwrap(), 2);
    let second = app.print_copy(visit, 2, None).unwrap();
    assert_ne!(second.bytes, original.bytes);
    assert!(second.file_name.ends_with(" copy 2.pdf"), "{}", second.file_name);
    assert_eq!(app.print_record(visit, None).unwrap(), original, "the filed original stays copy 1");
    app.hand_over(visit, "Mara Brandeis, by mail").unwrap();
    assert_eq!(app.print_copy(visit, 2, None).unwrap(), second, "as it was when it was made");
    assert_eq!(app.further_copy(visit).unwrap(), 3);
    let Recognised::Print(print) = app.recognise(&second.bytes).unwrap() else { panic!("not known") };
    assert_eq!((print.copy, print.then.hand_overs, print.now.hand_overs), (2, 0, 1));
}

/// 82.157(l)(10), 84.106(l)(12): a seasonal variance is recorded with what was removed and what was added.
#[test]
fn a_seasonal_return_names_what_was_removed() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    let removal = RecoverInput { purpose: RecoveryPurpose::Seasonal, ..recover(plant.recovery, gross("25", "35")) };
    app.recover(visit.id, plant.appliance, removal).unwrap();
    app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    plant.clock.forward(Duration::days(150));
    let visit = plant.begin();
    let back = ChargeInput { purpose: ChargePurpose::Seasonal, ..charge(plant.supply, gross("70", "62")) };
    app.charge(visit.id, plant.appliance, back).unwrap();
    let record = app.service_record(visit.id).unwrap();
    let none = &record.appliances[0].no_rates[0];
    assert_eq!(
        (none.amount.as_str(), none.because.as_str()),
        ("8 lb", "returned for the season; as much was recovered before: 10 lb on 3 Mar 2026")
    );
}

/// Where no rate is due the record still says why the law asks for a check.
#[test]
fn a_text_without_a_rate_says_why_it_applies() {
    let plant = plant_under(Store::in_memory().unwrap(), &["eu-590"]);
    let visit = plant.begin();
    let looked = Common { note: "looked".to_owned(), ..Common::default() };
    plant.app.simple(visit.id, plant.appliance, SimpleAct::Note, looked).unwrap();
    let record = plant.app.service_record(visit.id).unwrap();
    let readings: Vec<&str> = record.appliances[0].readings.iter().map(|notice| notice.text.as_str()).collect();
    let applies = readings.iter().find(|text| text.contains(" applies: "));
    assert!(applies.is_some_and(|text| text.starts_with("Regulation (EU) 2024/590 applies: ") && text.contains("kg")), "{readings:?}");
}

/// How far a text was read is said once, with the reason why it applies.
#[test]
fn how_far_the_law_was_read_is_said_once() {
    let plant = plant_under(Store::in_memory().unwrap(), &["us-84c"]);
    let facts = NewAppliance {
        site: plant.site,
        name: "R-2".to_owned(),
        category: Category::CommercialRefrigeration,
        refrigerant: "R-448A".to_owned(),
        full_charge: Some(lb("100")),
    };
    let appliance = plant.app.add_appliance(&facts).unwrap();
    let visit = plant.begin();
    let looked = Common { note: "looked".to_owned(), ..Common::default() };
    plant.app.simple(visit.id, appliance, SimpleAct::Note, looked).unwrap();
    let record = plant.app.service_record(visit.id).unwrap();
    let all: String = record.appliances[0].readings.iter().map(|notice| format!("{} ", notice.text)).collect();
    assert_eq!(all.matches("84.102").count(), 1, "{all}");
}
