//! An appliance added in four fields, or its facts changed from a day on.

use super::form::day;
use super::plant::{FormMsg, Pane};
use super::{Form, Go, Office};
use crate::app::App;
use crate::ledger::{ApplianceFacts, ApplianceId, Category, ChargeMethod, Equipment};
use crate::quantity::Volume;
use crate::view::gases::gas_named;
use crate::view::shown::{Choice, Ready};
use crate::view::{parse, words};
use words::office as say;

/// The fields of `AppError::Input`, and what the form calls them.
const FIELDS: [(&str, &str); 5] =
    [("name", "identification"), ("refrigerant", "gas"), ("gas", "gas"), ("full charge", "full-charge"), ("installed on", "installed-on")];

pub fn categories() -> Vec<Choice> {
    Category::ALL.iter().map(|word| Choice::word(word.name())).collect()
}

pub fn equipment() -> Vec<Choice> {
    Equipment::ALL.iter().map(|word| Choice::word(word.name())).collect()
}

pub fn charge_methods() -> Vec<Choice> {
    ChargeMethod::ALL.iter().map(|word| Choice::word(word.name())).collect()
}

impl Office {
    /// Opens the form; without an appliance one is added at the site that is open, or at the first.
    pub(super) fn begin_appliance_form(&mut self, app: &App, appliance: Option<ApplianceId>) {
        let Some(overview) = &self.overview else { return };
        let mut form = new_appliance();
        if let Some(judged) = appliance.and_then(|id| overview.judged(id)) {
            form = filled(judged.appliance.name.as_str(), judged.appliance.versions.latest());
            form.set("valid-from", self.today.to_string());
            self.plant.form_site = Some(judged.site.id);
        } else {
            let open = match self.plant.pane {
                Pane::Site(site) => Some(site),
                Pane::Appliance(appliance) | Pane::Record(_, appliance) => overview.judged(appliance).map(|judged| judged.site.id),
                _ => None,
            };
            self.plant.form_site = open.or_else(|| overview.registers.sites.first().map(|site| site.id));
            if self.plant.form_site.is_none() {
                self.say(say::choose_site_first());
                self.begin_site_form(app, None);
                return;
            }
        }
        self.plant.form_appliance = appliance;
        self.plant.appliance_form = self.taken_up(app, &self.appliance_draft(), form);
        self.plant.show(Pane::ApplianceForm);
    }

    /// Where the appliance of the form stands.
    pub fn appliance_form_subject(&self) -> String {
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let site = registers.zip(self.plant.form_site).and_then(|(registers, id)| registers.site(id));
        site.map(|site| site.name.clone()).unwrap_or_default()
    }

    pub fn appliance_form_ready(&self) -> Ready {
        let form = &self.plant.appliance_form;
        if form.trimmed("identification").is_empty() {
            Ready::not(say::name_it("appliance"))
        } else if form.trimmed("gas").is_empty() {
            Ready::not(say::choose_gas())
        } else if form.changing && form.trimmed("reason").is_empty() {
            Ready::not(say::why_it_changes())
        } else if form.has_errors() {
            Ready::not(say::amend())
        } else {
            Ready::yes()
        }
    }

    pub(super) fn update_appliance_form(&mut self, app: &App, msg: FormMsg) -> Vec<Go> {
        let form = &mut self.plant.appliance_form;
        match msg {
            FormMsg::Edited(field, text) => form.set(&field, text),
            // Tapped again, what was chosen is taken back; a category there always is.
            FormMsg::Chosen(field, key) if field != "category" && field != "gas" && form.text(field) == key => form.set(field, ""),
            FormMsg::Chosen(field, key) => form.set(field, key),
            FormMsg::Switched(field, on) => form.switch(&field, on),
            FormMsg::More(more) => form.more = more,
            FormMsg::Anew => {
                self.forget(app, &self.appliance_draft());
                let fresh = self.taken_up(app, &self.appliance_draft(), new_appliance());
                self.plant.appliance_form = fresh;
                return Vec::new();
            }
            FormMsg::Save => return self.save_appliance(app),
        }
        let kept = self.plant.appliance_form.keep(app, &self.appliance_draft());
        self.tell(kept);
        Vec::new()
    }

    /// The name under which what is being typed is kept: one for each site.
    fn appliance_draft(&self) -> String {
        format!("appliance at {}", self.plant.form_site.map(|site| site.to_string()).unwrap_or_default())
    }

