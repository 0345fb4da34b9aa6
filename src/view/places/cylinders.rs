//! Cylinders: by gas, each with what is in it and what it may take.

use super::cylinder::CylinderPage;
use super::plant::{FormMsg, fits};
use super::{Form, Go, Office, Place, id};
use crate::app::{App, CylinderStanding, LimitRules};
use crate::ledger::{CylinderId, CylinderKind};
use crate::measure::CylinderLimit;
use crate::quantity::{Mass, MassUnit, parse_decimal};
use crate::view::bars::{mass_bar, rounded, small_mass_bar};
use crate::view::shown::{Line, MassBar};
use crate::view::{format, words};
use std::collections::BTreeMap;
use words::office as say;

#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Pane {
    #[default]
    None,
    Cylinder(CylinderId),
    Form,
}

#[derive(Debug, Default)]
pub struct State {
    pub search: String,
    pub pane: Pane,
    /// Whom the form changes; `None`: one is added.
    pub changed: Option<CylinderId>,
    pub form: Form,
    pub all: Vec<CylinderStanding>,
    /// `None` until the store was read.
    pub rules: Option<LimitRules>,
    pub cylinder: Option<CylinderPage>,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Search(String),
    Open(String),
    Add,
    Edit,
    OpenMovement(String),
    Form(FormMsg),
}

impl State {
    pub(super) fn back(&mut self) -> bool {
        let moved = self.pane != Pane::None;
        self.pane = match (self.pane, self.changed) {
            (Pane::Form, Some(cylinder)) => Pane::Cylinder(cylinder),
            _ => Pane::None,
        };
        moved
    }
}

#[derive(Debug, Clone, Default, PartialEq)]
pub struct Page {
    pub summary: String,
    pub search: String,
    pub lines: Vec<Line>,
    pub empty_words: String,
    pub nothing_yet: bool,
    pub chosen: String,
}

/// The bar of a cylinder; `None` where its water capacity is not known.
pub fn bar(cylinder: &CylinderStanding, limit: Option<&CylinderLimit>, unit: MassUnit) -> Option<MassBar> {
    let litres = cylinder.facts.water_capacity_l.as_ref().and_then(|text| parse_decimal(text).ok())?;
    Some(mass_bar(cylinder.balance.content.mass(), cylinder.balance.heel, Some(litres), limit, unit))
}

impl Office {
    /// What a cylinder may take of its gas, by the laws of all sites; `None` while no gas is known in it.
    pub(super) fn limit_of(&self, cylinder: &CylinderStanding) -> Option<CylinderLimit> {
        self.cylinders.rules.and_then(|rules| rules.limit_of_content(cylinder))
    }

    pub(super) fn refresh_cylinders(&mut self, app: &App) {
        let sites = self.overview.iter().flat_map(|overview| &overview.registers.sites);
        let rulebooks: Vec<String> = sites.flat_map(|site| &site.versions.latest().rulebooks).cloned().collect();
        match app.cylinders(self.today).and_then(|all| Ok((all, app.limit_rules(&rulebooks)?))) {
            Ok((all, rules)) => (self.cylinders.all, self.cylinders.rules) = (all, Some(rules)),
            Err(error) => self.fail(&error),
        }
        if let Pane::Cylinder(cylinder) = self.cylinders.pane {
            match self.read_cylinder(app, cylinder) {
                Ok(page) => self.cylinders.cylinder = page,
                Err(error) => self.fail(&error),
            }
        }
    }

