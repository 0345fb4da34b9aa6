//! Cylinders' own book: written once, like the entries of visits.

use super::sql_types::{Day, Instant, Json};
use super::{Store, StoreError, Writing};
use crate::ledger::{CylinderAct, CylinderEntry, CylinderId, EntryId, Moment, Position};
use rusqlite::types::ToSql;
use rusqlite::{Row, params};

const COLUMNS: &str = "id, cylinder, local_date, minute, time_zone, position, written, act, mass, refrigerant, gas_status, gross_after, \
                       division, strikes, (SELECT s.id FROM cylinder_entries s WHERE s.strikes = cylinder_entries.id), detail";

impl Store {
    /// The whole book of one cylinder, struck entries too, as they were written.
    ///
    /// # Errors
    /// The store's own, as for all below.
    pub fn book_of_cylinder(&self, cylinder: CylinderId) -> Result<Vec<CylinderEntry>, StoreError> {
        self.cylinder_entries("cylinder = ?1", &cylinder)
    }

    /// What was written in all books and counts, in the order in which it was written.
    pub fn cylinder_books(&self) -> Result<Vec<CylinderEntry>, StoreError> {
        let mut entries = self.cylinder_entries("?1 IS NULL", &None::<i64>)?;
        entries.retain(|entry| entry.struck_by.is_none() && entry.act != CylinderAct::Strike);
        Ok(entries)
    }

    pub fn cylinder_entry(&self, entry: EntryId) -> Result<Option<CylinderEntry>, StoreError> {
        Ok(self.cylinder_entries("id = ?1", &entry)?.pop())
    }

    fn cylinder_entries(&self, condition: &str, value: &dyn ToSql) -> Result<Vec<CylinderEntry>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached(&format!("SELECT {COLUMNS} FROM cylinder_entries WHERE {condition} ORDER BY position"))?;
            statement.query_map([value], read)?.collect()
        })
    }
}

impl Writing<'_> {
    /// Writes an entry and says which position it got; `position` and
    /// `struck_by` are the store's to know and are not read.
    ///
    /// # Errors
    /// [`StoreError::Refused`] when the entry to strike has been struck already; else the store's own.
    pub fn add_cylinder_entry(&self, entry: &CylinderEntry) -> Result<Position, StoreError> {
        let masses = [entry.act.mass(), entry.gross_after, entry.division];
        if masses.into_iter().flatten().any(|mass| mass.to_i64().is_none()) {
            return Err(StoreError::MassTooLarge);
        }
        let (refrigerant, status) = match &entry.act {
            CylinderAct::Bought { refrigerant, status, .. } => (Some(refrigerant), Some(status)),
            _ => (None, None),
        };
        let stamp = self.stamp();
        self.run(|c| {
            c.prepare_cached(
                // Positions count on over both books.
                "INSERT INTO cylinder_entries (position, id, cylinder, local_date, minute, time_zone, written, device, counter, strikes, \
                 act, mass, refrigerant, gas_status, gross_after, division, detail) VALUES (\
                 1 + max(coalesce((SELECT max(position) FROM entries), 0), coalesce((SELECT max(position) FROM cylinder_entries), 0)), \
                 ?1, ?2, ?3, ?4, ?5, ?6, ?7, ?8, ?9, ?10, ?11, ?12, ?13, ?14, ?15, ?16)",
            )?
            .insert(params![
                entry.id,
                entry.cylinder,
                Day(entry.at.date),
                entry.at.minute,
                entry.time_zone,
                Instant(entry.written),
                stamp.device,
                stamp.counter,
                entry.strikes,
                entry.act.name(),
                entry.act.mass(),
                refrigerant,
                status,
                entry.gross_after,
                entry.division,
                Json(&entry.detail)
            ])
        })
    }
}

