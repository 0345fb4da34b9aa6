//! The page of one cylinder: what is in it, every limit at its own mark, its
//! facts, each movement of gas.

use super::Office;
use super::cylinders::bar;
use crate::app::{App, AppError, CylinderStanding, of_condition};
use crate::ledger::{Act, CylinderAct, CylinderId, CylinderKind};
use crate::measure::{CylinderLimit, Rating};
use crate::quantity::{Mass, rounded_text};
use crate::view::bars::rounded;
use crate::view::format;
use crate::view::shown::{Fact, Line, MassBar};
use crate::view::words::office as say;

#[derive(Debug, Clone, Default, PartialEq)]
pub struct CylinderPage {
    pub title: String,
    pub location: String,
    pub name: String,
    pub state: String,
    pub content: String,
    pub room: String,
    pub unit: String,
    /// `None` where the water capacity is not known.
    pub mass: Option<MassBar>,
    /// The limits that do not bind.
    pub limits: Vec<Fact>,
    /// Why it must not be filled; empty where it may be.
    pub refused: String,
    pub facts: Vec<Fact>,
    pub movements: Vec<Line>,
}

fn refused(cylinder: &CylinderStanding, limit: Option<&CylinderLimit>, today: chrono::NaiveDate) -> String {
    let facts = &cylinder.facts;
    if let Some(reason) = &facts.scrapped {
        return say::refuse_scrapped(reason);
    }
    if facts.kind == CylinderKind::NonRefillable {
        return say::refuse_non_refillable();
    }
    if let Some(by) = facts.requalify_by.filter(|by| *by < today) {
        return say::refuse_overdue(&format::full_day(by));
    }
    if let Some(unsound) = of_condition(cylinder).first() {
        return format!("{} ({})", unsound.sentence, unsound.source);
    }
    if cylinder.balance.is_mixed() {
        return say::refuse_mixed();
    }
    let psig = |pressure: crate::quantity::GaugePressure| format!("{} psig", rounded_text(pressure.psi(), 0));
    match limit.map(|limit| &limit.rating) {
        Some(Rating::Judged { pressure, allowed, suffices: false, .. }) => return say::refuse_rating(&psig(*pressure), &psig(*allowed)),
        Some(Rating::Named { needed, given, suffices: false, .. }) => return say::refuse_named_rating(&psig(*needed), &psig(*given)),
        _ => {}
    }
    let full = limit.and_then(|limit| limit.binding.as_ref()).zip(cylinder.balance.content.mass());
    if full.is_some_and(|(limit, content)| content >= limit.net) { say::refuse_full() } else { String::new() }
}

impl Office {
    pub(super) fn read_cylinder(&self, app: &App, id: CylinderId) -> Result<Option<CylinderPage>, AppError> {
        let Some(cylinder) = self.cylinders.all.iter().find(|cylinder| cylinder.cylinder.id == id) else { return Ok(None) };
        let facts = &cylinder.facts;
        let limit = self.limit_of(cylinder);
        let content = cylinder.balance.content.mass();
        let binding = limit.as_ref().and_then(|limit| limit.binding.as_ref());
        let unit = self.units.mass;
        let room = binding.zip(content).map(|(limit, content)| (limit.net - content).max(Mass::ZERO));
        let figure = |mass: Option<Mass>| mass.map(|mass| format::mass_figure(mass, unit)).unwrap_or_default();
        let gas = cylinder.balance.gas.as_deref().unwrap_or("empty");
        let status = cylinder.balance.status.map_or("", |status| status.name());
        let parts = [cylinder.cylinder.name.as_str(), gas, status];
        let others = limit.iter().flat_map(|limit| &limit.limits).filter(|one| Some(*one) != binding);
        Ok(Some(CylinderPage {
            title: cylinder.cylinder.name.clone(),
            location: facts.location.clone(),
            name: parts.into_iter().filter(|part| !part.is_empty()).collect::<Vec<_>>().join("   "),
            state: if facts.scrapped.is_some() { say::scrapped() } else { say::in_use() },
            content: figure(content),
            room: figure(room),
            unit: format::unit(unit).to_owned(),
            mass: bar(cylinder, limit.as_ref(), unit),
            limits: others
                .map(|one| {
                    let counts = if one.counts { "" } else { ", does not count here" };
                    Fact::new(format!("{}{counts}", one.kind.name()), rounded(one.net, unit))
                })
                .collect(),
            refused: refused(cylinder, limit.as_ref(), self.today),
            facts: self.cylinder_facts(cylinder),
            movements: self.movements(app, cylinder)?,
        }))
    }

