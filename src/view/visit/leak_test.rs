//! Leak test: how, with what, where, and what was found. Each place found
//! becomes an open leak.

use super::{Panel, id};
use crate::app::{AppError, NewEntry, RepairInput, Setting, TestInput};
use crate::ledger::{ApplianceId, InstrumentId, InstrumentKind, LeakMethod, LeakPlace, Scope, TestKind, TestResult};
use crate::view::desk::Desk;
use crate::view::shown::{Choice, Line, Ready};
use crate::view::{format, words};
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

/// States of a leak, the first while nothing was done about it.
const STATES: [&str; 5] = ["open", "isolated", "section shut", "repaired temporarily", REPAIRED];
/// Mended on the spot: a repair of its own, saved with the test.
const REPAIRED: &str = "repaired";

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub inspection: bool,
    pub method: String,
    pub instrument: Option<InstrumentId>,
    pub part: bool,
    pub parts: String,
    pub found: bool,
    pub places: Vec<Found>,
    pub place: String,
    pub place_state: String,
    /// What was done about a leak that was repaired on the spot.
    #[serde(default)]
    pub done: String,
}

/// A leak on the list of the test.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Found {
    pub place: String,
    pub state: String,
    #[serde(default)]
    pub done: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Kind(String),
    Method(String),
    Instrument(String),
    Scope(String),
    Result(String),
    PlaceState(String),
    /// `parts`, `place` or `done`.
    Edited(String, String),
    AddPlace,
    TakePlaceBack(String),
    Save,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub appliance: String,
    pub kinds: Vec<Choice>,
    pub kind: String,
    pub methods: Vec<Choice>,
    pub method: String,
    pub method_words: String,
    pub instruments: Vec<Choice>,
    pub instrument: String,
    pub scope: String,
    pub parts: String,
    pub result: String,
    pub places: Vec<Line>,
    pub place: String,
    pub place_error: String,
    pub place_states: Vec<Choice>,
    pub place_state: String,
    pub asks_done: bool,
    pub done: String,
    pub ready: Ready,
}

impl Form {
    /// With the detector that is used with the first method.
    fn new(appliance: ApplianceId, detector: Option<InstrumentId>) -> Self {
        Self {
            appliance,
            inspection: true,
            method: LeakMethod::ALL[0].name.to_owned(),
            instrument: detector,
            part: false,
            parts: String::new(),
            found: false,
            places: Vec::new(),
            place: String::new(),
            place_state: STATES[0].to_owned(),
            done: String::new(),
        }
    }

    fn is_direct(&self) -> bool {
        LeakMethod::is_direct(&self.method) != Some(false)
    }

    /// Another method: a detector is named only where one is used.
    fn take_method(&mut self, method: String, detector: Option<InstrumentId>) {
        self.instrument = detector.filter(|_| LeakMethod::find(&method).is_some_and(|method| method.detector));
        self.method = method;
    }

    fn kind(&self) -> TestKind {
        if self.inspection && self.is_direct() { TestKind::LeakInspection } else { TestKind::LeakTest }
    }

    fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Kind(key) => self.inspection = key == TestKind::LeakInspection.name(),
            Msg::Instrument(key) => self.instrument = id(&key, InstrumentId),
            Msg::Scope(key) => self.part = key == "part",
            Msg::Result(key) => self.found = key == TestResult::LeakFound.name(),
            Msg::PlaceState(key) => self.place_state = key,
            Msg::Edited(field, text) if field == "parts" => self.parts = text,
            Msg::Edited(field, text) if field == "done" => self.done = text,
            Msg::Edited(_, text) => self.place = text,
            Msg::AddPlace => self.add_place(),
            Msg::TakePlaceBack(key) => {
                if let Ok(index) = key.parse::<usize>()
                    && index < self.places.len()
                {
                    self.places.remove(index);
                }
            }
            Msg::Method(_) | Msg::Save => {}
        }
    }

    fn is_known(&self) -> bool {
        let place = self.place.trim().to_lowercase();
        self.places.iter().any(|known| known.place.to_lowercase() == place)
    }

    fn add_place(&mut self) {
        if self.place.trim().is_empty() || self.is_known() || self.lacks_done() {
            return;
        }
        // An open leak has no further state.
        let state = if self.place_state == STATES[0] { String::new() } else { self.place_state.clone() };
        let done = if self.asks_done() { self.done.trim().to_owned() } else { String::new() };
        self.places.push(Found { place: self.place.trim().to_owned(), state, done });
        self.place.clear();
        self.done.clear();
        STATES[0].clone_into(&mut self.place_state);
    }

    fn asks_done(&self) -> bool {
        self.place_state == REPAIRED
    }

    fn lacks_done(&self) -> bool {
        self.asks_done() && self.done.trim().is_empty()
    }

    /// The test and, for each leak that was mended on the spot, its repair.
    fn entries(&self, common: &crate::app::Common) -> Vec<NewEntry> {
        let found: &[Found] = if self.found { &self.places } else { &[] };
        let leak = |found: &Found| {
            let state = if found.state == REPAIRED { String::new() } else { found.state.clone() };
            LeakPlace { place: found.place.clone(), state }
        };
        let test = TestInput {
            common: common.clone(),
            kind: self.kind(),
            result: Some(if self.found { TestResult::LeakFound } else { TestResult::NoLeak }),
            scope: Some(if self.part { Scope::Part } else { Scope::Whole }),
            method: self.method.clone(),
            instrument: self.instrument,
            parts: if self.part { self.parts.clone() } else { String::new() },
            place: String::new(),
            leaks: found.iter().map(leak).collect(),
            repair: None,
            partial: false,
            running_hours: String::new(),
        };
        let repair = |found: &Found| RepairInput {
            common: common.clone(),
            place: found.place.clone(),
            done: found.done.clone(),
            ..RepairInput::default()
        };
        let repaired = found.iter().filter(|found| found.state == REPAIRED).map(|found| NewEntry::Repair(repair(found)));
        [NewEntry::Test(test)].into_iter().chain(repaired).collect()
    }

    fn ready(&self) -> Ready {
        if self.found && !self.place.trim().is_empty() && self.lacks_done() {
            Ready::not(words::say_what_was_done())
        } else if self.found && self.places.is_empty() && self.place.trim().is_empty() {
            Ready::not(words::add_the_place())
        } else if self.part && self.parts.trim().is_empty() {
            Ready::not(words::say_the_parts())
        } else {
            Ready::yes()
        }
    }
}

