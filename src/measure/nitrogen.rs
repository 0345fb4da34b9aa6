//! Dry nitrogen as a real gas, for pressure holds.

/// J/(mol K), exact in the SI since 2019, to ten digits.
pub(super) const GAS_CONSTANT: f64 = 8.314_462_618;

/// g/mol: Span and others 2000, as in `CoolProp` 8.0.0.
pub(super) const MOLAR_MASS: f64 = 28.0134;

pub const NITROGEN_SOURCE: &str =
    "nitrogen: virial coefficients fitted to CoolProp 8.0.0 (Span et al. 2000), -40 to 80 \u{b0}C, to 60 bar, within 2 mbar";

/// Coefficients of `B`, cm³/mol, in powers of 300 K/T from the third down to none.
const B: [f64; 4] = [1.808, -15.968, -30.889, 40.522];
/// The same of `C`, cm⁶/mol².
const C: [f64; 4] = [-108.0, 965.5, -926.4, 1441.1];
/// The same of `D`, cm⁹/mol³.
const D: [f64; 4] = [0.0, 0.0, -22_140.0, 43_600.0];

/// Where the coefficients were fitted.
const KELVIN: std::ops::RangeInclusive<f64> = 233.15..=353.15;
const MOST_PASCAL: f64 = 6.0e6;

fn polynomial(coefficients: [f64; 4], kelvin: f64) -> f64 {
    coefficients.iter().fold(0.0, |sum, coefficient| sum * (300.0 / kelvin) + coefficient)
}

/// `Z = 1 + B ρ + C ρ² + D ρ³`, with the density in mol/m³.
fn compressibility(density: f64, kelvin: f64) -> f64 {
    let (b, c, d) = (polynomial(B, kelvin) * 1e-6, polynomial(C, kelvin) * 1e-12, polynomial(D, kelvin) * 1e-18);
    1.0 + density * (b + density * (c + density * d))
}

/// Pa at a density in mol/m³.
pub(super) fn pressure(density: f64, kelvin: f64) -> f64 {
    density * GAS_CONSTANT * kelvin * compressibility(density, kelvin)
}

/// mol/m³ at a pressure in Pa; `None` outside -40 to 80 °C and above 60 bar absolute.
pub(super) fn density(pascal: f64, kelvin: f64) -> Option<f64> {
    if !KELVIN.contains(&kelvin) || !(0.0..=MOST_PASCAL).contains(&pascal) {
        return None;
    }
    let ideal = pascal / (GAS_CONSTANT * kelvin);
    // Z is within 2 % of one here: each round wins some two digits.
    Some((0..20).fold(ideal, |density, _| ideal / compressibility(density, kelvin)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn density_and_pressure_agree() {
        for (pascal, kelvin) in [(1e5, 293.15), (2.6e6, 258.15), (6e6, 353.15)] {
            let density = density(pascal, kelvin).unwrap();
            assert!((pressure(density, kelvin) / pascal - 1.0).abs() < 1e-12, "{pascal} {kelvin}");
        }
        assert!(density(6.1e6, 293.15).is_none() && density(1e5, 200.0).is_none());
    }
}