    fn save_appliance(&mut self, app: &App) -> Vec<Go> {
        if !self.appliance_form_ready().ready {
            return Vec::new();
        }
        let unit = self.units.mass;
        let changed = self.plant.form_appliance;
        let before = changed.and_then(|id| self.overview.as_ref()?.judged(id)).map(|judged| judged.appliance.versions.latest().clone());
        let form = &mut self.plant.appliance_form;
        let read = read(form, before.as_ref(), unit);
        let from = form.take("valid-from", day(form.text("valid-from"))).flatten();
        if form.changing && from.is_none() && form.error("valid-from").is_empty() {
            form.wrong("valid-from", say::lasts_from());
        }
        let Some(facts) = read.filter(|_| !form.has_errors()) else {
            // What is wrong may stand among the further facts.
            form.more |= ["installed-on", "room-volume"].iter().any(|field| !form.error(field).is_empty());
            return Vec::new();
        };
        let (name, reason) = (form.trimmed("identification"), form.trimmed("reason"));
        let done = match (changed, self.plant.form_site) {
            (Some(id), _) => app.change_appliance(id, facts, from.unwrap_or(self.today), &reason).map(|()| id),
            (None, Some(site)) => app.add_appliance_with(site, &name, facts),
            (None, None) => return Vec::new(),
        };
        match done {
            Ok(id) => {
                self.plant.back();
                if changed.is_none() {
                    self.forget(app, &self.appliance_draft());
                    self.plant.show(Pane::Appliance(id));
                }
                self.written(app)
            }
            Err(error) => {
                self.fault(error, |office| &mut office.plant.appliance_form, &FIELDS);
                let form = &mut self.plant.appliance_form;
                form.more |= !form.error("installed-on").is_empty();
                Vec::new()
            }
        }
    }
}

fn new_appliance() -> Form {
    Form::default().with("category", Category::CommercialRefrigeration.name())
}

fn filled(name: &str, facts: &ApplianceFacts) -> Form {
    let mut form = Form::of_known();
    form.set("identification", name);
    form.set("gas", &facts.refrigerant);
    let written = facts.full_charge_written.as_ref().map(crate::quantity::Weighing::text);
    form.set("full-charge", written.or_else(|| facts.full_charge.map(|mass| format!("{} kg", mass.kg_text()))).unwrap_or_default());
    form.set("place", &facts.place);
    form.set("charge-method", facts.charge_method.map_or("", |method| method.name()));
    form.set("category", facts.category.name());
    form.set("equipment", facts.equipment.map_or("", |equipment| equipment.name()));
    form.set("installed-on", facts.installed_on.map(|day| day.to_string()).unwrap_or_default());
    form.set("assembly", &facts.assembly);
    form.set("description", &facts.description);
    form.set("serial", &facts.serial);
    form.set("room-volume", facts.room_volume_m3.clone().unwrap_or_default());
    form.switch("hermetic", facts.labelled_hermetically_sealed);
    form.switch("residential", facts.residential);
    form.switch("detection-system", facts.leakage_detection_system);
    form.switch("light-air-conditioning", facts.residential_or_light_commercial_ac);
    form.switch("below-minus-50", facts.product_below_minus_50c);
    form.switch("military", facts.military);
    form
}

/// The facts as typed; what is wrong is said at its field.
fn read(form: &mut Form, before: Option<&ApplianceFacts>, unit: crate::quantity::MassUnit) -> Option<ApplianceFacts> {
    let refrigerant = form.take("gas", gas_named(form.text("gas")));
    let charge = form.take("full-charge", parse::mass(form.text("full-charge"), unit));
    let installed_on = form.take("installed-on", day(form.text("installed-on")));
    let room = form.take("room-volume", parse::as_written(form.text("room-volume"), Volume::from_cubic_metres_text));
    let written = charge?;
    // Typed as it was, an exact mass of imported history stays what it was.
    let same =
        before.filter(|facts| facts.full_charge_written.is_none() && facts.full_charge == written.as_ref().and_then(|w| w.mass().ok()));
    let full_charge = match &written {
        Some(weighing) => Some(form.take("full-charge", weighing.mass().map_err(|error| words::sentence(&error.to_string())))?),
        None => None,
    };
    Some(ApplianceFacts {
        full_charge,
        full_charge_written: written.filter(|_| same.is_none()),
        charge_method: ChargeMethod::from_name(form.text("charge-method")).ok(),
        installed_on: installed_on?,
        equipment: Equipment::from_name(form.text("equipment")).ok(),
        assembly: form.trimmed("assembly"),
        description: form.trimmed("description"),
        serial: form.trimmed("serial"),
        place: form.trimmed("place"),
        labelled_hermetically_sealed: form.is_on("hermetic"),
        residential: form.is_on("residential"),
        leakage_detection_system: form.is_on("detection-system"),
        residential_or_light_commercial_ac: form.is_on("light-air-conditioning"),
        product_below_minus_50c: form.is_on("below-minus-50"),
        military: form.is_on("military"),
        room_volume_m3: room?,
        ..ApplianceFacts::new(Category::from_name(form.text("category")).unwrap_or(Category::Other), refrigerant?)
    })
}
