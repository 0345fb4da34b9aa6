//! Note: a dated fact that moves no gas, or words for the record.

use super::{Panel, id};
use crate::app::{AppError, NewEntry, RecycleInput, RetrofitInput, SimpleAct};
use crate::ledger::{ApplianceId, CylinderId, GasStatus};
use crate::view::desk::Desk;
use crate::view::gases::gas_named;
use crate::view::shown::{Choice, Ready};
use crate::view::{format, parse, words};
use serde::{Deserialize, Serialize};

const KINDS: [&str; 9] =
    ["note", "normal operation", "mothball", "retrofit", "retire", "detection system check", "plan made", "report sent", "recycle"];

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub kind: String,
    pub text: String,
    pub gas: String,
    pub full_charge: String,
    pub cylinder: Option<CylinderId>,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Kind(String),
    Cylinder(String),
    /// `text`, `gas` or `full charge`.
    Edited(String, String),
    Save,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub appliance: String,
    pub kinds: Vec<Choice>,
    pub kind: String,
    pub kind_words: String,
    pub text: String,
    pub asks_gas: bool,
    pub gas: String,
    pub gas_error: String,
    pub full_charge: String,
    pub full_charge_error: String,
    pub cylinders: Vec<Choice>,
    pub cylinder: String,
    pub ready: Ready,
}

impl Form {
    fn new(appliance: ApplianceId) -> Self {
        Self { appliance, kind: "note".to_owned(), text: String::new(), gas: String::new(), full_charge: String::new(), cylinder: None }
    }
}

impl Desk {
    pub(super) fn begin_note(&mut self) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        let work = self.work_mut()?;
        if work.note.as_ref().is_none_or(|form| form.appliance != appliance) {
            work.note = Some(Form::new(appliance));
        }
        self.open_panel(Panel::Note)
    }

    /// The form for a kind of fact, with what was typed kept.
    pub(super) fn prepare_note(&mut self, kind: &str) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        let begun = self.work()?.note.clone().filter(|form| form.appliance == appliance);
        let form = Form { kind: kind.to_owned(), ..begun.unwrap_or_else(|| Form::new(appliance)) };
        self.work_mut()?.note = Some(form);
        Ok(())
    }

    pub(in crate::view) fn update_note(&mut self, msg: Msg) -> Result<(), AppError> {
        if msg == Msg::Save {
            return self.save_note();
        }
        if let Some(form) = &mut self.work_mut()?.note {
            match msg {
                Msg::Kind(key) => form.kind = key,
                Msg::Cylinder(key) => form.cylinder = id(&key, CylinderId),
                Msg::Edited(field, text) => match field.as_str() {
                    "text" => form.text = text,
                    "gas" => form.gas = text,
                    _ => form.full_charge = text,
                },
                Msg::Save => {}
            }
        }
        self.work()?.note.as_ref().map_or(Ok(()), |form| self.keep(Panel::Note, form))
    }

    fn save_note(&mut self) -> Result<(), AppError> {
        let form = self.work()?.note.clone().ok_or(AppError::Unknown { what: "note being entered" })?;
        let mut common = self.work()?.common(Panel::Note, form.appliance, "")?;
        form.text.trim().clone_into(&mut common.note);
        let simple = |act| NewEntry::Simple(act, common.clone());
        let new = match form.kind.as_str() {
            "normal operation" => simple(SimpleAct::NormalOperation),
            "mothball" => simple(SimpleAct::Mothball),
            "retire" => simple(SimpleAct::Retire),
            "detection system check" => simple(SimpleAct::DetectionSystemCheck),
            "plan made" => simple(SimpleAct::PlanMade),
            "report sent" => simple(SimpleAct::ReportSent),
            "retrofit" => {
                let unit = self.fresh_weighing()?.unit;
                let full_charge =
                    parse::mass(&form.full_charge, unit).map_err(|sentence| AppError::Input { field: "full charge", sentence })?;
                NewEntry::Retrofit(RetrofitInput { common: common.clone(), refrigerant: form.gas.trim().to_owned(), full_charge })
            }
            "recycle" => {
                let missing = || AppError::Input { field: "cylinder", sentence: words::choose_the_cylinder() };
                let cylinder = form.cylinder.ok_or_else(missing)?;
                let method = std::mem::take(&mut common.note);
                NewEntry::Recycle(RecycleInput { common: common.clone(), cylinder, method, instrument: None })
            }
            _ => simple(SimpleAct::Note),
        };
        let visit = self.work()?.visit.id;
        self.app.enter(visit, form.appliance, &new)?;
        // Retrofit and recycling are entered under their own action.
        self.app.clear_draft(visit, Panel::Note.action())?;
        self.work_mut()?.note = None;
        self.entered(Panel::Note, form.appliance)
    }

    /// The note page.
    ///
    /// # Errors
    /// No visit is open, no note is being entered; the store's own.
    pub fn note_shown(&self) -> Result<Shown, AppError> {
        let form = self.work()?.note.as_ref().ok_or(AppError::Unknown { what: "note being entered" })?;
        let today = self.today_there()?;
        let unit = self.fresh_weighing()?.unit;
        let cylinders = if form.kind == "recycle" {
            let recovered = self.app.cylinders(today)?.into_iter().filter(|c| c.balance.status == Some(GasStatus::Recovered));
            recovered
                .map(|cylinder| {
                    let content = cylinder.balance.content.mass().map_or_else(words::not_weighed, |mass| format::mass(mass, unit));
                    let gas = cylinder.balance.gas.unwrap_or_default();
                    Choice::new(cylinder.cylinder.id.to_string(), &cylinder.cylinder.name, format::commas([&*gas, &*content]))
                })
                .collect()
        } else {
            Vec::new()
        };
        let known = gas_named(&form.gas);
        let gas_error = known.as_ref().err().filter(|_| !form.gas.trim().is_empty()).cloned().unwrap_or_default();
        let asks_gas = form.kind == "retrofit";
        let full_charge_error = parse::mass(&form.full_charge, unit).err().unwrap_or_default();
        let ready = match form.kind.as_str() {
            "note" | "recycle" if form.text.trim().is_empty() => Ready::not(words::note_empty()),
            "recycle" if form.cylinder.is_none() => Ready::not(words::choose_the_cylinder()),
            "retrofit" if known.is_err() => Ready::not(words::say_the_gas()),
            "retrofit" if !full_charge_error.is_empty() => Ready::not(full_charge_error.clone()),
            _ => Ready::yes(),
        };
        Ok(Shown {
            appliance: self.appliance_words()?,
            kinds: KINDS.map(|key| Choice::new(key, words::note_name(key), "")).to_vec(),
            kind: form.kind.clone(),
            kind_words: words::note_kind(&form.kind),
            text: form.text.clone(),
            asks_gas,
            gas: form.gas.clone(),
            gas_error,
            full_charge: form.full_charge.clone(),
            full_charge_error,
            cylinders,
            cylinder: form.cylinder.map(|cylinder| cylinder.to_string()).unwrap_or_default(),
            ready: self.ready_at(Panel::Note, form.appliance, ready)?,
        })
    }
}
