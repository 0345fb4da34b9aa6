//! Recover: gas from the appliance into a cylinder, within the cylinder's limit.

use super::Panel;
use super::charge::{of_readings, refusal, why_not};
use super::weighing::{self, Context, WeighingForm};
use crate::app::{AppError, ApplianceStanding, CylinderStanding, NewEntry, Prepared, RecoverInput};
use crate::gas;
use crate::ledger::{ApplianceId, GAP_REASONS, RecoveryPurpose};
use crate::measure::{CylinderLimit, Direction};
use crate::quantity::Mass;
use crate::rules::recovery_level;
use crate::view::desk::Desk;
use crate::view::shown::{self, Choice, Fact, Ready};
use crate::view::{format, words};
use chrono::NaiveDate;
use serde::{Deserialize, Serialize};

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub weighing: WeighingForm,
    pub purpose: RecoveryPurpose,
    pub level_reached: String,
    pub level_after_waiting: String,
    pub reason: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Weighing(weighing::Msg),
    Purpose(String),
    LevelReached(String),
    LevelAfterWaiting(String),
    Reason(String),
    ChooseCylinder,
    Save,
    SaveNextCylinder,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub appliance: String,
    pub weighing: weighing::Shown,
    pub scales: Vec<Choice>,
    pub gap_reasons: Vec<Choice>,
    pub hose_length: String,
    pub hose_bore: String,
    pub summary: String,
    pub purposes: Vec<Choice>,
    pub purpose: String,
    pub room: String,
    pub room_words: String,
    pub over_limit: bool,
    pub follows: Vec<Fact>,
    pub level_reached: String,
    pub level_after_waiting: String,
    pub refusal: shown::Refusal,
    pub reason: String,
    pub ready: Ready,
    pub can_go_on: bool,
}

impl Form {
    fn new(appliance: ApplianceId, weighing: WeighingForm) -> Self {
        Self {
            appliance,
            weighing,
            purpose: RecoveryPurpose::Repair,
            level_reached: String::new(),
            level_after_waiting: String::new(),
            reason: String::new(),
        }
    }

    fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Weighing(msg) => self.weighing.update(msg),
            Msg::Purpose(key) => self.purpose = RecoveryPurpose::from_name(&key).unwrap_or(self.purpose),
            Msg::LevelReached(text) => self.level_reached = text,
            Msg::LevelAfterWaiting(text) => self.level_after_waiting = text,
            Msg::Reason(text) => self.reason = text,
            Msg::ChooseCylinder | Msg::Save | Msg::SaveNextCylinder => {}
        }
    }

    /// Both levels as one line of the record.
    fn levels(&self) -> String {
        let again = self.level_after_waiting.trim();
        let again = if again.is_empty() { String::new() } else { format!("after waiting {again}") };
        format::commas([self.level_reached.trim(), &again])
    }
}

