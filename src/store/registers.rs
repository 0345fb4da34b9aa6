//! Registers: every version is kept with its first day.

use super::sql_types::{Day, Json};
use super::{Store, StoreError, Writing};
use crate::ledger::{
    Appliance, ApplianceFacts, ApplianceId, Company, Cylinder, CylinderFacts, CylinderId, Dated, Instrument, InstrumentId, Person,
    PersonId, Registers, Site, SiteFacts, SiteId, Versions,
};
use rusqlite::types::{FromSql, FromSqlError, ToSql};
use rusqlite::{Connection, params};
use serde::Serialize;
use serde::de::DeserializeOwned;
use std::collections::HashMap;
use std::hash::Hash;

impl Store {
    /// All register lines with all their versions.
    ///
    /// # Errors
    /// The store's own.
    pub fn registers(&self) -> Result<Registers, StoreError> {
        self.read_moment(|c| {
            Ok(Registers {
                company: company(c)?,
                people: latest::<PersonId, Person>(c, "person")?,
                sites: sites(c, None)?,
                appliances: appliances(c, None)?,
                cylinders: cylinders(c, None)?,
                instruments: latest::<InstrumentId, Instrument>(c, "instrument")?,
            })
        })
    }

    /// The company with all its versions; `None` until someone has written it down.
    ///
    /// # Errors
    /// The store's own.
    pub fn company_versions(&self) -> Result<Option<Versions<Company>>, StoreError> {
        self.read(company)
    }

    /// One site, without reading the others; likewise below.
    ///
    /// # Errors
    /// The store's own.
    pub fn site(&self, site: SiteId) -> Result<Option<Site>, StoreError> {
        self.read_moment(|c| Ok(sites(c, Some(site))?.pop()))
    }

    pub fn appliance(&self, appliance: ApplianceId) -> Result<Option<Appliance>, StoreError> {
        self.read_moment(|c| Ok(appliances(c, Some(appliance))?.pop()))
    }

    pub fn cylinder(&self, cylinder: CylinderId) -> Result<Option<Cylinder>, StoreError> {
        self.read_moment(|c| Ok(cylinders(c, Some(cylinder))?.pop()))
    }

    pub fn person(&self, person: PersonId) -> Result<Option<Person>, StoreError> {
        Ok(self.person_versions(person)?.map(|versions| versions.latest().clone()))
    }

    pub fn instrument(&self, instrument: InstrumentId) -> Result<Option<Instrument>, StoreError> {
        Ok(self.instrument_versions(instrument)?.map(|versions| versions.latest().clone()))
    }

    /// All versions of a person: name, certificate, company, each from its day.
    ///
    /// # Errors
    /// The store's own.
    pub fn person_versions(&self, person: PersonId) -> Result<Option<Versions<Person>>, StoreError> {
        self.read(|c| Ok(versions_of::<PersonId, Person>(c, "person", Some(person))?.remove(&person).and_then(Versions::new)))
    }

    /// All versions of an instrument.
    ///
    /// # Errors
    /// The store's own.
    pub fn instrument_versions(&self, instrument: InstrumentId) -> Result<Option<Versions<Instrument>>, StoreError> {
        self.read(|c| {
            Ok(versions_of::<InstrumentId, Instrument>(c, "instrument", Some(instrument))?.remove(&instrument).and_then(Versions::new))
        })
    }
}

