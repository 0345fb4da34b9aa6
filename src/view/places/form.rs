//! What is being typed in a form: texts by field, switches, and what is wrong.

use crate::app::{App, AppError};
use serde::{Deserialize, Serialize};
use std::collections::{BTreeMap, BTreeSet};

/// Fields have the names that the screens give them.
#[derive(Debug, Clone, Default, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct Form {
    /// Something known is changed; otherwise something is added.
    pub changing: bool,
    /// The facts beyond the first few are shown.
    pub more: bool,
    /// What was being typed when the form was left is back in it.
    #[serde(skip)]
    pub taken_up_again: bool,
    texts: BTreeMap<String, String>,
    #[serde(skip)]
    errors: BTreeMap<String, String>,
    on: BTreeSet<String>,
}

impl Form {
    /// A form that changes something known.
    pub fn of_known() -> Self {
        Self { changing: true, ..Self::default() }
    }

    pub fn text(&self, field: &str) -> &str {
        self.texts.get(field).map_or("", String::as_str)
    }

    /// Without the spaces around it.
    pub fn trimmed(&self, field: &str) -> String {
        self.text(field).trim().to_owned()
    }

    /// What is typed takes away what was said to be wrong with it.
    pub fn set(&mut self, field: &str, text: impl Into<String>) {
        self.errors.remove(field);
        self.texts.insert(field.to_owned(), text.into());
    }

    pub fn with(mut self, field: &str, text: impl Into<String>) -> Self {
        self.set(field, text);
        self
    }

    pub fn is_on(&self, field: &str) -> bool {
        self.on.contains(field)
    }

    pub fn switch(&mut self, field: &str, on: bool) {
        self.errors.remove(field);
        if on {
            self.on.insert(field.to_owned())
        } else {
            self.on.remove(field)
        };
    }

    pub fn wrong(&mut self, field: &str, sentence: impl Into<String>) {
        self.errors.insert(field.to_owned(), sentence.into());
    }

    pub fn error(&self, field: &str) -> &str {
        self.errors.get(field).map_or("", String::as_str)
    }

    pub fn has_errors(&self) -> bool {
        !self.errors.is_empty()
    }

    pub fn clear_errors(&mut self) {
        self.errors.clear();
    }

    /// What was being typed in the form of this name, or `fresh`.
    ///
    /// # Errors
    /// The store's own.
    pub fn kept(app: &App, name: &str, fresh: Self) -> Result<Self, AppError> {
        // What this program cannot read is left aside; it is no fact yet.
        let kept: Option<Self> = app.kept_form(name)?.and_then(|body| serde_json::from_str(&body).ok());
        Ok(kept.map_or(fresh, |form| Self { taken_up_again: true, ..form }))
    }

    /// Keeps what is being typed, where something is added: a change begins from what is known.
    ///
    /// # Errors
    /// The store's own.
    pub fn keep(&self, app: &App, name: &str) -> Result<(), AppError> {
        match serde_json::to_string(self) {
            Ok(body) if !self.changing => app.keep_form(name, &body),
            // Forms are plain words: they always can be written.
            _ => Ok(()),
        }
    }

    /// Keeps what parses; else says what is wrong at the field.
    pub fn take<T>(&mut self, field: &str, read: Result<T, String>) -> Option<T> {
        read.map_err(|sentence| self.wrong(field, sentence)).ok()
    }
}

/// A day as `2026-03-31` or `31 Mar 2026`; `None` where nothing was typed.
///
/// # Errors
/// A sentence that says how a day is written.
pub fn day(text: &str) -> Result<Option<chrono::NaiveDate>, String> {
    let text = text.trim();
    if text.is_empty() {
        return Ok(None);
    }
    ["%Y-%m-%d", "%d %b %Y", "%d %B %Y"]
        .into_iter()
        .find_map(|pattern| chrono::NaiveDate::parse_from_str(text, pattern).ok())
        .map(Some)
        .ok_or_else(|| crate::view::words::office::not_a_day(text))
}

/// As [`day`]; a month alone (`2029-06`) means its last day, as stamps on cylinders do.
///
/// # Errors
/// As [`day`].
pub fn last_day(text: &str) -> Result<Option<chrono::NaiveDate>, String> {
    match chrono::NaiveDate::parse_from_str(&format!("{}-01", text.trim()), "%Y-%m-%d") {
        Ok(first) => Ok(crate::quantity::add_months(first, 1).pred_opt()),
        Err(_) => day(text),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn days_are_read_in_full_and_as_a_month() {
        let is = |text: &str| text.parse().ok();
        assert_eq!(day(" 2026-03-31 "), Ok(is("2026-03-31")));
        assert_eq!(day("31 Mar 2026"), Ok(is("2026-03-31")));
        assert_eq!(day(""), Ok(None));
        assert!(day("31.03.").unwrap_err().contains("31.03."));
        assert_eq!(last_day("2028-02"), Ok(is("2028-02-29")));
        assert_eq!(last_day("2028-02-10"), Ok(is("2028-02-10")));
        assert!(last_day("2028-13").is_err());
    }

    #[test]
    fn typing_takes_the_error_away() {
        let mut form = Form::default();
        form.wrong("tare", "The tare is more than nothing.");
        assert!(form.has_errors());
        form.set("tare", "5");
        assert_eq!((form.error("tare"), form.text("tare"), form.has_errors()), ("", "5", false));
    }
}
