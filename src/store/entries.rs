//! Entries: written once, read in one pass.

use super::sql_types::{Day, Instant, Json};
use super::{Store, StoreError, Writing};
use crate::ledger::{
    Act, ApplianceId, CylinderId, Detail, Entry, EntryId, Line, Moment, Movement, MovementKind, Position, TestKind, Transfer, VisitId,
    WeighingMode,
};
use crate::quantity::Mass;
use chrono::{DateTime, NaiveDate, NaiveTime, TimeDelta, TimeZone, Utc};
use chrono_tz::Tz;
use rusqlite::types::{FromSqlError, ToSql};
use rusqlite::{Connection, Row, params};
use std::collections::HashSet;
use std::sync::Arc;

/// The columns of a [`Line`], in the order in which [`read_line`] takes them.
const LINE: &str = "position, id, appliance, local_date, minute, job, act, purpose, mass, cylinder, division, hoses, \
                    result, scope, partial, running, temporary, new_refrigerant, new_full_charge";
/// The columns of an [`Entry`] after those of its line.
const REST: &str = "visit, written, strikes, (SELECT s.id FROM entries s WHERE s.strikes = entries.id), detail";

impl Store {
    /// The lines of all entries that are not struck, by appliance, day and
    /// position: what rates, duties and balances are computed from.
    ///
    /// # Errors
    /// The store's own, as for all below.
    pub fn lines(&self) -> Result<Vec<Line>, StoreError> {
        self.read_moment(|c| {
            let count: i64 = c.prepare_cached("SELECT count(*) FROM entries")?.query_row([], |row| row.get(0))?;
            let mut lines = Vec::with_capacity(usize::try_from(count).unwrap_or(0));
            let struck = struck(c)?;
            let mut statement = c.prepare_cached(&format!("SELECT {LINE} FROM entries ORDER BY position"))?;
            read_lines(statement.query([])?, &struck, &mut lines)?;
            lines.sort_by_key(|line| (line.appliance, line.at.date, line.position));
            Ok(lines)
        })
    }

    /// As [`Store::lines`], of one appliance.
    pub fn lines_of(&self, appliance: ApplianceId) -> Result<Vec<Line>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached(&format!(
                "SELECT {LINE} FROM entries WHERE appliance = ?1 AND NOT EXISTS (SELECT 1 FROM entries s WHERE s.strikes = entries.id) \
                 ORDER BY local_date, position"
            ))?;
            let mut lines = Vec::new();
            read_lines(statement.query([appliance])?, &HashSet::new(), &mut lines)?;
            Ok(lines)
        })
    }

    /// What went into and out of every cylinder, unstruck, in the order in
    /// which it was written: what contents are folded from.
    pub fn movements(&self) -> Result<Vec<Movement>, StoreError> {
        self.read(|c| read_movements(c.prepare_cached(&movements_where("cylinder IS NOT NULL"))?.query([])?))
    }

    /// As [`Store::movements`], of one cylinder.
    pub fn movements_of(&self, cylinder: CylinderId) -> Result<Vec<Movement>, StoreError> {
        self.read(|c| read_movements(c.prepare_cached(&movements_where("cylinder = ?1"))?.query([cylinder])?))
    }

    /// Every entry of a visit, struck ones too, as they were written.
    pub fn entries_of_visit(&self, visit: VisitId) -> Result<Vec<Entry>, StoreError> {
        self.entries("visit = ?1", &visit)
    }

    /// Every entry on an appliance, struck ones too, as they were written.
    pub fn entries_of_appliance(&self, appliance: ApplianceId) -> Result<Vec<Entry>, StoreError> {
        self.entries("appliance = ?1", &appliance)
    }

    /// Every entry with a cylinder, struck ones too, as they were written.
    pub fn entries_of_cylinder(&self, cylinder: CylinderId) -> Result<Vec<Entry>, StoreError> {
        self.entries("cylinder = ?1", &cylinder)
    }

    pub fn entry(&self, entry: EntryId) -> Result<Option<Entry>, StoreError> {
        Ok(self.entries("id = ?1", &entry)?.pop())
    }

    /// Which store this is, in figures that only grow: for telling whether
    /// what was computed from it still holds.
    pub fn last_position(&self) -> Result<Position, StoreError> {
        self.read(|c| {
            c.prepare_cached(
                "SELECT max(coalesce((SELECT max(position) FROM entries), 0), coalesce((SELECT max(position) FROM cylinder_entries), 0))",
            )?
            .query_row([], |row| row.get(0))
        })
    }

    fn entries(&self, condition: &str, value: &dyn ToSql) -> Result<Vec<Entry>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached(&format!("SELECT {LINE}, {REST} FROM entries WHERE {condition} ORDER BY position"))?;
            statement.query_map([value], read_entry)?.collect()
        })
    }
}

