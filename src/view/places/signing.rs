//! The representative signs a record that was closed without.

use super::plant::Pane;
use super::{Go, Office};
use crate::app::App;
use crate::ledger::{Counterpart, Ink, Signature, Visit, VisitState};
use crate::view::shown::Ready;
use crate::view::visit::close::{InkMsg, draw};
use crate::view::words;

/// Who signs, and what is drawn so far.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct State {
    pub name: String,
    pub ink: Ink,
}

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Begin,
    Name(String),
    Ink(InkMsg),
    Sign,
}

/// Whether the representative may still sign: at closing nobody did, and nobody has since.
pub(super) fn may_sign(visit: &Visit, signed_later: bool) -> bool {
    let unsigned = visit.closing.as_ref().is_some_and(|closing| !matches!(closing.counterpart, Counterpart::Signed { .. }));
    visit.state == VisitState::Closed && unsigned && !signed_later
}

impl State {
    pub fn ready(&self) -> Ready {
        if self.name.trim().is_empty() {
            Ready::not(words::name_missing())
        } else if self.ink.is_empty() {
            Ready::not(words::not_signed("representative"))
        } else {
            Ready::yes()
        }
    }
}

impl Office {
    pub(super) fn update_signing(&mut self, app: &App, msg: Msg) -> Vec<Go> {
        match msg {
            Msg::Begin => {
                let name = self.plant.record.as_ref().filter(|page| page.can_sign).map(|page| page.signer.clone());
                self.plant.signing = name.map(|name| State { name, ink: Ink::default() });
            }
            Msg::Name(name) => {
                if let Some(signing) = &mut self.plant.signing {
                    signing.name = name;
                }
            }
            Msg::Ink(msg) => {
                if let Some(signing) = &mut self.plant.signing {
                    draw(&mut signing.ink, msg);
                }
            }
            Msg::Sign => return self.countersign(app),
        }
        Vec::new()
    }

    fn countersign(&mut self, app: &App) -> Vec<Go> {
        let (Pane::Record(visit, _), Some(signing)) = (self.plant.pane, &self.plant.signing) else { return Vec::new() };
        if !signing.ready().ready {
            return Vec::new();
        }
        match app.countersign(visit, Signature { name: signing.name.trim().to_owned(), ink: signing.ink.clone() }) {
            Ok(()) => {
                self.plant.signing = None;
                self.refresh_pages(app);
                self.written(app)
            }
            Err(error) => {
                self.fail(&error);
                Vec::new()
            }
        }
    }
}
