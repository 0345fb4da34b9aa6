//! Closing, and what comes after it: later signatures, handing over.

use super::sql_types::{Day, Instant, Json};
use super::{Store, StoreError, Writing};
use crate::ledger::{Closing, Signature, VisitId};
use chrono::{DateTime, NaiveDate, Utc};
use rusqlite::{OptionalExtension, params};

/// What was signed, as it was signed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct ClosedRecord {
    /// The record's bytes, beginning with the number of their format.
    pub bytes: Vec<u8>,
    /// SHA-256 of the bytes, in hex.
    pub fingerprint: String,
    /// The versions of the rulebooks it was judged by.
    pub rulebooks: String,
    /// The program that closed it, with its version.
    pub program: String,
}

/// A signature given after closing.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Countersignature {
    pub signed: DateTime<Utc>,
    /// Site's local date and minute.
    pub date: NaiveDate,
    pub minute: u16,
    pub signature: Signature,
}

/// To whom, when and how a closed record was handed over.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct HandOver {
    pub handed: DateTime<Utc>,
    /// Site's local date and minute.
    pub date: NaiveDate,
    pub minute: u16,
    pub told: String,
}

/// How much of what came after closing stands on a paper.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub struct Since {
    /// The representative's later signature.
    pub countersigned: bool,
    /// How many of the hand-overs, the first ones.
    pub hand_overs: u32,
    /// How many of the corrections, the first ones.
    pub corrections: u32,
}

/// A further copy of a closed record, handed out after the filed original, which is copy 1.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct FurtherCopy {
    /// 2 and up, without gaps.
    pub number: u32,
    pub made: DateTime<Utc>,
    /// Site's local date and minute.
    pub date: NaiveDate,
    pub minute: u16,
    /// What had come when it was made: it prints the same for ever.
    pub since: Since,
}

impl Store {
    /// The record of a closed visit; `None` while it is open, or of imported history.
    ///
    /// # Errors
    /// The store's own, as for all below.
    pub fn closed_record(&self, visit: VisitId) -> Result<Option<ClosedRecord>, StoreError> {
        self.read(|c| {
            c.prepare_cached("SELECT record, fingerprint, rulebooks, program FROM closed_records WHERE visit = ?1")?
                .query_row([visit], |row| {
                    Ok(ClosedRecord { bytes: row.get(0)?, fingerprint: row.get(1)?, rulebooks: row.get(2)?, program: row.get(3)? })
                })
                .optional()
        })
    }

    pub fn countersignature(&self, visit: VisitId) -> Result<Option<Countersignature>, StoreError> {
        self.read(|c| {
            c.prepare_cached("SELECT signed, local_date, minute, signature FROM countersignatures WHERE visit = ?1")?
                .query_row([visit], |row| {
                    let (Instant(signed), Day(date), Json(signature)) = (row.get(0)?, row.get(1)?, row.get(3)?);
                    Ok(Countersignature { signed, date, minute: row.get(2)?, signature })
                })
                .optional()
        })
    }

    /// Every hand-over of a visit's record, the first one first.
    pub fn hand_overs(&self, visit: VisitId) -> Result<Vec<HandOver>, StoreError> {
        self.read(|c| {
            let mut statement =
                c.prepare_cached("SELECT handed, local_date, minute, told FROM hand_overs WHERE visit = ?1 ORDER BY position")?;
            let hand_overs = statement.query_map([visit], |row| {
                let (Instant(handed), Day(date)) = (row.get(0)?, row.get(1)?);
                Ok(HandOver { handed, date, minute: row.get(2)?, told: row.get(3)? })
            })?;
            hand_overs.collect()
        })
    }

    /// The further copies of a visit's record, copy 2 first.
    pub fn copies(&self, visit: VisitId) -> Result<Vec<FurtherCopy>, StoreError> {
        self.read(|c| {
            let mut statement = c.prepare_cached(
                "SELECT number, made, local_date, minute, countersigned, hand_overs, corrections FROM copies WHERE visit = ?1 \
                 ORDER BY number",
            )?;
            let copies = statement.query_map([visit], |row| {
                let (Instant(made), Day(date)) = (row.get(1)?, row.get(2)?);
                let since = Since { countersigned: row.get(4)?, hand_overs: row.get(5)?, corrections: row.get(6)? };
                Ok(FurtherCopy { number: row.get(0)?, made, date, minute: row.get(3)?, since })
            })?;
            copies.collect()
        })
    }
}

