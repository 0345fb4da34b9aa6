//! A cylinder added as it is stamped, or its facts changed from today on.

use super::cylinders::Pane;
use super::form::last_day;
use super::plant::FormMsg;
use super::{Form, Go, Office};
use crate::app::App;
use crate::ledger::{CylinderFacts, CylinderId, CylinderKind, GasStatus};
use crate::quantity::{GaugePressure, MassUnit};
use crate::view::gases::gas_named;
use crate::view::shown::{Choice, Ready};
use crate::view::words::office as say;
use crate::view::{format, parse};

/// The name under which what is being typed is kept.
const DRAFT: &str = "cylinder";

const FIELDS: [(&str, &str); 5] =
    [("name", "identification"), ("refrigerant", "gas"), ("gas", "gas"), ("tare", "tare"), ("gross", "gross")];

pub fn kinds() -> Vec<Choice> {
    CylinderKind::ALL.iter().map(|word| Choice::word(word.name())).collect()
}

/// The states of gas, and empty.
pub fn states() -> Vec<Choice> {
    GasStatus::ALL.iter().map(|word| Choice::word(word.name())).chain([Choice::new("", "empty", "")]).collect()
}

impl Office {
    pub(super) fn begin_cylinder_form(&mut self, app: &App, cylinder: Option<CylinderId>) {
        let known = cylinder.and_then(|id| self.cylinders.all.iter().find(|known| known.cylinder.id == id));
        let form = match known {
            Some(known) => filled(&known.cylinder.name, known.cylinder.versions.latest()),
            None => Form::default().with("kind", CylinderKind::Supply.name()).with("status", GasStatus::Virgin.name()),
        };
        self.cylinders.form = self.taken_up(app, DRAFT, form);
        self.cylinders.changed = cylinder;
        self.cylinders.pane = Pane::Form;
    }

    /// What the cylinder that is changed weighed last, and when; empty where that is not known.
    pub fn last_gross_words(&self) -> String {
        let known = self.cylinders.changed.and_then(|id| self.cylinders.all.iter().find(|known| known.cylinder.id == id));
        let last = known.and_then(|known| known.balance.last_gross);
        let day = |last: &crate::ledger::KnownGross| last.at.map(|at| format::full_day(at.date)).unwrap_or_default();
        last.map(|last| say::last_gross(&format::mass(last.gross, self.units.mass), &day(&last))).unwrap_or_default()
    }

    pub fn cylinder_form_ready(&self) -> Ready {
        let form = &self.cylinders.form;
        if form.trimmed("identification").is_empty() {
            Ready::not(say::name_it("cylinder"))
        } else if form.trimmed("gas").is_empty() && !form.text("status").is_empty() {
            Ready::not(say::choose_gas())
        } else if form.trimmed("tare").is_empty() {
            Ready::not(say::give_tare())
        } else if form.has_errors() {
            Ready::not(say::amend())
        } else {
            Ready::yes()
        }
    }

    pub(super) fn update_cylinder_form(&mut self, app: &App, msg: FormMsg) -> Vec<Go> {
        let form = &mut self.cylinders.form;
        match msg {
            FormMsg::Edited(field, text) => form.set(&field, text),
            FormMsg::Chosen("kind", key) => {
                // A recovery cylinder is mostly added empty.
                if key == CylinderKind::Recovery.name() && form.trimmed("gas").is_empty() {
                    form.set("status", "");
                }
                form.set("kind", key);
            }
            FormMsg::Chosen("status", key) if key.is_empty() => {
                form.set("status", "");
                form.set("gas", "");
                form.set("gross", "");
            }
            FormMsg::Chosen(field, key) => form.set(field, key),
            FormMsg::Switched(field, on) => form.switch(&field, on),
            FormMsg::More(more) => form.more = more,
            FormMsg::Anew => {
                self.forget(app, DRAFT);
                self.begin_cylinder_form(app, None);
                return Vec::new();
            }
            FormMsg::Save => return self.save_cylinder(app),
        }
        let kept = self.cylinders.form.keep(app, DRAFT);
        self.tell(kept);
        Vec::new()
    }

