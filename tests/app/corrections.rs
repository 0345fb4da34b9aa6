//! Wrong entries: struck while the visit is open, corrected once it is closed.

use crate::support::plant::{charge, gross, plant, recover, signature, signed_by_both};
use bubblepoint::app::{AppError, ChargeInput, Correction, NewEntry};
use bubblepoint::ledger::{Content, Counterpart};
use bubblepoint::quantity::Mass;
use bubblepoint::record::Work;

#[test]
fn a_struck_entry_stays_and_counts_no_more() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    let wrong = app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "50"))).unwrap();
    assert!(matches!(app.strike(wrong.line.entry, " ", None), Err(AppError::Input { field: "why", .. })));
    app.strike(wrong.line.entry, "read the wrong scale", None).unwrap();
    app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "60"))).unwrap();
    assert!(app.strike(wrong.line.entry, "again", None).is_err());

    let content = app.cylinder_standing(plant.supply, visit.date).unwrap().balance.content;
    assert_eq!(content, Content::Known(Mass::from_lb(40)));
    let record = app.service_record(visit.id).unwrap();
    let entries = &record.appliances[0].entries;
    assert_eq!(entries.iter().map(|entry| entry.struck).collect::<Vec<_>>(), [true, false]);
    assert_eq!(entries[0].struck_because, "struck 3 Mar 2026, 08:12: read the wrong scale");
    let charged = record.appliances[0].amounts.iter().find(|amount| amount.what == "charged").unwrap();
    assert_eq!(charged.mass_written, "10 lb");
}

#[test]
fn a_closed_entry_is_corrected_by_a_record_that_names_it() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    let wrong = app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "55"))).unwrap();
    let (technician, counterpart) = signed_by_both();
    let first = app.close_visit(visit.id, technician, counterpart).unwrap().record;
    assert!(app.strike(wrong.line.entry, "wrong", None).is_err(), "the visit is closed");

    plant.clock.set("2026-03-10T15:00:00Z".parse().unwrap());
    let correction = Correction {
        person: plant.ben,
        why: "the after reading was 60 lb".to_owned(),
        instead: Some(NewEntry::Charge(charge(plant.supply, gross("70", "60")))),
        technician: signature("Ben Osei"),
        counterpart: Counterpart::NobodyPresent,
    };
    let unsigned = Correction { technician: signature(""), ..correction.clone() };
    assert!(app.correct(wrong.line.entry, &unsigned).is_err());
    assert_eq!(app.open_visits().unwrap().len(), 0, "a refused correction leaves nothing");
    let second = app.correct(wrong.line.entry, &correction).unwrap();
    assert_ne!(first.fingerprint, second.fingerprint);
    assert!(app.correct(wrong.line.entry, &correction).is_err(), "corrected once; then the correction is corrected");

    // The right mass counts, on the day of the wrong one.
    let lines = app.store().lines_of(plant.appliance).unwrap();
    assert_eq!(lines.len(), 1);
    assert_eq!((lines[0].at, lines[0].act.transfer().unwrap().mass), (wrong.line.at, Mass::from_lb(10)));

    // The old record is as it was signed, with a remark that names the new one.
    assert_eq!(app.store().closed_record(visit.id).unwrap().unwrap().bytes, first.bytes);
    let old = app.service_record(visit.id).unwrap();
    let short = bubblepoint::record::Fingerprint { full: second.fingerprint.clone() }.short();
    assert_eq!(old.remarks, [format!("The charge of 3 Mar 2026, 08:12 is corrected by record {short}: the after reading was 60 lb.")]);
    let mending = lines[0].entry;
    let new = app.service_record(app.store().entry(mending).unwrap().unwrap().visit).unwrap();
    let entry = &new.appliances[0].entries[0];
    let short = bubblepoint::record::Fingerprint { full: first.fingerprint }.short();
    assert_eq!(entry.corrects, format!("charge of 3 Mar 2026, 08:12, record {short}: the after reading was 60 lb"));
    assert!(matches!(&entry.work, Work::Transfer(transfer) if transfer.net == "10 lb"));
    assert!(app.store().check().unwrap().sound());
}

#[test]
fn what_never_happened_is_corrected_away() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    let wrong = app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("25", "35"))).unwrap();
    let correction = Correction {
        person: plant.ada,
        why: "entered for the wrong appliance".to_owned(),
        instead: None,
        technician: signature("Ada Quill"),
        counterpart: Counterpart::NobodyPresent,
    };
    assert!(matches!(app.correct(wrong.line.entry, &correction), Err(AppError::Input { field: "entry", .. })), "still open");
    app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    app.correct(wrong.line.entry, &correction).unwrap();
    assert_eq!(app.cylinder_standing(plant.recovery, visit.date).unwrap().balance.content, Content::Known(Mass::ZERO));
}

/// Correcting a charge is judged as if the wrong one had never been: here the
/// right one takes all that was in the cylinder.
#[test]
fn a_correction_is_judged_without_what_it_corrects() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    let wrong = app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "60"))).unwrap();
    app.close_visit(visit.id, signature("Ada Quill"), Counterpart::NobodyPresent).unwrap();
    let right = ChargeInput { ..charge(plant.supply, crate::support::plant::zeroed("0", "-50")) };
    let correction = Correction {
        person: plant.ada,
        why: "the cylinder was emptied".to_owned(),
        instead: Some(NewEntry::Charge(right)),
        technician: signature("Ada Quill"),
        counterpart: Counterpart::NobodyPresent,
    };
    app.correct(wrong.line.entry, &correction).unwrap();
    assert_eq!(app.cylinder_standing(plant.supply, visit.date).unwrap().balance.content, Content::Known(Mass::ZERO));
}
