//! Company, people and instruments as they are typed.

use super::form::day;
use super::plant::FormMsg;
use super::setup::{Pane, kind_name};
use super::{Form, Go, Office};
use crate::app::App;
use crate::ledger::{Company, Instrument, InstrumentId, InstrumentKind, Person, PersonId};
use crate::quantity::{MassUnit, Weighing};
use crate::view::parse;
use crate::view::shown::{Choice, Ready};
use crate::view::words::office as say;
use uuid::Uuid;

pub const KINDS: [InstrumentKind; 5] =
    [InstrumentKind::Scale, InstrumentKind::Detector, InstrumentKind::Gauge, InstrumentKind::RecoveryMachine, InstrumentKind::Hoses];

pub fn kinds() -> Vec<Choice> {
    KINDS.iter().map(|kind| Choice::word(kind_name(*kind))).collect()
}

fn kind_of(form: &Form) -> InstrumentKind {
    KINDS.into_iter().find(|kind| kind_name(*kind) == form.text("kind")).unwrap_or(InstrumentKind::Scale)
}

/// A division is a mass, so of scales alone; hoses hold gas.
pub fn asks_division(form: &Form) -> bool {
    kind_of(form) == InstrumentKind::Scale
}

pub fn asks_holds(form: &Form) -> bool {
    kind_of(form) == InstrumentKind::Hoses
}

fn named(form: &Form, what: &str) -> Ready {
    if form.trimmed("name").is_empty() {
        Ready::not(say::name_it(what))
    } else if form.has_errors() {
        Ready::not(say::amend())
    } else {
        Ready::yes()
    }
}

/// What is typed; `true` asks to save.
fn typed(form: &mut Form, msg: FormMsg) -> bool {
    match msg {
        FormMsg::Edited(field, text) => form.set(&field, text),
        FormMsg::Chosen(field, key) => form.set(field, key),
        FormMsg::Switched(field, on) => form.switch(&field, on),
        FormMsg::More(more) => form.more = more,
        FormMsg::Anew => {}
        FormMsg::Save => return true,
    }
    false
}

impl Office {
    pub(super) fn begin_company_form(&mut self) {
        let company = self.overview.as_ref().map(|overview| overview.registers.company()).unwrap_or_default();
        let form = Form::default().with("name", company.name).with("address", company.address);
        self.setup.company = form.with("certificate", company.certificate);
    }

    pub fn company_ready(&self) -> Ready {
        named(&self.setup.company, "company")
    }

    pub(super) fn update_company_form(&mut self, app: &App, msg: FormMsg) -> Vec<Go> {
        if !typed(&mut self.setup.company, msg) || !self.company_ready().ready {
            return Vec::new();
        }
        let form = &self.setup.company;
        let company = Company { name: form.trimmed("name"), address: form.trimmed("address"), certificate: form.trimmed("certificate") };
        match app.set_company(company, self.today, "") {
            Ok(()) => {
                self.setup.pane = Pane::None;
                self.written(app)
            }
            Err(error) => {
                self.fault(error, |office| &mut office.setup.company, &[("name", "name")]);
                Vec::new()
            }
        }
    }

    pub(super) fn begin_person_form(&mut self, person: Option<PersonId>) {
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let mut form = Form::default();
        if let Some(person) = person.and_then(|id| registers?.person(id)) {
            form.changing = true;
            let date = |day: Option<chrono::NaiveDate>| day.map(|day| day.to_string()).unwrap_or_default();
            form.set("name", &person.name);
            form.set("certificate", &person.certificate);
            form.set("certificate-kind", &person.certificate_kind);
            form.set("valid-from", date(person.valid_from));
            form.set("valid-to", date(person.valid_to));
            form.set("company", &person.company);
            form.set("company-certificate", &person.company_certificate);
        }
        self.setup.person = form;
        self.setup.changed_person = person;
        self.setup.pane = Pane::PersonForm;
    }

    pub fn person_ready(&self) -> Ready {
        named(&self.setup.person, "person")
    }

