//! Parsing and printing are each other's inverse; nothing rounded is compared.

use bubblepoint::quantity::{Mass, MassUnit, Ratio, decimal_text, parse_decimal, rounded_text};
use bubblepoint::rules::{Verdict, annualized};
use proptest::prelude::*;

proptest! {
    #![proptest_config(super::cases(256))]

    #[test]
    fn a_mass_reads_back_as_printed(units in -9_000_000_000_000_000_000_i64..9_000_000_000_000_000_000) {
        let mass = Mass::from_i64(units);
        prop_assert_eq!(Mass::parse(&mass.kg_text(), MassUnit::Kilogram).unwrap(), mass);
        prop_assert_eq!(mass.to_i64(), Some(units));
    }

    #[test]
    fn pounds_and_ounces_are_sixteenths(pounds in 0_u32..10_000, hundredths in 0_u32..1600) {
        let ounces = format!("{}.{:02}", hundredths / 100, hundredths % 100);
        let both = Mass::parse(&format!("{pounds} {ounces}"), MassUnit::PoundOunce).unwrap();
        let apart = Mass::parse(&pounds.to_string(), MassUnit::Pound).unwrap() + Mass::parse(&ounces, MassUnit::Ounce).unwrap();
        prop_assert_eq!(both, apart);
    }

    #[test]
    fn a_decimal_reads_back_as_printed(number in -1_000_000_000_000_i64..1_000_000_000_000, places in 0_u32..12) {
        let value = Ratio::new(i128::from(number), 10_i128.pow(places));
        prop_assert_eq!(parse_decimal(&decimal_text(value).unwrap()).unwrap(), value);
    }

    #[test]
    fn rounding_is_never_more_than_half_a_step_off(numer in 0_i64..1_000_000_000, denom in 1_i64..1_000_000) {
        let value = Ratio::new(i128::from(numer), i128::from(denom));
        let shown = parse_decimal(&rounded_text(value, 2)).unwrap();
        let off = if shown > value { shown - value } else { value - shown };
        prop_assert!(off <= Ratio::new(1, 200));
    }

    /// The verdict follows the exact sum, whatever the rounded figure shows.
    #[test]
    fn the_verdict_is_that_of_whole_numbers(added in 1_i64..100_000, charge in 1_i64..1_000_000, days in 1_i64..800, trigger in 1_i64..60) {
        let (a, f) = (Mass::parse(&format!("0.{added:05}"), MassUnit::Pound), Mass::parse(&format!("0.{charge:06}"), MassUnit::Pound));
        let (a, f) = (a.unwrap(), f.unwrap());
        let rate = annualized(a, f, days, 365);
        let left = 36_500 * i128::from(added) * 10;
        let right = i128::from(trigger) * i128::from(charge) * i128::from(days.min(365));
        prop_assert_eq!(Verdict::of(rate, Ratio::from_integer(i128::from(trigger))) as i8, (left.cmp(&right) as i8) + 1);
    }
}
