//! Plant: sites, and under each its appliances; what is open of them.

use super::appliance::AppliancePage;
use super::overview::{Judged, LifeState, Overview};
use super::record::RecordPage;
use super::site::SitePage;
use super::{Form, Go, Office, Place, due, id, signing};
use crate::app::App;
use crate::ledger::{ApplianceId, EntryId, SiteId, VisitId};
use crate::view::bars::{small_rate_bar, verdict};
use crate::view::shown::{Line, Verdict};
use crate::view::{format, words};
use words::office as say;

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Pane {
    #[default]
    None,
    Site(SiteId),
    Appliance(ApplianceId),
    /// A visit as seen from one of its appliances.
    Record(VisitId, ApplianceId),
    ApplianceForm,
    SiteForm,
}

#[derive(Debug, Default)]
pub struct State {
    pub search: String,
    pub pane: Pane,
    /// Panes to go back to.
    trail: Vec<Pane>,
    pub appliance_form: Form,
    /// Whom the form changes; `None`: one is added at `form_site`.
    pub form_appliance: Option<ApplianceId>,
    pub form_site: Option<SiteId>,
    pub site_form: Form,
    /// The site whose facts are changed; `None`: one is added.
    pub changed_site: Option<SiteId>,
    pub site: Option<SitePage>,
    pub appliance: Option<AppliancePage>,
    pub record: Option<RecordPage>,
    /// The record that is open is being signed.
    pub signing: Option<signing::State>,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Search(String),
    /// A site or an appliance.
    Open(String),
    AddSite,
    AddAppliance,
    EditAppliance,
    EditSite,
    BeginAtAppliance,
    BeginAtSite,
    /// A duty or open leak of the appliance that is open.
    OpenItem(String),
    OpenRecord(String),
    OpenVisit(String),
    OpenEntry(String),
    OpenRecordFile,
    OpenRecordFolder,
    Signing(signing::Msg),
    ApplianceForm(FormMsg),
    SiteForm(FormMsg),
}

/// What is done in a form.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum FormMsg {
    Edited(String, String),
    Chosen(&'static str, String),
    Switched(String, bool),
    More(bool),
    /// Empties a form that was taken up again.
    Anew,
    Save,
}

impl State {
    pub(super) fn show(&mut self, pane: Pane) {
        if self.pane != pane {
            if self.pane != Pane::None {
                self.trail.push(self.pane);
            }
            self.pane = pane;
        }
    }

    pub(super) fn back(&mut self) -> bool {
        if self.signing.take().is_some() {
            return true;
        }
        let moved = self.pane != Pane::None;
        self.pane = self.trail.pop().unwrap_or_default();
        moved
    }
}

/// Plant's list.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Page {
    pub summary: String,
    pub search: String,
    pub lines: Vec<Line>,
    pub empty_words: String,
    pub nothing_yet: bool,
    pub chosen: String,
}

/// Gas and full charge, in one line.
pub fn gas_and_charge(judged: &Judged) -> String {
    format::commas([judged.facts.refrigerant.as_str(), &format::full_charge(&judged.facts)])
}

/// An appliance's row: identification, gas and full charge, the leak-rate bar, the next duty.
pub fn appliance_row(judged: &Judged, today: chrono::NaiveDate) -> Line {
    let row = Line::new(judged.appliance.id.to_string(), &judged.appliance.name, gas_and_charge(judged));
    let next = judged.next().map(|duty| due::by_words(duty, judged.on, today)).unwrap_or_default();
    match (judged.state, judged.rate()) {
        (LifeState::Retired, _) => row.state(say::retired(), "").judged(Verdict::None),
        (LifeState::Mothballed, _) => row.state(say::mothballed(), next).judged(Verdict::None),
        (LifeState::InUse, Some(rate)) => {
            let row = row.state(format!("{} %", format::percent(rate.percent)), next).judged(verdict(rate.verdict));
            Line { bar: Some(small_rate_bar(rate)), ..row }
        }
        (LifeState::InUse, None) => row.state(say::none_due(), next).judged(Verdict::None),
    }
}

/// Letters and figures alone, so that `r22` finds `R-22`.
fn plain(text: &str) -> String {
    text.chars().filter(|c| c.is_alphanumeric()).flat_map(char::to_lowercase).collect()
}

/// Whether any of the texts holds what is searched for.
pub fn fits<'a>(search: &str, texts: impl IntoIterator<Item = &'a str>) -> bool {
    let search = plain(search);
    search.is_empty() || texts.into_iter().any(|text| plain(text).contains(&search))
}

