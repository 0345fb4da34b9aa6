//! Begin work: at which site, and who.

use super::{Panel, id};
use crate::app::{AppError, NewSite, Setting};
use crate::ledger::{Person, PersonId, Site, SiteFacts, SiteId, Visit};
use crate::rules::rulebook;
use crate::view::desk::{Desk, Page};
use crate::view::shown::{Choice, Line, Message, Ready};
use crate::view::words;

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct State {
    pub search: String,
    pub person: Option<PersonId>,
    pub adding: bool,
    pub site_name: String,
    pub site_address: String,
    pub owner: String,
    pub technician: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Search(String),
    Person(String),
    Begin(String),
    BeginAdding,
    StopAdding,
    /// `site name`, `site address`, `owner` or `technician`.
    Edited(String, String),
    AddAndBegin,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub search: String,
    pub sites: Vec<Line>,
    pub empty_words: String,
    pub people: Vec<Choice>,
    pub person: String,
    pub adding: bool,
    pub site_name: String,
    pub site_name_error: String,
    pub site_address: String,
    pub owner: String,
    pub asks_technician: bool,
    pub technician: String,
    pub ready: Ready,
}

impl Desk {
    /// Asks where work begins. With an empty store the first site is asked for at once.
    ///
    /// # Errors
    /// The store's own.
    pub fn ask_where(&mut self) -> Result<(), AppError> {
        self.reload_registers()?;
        let last = self.app.setting(Setting::Person)?.and_then(|key| id(&key, PersonId));
        let known = last.filter(|person| self.registers.person(*person).is_some());
        let person = known.or_else(|| self.registers.people.first().map(|person| person.id));
        self.begin = State { person, adding: self.registers.sites.is_empty(), ..State::default() };
        self.work = None;
        self.panel = Panel::Begin;
        self.go(Page::Visit);
        Ok(())
    }

    pub(in crate::view) fn update_begin(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Search(text) => self.begin.search = text,
            Msg::Person(key) => self.begin.person = id(&key, PersonId),
            Msg::BeginAdding => self.begin.adding = true,
            Msg::StopAdding => self.begin.adding = false,
            Msg::Edited(field, text) => match field.as_str() {
                "site name" => self.begin.site_name = text,
                "site address" => self.begin.site_address = text,
                "owner" => self.begin.owner = text,
                _ => self.begin.technician = text,
            },
            Msg::Begin(key) => {
                if let Some(site) = id(&key, SiteId) {
                    if self.begin.person.is_none() {
                        // Nobody is known yet: the name is asked for with the site.
                        self.begin.adding = true;
                        if let Some(site) = self.registers.site(site) {
                            self.begin.site_name.clone_from(&site.name);
                        }
                        return Ok(());
                    }
                    return self.begin_at(site);
                }
            }
            Msg::AddAndBegin => return self.add_and_begin(),
        }
        Ok(())
    }

    /// Begins work at a site, or takes up the visit that is open there.
    ///
    /// # Errors
    /// Nobody is known who could work; unknown site; the store's own.
    pub fn begin_at(&mut self, site: SiteId) -> Result<(), AppError> {
        let person = self.begin.person.or_else(|| self.registers.people.first().map(|person| person.id));
        let person = person.ok_or_else(|| AppError::Input { field: "technician", sentence: words::say_your_name() })?;
        self.app.set(Setting::Person, &person.to_string())?;
        let visit: Visit = self.app.begin_visit(site, person)?;
        self.take_up(visit.id)?;
        self.work_mut()?.place.person = Some(person);
        self.keep_place()?;
        if self.panel != Panel::None {
            return Ok(());
        }
        // What is still open here is read before anything is done.
        if !self.still_open()?.is_empty() {
            return self.open_panel(Panel::Facts);
        }
        if self.work()?.appliances().is_empty() { self.ask(Panel::ChooseAppliance) } else { Ok(()) }
    }

    fn add_and_begin(&mut self) -> Result<(), AppError> {
        if self.begin.person.is_none() {
            self.begin.person = Some(self.app.add_person(nameless(&self.begin.technician))?);
        }
        let known = self.registers.sites.iter().find(|site| site.name == self.begin.site_name.trim()).map(|site| site.id);
        let site = match known {
            Some(site) => site,
            None => self.add_site_on_the_spot()?,
        };
        self.reload_registers()?;
        self.begin_at(site)
    }

    fn add_site_on_the_spot(&mut self) -> Result<SiteId, AppError> {
        let rulebooks = self.usual_rulebooks()?;
        let titles: Vec<&str> = rulebooks.iter().filter_map(|id| rulebook(id)).map(|book| book.title.as_str()).collect();
        let told = words::rulebooks_taken(&titles.join(", "));
        let facts = SiteFacts {
            owner: self.begin.owner.trim().to_owned(),
            address: self.begin.site_address.trim().to_owned(),
            ..SiteFacts::under(rulebooks)
        };
        let site = self.app.add_site(NewSite { name: self.begin.site_name.clone(), facts })?;
        self.say(Message::told(told));
        Ok(site)
    }

    /// The law that a new site is under: as at the site written down last, or as the device's zone suggests.
    fn usual_rulebooks(&self) -> Result<Vec<String>, AppError> {
        let newest = self.registers.sites.iter().max_by_key(|site| site.id);
        if let Some(site) = newest {
            return Ok(site.versions.latest().rulebooks.clone());
        }
        let zone = self.app.zone_of(&SiteFacts::under(Vec::new()));
        Ok(rulebooks_of_zone(zone.name()).iter().map(|id| (*id).to_owned()).collect())
    }

    /// The page that asks where work begins.
    ///
    /// # Errors
    /// The store's own.
    pub fn begin_shown(&self) -> Result<Shown, AppError> {
        let state = &self.begin;
        let search = state.search.trim().to_lowercase();
        let fits = |site: &&Site| {
            let facts = site.versions.latest();
            [site.name.as_str(), &facts.address, &facts.owner].join(" ").to_lowercase().contains(&search)
        };
        let open = self.app.store().open_visits()?;
        let line = |site: &Site| {
            let is_open = open.iter().any(|visit| visit.site == site.id);
            Line {
                key: site.id.to_string(),
                name: site.name.clone(),
                facts: words::appliances_here(self.registers.appliances_at(site.id).count(), &site.versions.latest().address),
                state: if is_open { words::visit_open_there() } else { String::new() },
                ..Line::default()
            }
        };
        let sites: Vec<Line> = self.registers.sites.iter().filter(fits).map(line).collect();
        let asks_technician = state.person.is_none();
        let ready = if asks_technician && state.technician.trim().is_empty() {
            Ready::not(words::say_your_name())
        } else if state.site_name.trim().is_empty() {
            Ready::not(words::say_the_site())
        } else {
            Ready::yes()
        };
        Ok(Shown {
            search: state.search.clone(),
            empty_words: if sites.is_empty() { words::no_site_fits(&state.search) } else { String::new() },
            sites,
            people: self.registers.people.iter().map(|person| Choice::new(person.id.to_string(), &person.name, "")).collect(),
            person: state.person.map(|person| person.to_string()).unwrap_or_default(),
            adding: state.adding,
            site_name: state.site_name.clone(),
            site_name_error: String::new(),
            site_address: state.site_address.clone(),
            owner: state.owner.clone(),
            asks_technician,
            technician: state.technician.clone(),
            ready,
        })
    }
}

