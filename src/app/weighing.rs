//! From readings as typed to a net mass.

use super::AppError;
use crate::ledger::{Instrument, Reading, Transfer, WeighingMode};
use crate::measure::{Direction, ScaleReading, Uncertainty, net};
use crate::quantity::{Mass, Weighing};

/// A transfer's mass as weighed.
#[derive(Debug)]
pub(super) struct Weighed {
    /// Without its cylinder.
    pub transfer: Transfer,
    /// Gross at the start, with the scale's division, where it was weighed so.
    pub gross_before: Option<(Mass, Mass)>,
    pub gross_after: Option<Mass>,
    pub uncertainty: Uncertainty,
}

/// Works out the net of `reading`. The division is the scale's own; where no
/// scale is named, the coarser of the last digits typed.
pub(super) fn weigh(
    reading: &Reading,
    direction: Direction,
    with_cylinder: bool,
    scale: Option<&Instrument>,
    hoses: Mass,
) -> Result<Weighed, AppError> {
    if reading.mode == WeighingMode::NetOnly {
        return net_only(reading, with_cylinder);
    }
    let before = read("before", reading.before.as_ref())?;
    let after = read("after", reading.after.as_ref())?;
    let own = scale.and_then(|scale| scale.division.as_ref()).and_then(|division| division.mass().ok());
    let division = own.unwrap_or_else(|| before.1.last_digit().max(after.1.last_digit()));
    let gross = reading.mode == WeighingMode::Gross;
    for (field, (mass, written)) in [("before", &before), ("after", &after)] {
        if gross && mass.is_negative() {
            let sentence = format!("{} is no gross weight. If the scale was zeroed with the cylinder on it, say so.", written.text());
            return Err(AppError::input(field, sentence));
        }
    }
    let on_scale = |mass| ScaleReading { mass, division, stated_error: None };
    let weighed = net(on_scale(before.0), on_scale(after.0), direction, hoses)
        .map_err(|e| AppError::input("after", sentence(&e.to_string(), gross, direction)))?;
    Ok(Weighed {
        transfer: Transfer { mass: weighed.mass, cylinder: None, division: Some(division), hoses },
        gross_before: gross.then_some((before.0, division)),
        gross_after: gross.then_some(after.0),
        uncertainty: weighed.uncertainty,
    })
}

/// A factory charge is known by its plate alone.
fn net_only(reading: &Reading, with_cylinder: bool) -> Result<Weighed, AppError> {
    if with_cylinder {
        return Err(AppError::input("before", "Gas from or into a cylinder is weighed twice: before and after."));
    }
    let (mass, _) = read("net", reading.net.as_ref())?;
    if !mass.is_positive() {
        return Err(AppError::input("net", "A charge is more than nothing."));
    }
    let transfer = Transfer { mass, cylinder: None, division: None, hoses: Mass::ZERO };
    Ok(Weighed { transfer, gross_before: None, gross_after: None, uncertainty: Uncertainty::default() })
}

fn read<'a>(field: &'static str, written: Option<&'a Weighing>) -> Result<(Mass, &'a Weighing), AppError> {
    let written =
        written.filter(|written| !written.typed.trim().is_empty()).ok_or_else(|| AppError::input(field, "This reading is missing."))?;
    let mass = written.mass().map_err(|e| AppError::input(field, format!("{e}.")))?;
    Ok((mass, written))
}

/// A zeroed scale is read with its sign; without it a charge looks like a recovery.
fn sentence(cause: &str, gross: bool, direction: Direction) -> String {
    let mut text = cause.to_owned();
    if let Some(first) = text.get_mut(..1) {
        first.make_ascii_uppercase();
    }
    let hint = if !gross && direction == Direction::Out { " A zeroed scale runs below zero while charging: type the minus." } else { "" };
    format!("{text}.{hint}")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::MassUnit;

    fn reading(mode: WeighingMode, before: &str, after: &str, unit: MassUnit) -> Reading {
        let written = |text: &str| Some(Weighing::new(text, unit));
        Reading { mode, before: written(before), after: written(after), net: None, scale: None }
    }

    fn weighed(mode: WeighingMode, before: &str, after: &str, unit: MassUnit, direction: Direction) -> Result<String, String> {
        weigh(&reading(mode, before, after, unit), direction, true, None, Mass::ZERO)
            .map(|weighed| weighed.transfer.mass.kg_text())
            .map_err(|e| e.to_string())
    }

    #[test]
    fn two_readings_give_the_net_exactly() {
        use MassUnit::{Kilogram, PoundOunce};
        use WeighingMode::{Gross, Zeroed};
        assert_eq!(weighed(Gross, "24.05", "19.51", Kilogram, Direction::Out).unwrap(), "4.54");
        assert_eq!(weighed(Gross, "19,51", "24,05", Kilogram, Direction::Into).unwrap(), "4.54");
        assert_eq!(weighed(Zeroed, "0.00", "-4.54", Kilogram, Direction::Out).unwrap(), "4.54");
        // 30 lb 4 oz less 20 lb 4 oz: ten pounds.
        assert_eq!(weighed(Gross, "30 4", "20 4.0", PoundOunce, Direction::Out).unwrap(), "4.5359237");
    }

    #[test]
    fn readings_that_go_the_wrong_way_are_refused() {
        use MassUnit::Kilogram;
        use WeighingMode::{Gross, Zeroed};
        let refused = |mode, before: &str, after: &str, direction| weighed(mode, before, after, Kilogram, direction).unwrap_err();
        assert!(refused(Gross, "19.51", "24.05", Direction::Out).starts_with("The cylinder grows heavier by 4.54 kg"));
        assert!(refused(Gross, "24.05", "19.51", Direction::Into).starts_with("The cylinder grows lighter by 4.54 kg"));
        assert!(refused(Zeroed, "0", "4.54", Direction::Out).ends_with("type the minus."));
        assert!(refused(Gross, "24.05", "24.05", Direction::Out).contains("nothing was weighed"));
        assert!(refused(Gross, "-1", "-2", Direction::Out).contains("no gross weight"));
        assert!(refused(Gross, "24,0,5", "1", Direction::Out).contains("is not a number"));
        assert!(refused(Gross, "24.05", " ", Direction::Out).contains("missing"));
    }

    #[test]
    fn the_division_is_the_coarser_last_digit() {
        let read = reading(WeighingMode::Gross, "24.05", "19.5", MassUnit::Kilogram);
        let weighed = weigh(&read, Direction::Out, true, None, Mass::ZERO).unwrap();
        assert_eq!(weighed.transfer.division.unwrap().kg_text(), "0.1");
    }

    #[test]
    fn only_a_factory_charge_is_net_alone() {
        let net = Reading {
            mode: WeighingMode::NetOnly,
            before: None,
            after: None,
            net: Some(Weighing::new("2.5", MassUnit::Kilogram)),
            scale: None,
        };
        assert_eq!(weigh(&net, Direction::Out, false, None, Mass::ZERO).unwrap().transfer.mass.kg_text(), "2.5");
        assert!(weigh(&net, Direction::Out, true, None, Mass::ZERO).is_err());
    }
}
