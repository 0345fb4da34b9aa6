//! A company's own rulebooks: files of the same form as the books that come
//! with the program, read with every fault named by line and field.
//!
//! The books of the store that is open are known to all who judge, so that
//! window and commands judge alike. A process works on one store.

use super::book::{DutyKind, Row, Rulebook, built_in};
use std::sync::{PoisonError, RwLock};

/// A company's rulebook with the text that it was read from.
#[derive(Debug, Clone)]
pub struct OwnBook {
    pub book: Rulebook,
    pub text: String,
}

/// Something wrong in a rulebook's file.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct BookFault {
    /// Line of the file, the first being 1; 0 speaks of the whole file.
    pub line: u64,
    /// The field meant, where it is one.
    pub field: String,
    pub message: String,
}

/// Books just made known; dropping it without [`Adopted::keep`] takes them back.
#[derive(Debug)]
pub struct Adopted {
    /// Each id with the book that was known under it.
    undo: Vec<(String, Option<&'static Rulebook>)>,
}

/// In order of adoption. Books live as long as the program: they are few, and
/// judgements hold on to them.
static OWN: RwLock<Vec<&'static Rulebook>> = RwLock::new(Vec::new());

/// Every rulebook that sites can be under: those that come with the program,
/// then the company's own.
pub fn known() -> Vec<&'static Rulebook> {
    built_in().iter().chain(OWN.read().unwrap_or_else(PoisonError::into_inner).iter().copied()).collect()
}

/// The rulebook with this id.
pub fn rulebook(id: &str) -> Option<&'static Rulebook> {
    let own = || OWN.read().unwrap_or_else(PoisonError::into_inner).iter().copied().find(|book| book.id == id);
    built_in().iter().find(|book| book.id == id).or_else(own)
}

/// Makes a company's books known. One of an id that is known already takes its place.
pub fn adopt(books: impl IntoIterator<Item = Rulebook>) -> Adopted {
    let mut own = OWN.write().unwrap_or_else(PoisonError::into_inner);
    let mut undo = Vec::new();
    for book in books {
        match own.iter_mut().find(|known| known.id == book.id) {
            Some(known) if known.version == book.version => {}
            Some(known) => {
                undo.push((book.id.clone(), Some(*known)));
                *known = Box::leak(Box::new(book));
            }
            None => {
                undo.push((book.id.clone(), None));
                own.push(Box::leak(Box::new(book)));
            }
        }
    }
    Adopted { undo }
}

impl Adopted {
    /// They stay known.
    pub fn keep(mut self) {
        self.undo.clear();
    }
}

impl Drop for Adopted {
    fn drop(&mut self) {
        if self.undo.is_empty() {
            return;
        }
        let mut own = OWN.write().unwrap_or_else(PoisonError::into_inner);
        for (id, before) in self.undo.drain(..).rev() {
            match (before, own.iter().position(|known| known.id == id)) {
                (Some(before), Some(place)) => own[place] = before,
                (None, Some(place)) => drop(own.remove(place)),
                (_, None) => {}
            }
        }
    }
}

/// Reads a company's rulebook. `version` is the fingerprint of its bytes.
///
/// # Errors
/// Every fault that can be told apart, with its line and field.
pub fn read_own(text: &str, version: &str) -> Result<OwnBook, Vec<BookFault>> {
    let book: Rulebook = toml::from_str(text).map_err(|error| vec![of_toml(text, &error)])?;
    let mut found: Vec<BookFault> = faults(&book)
        .into_iter()
        .map(|fault| BookFault { line: line_of(text, fault.row, fault.number), field: fault.field.to_owned(), message: fault.message })
        .collect();
    if built_in().iter().any(|known| known.id == book.id) {
        let message = format!("\u{201c}{}\u{201d} is a rulebook of the program; give your own another id", book.id);
        found.push(BookFault { line: line_of_key(text, "id"), field: "id".to_owned(), message });
    }
    if !found.is_empty() {
        found.sort_by_key(|fault| fault.line);
        return Err(found);
    }
    Ok(OwnBook { book: Rulebook { version: version.to_owned(), ..book }, text: text.to_owned() })
}

/// A fault in the nth row of a kind; without a kind in the book's head.
#[derive(Debug)]
pub(super) struct RowFault {
    row: &'static str,
    number: usize,
    field: &'static str,
    message: String,
}

