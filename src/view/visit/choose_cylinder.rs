//! Which cylinder: those that fit come first, the others say why not.

use super::{Panel, id};
use crate::app::{AppError, ApplianceStanding, CylinderStanding, Kind, of_condition};
use crate::gas;
use crate::ledger::{CylinderFacts, CylinderId, CylinderKind, GasStatus};
use crate::quantity::MassUnit;
use crate::view::desk::Desk;
use crate::view::shown::{Choice, Line, Ready};
use crate::view::{format, parse, words};

#[derive(Debug, Clone, PartialEq, Eq)]
pub struct State {
    pub search: String,
    pub adding: bool,
    pub identification: String,
    pub kind: CylinderKind,
    /// What the gas in it is; `None`: it is empty.
    pub status: Option<GasStatus>,
    pub tare: String,
    pub water_capacity: String,
}

impl Default for State {
    fn default() -> Self {
        Self {
            search: String::new(),
            adding: false,
            identification: String::new(),
            kind: CylinderKind::Supply,
            status: Some(GasStatus::Virgin),
            tare: String::new(),
            water_capacity: String::new(),
        }
    }
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Search(String),
    Choose(String),
    GoWithout,
    BeginAdding,
    StopAdding,
    Kind(String),
    Status(String),
    Edited(String, String),
    Add,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub purpose: String,
    pub search: String,
    pub fitting: Vec<Line>,
    pub others: Vec<Line>,
    pub empty_words: String,
    pub can_go_without: bool,
    pub adding: bool,
    pub identification: String,
    pub kinds: Vec<Choice>,
    pub kind: String,
    pub states: Vec<Choice>,
    pub state: String,
    pub tare: String,
    pub tare_error: String,
    pub water_capacity: String,
    pub water_capacity_error: String,
    pub ready: Ready,
}

/// Empty: it fits. Else why it does not.
fn unfit(panel: Panel, standing: &ApplianceStanding, cylinder: &CylinderStanding) -> String {
    let gas = &standing.facts.refrigerant;
    let holds = cylinder.balance.gas.as_deref();
    let holds_some = cylinder.balance.content.mass().is_none_or(crate::quantity::Mass::is_positive);
    if let Some(why) = &cylinder.facts.scrapped {
        return words::out_of_use(why);
    }
    if panel == Panel::Recover {
        match of_condition(cylinder).first().map(|refusal| refusal.kind) {
            Some(Kind::Damaged) => return words::damaged(cylinder.facts.damage.trim()),
            Some(_) => return words::tare_lost(),
            None => {}
        }
        return match (cylinder.facts.kind, holds) {
            (kind @ CylinderKind::NonRefillable, _) => kind.name().to_owned(),
            (_, Some(other)) if holds_some && other != gas => words::another_gas(),
            _ => String::new(),
        };
    }
    match (holds, cylinder.balance.status) {
        (None, _) => words::no_gas_known(),
        (_, Some(GasStatus::Mixed)) => words::mixed_gas(),
        (Some(other), _) if other != gas => words::another_gas(),
        (_, Some(GasStatus::Recovered)) if standing.site_facts.rulebooks.iter().any(|id| id.starts_with("eu-")) => words::recovered_gas(),
        _ if cylinder.balance.content.mass().is_some_and(|mass| !mass.is_positive()) => words::empty(),
        _ => String::new(),
    }
}

impl Desk {
    pub(super) fn choose_another_cylinder(&mut self, panel: Panel) -> Result<(), AppError> {
        let work = self.work_mut()?;
        work.next = panel;
        work.choose_cylinder = State {
            kind: if panel == Panel::Recover { CylinderKind::Recovery } else { CylinderKind::Supply },
            status: (panel == Panel::Charge).then_some(GasStatus::Virgin),
            ..State::default()
        };
        self.open_panel(Panel::ChooseCylinder)
    }

    pub(super) fn fitting_cylinders(&self, panel: Panel) -> Result<Vec<CylinderId>, AppError> {
        let today = self.today_there()?;
        let standing = self.app.appliance_standing(self.appliance_in_hand()?, today)?;
        let cylinders = self.app.cylinders(today)?;
        Ok(cylinders.iter().filter(|cylinder| self.why_unfit(panel, &standing, cylinder).is_empty()).map(|c| c.cylinder.id).collect())
    }

    fn why_unfit(&self, panel: Panel, standing: &ApplianceStanding, cylinder: &CylinderStanding) -> String {
        let why = unfit(panel, standing, cylinder);
        if !why.is_empty() || panel != Panel::Recover {
            return why;
        }
        let today = self.today_there().unwrap_or_default();
        if let Some(due) = cylinder.facts.requalify_by.filter(|due| *due < today) {
            return words::overdue(&format::day(due, today));
        }
        String::new()
    }

    pub(in crate::view) fn update_choose_cylinder(&mut self, msg: Msg) -> Result<(), AppError> {
        // A tap that was under way when the list went away chooses for nobody.
        if self.panel != Panel::ChooseCylinder {
            return Ok(());
        }
        let panel = self.work()?.next;
        match msg {
            Msg::Choose(key) => {
                let Some(cylinder) = id(&key, CylinderId) else { return Ok(()) };
                self.take_cylinder(panel, Some(cylinder))?;
                return self.open_panel(panel);
            }
            Msg::GoWithout => return self.charge_without_cylinder(),
            Msg::Add => return self.add_cylinder_on_the_spot(panel),
            _ => {}
        }
        let state = &mut self.work_mut()?.choose_cylinder;
        match msg {
            Msg::Search(text) => state.search = text,
            Msg::BeginAdding => state.adding = true,
            Msg::StopAdding => state.adding = false,
            Msg::Kind(key) => state.kind = CylinderKind::from_name(&key).unwrap_or(state.kind),
            Msg::Status(key) => state.status = GasStatus::from_name(&key).ok(),
            Msg::Edited(field, text) => match field.as_str() {
                "identification" => state.identification = text,
                "tare" => state.tare = text,
                _ => state.water_capacity = text,
            },
            Msg::Choose(_) | Msg::GoWithout | Msg::Add => {}
        }
        Ok(())
    }