    fn save_cylinder(&mut self, app: &App) -> Vec<Go> {
        if !self.cylinder_form_ready().ready {
            return Vec::new();
        }
        let unit = self.units.mass;
        let changed = self.cylinders.changed;
        let form = &mut self.cylinders.form;
        let Some(facts) = read(form, unit).filter(|_| !form.has_errors()) else {
            let further = ["stamped-maximum", "service-pressure", "test-pressure"];
            form.more |= further.iter().any(|field| !form.error(field).is_empty());
            return Vec::new();
        };
        let name = form.trimmed("identification");
        let known = changed.and_then(|id| self.cylinders.all.iter().find(|known| known.cylinder.id == id));
        let facts = match known.map(|known| known.cylinder.versions.latest()) {
            None => facts,
            // What this form does not ask for stays as it was.
            Some(last) => {
                let facts = CylinderFacts { damage: last.damage.clone(), tare_found: last.tare_found.clone(), ..facts };
                if facts.gross.is_some() {
                    facts
                } else {
                    CylinderFacts { gross: last.gross, gross_written: last.gross_written.clone(), weighed: last.weighed, ..facts }
                }
            }
        };
        let done = match changed {
            Some(id) => app.change_cylinder(id, facts, self.today, "").map(|()| id),
            None => app.add_cylinder(&name, facts),
        };
        match done {
            Ok(id) => {
                if changed.is_none() {
                    self.forget(app, DRAFT);
                }
                self.cylinders.changed = None;
                self.cylinders.pane = Pane::Cylinder(id);
                let go = self.written(app);
                self.refresh_cylinders(app);
                go
            }
            Err(error) => {
                self.fault(error, |office| &mut office.cylinders.form, &FIELDS);
                Vec::new()
            }
        }
    }
}

fn filled(name: &str, facts: &CylinderFacts) -> Form {
    let mut form = Form::of_known();
    let stamped = facts.stamped_maximum.map(|mass| format!("{} kg", mass.kg_text()));
    let texts: [(&str, String); 15] = [
        ("identification", name.to_owned()),
        ("kind", facts.kind.name().to_owned()),
        ("gas", facts.refrigerant.clone().unwrap_or_default()),
        ("status", facts.gas_status.map_or("", |status| status.name()).to_owned()),
        ("tare", facts.tare_written.text()),
        // Only what is read now is typed; the last gross stands on the cylinder's page.
        ("gross", String::new()),
        ("water-capacity", facts.water_capacity_l.clone().map(|litres| litres + " l").unwrap_or_default()),
        ("requalify-by", facts.requalify_by.map(|day| day.to_string()).unwrap_or_default()),
        ("location", facts.location.clone()),
        ("stamped-maximum", stamped.unwrap_or_default()),
        ("service-pressure", facts.service_pressure_psig.clone().unwrap_or_default()),
        ("test-pressure", facts.test_pressure_bar.clone().unwrap_or_default()),
        ("owner", facts.owner.clone()),
        ("gas-owner", facts.gas_owner.clone()),
        ("gas-source", facts.gas_source.clone()),
    ];
    for (field, text) in texts {
        form.set(field, text);
    }
    form.set("scrapped", facts.scrapped.clone().unwrap_or_default());
    form
}

fn read(form: &mut Form, unit: MassUnit) -> Option<CylinderFacts> {
    let bare = |text: &str, unit: &str| text.trim().trim_end_matches(unit).to_owned();
    let gas = form.trimmed("gas");
    let refrigerant = if gas.is_empty() { Some(None) } else { form.take("gas", gas_named(&gas)).map(Some) };
    let tare = form.take("tare", parse::mass(form.text("tare"), unit)).flatten();
    let gross = form.take("gross", parse::mass(form.text("gross"), unit));
    let capacity = form.take("water-capacity", parse::litres(form.text("water-capacity")));
    let requalify_by = form.take("requalify-by", last_day(form.text("requalify-by")));
    let stamped = form.take("stamped-maximum", parse::mass(form.text("stamped-maximum"), unit));
    let service = parse::as_written(&bare(form.text("service-pressure"), "psig"), GaugePressure::from_psi_text);
    let service = form.take("service-pressure", service);
    let test = parse::as_written(&bare(form.text("test-pressure"), "bar"), GaugePressure::from_bar_text);
    let test = form.take("test-pressure", test);
    let tare_written = tare?;
    let (gross_written, stamped) = (gross?, stamped?);
    Some(CylinderFacts {
        refrigerant: refrigerant?,
        gas_status: GasStatus::from_name(form.text("status")).ok(),
        gross: gross_written.as_ref().and_then(|weighing| weighing.mass().ok()),
        gross_written,
        water_capacity_l: capacity?,
        stamped_maximum: stamped.and_then(|weighing| weighing.mass().ok()),
        service_pressure_psig: service?,
        test_pressure_bar: test?,
        requalify_by: requalify_by?,
        owner: form.trimmed("owner"),
        gas_owner: form.trimmed("gas-owner"),
        location: form.trimmed("location"),
        gas_source: form.trimmed("gas-source"),
        scrapped: Some(form.trimmed("scrapped")).filter(|reason| !reason.is_empty()),
        ..CylinderFacts::new(
            CylinderKind::from_name(form.text("kind")).unwrap_or(CylinderKind::Supply),
            tare_written.mass().ok()?,
            tare_written,
        )
    })
}
