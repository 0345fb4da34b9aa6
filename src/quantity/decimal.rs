//! Exact decimals and fractions: read, kept and printed without loss.

/// An exact fraction in lowest terms.
pub type Ratio = num_rational::Ratio<i128>;

/// The text is not a plain decimal number, or has more than 30 digits.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("\u{201c}{0}\u{201d} is not a number such as 12.5")]
pub struct NotADecimal(pub String);

/// Digits of a decimal beyond which sums could leave the 128-bit range.
const MOST_DIGITS: usize = 30;

/// Reads `12`, `12.5` or `12,5`, with an optional leading minus. Exactly one
/// sign of either kind may part the decimals; there is no grouping.
///
/// # Errors
/// [`NotADecimal`] for anything else.
pub fn parse_decimal(text: &str) -> Result<Ratio, NotADecimal> {
    let refuse = || NotADecimal(text.to_owned());
    let trimmed = text.trim();
    let (negative, digits) = match trimmed.strip_prefix(['-', '\u{2212}']) {
        Some(rest) => (true, rest),
        None => (false, trimmed),
    };
    let (whole, part) = match digits.split_once(['.', ',']) {
        Some((whole, part)) => (whole, part),
        None => (digits, ""),
    };
    let count = whole.len() + part.len();
    let plain = |s: &str| s.bytes().all(|b| b.is_ascii_digit());
    if count == 0 || count > MOST_DIGITS || !plain(whole) || !plain(part) {
        return Err(refuse());
    }
    let mut number: i128 = 0;
    for digit in whole.bytes().chain(part.bytes()) {
        number = number * 10 + i128::from(digit - b'0');
    }
    let scale = 10_i128.pow(u32::try_from(part.len()).map_err(|_| refuse())?);
    Ok(Ratio::new(if negative { -number } else { number }, scale))
}

/// The exact decimal of a ratio, without trailing zeros: `0.2494758035`.
/// `None` when it has no end (a third).
pub fn decimal_text(value: Ratio) -> Option<String> {
    let mut rest = *value.denom();
    let (mut twos, mut fives) = (0_u32, 0_u32);
    while rest % 2 == 0 {
        rest /= 2;
        twos += 1;
    }
    while rest % 5 == 0 {
        rest /= 5;
        fives += 1;
    }
    (rest == 1).then(|| {
        let places = twos.max(fives);
        let mut number = *value.numer();
        for _ in twos..places {
            number *= 2;
        }
        for _ in fives..places {
            number *= 5;
        }
        place_point(number, places)
    })
}

/// The ratio with `places` decimals, rounded half up (away from zero), with
/// trailing zeros: the one rounding there is, at display.
pub fn rounded_text(value: Ratio, places: u32) -> String {
    let scaled = value * Ratio::from_integer(10_i128.pow(places));
    place_point(round_half_up(scaled), places)
}

/// The ratio with `places` decimals, cut off below: for a figure beside a
/// limit that it must not seem to reach.
pub fn floored_text(value: Ratio, places: u32) -> String {
    let scaled = value * Ratio::from_integer(10_i128.pow(places));
    place_point(scaled.floor().to_integer(), places)
}

fn round_half_up(value: Ratio) -> i128 {
    let (numer, denom) = (*value.numer(), *value.denom());
    let sign = numer.signum();
    sign * ((2 * numer.abs() + denom) / (2 * denom))
}

fn place_point(number: i128, places: u32) -> String {
    let sign = if number < 0 { "-" } else { "" };
    let scale = 10_i128.pow(places);
    let (whole, part) = (number.abs() / scale, number.abs() % scale);
    if places == 0 {
        return format!("{sign}{whole}");
    }
    let width = places as usize;
    format!("{sign}{whole}.{part:0width$}")
}

/// The square root of a non-negative fraction `numerator / denominator`,
/// with `places` decimals, rounded half up. Exact integers throughout.
pub fn square_root_text(numerator: &num_bigint::BigUint, denominator: &num_bigint::BigUint, places: u32) -> String {
    use num_bigint::BigUint;
    // floor(sqrt(4 n s² / d)) is twice the root in steps of 1/s, so that the
    // last bit says which way to round.
    let scale = BigUint::from(10_u32).pow(places);
    let doubled = (numerator * &scale * &scale * 4_u32 / denominator).sqrt();
    let rounded = (doubled + 1_u32) / 2_u32;
    let whole = &rounded / &scale;
    let part = (&rounded % &scale).to_string();
    if places == 0 {
        return whole.to_string();
    }
    format!("{whole}.{part:0>width$}", width = places as usize)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn both_decimal_signs_are_read() {
        assert_eq!(parse_decimal("12.5").unwrap(), Ratio::new(25, 2));
        assert_eq!(parse_decimal("12,5").unwrap(), Ratio::new(25, 2));
        assert_eq!(parse_decimal(".5").unwrap(), Ratio::new(1, 2));
        assert_eq!(parse_decimal("-3").unwrap(), Ratio::from_integer(-3));
    }

    #[test]
    fn what_is_no_number_is_refused() {
        for text in ["", ".", "1.2.3", "1,234.5", "1e3", "12 4", "abc", "+1", "--1"] {
            assert!(parse_decimal(text).is_err(), "{text:?}");
        }
    }

    #[test]
    fn exact_decimals_have_no_trailing_zeros() {
        assert_eq!(decimal_text(Ratio::new(2_494_758_035, 10_000_000_000)).unwrap(), "0.2494758035");
        assert_eq!(decimal_text(Ratio::from_integer(0)).unwrap(), "0");
        assert_eq!(decimal_text(Ratio::new(1, 8)).unwrap(), "0.125");
        assert_eq!(decimal_text(Ratio::new(-5, 2)).unwrap(), "-2.5");
        assert_eq!(decimal_text(Ratio::new(1, 3)), None);
    }

    #[test]
    fn display_rounds_half_up() {
        // 45.625 shows as 45.63 (40 CFR 82.152 worked with 30 lb, 200 lb, 120 days).
        assert_eq!(rounded_text(Ratio::new(365, 8), 2), "45.63");
        assert_eq!(rounded_text(Ratio::new(365, 18), 2), "20.28");
        assert_eq!(rounded_text(Ratio::new(-1, 8), 2), "-0.13");
        assert_eq!(rounded_text(Ratio::new(5, 2), 0), "3");
    }

    #[test]
    fn a_figure_beside_a_limit_is_cut_off() {
        assert_eq!(floored_text(Ratio::new(49_997, 10_000), 3), "4.999");
        assert_eq!(floored_text(Ratio::new(-1, 8), 2), "-0.13");
        assert_eq!(floored_text(Ratio::from_integer(5), 3), "5.000");
    }

    #[test]
    fn square_roots_round_half_up() {
        let root = |n: u32, d: u32| square_root_text(&n.into(), &d.into(), 2);
        assert_eq!(root(2, 1), "1.41");
        assert_eq!(root(3, 1), "1.73");
        assert_eq!(root(1, 4), "0.50");
        assert_eq!(root(0, 1), "0.00");
    }
}
