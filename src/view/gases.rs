//! Gases as they are typed.

use super::shown::Choice;
use super::words;
use crate::gas::{self, Gas};

/// Gases offered at most while typing.
const MOST_OFFERED: usize = 6;
/// Before anything is typed: what is met most often in plant rooms (common practice).
const USUAL: [&str; MOST_OFFERED] = ["R-22", "R-410A", "R-404A", "R-134a", "R-448A", "R-513A"];

/// Gases that fit what is typed so far, the ones that begin with it first; none once one is written out.
pub fn gases_like(typed: &str) -> Vec<Choice> {
    let typed = typed.trim();
    if gas::find(typed).is_some_and(|gas| gas.designation() == typed) {
        return Vec::new();
    }
    let plain = |text: &str| text.chars().filter(|c| c.is_alphanumeric()).flat_map(char::to_lowercase).collect::<String>();
    let typed = plain(typed);
    if typed.is_empty() {
        return USUAL.into_iter().filter(|name| gas::find(name).is_some()).map(Choice::word).collect();
    }
    let bare = typed.trim_start_matches('r');
    let begins = |name: &str| plain(name).trim_start_matches('r').starts_with(bare);
    let mut found: Vec<&str> =
        gas::all().iter().map(Gas::designation).filter(|name| begins(name) || plain(name).contains(&typed)).collect();
    found.sort_by_key(|name| (!begins(name), name.len()));
    found.into_iter().take(MOST_OFFERED).map(Choice::word).collect()
}

/// The catalogue's own name for a gas.
///
/// # Errors
/// A sentence with the names that come near.
pub fn gas_named(typed: &str) -> Result<String, String> {
    let typed = typed.trim();
    gas::find(typed).map(|gas| gas.designation().to_owned()).ok_or_else(|| words::unknown_gas(typed, &gas::like(typed)))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn offered(typed: &str) -> Vec<String> {
        gases_like(typed).into_iter().map(|choice| choice.key).collect()
    }

    #[test]
    fn gases_are_offered_as_they_are_typed() {
        assert_eq!(offered("22")[0], "R-22");
        assert_eq!(offered("r2")[0], "R-22");
        assert!(offered("r404").contains(&"R-404A".to_owned()));
        assert!(offered("04a").contains(&"R-404A".to_owned()), "in the middle of a name too");
        assert_eq!(offered(""), USUAL);
        assert!(offered("R-22").is_empty(), "it is written out");
        assert!(offered("water vapour").is_empty());
    }

    #[test]
    fn a_gas_has_its_catalogue_name() {
        assert_eq!(gas_named(" r22 "), Ok("R-22".to_owned()));
        assert!(gas_named("R-999").unwrap_err().contains("R-999"));
    }
}
