//! What is being typed in a form of the registers, kept so that it outlives
//! the program being killed. Forms of a visit are its drafts.

use super::{App, AppError};

impl App {
    /// Keeps what is being typed; never waits for the disk.
    ///
    /// # Errors
    /// The store's own, where it lies in memory.
    pub fn keep_form(&self, form: &str, body: &str) -> Result<(), AppError> {
        match &self.drafts {
            Some(writer) => writer.put_form(form, body),
            None => self.store.write(self.now(), |tx| tx.put_form(form, body))?,
        }
        Ok(())
    }

    /// What was being typed.
    ///
    /// # Errors
    /// The store's own.
    pub fn kept_form(&self, form: &str) -> Result<Option<String>, AppError> {
        self.flush_drafts()?;
        Ok(self.store.form(form)?)
    }

    /// Saved or given up: what was being typed is of no use any more.
    ///
    /// # Errors
    /// As [`App::keep_form`].
    pub fn forget_form(&self, form: &str) -> Result<(), AppError> {
        match &self.drafts {
            Some(writer) => writer.clear_form(form),
            None => self.store.write(self.now(), |tx| tx.clear_form(form))?,
        }
        Ok(())
    }
}
