//! What an entry has to say to mean something to those who read it. Asked of
//! new entries alone: a correction mends history, which may have said less.

use super::{Kind, Refusal};
use crate::app::AppError;
use crate::app::inputs::{ChargeInput, RepairInput, TestInput};
use crate::ledger::{ChargePurpose, GasStatus, Scope, TestKind, TestResult};

fn missing(field: &'static str, sentence: &str) -> Result<(), AppError> {
    Err(AppError::input(field, sentence))
}

/// A found leak has a place, a test of a part names the parts, and a verification test its repair.
pub(in crate::app) fn of_test(input: &TestInput) -> Result<(), AppError> {
    if input.result == Some(TestResult::LeakFound) && input.leaks.iter().all(|leak| leak.place.trim().is_empty()) {
        return missing("leaks", "Write down where the leak is.");
    }
    if input.scope == Some(Scope::Part) && input.parts.trim().is_empty() && input.place.trim().is_empty() {
        return missing("parts", "Write which parts were looked at.");
    }
    let verifies = matches!(input.kind, TestKind::InitialVerification | TestKind::FollowUpVerification);
    if verifies && input.repair.is_none() {
        return missing("repair", "Say which repair this test verifies. Enter the repair first.");
    }
    Ok(())
}

/// A repair has a place, and something was done there.
pub(in crate::app) fn of_repair(input: &RepairInput) -> Result<(), AppError> {
    if input.place.trim().is_empty() {
        return missing("place", "Write where it was repaired.");
    }
    if input.done.trim().is_empty() {
        return missing("done", "Write what was done.");
    }
    Ok(())
}

/// Gas for the same leak names the charge that it belongs to; used gas says where it was made fit.
/// The charge can be worked out without, so these stand beside what else stands against it.
pub(in crate::app) fn of_charge(input: &ChargeInput, status: Option<GasStatus>, source: &str) -> Vec<Refusal> {
    let not_said = |sentence: &str| Refusal::firm(Kind::NotSaid, sentence.to_owned(), "");
    let mut refusals = Vec::new();
    if input.purpose == ChargePurpose::SameLeak && input.same_leak_as.is_none() {
        refusals.push(not_said("Choose the earlier charge whose leak this is."));
    }
    if matches!(status, Some(GasStatus::Recycled | GasStatus::Reclaimed)) && source.is_empty() {
        refusals.push(not_said("Write where the gas comes from: facility, address, batch, certificate."));
    }
    refusals
}
