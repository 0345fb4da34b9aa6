//! Rulebooks, leak rates, scope and duties. Exact: no float, no clock.

mod assess;
mod ban;
mod book;
mod duty;
mod history;
mod loss;
mod marks;
mod own;
mod rate;
mod readings;
mod recovery_level;
mod scope;
mod why;

pub use assess::{Assessment, Judgement, assess, weights};
pub use ban::{InstallationBan, ServiceBan, installation_bans, service_bans};
pub use book::{Band, Basis, Detection, DutyKind, DutyRow, Extension, InForce, Rulebook};
pub use duty::{Duty, DutyState};
pub use history::{History, Work};
pub use loss::{Loss, LossEntry, loss_between, loss_entries};
pub use own::{Adopted, BookFault, OwnBook, adopt, known, read_own, rulebook};
pub use rate::{LeakRate, Verdict, WeighingBand, annualized, leak_rates, trigger};
pub use readings::{Reading, readings, why_no_rate};
pub use recovery_level::{RecoveryLevel, pressure_class, recovery_level};
pub use scope::{Applicability, applicability, months, strictest_band};
pub use why::{MonthlyDisposal, Point, alert_mass, monthly_disposals, points, release_row};
