//! Writing down and changing registers. Nothing is overwritten: a change has
//! a first day and, where someone says, a reason.

use super::entries::known_gas;
use super::installation::entry_before;
use super::{App, AppError};
use crate::ledger::{
    Appliance, ApplianceFacts, ApplianceId, Category, Company, Cylinder, CylinderFacts, CylinderId, Dated, Instrument, InstrumentId, Line,
    Person, PersonId, ReadAt, Site, SiteFacts, SiteId, Versions,
};
use crate::quantity::{Mass, Weighing};
use crate::rules::rulebook;
use crate::store::{Store, StoreError};
use chrono::{DurationRound, NaiveDate, TimeDelta};

/// A site as first written down.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct NewSite {
    pub name: String,
    pub facts: SiteFacts,
}

/// An appliance added on the spot: four fields, the last of which may stay empty.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct NewAppliance {
    pub site: SiteId,
    pub name: String,
    pub category: Category,
    pub refrigerant: String,
    /// `None`: to complete.
    pub full_charge: Option<Weighing>,
}

impl NewAppliance {
    /// What nobody has said yet is left open, to be completed later.
    fn facts(&self) -> Result<ApplianceFacts, AppError> {
        Ok(ApplianceFacts {
            full_charge: self.full_charge.as_ref().map(|written| positive("full charge", written)).transpose()?,
            full_charge_written: self.full_charge.clone(),
            ..ApplianceFacts::new(self.category, self.refrigerant.clone())
        })
    }
}

impl App {
    /// # Errors
    /// The identification is missing or taken; a rulebook or zone is unknown.
    pub fn add_site(&self, new: NewSite) -> Result<SiteId, AppError> {
        let facts = sound_site(new.facts)?;
        let site = Site { id: SiteId(self.new_id()), name: named(&new.name)?, versions: Versions::always(facts) };
        self.store.write(self.now(), |tx| tx.add_site(&site).map_err(AppError::from))?;
        Ok(site.id)
    }

    /// Owner, operator, address, rulebooks, method or zone change from a day on.
    ///
    /// # Errors
    /// As [`App::add_site`].
    pub fn change_site(&self, site: SiteId, facts: SiteFacts, from: NaiveDate, reason: &str) -> Result<(), AppError> {
        let facts = sound_site(facts)?;
        self.store.write(self.now(), |tx| {
            tx.site(site)?.ok_or(AppError::Unknown { what: "site" })?;
            Ok(tx.add_site_version(site, &dated(from, reason, facts))?)
        })
    }

    /// # Errors
    /// The identification is missing or taken at this site; the gas is unknown; the full charge is not above zero;
    /// it was installed after today, or after something was done to it.
    pub fn add_appliance(&self, new: &NewAppliance) -> Result<ApplianceId, AppError> {
        self.add_appliance_with(new.site, &new.name, new.facts()?)
    }

    /// An appliance with all its facts.
    ///
    /// # Errors
    /// As [`App::add_appliance`].
    pub fn add_appliance_with(&self, site: SiteId, name: &str, facts: ApplianceFacts) -> Result<ApplianceId, AppError> {
        let facts = sound_appliance(facts)?;
        let appliance = Appliance { id: ApplianceId(self.new_id()), site, name: named(name)?, versions: Versions::always(facts) };
        self.store.write(self.now(), |tx| {
            let site = tx.site(site)?.ok_or(AppError::Unknown { what: "site" })?;
            self.sound_installation(&site, &appliance, appliance.there_since(), &[])?;
            Ok::<_, AppError>(tx.add_appliance(&appliance)?)
        })?;
        Ok(appliance.id)
    }

    /// Gas, charge, category or place change from a day on.
    ///
    /// # Errors
    /// As [`App::add_appliance`].
    pub fn change_appliance(&self, appliance: ApplianceId, facts: ApplianceFacts, from: NaiveDate, reason: &str) -> Result<(), AppError> {
        let facts = sound_appliance(facts)?;
        self.store.write(self.now(), |tx| {
            let known = tx.appliance(appliance)?.ok_or(AppError::Unknown { what: "appliance" })?;
            let site = tx.site(known.site)?.ok_or(AppError::Unknown { what: "site" })?;
            self.sound_installation(&site, &known, facts.installed_on, &tx.lines_of(appliance)?)?;
            Ok(tx.add_appliance_version(appliance, &dated(from, reason, facts))?)
        })
    }

