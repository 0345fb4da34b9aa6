//! The annual account as a file: its paper and its name.

use super::{App, AppError, fit};
use crate::print::{self, Paper};
use crate::quantity::MassUnit;
use crate::record::AnnualAccount;

impl App {
    /// The account as PDF. Without `paper` it is as set on this device, else
    /// Letter where all masses are in pounds, else A4.
    ///
    /// # Errors
    /// [`AppError::Print`] where a name cannot stand on paper as it is; the store's own.
    pub fn account_pdf(&self, account: &AnnualAccount, paper: Option<Paper>) -> Result<Vec<u8>, AppError> {
        let usual = if account.unit == MassUnit::Pound { Paper::Letter } else { Paper::A4 };
        Ok(print::annual_account(account, paper.or(self.units()?.paper).unwrap_or(usual))?)
    }
}

/// `account 2026.pdf`, or with the owner's name.
pub fn account_file_name(account: &AnnualAccount, ending: &str) -> String {
    let owner = account.owner.as_ref().map(|owner| format!(" {owner}")).unwrap_or_default();
    fit(&format!("account {}{owner}.{ending}", account.year))
}
