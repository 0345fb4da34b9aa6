//! How the ledger's types lie in SQLite.
//!
//! | type | column | rule |
//! |---|---|---|
//! | ids | BLOB | the UUID's 16 bytes |
//! | day | TEXT | `2026-03-03`, the site's local date |
//! | instant | INTEGER | UTC milliseconds since 1970 |
//! | [`Mass`] | INTEGER | 10⁻¹⁴ kg; over 64 bits is an error |
//! | a word from a closed list | TEXT | its name |
//! | a document | TEXT | JSON |

use crate::ledger::{
    ApplianceId, ChargePurpose, CylinderId, EntryId, GasStatus, InstrumentId, PersonId, RecoveryPurpose, Scope, SiteId, TestKind,
    TestResult, VisitId, VisitState,
};
use crate::quantity::Mass;
use chrono::{DateTime, NaiveDate, Utc};
use rusqlite::types::{FromSql, FromSqlError, FromSqlResult, ToSql, ToSqlOutput, Value, ValueRef};
use serde::Serialize;
use serde::de::DeserializeOwned;
use uuid::Uuid;

macro_rules! ids_in_sql {
    ($($name:ident)*) => {$(
        impl ToSql for $name {
            fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
                Ok(ToSqlOutput::Borrowed(ValueRef::Blob(self.0.as_bytes())))
            }
        }

        impl FromSql for $name {
            fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
                let bytes = value.as_blob()?.try_into().map_err(FromSqlError::other)?;
                Ok(Self(Uuid::from_bytes(bytes)))
            }
        }
    )*};
}

ids_in_sql! { SiteId ApplianceId CylinderId PersonId InstrumentId VisitId EntryId }

macro_rules! words_in_sql {
    ($($name:ident)*) => {$(
        impl ToSql for $name {
            fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
                Ok(ToSqlOutput::from(self.name()))
            }
        }

        impl FromSql for $name {
            fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
                Self::from_name(value.as_str()?).map_err(FromSqlError::other)
            }
        }
    )*};
}

words_in_sql! { ChargePurpose GasStatus RecoveryPurpose Scope TestKind TestResult }

impl ToSql for VisitState {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        Ok(ToSqlOutput::from(self.name()))
    }
}

impl FromSql for VisitState {
    fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
        match value.as_str()? {
            "open" => Ok(Self::Open),
            "closed" => Ok(Self::Closed),
            "imported" => Ok(Self::Imported),
            _ => Err(FromSqlError::InvalidType),
        }
    }
}

impl ToSql for Mass {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        let units = self.to_i64().ok_or_else(|| rusqlite::Error::ToSqlConversionFailure("a mass over 90 t".into()))?;
        Ok(ToSqlOutput::from(units))
    }
}

impl FromSql for Mass {
    fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
        value.as_i64().map(Self::from_i64)
    }
}

/// A local date.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Day(pub NaiveDate);

impl ToSql for Day {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        Ok(ToSqlOutput::Owned(Value::Text(self.0.to_string())))
    }
}

impl FromSql for Day {
    fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
        day_of(value.as_bytes()?).map(Self).ok_or(FromSqlError::InvalidType)
    }
}

/// `2026-03-03` by hand: a hundred thousand of them are read at once.
fn day_of(text: &[u8]) -> Option<NaiveDate> {
    let &[y1, y2, y3, y4, b'-', m1, m2, b'-', d1, d2] = text else { return None };
    let number =
        |digits: &[u8]| digits.iter().try_fold(0_u32, |sum, digit| digit.is_ascii_digit().then(|| sum * 10 + u32::from(digit - b'0')));
    NaiveDate::from_ymd_opt(i32::try_from(number(&[y1, y2, y3, y4])?).ok()?, number(&[m1, m2])?, number(&[d1, d2])?)
}

/// An instant in UTC.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Instant(pub DateTime<Utc>);

impl ToSql for Instant {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        Ok(ToSqlOutput::from(self.0.timestamp_millis()))
    }
}

impl FromSql for Instant {
    fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
        DateTime::from_timestamp_millis(value.as_i64()?).map(Self).ok_or(FromSqlError::InvalidType)
    }
}

/// A document.
pub(super) struct Json<T>(pub T);

impl<T: Serialize> ToSql for Json<T> {
    fn to_sql(&self) -> rusqlite::Result<ToSqlOutput<'_>> {
        let text = serde_json::to_string(&self.0).map_err(|e| rusqlite::Error::ToSqlConversionFailure(e.into()))?;
        Ok(ToSqlOutput::Owned(Value::Text(text)))
    }
}

impl<T: DeserializeOwned> FromSql for Json<T> {
    fn column_result(value: ValueRef<'_>) -> FromSqlResult<Self> {
        serde_json::from_slice(value.as_bytes()?).map(Self).map_err(FromSqlError::other)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn days_read_as_written() {
        let day: NaiveDate = "2024-02-29".parse().unwrap();
        assert_eq!(day_of(day.to_string().as_bytes()), Some(day));
    }

    #[test]
    fn what_is_no_day_is_refused() {
        for text in ["2023-02-29", "2026-1-01", "2026/01/01", "2026-13-01", "+026-01-01", ""] {
            assert_eq!(day_of(text.as_bytes()), None, "{text:?}");
        }
    }
}
