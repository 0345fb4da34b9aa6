//! Safety groups and limits of concentration.

use super::source::{Figure, Source, source};
use super::table::Row;

/// Safety group of ANSI/ASHRAE 34 and ISO 817.
#[derive(Debug, PartialEq, Eq)]
pub struct SafetyClass {
    name: String,
    source: &'static Source,
}

impl SafetyClass {
    /// `A1`, `A2L`, `B2L` …
    pub fn name(&self) -> &str {
        &self.name
    }

    pub fn source(&self) -> &'static Source {
        self.source
    }

    /// Any flammability above 1: 2L, 2 or 3.
    pub fn is_flammable(&self) -> bool {
        !self.name.ends_with('1')
    }

    /// Group B.
    pub fn is_toxic(&self) -> bool {
        self.name.starts_with('B')
    }

    pub(super) fn read(row: &Row) -> Option<Self> {
        let name = row.get("safety_class");
        (!name.is_empty()).then_some(Self { name: name.to_owned(), source: source(row.get("safety_source"))? })
    }
}

/// Limits of concentration in a room. Each may be unknown.
#[derive(Debug)]
pub struct Limits {
    /// Refrigerant concentration limit, ppm by volume.
    pub rcl_ppm: Option<Figure>,
    /// Refrigerant concentration limit, g/m³.
    pub rcl_g_m3: Option<Figure>,
    /// The lower of the acute-toxicity and the oxygen-deprivation limit, kg/m³.
    pub toxic_kg_m3: Option<Figure>,
    /// Lower flammability limit, kg/m³.
    pub lfl_kg_m3: Option<Figure>,
    /// Practical limit of EN 378-1, kg/m³.
    pub practical_kg_m3: Option<Figure>,
}

impl Limits {
    pub(super) fn read(row: &Row) -> Self {
        Self {
            rcl_ppm: row.figure("rcl_ppm", "rcl_source"),
            rcl_g_m3: row.figure("rcl_g_m3", "rcl_source"),
            toxic_kg_m3: row.figure("toxic_kg_m3", "limits_source"),
            lfl_kg_m3: row.figure("lfl_kg_m3", "limits_source"),
            practical_kg_m3: row.figure("practical_kg_m3", "limits_source"),
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::gas::{Standing, all, find, table};

    #[test]
    fn no_limit_is_lost_for_want_of_a_source() {
        for row in table::rows(include_str!("data/properties.csv")) {
            let gas = find(row.get("designation")).unwrap();
            let limits = gas.limits();
            for (name, figure) in [
                ("rcl_ppm", limits.rcl_ppm),
                ("rcl_g_m3", limits.rcl_g_m3),
                ("toxic_kg_m3", limits.toxic_kg_m3),
                ("lfl_kg_m3", limits.lfl_kg_m3),
                ("practical_kg_m3", limits.practical_kg_m3),
                ("critical_c", gas.t_crit()),
            ] {
                assert_eq!(row.get(name).is_empty(), figure.is_none(), "{} {name}", gas.designation());
            }
            assert_eq!(row.get("safety_class").is_empty(), gas.safety_class().is_none(), "{}", gas.designation());
        }
    }

    #[test]
    fn classes_say_what_burns_and_what_poisons() {
        let class = |name: &str| find(name).unwrap().safety_class().map(|class| (class.is_flammable(), class.is_toxic()));
        assert_eq!(class("R-410A"), Some((false, false)));
        assert_eq!(class("R-32"), Some((true, false)));
        assert_eq!(class("R-717"), Some((true, true)));
        assert_eq!(class("R-123"), Some((false, true)));
        assert_eq!(class("R-503"), None);
    }

    /// The two figures of an RCL come from one source and must tell one story through the molar mass (24.45 l/mol at 25 °C).
    #[test]
    fn ppm_and_grams_agree() {
        for gas in all() {
            let (Some(ppm), Some(grams), Some(molar)) = (gas.limits().rcl_ppm, gas.limits().rcl_g_m3, gas.molar_mass()) else { continue };
            let computed = ppm.as_f64() * 1e-6 * molar.as_f64() / 0.02445;
            assert!((computed / grams.as_f64() - 1.0).abs() < 0.09, "{}: {computed:.3} {}", gas.designation(), grams.as_f64());
        }
    }

    #[test]
    fn remembered_limits_are_marked() {
        let limit = find("R-454B").unwrap().limits().rcl_g_m3.unwrap();
        assert_eq!(limit.source.standing(), Standing::FromMemory);
        assert!(limit.source.to_string().ends_with("(from memory)"));
    }
}