    fn sound_installation(&self, site: &Site, appliance: &Appliance, stated: Option<NaiveDate>, lines: &[Line]) -> Result<(), AppError> {
        let Some(installed) = stated else { return Ok(()) };
        let today = self.today_there(site);
        if installed > today {
            let sentence = format!("{installed} has not come yet at this site; leave the day empty until the appliance stands.");
            return Err(AppError::input("installed on", sentence));
        }
        match entry_before(installed, appliance, lines) {
            Some(first) => {
                let sentence = format!("There is a {} on {}, before {installed}. Correct the day.", first.act.name(), first.at.date);
                Err(AppError::input("installed on", sentence))
            }
            None => Ok(()),
        }
    }

    /// # Errors
    /// The identification is missing or taken; the gas is unknown; gross below tare.
    pub fn add_cylinder(&self, name: &str, facts: CylinderFacts) -> Result<CylinderId, AppError> {
        let facts = sound_cylinder(facts)?;
        let id = CylinderId(self.new_id());
        let name = named(name)?;
        self.store.write(self.now(), |tx| {
            let weighed = if facts.gross.is_some() { Some(self.reading_now(tx)?) } else { None };
            let versions = Versions::always(CylinderFacts { gas_told: None, weighed, ..facts });
            Ok::<_, AppError>(tx.add_cylinder(&Cylinder { id, name, versions })?)
        })?;
        Ok(id)
    }

    /// A cylinder moved, was weighed anew, filled at the supplier's, requalified, taken out of use.
    ///
    /// Gross, gas and status that differ from those written down last were
    /// read now, or where `from` is a day gone by, on that day. A gross that
    /// is the same counts as read anew where `facts` do not say when it was.
    ///
    /// # Errors
    /// As [`App::add_cylinder`].
    pub fn change_cylinder(&self, cylinder: CylinderId, facts: CylinderFacts, from: NaiveDate, reason: &str) -> Result<(), AppError> {
        let facts = sound_cylinder(facts)?;
        self.store.write(self.now(), |tx| {
            let known = tx.cylinder(cylinder)?.ok_or(AppError::Unknown { what: "cylinder" })?;
            let last = known.versions.latest();
            let now = if from >= self.today() { Some(self.reading_now(tx)?) } else { None };
            let weighed_anew = facts.gross != last.gross || (last.weighed.is_some() && facts.weighed.is_none());
            let told_anew = (&facts.refrigerant, facts.gas_status) != (&last.refrigerant, last.gas_status);
            let weighed = if facts.gross.is_some() && weighed_anew { now } else { last.weighed };
            let gas_told = if told_anew { now } else { last.gas_told };
            let facts = CylinderFacts { gas_told, weighed, ..facts };
            Ok(tx.add_cylinder_version(cylinder, &dated(from, reason, facts))?)
        })
    }

    /// What is read now, after all that was written so far.
    pub(super) fn reading_now(&self, store: &Store) -> Result<ReadAt, StoreError> {
        let now = self.now();
        let instant = now.duration_trunc(TimeDelta::minutes(1)).unwrap_or(now);
        Ok(ReadAt { at: self.moment_in(self.clock.zone()), instant, after: store.last_position()? })
    }

    /// The id of `person` is given here.
    ///
    /// # Errors
    /// The name is missing or taken.
    pub fn add_person(&self, person: Person) -> Result<PersonId, AppError> {
        let person = Person { id: PersonId(self.new_id()), name: named(&person.name)?, ..person };
        self.store.write(self.now(), |tx| tx.add_person(&person).map_err(AppError::from))?;
        Ok(person.id)
    }

    /// # Errors
    /// The name is missing; unknown person.
    pub fn change_person(&self, person: Person, from: NaiveDate, reason: &str) -> Result<(), AppError> {
        let person = Person { name: named(&person.name)?, ..person };
        self.store.write(self.now(), |tx| {
            tx.person(person.id)?.ok_or(AppError::Unknown { what: "person" })?;
            Ok(tx.add_person_version(&dated(from, reason, person))?)
        })
    }

