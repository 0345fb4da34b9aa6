//! Legal days: whole calendar days at the site, no time of day, no weekends.

use chrono::{Months, NaiveDate};

/// The same day number `months` later, clipped to that month's end
/// (31 August + 6 months = 28 February).
///
/// Saturates at the calendar's last day, which no record reaches.
pub fn add_months(day: NaiveDate, months: u32) -> NaiveDate {
    day.checked_add_months(Months::new(months)).unwrap_or(NaiveDate::MAX)
}

/// Days passed from `from` to `to`; negative when `to` is earlier.
pub fn days_between(from: NaiveDate, to: NaiveDate) -> i64 {
    (to - from).num_days()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn day(text: &str) -> NaiveDate {
        text.parse().unwrap()
    }

    #[test]
    fn month_ends_are_clipped() {
        assert_eq!(add_months(day("2026-08-31"), 6), day("2027-02-28"));
        assert_eq!(add_months(day("2027-01-31"), 1), day("2027-02-28"));
        assert_eq!(add_months(day("2027-08-31"), 6), day("2028-02-29"));
    }

    #[test]
    fn deadlines_count_calendar_days() {
        assert_eq!(days_between(day("2026-03-03"), day("2026-04-02")), 30);
        assert_eq!(days_between(day("2025-12-01"), day("2026-02-10")), 71);
    }
}