    pub(super) fn update_cylinders(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::Search(text) => self.cylinders.search = text,
            Msg::Open(key) => {
                if let Some(cylinder) = id(&key) {
                    self.cylinders.pane = Pane::Cylinder(CylinderId(cylinder));
                    self.refresh_cylinders(app);
                }
            }
            Msg::Add => self.begin_cylinder_form(app, None),
            Msg::Edit => {
                if let Pane::Cylinder(cylinder) = self.cylinders.pane {
                    self.begin_cylinder_form(app, Some(cylinder));
                }
            }
            Msg::OpenMovement(key) => {
                if !self.is_open(&key) {
                    self.place = Place::Plant;
                }
                return self.open_visit(app, &key);
            }
            Msg::Form(msg) => return self.update_cylinder_form(app, msg),
        }
        Vec::new()
    }

    fn is_overdue(&self, cylinder: &CylinderStanding) -> bool {
        cylinder.facts.requalify_by.is_some_and(|by| by < self.today)
    }

    pub fn cylinders_page(&self) -> Page {
        let mut page = Page { search: self.cylinders.search.clone(), ..Page::default() };
        let Some(overview) = &self.overview else {
            page.empty_words = say::reading_store();
            return page;
        };
        page.nothing_yet = overview.registers.cylinders.is_empty();
        page.empty_words = if page.nothing_yet { say::cylinders_empty() } else { say::no_cylinder_found(self.cylinders.search.trim()) };
        if let Pane::Cylinder(cylinder) = self.cylinders.pane {
            page.chosen = cylinder.to_string();
        }
        let in_use = self.cylinders.all.iter().filter(|cylinder| cylinder.facts.scrapped.is_none());
        page.summary = say::cylinders_summary(in_use.clone().count(), in_use.filter(|cylinder| self.is_overdue(cylinder)).count());
        // By gas, then mixed, empty, and what is out of use.
        let mut groups: BTreeMap<(u8, String), Vec<&CylinderStanding>> = BTreeMap::new();
        for cylinder in self.cylinders.all.iter().filter(|cylinder| self.is_wanted(cylinder)) {
            groups.entry(group(cylinder)).or_default().push(cylinder);
        }
        for ((_, name), cylinders) in groups {
            let sum = cylinders.iter().map(|cylinder| cylinder.balance.content.mass()).sum::<Option<Mass>>();
            let state = match sum {
                Some(sum) if sum.is_positive() => rounded(sum, self.units.mass),
                _ => cylinders.len().to_string(),
            };
            page.lines.push(Line::group(name, state));
            page.lines.extend(cylinders.into_iter().map(|cylinder| self.cylinder_row(cylinder)));
        }
        page
    }

    fn is_wanted(&self, cylinder: &CylinderStanding) -> bool {
        let status = cylinder.balance.status.map_or("", |status| status.name());
        let gas = cylinder.balance.gas.as_deref().unwrap_or_default();
        fits(&self.cylinders.search, [cylinder.cylinder.name.as_str(), gas, status, &cylinder.facts.location, &cylinder.facts.owner])
    }

    fn cylinder_row(&self, cylinder: &CylinderStanding) -> Line {
        let facts = &cylinder.facts;
        let status = cylinder.balance.status.map_or(facts.kind.name(), |status| status.name());
        let row = Line::new(cylinder.cylinder.id.to_string(), &cylinder.cylinder.name, format::commas([status, &facts.location]));
        let content = cylinder.balance.content.mass();
        let limit = self.limit_of(cylinder);
        let binding = limit.as_ref().and_then(|limit| limit.binding.as_ref());
        let aside = if facts.scrapped.is_some() {
            say::scrapped()
        } else if self.is_overdue(cylinder) {
            say::overdue()
        } else if facts.kind == CylinderKind::NonRefillable {
            CylinderKind::NonRefillable.name().to_owned()
        } else {
            let room = binding.zip(content).map(|(limit, content)| (limit.net - content).max(Mass::ZERO));
            room.map(|room| say::gas_left(&rounded(room, self.units.mass))).unwrap_or_default()
        };
        let state = content.map_or_else(words::not_weighed, |content| rounded(content, self.units.mass));
        let bar = bar(cylinder, limit.as_ref(), self.units.mass).map(|bar| small_mass_bar(&bar));
        Line { bar, ..row.state(state, aside) }
    }
}

fn group(cylinder: &CylinderStanding) -> (u8, String) {
    if cylinder.facts.scrapped.is_some() {
        return (3, format::capital(&say::scrapped()));
    }
    let empty = cylinder.balance.content.mass().is_some_and(|mass| !mass.is_positive());
    match (&cylinder.balance.gas, cylinder.balance.is_mixed()) {
        (_, true) => (1, "Mixed".to_owned()),
        (Some(gas), false) if !(empty && cylinder.facts.kind == CylinderKind::Recovery) => (0, gas.clone()),
        _ => (2, "Empty".to_owned()),
    }
}
