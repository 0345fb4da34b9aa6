//! What people type: figures with point or comma, masses with their unit, and
//! keys of the number pad.

use crate::quantity::{MassUnit, QuantityError, Ratio, Volume, Weighing, decimal_text, parse_decimal};

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

/// As [`press`], with `-`, which puts the sign before the figure and takes it away again.
pub fn press_signed(text: &mut String, key: &str) {
    let minus = text.starts_with('-');
    let mut figure = text.trim_start_matches('-').to_owned();
    let minus = match key {
        "-" => !minus,
        "back" if figure.is_empty() => false,
        _ => {
            press(&mut figure, key);
            minus
        }
    };
    *text = if minus { format!("-{figure}") } else { figure };
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

/// A figure that `read` takes, kept as it was written but for its decimal
/// sign; `None` where nothing was typed.
///
/// # Errors
/// A sentence that says what was typed.
pub fn as_written<T>(text: &str, read: impl Fn(&str) -> Result<T, QuantityError>) -> Result<Option<String>, String> {
    let text = text.trim();
    if text.is_empty() {
        return Ok(None);
    }
    read(text).map(|_| Some(text.replace(',', "."))).map_err(|e| super::words::sentence(&e.to_string()))
}

/// Litres from `26.2 l`, `26,2`, or a mass of water such as `47.7 lb` (1 kg of
/// water is taken as 1 l, as on the stamp), as decimal text; `None` where
/// nothing was typed.
///
/// # Errors
/// A sentence that says what was typed.
pub fn litres(text: &str) -> Result<Option<String>, String> {
    let text = text.trim();
    let lower = text.to_lowercase();
    if lower.ends_with("lb") || lower.ends_with("kg") {
        let water = mass(text, MassUnit::Kilogram)?.and_then(|written| written.mass().ok()).and_then(Volume::of_water);
        return match water.and_then(|water| decimal_text(water.litres())) {
            Some(litres) => Ok(Some(litres)),
            None => Err(super::words::not_above_zero(text)),
        };
    }
    as_written(lower.strip_suffix('l').filter(|figure| !figure.is_empty()).unwrap_or(&lower), Volume::from_litres_text)
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
    fn a_sign_goes_on_and_off() {
        let mut text = String::new();
        for (key, shown) in [("1", "1"), ("-", "-1"), (".", "-1."), ("-", "1."), ("-", "-1."), ("back", "-1"), ("back", "-"), ("back", "")]
        {
            press_signed(&mut text, key);
            assert_eq!(text, shown);
        }
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

    #[test]
    fn a_figure_stays_as_written() {
        let read = |text: &str| as_written(text, Volume::from_cubic_metres_text);
        assert_eq!(read("12,50"), Ok(Some("12.50".to_owned())));
        assert_eq!(read(""), Ok(None));
        assert!(read("0").is_err() && read("-1").is_err() && read("x").is_err());
    }

    #[test]
    fn water_capacity_is_litres_or_the_mass_of_water() {
        assert_eq!(litres("26,2"), Ok(Some("26.2".to_owned())));
        assert_eq!(litres("26.2 L"), Ok(Some("26.2".to_owned())));
        assert_eq!(litres("47.7 lb"), Ok(Some("21.636356049".to_owned())));
        assert_eq!(litres(" "), Ok(None));
        for wrong in ["big", "l", "0 l", "-3"] {
            assert!(litres(wrong).is_err(), "{wrong}");
        }
    }
}