    fn add_cylinder_on_the_spot(&mut self, panel: Panel) -> Result<(), AppError> {
        let state = self.work()?.choose_cylinder.clone();
        let refused = |field, sentence| AppError::Input { field, sentence };
        let tare = parse::mass(&state.tare, self.fresh_weighing()?.unit).map_err(|sentence| refused("tare", sentence))?;
        let tare_written = tare.ok_or_else(|| refused("tare", words::tare_missing()))?;
        let litres = parse::litres(&state.water_capacity).map_err(|sentence| refused("water capacity", sentence))?;
        let standing = self.app.appliance_standing(self.appliance_in_hand()?, self.today_there()?)?;
        // Whatever is in it is the gas that is worked with: another one would make a mix. Gas in an empty one is named by the recovery.
        let facts = CylinderFacts {
            refrigerant: state.status.map(|_| standing.facts.refrigerant.clone()),
            gas_status: state.status,
            water_capacity_l: litres,
            ..CylinderFacts::new(
                state.kind,
                tare_written.mass().map_err(|e| refused("tare", words::sentence(&e.to_string())))?,
                tare_written,
            )
        };
        let cylinder = self.app.add_cylinder(&state.identification, facts)?;
        self.reload_registers()?;
        self.take_cylinder(panel, Some(cylinder))?;
        self.open_panel(panel)
    }

    /// The page that asks for a cylinder.
    ///
    /// # Errors
    /// No visit is open; the store's own.
    pub fn choose_cylinder_shown(&self) -> Result<Shown, AppError> {
        let work = self.work()?;
        let (state, panel) = (&work.choose_cylinder, work.next);
        let today = self.today_there()?;
        let standing = self.app.appliance_standing(self.appliance_in_hand()?, today)?;
        let gas_name = &standing.facts.refrigerant;
        let search = state.search.trim().to_lowercase();
        let unit = self.fresh_weighing()?.unit;
        let (mut fitting, mut others) = (Vec::new(), Vec::new());
        for cylinder in self.app.cylinders(today)? {
            let held = cylinder.balance.gas.clone().unwrap_or_default();
            let looked_at = [cylinder.cylinder.name.as_str(), &held, &cylinder.facts.location].join(" ").to_lowercase();
            if !looked_at.contains(&search) {
                continue;
            }
            let why = self.why_unfit(panel, &standing, &cylinder);
            let status = cylinder.balance.status.map(GasStatus::name).unwrap_or_default();
            let facts = if why.is_empty() { words::cylinder_facts(status, &cylinder.facts.location) } else { why.clone() };
            let content = cylinder.balance.content.mass();
            let state = if panel == Panel::Recover { self.room_words(&standing, &cylinder, unit)? } else { None };
            let line = Line {
                key: cylinder.cylinder.id.to_string(),
                name: cylinder.cylinder.name.clone(),
                facts,
                state: state.unwrap_or_else(|| content.map_or_else(words::not_weighed, |mass| format::mass(mass, unit))),
                aside: held,
                ..Line::default()
            };
            if why.is_empty() { fitting.push(line) } else { others.push(line) }
        }
        let ready = if state.identification.trim().is_empty() {
            Ready::not(words::say_the_cylinder())
        } else if state.tare.trim().is_empty() {
            Ready::not(words::tare_missing())
        } else {
            let checked = parse::mass(&state.tare, unit).and_then(|_| parse::litres(&state.water_capacity));
            checked.map_or_else(Ready::not, |_| Ready::yes())
        };
        let empty = (panel == Panel::Recover).then(|| Choice::new("", words::empty(), ""));
        let held = GasStatus::ALL.iter().filter(|status| **status != GasStatus::Mixed).map(|status| Choice::word(status.name()));
        Ok(Shown {
            purpose: if panel == Panel::Recover {
                words::for_recovery(&standing.appliance.name, gas_name)
            } else {
                words::for_charging(&standing.appliance.name, gas_name)
            },
            search: state.search.clone(),
            empty_words: if fitting.is_empty() { words::no_cylinder_fits(gas_name) } else { String::new() },
            fitting,
            others,
            can_go_without: panel == Panel::Charge,
            adding: state.adding,
            identification: state.identification.clone(),
            kinds: CylinderKind::ALL.iter().map(|kind| Choice::word(kind.name())).collect(),
            kind: state.kind.name().to_owned(),
            states: empty.into_iter().chain(held).collect(),
            state: state.status.map(GasStatus::name).unwrap_or_default().to_owned(),
            tare: state.tare.clone(),
            tare_error: parse::mass(&state.tare, unit).err().unwrap_or_default(),
            water_capacity: state.water_capacity.clone(),
            water_capacity_error: parse::litres(&state.water_capacity).err().unwrap_or_default(),
            ready,
        })
    }

    fn room_words(&self, standing: &ApplianceStanding, cylinder: &CylinderStanding, unit: MassUnit) -> Result<Option<String>, AppError> {
        let Some(gas) = gas::find(&standing.facts.refrigerant) else { return Ok(None) };
        let limit = self.app.limit_rules(&standing.site_facts.rulebooks)?.limit_of(gas, cylinder, true);
        let room = limit.binding.zip(cylinder.balance.content.mass()).map(|(binding, held)| binding.net - held);
        Ok(room.map(|room| words::room(&format::mass(room, unit))))
    }
}
