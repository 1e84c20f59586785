//! Where things stand: the shared energy axis and the heights of the panels.

use crate::export::words::interval;
use crate::quantity::Reference;
use crate::schema::{Curves, Quantity, ResultDocument};

/// How far the axis goes beyond each edge, eV.
const BEYOND: f64 = 6.0;
/// Left and right end of every panel.
pub(super) const LEFT: f64 = 84.0;
pub(super) const RIGHT: f64 = 1022.0;

/// A panel's upper and lower end.
#[derive(Clone, Copy)]
pub(super) struct Panel {
    pub(super) top: f64,
    pub(super) bottom: f64,
}

pub(super) const SPECTRA: Panel = Panel {
    top: 34.0,
    bottom: 416.0,
};
pub(super) const RESIDUALS: Panel = Panel {
    top: 430.0,
    bottom: 546.0,
};
pub(super) const RULER: Panel = Panel {
    top: 596.0,
    bottom: 644.0,
};

impl Panel {
    /// The height of `value` on a scale from `low` at the bottom to `high` at the top.
    pub(super) fn y(self, value: f64, (low, high): (f64, f64)) -> f64 {
        self.bottom - (value - low) / (high - low) * (self.bottom - self.top)
    }
}

/// What all panels share.
pub(super) struct Frame {
    /// First energy of the axis, eV.
    pub(super) start: f64,
    /// Last energy of the axis, eV.
    pub(super) stop: f64,
    /// The measured edges, where they are finite.
    pub(super) valence: Option<Quantity>,
    pub(super) conduction: Option<Quantity>,
    pub(super) reference: Reference,
}

impl Frame {
    pub(super) fn new(result: &ResultDocument, curves: &Curves) -> Self {
        let measured = &result.measured;
        let (valence, conduction) = (
            usable(measured.valence_edge),
            usable(measured.conduction_edge),
        );
        let (start, stop) = range(curves, valence, conduction);
        let mut frame = Self {
            start,
            stop,
            valence,
            conduction,
            reference: measured.reference,
        };
        frame.make_room(usable(result.computed.corrected_gap));
        frame
    }

    /// The computed gap must end on the axis.
    fn make_room(&mut self, gap: Option<Quantity>) {
        if let (Some(edge), Some(gap)) = (self.valence, gap) {
            let reach = interval(&gap).map_or(gap.value, |(_, upper)| upper.max(gap.value));
            self.stop = self
                .stop
                .max((edge.value + reach).min(self.start + 100.0) + 0.5);
        }
    }

    /// The place of an energy from left to right.
    pub(super) fn x(&self, energy: f64) -> f64 {
        LEFT + (energy - self.start) / (self.stop - self.start) * (RIGHT - LEFT)
    }

    /// Whether an energy is on the axis.
    pub(super) fn holds(&self, energy: f64) -> bool {
        (self.start..=self.stop).contains(&energy)
    }

    /// The length of an electronvolt.
    pub(super) fn electronvolt(&self) -> f64 {
        (RIGHT - LEFT) / (self.stop - self.start)
    }

    /// The numbered steps of the axis, eV: as fine as leaves the numbers apart.
    pub(super) fn step(&self) -> f64 {
        const APART: f64 = 52.0;
        let steps = [0.1, 0.2, 0.5, 1.0, 2.0, 5.0, 10.0];
        let wide = |step: &f64| step * self.electronvolt() >= APART;
        steps.into_iter().find(wide).unwrap_or(20.0)
    }

    /// The multiples of `step` on the axis, counted in steps.
    pub(super) fn ticks(&self, step: f64) -> impl Iterator<Item = i32> + use<> {
        #[allow(clippy::cast_possible_truncation)] // The axis is some hundred steps long.
        let (first, last) = (
            (self.start / step - 1e-9).ceil() as i32,
            (self.stop / step + 1e-9).floor() as i32,
        );
        first..=last.min(first.saturating_add(10_000))
    }
}

/// A quantity that can be drawn: finite, and an uncertainty only where that is finite.
pub(super) fn usable(quantity: Option<Quantity>) -> Option<Quantity> {
    let finite = |value: &f64| value.is_finite();
    let quantity = quantity.filter(|q| q.value.abs() < 1e4)?;
    Some(Quantity {
        value: quantity.value,
        standard_uncertainty: quantity.standard_uncertainty.filter(finite),
        lower: quantity.lower.filter(finite),
        upper: quantity.upper.filter(finite),
    })
}

/// From below the valence edge to above the conduction edge, but not beyond the data.
fn range(curves: &Curves, valence: Option<Quantity>, conduction: Option<Quantity>) -> (f64, f64) {
    let measured = curves.sides.iter().flat_map(|side| &side.energy_ev);
    let computed = curves
        .densities
        .iter()
        .flat_map(|density| &density.energy_ev);
    let has_sides = !curves.sides.is_empty();
    let energies = measured.chain(computed.filter(|_| !has_sides));
    let energies = energies.copied().filter(|energy| energy.abs() < 1e4);
    let (first, last) = energies.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), energy| {
        (low.min(energy), high.max(energy))
    });
    let low_edge = valence.or(conduction).map(|edge| edge.value);
    let high_edge = conduction.or(valence).map(|edge| edge.value);
    // Without data `first` is infinite, and the edge alone decides.
    let start = low_edge.map_or(first, |edge| match edge - BEYOND {
        wanted if first.is_finite() => wanted.max(first).min(edge - 0.5),
        wanted => wanted,
    });
    let stop = high_edge.map_or(last, |edge| {
        let wanted = edge + BEYOND;
        if last.is_finite() {
            wanted.min(last).max(edge + 0.5)
        } else {
            wanted
        }
    });
    if start.is_finite() && stop.is_finite() && stop - start > 1e-3 {
        (start, stop)
    } else {
        (-BEYOND, BEYOND)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::sample;

    #[test]
    fn the_axis_holds_edges_and_gaps_and_stops_with_the_data() {
        let (mut result, mut curves) = sample::two_sides();
        let frame = Frame::new(&result, &curves);
        assert!((frame.start - (-1.953 - 6.0)).abs() < 1e-9);
        assert!((frame.stop - (1.731 + 6.0)).abs() < 1e-9);
        curves.sides[0].energy_ev.retain(|&energy| energy > -4.0);
        let clipped = Frame::new(&result, &curves);
        assert!(clipped.start > -4.0 && clipped.start < -3.9);
        result.computed.corrected_gap = Some(Quantity::new(20.0, 1.0));
        assert!(Frame::new(&result, &curves).holds(-1.953 + 22.0));
    }

    #[test]
    fn ticks_are_multiples_within_the_axis() {
        let (result, curves) = sample::two_sides();
        let frame = Frame::new(&result, &curves);
        assert_eq!(frame.step(), 1.0);
        let ticks: Vec<i32> = frame.ticks(1.0).collect();
        assert_eq!((ticks.first(), ticks.last()), (Some(&-7), Some(&7)));
    }
}