fn read(row: &Row<'_>) -> rusqlite::Result<CylinderEntry> {
    let (Day(date), Instant(written), Json(detail)) = (row.get(2)?, row.get(6)?, row.get(15)?);
    let act = match row.get_ref(7)?.as_str()? {
        "bought" => CylinderAct::Bought { refrigerant: row.get(9)?, status: row.get(10)?, mass: row.get(8)? },
        "weighed" => CylinderAct::Weighed,
        "sent away" => CylinderAct::SentAway { mass: row.get(8)? },
        "returned" => CylinderAct::Returned { heel: row.get(8)? },
        "lost" => CylinderAct::Lost { mass: row.get(8)? },
        _ => CylinderAct::Strike,
    };
    Ok(CylinderEntry {
        id: row.get(0)?,
        cylinder: row.get(1)?,
        at: Moment { date, minute: row.get(3)? },
        time_zone: row.get(4)?,
        position: row.get(5)?,
        written,
        act,
        gross_after: row.get(11)?,
        division: row.get(12)?,
        strikes: row.get(13)?,
        struck_by: row.get(14)?,
        detail,
    })
}

#[cfg(test)]
mod tests {
    use super::super::samples::{self, at, ids, now, store_with_visit};
    use super::*;
    use crate::ledger::{CylinderDetail, GasStatus};
    use crate::quantity::Mass;
    use uuid::Uuid;

    fn entry(number: u128, act: CylinderAct) -> CylinderEntry {
        CylinderEntry {
            id: EntryId(Uuid::from_u128(2000 + number)),
            cylinder: ids::CYLINDER,
            at: at("2026-03-03", 600),
            time_zone: "Etc/UTC".to_owned(),
            position: 0,
            written: now(),
            gross_after: (act == CylinderAct::Weighed).then(|| Mass::from_kg(15)),
            division: None,
            act,
            strikes: None,
            struck_by: None,
            detail: CylinderDetail { party: "Saltbeck".to_owned(), ..CylinderDetail::default() },
        }
    }

    #[test]
    fn entries_read_back_as_written_and_count_on_over_both_books() {
        let store = store_with_visit();
        let acts = [
            CylinderAct::Bought { refrigerant: "R-22".to_owned(), status: GasStatus::Reclaimed, mass: Mass::from_kg(3) },
            CylinderAct::Weighed,
            CylinderAct::SentAway { mass: Mass::from_kg(2) },
            CylinderAct::Returned { heel: Mass::ZERO },
            CylinderAct::Lost { mass: Mass::from_kg(1) },
        ];
        let mut written: Vec<CylinderEntry> = (0..).zip(acts).map(|(number, act)| entry(number, act)).collect();
        store.write(now(), |tx| tx.add_entry(&samples::entry(1, crate::ledger::Act::Note))).unwrap();
        store.write(now(), |tx| written.iter().try_for_each(|entry| tx.add_cylinder_entry(entry).map(drop))).unwrap();
        for (position, entry) in (2..).zip(&mut written) {
            entry.position = position;
        }
        assert_eq!(store.book_of_cylinder(ids::CYLINDER).unwrap(), written);
        assert_eq!(store.last_position().unwrap(), 6);
        let next = store.write(now(), |tx| tx.add_entry(&samples::entry(2, crate::ledger::Act::Note))).unwrap();
        assert_eq!(next, 7);
    }

    #[test]
    fn an_entry_is_struck_never_changed() {
        let store = store_with_visit();
        let lost = entry(1, CylinderAct::Lost { mass: Mass::from_kg(1) });
        let strike = CylinderEntry { strikes: Some(lost.id), ..entry(2, CylinderAct::Strike) };
        store.write(now(), |tx| tx.add_cylinder_entry(&lost).and_then(|_| tx.add_cylinder_entry(&strike))).unwrap();
        assert_eq!(store.cylinder_books().unwrap(), []);
        assert_eq!(store.movements_of(ids::CYLINDER).unwrap(), []);
        assert_eq!(store.cylinder_entry(lost.id).unwrap().unwrap().struck_by, Some(strike.id));
        let again = CylinderEntry { strikes: Some(lost.id), ..entry(3, CylinderAct::Strike) };
        assert!(matches!(store.write(now(), |tx| tx.add_cylinder_entry(&again)), Err(StoreError::Refused { .. })));
        for sql in ["UPDATE cylinder_entries SET mass = 1", "DELETE FROM cylinder_entries"] {
            assert!(matches!(store.read(|c| c.execute(sql, [])), Err(StoreError::Refused { .. })), "{sql}");
        }
    }
}
