//! Cautions come before the act, acknowledged once per visit and kind.

use super::Panel;
use crate::app::{AppError, ApplianceStanding};
use crate::gas;
use crate::record::{CautionText, Circumstances, fitting, is_heavy};
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
            heavy_cylinder: panel == Panel::Recover && self.heavy_cylinder(&standing)?,
        }))
    }

    /// The cylinder that is filled, or one that may be, weighs more when it is full than one person lifts.
    fn heavy_cylinder(&self, standing: &ApplianceStanding) -> Result<bool, AppError> {
        let today = self.today_there()?;
        let chosen = self.work()?.recover.as_ref().and_then(|form| form.weighing.cylinder);
        let fitting = chosen.map_or_else(|| self.fitting_cylinders(Panel::Recover), |chosen| Ok(vec![chosen]))?;
        for cylinder in fitting {
            let cylinder = self.app.cylinder_standing(cylinder, today)?;
            let limit = self.limit_of(standing, Some(&cylinder))?.and_then(|limit| limit.binding);
            // Of a cylinder without a known limit nobody can say that it stays light.
            if limit.is_none_or(|limit| is_heavy(cylinder.facts.tare + limit.net)) {
                return Ok(true);
            }
        }
        Ok(false)
    }

    pub(super) fn is_acknowledged(&self, number: &str) -> bool {
        self.work.as_ref().is_some_and(|work| work.cautions.iter().any(|seen| seen.caution == number))
    }

    pub(super) fn unacknowledged(&self, panel: Panel) -> Result<bool, AppError> {
        Ok(self.cautions_before(panel)?.iter().any(|caution| !self.is_acknowledged(caution.number)))
    }

    pub(in crate::view) fn update_cautions(&mut self, msg: Msg) -> Result<(), AppError> {
        match msg {
            Msg::Acknowledge(number) => {
                if !self.is_acknowledged(&number) {
                    let work = self.work()?;
                    self.app.acknowledge(work.visit.id, &number, work.person_in_hand())?;
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
            act: words::act(next),
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
