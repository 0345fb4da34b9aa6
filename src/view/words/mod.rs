//! What the screens say beyond their own fixed labels: one function each,
//! English. Words of the law and the trade come from their lists in `ledger`
//! and `rules`; refusals from `app`.

mod act;
pub mod captions;
pub mod office;
mod visit;
mod weighing;

pub use act::*;
pub use visit::*;
pub use weighing::*;

use crate::ledger::Counterpart;

/// A cause as a sentence: capital first, full stop last.
pub fn sentence(cause: &str) -> String {
    let text = super::format::capital(cause.trim());
    if text.ends_with(['.', '!', '?']) || text.is_empty() { text } else { text + "." }
}

pub fn today() -> String {
    "today".to_owned()
}

pub fn not_above_zero(text: &str) -> String {
    format!("\u{201c}{text}\u{201d} is not a number above zero.")
}

pub fn cannot_write(path: &str, cause: &str) -> String {
    format!("{path} cannot be written: {cause}. Look whether the folder is there and has room.")
}

pub fn demonstration() -> String {
    "Demonstration: invented people and places".to_owned()
}

pub fn not_known() -> String {
    "not known".to_owned()
}

/// How the owner's or operator's side ended a visit.
pub fn counterpart(counterpart: &Counterpart) -> String {
    match counterpart {
        Counterpart::Signed { signature } => format!("{}, signed", signature.name),
        Counterpart::NobodyPresent => "nobody present".to_owned(),
        Counterpart::Refused { name, reason } => super::format::commas([name.as_str(), &format!("refused: {reason}")]),
        Counterpart::SignsLater { name } => format!("{name}, signs later"),
    }
}

pub fn to_complete() -> String {
    "to complete".to_owned()
}