    pub(super) fn update_person_form(&mut self, app: &App, msg: FormMsg) -> Vec<Go> {
        if !typed(&mut self.setup.person, msg) || !self.person_ready().ready {
            return Vec::new();
        }
        let changed = self.setup.changed_person;
        let form = &mut self.setup.person;
        let valid_from = form.take("valid-from", day(form.text("valid-from"))).flatten();
        let valid_to = form.take("valid-to", day(form.text("valid-to"))).flatten();
        if form.has_errors() {
            return Vec::new();
        }
        let person = Person {
            id: changed.unwrap_or(PersonId(Uuid::nil())),
            name: form.trimmed("name"),
            certificate: form.trimmed("certificate"),
            certificate_kind: form.trimmed("certificate-kind"),
            valid_from,
            valid_to,
            company: form.trimmed("company"),
            company_certificate: form.trimmed("company-certificate"),
        };
        let done = if changed.is_some() { app.change_person(person, self.today, "") } else { app.add_person(person).map(drop) };
        match done {
            Ok(()) => {
                self.setup.pane = Pane::People;
                self.written(app)
            }
            Err(error) => {
                self.fault(error, |office| &mut office.setup.person, &[("name", "name")]);
                Vec::new()
            }
        }
    }

    pub(super) fn begin_instrument_form(&mut self, instrument: Option<InstrumentId>) {
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let mut form = Form::default().with("kind", kind_name(InstrumentKind::Scale));
        if let Some(known) = instrument.and_then(|id| registers?.instrument(id)) {
            form.changing = true;
            let date = |day: Option<chrono::NaiveDate>| day.map(|day| day.to_string()).unwrap_or_default();
            let written = |weighing: &Option<Weighing>| weighing.as_ref().map(Weighing::text).unwrap_or_default();
            form.set("kind", kind_name(known.kind));
            form.set("name", &known.name);
            form.set("serial", &known.serial);
            form.set("division", written(&known.division));
            form.set("holds", written(&known.holds));
            form.set("checked-on", date(known.checked_on));
            form.set("check-due", date(known.check_due));
        }
        self.setup.instrument = form;
        self.setup.changed_instrument = instrument;
        self.setup.pane = Pane::InstrumentForm;
    }

    pub fn instrument_ready(&self) -> Ready {
        named(&self.setup.instrument, "instrument")
    }

    pub(super) fn update_instrument_form(&mut self, app: &App, msg: FormMsg) -> Vec<Go> {
        if !typed(&mut self.setup.instrument, msg) || !self.instrument_ready().ready {
            return Vec::new();
        }
        let changed = self.setup.changed_instrument;
        let form = &mut self.setup.instrument;
        let kind = kind_of(form);
        let checked_on = form.take("checked-on", day(form.text("checked-on"))).flatten();
        let check_due = form.take("check-due", day(form.text("check-due"))).flatten();
        // Divisions are stamped in grams or ounces.
        let division = if kind == InstrumentKind::Scale {
            form.take("division", parse::mass(form.text("division"), MassUnit::Gram)).flatten()
        } else {
            None
        };
        let holds = if asks_holds(form) { form.take("holds", parse::mass(form.text("holds"), MassUnit::Gram)).flatten() } else { None };
        if form.has_errors() {
            return Vec::new();
        }
        let instrument = Instrument {
            id: changed.unwrap_or(InstrumentId(Uuid::nil())),
            kind,
            name: form.trimmed("name"),
            serial: form.trimmed("serial"),
            division,
            holds,
            checked_on,
            check_due,
        };
        let done =
            if changed.is_some() { app.change_instrument(instrument, self.today, "") } else { app.add_instrument(instrument).map(drop) };
        match done {
            Ok(()) => {
                self.setup.pane = Pane::Instruments;
                self.written(app)
            }
            Err(error) => {
                let fields = [("name", "name"), ("division", "division"), ("content of the hoses", "holds")];
                self.fault(error, |office| &mut office.setup.instrument, &fields);
                Vec::new()
            }
        }
    }
}
