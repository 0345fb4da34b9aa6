//! What a cylinder holds and may take, from import to the day's visits.

use crate::support::plant::{charge, gross, lb, plant, recover, zeroed};
use bubblepoint::app::{AppError, ChargeInput, Common, Kind, NewAppliance, NewSite, RecoverInput};
use bubblepoint::ledger::{Category, ChargePurpose, Content, CylinderFacts, CylinderId, GasStatus, SiteFacts};
use bubblepoint::measure::{LimitKind, default_oil_factor};
use bubblepoint::quantity::{Mass, Ratio};
use chrono::Duration;

fn held(app: &bubblepoint::app::App, cylinder: CylinderId) -> Content {
    app.cylinder_standing(cylinder, app.today()).unwrap().balance.content
}

fn pounds(pounds: i64) -> Content {
    Content::Known(Mass::from_lb(pounds))
}

/// The gross of a register is the weighing on the day of import: what its log tells had happened by then.
#[test]
fn an_imported_gross_was_read_after_the_imported_history() {
    let plant = plant();
    let app = &plant.app;
    let cylinders = "cylinder,kind,tare,unit,refrigerant,gas_status,gross\nI-1,supply,20,lb,R-22,virgin,50\n";
    let log =
        "date,appliance,what,amount,unit,cylinder,purpose\n2025-06-01,R-1,charge,6,lb,I-1,leak\n2026-03-03,R-1,charge,4,lb,I-1,leak\n";
    let file = |name: &str, text: &str| (name.to_owned(), text.as_bytes().to_vec());
    app.import(&[file("c.csv", cylinders), file("l.csv", log)]).unwrap();
    let id = app.store().registers().unwrap().cylinder_named("I-1").unwrap().id;
    assert_eq!(held(app, id), pounds(30));
    // More history may come later the same day.
    let more = "date,appliance,what,amount,unit,cylinder,purpose\n2025-07-01,R-1,charge,1,lb,I-1,leak\n";
    app.import(&[file("m.csv", more)]).unwrap();
    assert_eq!(held(app, id), pounds(30));
    let before = app.cylinder_standing(id, "2025-06-30".parse().unwrap()).unwrap().balance;
    assert_eq!((before.content, before.worked_back), (pounds(35), true));
    // What is done after the import counts, on a site whose clock is five hours behind.
    let visit = plant.begin();
    app.charge(visit.id, plant.appliance, charge(id, gross("50", "47"))).unwrap();
    assert_eq!(held(app, id), pounds(27));
    // The same line again is no change.
    let again = "cylinder,kind,tare,unit,refrigerant,gas_status,gross\r\nI-1,supply,20,lb,R-22,virgin,50\r\n";
    app.import(&[file("again.csv", again)]).unwrap();
    assert_eq!(held(app, id), pounds(27));
}

/// Weighed anew at noon, the cylinder holds what was read; what goes in afterwards comes on top.
#[test]
fn a_weighing_counts_from_its_own_minute() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    app.recover(visit.id, plant.appliance, recover(plant.recovery, zeroed("0", "20"))).unwrap();
    plant.clock.forward(Duration::hours(2));
    let known = app.store().cylinder(plant.recovery).unwrap().unwrap();
    let weighed = CylinderFacts { gross: lb("43").mass().ok(), gross_written: Some(lb("43")), ..known.versions.latest().clone() };
    app.change_cylinder(plant.recovery, weighed, app.today(), "").unwrap();
    assert_eq!(held(app, plant.recovery), pounds(18));
    plant.clock.forward(Duration::hours(1));
    app.recover(visit.id, plant.appliance, recover(plant.recovery, zeroed("0", "5"))).unwrap();
    assert_eq!(held(app, plant.recovery), pounds(23));
    // To move it is not to weigh it.
    let moved = app.store().cylinder(plant.recovery).unwrap().unwrap();
    let moved = CylinderFacts { location: "van 2".to_owned(), ..moved.versions.latest().clone() };
    app.change_cylinder(plant.recovery, moved, app.today(), "").unwrap();
    assert_eq!(held(app, plant.recovery), pounds(23));
}

#[test]
fn room_for_oil_is_left_in_recovered_gas_alone() {
    let plant = plant();
    let app = &plant.app;
    let limit = |cylinder| {
        let standing = app.cylinder_standing(cylinder, app.today()).unwrap();
        app.limit_rules(&["us-82f".to_owned()]).unwrap().limit_of_content(&standing).unwrap().binding.unwrap()
    };
    let virgin = limit(plant.supply);
    assert_eq!((virgin.kind, virgin.oil_factor), (LimitKind::EightyPercent, Ratio::from_integer(1)));
    let visit = plant.begin();
    app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("25", "45"))).unwrap();
    let recovered = limit(plant.recovery);
    assert_eq!(recovered.oil_factor, default_oil_factor());
    assert_eq!(recovered.name(), "80 % of the volume at 25 °C, × 0.9 for oil");
    assert!(recovered.net.kg() <= virgin.net.kg() * default_oil_factor());
    app.set(bubblepoint::app::Setting::OilFactor, "0.85").unwrap();
    assert_eq!((limit(plant.recovery).oil_factor, limit(plant.supply).oil_factor), (Ratio::new(85, 100), Ratio::from_integer(1)));
    let standing = app.cylinder_standing(plant.recovery, app.today()).unwrap();
    assert_eq!((standing.balance.heel, standing.balance.status), (Some(Mass::ZERO), Some(GasStatus::Recovered)));
}

/// 40 CFR 82.154(d): what was recovered from two owners can be given back to neither.
#[test]
fn gas_of_two_owners_goes_to_a_reclaimer_alone() {
    let plant = plant();
    let app = &plant.app;
    let facts = SiteFacts { owner: "Ice Rink Trust".to_owned(), ..SiteFacts::under(vec!["us-82f".to_owned()]) };
    let rink = app.add_site(NewSite { name: "Rink".to_owned(), facts }).unwrap();
    let new = NewAppliance {
        site: rink,
        name: "IR-1".to_owned(),
        category: Category::IndustrialProcessRefrigeration,
        refrigerant: "R-22".to_owned(),
        full_charge: Some(lb("100")),
    };
    let sheet = app.add_appliance(&new).unwrap();
    let visit = plant.begin();
    app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("25", "35"))).unwrap();
    let other = app.begin_visit(rink, plant.ada).unwrap();
    let input = recover(plant.recovery, gross("35", "40"));
    let Err(AppError::Refused(refused)) = app.recover(other.id, sheet, input.clone()) else { panic!("refused") };
    assert_eq!(refused.iter().map(|refusal| refusal.kind).collect::<Vec<_>>(), [Kind::OtherOwner]);
    let common = Common { reason: "the only cylinder here; it goes for reclamation".to_owned(), ..Common::default() };
    app.recover(other.id, sheet, RecoverInput { common: common.clone(), ..input }).unwrap();
    let owners = app.cylinder_standing(plant.recovery, app.today()).unwrap().owners;
    assert_eq!(owners.iter().map(String::as_str).collect::<Vec<_>>(), ["Harbour Fish Ltd", "Ice Rink Trust"]);
    let back = ChargeInput { common, purpose: ChargePurpose::Returned, ..charge(plant.recovery, gross("40", "38")) };
    let Err(AppError::Refused(refused)) = app.charge(visit.id, plant.appliance, back) else { panic!("refused") };
    assert!(refused.iter().any(|refusal| refusal.kind == Kind::RecoveredGas && !refusal.judgement), "{refused:?}");
}
