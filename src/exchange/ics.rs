//! Calendars as iCalendar text (RFC 5545): events that fill a day.
//!
//! The text is the same for the same calendar: nothing here knows a clock.

use chrono::NaiveDate;
use uuid::Uuid;

/// What a content line holds at most, its end not counted (RFC 5545, 3.1).
const LINE_OCTETS: usize = 75;

/// A calendar as it is written out.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Calendar {
    /// The program that wrote it, with its version.
    pub product: String,
    /// The day as of which it says what it says.
    pub as_of: NaiveDate,
    /// Grows with every change of what the events are made of. A program that
    /// holds an event already takes the one with the higher number.
    pub sequence: u64,
    pub events: Vec<Event>,
}

/// One event.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Event {
    /// The same in every export: an import updates the event and adds none.
    pub id: Uuid,
    pub day: NaiveDate,
    pub summary: String,
    pub description: String,
    pub location: String,
    pub category: String,
    /// No longer to be done: calendars strike it out or drop it.
    pub cancelled: bool,
}

impl Calendar {
    /// The file's text, each line ended by CR LF.
    pub fn text(&self) -> String {
        let mut text = Lines(String::new());
        text.line("BEGIN", "VCALENDAR");
        text.line("VERSION", "2.0");
        text.line("PRODID", &escaped(&format!("-//Bubblepoint//{}//EN", self.product)));
        text.line("CALSCALE", "GREGORIAN");
        for event in &self.events {
            text.line("BEGIN", "VEVENT");
            text.line("UID", &event.id.to_string());
            text.line("DTSTAMP", &format!("{}T000000Z", date(self.as_of)));
            text.line("SEQUENCE", &self.sequence.to_string());
            text.line("DTSTART;VALUE=DATE", &date(event.day));
            // The end is the first day after the event.
            text.line("DTEND;VALUE=DATE", &date(event.day.succ_opt().unwrap_or(event.day)));
            text.line("SUMMARY", &escaped(&event.summary));
            text.line("DESCRIPTION", &escaped(&event.description));
            text.line("LOCATION", &escaped(&event.location));
            text.line("CATEGORIES", &escaped(&event.category));
            text.line("STATUS", if event.cancelled { "CANCELLED" } else { "CONFIRMED" });
            // A duty does not keep anybody busy for the whole day.
            text.line("TRANSP", "TRANSPARENT");
            text.line("END", "VEVENT");
        }
        text.line("END", "VCALENDAR");
        text.0
    }
}

fn date(day: NaiveDate) -> String {
    day.format("%Y%m%d").to_string()
}

/// A TEXT value (3.3.11): backslash, semicolon, comma and line break are
/// written with a backslash; other control characters have no place in it.
fn escaped(text: &str) -> String {
    let mut escaped = String::with_capacity(text.len());
    for sign in text.replace("\r\n", "\n").chars() {
        match sign {
            '\\' | ';' | ',' => escaped.extend(['\\', sign]),
            '\n' => escaped.push_str("\\n"),
            '\t' => escaped.push('\t'),
            other if other.is_control() => {}
            other => escaped.push(other),
        }
    }
    escaped
}

/// Content lines, folded.
struct Lines(String);

impl Lines {
    /// Folded so that no line is longer than 75 octets and no character is cut;
    /// the blank that begins each further line counts.
    fn line(&mut self, name: &str, value: &str) {
        let mut octets = 0;
        for sign in name.chars().chain([':']).chain(value.chars()) {
            if octets + sign.len_utf8() > LINE_OCTETS {
                self.0.push_str("\r\n ");
                octets = 1;
            }
            self.0.push(sign);
            octets += sign.len_utf8();
        }
        self.0.push_str("\r\n");
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn calendar(summary: &str) -> String {
        let day: NaiveDate = "2026-12-31".parse().unwrap();
        let event = Event {
            id: Uuid::from_u128(7),
            day,
            summary: summary.to_owned(),
            description: String::new(),
            location: String::new(),
            category: String::new(),
            cancelled: false,
        };
        Calendar { product: "bubblepoint 1".to_owned(), as_of: day, sequence: 3, events: vec![event] }.text()
    }

    /// RFC 5545, 3.1: unfolding takes out each line break that a blank follows.
    fn unfolded(text: &str) -> Vec<String> {
        text.replace("\r\n ", "").split_terminator("\r\n").map(str::to_owned).collect()
    }

    #[test]
    fn an_event_fills_its_day() {
        let lines = unfolded(&calendar("Repair"));
        assert_eq!(lines[..4], ["BEGIN:VCALENDAR", "VERSION:2.0", "PRODID:-//Bubblepoint//bubblepoint 1//EN", "CALSCALE:GREGORIAN"]);
        for expected in [
            "UID:00000000-0000-0000-0000-000000000007",
            "DTSTAMP:20261231T000000Z",
            "SEQUENCE:3",
            "DTSTART;VALUE=DATE:20261231",
            "DTEND;VALUE=DATE:20270101",
            "SUMMARY:Repair",
            "STATUS:CONFIRMED",
        ] {
            assert!(lines.iter().any(|line| line == expected), "{expected} in {lines:#?}");
        }
    }

    #[test]
    fn text_is_escaped() {
        let lines = unfolded(&calendar("R-1, north; back\\slash\r\nsecond line\u{7}"));
        assert!(lines.contains(&"SUMMARY:R-1\\, north\\; back\\\\slash\\nsecond line".to_owned()), "{lines:#?}");
    }

    #[test]
    fn long_lines_are_folded_between_characters() {
        let long = "Kühlhaus \u{2014} ".repeat(30);
        let text = calendar(&long);
        assert!(text.ends_with("END:VCALENDAR\r\n"));
        assert!(!text.replace("\r\n", "").contains(['\r', '\n']), "every line ends with CR LF");
        for line in text.split_terminator("\r\n") {
            assert!(line.len() <= 75, "{} octets: {line}", line.len());
        }
        assert!(text.split_terminator("\r\n").any(|line| line.len() >= 73), "lines are filled before they are folded");
        assert!(unfolded(&text).contains(&format!("SUMMARY:{long}")));
    }
}
