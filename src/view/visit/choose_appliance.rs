//! Which appliance is worked on; one that is not known yet is added on the spot.

use super::{Panel, id};
use crate::app::AppError;
use crate::ledger::{Appliance, ApplianceFacts, ApplianceId, Category};
use crate::view::desk::Desk;
use crate::view::gases::{gas_named, gases_like};
use crate::view::shown::{Choice, Line, Ready};
use crate::view::{format, parse, words};

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct State {
    pub search: String,
    pub adding: bool,
    pub identification: String,
    pub gas: String,
    pub full_charge: String,
    pub place: String,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Search(String),
    Choose(String),
    BeginAdding,
    StopAdding,
    Gas(String),
    /// `identification`, `gas`, `full charge` or `place`.
    Edited(String, String),
    Add,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub site: String,
    pub search: String,
    pub appliances: Vec<Line>,
    pub empty_words: String,
    pub adding: bool,
    pub identification: String,
    pub identification_error: String,
    pub gas: String,
    pub gas_error: String,
    pub gases: Vec<Choice>,
    pub full_charge: String,
    pub full_charge_error: String,
    pub place: String,
    pub ready: Ready,
}

impl Desk {
    pub(in crate::view) fn update_choose_appliance(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Choose(key) => {
                let Some(appliance) = id(&key, ApplianceId) else { return Ok(()) };
                return self.take_in_hand_and_go_on(appliance);
            }
            Msg::Add => return self.add_on_the_spot(),
            _ => {}
        }
        let state = &mut self.work_mut()?.choose_appliance;
        match msg {
            Msg::Search(text) => state.search = text,
            Msg::BeginAdding => state.adding = true,
            Msg::StopAdding => state.adding = false,
            Msg::Gas(key) => state.gas = key,
            Msg::Edited(field, text) => match field.as_str() {
                "identification" => state.identification = text,
                "gas" => state.gas = text,
                "full charge" => state.full_charge = text,
                _ => state.place = text,
            },
            Msg::Choose(_) | Msg::Add => {}
        }
        Ok(())
    }

    /// The appliance that what follows is done on.
    pub(in crate::view) fn take_in_hand(&mut self, appliance: ApplianceId) -> Result<(), AppError> {
        let work = self.work_mut()?;
        work.place.appliance = Some(appliance);
        if !work.appliances().contains(&appliance) {
            work.place.taken_up.push(appliance);
        }
        self.changed();
        self.keep_place()
    }

    fn take_in_hand_and_go_on(&mut self, appliance: ApplianceId) -> Result<(), AppError> {
        self.take_in_hand(appliance)?;
        let next = std::mem::take(&mut self.work_mut()?.next);
        self.open_panel(Panel::None)?;
        if next == Panel::None { Ok(()) } else { self.ask(next) }
    }

    fn add_on_the_spot(&mut self) -> Result<(), AppError> {
        let state = self.work()?.choose_appliance.clone();
        let unit = self.fresh_weighing()?.unit;
        let written = parse::mass(&state.full_charge, unit).map_err(|sentence| AppError::Input { field: "full charge", sentence })?;
        let full_charge = written.as_ref().and_then(|written| written.mass().ok());
        // What it is used for is asked later; until then the strictest trigger holds.
        let facts = ApplianceFacts {
            full_charge,
            full_charge_written: written,
            place: state.place.trim().to_owned(),
            ..ApplianceFacts::new(Category::Other, state.gas.trim().to_owned())
        };
        let site = self.work()?.visit.site;
        let appliance = self.app.add_appliance_with(site, &state.identification, facts)?;
        self.reload_registers()?;
        self.take_in_hand_and_go_on(appliance)
    }

    /// The page that asks for an appliance.
    ///
    /// # Errors
    /// No visit is open; the store's own.
    pub fn choose_appliance_shown(&self) -> Result<Shown, AppError> {
        let work = self.work()?;
        let state = &work.choose_appliance;
        let search = state.search.trim().to_lowercase();
        let mut appliances = Vec::new();
        for appliance in self.registers.appliances_at(work.visit.site).filter(|appliance| fits(appliance, &search)) {
            appliances.push(self.appliance_line(appliance)?);
        }
        let unit = self.fresh_weighing()?.unit;
        let (known, gases) = (gas_named(&state.gas), gases_like(&state.gas));
        // While it is typed and still fits some, nothing is wrong with it.
        let gas_error = known.as_ref().err().filter(|_| gases.is_empty()).cloned().unwrap_or_default();
        let full_charge_error = parse::mass(&state.full_charge, unit).err().unwrap_or_default();
        let ready = if state.identification.trim().is_empty() {
            Ready::not(words::say_the_identification())
        } else if known.is_err() {
            Ready::not(words::say_the_gas())
        } else if !full_charge_error.is_empty() {
            Ready::not(full_charge_error.clone())
        } else {
            Ready::yes()
        };
        Ok(Shown {
            site: self.site_name(work.visit.site),
            search: state.search.clone(),
            empty_words: if appliances.is_empty() { words::no_appliance_fits(&state.search) } else { String::new() },
            appliances,
            adding: state.adding,
            identification: state.identification.clone(),
            identification_error: String::new(),
            gas: state.gas.clone(),
            gas_error,
            gases,
            full_charge: state.full_charge.clone(),
            full_charge_error,
            place: state.place.clone(),
            ready,
        })
    }

    /// An appliance as a row: gas, charge and place, and its verdict.
    pub(in crate::view) fn appliance_line(&self, appliance: &Appliance) -> Result<Line, AppError> {
        let today = self.app.today();
        let standing = self.app.appliance_standing(appliance.id, today)?;
        let judging = super::judge(&standing, &standing.lines, today, crate::quantity::MassUnit::Kilogram, None);
        Ok(Line {
            key: appliance.id.to_string(),
            name: appliance.name.clone(),
            facts: format::commas([standing.facts.refrigerant.as_str(), &format::full_charge(&standing.facts), &standing.facts.place]),
            state: judging.state,
            verdict: Some(judging.verdict),
            ..Line::default()
        })
    }
}

fn fits(appliance: &Appliance, search: &str) -> bool {
    let facts = appliance.versions.latest();
    [appliance.name.as_str(), &facts.refrigerant, &facts.place, &facts.serial].join(" ").to_lowercase().contains(search)
}
