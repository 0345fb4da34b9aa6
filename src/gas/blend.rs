//! A gas of the catalogue: one substance, or a blend computed from its parts.

use super::safety::{Limits, SafetyClass};
use super::saturation::Saturation;
use super::source::{Figure, Source, source};
use super::substance::{EuListing, GwpSet, Substance, substance};
use super::table::{self, Row};
use crate::quantity::{Ratio, parse_decimal};
use num_traits::{One, Zero};
use std::collections::HashMap;
use std::sync::LazyLock;

/// What a gas is in the catalogue for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    Refrigerant,
    /// Met only as a part of blends.
    Component,
    Halon,
    Solvent,
}

/// One substance of a gas and its share of the mass.
#[derive(Debug, Clone, Copy)]
pub struct Part {
    pub substance: &'static Substance,
    /// Nominal, from 0 to 1.
    pub fraction: Ratio,
}

/// A gas of the catalogue.
#[derive(Debug)]
pub struct Gas {
    designation: String,
    role: Role,
    parts: Vec<Part>,
    composition_source: &'static Source,
    safety_class: Option<SafetyClass>,
    limits: Limits,
    molar_mass: Option<Figure>,
    critical: Option<Figure>,
    boiling_bubble: Option<Figure>,
    boiling_dew: Option<Figure>,
    fluid_source: &'static Source,
    note: String,
    pub(super) saturation: Saturation,
}

impl Gas {
    /// `R-448A`.
    pub fn designation(&self) -> &str {
        &self.designation
    }

    pub fn role(&self) -> Role {
        self.role
    }

    /// A pure gas is one part of 1.
    pub fn parts(&self) -> &[Part] {
        &self.parts
    }

    pub fn composition_source(&self) -> &'static Source {
        self.composition_source
    }

    pub fn is_blend(&self) -> bool {
        self.parts.len() > 1
    }

    /// kg CFC-11 equivalent per kg, by the Montreal Protocol's annexes, part by part.
    pub fn odp(&self) -> Ratio {
        mixture(self.parts.iter().map(|part| (part.fraction, part.substance.odp().value)))
    }

    /// kg CO₂ equivalent per kg by one set, part by part, not rounded; `None` if the set lacks a part.
    pub fn gwp(&self, set: GwpSet) -> Option<Ratio> {
        self.sum_of(|part| part.substance.gwp(set))
    }

    /// What `set` knows of this gas: the sum over the parts it lists, and the share of the mass it does not.
    /// With a share left, the sum is a lower bound.
    pub fn gwp_at_least(&self, set: GwpSet) -> (Ratio, Ratio) {
        let mut sum = Ratio::zero();
        let mut missing = Ratio::zero();
        for part in &self.parts {
            match part.substance.gwp(set) {
                Some(gwp) => sum += part.fraction * gwp.value,
                None => missing += part.fraction,
            }
        }
        (sum, missing)
    }

    pub(super) fn sum_of(&self, value: impl Fn(&Part) -> Option<Figure>) -> Option<Ratio> {
        let parts: Option<Vec<_>> = self.parts.iter().map(|part| Some((part.fraction, value(part)?.value))).collect();
        Some(mixture(parts?))
    }

    /// Any part is controlled by Annex A, B, C or E of the Montreal Protocol.
    pub fn has_ods(&self) -> bool {
        self.parts.iter().any(|part| part.substance.is_ods())
    }

    pub fn solely_ods(&self) -> bool {
        self.parts.iter().all(|part| part.substance.is_ods())
    }

    /// Any part stands in Annex I of Regulation (EU) 2024/573.
    pub fn has_hfc_or_pfc(&self) -> bool {
        self.parts.iter().any(|part| part.substance.eu_listing() == EuListing::AnnexI)
    }

    /// Any part is listed in 42 U.S.C. 7675(c).
    pub fn has_us_regulated(&self) -> bool {
        self.parts.iter().any(|part| part.substance.us_regulated())
    }

    /// Share of the mass that Annex II, section 1 of Regulation (EU) 2024/573 lists.
    pub fn hfo_fraction(&self) -> Ratio {
        self.parts.iter().filter(|part| part.substance.eu_listing() == EuListing::AnnexIiSection1).map(|part| part.fraction).sum()
    }

    /// Safety group, `A2L`, with its source.
    pub fn safety_class(&self) -> Option<&SafetyClass> {
        self.safety_class.as_ref()
    }

    pub fn limits(&self) -> &Limits {
        &self.limits
    }

    /// g/mol.
    pub fn molar_mass(&self) -> Option<Figure> {
        self.molar_mass
    }

    /// Critical temperature in °C.
    pub fn t_crit(&self) -> Option<Figure> {
        self.critical
    }

    /// °C at 1 atm, as the first bubble forms.
    pub fn boiling_bubble(&self) -> Option<Figure> {
        self.boiling_bubble
    }

    /// °C at 1 atm, as the last drop goes.
    pub fn boiling_dew(&self) -> Option<Figure> {
        self.boiling_dew
    }

    /// Where pressures and densities come from.
    pub fn fluid_source(&self) -> &'static Source {
        self.fluid_source
    }

    /// What a reader should know of the figures; may be empty.
    pub fn note(&self) -> &str {
        &self.note
    }

    fn read(row: &Row) -> Option<Self> {
        let designation = row.get("designation");
        let (parts, composition_source) = match COMPOSITIONS.iter().find(|(blend, _, _)| blend == designation) {
            Some((_, parts, source)) => (parts.clone(), *source),
            None => (vec![Part { substance: substance(designation)?, fraction: Ratio::one() }], source("pure")?),
        };
        Some(Self {
            role: match row.get("role") {
                "component" => Role::Component,
                "halon" => Role::Halon,
                "solvent" => Role::Solvent,
                _ => Role::Refrigerant,
            },
            parts,
            composition_source,
            safety_class: SafetyClass::read(row),
            limits: Limits::read(row),
            molar_mass: row.figure("molar_mass", "fluid_source"),
            critical: row.figure("critical_c", "critical_source"),
            boiling_bubble: row.figure("boiling_bubble_c", "fluid_source"),
            boiling_dew: row.figure("boiling_dew_c", "fluid_source"),
            fluid_source: source(row.get("fluid_source"))?,
            note: row.get("note").to_owned(),
            saturation: Saturation::read(designation, row),
            designation: designation.to_owned(),
        })
    }
}

