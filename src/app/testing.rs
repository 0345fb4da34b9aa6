//! A clock and ids that stand still, for tests and demonstrations that must
//! come out the same each time.

use super::{Clock, IdSource};
use chrono::{DateTime, Duration, Utc};
use chrono_tz::Tz;
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Mutex, PoisonError};
use uuid::Uuid;

/// Says the same time until it is set; clones share it.
#[derive(Debug, Clone)]
pub struct SetClock {
    now: Arc<Mutex<DateTime<Utc>>>,
    zone: Tz,
}

impl SetClock {
    pub fn at(now: DateTime<Utc>, zone: Tz) -> Self {
        Self { now: Arc::new(Mutex::new(now)), zone }
    }

    pub fn set(&self, now: DateTime<Utc>) {
        *self.now.lock().unwrap_or_else(PoisonError::into_inner) = now;
    }

    pub fn forward(&self, by: Duration) {
        *self.now.lock().unwrap_or_else(PoisonError::into_inner) += by;
    }
}

impl Clock for SetClock {
    fn now(&self) -> DateTime<Utc> {
        *self.now.lock().unwrap_or_else(PoisonError::into_inner)
    }

    fn zone(&self) -> Tz {
        self.zone
    }
}

/// 1, 2, 3, … as ids.
#[derive(Debug, Default)]
pub struct CountedIds(AtomicU64);

impl CountedIds {
    /// Begins after `number`.
    pub fn after(number: u64) -> Self {
        Self(AtomicU64::new(number))
    }
}

impl IdSource for CountedIds {
    fn fresh(&self, _: DateTime<Utc>) -> Uuid {
        Uuid::from_u128(u128::from(self.0.fetch_add(1, Ordering::Relaxed)) + 1)
    }
}