/// What no type can say: ids, days in order, articles, and that each row has
/// the numbers that its kind reads.
pub(super) fn faults(book: &Rulebook) -> Vec<RowFault> {
    let mut faults = Vec::new();
    let head = |field, message: &str| RowFault { row: "", number: 0, field, message: message.to_owned() };
    let plain = |sign: char| sign.is_ascii_lowercase() || sign.is_ascii_digit() || sign == '-';
    if book.id.is_empty() || !book.id.chars().all(plain) {
        faults.push(head("id", "an id has small letters, digits and hyphens only: it is written in lists parted by blanks"));
    }
    if book.title.trim().is_empty() {
        faults.push(head("title", "papers and screens call the book by its title: write one"));
    }
    if book.scopes.is_empty() {
        faults.push(head("scope", "without a scope row the book takes no appliance"));
    }
    if !book.rates.is_empty() && book.triggers.is_empty() {
        faults.push(head("trigger", "a leak rate needs trigger rows to stand against"));
    }
    every_row(&book.retentions, &mut faults);
    every_row(&book.rates, &mut faults);
    every_row(&book.seasons, &mut faults);
    every_row(&book.scopes, &mut faults);
    every_row(&book.triggers, &mut faults);
    every_row(&book.bands, &mut faults);
    every_row(&book.exemptions, &mut faults);
    every_row(&book.duties, &mut faults);
    every_row(&book.detections, &mut faults);
    every_row(&book.service_bans, &mut faults);
    every_row(&book.installation_bans, &mut faults);
    every_row(&book.disposals, &mut faults);
    every_row(&book.releases, &mut faults);
    every_row(&book.practices, &mut faults);
    for (index, row) in book.rates.iter().enumerate().filter(|(_, row)| row.longest_days < 1) {
        let message = format!("{} days are no period; write at least 1", row.longest_days);
        faults.push(RowFault { row: "rate", number: index, field: "longest_days", message });
    }
    for (index, row) in book.bands.iter().enumerate() {
        if row.months == 0 || row.months_with_detection == Some(0) {
            let message = "an interval has at least 1 month".to_owned();
            faults.push(RowFault { row: "band", number: index, field: "months", message });
        }
    }
    for (index, row) in book.duties.iter().enumerate() {
        let mut lacks = |field, lacks: bool| {
            if lacks {
                let message = format!("a duty \u{201c}{}\u{201d} needs {field}", row.duty.name());
                faults.push(RowFault { row: "duty", number: index, field, message });
            }
        };
        match row.duty {
            DutyKind::Repair | DutyKind::InitialVerification | DutyKind::FollowUpVerification => lacks("days", row.days.is_none()),
            DutyKind::Plan => {
                lacks("days", row.days.is_none());
                lacks("months", row.months.is_none());
            }
            DutyKind::LeakInspection if row.clean_periods.is_some() => lacks("months", row.months.is_none_or(|months| months == 0)),
            DutyKind::LeakInspection => {
                lacks("clean_months", row.clean_months.is_none_or(|months| months == 0));
                lacks("months", !row.calendar_year && row.months.is_none_or(|months| months == 0));
            }
            DutyKind::ChronicLeakReport => {
                lacks("percent", row.percent.is_none());
                lacks("due_in_next_year", row.due_in_next_year.is_none());
            }
            DutyKind::LeakCheck => lacks("a band row", book.bands.is_empty()),
            DutyKind::ReCheck | DutyKind::DetectionSystemCheck => lacks("months", row.months.is_none()),
            DutyKind::RepairOfFoundLeak | DutyKind::DetermineFullCharge => {}
        }
        if row.days.is_some_and(|days| !(0..=MOST_DAYS).contains(&days)) {
            let message = format!("days are 0 to {MOST_DAYS}");
            faults.push(RowFault { row: "duty", number: index, field: "days", message });
        }
    }
    faults
}

/// No duty is due later than this; it keeps days within the calendar.
const MOST_DAYS: i64 = 36_500;

fn every_row<R: Row>(rows: &[R], faults: &mut Vec<RowFault>) {
    for (number, row) in rows.iter().enumerate() {
        if let (from, Some(to)) = row.days()
            && to < from
        {
            let message = format!("ends on {to}, before it begins on {from}");
            faults.push(RowFault { row: R::NAME, number, field: "to", message });
        }
        if row.source().trim().is_empty() {
            let message = "every row names where it stands, as an article or a section".to_owned();
            faults.push(RowFault { row: R::NAME, number, field: "source", message });
        }
    }
}

