//! Quantities as written on a command line or in a field: number and unit in one, `26.2l`, `25barg`, `12lb4.5oz`.

use super::{Mass, MassError, MassUnit, Ratio, Weighing, parse_decimal};

/// A quantity that cannot be read. Each sentence says what would do.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum QuantityError {
    #[error("\u{201c}{text}\u{201d} is not {kind} such as {example}")]
    NotReadable { text: String, kind: &'static str, example: &'static str },
    #[error("\u{201c}{text}\u{201d}: unknown unit of {kind} \u{201c}{unit}\u{201d}; known are {known}")]
    UnknownUnit { text: String, kind: &'static str, unit: String, known: &'static str },
    #[error("\u{201c}{text}\u{201d} does not say whether it is gauge or absolute; write {text}g or {text}a")]
    GaugeOrAbsolute { text: String },
    #[error("\u{201c}{text}\u{201d} is out of range: {bound}")]
    OutOfRange { text: String, bound: &'static str },
    /// A number whose unit stands elsewhere: in the name of a column or of a field.
    #[error("\u{201c}{text}\u{201d} is not {kind} in {unit} such as {example}; {bound}")]
    NotInUnit { text: String, kind: &'static str, unit: &'static str, example: &'static str, bound: &'static str },
    #[error(transparent)]
    Mass(#[from] MassError),
}

/// A kind of quantity, for its messages.
pub(super) struct Kind {
    pub(super) name: &'static str,
    pub(super) example: &'static str,
    pub(super) known: &'static str,
}

/// Digits that keep every unit's arithmetic well inside 128 bits.
const MOST_DIGITS: usize = 15;

impl Kind {
    /// Parts `26.2l` into its number and its unit. A blank between the two is taken.
    pub(super) fn split<'a>(&self, text: &'a str) -> Result<(Ratio, &'a str), QuantityError> {
        let trimmed = text.trim();
        let end = trimmed.find(|c: char| !(c.is_ascii_digit() || matches!(c, '.' | ',' | '-' | '\u{2212}'))).unwrap_or(trimmed.len());
        let (number, unit) = trimmed.split_at(end);
        let digits = number.bytes().filter(u8::is_ascii_digit).count();
        match parse_decimal(number) {
            Ok(value) if digits <= MOST_DIGITS && !unit.is_empty() => Ok((value, unit.trim_start())),
            _ => Err(self.not_readable(text)),
        }
    }

    /// Reads a number above zero whose unit stands elsewhere.
    pub(super) fn bare(text: &str) -> Option<Ratio> {
        let digits = text.bytes().filter(u8::is_ascii_digit).count();
        parse_decimal(text).ok().filter(|number| digits <= MOST_DIGITS && *number > Ratio::from_integer(0))
    }

    pub(super) fn not_readable(&self, text: &str) -> QuantityError {
        QuantityError::NotReadable { text: text.to_owned(), kind: self.name, example: self.example }
    }

    pub(super) fn unknown_unit(&self, text: &str, unit: &str) -> QuantityError {
        QuantityError::UnknownUnit { text: text.to_owned(), kind: self.name, unit: unit.to_owned(), known: self.known }
    }
}

const MASS: Kind = Kind { name: "a mass", example: "4.5kg or 12lb4.5oz", known: "kg, g, lb, oz" };

impl Weighing {
    /// Reads a mass with its unit: `10lb`, `4.5kg`, `8oz`, `12lb4.5oz`.
    ///
    /// # Errors
    /// No number, no or an unknown unit, or as [`Mass::parse`].
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        let trimmed = text.trim();
        if let Some((pounds, ounces)) = trimmed.split_once("lb").filter(|(_, rest)| !rest.is_empty()) {
            let ounces = ounces.trim().strip_suffix("oz").ok_or_else(|| MASS.not_readable(text))?;
            let both = Self::new(format!("{} {}", pounds.trim(), ounces.trim()), MassUnit::PoundOunce);
            both.mass()?;
            return Ok(both);
        }
        let (_, unit) = MASS.split(trimmed)?;
        let known = MassUnit::from_name(unit).ok().filter(|known| *known != MassUnit::PoundOunce);
        let known = known.ok_or_else(|| MASS.unknown_unit(text, unit))?;
        let weighing = Self::new(trimmed.strip_suffix(unit).unwrap_or(trimmed).trim_end(), known);
        weighing.mass()?;
        Ok(weighing)
    }
}

impl Mass {
    /// As [`Weighing::from_written`], the mass alone.
    ///
    /// # Errors
    /// As there.
    pub fn from_written(text: &str) -> Result<Self, QuantityError> {
        Ok(Weighing::from_written(text)?.mass()?)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn masses_carry_their_unit() {
        let same = |a: &str, b: &str, unit| assert_eq!(Mass::from_written(a).unwrap(), Mass::parse(b, unit).unwrap());
        same("10lb", "10", MassUnit::Pound);
        same("4,5 kg", "4.5", MassUnit::Kilogram);
        same("8oz", "8", MassUnit::Ounce);
        same("500g", "500", MassUnit::Gram);
        same("12lb4.5oz", "12 4.5", MassUnit::PoundOunce);
        same("-0.3lb", "-0.3", MassUnit::Pound);
        assert_eq!(Weighing::from_written("12lb4.5oz").unwrap().text(), "12 lb 4.5 oz");
    }

    #[test]
    fn what_has_no_unit_is_refused_with_an_example() {
        let message = |text: &str| Mass::from_written(text).unwrap_err().to_string();
        assert_eq!(message("10"), "\u{201c}10\u{201d} is not a mass such as 4.5kg or 12lb4.5oz");
        assert_eq!(message("10stone"), "\u{201c}10stone\u{201d}: unknown unit of a mass \u{201c}stone\u{201d}; known are kg, g, lb, oz");
        for text in ["", "kg", "ten kg", "1e3kg", "12lb16oz", "12lb4", "9999999999999999kg", "5lb-oz"] {
            assert!(Mass::from_written(text).is_err(), "{text:?}");
        }
    }
}
