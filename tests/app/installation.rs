//! The day of installation, stated later on.

use crate::support::plant::{charge, gross, plant};
use bubblepoint::app::AppError;
use bubblepoint::ledger::ApplianceFacts;

#[test]
fn an_appliance_is_there_before_anything_is_done_to_it() {
    let plant = plant();
    let app = &plant.app;
    let visit = plant.begin();
    app.charge(visit.id, plant.appliance, charge(plant.supply, gross("70", "66"))).unwrap();
    let known = app.store().appliance(plant.appliance).unwrap().unwrap().versions.latest().clone();
    let stated = |on: &str| {
        let facts = ApplianceFacts { installed_on: on.parse().ok(), ..known.clone() };
        match app.change_appliance(plant.appliance, facts, app.today(), "found on the plate") {
            Err(AppError::Input { field: "installed on", sentence }) => sentence,
            other => other.map(|()| String::new()).unwrap(),
        }
    };
    assert_eq!(stated("2026-03-04"), "2026-03-04 has not come yet at this site; leave the day empty until the appliance stands.");
    // The plant's clock stands at 3 March 2026; the charge is of that day.
    plant.clock.forward(chrono::Duration::days(2));
    assert_eq!(stated("2026-03-04"), "There is a charge on 2026-03-03, before 2026-03-04. Correct the day.");
    assert_eq!(stated("2015-05-01"), "");
    // Once it is known since when it is there, a later day is a successor's.
    assert_eq!(stated("2026-03-04"), "");
}
