//! Canonical JSON: the same facts give the same bytes.
//!
//! Keys sorted by code point, no blanks, integers and text only, everything
//! beyond ASCII as itself in UTF-8.
//!
//! FROZEN: fingerprints of closed records rest on these bytes.

use serde::Serialize;
use serde_json::Value;

/// Why something has no canonical form.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum NotCanonical {
    #[error("{0} is not a whole number; a closed record holds whole numbers and text only")]
    Fraction(String),
    #[error("this cannot be written down: {0}")]
    Unwritable(String),
}

/// The canonical text of `facts`.
///
/// # Errors
/// [`NotCanonical`] when there is a number with a fraction in it.
pub fn canonical_json<T: Serialize + ?Sized>(facts: &T) -> Result<String, NotCanonical> {
    let value = serde_json::to_value(facts).map_err(|e| NotCanonical::Unwritable(e.to_string()))?;
    let mut text = String::new();
    write(&value, &mut text)?;
    Ok(text)
}

fn write(value: &Value, text: &mut String) -> Result<(), NotCanonical> {
    match value {
        Value::Number(number) if number.is_f64() => return Err(NotCanonical::Fraction(number.to_string())),
        Value::Null | Value::Bool(_) | Value::Number(_) => text.push_str(&value.to_string()),
        Value::String(string) => quote(string, text),
        Value::Array(items) => {
            text.push('[');
            for (index, item) in items.iter().enumerate() {
                if index > 0 {
                    text.push(',');
                }
                write(item, text)?;
            }
            text.push(']');
        }
        Value::Object(fields) => {
            let mut fields: Vec<(&String, &Value)> = fields.iter().collect();
            fields.sort_by_key(|(key, _)| *key);
            text.push('{');
            for (index, (key, value)) in fields.into_iter().enumerate() {
                if index > 0 {
                    text.push(',');
                }
                quote(key, text);
                text.push(':');
                write(value, text)?;
            }
            text.push('}');
        }
    }
    Ok(())
}

/// Escapes only what JSON must escape, written out so that no library's taste can change it.
fn quote(string: &str, text: &mut String) {
    text.push('"');
    for character in string.chars() {
        match character {
            '"' => text.push_str("\\\""),
            '\\' => text.push_str("\\\\"),
            control if (control as u32) < 0x20 => text.push_str(&format!("\\u{:04x}", control as u32)),
            other => text.push(other),
        }
    }
    text.push('"');
}

#[cfg(test)]
mod tests {
    use super::*;
    use serde_json::json;

    #[test]
    fn keys_are_sorted_and_blanks_left_out() {
        let facts = json!({ "b": [1, -2, "x"], "a": { "z": null, "é": true, "e": "R-22 \u{2192} 4,54 kg" } });
        assert_eq!(canonical_json(&facts).unwrap(), r#"{"a":{"e":"R-22 → 4,54 kg","z":null,"é":true},"b":[1,-2,"x"]}"#);
    }

    #[test]
    fn only_what_must_be_escaped_is() {
        assert_eq!(canonical_json("a\"b\\c\nd/e").unwrap(), "\"a\\\"b\\\\c\\u000ad/e\"");
    }

    #[test]
    fn what_it_writes_reads_back() {
        let facts = json!({ "text": "tab\there \u{1} \u{7f} \u{2028} 🧊", "n": 9_000_000_000_000_000_000_i64 });
        let read: Value = serde_json::from_str(&canonical_json(&facts).unwrap()).unwrap();
        assert_eq!(read, facts);
    }

    #[test]
    fn fractions_are_refused() {
        assert_eq!(canonical_json(&json!([1.5])), Err(NotCanonical::Fraction("1.5".to_owned())));
    }
}
