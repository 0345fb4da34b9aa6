//! The visit is closed: its service record, opened and handed over.

use crate::app::{AppError, Printed, file_away};
use crate::ledger::{Moment, VisitId};
use crate::record::Fingerprint;
use crate::store::AFTER_CLOSING;
use crate::view::desk::{Desk, Page};
use crate::view::shown::{Choice, Fact, Message, Ready};
use crate::view::words::captions;
use crate::view::{format, words};
use serde::{Deserialize, Serialize};
use std::path::{Path, PathBuf};

const READ_ON_SCREEN: &str = "read on screen";
const WAYS: [&str; 4] = ["printed", "as a file", "by mail", READ_ON_SCREEN];

/// The key of what is being typed about a hand-over.
fn draft_key() -> String {
    format!("{AFTER_CLOSING}hand-over")
}

/// What is being typed about a hand-over.
#[derive(Debug, Default, Serialize, Deserialize)]
struct Typed {
    to_whom: String,
    way: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct State {
    pub visit: VisitId,
    /// Where the record lies; `None` where it could not be written.
    pub file: Option<PathBuf>,
    pub to_whom: String,
    pub way: String,
    pub handing_over: bool,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    OpenRecord,
    OpenFolder,
    Way(String),
    ToWhom(String),
    HandOver,
    Done,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub site: String,
    pub closed: String,
    pub file: String,
    pub folder: String,
    pub facts: Vec<Fact>,
    pub handed_over: Vec<Fact>,
    pub handing_over: bool,
    pub to_whom: String,
    pub ways: Vec<Choice>,
    pub way: String,
    pub ready: Ready,
}

impl Desk {
    /// Shows a closed visit and sees that its record lies on disk.
    ///
    /// # Errors
    /// Unknown visit; the store's own. Where only the paper fails, that is told and the page opens.
    pub fn show_closed(&mut self, visit: VisitId) -> Result<(), AppError> {
        let file = match self.print(visit) {
            Ok(file) => Some(file),
            Err(cause) => {
                self.say(Message::grave(words::record_not_printed(&words::sentence(&cause))));
                None
            }
        };
        let draft = self.app.draft(visit, &draft_key())?;
        let typed = draft.and_then(|draft| serde_json::from_str(&draft.body).ok());
        let Typed { to_whom, way } = typed.unwrap_or_else(|| Typed { way: WAYS[1].to_owned(), ..Typed::default() });
        self.closed = Some(State { visit, file, handing_over: !to_whom.is_empty(), to_whom, way });
        self.changed();
        self.go(Page::Closed);
        Ok(())
    }

    /// Prints the record of a closed visit to its place under the documents.
    /// The same record gives the same bytes.
    ///
    /// # Errors
    /// A sentence that says what could not be done and where.
    pub fn print(&self, visit: VisitId) -> Result<PathBuf, String> {
        let printed = self.app.print_record(visit, None).map_err(|e| e.to_string())?;
        self.file(visit, &printed)
    }

    fn file(&self, visit: VisitId, printed: &Printed) -> Result<PathBuf, String> {
        let folder = self.documents().join(self.app.filed_in(visit).map_err(|e| e.to_string())?);
        let path = folder.join(&printed.file_name);
        file_away(&path, &printed.bytes).map_err(|e| format!("{}: {e}", path.display()))?;
        Ok(path)
    }

    pub(in crate::view) fn update_closed(&mut self, msg: Msg) -> Result<(), AppError> {
        let Some(state) = &mut self.closed else { return Ok(()) };
        match msg {
            Msg::Way(way) => {
                state.way = way;
                return self.keep_hand_over();
            }
            Msg::ToWhom(text) => {
                state.to_whom = text;
                state.handing_over = true;
                return self.keep_hand_over();
            }
            Msg::OpenRecord => self.open_paper(false),
            Msg::OpenFolder => self.open_paper(true),
            Msg::HandOver => {
                let (visit, way, to_whom) = (state.visit, state.way.clone(), state.to_whom.trim().to_owned());
                self.hand_over(visit, &to_whom, &way)?;
                self.app.clear_draft(visit, &draft_key())?;
                if let Some(state) = &mut self.closed {
                    state.to_whom.clear();
                    state.handing_over = false;
                }
            }
            Msg::Done => {
                self.closed = None;
                self.start_page()?;
            }
        }
        Ok(())
    }

    /// The filed original is what is handed over first; whoever gets the record
    /// on paper or as a file after that gets a copy of its own, which says so.
    fn hand_over(&mut self, visit: VisitId, to_whom: &str, way: &str) -> Result<(), AppError> {
        let again = way != READ_ON_SCREEN && !self.app.store().hand_overs(visit)?.is_empty();
        self.app.hand_over(visit, &words::handed_over_to(to_whom, way))?;
        let printed = if again {
            let copy = self.app.further_copy(visit)?;
            self.app.print_copy(visit, copy, None).map_err(|e| e.to_string()).and_then(|printed| self.file(visit, &printed))
        } else {
            // The original says to whom it was handed over.
            self.print(visit)
        };
        match printed {
            Ok(file) => {
                if let Some(state) = &mut self.closed {
                    state.file = Some(file);
                }
            }
            Err(cause) => self.say(Message::grave(words::record_not_printed(&words::sentence(&cause)))),
        }
        Ok(())
    }