impl Desk {
    pub(super) fn begin_recovery(&mut self) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        if self.work()?.recover.as_ref().is_none_or(|form| form.appliance != appliance) {
            let form = Form::new(appliance, self.fresh_weighing()?);
            self.work_mut()?.recover = Some(form);
        }
        self.with_cylinder(Panel::Recover)
    }

    pub(in crate::view) fn update_recover(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::ChooseCylinder => return self.choose_another_cylinder(Panel::Recover),
            Msg::Save => {
                let form = self.save_recovery()?;
                return self.entered(Panel::Recover, form.appliance);
            }
            Msg::SaveNextCylinder => {
                let form = self.save_recovery()?;
                let weighing = self.fresh_weighing()?;
                self.entered(Panel::Recover, form.appliance)?;
                self.work_mut()?.recover = Some(Form { weighing, reason: String::new(), ..form });
                return self.choose_another_cylinder(Panel::Recover);
            }
            other => {
                if let Some(form) = &mut self.work_mut()?.recover {
                    form.update(other);
                }
            }
        }
        self.keep_recovery()
    }

    pub(super) fn keep_recovery(&self) -> Result<(), AppError> {
        self.work()?.recover.as_ref().map_or(Ok(()), |form| self.keep(Panel::Recover, form))
    }

    fn recover_form(&self) -> Result<&Form, AppError> {
        self.work()?.recover.as_ref().ok_or(AppError::Unknown { what: "recovery being entered" })
    }

    fn recover_input(&self, form: &Form) -> Result<RecoverInput, AppError> {
        let missing = || AppError::Input { field: "cylinder", sentence: words::choose_the_cylinder() };
        Ok(RecoverInput {
            common: self.work()?.common(Panel::Recover, form.appliance, &form.reason)?,
            cylinder: form.weighing.cylinder.ok_or_else(missing)?,
            purpose: form.purpose,
            reading: form.weighing.reading(Direction::Into),
            full_hoses: None,
            level_reached: form.levels(),
            weighing_gap: form.weighing.gap_reason.clone(),
        })
    }

    fn save_recovery(&mut self) -> Result<Form, AppError> {
        let form = self.recover_form()?.clone();
        let standing = self.app.appliance_standing(form.appliance, self.today_there()?)?;
        let mut input = self.recover_input(&form)?;
        input.full_hoses = self.hoses_of(&form.weighing, &standing.facts.refrigerant)?;
        let visit = self.work()?.visit.id;
        self.app.recover(visit, form.appliance, input)?;
        self.remember_weighing(&form.weighing)?;
        self.work_mut()?.recover = None;
        Ok(form)
    }

    /// The recovery page.
    ///
    /// # Errors
    /// No visit is open, no recovery is being entered; the store's own.
    pub fn recover_shown(&self) -> Result<Shown, AppError> {
        let form = self.recover_form()?;
        let today = self.today_there()?;
        let standing = self.app.appliance_standing(form.appliance, today)?;
        let cylinder = form.weighing.cylinder.map(|id| self.app.cylinder_standing(id, today)).transpose()?;
        let limit = self.limit_of(&standing, cylinder.as_ref())?;
        let attempt = self.attempt_recovery(form, &standing);
        let prepared = attempt.as_ref().ok();
        let weighing = form.weighing.shown(&Context {
            direction: Direction::Into,
            cylinder: cylinder.as_ref(),
            limit: limit.as_ref(),
            net: prepared.and_then(weighing::net_with_error),
            gap: prepared.and_then(|prepared| prepared.gap),
            error: attempt.as_ref().err().filter(|(field, _)| of_readings(field)).map(|(_, sentence)| sentence.clone()).unwrap_or_default(),
        });
        let room = room(form, cylinder.as_ref(), limit.as_ref(), prepared);
        let ready = match &attempt {
            Err(_) if !form.weighing.is_complete() => Ready::not(""),
            Err((_, sentence)) => Ready::not(sentence),
            Ok(prepared) if !prepared.may_be_saved() => Ready::not(why_not(&prepared.refusals)),
            Ok(_) => Ready::yes(),
        };
        Ok(Shown {
            appliance: words::appliance(&standing.appliance.name, &standing.facts.refrigerant, &format::full_charge(&standing.facts)),
            weighing,
            scales: weighing::scales(self, today),
            gap_reasons: GAP_REASONS.map(Choice::word).to_vec(),
            hose_length: form.weighing.hose_length.clone(),
            hose_bore: form.weighing.hose_bore.clone(),
            summary: format::commas([form.purpose.name(), &form.weighing.summary()]),
            purposes: RecoveryPurpose::ALL.iter().map(|purpose| Choice::word(purpose.name())).collect(),
            purpose: form.purpose.name().to_owned(),
            room: room.figure,
            room_words: room.words,
            over_limit: room.over,
            follows: follows(&standing, form.purpose, today),
            level_reached: form.level_reached.clone(),
            level_after_waiting: form.level_after_waiting.clone(),
            refusal: prepared.map(|prepared| refusal(&prepared.refusals, words::cannot_be_recovered())).unwrap_or_default(),
            reason: form.reason.clone(),
            ready,
            can_go_on: true,
        })
    }

    pub(super) fn limit_of(
        &self,
        standing: &ApplianceStanding,
        cylinder: Option<&CylinderStanding>,
    ) -> Result<Option<CylinderLimit>, AppError> {
        let Some((gas, cylinder)) = gas::find(&standing.facts.refrigerant).zip(cylinder) else { return Ok(None) };
        Ok(Some(self.app.limit_rules(&standing.site_facts.rulebooks)?.limit_of(gas, cylinder, true)))
    }

    fn attempt_recovery(&self, form: &Form, standing: &ApplianceStanding) -> Result<Prepared, (&'static str, String)> {
        let new = self.recover_input(form).map(NewEntry::Recover);
        self.attempt(form.appliance, &form.weighing, &standing.facts.refrigerant, new)
    }
}

struct Room {
    figure: String,
    words: String,
    over: bool,
}

/// Room left before the limit that binds, with what is read so far.
fn room(form: &Form, cylinder: Option<&CylinderStanding>, limit: Option<&CylinderLimit>, prepared: Option<&Prepared>) -> Room {
    let unknown = || Room { figure: "\u{2013}".to_owned(), words: words::room_unknown(), over: false };
    let Some(cylinder) = cylinder else { return unknown() };
    let Some(binding) = limit.and_then(|limit| limit.binding.as_ref()) else { return unknown() };
    let reading = form.weighing.reading(Direction::Into);
    let gross = |weighing: Option<crate::quantity::Weighing>| weighing.and_then(|weighing| weighing.mass().ok());
    let tare = cylinder.facts.tare;
    let content: Option<Mass> = if form.weighing.zeroed {
        let net = prepared.and_then(|prepared| prepared.entry.line.act.transfer()).map(|transfer| transfer.mass);
        cylinder.balance.content.mass().map(|held| held + net.unwrap_or_default())
    } else {
        gross(reading.after).or_else(|| gross(reading.before)).map(|gross| gross - tare).or_else(|| cylinder.balance.content.mass())
    };
    let Some(content) = content else { return unknown() };
    let left = binding.net - content;
    let name = &cylinder.cylinder.name;
    Room {
        figure: format::mass(left, form.weighing.unit),
        words: if left.is_negative() { words::room_over(name, &binding.name()) } else { words::room_left_in(name, &binding.name()) },
        over: left.is_negative(),
    }
}

/// The level that the law of the day asks of this recovery, else the maker's.
fn follows(standing: &ApplianceStanding, purpose: RecoveryPurpose, today: NaiveDate) -> Vec<Fact> {
    let asked = recovery_level(&standing.site_facts.rulebooks, &standing.facts, purpose, today);
    vec![match asked {
        Some(asked) => Fact::new(words::level_to_reach_by(&asked.source), asked.level),
        None => Fact::new(words::level_to_reach(), words::level_by_maker()),
    }]
}
