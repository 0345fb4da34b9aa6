//! Visits, who was at them, what was acknowledged.

use super::sql_types::{Day, Instant, Json};
use super::{Store, StoreError, Writing};
use crate::ledger::{ApplianceId, CautionSeen, Closing, PersonId, SiteId, Visit, VisitId, VisitState};
use chrono::NaiveDate;
use rusqlite::types::{FromSql, ToSql};
use rusqlite::{Connection, OptionalExtension, Row, params};
use std::collections::HashMap;

/// Which visits to read; what is `None` does not matter.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct VisitFilter {
    pub site: Option<SiteId>,
    /// Visits with an entry on this appliance.
    pub appliance: Option<ApplianceId>,
    /// First and last day on which a visit may have begun.
    pub from: Option<NaiveDate>,
    pub to: Option<NaiveDate>,
    pub state: Option<VisitState>,
}

impl Store {
    /// The visits that fit, by day and time of beginning.
    ///
    /// # Errors
    /// The store's own, as for all below.
    pub fn visits(&self, filter: &VisitFilter) -> Result<Vec<Visit>, StoreError> {
        let (mut conditions, mut values): (Vec<&str>, Vec<Box<dyn ToSql>>) = Default::default();
        if let Some(site) = filter.site {
            conditions.push("v.site = ?");
            values.push(Box::new(site));
        }
        if let Some(appliance) = filter.appliance {
            conditions.push("v.id IN (SELECT visit FROM entries WHERE appliance = ?)");
            values.push(Box::new(appliance));
        }
        if let Some(from) = filter.from {
            conditions.push("v.local_date >= ?");
            values.push(Box::new(Day(from)));
        }
        if let Some(to) = filter.to {
            conditions.push("v.local_date <= ?");
            values.push(Box::new(Day(to)));
        }
        if let Some(state) = filter.state {
            conditions.push("v.state = ?");
            values.push(Box::new(state));
        }
        let condition = if conditions.is_empty() { "1".to_owned() } else { conditions.join(" AND ") };
        let values: Vec<&dyn ToSql> = values.iter().map(AsRef::as_ref).collect();
        self.read_moment(|c| read_visits(c, &condition, &values))
    }

    /// Visits that are not closed yet.
    pub fn open_visits(&self) -> Result<Vec<Visit>, StoreError> {
        self.read_moment(|c| read_visits(c, "v.state = 'open'", &[]))
    }

    pub fn visit(&self, visit: VisitId) -> Result<Option<Visit>, StoreError> {
        self.read_moment(|c| Ok(read_visits(c, "v.id = ?", &[&visit])?.pop()))
    }

    /// Who began the visit of each appliance's latest entry.
    pub fn last_people(&self) -> Result<HashMap<ApplianceId, PersonId>, StoreError> {
        self.read(|c| {
            // With max() the other columns are those of its row.
            let mut statement = c.prepare_cached(
                "SELECT e.appliance, p.person, max(e.position) FROM entries e \
                 JOIN visit_people p ON p.visit = e.visit AND p.number = 1 GROUP BY e.appliance",
            )?;
            statement.query_map([], |row| Ok((row.get(0)?, row.get(1)?)))?.collect()
        })
    }

    /// Cautions acknowledged in a visit, in order of time.
    pub fn cautions_seen(&self, visit: VisitId) -> Result<Vec<CautionSeen>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached(
                "SELECT caution, local_date, minute, person FROM cautions_seen WHERE visit = ?1 ORDER BY acknowledged, caution",
            )?;
            let seen = statement.query_map([visit], |row| {
                let on = row.get::<_, Option<Day>>(1)?.map(|Day(date)| date);
                Ok(CautionSeen { caution: row.get(0)?, on, at_minute: row.get(2)?, person: row.get(3)? })
            })?;
            seen.collect()
        })
    }
}