    /// The id of `instrument` is given here.
    ///
    /// # Errors
    /// The name is missing or taken; a division is not above zero.
    pub fn add_instrument(&self, instrument: Instrument) -> Result<InstrumentId, AppError> {
        let instrument = sound_instrument(Instrument { id: InstrumentId(self.new_id()), ..instrument })?;
        self.store.write(self.now(), |tx| tx.add_instrument(&instrument).map_err(AppError::from))?;
        Ok(instrument.id)
    }

    /// # Errors
    /// As [`App::add_instrument`].
    pub fn change_instrument(&self, instrument: Instrument, from: NaiveDate, reason: &str) -> Result<(), AppError> {
        let instrument = sound_instrument(instrument)?;
        self.store.write(self.now(), |tx| {
            tx.instrument(instrument.id)?.ok_or(AppError::Unknown { what: "instrument" })?;
            Ok(tx.add_instrument_version(&dated(from, reason, instrument))?)
        })
    }

    /// Name, address and certificate of the company, from a day on; the first from the beginning.
    ///
    /// # Errors
    /// The name is missing.
    pub fn set_company(&self, company: Company, from: NaiveDate, reason: &str) -> Result<(), AppError> {
        let company = Company { name: named(&company.name)?, ..company };
        self.store.write(self.now(), |tx| {
            let first = tx.registers()?.company.is_none();
            let version = dated(from, reason, company);
            Ok(tx.add_company_version(&if first { Dated { from: None, ..version } } else { version })?)
        })
    }
}

fn dated<T>(from: NaiveDate, reason: &str, facts: T) -> Dated<T> {
    let reason = Some(reason.trim().to_owned()).filter(|reason| !reason.is_empty());
    Dated { from: Some(from), reason, facts }
}

fn named(name: &str) -> Result<String, AppError> {
    let name = name.trim();
    if name.is_empty() { Err(AppError::input("name", "Write down how it is called.")) } else { Ok(name.to_owned()) }
}

fn positive(field: &'static str, written: &Weighing) -> Result<Mass, AppError> {
    let mass = written.mass().map_err(|e| AppError::input(field, format!("{e}.")))?;
    if mass.is_positive() { Ok(mass) } else { Err(AppError::input(field, format!("The {field} is more than nothing."))) }
}

fn sound_site(facts: SiteFacts) -> Result<SiteFacts, AppError> {
    if let Some(unknown) = facts.rulebooks.iter().find(|id| rulebook(id).is_none()) {
        return Err(AppError::input("rulebooks", format!("\u{201c}{unknown}\u{201d} is not a rulebook of this program.")));
    }
    if !facts.time_zone.is_empty() && facts.time_zone.parse::<chrono_tz::Tz>().is_err() {
        let sentence = format!("\u{201c}{}\u{201d} is not the name of a time zone such as Europe/Lisbon.", facts.time_zone);
        return Err(AppError::input("time zone", sentence));
    }
    Ok(facts)
}

fn sound_appliance(facts: ApplianceFacts) -> Result<ApplianceFacts, AppError> {
    let refrigerant = known_gas(&facts.refrigerant)?.to_owned();
    if facts.full_charge.is_some_and(|charge| !charge.is_positive()) {
        return Err(AppError::input("full charge", "The full charge is more than nothing."));
    }
    Ok(ApplianceFacts { refrigerant, ..facts })
}

fn sound_cylinder(facts: CylinderFacts) -> Result<CylinderFacts, AppError> {
    let refrigerant = facts.refrigerant.as_deref().map(known_gas).transpose()?.map(str::to_owned);
    if !facts.tare.is_positive() {
        return Err(AppError::input("tare", "The tare is more than nothing."));
    }
    if let Some(found) = &facts.tare_found {
        positive("tare found", found)?;
    }
    if facts.gross.is_some_and(|gross| gross < facts.tare) {
        return Err(AppError::input("gross", "The gross weight is less than the tare. Look at both."));
    }
    Ok(CylinderFacts { refrigerant, ..facts })
}

fn sound_instrument(instrument: Instrument) -> Result<Instrument, AppError> {
    if let Some(division) = &instrument.division {
        positive("division", division)?;
    }
    if let Some(holds) = &instrument.holds {
        positive("content of the hoses", holds)?;
    }
    Ok(Instrument { name: named(&instrument.name)?, ..instrument })
}
