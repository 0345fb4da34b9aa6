//! What people type: figures with point or comma, masses with their unit, and
//! keys of the number pad.

use crate::quantity::{MassUnit, Ratio, Weighing, parse_decimal};

/// No scale or gauge shows more signs than this.
const MOST_SIGNS: usize = 10;

/// One key of the number pad: a digit, `.`, or `back`.
pub fn press(text: &mut String, key: &str) {
    match key {
        "back" => drop(text.pop()),
        "." | "," if text.contains('.') => {}
        "." | "," => text.push_str(if text.is_empty() { "0." } else { "." }),
        digit if digit.len() == 1 && digit.bytes().all(|b| b.is_ascii_digit()) && text.len() < MOST_SIGNS => {
            // A leading nought only stands before a decimal sign.
            if text == "0" {
                text.clear();
            }
            text.push_str(digit);
        }
        _ => {}
    }
}

/// A number such as `12.5` or `12,5`; `None` where nothing was typed.
///
/// # Errors
/// A sentence that says what was typed.
pub fn number(text: &str) -> Result<Option<Ratio>, String> {
    let text = text.trim();
    if text.is_empty() {
        return Ok(None);
    }
    parse_decimal(text).map(Some).map_err(|e| super::words::sentence(&e.to_string()))
}

/// A mass with its unit, as `12.5 kg`, `12,5`, `10 lb`, `12 lb 4.5 oz`; `None`
/// where nothing was typed. Without a unit, `unit` is meant.
///
/// # Errors
/// A sentence that says what was typed.
pub fn mass(text: &str, unit: MassUnit) -> Result<Option<Weighing>, String> {
    let text = text.trim();
    if text.is_empty() {
        return Ok(None);
    }
    let weighing = with_unit(text, unit);
    weighing.mass().map_err(|e| super::words::sentence(&e.to_string()))?;
    Ok(Some(weighing))
}

fn with_unit(text: &str, unit: MassUnit) -> Weighing {
    let lower = text.to_lowercase();
    if let Some((pounds, ounces)) = lower.strip_suffix("oz").and_then(|rest| rest.split_once("lb")) {
        return Weighing::new(format!("{} {}", pounds.trim(), ounces.trim()), MassUnit::PoundOunce);
    }
    // The longest name first: `kg` ends in `g`.
    for known in [MassUnit::Kilogram, MassUnit::Pound, MassUnit::Ounce, MassUnit::Gram] {
        if let Some(figure) = lower.strip_suffix(known.name()) {
            return Weighing::new(figure.trim(), known);
        }
    }
    Weighing::new(text, unit)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn typed(keys: &[&str]) -> String {
        let mut text = String::new();
        keys.iter().for_each(|key| press(&mut text, key));
        text
    }

    #[test]
    fn keys_make_a_number() {
        assert_eq!(typed(&["0", "2", "4", ".", "1", ",", "8"]), "24.18");
        assert_eq!(typed(&[".", "5"]), "0.5");
        assert_eq!(typed(&["1", "2", "back", "back", "back"]), "");
        assert_eq!(typed(&["1"; 14]).len(), MOST_SIGNS);
        assert_eq!(typed(&["x", "12", "7"]), "7");
    }

    #[test]
    fn point_and_comma_mean_the_same() {
        assert_eq!(number("12.5"), number("12,5"));
        assert_eq!(number("12,5").unwrap(), Some(Ratio::new(25, 2)));
        assert_eq!(number("  "), Ok(None));
        assert!(number("12..5").is_err());
    }

    #[test]
    fn masses_are_read_with_their_unit() {
        let read = |text: &str| mass(text, MassUnit::Kilogram).unwrap().unwrap().text();
        assert_eq!(read("12,5"), "12,5 kg");
        assert_eq!(read("10 lb"), "10 lb");
        assert_eq!(read("12 lb 4.5 oz"), "12 lb 4.5 oz");
        assert_eq!(read("800g"), "800 g");
        assert!(mass("much", MassUnit::Kilogram).unwrap_err().contains("much"));
        assert_eq!(mass("", MassUnit::Kilogram), Ok(None));
    }
}