impl Writing<'_> {
    /// Writes an entry and says which position it got; `line.position` and
    /// `struck_by` are the store's to know and are not read. An entry with
    /// `strikes` takes that one out of all sums.
    ///
    /// # Errors
    /// [`StoreError::Refused`] when the visit is closed or the entry to strike
    /// has been struck already; else the store's own.
    pub fn add_entry(&self, entry: &Entry) -> Result<Position, StoreError> {
        let Entry { line, visit, written, strikes, struck_by: _, detail } = entry;
        let columns = ActColumns::of(&line.act)?;
        let gross = gross_after(&line.act, detail)?;
        let stamp = self.stamp();
        self.run(|c| {
            c.prepare_cached(
                // Positions count on over both books.
                "INSERT INTO entries (position, id, visit, appliance, local_date, minute, time_zone, written, device, counter, strikes, job, \
                 act, purpose, mass, cylinder, gross_after, division, hoses, result, scope, partial, running, temporary, new_refrigerant, \
                 new_full_charge, detail) VALUES (1 + max(coalesce((SELECT max(position) FROM entries), 0), \
                 coalesce((SELECT max(position) FROM cylinder_entries), 0)), ?1, ?2, ?3, ?4, ?5, \
                 coalesce((SELECT time_zone FROM visits WHERE id = ?2), ''), \
                 ?6, ?7, ?8, ?9, ?10, ?11, ?12, ?13, ?14, ?15, ?16, ?17, ?18, ?19, ?20, ?21, ?22, ?23, ?24, ?25)",
            )?
            .insert(params![
                line.entry,
                visit,
                line.appliance,
                Day(line.at.date),
                line.at.minute,
                Instant(*written),
                stamp.device,
                stamp.counter,
                strikes,
                line.job.as_deref(),
                line.act.name(),
                columns.purpose,
                columns.mass,
                columns.cylinder,
                gross,
                columns.division,
                columns.hoses,
                columns.result,
                columns.scope,
                columns.partial,
                columns.running,
                columns.temporary,
                columns.new_refrigerant,
                columns.new_full_charge,
                Json(detail)
            ])
        })
    }
}

/// An act, laid out in columns.
#[derive(Default)]
struct ActColumns<'a> {
    purpose: Option<&'static str>,
    mass: Option<Mass>,
    cylinder: Option<CylinderId>,
    division: Option<Mass>,
    hoses: Option<Mass>,
    result: Option<&'static str>,
    scope: Option<&'static str>,
    partial: Option<bool>,
    running: Option<i64>,
    temporary: Option<bool>,
    new_refrigerant: Option<&'a str>,
    new_full_charge: Option<Mass>,
}