impl Writing<'_> {
    /// # Errors
    /// The store's own, as for all below.
    pub fn add_company_version(&self, version: &Dated<Company>) -> Result<(), StoreError> {
        let stamp = self.stamp();
        self.run(|c| {
            c.prepare_cached(
                "INSERT INTO company_versions (valid_from, reason, facts, written, device, counter) VALUES (?1, ?2, ?3, ?4, ?5, ?6)",
            )?
            .execute(params![version.from.map(Day), version.reason, Json(&version.facts), stamp.written, stamp.device, stamp.counter])
            .map(drop)
        })
    }

    /// # Errors
    /// [`StoreError::Taken`] when there is a site with this identification.
    pub fn add_site(&self, site: &Site) -> Result<(), StoreError> {
        self.run(|c| c.prepare_cached("INSERT INTO sites (id, name) VALUES (?1, ?2)")?.execute(params![site.id, site.name]))?;
        site.versions.all().iter().try_for_each(|version| self.add_site_version(site.id, version))
    }

    pub fn add_site_version(&self, site: SiteId, version: &Dated<SiteFacts>) -> Result<(), StoreError> {
        self.add_version("site", &site, version)
    }

    /// # Errors
    /// [`StoreError::Taken`] when its site has an appliance with this identification.
    pub fn add_appliance(&self, appliance: &Appliance) -> Result<(), StoreError> {
        self.run(|c| {
            c.prepare_cached("INSERT INTO appliances (id, site, name) VALUES (?1, ?2, ?3)")?.execute(params![
                appliance.id,
                appliance.site,
                appliance.name
            ])
        })?;
        appliance.versions.all().iter().try_for_each(|version| self.add_appliance_version(appliance.id, version))
    }

    pub fn add_appliance_version(&self, appliance: ApplianceId, version: &Dated<ApplianceFacts>) -> Result<(), StoreError> {
        self.add_version("appliance", &appliance, version)
    }

    /// # Errors
    /// [`StoreError::Taken`] when there is a cylinder with this identification.
    pub fn add_cylinder(&self, cylinder: &Cylinder) -> Result<(), StoreError> {
        self.run(|c| c.prepare_cached("INSERT INTO cylinders (id, name) VALUES (?1, ?2)")?.execute(params![cylinder.id, cylinder.name]))?;
        cylinder.versions.all().iter().try_for_each(|version| self.add_cylinder_version(cylinder.id, version))
    }

    pub fn add_cylinder_version(&self, cylinder: CylinderId, version: &Dated<CylinderFacts>) -> Result<(), StoreError> {
        self.add_version("cylinder", &cylinder, version)
    }

    /// # Errors
    /// [`StoreError::Taken`] when there is a person of this name.
    pub fn add_person(&self, person: &Person) -> Result<(), StoreError> {
        self.run(|c| c.prepare_cached("INSERT INTO people (id, name) VALUES (?1, ?2)")?.execute(params![person.id, person.name]))?;
        self.add_person_version(&Dated { from: None, reason: None, facts: person.clone() })
    }

    pub fn add_person_version(&self, version: &Dated<Person>) -> Result<(), StoreError> {
        self.add_version("person", &version.facts.id, version)
    }

    /// # Errors
    /// [`StoreError::Taken`] when there is an instrument of this name.
    pub fn add_instrument(&self, instrument: &Instrument) -> Result<(), StoreError> {
        self.run(|c| {
            c.prepare_cached("INSERT INTO instruments (id, name) VALUES (?1, ?2)")?.execute(params![instrument.id, instrument.name])
        })?;
        self.add_instrument_version(&Dated { from: None, reason: None, facts: instrument.clone() })
    }

    pub fn add_instrument_version(&self, version: &Dated<Instrument>) -> Result<(), StoreError> {
        self.add_version("instrument", &version.facts.id, version)
    }

    fn add_version<T: Serialize>(&self, register: &str, line: &dyn ToSql, version: &Dated<T>) -> Result<(), StoreError> {
        let stamp = self.stamp();
        self.run(|c| {
            c.prepare_cached(&format!(
                "INSERT INTO {register}_versions ({register}, valid_from, reason, facts, written, device, counter) \
                 VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7)"
            ))?
            .execute(params![line, version.from.map(Day), version.reason, Json(&version.facts), stamp.written, stamp.device, stamp.counter])
            .map(drop)
        })
    }
}

fn dated<T: DeserializeOwned>(row: &rusqlite::Row<'_>, first: usize) -> rusqlite::Result<Dated<T>> {
    let from: Option<Day> = row.get(first)?;
    let Json(facts) = row.get(first + 2)?;
    Ok(Dated { from: from.map(|Day(day)| day), reason: row.get(first + 1)?, facts })
}

fn company(c: &Connection) -> rusqlite::Result<Option<Versions<Company>>> {
    let mut statement = c.prepare_cached("SELECT valid_from, reason, facts FROM company_versions ORDER BY position")?;
    let versions = statement.query_map([], |row| dated(row, 0))?.collect::<Result<_, _>>()?;
    Ok(Versions::new(versions))
}

/// All versions of one register, or of one line of it, in the order in which they were written.
fn versions_of<I: FromSql + ToSql + Eq + Hash, T: DeserializeOwned>(
    c: &Connection,
    register: &str,
    only: Option<I>,
) -> rusqlite::Result<HashMap<I, Vec<Dated<T>>>> {
    let condition = if only.is_some() { format!("{register} = ?1") } else { "?1 IS NULL".to_owned() };
    let mut statement = c.prepare_cached(&format!(
        "SELECT {register}, valid_from, reason, facts FROM {register}_versions WHERE {condition} ORDER BY position"
    ))?;
    let mut rows = statement.query([only])?;
    let mut versions: HashMap<I, Vec<Dated<T>>> = HashMap::new();
    while let Some(row) = rows.next()? {
        versions.entry(row.get(0)?).or_default().push(dated(row, 1)?);
    }
    Ok(versions)
}

/// The versions of `line`; a line without any is damage.
fn take<I: Eq + Hash, T>(versions: &mut HashMap<I, Vec<Dated<T>>>, line: &I) -> rusqlite::Result<Versions<T>> {
    versions
        .remove(line)
        .and_then(Versions::new)
        .ok_or_else(|| rusqlite::Error::from(FromSqlError::Other("a register line without a version".into())))
}

fn sites(c: &Connection, only: Option<SiteId>) -> rusqlite::Result<Vec<Site>> {
    let mut versions = versions_of::<SiteId, SiteFacts>(c, "site", only)?;
    let mut statement = c.prepare_cached("SELECT id, name FROM sites WHERE ?1 IS NULL OR id = ?1 ORDER BY name")?;
    let sites = statement.query_map([only], |row| {
        let id = row.get(0)?;
        Ok(Site { id, name: row.get(1)?, versions: take(&mut versions, &id)? })
    })?;
    sites.collect()
}

