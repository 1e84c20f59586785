//! Energy units, physical constants, and the axes and references that give an energy its meaning.
//!
//! This room owns every conversion factor and every spelling of a unit. It knows nothing of files,
//! documents or fits, and does no input or output. An energy enters through [`Energy::new`] and
//! leaves through [`Energy::in_unit`]; between the two it is an `f64` in electronvolts on the
//! electron scale, where more bound is lower.

pub mod constants;

mod axis;
mod energy;
mod other_units;
mod rounding;
mod unit;

pub use axis::{AxisKind, Reference};
pub use energy::{Energy, Temperature};
pub use other_units::{DensityUnit, MomentumUnit};
pub use rounding::{decimals_for, rounded, with_uncertainty};
pub use unit::{EnergyUnit, IntensityUnit};