impl<'a> ActColumns<'a> {
    fn of(act: &'a Act) -> Result<Self, StoreError> {
        let columns = match act {
            Act::Charge { purpose, transfer } => Self::of_transfer(purpose.name(), transfer),
            Act::Recover { purpose, transfer } => Self::of_transfer(purpose.name(), transfer),
            Act::Recycle { cylinder } => Self { cylinder: *cylinder, ..Self::default() },
            Act::Test { kind: _, result, scope, partial, running_hundredths } => Self {
                result: result.map(|word| word.name()),
                scope: scope.map(|word| word.name()),
                partial: Some(*partial),
                running: *running_hundredths,
                ..Self::default()
            },
            Act::Repair { temporary } => Self { temporary: Some(*temporary), ..Self::default() },
            Act::Retrofit { refrigerant, full_charge } => {
                Self { new_refrigerant: refrigerant.as_deref(), new_full_charge: *full_charge, ..Self::default() }
            }
            Act::NormalOperation
            | Act::DetectionSystemCheck
            | Act::Mothball
            | Act::Retire
            | Act::PlanMade
            | Act::ReportSent
            | Act::Note => Self::default(),
        };
        let masses = [columns.mass, columns.division, columns.hoses, columns.new_full_charge];
        if masses.into_iter().flatten().any(|mass| mass.to_i64().is_none()) {
            return Err(StoreError::MassTooLarge);
        }
        Ok(columns)
    }

    fn of_transfer(purpose: &'static str, transfer: &Transfer) -> Self {
        Self {
            purpose: Some(purpose),
            mass: Some(transfer.mass),
            cylinder: transfer.cylinder,
            division: transfer.division,
            hoses: Some(transfer.hoses),
            ..Self::default()
        }
    }
}

/// The gross weight of the cylinder at the end of a transfer, where it was read.
fn gross_after(act: &Act, detail: &Detail) -> Result<Option<Mass>, StoreError> {
    let reading = detail.reading.as_ref().filter(|reading| reading.mode == WeighingMode::Gross && act.transfer().is_some());
    let gross = reading.and_then(|reading| reading.after.as_ref()).and_then(|after| after.mass().ok());
    if gross.is_some_and(|gross| gross.to_i64().is_none()) { Err(StoreError::MassTooLarge) } else { Ok(gross) }
}

/// Both books, in the order in which they were written.
fn movements_where(condition: &str) -> String {
    format!(
        "SELECT cylinder, appliance, id, local_date, minute, position, act, mass, gross_after, division, time_zone, \
         NULL AS refrigerant, NULL AS gas_status FROM entries \
         WHERE {condition} AND act IN ('charge', 'recover', 'recycle') \
         AND NOT EXISTS (SELECT 1 FROM entries s WHERE s.strikes = entries.id) \
         UNION ALL SELECT cylinder, NULL, id, local_date, minute, position, act, mass, gross_after, division, time_zone, \
         refrigerant, gas_status FROM cylinder_entries \
         WHERE {condition} AND act <> 'strike' \
         AND NOT EXISTS (SELECT 1 FROM cylinder_entries s WHERE s.strikes = cylinder_entries.id) ORDER BY position"
    )
}

fn read_movements(mut rows: rusqlite::Rows<'_>) -> rusqlite::Result<Vec<Movement>> {
    let mut movements = Vec::new();
    let mut zones = Zones::default();
    while let Some(row) = rows.next()? {
        let Day(date) = row.get(3)?;
        let minute: Option<u16> = row.get(4)?;
        let kind = match row.get_ref(6)?.as_str()? {
            "charge" => MovementKind::Out(row.get(7)?),
            "recover" => MovementKind::Into(row.get(7)?),
            "recycle" => MovementKind::Recycled,
            "bought" => MovementKind::Bought { refrigerant: row.get(11)?, status: row.get(12)?, mass: row.get(7)? },
            "weighed" => MovementKind::Weighed,
            _ => MovementKind::Left(row.get(7)?),
        };
        movements.push(Movement {
            cylinder: row.get(0)?,
            appliance: row.get(1)?,
            entry: row.get(2)?,
            at: Moment { date, minute },
            instant: zones.instant(row.get_ref(10)?.as_str()?, date, minute.unwrap_or(0)),
            position: row.get(5)?,
            kind,
            gross_after: row.get(8)?,
            division: row.get(9)?,
        });
    }
    Ok(movements)
}

/// Sites' clocks as instants. Movements of one zone stand together, so the last zone is kept.
#[derive(Default)]
struct Zones {
    last: Option<(String, Tz)>,
}

