//! Exact fractions in files: a decimal where it ends, else `365/18`.

use crate::quantity::{Ratio, decimal_text, parse_decimal};
use serde::{Deserialize, Deserializer, Serializer};

/// The decimal without trailing zeros, or `numerator/denominator` where it has no end.
pub(super) fn text(value: Ratio) -> String {
    decimal_text(value).unwrap_or_else(|| format!("{}/{}", value.numer(), value.denom()))
}

fn parse<E: serde::de::Error>(text: &str) -> Result<Ratio, E> {
    let refuse = || E::custom(format!("\u{201c}{text}\u{201d} is neither a decimal nor a fraction such as 365/18"));
    match text.split_once('/') {
        None => parse_decimal(text).map_err(E::custom),
        Some((numer, denom)) => {
            let numer: i128 = numer.parse().map_err(|_| refuse())?;
            let denom: i128 = denom.parse().map_err(|_| refuse())?;
            if denom > 0 { Ok(Ratio::new(numer, denom)) } else { Err(refuse()) }
        }
    }
}

pub(super) fn serialize<S: Serializer>(value: &Ratio, serializer: S) -> Result<S::Ok, S::Error> {
    serializer.serialize_str(&text(*value))
}

pub(super) fn deserialize<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Ratio, D::Error> {
    parse(&String::deserialize(deserializer)?)
}

/// The same for a value that may be unknown: `null`.
pub(super) mod option {
    use super::{Deserialize, Deserializer, Ratio, Serializer, parse, text};

    pub(in crate::record) fn serialize<S: Serializer>(value: &Option<Ratio>, serializer: S) -> Result<S::Ok, S::Error> {
        match value {
            Some(value) => serializer.serialize_str(&text(*value)),
            None => serializer.serialize_none(),
        }
    }

    pub(in crate::record) fn deserialize<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Option<Ratio>, D::Error> {
        Option::<String>::deserialize(deserializer)?.map(|text| parse(&text)).transpose()
    }
}
