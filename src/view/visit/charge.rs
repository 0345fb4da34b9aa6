//! Charge: gas from a cylinder into the appliance. Shows what follows from it
//! before it is saved; never advises how much to leave out.

use super::weighing::{self, Context, WeighingForm};
use super::{Panel, id, judge};
use crate::app::{AppError, ApplianceStanding, ChargeInput, CylinderStanding, Kind, NewEntry, Prepared, Refusal};
use crate::gas::{self, Weighting};
use crate::ledger::{
    Act, ApplianceId, ChargePurpose, CylinderId, Entry, EntryId, GAP_REASONS, GasStatus, Line, Position, Reading, WeighingMode,
};
use crate::measure::Direction;
use crate::quantity::{Mass, Ratio, Weighing};
use crate::record::glides;
use crate::rules::weights;
use crate::view::desk::Desk;
use crate::view::shown::{self, Choice, Fact, Ready};
use crate::view::{format, parse, words};
use serde::{Deserialize, Serialize};

/// Purposes in the order in which they are offered; *mothball* is told from the history.
const PURPOSES: [ChargePurpose; 10] = [
    ChargePurpose::Leak,
    ChargePurpose::SameLeak,
    ChargePurpose::Installation,
    ChargePurpose::FactoryCharge,
    ChargePurpose::Trim,
    ChargePurpose::Retrofit,
    ChargePurpose::Seasonal,
    ChargePurpose::Mothball,
    ChargePurpose::Returned,
    ChargePurpose::Replacement,
];
/// Earlier charges offered for *same leak*.
const EARLIER: usize = 6;

/// What is typed and chosen.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Form {
    pub appliance: ApplianceId,
    pub weighing: WeighingForm,
    pub purpose: ChargePurpose,
    pub earlier: Option<EntryId>,
    pub vapour: bool,
    pub short: bool,
    pub short_by: String,
    pub gas_source: String,
    pub reason: String,
    /// *Next appliance, same cylinder*: the reading carried over goes to whichever appliance is charged next.
    #[serde(default)]
    pub carried: bool,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Weighing(weighing::Msg),
    Purpose(String),
    Earlier(String),
    Phase(String),
    Fill(String),
    ShortBy(String),
    GasSource(String),
    Reason(String),
    ChooseCylinder,
    Save,
    /// Save, and on with the same cylinder at another appliance.
    SaveNextAppliance,
    /// Save, and on with another cylinder at the same appliance.
    SaveNextCylinder,
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Shown {
    pub appliance: String,
    pub without_cylinder: bool,
    pub weighing: weighing::Shown,
    pub scales: Vec<Choice>,
    pub gap_reasons: Vec<Choice>,
    pub hose_length: String,
    pub hose_bore: String,
    pub summary: String,
    pub purposes: Vec<Choice>,
    pub purpose: String,
    pub earlier_charges: Vec<Choice>,
    pub earlier: String,
    pub phase: String,
    pub phase_words: String,
    pub fill: String,
    pub short_by: String,
    pub asks_gas_source: bool,
    pub gas_source: String,
    pub after: Vec<shown::Rate>,
    pub follows: Vec<Fact>,
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
            purpose: ChargePurpose::Leak,
            earlier: None,
            vapour: false,
            short: false,
            short_by: String::new(),
            gas_source: String::new(),
            reason: String::new(),
            carried: false,
        }
    }

    fn without_cylinder(&self) -> bool {
        self.purpose == ChargePurpose::FactoryCharge
    }

    fn update(&mut self, msg: Msg) {
        match msg {
            Msg::Weighing(msg) => self.weighing.update(msg),
            Msg::Purpose(key) => self.purpose = ChargePurpose::from_name(&key).unwrap_or(self.purpose),
            Msg::Earlier(key) => self.earlier = id(&key, EntryId),
            Msg::Phase(key) => self.vapour = key == "vapour",
            Msg::Fill(key) => self.short = key == "short",
            Msg::ShortBy(text) => self.short_by = text,
            Msg::GasSource(text) => self.gas_source = text,
            Msg::Reason(text) => self.reason = text,
            Msg::ChooseCylinder | Msg::Save | Msg::SaveNextAppliance | Msg::SaveNextCylinder => {}
        }
    }

    fn reading(&self) -> Reading {
        let reading = self.weighing.reading(Direction::Out);
        if self.without_cylinder() {
            // The maker's plate says what is in it: one figure.
            let net = WeighingForm { zeroed: false, ..self.weighing.clone() }.reading(Direction::Out).before;
            return Reading { mode: WeighingMode::NetOnly, before: None, after: None, net, scale: None };
        }
        reading
    }

    fn short_by(&self) -> Result<Option<Weighing>, String> {
        if !self.short {
            return Ok(None);
        }
        parse::mass(&self.short_by, self.weighing.unit)?.map(Some).ok_or_else(words::short_amount_missing)
    }
}