/// The mixture rule of Regulation (EU) 2024/573, Annex VI, and 40 CFR 84.64(b): the sum of mass fraction times value, not rounded.
pub fn mixture(parts: impl IntoIterator<Item = (Ratio, Ratio)>) -> Ratio {
    parts.into_iter().map(|(fraction, value)| fraction * value).sum()
}

/// Blend, its parts, their source.
type Composition = (String, Vec<Part>, &'static Source);

static COMPOSITIONS: LazyLock<Vec<Composition>> =
    LazyLock::new(|| table::rows(include_str!("data/blends.csv")).iter().filter_map(composition).collect());

fn composition(row: &Row) -> Option<Composition> {
    let part = |text: &str| {
        let (designation, fraction) = text.rsplit_once(':')?;
        Some(Part { substance: substance(designation)?, fraction: parse_decimal(fraction).ok()? })
    };
    let parts: Option<Vec<Part>> = row.get("composition").split(';').map(part).collect();
    Some((row.get("designation").to_owned(), parts?, source(row.get("source"))?))
}

static GASES: LazyLock<Vec<Gas>> =
    LazyLock::new(|| table::rows(include_str!("data/properties.csv")).iter().filter_map(Gas::read).collect());

/// Whole stores are judged by names: each looks its gas up many times.
static BY_DESIGNATION: LazyLock<HashMap<&'static str, &'static Gas>> =
    LazyLock::new(|| GASES.iter().map(|gas| (gas.designation.as_str(), gas)).collect());

/// The whole catalogue, pure gases first.
pub fn all() -> &'static [Gas] {
    &GASES
}

