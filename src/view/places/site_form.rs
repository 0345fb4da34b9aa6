//! A site added, or its facts changed from a day on.

use super::form::day;
use super::plant::{FormMsg, Pane};
use super::{Form, Go, Office};
use crate::app::{App, NewSite};
use crate::ledger::{RateMethod, SiteFacts, SiteId};
use crate::rules::{self, known};
use crate::view::shown::{Choice, Ready};
use crate::view::words::office as say;

/// The name under which what is being typed is kept.
const DRAFT: &str = "site";

const FIELDS: [(&str, &str); 3] = [("name", "name"), ("rulebooks", "rulebooks"), ("time zone", "time-zone")];

/// A rulebook that a site can be judged by.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RulebookChoice {
    pub key: String,
    pub name: String,
    pub facts: String,
    pub on: bool,
}

/// Where a rulebook's law holds, and for what.
fn about(id: &str) -> &'static str {
    match id {
        "us-82f" => "United States, ozone-depleting gases and substitutes",
        "us-84c" => "United States, HFCs and substitutes",
        "eu-573" => "European Union, fluorinated gases",
        "eu-590" => "European Union, ozone-depleting gases",
        "gb-517" => "Great Britain, fluorinated gases",
        "gb-1005" => "Great Britain, ozone-depleting gases",
        "ca-halocarbon" => "Canada, federal works and land",
        _ => "",
    }
}

pub fn methods() -> Vec<Choice> {
    RateMethod::ALL.iter().map(|method| Choice::word(method.name())).collect()
}

impl Office {
    pub(super) fn begin_site_form(&mut self, app: &App, site: Option<SiteId>) {
        let mut form = Form::default().with("method", RateMethod::Annualizing.name());
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        if let Some(site) = site.and_then(|id| registers?.site(id)) {
            let facts = site.versions.latest();
            form.changing = true;
            form.set("name", &site.name);
            form.set("address", &facts.address);
            form.set("owner", &facts.owner);
            form.set("operator", &facts.operator);
            form.set("time-zone", &facts.time_zone);
            form.set("method", facts.rate_method.name());
            form.set("valid-from", self.today.to_string());
            for id in &facts.rulebooks {
                form.switch(&format!("rulebook {id}"), true);
            }
        } else if let Some(latest) = registers.and_then(|registers| registers.sites.last()) {
            // A company's next site is mostly under the same law.
            for id in &latest.versions.latest().rulebooks {
                form.switch(&format!("rulebook {id}"), true);
            }
        }
        self.plant.changed_site = site;
        self.plant.site_form = self.taken_up(app, DRAFT, form);
        self.plant.show(Pane::SiteForm);
    }

    pub fn rulebook_choices(&self) -> Vec<RulebookChoice> {
        let choice = |book: &rules::Rulebook| RulebookChoice {
            key: book.id.clone(),
            name: book.title.clone(),
            facts: about(&book.id).to_owned(),
            on: self.plant.site_form.is_on(&format!("rulebook {}", book.id)),
        };
        known().into_iter().map(choice).collect()
    }

    /// A method matters only where a chosen rulebook has a leak rate.
    pub fn site_form_asks_method(&self) -> bool {
        known().into_iter().any(|book| !book.rates.is_empty() && self.plant.site_form.is_on(&format!("rulebook {}", book.id)))
    }

    pub fn site_form_ready(&self) -> Ready {
        let form = &self.plant.site_form;
        if form.trimmed("name").is_empty() {
            Ready::not(say::name_it("site"))
        } else if form.changing && form.trimmed("reason").is_empty() {
            Ready::not(say::why_it_changes())
        } else if form.has_errors() {
            Ready::not(say::amend())
        } else {
            Ready::yes()
        }
    }

    pub(super) fn update_site_form(&mut self, app: &App, msg: FormMsg) -> Vec<Go> {
        let form = &mut self.plant.site_form;
        match msg {
            FormMsg::Edited(field, text) => form.set(&field, text),
            FormMsg::Chosen("rulebook", key) => {
                let field = format!("rulebook {key}");
                form.switch(&field, !form.is_on(&field));
            }
            FormMsg::Chosen(field, key) => form.set(field, key),
            FormMsg::Switched(field, on) => form.switch(&field, on),
            FormMsg::More(more) => form.more = more,
            FormMsg::Anew => {
                self.forget(app, DRAFT);
                self.begin_site_form(app, None);
                return Vec::new();
            }
            FormMsg::Save => return self.save_site(app),
        }
        let kept = self.plant.site_form.keep(app, DRAFT);
        self.tell(kept);
        Vec::new()
    }

    fn save_site(&mut self, app: &App) -> Vec<Go> {
        if !self.site_form_ready().ready {
            return Vec::new();
        }
        let rulebooks = self.rulebooks_in_order();
        let form = &mut self.plant.site_form;
        let from = form.take("valid-from", day(form.text("valid-from"))).flatten();
        if form.changing && from.is_none() && form.error("valid-from").is_empty() {
            form.wrong("valid-from", say::lasts_from());
        }
        if form.has_errors() {
            return Vec::new();
        }
        let facts = SiteFacts {
            owner: form.trimmed("owner"),
            operator: form.trimmed("operator"),
            address: form.trimmed("address"),
            rate_method: RateMethod::from_name(form.text("method")).unwrap_or(RateMethod::Annualizing),
            time_zone: form.trimmed("time-zone"),
            ..SiteFacts::under(rulebooks)
        };
        let (name, reason) = (form.trimmed("name"), form.trimmed("reason"));
        let done = match self.plant.changed_site {
            Some(site) => app.change_site(site, facts, from.unwrap_or(self.today), &reason).map(|()| site),
            None => app.add_site(NewSite { name, facts }),
        };
        match done {
            Ok(site) => {
                if self.plant.changed_site.is_none() {
                    self.forget(app, DRAFT);
                }
                self.plant.back();
                self.plant.show(Pane::Site(site));
                self.written(app)
            }
            Err(error) => {
                self.fault(error, |office| &mut office.plant.site_form, &FIELDS);
                Vec::new()
            }
        }
    }

    /// As the site had them; those added come after.
    fn rulebooks_in_order(&self) -> Vec<String> {
        let registers = self.overview.as_ref().map(|overview| &overview.registers);
        let site = self.plant.changed_site.and_then(|id| registers?.site(id));
        let before = site.map(|site| site.versions.latest().rulebooks.clone()).unwrap_or_default();
        let on = |id: &str| self.plant.site_form.is_on(&format!("rulebook {id}"));
        let added = known().into_iter().map(|book| book.id.clone()).filter(|id| !before.contains(id));
        before.iter().cloned().chain(added).filter(|id| on(id)).collect()
    }
}