impl Desk {
    pub(super) fn begin_charge(&mut self) -> Result<(), AppError> {
        let appliance = self.appliance_in_hand()?;
        let form = match &self.work()?.charge {
            Some(form) if form.carried => Form { appliance, carried: false, ..form.clone() },
            Some(form) if form.appliance == appliance => form.clone(),
            _ => Form::new(appliance, self.fresh_weighing()?),
        };
        let carried = self.work()?.charge.as_ref().is_some_and(|form| form.carried);
        self.work_mut()?.charge = Some(form);
        if carried {
            self.keep_charge()?;
        }
        self.with_cylinder(Panel::Charge)
    }

    pub(in crate::view) fn update_charge(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::ChooseCylinder => return self.choose_another_cylinder(Panel::Charge),
            Msg::Save => {
                let form = self.save_charge()?;
                return self.entered(Panel::Charge, form.appliance);
            }
            Msg::SaveNextAppliance => {
                let form = self.save_charge()?;
                let next = Form { carried: true, ..Form::new(form.appliance, form.weighing.go_on()) };
                self.entered(Panel::Charge, form.appliance)?;
                let work = self.work_mut()?;
                work.charge = Some(next);
                work.place.appliance = None;
                self.keep_charge()?;
                return self.ask(Panel::Charge);
            }
            Msg::SaveNextCylinder => {
                let form = self.save_charge()?;
                let weighing = self.fresh_weighing()?;
                self.entered(Panel::Charge, form.appliance)?;
                // Gas of the same leak and work: purpose and fill go on.
                let next = Form { weighing, reason: String::new(), gas_source: String::new(), ..form };
                self.work_mut()?.charge = Some(next);
                return self.choose_another_cylinder(Panel::Charge);
            }
            other => {
                if let Some(form) = &mut self.work_mut()?.charge {
                    form.update(other);
                }
            }
        }
        self.keep_charge()
    }

    pub(super) fn keep_charge(&self) -> Result<(), AppError> {
        self.work()?.charge.as_ref().map_or(Ok(()), |form| self.keep(Panel::Charge, form))
    }

    fn charge_form(&self) -> Result<&Form, AppError> {
        self.work()?.charge.as_ref().ok_or(AppError::Unknown { what: "charge being entered" })
    }

    /// On the charge's own words; hoses are looked up only when it is saved.
    fn charge_input(&self, form: &Form) -> Result<ChargeInput, AppError> {
        let short_by = form.short_by().map_err(|sentence| AppError::Input { field: "short by", sentence })?;
        Ok(ChargeInput {
            common: self.work()?.common(Panel::Charge, form.appliance, &form.reason)?,
            cylinder: form.weighing.cylinder.filter(|_| !form.without_cylinder()),
            purpose: form.purpose,
            reading: form.reading(),
            full_hoses: None,
            phase: if form.vapour { "vapour" } else { "liquid" }.to_owned(),
            short_by,
            same_leak_as: form.earlier.filter(|_| form.purpose == ChargePurpose::SameLeak),
            gas_source: form.gas_source.clone(),
            weighing_gap: form.weighing.gap_reason.clone(),
        })
    }

    fn save_charge(&mut self) -> Result<Form, AppError> {
        let form = self.charge_form()?.clone();
        let standing = self.app.appliance_standing(form.appliance, self.today_there()?)?;
        let mut input = self.charge_input(&form)?;
        if !form.without_cylinder() {
            input.full_hoses = self.hoses_of(&form.weighing, &standing.facts.refrigerant)?;
        }
        let visit = self.work()?.visit.id;
        self.app.charge(visit, form.appliance, input)?;
        self.remember_weighing(&form.weighing)?;
        self.work_mut()?.charge = None;
        Ok(form)
    }

    /// The charge page.
    ///
    /// # Errors
    /// No visit is open, no charge is being entered; the store's own.
    pub fn charge_shown(&self) -> Result<Shown, AppError> {
        let form = self.charge_form()?;
        let work = self.work()?;
        let today = self.today_there()?;
        let standing = self.app.appliance_standing(form.appliance, today)?;
        let cylinder = form.weighing.cylinder.map(|id| self.app.cylinder_standing(id, today)).transpose()?;
        let gas = gas::find(&standing.facts.refrigerant);
        let rules = self.app.limit_rules(&standing.site_facts.rulebooks)?;
        let limit = cylinder.as_ref().and_then(|cylinder| rules.limit_of_content(cylinder));
        let attempt = self.attempt_charge(form, &standing);
        let prepared = attempt.as_ref().ok();
        let error =
            attempt.as_ref().err().filter(|(field, _)| of_readings(field)).map(|(_, sentence)| sentence.clone()).unwrap_or_default();
        let weighing = form.weighing.shown(&Context {
            direction: Direction::Out,
            cylinder: cylinder.as_ref(),
            limit: limit.as_ref(),
            net: prepared.and_then(weighing::net_with_error),
            gap: prepared.and_then(|prepared| prepared.gap),
            error,
        });
        let asks_gas_source = cylinder.as_ref().is_some_and(asks_gas_source) && !form.without_cylinder();
        let (after, follows) = self.what_follows(form, &standing, cylinder.as_ref(), prepared, today);
        let mut weighing = weighing;
        if form.without_cylinder() {
            weighing.first.caption = words::by_the_plate();
            weighing.first.last.clear();
            weighing.second = shown::Reading::default();
        }
        Ok(Shown {
            appliance: words::appliance(&standing.appliance.name, &standing.facts.refrigerant, &format::full_charge(&standing.facts)),
            without_cylinder: form.without_cylinder(),
            weighing,
            scales: weighing::scales(self, today),
            gap_reasons: GAP_REASONS.map(Choice::word).to_vec(),
            hose_length: form.weighing.hose_length.clone(),
            hose_bore: form.weighing.hose_bore.clone(),
            summary: self.charge_summary(form),
            purposes: PURPOSES.map(|purpose| Choice::new(purpose.name(), words::charge_purpose(purpose), "")).to_vec(),
            purpose: form.purpose.name().to_owned(),
            earlier_charges: self.earlier_charges(form.appliance, today)?,
            earlier: form.earlier.map(|entry| entry.to_string()).unwrap_or_default(),
            phase: if form.vapour { "vapour" } else { "liquid" }.to_owned(),
            phase_words: gas.filter(|gas| glides(gas)).map(|gas| words::glide_words(gas.designation())).unwrap_or_default(),
            fill: if form.short { "short" } else { "full" }.to_owned(),
            short_by: form.short_by.clone(),
            asks_gas_source,
            gas_source: form.gas_source.clone(),
            after,
            follows,
            refusal: prepared.map(|prepared| refusal(&prepared.refusals, words::cannot_be_charged())).unwrap_or_default(),
            reason: form.reason.clone(),
            ready: self.charge_ready(form, attempt.as_ref()),
            can_go_on: work.visit.closing.is_none(),
        })
    }

    /// The charge worked out as far as it can be; else the field and what is wrong.
    fn attempt_charge(&self, form: &Form, standing: &ApplianceStanding) -> Result<Prepared, (&'static str, String)> {
        let new = self.charge_input(form).map(NewEntry::Charge);
        self.attempt(form.appliance, &form.weighing, &standing.facts.refrigerant, new)
    }

    /// Gas that moves, worked out with hoses that are not in the register yet.
    pub(super) fn attempt(
        &self,
        appliance: ApplianceId,
        weighing: &WeighingForm,
        gas: &str,
        new: Result<NewEntry, AppError>,
    ) -> Result<Prepared, (&'static str, String)> {
        let told = |error: AppError| match error {
            AppError::Input { field, sentence } => (field, sentence),
            other => ("", other.to_string()),
        };
        let visit = self.work().map_err(told)?.visit.id;
        let hoses = weighing.hoses(gas).map_err(|sentence| ("hoses", sentence))?;
        let mut prepared = self.app.prepare(visit, appliance, &new.map_err(told)?).map_err(told)?;
        // Hoses come into the register only when the entry is saved.
        if let (Some(hoses), Act::Charge { transfer, .. } | Act::Recover { transfer, .. }) = (hoses, &mut prepared.entry.line.act) {
            transfer.hoses = hoses.mass().unwrap_or_default();
        }
        Ok(prepared)
    }

    fn charge_ready(&self, form: &Form, attempt: Result<&Prepared, &(&'static str, String)>) -> Ready {
        match attempt {
            // What is not typed yet needs no words.
            Err(_) if !form.weighing.is_complete() && !form.without_cylinder() => Ready::not(""),
            Err((_, sentence)) => Ready::not(sentence),
            Ok(prepared) if !prepared.may_be_saved() => Ready::not(why_not(&prepared.refusals)),
            Ok(_) => Ready::yes(),
        }
    }

    fn charge_summary(&self, form: &Form) -> String {
        let fill = if form.short { words::short_by(form.short_by.trim()) } else { words::to_full_charge() };
        let phase = if form.vapour { "vapour" } else { "liquid" };
        format::commas([words::charge_purpose(form.purpose), phase, &fill, &form.weighing.summary()])
    }

    fn earlier_charges(&self, appliance: ApplianceId, today: chrono::NaiveDate) -> Result<Vec<Choice>, AppError> {
        let mut charges: Vec<Entry> = self.app.store().entries_of_appliance(appliance)?;
        charges.retain(|entry| entry.struck_by.is_none() && matches!(entry.line.act, Act::Charge { .. }));
        charges.sort_by_key(|entry| (entry.line.at, entry.line.position));
        let choice = |entry: &Entry| {
            let mass = entry.line.act.transfer().map(|transfer| format::mass(transfer.mass, super::page::unit_of(entry)));
            Choice::new(entry.line.entry.to_string(), format::moment(entry.line.at, today), mass.unwrap_or_default())
        };
        Ok(charges.iter().rev().take(EARLIER).map(choice).collect())
    }

    /// Rates, duties, losses and the cylinder's rest, as if the charge were saved.
    fn what_follows(
        &self,
        form: &Form,
        standing: &ApplianceStanding,
        cylinder: Option<&CylinderStanding>,
        prepared: Option<&Prepared>,
        today: chrono::NaiveDate,
    ) -> (Vec<shown::Rate>, Vec<Fact>) {
        let Some(prepared) = prepared else { return (Vec::new(), Vec::new()) };
        // The last of all lines: it is not on disk yet.
        let line = Line { position: Position::MAX, ..prepared.entry.line.clone() };
        let lines: Vec<Line> = standing.lines.iter().cloned().chain([line.clone()]).collect();
        let judging = judge(standing, &lines, today, form.weighing.unit, Some(line.entry));
        let mut follows = judging.follows;
        if let Some(transfer) = line.act.transfer() {
            follows.extend(weighted(&standing.facts.refrigerant, transfer.mass, weights(&standing.site_facts)));
        }
        if let (Some(cylinder), Some(transfer)) = (cylinder, line.act.transfer()) {
            let after = form.reading().after.filter(|_| !form.weighing.zeroed).and_then(|after| after.mass().ok());
            let rest =
                after.map(|after| after - cylinder.facts.tare).or_else(|| cylinder.balance.content.mass().map(|held| held - transfer.mass));
            if let Some(rest) = rest {
                follows.push(Fact::new(words::left_in(&cylinder.cylinder.name), format::mass(rest, form.weighing.unit)));
            }
        }
        (judging.rates, follows)
    }
}

