//! Leak test: how, with what, where, and what was found. Each place found
//! becomes an open leak.

use super::{Panel, id};
use crate::app::{AppError, Setting, TestInput};
use crate::ledger::{ApplianceId, InstrumentId, InstrumentKind, LeakPlace, Scope, TestKind, TestResult};
use crate::view::desk::Desk;
use crate::view::shown::{Choice, Line, Ready};
use crate::view::words;
use serde::{Deserialize, Serialize};

/// Direct methods show the place, indirect ones only the effect
/// (Regulation (EC) No 1516/2007 Art. 6 and 7).
pub const METHODS: [(&str, bool); 6] = [
    ("electronic detector", true),
    ("bubbles", true),
    ("ultraviolet dye", true),
    ("tracer gas", true),
    ("pressure and temperature", false),
    ("sight glass", false),
];
/// States of a leak, the first while nothing was done about it.
const STATES: [&str; 5] = ["open", "isolated", "section shut", "repaired temporarily", "repaired"];

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub inspection: bool,
    pub method: String,
    pub instrument: Option<InstrumentId>,
    pub part: bool,
    pub parts: String,
    pub found: bool,
    pub places: Vec<LeakPlace>,
    pub place: String,
    pub place_state: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Kind(String),
    Method(String),
    Instrument(String),
    Scope(String),
    Result(String),
    PlaceState(String),
    /// `parts` or `place`.
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
    pub ready: Ready,
}

impl Form {
    fn new(appliance: ApplianceId, instrument: Option<InstrumentId>) -> Self {
        Self {
            appliance,
            inspection: true,
            method: METHODS[0].0.to_owned(),
            instrument,
            part: false,
            parts: String::new(),
            found: false,
            places: Vec::new(),
            place: String::new(),
            place_state: STATES[0].to_owned(),
        }
    }

    fn is_direct(&self) -> bool {
        METHODS.iter().any(|(name, direct)| *direct && *name == self.method)
    }

    fn kind(&self) -> TestKind {
        if self.inspection && self.is_direct() { TestKind::LeakInspection } else { TestKind::LeakTest }
    }

    fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Kind(key) => self.inspection = key == TestKind::LeakInspection.name(),
            Msg::Method(key) => self.method = key,
            Msg::Instrument(key) => self.instrument = id(&key, InstrumentId),
            Msg::Scope(key) => self.part = key == "part",
            Msg::Result(key) => self.found = key == TestResult::LeakFound.name(),
            Msg::PlaceState(key) => self.place_state = key,
            Msg::Edited(field, text) if field == "parts" => self.parts = text,
            Msg::Edited(_, text) => self.place = text,
            Msg::AddPlace => self.add_place(),
            Msg::TakePlaceBack(key) => {
                if let Ok(index) = key.parse::<usize>()
                    && index < self.places.len()
                {
                    self.places.remove(index);
                }
            }
            Msg::Save => {}
        }
    }

    fn is_known(&self) -> bool {
        let place = self.place.trim().to_lowercase();
        self.places.iter().any(|known| known.place.to_lowercase() == place)
    }

    fn add_place(&mut self) {
        if self.place.trim().is_empty() || self.is_known() {
            return;
        }
        // An open leak has no further state.
        let state = if self.place_state == STATES[0] { String::new() } else { self.place_state.clone() };
        self.places.push(LeakPlace { place: self.place.trim().to_owned(), state });
        self.place.clear();
        STATES[0].clone_into(&mut self.place_state);
    }

    fn ready(&self) -> Ready {
        if self.found && self.places.is_empty() && self.place.trim().is_empty() {
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

    pub(in crate::view) fn update_leak_test(&mut self, msg: Msg) -> Result<(), AppError> {
        if msg == Msg::Save {
            return self.save_leak_test();
        }
        let work = self.work_mut()?;
        if let Some(form) = &mut work.leak_test {
            form.update(msg);
        }
        self.work()?.leak_test.as_ref().map_or(Ok(()), |form| self.keep(Panel::LeakTest, form))
    }

    fn save_leak_test(&mut self) -> Result<(), AppError> {
        let unknown = || AppError::Unknown { what: "leak test being entered" };
        let mut form = self.work()?.leak_test.clone().ok_or_else(unknown)?;
        // A place that is typed and not yet on the list was found all the same.
        form.add_place();
        let mut leaks = if form.found { form.places.clone() } else { Vec::new() };
        let repaired: Vec<LeakPlace> = leaks.iter().filter(|leak| leak.state == "repaired").cloned().collect();
        for leak in &mut leaks {
            if leak.state == "repaired" {
                leak.state.clear();
            }
        }
        let input = TestInput {
            common: self.work()?.common(""),
            kind: form.kind(),
            result: Some(if form.found { TestResult::LeakFound } else { TestResult::NoLeak }),
            scope: Some(if form.part { Scope::Part } else { Scope::Whole }),
            method: form.method.clone(),
            instrument: form.instrument.filter(|_| form.is_direct()),
            parts: if form.part { form.parts.clone() } else { String::new() },
            place: String::new(),
            leaks,
            repair: None,
            partial: false,
            running_hours: String::new(),
        };
        let visit = self.work()?.visit.id;
        self.app.test(visit, form.appliance, input)?;
        // A leak that was repaired on the spot is a repair of its own.
        for leak in repaired {
            let common = self.work()?.common("");
            self.app.repair(visit, form.appliance, crate::app::RepairInput { common, place: leak.place, ..Default::default() })?;
        }
        if let Some(instrument) = form.instrument {
            self.app.set(Setting::Detector, &instrument.to_string())?;
        }
        self.work_mut()?.leak_test = None;
        self.entered()
    }

    /// The leak test page.
    ///
    /// # Errors
    /// No visit is open, no leak test is being entered; the store's own.
    pub fn leak_test_shown(&self) -> Result<Shown, AppError> {
        let form = self.work()?.leak_test.as_ref().ok_or(AppError::Unknown { what: "leak test being entered" })?;
        let place = |(index, leak): (usize, &LeakPlace)| Line {
            key: index.to_string(),
            name: leak.place.clone(),
            facts: words::leak_state(&leak.state),
            ..Line::default()
        };
        let inspection = TestKind::LeakInspection.name();
        let kinds = [inspection, TestKind::LeakTest.name()].map(|kind| Choice {
            refused: if kind == inspection && !form.is_direct() { "indirect method".to_owned() } else { String::new() },
            ..Choice::word(kind)
        });
        Ok(Shown {
            appliance: self.appliance_words()?,
            kinds: kinds.to_vec(),
            kind: form.kind().name().to_owned(),
            methods: METHODS.iter().map(|(name, _)| Choice::word(name)).collect(),
            method: form.method.clone(),
            method_words: if form.is_direct() { String::new() } else { words::indirect_method() },
            instruments: if form.is_direct() { self.instruments(InstrumentKind::Detector, self.today_there()?) } else { Vec::new() },
            instrument: form.instrument.map(|instrument| instrument.to_string()).unwrap_or_default(),
            scope: if form.part { "part" } else { "whole" }.to_owned(),
            parts: form.parts.clone(),
            result: if form.found { TestResult::LeakFound } else { TestResult::NoLeak }.name().to_owned(),
            places: form.places.iter().enumerate().map(place).collect(),
            place: form.place.clone(),
            place_error: if form.is_known() { words::place_known(form.place.trim()) } else { String::new() },
            place_states: STATES.map(Choice::word).to_vec(),
            place_state: form.place_state.clone(),
            ready: form.ready(),
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
        form.update(Msg::Method("sight glass".to_owned()));
        assert_eq!(form.kind(), TestKind::LeakTest);
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
