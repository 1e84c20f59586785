//! What a block is measured along.

use super::block::{Block, Real};
use super::experiment::Label;
use super::known;
use super::signal::reading;
use super::spectra::column;
use crate::parse::role::Role;
use crate::quantity::{AxisKind, EnergyUnit, Reference};

/// The abscissa of a block.
pub(super) struct Axis<'a> {
    pub label: &'a Label,
    pub line: usize,
    pub kind: AxisKind,
    pub reference: Reference,
    pub unit: EnergyUnit,
    /// Start and increment; without them the first variable is the abscissa.
    regular: Option<(Real, Real)>,
}

impl<'a> Axis<'a> {
    /// The abscissa, where its label says what it is.
    pub(super) fn of(b: &'a Block) -> Result<Self, String> {
        let (label, part, regular) = match (&b.abscissa, b.variables.first()) {
            (Some(axis), _) => (&axis.label, 31, Some((axis.start, axis.increment))),
            (None, Some(variable)) => (variable, 32, None),
            (None, None) => return Err("there is no abscissa".into()),
        };
        let read = reading(label);
        let (Some(Role::Energy), Some(kind)) = (read.role, read.axis) else {
            return Err(format!(
                "the abscissa `{}` is named as neither kinetic, binding nor photon energy",
                label.label
            ));
        };
        Ok(Self {
            label,
            line: b.anchor.parts[part],
            kind,
            reference: read.reference.unwrap_or(Reference::Unknown),
            unit: unit(label, &read.units, kind)?,
            regular,
        })
    }

    /// The energies in eV.
    pub(super) fn energies(&self, b: &Block) -> Result<Vec<f64>, String> {
        let values: Vec<f64> = match self.regular {
            Some((Some(start), Some(increment))) => {
                let rows = b.ordinates.len() / b.variables.len().max(1);
                (0..u32::try_from(rows).unwrap_or(u32::MAX))
                    .map(|row| increment.mul_add(f64::from(row), start))
                    .collect()
            }
            Some(_) => return Err("the start or the increment of the abscissa is unknown".into()),
            None => column(b, 0).collect(),
        };
        if values.iter().any(|&value| known(value).is_none()) {
            return Err("a value of the abscissa is unknown".into());
        }
        let energies: Vec<f64> = values
            .into_iter()
            .map(|value| self.unit.to_electronvolts(value))
            .collect();
        if energies.iter().all(|energy| energy.is_finite()) {
            Ok(energies)
        } else {
            Err("an energy of the abscissa is not finite".into())
        }
    }
}

/// The unit of the energies, which the label may repeat and not contradict.
fn unit(label: &Label, said: &[String], axis: AxisKind) -> Result<EnergyUnit, String> {
    let (name, units) = (&label.label, label.units.trim());
    let unit = EnergyUnit::from_spelling(units)
        .filter(|unit| unit.is_linear() || axis == AxisKind::Photon)
        .ok_or_else(|| format!("the unit `{units}` of the abscissa `{name}` is no energy unit"))?;
    let agrees = |text: &String| EnergyUnit::from_spelling(text) == Some(unit);
    if said.iter().all(agrees) {
        Ok(unit)
    } else {
        Err(format!(
            "the abscissa `{name}` and its unit `{units}` contradict each other"
        ))
    }
}