/// Readings and hoses are typed beside each other; other fields say for themselves what is wrong with them.
pub(super) fn of_readings(field: &str) -> bool {
    matches!(field, "before" | "after" | "net" | "hoses")
}

fn asks_gas_source(cylinder: &CylinderStanding) -> bool {
    let used = matches!(cylinder.balance.status, Some(GasStatus::Recycled | GasStatus::Reclaimed));
    used && cylinder.facts.gas_source.trim().is_empty()
}

/// CO₂ equivalent and ODP-weighted mass of a loss, each with its table.
pub fn weighted(gas_name: &str, mass: Mass, weights: Weighting) -> Vec<Fact> {
    let Some(gas) = gas::find(gas_name) else { return Vec::new() };
    let mut facts = Vec::new();
    let co2e = gas.weight(weights).map(|weight| mass.kg() * weight / Ratio::from_integer(1000));
    let shown = co2e.map_or_else(words::not_in_table, |tonnes| words::tonnes(&format::figure(tonnes, 2)));
    facts.push(Fact::new(words::co2e(weights.name()), shown));
    if gas.has_ods() {
        facts.push(Fact::new(words::odp_weighted(), words::kilograms(&format::figure(mass.kg() * gas.odp(), 3))));
    }
    facts
}

/// What stands in the way, the gravest first. A weighing gap has its own question, what is not said yet its own field.
pub(super) fn refusal(refusals: &[Refusal], firm_title: String) -> shown::Refusal {
    let others: Vec<&Refusal> = refusals.iter().filter(|refusal| !matches!(refusal.kind, Kind::WeighingGap | Kind::NotSaid)).collect();
    let Some(gravest) = others.first() else { return shown::Refusal::default() };
    let sentence = |refusal: &&Refusal| {
        if refusal.source.is_empty() { refusal.sentence.clone() } else { format!("{} ({})", refusal.sentence, refusal.source) }
    };
    shown::Refusal {
        title: if gravest.judgement { words::left_to_judgement() } else { firm_title },
        text: others.iter().map(sentence).collect::<Vec<_>>().join("\n"),
        with_reason: others.iter().all(|refusal| refusal.judgement),
    }
}