impl Writing<'_> {
    /// Writes a new visit, open or imported, with its people.
    ///
    /// # Errors
    /// The store's own, as for all below.
    pub fn begin_visit(&self, visit: &Visit) -> Result<(), StoreError> {
        let stamp = self.stamp();
        self.run(|c| {
            c.prepare_cached(
                "INSERT INTO visits (id, site, state, local_date, minute, time_zone, begun, device, counter) \
                 VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8, ?9)",
            )?
            .execute(params![
                visit.id,
                visit.site,
                visit.state,
                Day(visit.date),
                visit.minute,
                visit.time_zone,
                Instant(visit.begun),
                stamp.device,
                stamp.counter
            ])
        })?;
        visit.people.iter().try_for_each(|person| self.join_visit(visit.id, *person))
    }

    /// Takes a further person into an open visit.
    pub fn join_visit(&self, visit: VisitId, person: PersonId) -> Result<(), StoreError> {
        self.run(|c| {
            c.prepare_cached(
                "INSERT INTO visit_people (visit, number, person) \
                 SELECT ?1, coalesce(max(number), 0) + 1, ?2 FROM visit_people WHERE visit = ?1",
            )?
            .execute(params![visit, person])
            .map(drop)
        })
    }

    /// Keeps that a caution was acknowledged; the first time counts.
    pub fn acknowledge(&self, visit: VisitId, seen: &CautionSeen) -> Result<(), StoreError> {
        self.run(|c| {
            c.prepare_cached(
                "INSERT INTO cautions_seen (visit, caution, local_date, minute, person, acknowledged) VALUES (?1, ?2, ?3, ?4, ?5, ?6) \
                 ON CONFLICT DO NOTHING",
            )?
            .execute(params![visit, seen.caution, seen.on.map(Day), seen.at_minute, seen.person, Instant(self.now())])
            .map(drop)
        })
    }
}

/// `condition` speaks of `visits v`.
fn read_visits(c: &Connection, condition: &str, values: &[&dyn ToSql]) -> rusqlite::Result<Vec<Visit>> {
    let mut people = pairs::<PersonId>(
        c,
        &format!(
            "SELECT p.visit, p.person FROM visit_people p JOIN visits v ON v.id = p.visit WHERE {condition} ORDER BY p.visit, p.number"
        ),
        values,
    )?;
    let mut statement = c.prepare_cached(&format!(
        "SELECT v.id, v.site, v.state, v.local_date, v.minute, v.time_zone, v.begun, \
         k.closed, k.local_date, k.minute, k.technician, k.counterpart, r.fingerprint, \
         (SELECT told FROM hand_overs h WHERE h.visit = v.id ORDER BY h.position DESC LIMIT 1) \
         FROM visits v LEFT JOIN closings k ON k.visit = v.id LEFT JOIN closed_records r ON r.visit = v.id \
         WHERE {condition} ORDER BY v.local_date, v.minute, v.position"
    ))?;
    statement
        .query_map(values, |row| {
            let id = row.get(0)?;
            let (Day(date), Instant(begun)) = (row.get(3)?, row.get(6)?);
            Ok(Visit {
                id,
                site: row.get(1)?,
                state: row.get(2)?,
                date,
                minute: row.get(4)?,
                time_zone: row.get(5)?,
                begun,
                people: people.remove(&id).unwrap_or_default(),
                closing: closing(row)?,
                fingerprint: row.get(12)?,
            })
        })?
        .collect()
}

fn closing(row: &Row<'_>) -> rusqlite::Result<Option<Closing>> {
    let Some(Instant(closed)) = row.get(7)? else { return Ok(None) };
    let (Day(date), Json(technician), Json(counterpart)) = (row.get(8)?, row.get(10)?, row.get(11)?);
    let handed_over: Option<String> = row.get(13)?;
    Ok(Some(Closing { closed, date, minute: row.get(9)?, technician, counterpart, handed_over: handed_over.unwrap_or_default() }))
}

fn pairs<T: FromSql>(c: &Connection, query: &str, values: &[&dyn ToSql]) -> rusqlite::Result<HashMap<VisitId, Vec<T>>> {
    let mut statement = c.prepare_cached(query)?;
    let mut rows = statement.query(values)?;
    let mut pairs: HashMap<VisitId, Vec<T>> = HashMap::new();
    while let Some(row) = rows.next()? {
        pairs.entry(row.get(0)?).or_default().push(row.get(1)?);
    }
    Ok(pairs)
}

impl Store {
    /// The state of a visit; `None` when there is no such visit.
    pub fn visit_state(&self, visit: VisitId) -> Result<Option<VisitState>, StoreError> {
        self.read(|c| c.prepare_cached("SELECT state FROM visits WHERE id = ?1")?.query_row([visit], |row| row.get(0)).optional())
    }
}
