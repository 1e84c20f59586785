//! Curves made ready to draw: normalised within the axis, cut where they leave the panel.

use super::canvas::Point;
use super::frame::{Frame, Panel};
use crate::schema::SideCurve;

/// The largest measured intensity of a side on the axis; none where nothing is above zero.
pub(super) fn unit(side: &SideCurve, frame: &Frame) -> Option<f64> {
    let on_axis = side
        .energy_ev
        .iter()
        .zip(&side.measured)
        .filter(|(energy, _)| frame.holds(**energy));
    let largest = on_axis
        .map(|(_, value)| *value)
        .filter(|value| value.is_finite())
        .fold(0.0, f64::max);
    (largest > 0.0).then_some(largest)
}

/// A scale that maps energies and values into a panel.
#[derive(Clone, Copy)]
pub(super) struct Scale<'a> {
    pub(super) frame: &'a Frame,
    pub(super) panel: Panel,
    /// Lowest and highest value of the panel.
    pub(super) span: (f64, f64),
}

impl Scale<'_> {
    /// The point of an energy and a value.
    pub(super) fn point(&self, energy: f64, value: f64) -> Point {
        (self.frame.x(energy), self.panel.y(value, self.span))
    }

    /// Whether a point lies in the panel.
    pub(super) fn shows(&self, energy: f64, value: f64) -> bool {
        self.frame.holds(energy) && (self.span.0..=self.span.1).contains(&value)
    }

    /// The value, kept within the panel.
    pub(super) fn within(&self, value: f64) -> f64 {
        value.clamp(self.span.0, self.span.1)
    }

    /// A curve as the lines of it that lie in the panel.
    pub(super) fn lines(
        &self,
        energies: &[f64],
        values: impl Iterator<Item = f64>,
    ) -> Vec<Vec<Point>> {
        let finite = |(energy, value): &(f64, f64)| energy.is_finite() && value.is_finite();
        let points: Vec<(f64, f64)> = energies
            .iter()
            .copied()
            .zip(values)
            .filter(finite)
            .collect();
        let mut lines: Vec<Vec<(f64, f64)>> = Vec::new();
        for pair in points.windows(2) {
            let Some((from, to)) = self.cut(pair[0], pair[1]) else {
                continue;
            };
            match lines.last_mut() {
                Some(line) if line.last() == Some(&from) => line.push(to),
                _ => lines.push(vec![from, to]),
            }
        }
        let place =
            |line: Vec<(f64, f64)>| line.into_iter().map(|(e, v)| self.point(e, v)).collect();
        lines.into_iter().map(place).collect()
    }

    /// The part of a straight line that lies in the panel (Liang and Barsky's clipping).
    fn cut(&self, from: (f64, f64), to: (f64, f64)) -> Option<((f64, f64), (f64, f64))> {
        let (across, up) = (to.0 - from.0, to.1 - from.1);
        let bounds = [
            (-across, from.0 - self.frame.start),
            (across, self.frame.stop - from.0),
            (-up, from.1 - self.span.0),
            (up, self.span.1 - from.1),
        ];
        let (mut first, mut last) = (0.0_f64, 1.0_f64);
        for (towards, room) in bounds {
            if towards == 0.0 && room < 0.0 {
                return None;
            }
            if towards < 0.0 {
                first = first.max(room / towards);
            } else if towards > 0.0 {
                last = last.min(room / towards);
            }
        }
        let at = |part: f64| {
            if part == 0.0 {
                from
            } else if (part - 1.0).abs() < f64::EPSILON {
                to
            } else {
                (from.0 + part * across, from.1 + part * up)
            }
        };
        (first <= last).then(|| (at(first), at(last)))
    }
}

/// Every how many channels a point is drawn so that points stay apart.
pub(super) fn stride(side: &SideCurve, frame: &Frame) -> usize {
    const APART: f64 = 2.2;
    let on_axis = side
        .energy_ev
        .iter()
        .filter(|energy| frame.holds(**energy))
        .count();
    let (Some(first), Some(last)) = (side.energy_ev.first(), side.energy_ev.last()) else {
        return 1;
    };
    let length = frame.x(last.min(frame.stop)) - frame.x(first.max(frame.start));
    let crowd = u32::try_from(on_axis).map_or(f64::MAX, f64::from) * APART;
    (1..=on_axis)
        .zip(1_u32..)
        .find(|&(_, every)| crowd <= length * f64::from(every))
        .map_or(1, |(every, _)| every)
}
