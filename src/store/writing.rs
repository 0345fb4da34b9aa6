//! A transaction that is being written.

use super::sql_types::Instant;
use super::{Store, StoreError};
use chrono::{DateTime, Utc};
use rusqlite::Connection;
use std::cell::Cell;
use std::ops::Deref;

/// Inside [`Store::write`]: everything a [`Store`] reads, and all that is written.
pub struct Writing<'a> {
    store: &'a Store,
    now: DateTime<Utc>,
    device: i64,
    counted: i64,
    counter: Cell<i64>,
}

/// What every row that may leave the device carries.
pub(super) struct Stamp {
    pub written: Instant,
    pub device: i64,
    pub counter: i64,
}

impl<'a> Writing<'a> {
    pub(super) fn begin(store: &'a Store, now: DateTime<Utc>) -> Result<Self, StoreError> {
        let (device, counted) = store.read(|c| {
            c.prepare_cached("SELECT number, counter FROM devices WHERE own = 1")?.query_row([], |row| Ok((row.get(0)?, row.get(1)?)))
        })?;
        Ok(Self { store, now, device, counted, counter: Cell::new(counted) })
    }

    /// The instant that this transaction's rows are stamped with.
    pub fn now(&self) -> DateTime<Utc> {
        self.now
    }

    pub(super) fn stamp(&self) -> Stamp {
        self.counter.set(self.counter.get() + 1);
        Stamp { written: Instant(self.now), device: self.device, counter: self.counter.get() }
    }

    /// Once at the end, not once a row.
    pub(super) fn count_rows(&self) -> Result<(), StoreError> {
        if self.counter.get() == self.counted {
            return Ok(());
        }
        self.run(|c| c.prepare_cached("UPDATE devices SET counter = ?1 WHERE own = 1")?.execute([self.counter.get()]).map(drop))
    }

    pub(super) fn run<T>(&self, statement: impl FnOnce(&Connection) -> rusqlite::Result<T>) -> Result<T, StoreError> {
        self.store.read(statement)
    }
}

impl Deref for Writing<'_> {
    type Target = Store;

    fn deref(&self) -> &Store {
        self.store
    }
}
