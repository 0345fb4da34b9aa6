//! The page of one site: where it is, whose, by which rules, its appliances and visits.

use super::Office;
use super::plant::appliance_row;
use crate::app::{App, AppError};
use crate::ledger::{SiteId, VisitState};
use crate::rules;
use crate::store::VisitFilter;
use crate::view::format;
use crate::view::shown::{Fact, Line};
use crate::view::words::office as say;
use std::collections::{BTreeSet, HashMap};

#[derive(Debug, Clone, Default, PartialEq)]
pub struct SitePage {
    pub name: String,
    pub address: String,
    pub facts: Vec<Fact>,
    pub appliances: Vec<Line>,
    pub visits: Vec<Line>,
}

/// The titles of rulebooks, as their site lists them.
pub fn titles(rulebooks: &[String]) -> String {
    let title = |id: &String| rules::rulebook(id).map_or_else(|| id.clone(), |book| book.title.clone());
    rulebooks.iter().map(title).collect::<Vec<_>>().join("; ")
}

impl Office {
    pub(super) fn read_site(&self, app: &App, site: SiteId) -> Result<Option<SitePage>, AppError> {
        let Some(overview) = &self.overview else { return Ok(None) };
        let Some(site) = overview.registers.site(site) else { return Ok(None) };
        let now = site.versions.on(self.today).unwrap_or_else(|| site.versions.latest());
        let asks_method = now.rulebooks.iter().filter_map(|id| rules::rulebook(id)).any(|book| !book.rates.is_empty());
        let mut facts = vec![
            Fact::new("owner", &now.owner),
            Fact::new("operator", &now.operator),
            Fact::new("rulebooks", titles(&now.rulebooks)),
            Fact::new("leak rate", if asks_method { format!("{} method", now.rate_method) } else { "no method asked for".to_owned() }),
            Fact::new("time zone", if now.time_zone.is_empty() { "of this device" } else { &now.time_zone }),
        ];
        if let Some(from) = site.versions.all().iter().rev().find_map(|version| version.from.filter(|from| *from <= self.today)) {
            facts.push(Fact::new("as of", format::full_day(from)));
        }
        let names: HashMap<_, &str> = overview.registers.appliances.iter().map(|a| (a.id, a.name.as_str())).collect();
        let mut visits = Vec::new();
        for visit in app.store().visits(&VisitFilter { site: Some(site.id), ..VisitFilter::default() })?.iter().rev() {
            let entries = app.store().entries_of_visit(visit.id)?;
            let at: BTreeSet<&str> = entries.iter().filter_map(|entry| names.get(&entry.line.appliance).copied()).collect();
            let facts = at.into_iter().collect::<Vec<_>>().join(", ");
            let state = if visit.state == VisitState::Imported { say::from_a_file() } else { visit.state.name().to_owned() };
            visits.push(Line::new(visit.id.to_string(), format::full_day(visit.date), facts).state(state, ""));
        }
        Ok(Some(SitePage {
            name: site.name.clone(),
            address: now.address.clone(),
            facts,
            appliances: overview
                .appliances
                .iter()
                .filter(|judged| judged.site.id == site.id)
                .map(|judged| appliance_row(judged, self.today))
                .collect(),
            visits,
        }))
    }
}