    fn cylinder_facts(&self, cylinder: &CylinderStanding) -> Vec<Fact> {
        let facts = &cylinder.facts;
        let with = |text: &Option<String>, unit: &str| text.clone().map(|text| format!("{text} {unit}")).unwrap_or_default();
        let last = cylinder.balance.last_gross.map(|gross| format::mass(gross.gross, self.units.mass)).unwrap_or_default();
        let mut list = vec![
            Fact::new("kind", facts.kind.name()),
            Fact::new("tare", facts.tare_written.text()),
            Fact::new("water capacity", with(&facts.water_capacity_l, "l")),
            Fact::new("last gross", last),
            Fact::new("requalification", facts.requalify_by.map(format::full_day).unwrap_or_default()),
            Fact::new("service pressure", with(&facts.service_pressure_psig, "psig")),
        ];
        let optional = [
            ("test pressure", with(&facts.test_pressure_bar, "bar")),
            ("owner", facts.owner.clone()),
            ("gas's owner", facts.gas_owner.clone()),
            ("gas from", facts.gas_source.clone()),
        ];
        list.extend(optional.into_iter().filter(|(_, value)| !value.is_empty()).map(|(caption, value)| Fact::new(caption, value)));
        list
    }

    /// Entries and weighings of the register, the latest first. A row's key is its visit.
    fn movements(&self, app: &App, cylinder: &CylinderStanding) -> Result<Vec<Line>, AppError> {
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let mut rows = Vec::new();
        for version in cylinder.cylinder.versions.all().iter().filter(|version| version.facts.gross.is_some() || version.from.is_some()) {
            let weighed = version.facts.gross_written.as_ref().map(crate::quantity::Weighing::text).unwrap_or_default();
            let name = match (&version.facts.scrapped, weighed.is_empty()) {
                (Some(_), _) => "Out of use",
                (None, false) => "Weighed",
                (None, true) => "Facts changed",
            };
            let day = version.from.map_or_else(|| "when first written down".to_owned(), format::full_day);
            let facts = format::commas([day.as_str(), version.reason.as_deref().unwrap_or_default()]);
            rows.push(((version.from, 0), Line::new("", name, facts).state(weighed, "")));
        }
        for entry in app.store().entries_of_cylinder(cylinder.cylinder.id)? {
            let appliance = registers.and_then(|registers| registers.appliance(entry.line.appliance));
            let site = appliance.and_then(|appliance| registers?.site(appliance.site)).map_or("", |site| &site.name);
            let name = appliance.map_or("", |appliance| &appliance.name);
            let person = entry.detail.person.and_then(|id| registers?.person(id)).map_or("", |person| &person.name);
            let day = format!("{} {}", format::full_day(entry.line.at.date), format::clock(entry.line.at.minute));
            let (name, state) = match &entry.line.act {
                Act::Charge { transfer, .. } => (format!("To {name}, {site}"), rounded(-transfer.mass, self.units.mass)),
                Act::Recover { transfer, .. } => (format!("From {name}, {site}"), format!("+{}", rounded(transfer.mass, self.units.mass))),
                act => (format::capital(act.name()), String::new()),
            };
            let row = Line {
                struck: entry.struck_by.is_some(),
                ..Line::new(entry.visit.to_string(), name, format::commas([day.trim(), person])).state(state, "")
            };
            rows.push(((Some(entry.line.at.date), entry.line.position), row));
        }
        for entry in app.store().book_of_cylinder(cylinder.cylinder.id)?.into_iter().filter(|entry| entry.strikes.is_none()) {
            let state = match (&entry.act, entry.act.mass()) {
                (CylinderAct::Bought { .. }, Some(mass)) => format!("+{}", rounded(mass, self.units.mass)),
                (_, Some(mass)) => rounded(-mass, self.units.mass),
                (_, None) => entry.gross_after.map(|gross| rounded(gross, self.units.mass)).unwrap_or_default(),
            };
            let day = format!("{} {}", format::full_day(entry.at.date), format::clock(entry.at.minute));
            let detail = &entry.detail;
            let facts = format::commas([day.trim(), detail.party.as_str(), detail.paper.as_str(), detail.reason.as_str()]);
            let row =
                Line { struck: entry.struck_by.is_some(), ..Line::new("", format::capital(entry.act.name()), facts).state(state, "") };
            rows.push(((Some(entry.at.date), entry.position), row));
        }
        rows.sort_by_key(|(at, _)| std::cmp::Reverse(*at));
        Ok(rows.into_iter().map(|(_, row)| row).collect())
    }
}