impl Zones {
    /// A zone that nobody knows is taken as UTC. Of an hour that comes twice
    /// the later one: a movement is rather counted than taken as weighed
    /// already; an hour that is left out is not on any clock.
    fn instant(&mut self, zone: &str, date: NaiveDate, minute: u16) -> DateTime<Utc> {
        let tz = match &self.last {
            Some((last, tz)) if last == zone => *tz,
            _ => {
                let tz = zone.parse().unwrap_or(Tz::UTC);
                self.last = Some((zone.to_owned(), tz));
                tz
            }
        };
        let local = date.and_time(NaiveTime::MIN) + TimeDelta::minutes(i64::from(minute));
        tz.from_local_datetime(&local).latest().map_or_else(|| local.and_utc(), |instant| instant.with_timezone(&Utc))
    }
}

fn struck(c: &Connection) -> rusqlite::Result<HashSet<EntryId>> {
    let mut statement = c.prepare_cached("SELECT strikes FROM entries WHERE strikes IS NOT NULL")?;
    statement.query_map([], |row| row.get(0))?.collect()
}

fn read_lines(mut rows: rusqlite::Rows<'_>, struck: &HashSet<EntryId>, lines: &mut Vec<Line>) -> rusqlite::Result<()> {
    let mut last_job: Option<Arc<str>> = None;
    while let Some(row) = rows.next()? {
        if !struck.is_empty() && struck.contains(&row.get(1)?) {
            continue;
        }
        lines.push(read_line(row, &mut last_job)?);
    }
    Ok(())
}

/// Entries of one job stand together, so the last job's name is shared.
fn read_line(row: &Row<'_>, last_job: &mut Option<Arc<str>>) -> rusqlite::Result<Line> {
    let job = match row.get_ref(5)?.as_str_or_null()? {
        None => None,
        Some(name) if last_job.as_deref() == Some(name) => last_job.clone(),
        Some(name) => {
            *last_job = Some(name.into());
            last_job.clone()
        }
    };
    let Day(date) = row.get(3)?;
    Ok(Line {
        entry: row.get(1)?,
        appliance: row.get(2)?,
        at: Moment { date, minute: row.get(4)? },
        position: row.get(0)?,
        job,
        act: read_act(row)?,
    })
}

fn read_act(row: &Row<'_>) -> rusqlite::Result<Act> {
    let transfer =
        || Ok::<_, rusqlite::Error>(Transfer { mass: row.get(8)?, cylinder: row.get(9)?, division: row.get(10)?, hoses: row.get(11)? });
    Ok(match row.get_ref(6)?.as_str()? {
        "charge" => Act::Charge { purpose: row.get(7)?, transfer: transfer()? },
        "recover" => Act::Recover { purpose: row.get(7)?, transfer: transfer()? },
        "recycle" => Act::Recycle { cylinder: row.get(9)? },
        "repair" => Act::Repair { temporary: row.get(16)? },
        "normal operation" => Act::NormalOperation,
        "detection system check" => Act::DetectionSystemCheck,
        "mothball" => Act::Mothball,
        "retrofit" => Act::Retrofit { refrigerant: row.get(17)?, full_charge: row.get(18)? },
        "retire" => Act::Retire,
        "plan made" => Act::PlanMade,
        "report sent" => Act::ReportSent,
        "note" => Act::Note,
        test => Act::Test {
            kind: TestKind::from_name(test).map_err(FromSqlError::other)?,
            result: row.get(12)?,
            scope: row.get(13)?,
            partial: row.get(14)?,
            running_hundredths: row.get(15)?,
        },
    })
}

fn read_entry(row: &Row<'_>) -> rusqlite::Result<Entry> {
    let (Instant(written), Json(detail)) = (row.get(20)?, row.get(23)?);
    Ok(Entry { line: read_line(row, &mut None)?, visit: row.get(19)?, written, strikes: row.get(21)?, struck_by: row.get(22)?, detail })
}
