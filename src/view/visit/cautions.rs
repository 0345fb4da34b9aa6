//! Cautions come before the act, acknowledged once per visit and kind.

use super::Panel;
use crate::app::AppError;
use crate::gas;
use crate::record::{CautionText, Circumstances, fitting};
use crate::view::desk::Desk;
use crate::view::shown::{Caution, Ready};
use crate::view::words;

#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Msg {
    Acknowledge(String),
    GoOn,
}

#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Shown {
    pub act: String,
    pub appliance: String,
    pub cautions: Vec<Caution>,
    pub ready: Ready,
}

impl Desk {
    /// The cautions that fit the act that is about to be opened.
    fn cautions_before(&self, panel: Panel) -> Result<Vec<&'static CautionText>, AppError> {
        let Some(act) = panel.cautious() else { return Ok(Vec::new()) };
        let standing = self.app.appliance_standing(self.appliance_in_hand()?, self.today_there()?)?;
        Ok(fitting(&Circumstances {
            act,
            gas: gas::find(&standing.facts.refrigerant),
            place: &standing.facts.place,
            heavy_cylinder: false,
        }))
    }

    fn is_acknowledged(&self, number: &str) -> bool {
        self.work.as_ref().is_some_and(|work| work.cautions.iter().any(|seen| seen.caution == number))
    }

    pub(super) fn unacknowledged(&self, panel: Panel) -> Result<bool, AppError> {
        Ok(self.cautions_before(panel)?.iter().any(|caution| !self.is_acknowledged(caution.number)))
    }

    pub(in crate::view) fn update_cautions(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Acknowledge(number) => {
                if !self.is_acknowledged(&number) {
                    self.app.acknowledge(self.work()?.visit.id, &number, None)?;
                }
                self.reload_visit()
            }
            Msg::GoOn => {
                let next = self.work()?.next;
                if self.unacknowledged(next)? { Ok(()) } else { self.begin_act(next) }
            }
        }
    }

    /// The page of cautions before an act.
    ///
    /// # Errors
    /// No visit is open; the store's own.
    pub fn cautions_shown(&self) -> Result<Shown, AppError> {
        let next = self.work()?.next;
        let cautions = self.cautions_before(next)?;
        let cautions: Vec<Caution> = cautions.into_iter().map(|caution| shown(caution, self.is_acknowledged(caution.number))).collect();
        let ready = cautions.iter().all(|caution| caution.acknowledged);
        Ok(Shown {
            act: act_name(next).to_owned(),
            appliance: self.appliance_words()?,
            cautions,
            ready: if ready { Ready::yes() } else { Ready::not(words::acknowledge_each()) },
        })
    }
}

pub(super) fn shown(caution: &CautionText, acknowledged: bool) -> Caution {
    Caution {
        key: caution.number.to_owned(),
        text: caution.text.to_owned(),
        basis: caution.basis.to_owned(),
        acknowledge: caution.acknowledge.to_owned(),
        acknowledged,
    }
}

fn act_name(panel: Panel) -> &'static str {
    match panel {
        Panel::Recover => "Recover",
        Panel::LeakTest => "Leak test",
        Panel::Repair => "Repair",
        Panel::Pressure => "Pressure or vacuum",
        _ => "Charge",
    }
}