    /// Keeps what is being typed about the hand-over, at once.
    fn keep_hand_over(&self) -> Result<(), AppError> {
        let Some(state) = &self.closed else { return Ok(()) };
        let typed = Typed { to_whom: state.to_whom.clone(), way: state.way.clone() };
        let Ok(body) = serde_json::to_string(&typed) else { return Ok(()) };
        self.app.save_draft(state.visit, None, &draft_key(), &body)
    }

    /// Hands the record, or its folder, to the platform; where that fails the path is told.
    fn open_paper(&mut self, folder: bool) {
        let Some(state) = &self.closed else { return };
        let printed = match &state.file {
            Some(file) if file.exists() => Ok(file.clone()),
            // It was moved or never written: print it again.
            _ => self.print(state.visit),
        };
        match printed {
            Ok(file) => {
                let shown: &Path = if folder { file.parent().unwrap_or(&file) } else { &file };
                if let Err(cause) = (self.options.open)(shown) {
                    self.say(Message::told(words::cannot_open(&shown.display().to_string(), &cause)));
                }
                if let Some(state) = &mut self.closed {
                    state.file = Some(file);
                }
            }
            Err(cause) => self.say(Message::grave(words::record_not_printed(&words::sentence(&cause)))),
        }
    }

    /// The page of the closed visit.
    ///
    /// # Errors
    /// No closed visit is shown; the store's own.
    pub fn closed_shown(&self) -> Result<Shown, AppError> {
        let state = self.closed.as_ref().ok_or(AppError::Unknown { what: "closed visit" })?;
        let store = self.app.store();
        let visit = store.visit(state.visit)?.ok_or(AppError::Unknown { what: "visit" })?;
        let today = self.app.today();
        let closing = visit.closing.as_ref();
        let closed =
            closing.map(|closing| format::moment(Moment { date: closing.date, minute: Some(closing.minute) }, today)).unwrap_or_default();
        let counterpart = closing.map(|closing| words::counterpart(&closing.counterpart));
        let mut facts = Vec::new();
        if let Some(full) = visit.fingerprint.clone() {
            facts.push(Fact::new(captions::FINGERPRINT, Fingerprint { full }.short()));
        }
        if let Some(closing) = closing {
            facts.push(Fact::new(captions::TECHNICIAN, words::signed(&closing.technician.name)));
        }
        facts.push(Fact::new(captions::REPRESENTATIVE, counterpart.unwrap_or_default()));
        let handed_over = store
            .hand_overs(state.visit)?
            .into_iter()
            .map(|hand_over| {
                let at = Moment { date: hand_over.date, minute: Some(hand_over.minute) };
                Fact::new(words::handed_over_at(&format::moment(at, today)), hand_over.told)
            })
            .collect();
        let name = |path: Option<&std::ffi::OsStr>| path.map(|name| name.to_string_lossy().into_owned()).unwrap_or_default();
        let file = state.file.as_deref();
        Ok(Shown {
            site: self.site_name(visit.site),
            closed: words::closed_at(&closed),
            file: name(file.and_then(Path::file_name)),
            folder: file.and_then(Path::parent).map(|folder| folder.display().to_string()).unwrap_or_default(),
            facts,
            handed_over,
            handing_over: state.handing_over,
            to_whom: state.to_whom.clone(),
            ways: WAYS.map(Choice::word).to_vec(),
            way: state.way.clone(),
            ready: if state.to_whom.trim().is_empty() { Ready::not(words::to_whom_missing()) } else { Ready::yes() },
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::app::{Recognised, demonstration_in_memory};
    use crate::ledger::VisitState;
    use crate::store::VisitFilter;
    use crate::view::{DeskOptions, Msg as DeskMsg};

    #[test]
    fn the_second_who_gets_the_record_gets_a_copy_of_its_own() {
        let folder = tempfile::tempdir().unwrap();
        let app = demonstration_in_memory("2026-12-01".parse().unwrap(), chrono_tz::UTC).unwrap();
        let closed = VisitFilter { state: Some(VisitState::Closed), ..VisitFilter::default() };
        let not_yet = |visit: &crate::ledger::Visit| app.store().hand_overs(visit.id).unwrap().is_empty();
        let visit = app.store().visits(&closed).unwrap().into_iter().find(not_yet).unwrap().id;
        let options = DeskOptions { documents: folder.path().to_owned(), open: Box::new(|_| Ok(())) };
        let mut desk = Desk::new(app, options).unwrap();
        desk.show_closed(visit).unwrap();
        let mut hand_over = |way: &str| {
            desk.update(DeskMsg::Closed(Msg::ToWhom("Otto Prins".to_owned())));
            desk.update(DeskMsg::Closed(Msg::Way(way.to_owned())));
            desk.update(DeskMsg::Closed(Msg::HandOver));
            let file = desk.closed.as_ref().and_then(|state| state.file.clone()).unwrap();
            let Recognised::Print(print) = desk.app.recognise(&std::fs::read(&file).unwrap()).unwrap() else { panic!("{file:?}") };
            assert_eq!(print.then, print.now, "{way}: the paper says to whom it was handed over");
            (print.copy, file.to_string_lossy().ends_with(&format!(" copy {}.pdf", print.copy)))
        };
        assert_eq!(hand_over("printed"), (1, false));
        assert_eq!(hand_over("by mail"), (2, true));
        assert_eq!(hand_over(READ_ON_SCREEN), (1, false));
        assert_eq!(hand_over("as a file"), (3, true));
    }
}