impl Desk {
    pub(super) fn begin_leak_test(&mut self) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        if self.work()?.leak_test.as_ref().is_none_or(|form| form.appliance != appliance) {
            let form = Form::new(appliance, self.usual_detector()?);
            self.work_mut()?.leak_test = Some(form);
        }
        self.open_panel(Panel::LeakTest)
    }

    /// The detector that was used last, else the first one.
    pub(super) fn usual_detector(&self) -> Result<Option<InstrumentId>, AppError> {
        let last = self.app.setting(Setting::Detector)?.and_then(|key| id(&key, InstrumentId));
        let mut detectors = self.registers.instruments.iter().filter(|instrument| instrument.kind == InstrumentKind::Detector);
        Ok(last.filter(|id| self.registers.instrument(*id).is_some()).or_else(|| detectors.next().map(|detector| detector.id)))
    }

    /// Detectors to choose from; the last choice is none at all.
    pub(super) fn detectors(&self, today: NaiveDate) -> Vec<Choice> {
        let mut detectors = self.instruments(InstrumentKind::Detector, today);
        if !detectors.is_empty() {
            detectors.push(Choice::new("", words::no_detector(), ""));
        }
        detectors
    }

    pub(in crate::view) fn update_leak_test(&mut self, msg: Msg) -> Result<(), AppError> {
        if msg == Msg::Save {
            return self.save_leak_test();
        }
        let detector = self.usual_detector()?;
        if let Some(form) = &mut self.work_mut()?.leak_test {
            match msg {
                Msg::Method(key) => form.take_method(key, detector),
                other => form.update(other),
            }
        }
        self.work()?.leak_test.as_ref().map_or(Ok(()), |form| self.keep(Panel::LeakTest, form))
    }

    fn save_leak_test(&mut self) -> Result<(), AppError> {
        let unknown = || AppError::Unknown { what: "leak test being entered" };
        let mut form = self.work()?.leak_test.clone().ok_or_else(unknown)?;
        // A place that is typed and not yet on the list was found all the same.
        form.add_place();
        let (visit, common) = (self.work()?.visit.id, self.work()?.common(Panel::LeakTest, form.appliance, "")?);
        self.app.enter_all(visit, form.appliance, &form.entries(&common))?;
        if let Some(instrument) = form.instrument {
            self.app.set(Setting::Detector, &instrument.to_string())?;
        }
        self.work_mut()?.leak_test = None;
        self.entered(Panel::LeakTest, form.appliance)
    }

    /// The leak test page.
    ///
    /// # Errors
    /// No visit is open, no leak test is being entered; the store's own.
    pub fn leak_test_shown(&self) -> Result<Shown, AppError> {
        let form = self.work()?.leak_test.as_ref().ok_or(AppError::Unknown { what: "leak test being entered" })?;
        let place = |(index, leak): (usize, &Found)| Line {
            key: index.to_string(),
            name: leak.place.clone(),
            facts: format::commas([words::leak_state(&leak.state).as_str(), &leak.done]),
            ..Line::default()
        };
        let inspection = TestKind::LeakInspection.name();
        let kinds = [inspection, TestKind::LeakTest.name()].map(|kind| Choice {
            refused: if kind == inspection && !form.is_direct() { words::indirect() } else { String::new() },
            ..Choice::word(kind)
        });
        Ok(Shown {
            appliance: self.appliance_words()?,
            kinds: kinds.to_vec(),
            kind: form.kind().name().to_owned(),
            methods: LeakMethod::ALL.iter().map(|method| Choice::word(method.name)).collect(),
            method: form.method.clone(),
            method_words: if form.is_direct() { String::new() } else { words::indirect_method() },
            instruments: if form.is_direct() { self.detectors(self.today_there()?) } else { Vec::new() },
            instrument: form.instrument.map(|instrument| instrument.to_string()).unwrap_or_default(),
            scope: if form.part { "part" } else { "whole" }.to_owned(),
            parts: form.parts.clone(),
            result: if form.found { TestResult::LeakFound } else { TestResult::NoLeak }.name().to_owned(),
            places: form.places.iter().enumerate().map(place).collect(),
            place: form.place.clone(),
            place_error: if form.is_known() { words::place_known(form.place.trim()) } else { String::new() },
            place_states: STATES.map(Choice::word).to_vec(),
            place_state: form.place_state.clone(),
            asks_done: form.asks_done(),
            done: form.done.clone(),
            ready: self.ready_at(Panel::LeakTest, form.appliance, form.ready())?,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_indirect_method_is_never_an_inspection() {
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), None);
        assert_eq!(form.kind(), TestKind::LeakInspection);
        form.take_method("sight glass".to_owned(), None);
        assert_eq!(form.kind(), TestKind::LeakTest);
    }

    #[test]
    fn a_detector_is_named_only_where_one_is_used() {
        let detector = Some(InstrumentId(uuid::Uuid::from_u128(7)));
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), detector);
        assert_eq!(form.instrument, detector);
        form.take_method("bubbles".to_owned(), detector);
        assert_eq!(form.instrument, None);
        form.take_method("tracer gas".to_owned(), detector);
        assert_eq!(form.instrument, detector);
        form.update(Msg::Instrument(String::new()));
        assert_eq!(form.instrument, None, "none can be said");
    }

    #[test]
    fn a_leak_mended_on_the_spot_is_a_repair_that_says_what_was_done() {
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), None);
        form.update(Msg::Result("leak found".to_owned()));
        form.update(Msg::Edited("place".to_owned(), "Flare".to_owned()));
        form.update(Msg::PlaceState(REPAIRED.to_owned()));
        form.update(Msg::AddPlace);
        assert!(form.places.is_empty() && !form.ready().ready);
        form.update(Msg::Edited("done".to_owned(), "made anew".to_owned()));
        form.update(Msg::AddPlace);
        let entries = form.entries(&crate::app::Common::default());
        let [NewEntry::Test(test), NewEntry::Repair(repair)] = entries.as_slice() else { panic!("{entries:?}") };
        assert_eq!((test.leaks[0].state.as_str(), repair.place.as_str(), repair.done.as_str()), ("", "Flare", "made anew"));
    }

    #[test]
    fn places_are_listed_once_and_can_be_taken_back() {
        let mut form = Form::new(ApplianceId(uuid::Uuid::nil()), None);
        form.update(Msg::Result("leak found".to_owned()));
        assert!(!form.ready().ready);
        for _ in 0..2 {
            form.update(Msg::Edited("place".to_owned(), "Flare".to_owned()));
            form.update(Msg::AddPlace);
        }
        assert_eq!(form.places.len(), 1);
        form.update(Msg::TakePlaceBack("0".to_owned()));
        form.update(Msg::TakePlaceBack("7".to_owned()));
        assert!(form.places.is_empty());
    }
}