impl Office {
    pub(super) fn update_plant(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::Search(text) => self.plant.search = text,
            Msg::Open(key) => self.open_in_plant(app, &key),
            Msg::AddSite => self.begin_site_form(app, None),
            Msg::AddAppliance => self.begin_appliance_form(app, None),
            Msg::EditAppliance => {
                if let Pane::Appliance(appliance) = self.plant.pane {
                    self.begin_appliance_form(app, Some(appliance));
                }
            }
            Msg::EditSite => {
                if let Pane::Site(site) = self.plant.pane {
                    self.begin_site_form(app, Some(site));
                }
            }
            Msg::BeginAtAppliance => {
                if let Pane::Appliance(appliance) = self.plant.pane {
                    let site = self.overview.as_ref().and_then(|overview| overview.judged(appliance)).map(|judged| judged.site.id);
                    return vec![Go::Begin { site, appliance: Some(appliance) }];
                }
            }
            Msg::BeginAtSite => {
                if let Pane::Site(site) = self.plant.pane {
                    return vec![Go::Begin { site: Some(site), appliance: None }];
                }
            }
            Msg::OpenItem(key) => {
                self.place = Place::Due;
                return self.update_due(app, due::Msg::Open(key));
            }
            Msg::OpenRecord(key) | Msg::OpenVisit(key) => return self.open_visit(app, &key),
            Msg::OpenEntry(key) => {
                if let (Pane::Record(visit, _), Some(entry)) = (self.plant.pane, id(&key)) {
                    return vec![Go::Entry(visit, EntryId(entry))];
                }
            }
            Msg::OpenRecordFile => return self.record_file(app, true),
            Msg::OpenRecordFolder => return self.record_file(app, false),
            Msg::Signing(msg) => return self.update_signing(app, msg),
            Msg::ApplianceForm(msg) => return self.update_appliance_form(app, msg),
            Msg::SiteForm(msg) => return self.update_site_form(app, msg),
        }
        Vec::new()
    }

    fn open_in_plant(&mut self, app: &App, key: &str) {
        let Some(id) = id(key) else { return };
        let known = |overview: &Overview| {
            let site = overview.registers.site(SiteId(id)).map(|site| Pane::Site(site.id));
            site.or_else(|| overview.registers.appliance(ApplianceId(id)).map(|appliance| Pane::Appliance(appliance.id)))
        };
        let from_site = matches!(self.plant.pane, Pane::Site(_));
        match self.overview.as_ref().and_then(known) {
            Some(pane) => {
                // Chosen from the list there is nothing to go back to but the list.
                if !(from_site && matches!(pane, Pane::Appliance(_))) {
                    self.plant.pane = Pane::None;
                    self.plant.trail.clear();
                }
                self.plant.show(pane);
                self.refresh_pages(app);
            }
            None => self.fail(&say::gone()),
        }
    }

    pub(super) fn is_open(&self, key: &str) -> bool {
        let visit = id(key).map(VisitId);
        visit.is_some_and(|visit| self.overview.as_ref().is_some_and(|overview| overview.open_visit(visit).is_some()))
    }

    /// An open visit is gone on with; any other is read as a record.
    pub(super) fn open_visit(&mut self, app: &App, key: &str) -> Vec<Go> {
        let Some(visit) = id(key).map(VisitId) else { return Vec::new() };
        if self.is_open(key) {
            return vec![Go::Visit(visit)];
        }
        let appliance = match self.plant.pane {
            Pane::Appliance(appliance) => Some(appliance),
            _ => app.store().entries_of_visit(visit).ok().and_then(|entries| entries.first().map(|entry| entry.line.appliance)),
        };
        if let Some(appliance) = appliance {
            self.plant.show(Pane::Record(visit, appliance));
            self.refresh_pages(app);
        }
        Vec::new()
    }

    /// Reads anew what is open in Plant and Cylinders.
    pub(super) fn refresh_pages(&mut self, app: &App) {
        let read = match self.plant.pane {
            Pane::Site(site) => self.read_site(app, site).map(|page| self.plant.site = page),
            Pane::Appliance(appliance) => self.read_appliance(app, appliance).map(|page| self.plant.appliance = page),
            Pane::Record(visit, appliance) => self.read_record(app, visit, appliance).map(|page| self.plant.record = page),
            Pane::None | Pane::ApplianceForm | Pane::SiteForm => Ok(()),
        };
        if let Err(error) = read {
            self.fail(&error);
        }
    }

    pub fn plant_page(&self) -> Page {
        let mut page = Page { search: self.plant.search.clone(), ..Page::default() };
        let Some(overview) = &self.overview else {
            page.empty_words = say::reading_store();
            return page;
        };
        let registers = &overview.registers;
        page.nothing_yet = registers.sites.is_empty();
        page.summary = say::plant_summary(registers.sites.len(), registers.appliances.len());
        page.chosen = match self.plant.pane {
            Pane::Site(site) => site.to_string(),
            Pane::Appliance(appliance) | Pane::Record(_, appliance) => appliance.to_string(),
            _ => String::new(),
        };
        for site in &registers.sites {
            let facts = site.versions.on(self.today).unwrap_or_else(|| site.versions.latest());
            let whole = fits(&self.plant.search, [site.name.as_str()]);
            let here: Vec<&Judged> = overview.appliances.iter().filter(|judged| judged.site.id == site.id).collect();
            let rows: Vec<Line> =
                here.iter().filter(|judged| whole || self.is_searched(judged)).map(|judged| appliance_row(judged, self.today)).collect();
            if whole || !rows.is_empty() {
                let heading = Line::new(site.id.to_string(), &site.name, &facts.address).state(here.len().to_string(), "");
                page.lines.push(Line { heading: true, ..heading });
                page.lines.extend(rows);
            }
        }
        page.empty_words = if page.nothing_yet { say::plant_empty() } else { say::nothing_fits(self.plant.search.trim()) };
        page
    }

    fn is_searched(&self, judged: &Judged) -> bool {
        let own = [judged.appliance.name.as_str(), &judged.facts.serial, &judged.facts.refrigerant];
        fits(&self.plant.search, own.into_iter().chain(judged.jobs.iter().map(String::as_str)))
    }
}