/// Finds a gas by its designation without regard to case, blanks and hyphens: `r448a`, `R 448 A`, `R-448A`.
pub fn find(name: &str) -> Option<&'static Gas> {
    // Registers hold designations as the catalogue writes them; only what people type needs the second look.
    BY_DESIGNATION.get(name).copied().or_else(|| {
        let wanted = plain(name);
        GASES.iter().find(|gas| plain(&gas.designation) == wanted)
    })
}

/// Designations that begin as `name` does, for a message about an unknown gas: `R-410` gives `R-410A`.
pub fn like(name: &str) -> Vec<&'static str> {
    let wanted = plain(name);
    if wanted.len() < 2 {
        return Vec::new();
    }
    GASES.iter().map(Gas::designation).filter(|known| plain(known).starts_with(&wanted)).collect()
}

fn plain(name: &str) -> String {
    // Papers print the hyphen in several lengths.
    let hyphens = ['-', '\u{2010}', '\u{2011}', '\u{2012}', '\u{2013}', '\u{2212}'];
    name.chars().filter(|c| !c.is_whitespace() && !hyphens.contains(c)).flat_map(char::to_uppercase).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::decimal_text;

    fn gas(name: &str) -> &'static Gas {
        find(name).unwrap()
    }

    #[test]
    fn the_catalogue_is_whole() {
        assert_eq!(all().len(), 100);
        assert_eq!(all().iter().filter(|gas| gas.is_blend()).count(), 60);
        for gas in all() {
            assert!(gas.parts().iter().map(|part| part.fraction).sum::<Ratio>().is_one(), "{}", gas.designation());
            assert!(gas.molar_mass().is_some(), "{}", gas.designation());
        }
    }

    #[test]
    fn names_are_found_as_people_write_them() {
        for name in ["r448a", "R 448 A", "R-448A", " r\u{2011}448a "] {
            assert_eq!(find(name).unwrap().designation(), "R-448A");
        }
        assert_eq!(gas("r1234ze(e)").designation(), "R-1234ze(E)");
        assert!(find("R-9999").is_none() && find("").is_none() && find("410A").is_none());
        for one in all() {
            assert_eq!(find(one.designation()).unwrap().designation(), one.designation(), "two names are one");
        }
    }

    #[test]
    fn an_unknown_name_gets_its_neighbours() {
        assert_eq!(like("r410"), ["R-410A"]);
        assert!(like("R").is_empty());
    }

    #[test]
    fn blends_are_computed_exactly() {
        let text = |value: Option<Ratio>| decimal_text(value.unwrap()).unwrap();
        assert_eq!(text(gas("R-410A").gwp(GwpSet::IpccAr4)), "2087.5");
        assert_eq!(text(gas("R-448A").gwp(GwpSet::Eu573)), "1385.9961");
        assert_eq!(decimal_text(gas("R-502").odp()).unwrap(), "0.33404");
        // AR4 has no value for the two HFOs of R-448A.
        assert_eq!(gas("R-448A").gwp(GwpSet::IpccAr4), None);
        let (sum, missing) = gas("R-448A").gwp_at_least(GwpSet::IpccAr4);
        assert_eq!((decimal_text(sum).unwrap(), decimal_text(missing).unwrap()), ("1385.8".into(), "0.27".into()));
    }

    #[test]
    fn scope_questions() {
        let is = |name: &str| {
            let gas = gas(name);
            (gas.has_ods(), gas.solely_ods(), gas.has_hfc_or_pfc(), gas.has_us_regulated(), decimal_text(gas.hfo_fraction()).unwrap())
        };
        assert_eq!(is("R-22"), (true, true, false, false, "0".into()));
        assert_eq!(is("R-401A"), (true, false, true, true, "0".into()));
        assert_eq!(is("R-406A"), (true, false, false, false, "0".into()));
        assert_eq!(is("R-403B"), (true, false, true, false, "0".into()));
        assert_eq!(is("R-448A"), (false, false, true, true, "0.27".into()));
        assert_eq!(is("R-1233zd(E)"), (false, false, false, false, "1".into()));
        assert_eq!(is("R-514A"), (false, false, false, false, "0.747".into()));
        assert_eq!(is("R-744"), (false, false, false, false, "0".into()));
    }
}
