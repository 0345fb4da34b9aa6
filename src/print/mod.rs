//! Paper: service records, annual accounts and lists of duties as PDF, on A4 and Letter.
//!
//! Pages are composed as marks in points (`sheet`), put on pages (`layout`) and
//! written by `pdf`, the only file that names printpdf. The same record on the
//! same paper gives the same bytes.

mod account;
mod chart;
mod due;
mod entry;
mod fonts;
mod layout;
mod mark;
mod part;
mod pdf;
mod plate;
mod service;
mod sheet;
mod signing;
mod words;

pub use account::annual_account;
pub use due::due_list;
pub use service::{print_id, service_record};
pub use sheet::Paper;

/// Why nothing could be printed.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum PrintError {
    /// A name that is signed, or identifies who or what was worked on, must stand on paper as it is.
    #[error(
        "{field}, \u{201c}{text}\u{201d}, has the character \u{201c}{character}\u{201d} (U+{code:04X}), which the record\u{2019}s font \
         cannot print; write it in Latin, Greek or Cyrillic letters", code = u32::from(*character)
    )]
    Character { field: String, text: String, character: char },
    #[error("the program\u{2019}s own font could not be used: {0}")]
    Font(String),
    #[error("the PDF could not be written: {0}")]
    Pdf(String),
}

/// The characters of `text` that paper cannot show, each once, in order. In
/// names and addresses they stop the print; elsewhere they are printed as
/// `[U+4E2D]`. Line breaks and tabs are no such characters.
///
/// # Errors
/// [`PrintError::Font`] when the program's own font cannot be read.
pub fn missing_characters(text: &str) -> Result<Vec<char>, PrintError> {
    let fonts = fonts::Fonts::get()?;
    let mut missing = Vec::new();
    for character in text.chars() {
        if !matches!(character, '\n' | '\r' | '\t') && !fonts.has(character) && !missing.contains(&character) {
            missing.push(character);
        }
    }
    Ok(missing)
}

/// Refuses a text that paper cannot show as it is.
fn must_show(fonts: &fonts::Fonts, field: &str, text: &str) -> Result<(), PrintError> {
    match text.chars().find(|c| !matches!(c, '\n' | '\r' | '\t') && !fonts.has(*c)) {
        None => Ok(()),
        Some(character) => Err(PrintError::Character { field: field.to_owned(), text: text.to_owned(), character }),
    }
}
