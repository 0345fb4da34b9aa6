//! Rulebooks, leak rates, scope and duties. Exact: no float, no clock.

mod assess;
mod book;
mod duty;
mod history;
mod loss;
mod rate;
mod scope;

pub use assess::{Assessment, Judgement, assess, weights};
pub use book::{Band, Basis, DutyKind, DutyRow, Rulebook, Validity, built_in, rulebook};
pub use duty::{Duty, DutyState};
pub use history::{History, Work};
pub use loss::{Loss, LossEntry, loss_between, loss_entries};
pub use rate::{LeakRate, Verdict, WeighingBand, annualized, leak_rates, trigger};
pub use scope::{Applicability, applicability, months, strictest_band};
