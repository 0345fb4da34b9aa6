//! The day on which an appliance is said to have been installed: it has come,
//! and nothing was done to the appliance before it.

use super::App;
use crate::ledger::{Appliance, Line, Site};
use chrono::NaiveDate;

impl App {
    /// Today at a site, by its last known zone.
    pub(super) fn today_there(&self, site: &Site) -> NaiveDate {
        self.moment_in(self.zone_of(site.versions.latest())).date
    }
}

/// The first entry before a day of installation that is now stated. Where a
/// day was stated before, a later one is a successor's and contradicts nothing
/// (see [`Appliance::there_since`]).
pub(super) fn entry_before<'a>(installed: NaiveDate, appliance: &Appliance, lines: &'a [Line]) -> Option<&'a Line> {
    let first = lines.iter().min_by_key(|line| line.at.date)?;
    (first.at.date < installed && appliance.there_since().is_none()).then_some(first)
}