pub(super) fn why_not(refusals: &[Refusal]) -> String {
    match refusals.first() {
        Some(refusal) if !refusal.judgement => refusal.sentence.clone(),
        Some(refusal) if refusal.kind == Kind::WeighingGap => words::say_why_it_differs(),
        Some(_) => words::reason_missing(),
        None => String::new(),
    }
}

impl Desk {
    /// Opens an act that takes a cylinder: where exactly one fits it is taken, else it is asked for.
    pub(super) fn with_cylinder(&mut self, panel: Panel) -> Result<(), AppError> {
        let chosen = match panel {
            Panel::Recover => self.work()?.recover.as_ref().and_then(|form| form.weighing.cylinder),
            _ => self.work()?.charge.as_ref().and_then(|form| form.weighing.cylinder),
        };
        if chosen.is_none() {
            let fitting = self.fitting_cylinders(panel)?;
            if let [only] = fitting.as_slice() {
                let only = *only;
                self.take_cylinder(panel, Some(only))?;
            } else {
                return self.choose_another_cylinder(panel);
            }
        }
        self.open_panel(panel)
    }

    pub(super) fn take_cylinder(&mut self, panel: Panel, cylinder: Option<CylinderId>) -> Result<(), AppError> {
        let work = self.work_mut()?;
        if panel == Panel::Recover {
            if let Some(form) = &mut work.recover {
                form.weighing.take_cylinder(cylinder);
            }
            self.keep_recovery()
        } else {
            if let Some(form) = &mut work.charge {
                form.weighing.take_cylinder(cylinder);
            }
            self.keep_charge()
        }
    }

    /// No cylinder takes part: a factory charge.
    pub(super) fn charge_without_cylinder(&mut self) -> Result<(), AppError> {
        if let Some(form) = &mut self.work_mut()?.charge {
            form.purpose = ChargePurpose::FactoryCharge;
            form.weighing.take_cylinder(None);
        }
        self.keep_charge()?;
        self.open_panel(Panel::Charge)
    }
}
