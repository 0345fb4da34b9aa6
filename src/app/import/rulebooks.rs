//! A company's own rulebooks: read, made known, kept in the store.

use super::{ImportError, Imported, Parts, Remark};
use crate::exchange::csv::BadLine;
use crate::rules::{Adopted, BookFault, OwnBook, adopt, read_own};
use crate::store::{Writing, fingerprint_of};
use std::path::Path;

/// Told from the file's name: what stands in a CSV is told from its header,
/// and a rulebook has none.
pub(super) fn is_rulebook(file: &str) -> bool {
    Path::new(file).extension().is_some_and(|extension| extension.eq_ignore_ascii_case("toml"))
}

impl Parts {
    /// Reads a rulebook and makes it known, so that the lines read after it may name it.
    pub(super) fn read_rulebook(&mut self, file: &str, bytes: &[u8], bad: &mut Vec<BadLine>) -> Option<Adopted> {
        match read(file, bytes) {
            Ok(own) => {
                let adopted = adopt([own.book.clone()]);
                self.rulebooks.push((file.to_owned(), own));
                Some(adopted)
            }
            Err(mut lines) => {
                bad.append(&mut lines);
                None
            }
        }
    }
}

fn read(file: &str, bytes: &[u8]) -> Result<OwnBook, Vec<BadLine>> {
    let bad = |line, message| BadLine { file: file.to_owned(), line, column: String::new(), message };
    let text = std::str::from_utf8(bytes).map_err(|error| vec![bad(0, format!("is no UTF-8 text: {error}; save it as UTF-8"))])?;
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    read_own(text, &fingerprint_of(text.as_bytes())).map_err(|faults| {
        let told = |fault: BookFault| bad(fault.line, format!("field {}: {}", fault.field, fault.message));
        faults.into_iter().map(told).collect()
    })
}

/// Keeps them. One that takes another's place is remarked on: from now on
/// past days are judged by its rows too.
pub(super) fn take(tx: &Writing<'_>, books: &[(String, OwnBook)], taken: &mut Imported) -> Result<(), ImportError> {
    for (file, own) in books {
        let id = &own.book.id;
        if tx.put_rulebook(id, &own.text)? {
            let message = format!("takes the place of the rulebook \u{201c}{id}\u{201d} that was there");
            taken.remarks.push(Remark { file: file.clone(), line: 1, message });
        }
        taken.rulebooks += 1;
    }
    Ok(())
}