/// A person of whom only the name is known so far.
fn nameless(name: &str) -> Person {
    Person {
        id: PersonId(uuid::Uuid::nil()),
        name: name.to_owned(),
        certificate: String::new(),
        certificate_kind: String::new(),
        valid_from: None,
        valid_to: None,
        company: String::new(),
        company_certificate: String::new(),
    }
}

/// A guess that is told at once and can be changed: the law of the land the device is in.
fn rulebooks_of_zone(zone: &str) -> &'static [&'static str] {
    let united_states = [
        "America/New_York",
        "America/Chicago",
        "America/Denver",
        "America/Phoenix",
        "America/Los_Angeles",
        "America/Anchorage",
        "America/Detroit",
        "America/Boise",
        "Pacific/Honolulu",
    ];
    let canada = ["America/Toronto", "America/Vancouver", "America/Edmonton", "America/Winnipeg", "America/Halifax", "America/St_Johns"];
    let not_union = ["Europe/Zurich", "Europe/Oslo", "Europe/Istanbul", "Europe/Moscow", "Europe/Kyiv", "Europe/Belgrade", "Europe/Minsk"];
    if united_states.contains(&zone)
        || zone.starts_with("US/")
        || zone.starts_with("America/Indiana/")
        || zone.starts_with("America/Kentucky/")
    {
        &["us-82f", "us-84c"]
    } else if canada.contains(&zone) {
        &["ca-halocarbon"]
    } else if zone == "Europe/London" {
        &["gb-517", "gb-1005"]
    } else if zone.starts_with("Europe/") && !not_union.contains(&zone) {
        &["eu-573", "eu-590"]
    } else {
        &[]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_rulebook_that_a_zone_suggests_is_known() {
        for zone in ["America/Chicago", "America/Toronto", "Europe/London", "Europe/Lisbon"] {
            assert!(!rulebooks_of_zone(zone).is_empty());
            assert!(rulebooks_of_zone(zone).iter().all(|id| rulebook(id).is_some()), "{zone}");
        }
        assert_eq!(rulebooks_of_zone("Asia/Tokyo"), [""; 0]);
        assert_eq!(rulebooks_of_zone("Europe/Zurich"), [""; 0]);
    }
}
