//! Which corresponding variable of a block is its intensity, and what it counts.

use super::block::Block;
use super::experiment::{Experiment, Label};
use super::keyword::{ScanMode, SignalMode};
use crate::parse::header::{self, Reading};
use crate::parse::role::{Kind, Role};
use crate::quantity::IntensityUnit;
use crate::schema::IntensityKind;

/// The standard's unit of a number without dimension.
const DIMENSIONLESS: &str = "d";

/// What a label says, as the header of a column would.
pub(super) fn reading(label: &Label) -> Reading {
    header::read(&label.label, Kind::Spectrum)
}

impl Experiment {
    /// The 0-based corresponding variable that holds the intensity of a block; `None` where no
    /// variable or more than one is named as one.
    #[must_use]
    pub fn intensity_variable(&self, curve: usize) -> Option<usize> {
        intensity(self.blocks.get(curve)?, self.scan_mode).ok()
    }
}

/// The variable that holds the intensity: the one named so, or the only one where its unit says it.
pub(super) fn intensity(block: &Block, scan_mode: ScanMode) -> Result<usize, String> {
    let first = usize::from(scan_mode == ScanMode::Irregular);
    let ordinates = || block.variables.iter().enumerate().skip(first);
    let named: Vec<(usize, &Label)> = ordinates()
        .filter(|(_, variable)| reading(variable).role == Some(Role::Intensity))
        .collect();
    match (named.as_slice(), ordinates().next(), ordinates().count()) {
        (&[(index, _)], ..) => Ok(index),
        ([], Some((index, only)), 1) if is_intensity_by_unit(only) => Ok(index),
        ([], None, _) => Err("there is no corresponding variable for an intensity".into()),
        ([], ..) => Err(format!(
            "no corresponding variable is named as an intensity: {}",
            names(ordinates().map(|(_, variable)| variable))
        )),
        (several, ..) => Err(format!(
            "more than one corresponding variable is named as an intensity: {}",
            names(several.iter().map(|&(_, variable)| variable))
        )),
    }
}

fn is_intensity_by_unit(variable: &Label) -> bool {
    let role = reading(variable).role;
    role.is_none() && IntensityUnit::from_spelling(&variable.units).is_some()
}

fn names<'a>(variables: impl Iterator<Item = &'a Label>) -> String {
    let names: Vec<String> = variables
        .map(|variable| format!("`{}`", variable.label))
        .collect();
    names.join(", ")
}

/// What an intensity is. A signal that is no pulse counting has no counting statistics, whatever its
/// unit says.
pub(super) fn kind(variable: &Label, mode: SignalMode) -> Result<IntensityKind, String> {
    if mode == SignalMode::Analogue {
        return Ok(IntensityKind::Arbitrary);
    }
    let units: &str = variable.units.trim();
    let unit = match IntensityUnit::from_spelling(units) {
        Some(unit) => unit,
        None if units == DIMENSIONLESS => IntensityUnit::Counts,
        None => {
            return Err(format!(
                "pulses were counted and the unit `{units}` of `{}` is neither counts nor a rate",
                variable.label
            ));
        }
    };
    if contradicts(variable, unit) {
        return Err(format!(
            "the name `{}` and the unit `{units}` of the intensity contradict each other",
            variable.label
        ));
    }
    Ok(unit.into())
}

/// Whether the name gives another unit than the unit itself.
fn contradicts(variable: &Label, unit: IntensityUnit) -> bool {
    let name = variable.label.to_lowercase();
    // `counts` alone is a name, and may have any unit.
    let is_name = !name.contains(['(', '[', '/']);
    let said = |text: &String| {
        let said = IntensityUnit::from_spelling(text);
        said.filter(|&said| !(is_name && said == IntensityUnit::Counts))
    };
    let other = reading(variable)
        .units
        .iter()
        .filter_map(said)
        .any(|said| said != unit);
    let rate = name
        .split(|c: char| !c.is_alphanumeric())
        .any(|word| matches!(word, "rate" | "second"));
    other || (rate && unit == IntensityUnit::Counts)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn label(label: &str, units: &str) -> Label {
        Label {
            label: label.into(),
            units: units.into(),
        }
    }

    fn counted(name: &str, units: &str) -> Option<IntensityKind> {
        kind(&label(name, units), SignalMode::PulseCounting).ok()
    }

    #[test]
    fn kinds() {
        use IntensityKind::{Arbitrary, Counts, CountsPerSecond};
        for (name, units, expected) in [
            ("intensity", "d", Some(Counts)),
            ("counts", "d", Some(Counts)),
            ("Intensity", "counts", Some(Counts)),
            ("Intensity", "c/s", Some(CountsPerSecond)),
            ("counts", "c/s", Some(CountsPerSecond)),
            ("counts/s", "c/s", Some(CountsPerSecond)),
            ("intensity", "arbitrary", Some(Arbitrary)),
            // Two readings, or none.
            ("counts/s", "d", None),
            ("cps", "counts", None),
            ("count rate", "d", None),
            ("counts per second", "d", None),
            ("intensity (counts)", "c/s", None),
            ("intensity", "nA", None),
            ("intensity", "", None),
        ] {
            assert_eq!(counted(name, units), expected, "{name}, {units}");
        }
        for units in ["nA", "d", "c/s"] {
            let analogue = kind(&label("intensity", units), SignalMode::Analogue);
            assert_eq!(analogue, Ok(Arbitrary), "{units}");
        }
    }

    #[test]
    fn intensity_is_the_one_variable_named_so() {
        let among = |scan_mode, names: &[(&str, &str)]| {
            let block = Block {
                variables: names.iter().map(|(name, unit)| label(name, unit)).collect(),
                ..Block::default()
            };
            intensity(&block, scan_mode)
        };
        let regular = |names: &[(&str, &str)]| among(ScanMode::Regular, names);
        assert_eq!(regular(&[("transmission", "d"), ("counts", "d")]), Ok(1));
        assert_eq!(regular(&[("yield", "c/s")]), Ok(0));
        let irregular = [("kinetic energy", "eV"), ("yield", "c/s")];
        assert_eq!(among(ScanMode::Irregular, &irregular), Ok(1));
        for names in [
            &[("yield", "c/s"), ("background", "c/s")] as &[_],
            &[("yield", "d")],
            &[("standard uncertainty", "c/s")],
            &[("counts", "d"), ("intensity", "d")],
            &[],
        ] {
            assert!(regular(names).is_err(), "{names:?}");
        }
        assert!(among(ScanMode::Irregular, &irregular[..1]).is_err());
    }
}
