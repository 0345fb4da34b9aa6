//! Close: what the visit says, its cautions read again, and two signatures.

use super::cautions::shown as caution_shown;
use super::page::entry_name;
use super::{Panel, judge};
use crate::app::AppError;
use crate::ledger::{Act, Category, Counterpart, Entry, Ink, Signature, TestKind, VisitState};
use crate::quantity::MassUnit;
use crate::record::{CautionText, CautiousAct, Circumstances, caution, fitting};
use crate::store::VisitFilter;
use crate::view::desk::Desk;
use crate::view::shown::{Caution, Fact, Message, Ready};
use crate::view::{format, words};
use serde::{Deserialize, Serialize};

/// How the owner's or operator's representative ends the visit.
pub const SIGNS: &str = "signs";
pub const NOBODY: &str = "nobody present";
pub const REFUSED: &str = "refused";
pub const LATER: &str = "signs later";

#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
#[serde(default)]
pub struct Form {
    pub signing: bool,
    pub technician_ink: Ink,
    pub counterpart: String,
    pub representative: String,
    pub representative_ink: Ink,
    pub refusal_reason: String,
}

impl Default for Form {
    fn default() -> Self {
        Self {
            signing: false,
            technician_ink: Ink::default(),
            counterpart: SIGNS.to_owned(),
            representative: String::new(),
            representative_ink: Ink::default(),
            refusal_reason: String::new(),
        }
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Signer {
    Technician,
    Representative,
}

/// What a pen does on an ink field.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum InkMsg {
    /// `first` begins a stroke.
    Point {
        x: i32,
        y: i32,
        first: bool,
    },
    Lifted,
    Cleared,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Signing(bool),
    Counterpart(String),
    Ink(Signer, InkMsg),
    /// `representative` or `refusal reason`.
    Edited(String, String),
    /// A caution for the way home.
    Acknowledge(String),
    Close,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Part {
    pub name: String,
    pub state: String,
    pub facts: Vec<Fact>,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub site: String,
    pub parts: Vec<Part>,
    pub missing: Vec<String>,
    pub cautions: Vec<Caution>,
    pub signing: bool,
    pub technician: String,
    pub technician_strokes: String,
    pub counterpart: String,
    pub representative: String,
    pub representative_strokes: String,
    pub refusal_reason: String,
    /// What is read again has been read: on to the signatures.
    pub onward: Ready,
    pub ready: Ready,
}

/// Adds to a signature.
pub fn draw(ink: &mut Ink, msg: InkMsg) {
    match msg {
        InkMsg::Point { x, y, first } => {
            let point = (x.clamp(0, Ink::WIDTH), y.clamp(0, Ink::HEIGHT));
            match ink.0.last_mut().filter(|_| !first) {
                Some(stroke) => stroke.push(point),
                None => ink.0.push(vec![point]),
            }
        }
        InkMsg::Lifted => {}
        InkMsg::Cleared => ink.0.clear(),
    }
}

/// A signature as the commands of a path, in the form in which the ink field draws it.
pub fn path(ink: &Ink) -> String {
    use std::fmt::Write;
    let mut path = String::new();
    for stroke in &ink.0 {
        let Some((x, y)) = stroke.first() else { continue };
        // Writing to a string cannot fail.
        let _ = write!(path, "M{x} {y}");
        let _ = write!(path, "L{x} {y}");
        for (x, y) in stroke.iter().skip(1) {
            let _ = write!(path, "L{x} {y}");
        }
    }
    path
}

impl Form {
    pub(super) fn counterpart(&self) -> Counterpart {
        let name = self.representative.trim().to_owned();
        match self.counterpart.as_str() {
            NOBODY => Counterpart::NobodyPresent,
            REFUSED => Counterpart::Refused { name, reason: self.refusal_reason.trim().to_owned() },
            LATER => Counterpart::SignsLater { name },
            _ => Counterpart::Signed { signature: Signature { name, ink: self.representative_ink.clone() } },
        }
    }

    pub(super) fn ready(&self) -> Ready {
        if self.technician_ink.is_empty() {
            return Ready::not(words::not_signed("technician"));
        }
        let named = !self.representative.trim().is_empty();
        match self.counterpart.as_str() {
            SIGNS if !named => Ready::not(words::name_missing()),
            SIGNS if self.representative_ink.is_empty() => Ready::not(words::not_signed("representative")),
            REFUSED if self.refusal_reason.trim().is_empty() => Ready::not(words::refusal_reason_missing()),
            LATER if !named => Ready::not(words::name_missing()),
            _ => Ready::yes(),
        }
    }
}

impl Desk {
    /// The representative's name stands there already where the site's last record has one.
    pub(super) fn prepare_close(&mut self) -> Result<(), AppError> {
        let work = self.work()?;
        if !work.close.representative.is_empty() {
            return Ok(());
        }
        let closed = VisitFilter { site: Some(work.visit.site), state: Some(VisitState::Closed), ..VisitFilter::default() };
        let name = self.app.store().visits(&closed)?.into_iter().rev().find_map(|visit| match visit.closing?.counterpart {
            Counterpart::Signed { signature } => Some(signature.name),
            Counterpart::SignsLater { name } | Counterpart::Refused { name, .. } => Some(name).filter(|name| !name.is_empty()),
            Counterpart::NobodyPresent => None,
        });
        let work = self.work_mut()?;
        work.close.representative = name.unwrap_or_default();
        Ok(())
    }

    pub(in crate::view) fn update_close(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Close => return self.close_visit(),
            Msg::Acknowledge(number) => return self.update_cautions(super::cautions::Msg::Acknowledge(number)),
            _ => {}
        }
        let form = &mut self.work_mut()?.close;
        // A stroke is kept when the pen is lifted.
        let keeps = !matches!(msg, Msg::Ink(_, InkMsg::Point { .. }));
        match msg {
            Msg::Signing(signing) => form.signing = signing,
            Msg::Counterpart(key) => form.counterpart = key,
            Msg::Ink(Signer::Technician, msg) => draw(&mut form.technician_ink, msg),
            Msg::Ink(Signer::Representative, msg) => draw(&mut form.representative_ink, msg),
            Msg::Edited(field, text) if field == "refusal reason" => form.refusal_reason = text,
            Msg::Edited(_, text) => form.representative = text,
            Msg::Close | Msg::Acknowledge(_) => {}
        }
        if keeps { self.keep(Panel::Close, &self.work()?.close) } else { Ok(()) }
    }

    fn close_visit(&mut self) -> Result<(), AppError> {
        let work = self.work()?;
        let (visit, form) = (work.visit.id, work.close.clone());
        let signature = Signature { name: self.technician(), ink: form.technician_ink.clone() };
        let ended = self.app.close_visit(visit, signature, form.counterpart())?;
        self.work = None;
        self.panel = Panel::None;
        self.changed();
        self.show_closed(visit)?;
        // A paper that could not be printed is the graver news.
        if !ended.unsaved.is_empty() && self.message().is_none_or(|message| !message.grave) {
            let begun: Vec<String> = ended.unsaved.iter().map(|one| words::begun_on(&one.action, &one.name)).collect();
            self.say(Message::told(words::dropped(&begun)));
        }
        Ok(())
    }

    /// Whoever is named as at work signs.
    fn technician(&self) -> String {
        let person = self.work.as_ref().and_then(super::Work::person_in_hand);
        person.and_then(|id| self.registers.person(id)).map(|person| person.name.clone()).unwrap_or_default()
    }

    /// The closing page.
    ///
    /// # Errors
    /// No visit is open; the store's own.
    pub fn close_shown(&self) -> Result<Shown, AppError> {
        let work = self.work()?;
        let today = self.today_there()?;
        let (mut parts, mut missing) = (Vec::new(), Vec::new());
        for id in work.appliances() {
            let entries = work.entries_of(id);
            if entries.is_empty() {
                continue;
            }
            let standing = self.app.appliance_standing(id, today)?;
            let judging = judge(&standing, &standing.lines, today, MassUnit::Kilogram, None);
            let fact = |entry: &&Entry| {
                let line = self.entry_line(entry, &work.entries, today);
                let value = if line.state.is_empty() { line.facts.clone() } else { line.state.clone() };
                let value = if line.struck { words::struck("") } else { value };
                Fact::new(format::commas([entry_name(entry).as_str(), line.time.as_str()]), value)
            };
            let mut facts: Vec<Fact> = entries.iter().map(fact).collect();
            facts.extend(judging.duties.iter().map(|duty| Fact::new(&duty.name, &duty.state)));
            let name = standing.appliance.name.as_str();
            if standing.facts.full_charge.is_none() {
                missing.push(words::missing(name, &words::missing_full_charge()));
            }
            if standing.facts.category == Category::Other && standing.site_facts.rulebooks.iter().any(|id| id.starts_with("us-")) {
                missing.push(words::missing(name, &words::missing_category()));
            }
            if wants_initial_test(&entries) {
                missing.push(words::missing(name, &words::missing_initial_test()));
            }
            parts.push(Part {
                name: words::appliance_plate(name, &standing.facts.refrigerant, &format::full_charge(&standing.facts)),
                state: judging.state,
                facts,
            });
        }
        for one in self.app.unsaved(work.visit.id)? {
            missing.push(words::not_saved(&words::begun_on(&one.action, &one.name)));
        }
        for person in work.visit.people.iter().filter_map(|id| self.registers.person(*id)) {
            if person.certificate.is_empty() {
                missing.push(words::missing_certificate(&person.name));
            }
        }
        if self.registers.company().certificate.is_empty() {
            missing.push(words::missing_company());
        }
        let form = &work.close;
        let cautions = self.cautions_read_again()?;
        Ok(Shown {
            site: self.site_name(work.visit.site),
            ready: if parts.is_empty() { Ready::not(words::nothing_to_close()) } else { form.ready() },
            parts,
            missing,
            onward: if cautions.iter().all(|caution| caution.acknowledged) { Ready::yes() } else { Ready::not(words::acknowledge_each()) },
            cautions,
            signing: form.signing,
            technician: self.technician(),
            technician_strokes: path(&form.technician_ink),
            counterpart: form.counterpart.clone(),
            representative: form.representative.clone(),
            representative_strokes: path(&form.representative_ink),
            refusal_reason: form.refusal_reason.clone(),
        })
    }

    /// Those for the way home first, which are acknowledged here, then all that were acknowledged before.
    fn cautions_read_again(&self) -> Result<Vec<Caution>, AppError> {
        let work = self.work()?;
        let moved = work.entries.iter().any(|entry| entry.line.act.transfer().is_some());
        let home = Circumstances { act: CautiousAct::Close, gas: None, place: "", heavy_cylinder: false };
        let home = if moved { fitting(&home) } else { Vec::new() };
        let seen = work.cautions.iter().filter_map(|seen| caution(&seen.caution));
        let seen: Vec<&CautionText> = seen.filter(|seen| !home.contains(seen)).collect();
        Ok(home.into_iter().chain(seen).map(|caution| caution_shown(caution, self.is_acknowledged(caution.number))).collect())
    }
}

/// A lasting repair of this visit that no initial test of it follows.
fn wants_initial_test(entries: &[&Entry]) -> bool {
    let valid: Vec<&&Entry> = entries.iter().filter(|entry| entry.struck_by.is_none()).collect();
    let repaired = valid.iter().rposition(|entry| matches!(entry.line.act, Act::Repair { temporary: false }));
    let tested = valid.iter().rposition(|entry| matches!(entry.line.act, Act::Test { kind: TestKind::InitialVerification, .. }));
    repaired.is_some() && tested < repaired
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn strokes_become_a_path_that_the_ink_field_would_draw() {
        let mut ink = Ink::default();
        draw(&mut ink, InkMsg::Point { x: 10, y: 20, first: true });
        draw(&mut ink, InkMsg::Point { x: 4000, y: -5, first: false });
        draw(&mut ink, InkMsg::Lifted);
        draw(&mut ink, InkMsg::Point { x: 7, y: 8, first: true });
        assert_eq!(path(&ink), "M10 20L10 20L3000 0M7 8L7 8");
        draw(&mut ink, InkMsg::Cleared);
        assert!(ink.is_empty() && path(&ink).is_empty());
    }

    #[test]
    fn what_is_missing_to_close_is_said() {
        let mut form = Form::default();
        assert!(form.ready().why_not.contains("technician"));
        draw(&mut form.technician_ink, InkMsg::Point { x: 1, y: 1, first: true });
        assert!(form.ready().why_not.contains("name"));
        form.counterpart = NOBODY.to_owned();
        assert!(form.ready().ready);
        form.counterpart = REFUSED.to_owned();
        assert!(!form.ready().ready);
        form.refusal_reason = "in a hurry".to_owned();
        assert_eq!(form.counterpart(), Counterpart::Refused { name: String::new(), reason: "in a hurry".to_owned() });
        assert!(form.ready().ready);
    }
}