fn appliances(c: &Connection, only: Option<ApplianceId>) -> rusqlite::Result<Vec<Appliance>> {
    let mut versions = versions_of::<ApplianceId, ApplianceFacts>(c, "appliance", only)?;
    let mut statement = c.prepare_cached(
        "SELECT a.id, a.site, a.name FROM appliances a JOIN sites s ON s.id = a.site WHERE ?1 IS NULL OR a.id = ?1 ORDER BY s.name, a.name",
    )?;
    let appliances = statement.query_map([only], |row| {
        let id = row.get(0)?;
        Ok(Appliance { id, site: row.get(1)?, name: row.get(2)?, versions: take(&mut versions, &id)? })
    })?;
    appliances.collect()
}

fn cylinders(c: &Connection, only: Option<CylinderId>) -> rusqlite::Result<Vec<Cylinder>> {
    let mut versions = versions_of::<CylinderId, CylinderFacts>(c, "cylinder", only)?;
    let mut statement = c.prepare_cached("SELECT id, name FROM cylinders WHERE ?1 IS NULL OR id = ?1 ORDER BY name")?;
    let cylinders = statement.query_map([only], |row| {
        let id = row.get(0)?;
        Ok(Cylinder { id, name: row.get(1)?, versions: take(&mut versions, &id)? })
    })?;
    cylinders.collect()
}

/// People and instruments as last written; their documents carry id and name.
fn latest<I: FromSql + ToSql + Eq + Hash, T: DeserializeOwned + Clone>(c: &Connection, register: &str) -> rusqlite::Result<Vec<T>> {
    let mut versions = versions_of::<I, T>(c, register, None)?;
    let table = if register == "person" { "people" } else { "instruments" };
    let mut statement = c.prepare_cached(&format!("SELECT id FROM {table} ORDER BY name"))?;
    let lines = statement.query_map([], |row| {
        let id: I = row.get(0)?;
        take(&mut versions, &id).map(|all| all.latest().clone())
    })?;
    lines.collect()
}

#[cfg(test)]
mod tests {
    use super::super::samples::{self, ids, now, store_with_visit};
    use super::*;
    use crate::ledger::InstrumentKind;

    #[test]
    fn registers_read_back_as_written() {
        let store = store_with_visit();
        let registers = store.registers().unwrap();
        assert_eq!(registers.sites, [samples::site()]);
        assert_eq!(registers.appliances, [samples::appliance()]);
        assert_eq!(registers.cylinders, [samples::cylinder()]);
        assert_eq!(registers.people, [samples::person()]);
        assert_eq!(registers.company, None);
    }

    #[test]
    fn a_change_keeps_what_was_before() {
        let store = store_with_visit();
        let mut facts = samples::appliance().versions.latest().clone();
        facts.refrigerant = "R-448A".to_owned();
        let from = "2026-04-01".parse().unwrap();
        let change = Dated { from: Some(from), reason: Some("retrofit".to_owned()), facts };
        store.write(now(), |tx| tx.add_appliance_version(ids::APPLIANCE, &change)).unwrap();
        let registers = store.registers().unwrap();
        let versions = &registers.appliance(ids::APPLIANCE).unwrap().versions;
        assert_eq!(versions.on("2026-03-31".parse().unwrap()).unwrap().refrigerant, "R-22");
        assert_eq!(versions.on(from).unwrap().refrigerant, "R-448A");
        assert_eq!(versions.all().len(), 2);
    }

    #[test]
    fn people_and_instruments_keep_their_versions_too() {
        let store = store_with_visit();
        let scale = Instrument {
            id: InstrumentId(uuid::Uuid::from_u128(9)),
            kind: InstrumentKind::Scale,
            name: "Scale 2".to_owned(),
            serial: String::new(),
            division: None,
            holds: None,
            checked_on: None,
            check_due: None,
        };
        let renewed = Person { certificate: "F-18".to_owned(), ..samples::person() };
        let version = Dated { from: Some("2026-05-01".parse().unwrap()), reason: None, facts: renewed.clone() };
        store
            .write(now(), |tx| {
                tx.add_instrument(&scale)?;
                tx.add_person_version(&version)
            })
            .unwrap();
        let registers = store.registers().unwrap();
        assert_eq!((registers.instruments, registers.people), (vec![scale], vec![renewed]));
        assert_eq!(store.person_versions(ids::PERSON).unwrap().unwrap().first().facts, samples::person());
    }

    #[test]
    fn reading_inside_a_write_sees_it() {
        let store = store_with_visit();
        store
            .write(now(), |tx| {
                tx.add_company_version(&Dated {
                    from: None,
                    reason: None,
                    facts: Company { name: "Quill Cooling".to_owned(), ..Company::default() },
                })?;
                assert_eq!(tx.registers()?.company().name, "Quill Cooling");
                Ok::<_, StoreError>(())
            })
            .unwrap();
    }
}
