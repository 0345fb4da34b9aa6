//! Weighted amounts by the law of a site.

use super::blend::Gas;
use super::source::Figure;
use super::substance::{GwpSet, Substance};
use crate::quantity::Ratio;
use num_traits::Zero;

/// Whose values an account weighs with.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Weighting {
    /// Also Canada.
    UnitedStates,
    EuropeanUnion,
    GreatBritain,
}

impl Weighting {
    pub const ALL: [Self; 3] = [Self::UnitedStates, Self::EuropeanUnion, Self::GreatBritain];

    /// The tables, as an account names them.
    pub fn name(self) -> &'static str {
        match self {
            Self::UnitedStates => "40 CFR 84.64, else IPCC AR4",
            Self::EuropeanUnion => "Regulation (EU) 2024/573, ozone-depleting parts Regulation (EU) 2024/590",
            Self::GreatBritain => "Regulation (EU) No 517/2014",
        }
    }

    /// The value for one substance, from the first of the law's tables that has it.
    pub fn value(self, substance: &Substance) -> Option<Figure> {
        match self {
            Self::UnitedStates => substance.gwp(GwpSet::Us84).or_else(|| substance.gwp(GwpSet::IpccAr4)),
            Self::EuropeanUnion if substance.is_ods() => substance.gwp(GwpSet::Eu590),
            Self::EuropeanUnion => substance.gwp(GwpSet::Eu573),
            Self::GreatBritain => substance.gwp(GwpSet::Gb517),
        }
    }
}

/// A blend's GWP by 40 CFR 84.64(b), where that section knows all it must.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum UsGwp {
    Known(Ratio),
    /// A part that does not deplete ozone has no value in 84.64(b).
    Unknown,
}

impl Gas {
    /// kg CO₂ equivalent per kg by the site's law, part by part; `None` if a part has no value there.
    pub fn weight(&self, weighting: Weighting) -> Option<Ratio> {
        self.sum_of(|part| weighting.value(part.substance))
    }

    /// The GWP that decides on substitutes in 40 CFR 84.106(a)(2). Ozone-depleting parts count as 0: the section is about substitutes.
    pub fn us_substitute_gwp(&self) -> UsGwp {
        let mut sum = Ratio::zero();
        for part in self.parts().iter().filter(|part| !part.substance.is_ods()) {
            match part.substance.gwp(GwpSet::Us84) {
                Some(gwp) => sum += part.fraction * gwp.value,
                None => return UsGwp::Unknown,
            }
        }
        UsGwp::Known(sum)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gas::find;
    use crate::quantity::decimal_text;

    fn weight(name: &str, weighting: Weighting) -> Option<String> {
        find(name).unwrap().weight(weighting).and_then(decimal_text)
    }

    #[test]
    fn each_law_weighs_with_its_own_tables() {
        // Ozone-depleting parts: not in 40 CFR 84.64, so IPCC AR4.
        assert_eq!(weight("R-22", Weighting::UnitedStates).unwrap(), "1810");
        assert_eq!(weight("R-22", Weighting::EuropeanUnion).unwrap(), "1960");
        assert_eq!(weight("R-22", Weighting::GreatBritain).unwrap(), "1810");
        assert_eq!(weight("R-1234yf", Weighting::UnitedStates).unwrap(), "1");
        assert_eq!(weight("R-1234yf", Weighting::EuropeanUnion).unwrap(), "0.501");
        assert_eq!(weight("R-1234yf", Weighting::GreatBritain).unwrap(), "4");
        // A perfluorocarbon is not in 40 CFR 84.64 either; inside one blend each part goes its own way.
        assert_eq!(weight("R-218", Weighting::UnitedStates).unwrap(), "8830");
        assert_eq!(weight("R-401A", Weighting::UnitedStates).unwrap(), "1182.48");
        // 0.53 × 1960 + 0.13 × 124 + 0.34 × 597
        assert_eq!(weight("R-401A", Weighting::EuropeanUnion).unwrap(), "1257.9");
        assert_eq!(weight("R-448A", Weighting::UnitedStates).unwrap(), "1386.07");
    }

    #[test]
    fn a_part_without_a_value_leaves_the_figure_open() {
        // R-13I1 stands in neither 84.64(b) nor IPCC AR4, R-601 neither.
        assert_eq!(weight("R-466A", Weighting::UnitedStates), None);
        assert_eq!(weight("R-437A", Weighting::UnitedStates), None);
        assert_eq!(weight("R-466A", Weighting::EuropeanUnion).unwrap(), "733.25");
    }

    #[test]
    fn substitutes_in_the_united_states() {
        let known = |name: &str| match find(name).unwrap().us_substitute_gwp() {
            UsGwp::Known(gwp) => decimal_text(gwp),
            UsGwp::Unknown => None,
        };
        assert_eq!(known("R-22").unwrap(), "0");
        assert_eq!(known("R-1233zd(E)").unwrap(), "4");
        assert_eq!(known("R-406A").unwrap(), "0.04");
        assert_eq!(known("R-514A").unwrap(), "2.759");
        assert_eq!(known("R-1336mzz(E)"), None);
        assert_eq!(known("R-403B"), None);
    }
}
