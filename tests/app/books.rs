//! Cylinders' own books: bought, weighed, sent away, returned, lost.

use crate::support::plant::{Plant, charge, gross, lb, plant, recover, zeroed};
use bubblepoint::app::{Amount, AppError, CylinderWork, Destination, Kind, NewCylinderEntry};
use bubblepoint::ledger::{Content, CylinderId, GasStatus};
use bubblepoint::quantity::Mass;

fn bought(gas: &str, net: &str, gross: Option<&str>) -> CylinderWork {
    CylinderWork::Bought { refrigerant: gas.to_owned(), status: GasStatus::Reclaimed, net: lb(net), gross: gross.map(lb) }
}

fn enter(plant: &Plant, cylinder: CylinderId, what: CylinderWork, reason: &str) -> Result<bubblepoint::ledger::CylinderEntry, AppError> {
    plant.app.enter_cylinder(&NewCylinderEntry {
        party: "Saltbeck Gases".to_owned(),
        paper: "N-17".to_owned(),
        certificate: "batch 7".to_owned(),
        reason: reason.to_owned(),
        ..NewCylinderEntry::of(cylinder, what)
    })
}

fn kinds<T: std::fmt::Debug>(result: Result<T, AppError>) -> Vec<Kind> {
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

fn holds(plant: &Plant, cylinder: CylinderId) -> (Content, Option<GasStatus>) {
    let balance = plant.app.cylinder_standing(cylinder, plant.app.today()).unwrap().balance;
    (balance.content, balance.status)
}

fn pounds(pounds: i64) -> Content {
    Content::Known(Mass::from_lb(pounds))
}

/// A supply cylinder over its life: charged from, returned with its heel, come again, and in the account.
#[test]
fn a_year_of_one_cylinder() {
    let plant = plant();
    let visit = plant.begin();
    plant.app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "24"))).unwrap();
    enter(&plant, plant.supply, CylinderWork::Returned { gross: lb("24") }, "").unwrap();
    assert_eq!(holds(&plant, plant.supply).0, pounds(0));
    let out = plant.app.cylinder_standing(plant.supply, plant.app.today()).unwrap().facts.scrapped;
    assert_eq!(out.as_deref(), Some("returned to Saltbeck Gases"));
    assert_eq!(kinds(enter(&plant, plant.supply, CylinderWork::Returned { gross: lb("20") }, "")), [Kind::OutOfUse]);
    enter(&plant, plant.supply, bought("R-22", "40", Some("59.8")), "").unwrap();
    let back = plant.app.cylinder_standing(plant.supply, plant.app.today()).unwrap();
    assert_eq!((back.facts.scrapped, back.facts.gas_source.as_str()), (None, "Saltbeck Gases; batch 7"));
    assert_eq!(back.balance.status, Some(GasStatus::Reclaimed));
    let line = plant.app.annual_account(2026, None).unwrap().gases.into_iter().find(|gas| gas.refrigerant == "R-22").unwrap().line;
    assert_eq!((line.bought, line.sent_away), (Some(Mass::from_lb(40)), Some(Mass::from_lb(4))));
    assert_eq!(line.lost_from_cylinders, Some(Mass::ZERO));
    // The supplier's invoice says 0.2 lb more than the scale.
    assert_eq!(line.unexplained(), Some(-lb("0.2").mass().unwrap()));
}

#[test]
fn recovered_gas_goes_to_a_reclaimer() {
    let plant = plant();
    let visit = plant.begin();
    plant.app.recover(visit.id, plant.appliance, recover(plant.recovery, gross("25", "45"))).unwrap();
    let sent = CylinderWork::SentAway { to: Destination::Reclaimer, amount: Amount::Gross(lb("45")) };
    let entry = enter(&plant, plant.recovery, sent, "").unwrap();
    assert_eq!((entry.act.mass(), entry.detail.destination.as_str()), (Some(Mass::from_lb(20)), "reclaimer"));
    assert_eq!(holds(&plant, plant.recovery).0, pounds(0));
    let again = CylinderWork::SentAway { to: Destination::Destruction, amount: Amount::Net(lb("1")) };
    assert_eq!(kinds(enter(&plant, plant.recovery, again, "")), [Kind::MoreThanHeld]);
    // Struck, it is in the cylinder again.
    assert_eq!(field(plant.app.strike_cylinder_entry(entry.id, " ")), "why");
    plant.app.strike_cylinder_entry(entry.id, "wrong cylinder").unwrap();
    assert_eq!(holds(&plant, plant.recovery).0, pounds(20));
    assert!(plant.app.strike_cylinder_entry(entry.id, "again").is_err());
}

#[test]
fn a_weighing_where_it_stands_settles_and_asks_about_a_gap() {
    let plant = plant();
    let visit = plant.begin();
    plant.app.charge(visit.id, plant.appliance, charge(plant.supply, zeroed("0", "-10"))).unwrap();
    let weighed = NewCylinderEntry::of(plant.supply, CylinderWork::Weighed { gross: lb("58") });
    assert_eq!(kinds(plant.app.enter_cylinder(&weighed)), [Kind::WeighingGap]);
    plant.app.enter_cylinder(&NewCylinderEntry { weighing_gap: "leaking cylinder".to_owned(), ..weighed }).unwrap();
    assert_eq!(holds(&plant, plant.supply).0, pounds(38));
    let empty = NewCylinderEntry::of(plant.supply, CylinderWork::Weighed { gross: lb("19") });
    assert_eq!(kinds(plant.app.enter_cylinder(&empty)), [Kind::BelowTare, Kind::WeighingGap]);
}

#[test]
fn what_was_lost_says_how() {
    let plant = plant();
    let lost = |gross: &str| CylinderWork::Lost { amount: Amount::Gross(lb(gross)) };
    assert_eq!(field(enter(&plant, plant.supply, lost("65"), "")), "reason");
    assert_eq!(field(enter(&plant, plant.supply, lost("70"), "valve left open")), "gross");
    let entry = enter(&plant, plant.supply, lost("65"), "valve left open").unwrap();
    assert_eq!((entry.act.mass(), holds(&plant, plant.supply).0), (Some(Mass::from_lb(5)), pounds(45)));
}

#[test]
fn a_purchase_is_judged_like_any_filling() {
    let plant = plant();
    assert_eq!(kinds(enter(&plant, plant.other_gas, bought("R-22", "5", None), "")), [Kind::OtherGas]);
    enter(&plant, plant.other_gas, bought("R-22", "5", None), "the supplier says so").unwrap();
    assert_eq!(holds(&plant, plant.other_gas), (pounds(30), Some(GasStatus::Mixed)));
    assert_eq!(kinds(enter(&plant, plant.supply, bought("R-22", "5", None), "")), [Kind::OverLimit]);
    assert_eq!(field(enter(&plant, plant.supply, bought("R-2222", "5", None), "")), "refrigerant");
    let tomorrow = NewCylinderEntry {
        at: Some(bubblepoint::ledger::Moment { date: "2026-03-04".parse().unwrap(), minute: Some(1) }),
        ..NewCylinderEntry::of(plant.supply, CylinderWork::Weighed { gross: lb("70") })
    };
    assert_eq!(kinds(plant.app.enter_cylinder(&tomorrow)), [Kind::InTheFuture]);
}