/// What the parser says, in our words: the line, and the field that is written there.
fn of_toml(text: &str, error: &toml::de::Error) -> BookFault {
    let start = error.span().map_or(0, |span| span.start.min(text.len()));
    let line = text[..start].matches('\n').count();
    let written = text.lines().nth(line).unwrap_or_default();
    let field = match written.split_once('=') {
        Some((key, _)) => key.trim().to_owned(),
        // A row that lacks a field is pointed at by its head.
        None => backticked(error.message()).unwrap_or_else(|| written.trim().trim_matches(['[', ']']).to_owned()),
    };
    let line = if error.span().is_some() { u64::try_from(line + 1).unwrap_or(0) } else { 0 };
    BookFault { line, field, message: error.message().trim().replace('\n', "; ") }
}

fn backticked(message: &str) -> Option<String> {
    message.split('`').nth(1).map(str::to_owned)
}

/// The line on which the nth row of a kind begins; of the head, its first line.
fn line_of(text: &str, row: &str, number: usize) -> u64 {
    let head = format!("[[{row}]]");
    let mut heads = text.lines().enumerate().filter(|(_, line)| line.trim().starts_with(&head));
    heads.nth(number).map_or(1, |(index, _)| u64::try_from(index + 1).unwrap_or(1))
}

fn line_of_key(text: &str, key: &str) -> u64 {
    let found = text.lines().position(|line| line.split('=').next().is_some_and(|before| before.trim() == key));
    found.map_or(1, |index| u64::try_from(index + 1).unwrap_or(1))
}

#[cfg(test)]
mod tests {
    use super::*;

    const HOUSE: &str = include_str!("../../packaging/house-rules.toml");

    fn fault(from: &str, to: &str) -> BookFault {
        let changed = HOUSE.replacen(from, to, 1);
        assert_ne!(changed, HOUSE, "{from} is not in the example");
        read_own(&changed, "v").unwrap_err().remove(0)
    }

    fn line(text: &str) -> u64 {
        u64::try_from(HOUSE.lines().position(|line| line == text).unwrap() + 1).unwrap()
    }

    #[test]
    fn the_example_reads() {
        let own = read_own(HOUSE, "v").unwrap();
        assert_eq!((own.book.id.as_str(), own.book.version.as_str(), own.text.as_str()), ("house-rules", "v", HOUSE));
    }

    #[test]
    fn faults_name_line_and_field() {
        let unknown = fault("months = 3", "munths = 3");
        assert_eq!((unknown.line, unknown.field.as_str()), (line("months = 3"), "munths"));
        let word = fault("basis = \"kg\"", "basis = \"stone\"");
        assert_eq!((word.line, word.field.as_str()), (line("basis = \"kg\""), "basis"));
        let day = fault("from = \"2026-01-01\"", "from = \"2026-13-01\"");
        assert_eq!((day.line, day.field.as_str()), (line("from = \"2026-01-01\""), "from"));
        assert!(day.message.contains("2026-13-01"), "{}", day.message);
        let missing = fault("source = \"House rules, section 2\"\n", "");
        assert_eq!(missing.field, "source");
        let syntax = fault("id = \"house-rules\"", "id = house rules");
        assert_eq!(syntax.field, "id");
        let taken = fault("id = \"house-rules\"", "id = \"us-82f\"");
        assert_eq!((taken.line, taken.field.as_str()), (line("id = \"house-rules\""), "id"));
    }

    #[test]
    fn a_row_lacks_nothing_that_its_kind_reads() {
        let lacking = fault("percent = \"50\"\n", "");
        assert_eq!(lacking.field, "percent");
        assert!(lacking.message.contains("chronic leak report"), "{}", lacking.message);
        let backwards = fault("from = \"2026-01-01\"", "from = \"2026-01-01\"\nto = \"2025-01-01\"");
        assert_eq!(backwards.field, "to");
    }

    #[test]
    fn what_was_adopted_and_not_kept_is_forgotten() {
        let book = |id: &str| Rulebook { id: id.to_owned(), ..read_own(HOUSE, "1").unwrap().book };
        let adopted = adopt([book("trial-a")]);
        assert!(rulebook("trial-a").is_some());
        drop(adopted);
        assert!(rulebook("trial-a").is_none());
    }
}