impl Writing<'_> {
    /// Closes an open visit: signatures and record are kept, its drafts go,
    /// and from here on the database refuses every change to it.
    /// `closing.handed_over` is not read; see [`Writing::hand_over`].
    ///
    /// # Errors
    /// [`StoreError::Refused`] when it is not open.
    pub fn close_visit(&self, visit: VisitId, closing: &Closing, record: &ClosedRecord) -> Result<(), StoreError> {
        let closed = self.run(|c| {
            c.execute("DELETE FROM drafts WHERE visit = ?1", [visit])?;
            c.execute(
                "INSERT INTO closings (visit, closed, local_date, minute, technician, counterpart) VALUES (?1, ?2, ?3, ?4, ?5, ?6) \
                 ON CONFLICT DO NOTHING",
                params![
                    visit,
                    Instant(closing.closed),
                    Day(closing.date),
                    closing.minute,
                    Json(&closing.technician),
                    Json(&closing.counterpart)
                ],
            )?;
            c.execute(
                "INSERT INTO closed_records (visit, record, fingerprint, rulebooks, program) VALUES (?1, ?2, ?3, ?4, ?5) \
                 ON CONFLICT DO NOTHING",
                params![visit, record.bytes, record.fingerprint, record.rulebooks, record.program],
            )?;
            c.execute("UPDATE visits SET state = 'closed' WHERE id = ?1 AND state = 'open'", [visit])
        })?;
        if closed == 1 {
            Ok(())
        } else {
            Err(StoreError::Refused { sentence: "This visit is not open; only an open visit can be closed.".to_owned() })
        }
    }

    /// Adds the signature of a representative who signs later.
    ///
    /// # Errors
    /// [`StoreError::Refused`] when one is there already.
    pub fn countersign(&self, visit: VisitId, later: &Countersignature) -> Result<(), StoreError> {
        let added = self.run(|c| {
            c.execute(
                "INSERT INTO countersignatures (visit, signed, local_date, minute, signature) VALUES (?1, ?2, ?3, ?4, ?5) \
                 ON CONFLICT DO NOTHING",
                params![visit, Instant(later.signed), Day(later.date), later.minute, Json(&later.signature)],
            )
        })?;
        if added == 1 { Ok(()) } else { Err(StoreError::Refused { sentence: "This record has been signed already.".to_owned() }) }
    }

    pub fn hand_over(&self, visit: VisitId, hand_over: &HandOver) -> Result<(), StoreError> {
        self.run(|c| {
            c.execute(
                "INSERT INTO hand_overs (visit, handed, local_date, minute, told) VALUES (?1, ?2, ?3, ?4, ?5)",
                params![visit, Instant(hand_over.handed), Day(hand_over.date), hand_over.minute, hand_over.told],
            )
            .map(drop)
        })
    }
    /// Keeps that a further copy was made.
    ///
    /// # Errors
    /// [`StoreError::Refused`] when there is no closed record or this number was given already.
    pub fn add_copy(&self, visit: VisitId, copy: &FurtherCopy) -> Result<(), StoreError> {
        let added = self.run(|c| {
            c.execute(
                "INSERT INTO copies (visit, number, made, local_date, minute, countersigned, hand_overs, corrections) \
                 SELECT visit, ?2, ?3, ?4, ?5, ?6, ?7, ?8 FROM closed_records WHERE visit = ?1 ON CONFLICT DO NOTHING",
                params![
                    visit,
                    copy.number,
                    Instant(copy.made),
                    Day(copy.date),
                    copy.minute,
                    copy.since.countersigned,
                    copy.since.hand_overs,
                    copy.since.corrections
                ],
            )
        })?;
        if added == 1 {
            Ok(())
        } else {
            Err(StoreError::Refused { sentence: "This copy has been counted already, or there is no closed record.".to_owned() })
        }
    }
}
