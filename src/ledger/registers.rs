//! All registers together, as one reading of a store finds them.

use super::{Appliance, ApplianceId, Company, Cylinder, CylinderId, Instrument, InstrumentId, Person, PersonId, Site, SiteId, Versions};

/// Every register line with its versions. Lists are in order of
/// identification; appliances by site, then identification.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Registers {
    /// `None` until someone has written it down.
    pub company: Option<Versions<Company>>,
    pub people: Vec<Person>,
    pub sites: Vec<Site>,
    pub appliances: Vec<Appliance>,
    pub cylinders: Vec<Cylinder>,
    pub instruments: Vec<Instrument>,
}

impl Registers {
    /// The company as last written; nameless before that.
    pub fn company(&self) -> Company {
        self.company.as_ref().map(|versions| versions.latest().clone()).unwrap_or_default()
    }

    pub fn site(&self, id: SiteId) -> Option<&Site> {
        self.sites.iter().find(|site| site.id == id)
    }

    pub fn appliance(&self, id: ApplianceId) -> Option<&Appliance> {
        self.appliances.iter().find(|appliance| appliance.id == id)
    }

    pub fn cylinder(&self, id: CylinderId) -> Option<&Cylinder> {
        self.cylinders.iter().find(|cylinder| cylinder.id == id)
    }

    pub fn person(&self, id: PersonId) -> Option<&Person> {
        self.people.iter().find(|person| person.id == id)
    }

    pub fn instrument(&self, id: InstrumentId) -> Option<&Instrument> {
        self.instruments.iter().find(|instrument| instrument.id == id)
    }

    pub fn site_named(&self, name: &str) -> Option<&Site> {
        self.sites.iter().find(|site| site.name == name)
    }

    pub fn cylinder_named(&self, name: &str) -> Option<&Cylinder> {
        self.cylinders.iter().find(|cylinder| cylinder.name == name)
    }

    pub fn person_named(&self, name: &str) -> Option<&Person> {
        self.people.iter().find(|person| person.name == name)
    }

    pub fn appliances_at(&self, site: SiteId) -> impl Iterator<Item = &Appliance> {
        self.appliances.iter().filter(move |appliance| appliance.site == site)
    }
}
