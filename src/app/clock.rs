//! Where time and ids come from.

use chrono::{DateTime, SubsecRound, Utc};
use chrono_tz::Tz;
use uuid::{NoContext, Timestamp, Uuid};

/// What time it is, and where the device is.
pub trait Clock: Send + Sync {
    fn now(&self) -> DateTime<Utc>;
    fn zone(&self) -> Tz;
}

/// Where ids come from.
pub trait IdSource: Send + Sync {
    /// An id that was never given before.
    fn fresh(&self, now: DateTime<Utc>) -> Uuid;
}

/// The machine's own clock and zone.
#[derive(Debug, Clone, Copy, Default)]
pub struct SystemClock;

impl Clock for SystemClock {
    fn now(&self) -> DateTime<Utc> {
        // The store keeps milliseconds; what is signed says the same.
        DateTime::<Utc>::from(std::time::SystemTime::now()).trunc_subsecs(3)
    }

    fn zone(&self) -> Tz {
        // A machine that does not say where it is keeps UTC, and records say so.
        iana_time_zone::get_timezone().ok().and_then(|name| name.parse().ok()).unwrap_or(Tz::UTC)
    }
}

/// UUIDs of version 7: in order of time.
#[derive(Debug, Clone, Copy, Default)]
pub struct FreshIds;

impl IdSource for FreshIds {
    fn fresh(&self, now: DateTime<Utc>) -> Uuid {
        let seconds = u64::try_from(now.timestamp()).unwrap_or(0);
        Uuid::new_v7(Timestamp::from_unix(NoContext, seconds, now.timestamp_subsec_nanos()))
    }
}
