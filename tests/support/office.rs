//! Files taken in and judged by the use cases of the program: nothing else
//! stands between a CSV and what is asserted.

use bubblepoint::app::testing::{CountedIds, SetClock};
use bubblepoint::app::{App, Imported, assess_all};
use bubblepoint::ledger::{ApplianceId, Line, Registers, by_appliance};
use bubblepoint::rules::Assessment;
use bubblepoint::store::Store;
use chrono_tz::Tz;
use std::collections::HashMap;

pub struct Office {
    pub app: App,
    pub clock: SetClock,
    registers: Registers,
    lines: HashMap<ApplianceId, Vec<Line>>,
}

/// A store in memory in 2030, so that no day of a story is to come.
pub fn app_of_2030() -> (App, SetClock) {
    let clock = SetClock::at("2030-01-01T12:00:00Z".parse().unwrap(), Tz::UTC);
    let app = App::with(Store::in_memory().unwrap(), Box::new(clock.clone()), Box::new(CountedIds::after(0))).unwrap();
    (app, clock)
}

/// Takes in `sites.csv`, `appliances.csv` and `log.csv`.
pub fn taken(sites: &str, appliances: &str, log: &str) -> Office {
    let (app, clock) = app_of_2030();
    import(&app, &[("sites.csv", sites), ("appliances.csv", appliances), ("log.csv", log)]);
    Office::of(app, clock)
}

#[track_caller]
pub fn import(app: &App, files: &[(&str, &str)]) -> Imported {
    let files: Vec<(String, Vec<u8>)> = files.iter().map(|(name, text)| ((*name).to_owned(), trimmed(text).into_bytes())).collect();
    app.import(&files).unwrap_or_else(|error| panic!("{error}"))
}

/// Lines of a test may be indented.
fn trimmed(text: &str) -> String {
    text.lines().map(str::trim).filter(|line| !line.is_empty()).map(|line| format!("{line}\n")).collect()
}

impl Office {
    pub fn of(app: App, clock: SetClock) -> Self {
        let registers = app.store().registers().unwrap();
        let lines = by_appliance(app.store().lines().unwrap());
        Self { app, clock, registers, lines }
    }

    /// Every appliance as of a day.
    pub fn on(&self, day: &str) -> Vec<Assessment<'_>> {
        assess_all(&self.registers, &self.lines, day.parse().unwrap(), |_| true)
    }

    /// The one appliance there is.
    pub fn one(&self, day: &str) -> Assessment<'_> {
        let mut all = self.on(day);
        assert_eq!(all.len(), 1);
        all.remove(0)
    }
}
