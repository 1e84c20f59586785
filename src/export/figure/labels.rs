//! Direct labels: each is put where nothing lies under it, near the curve that it names.

use super::Error;
use super::canvas::{Anchor, Canvas, Point, Stroke, Type, text_width};
use super::frame::{LEFT, Panel, RIGHT};
use super::palette::{LABEL, SOFT};

/// A rectangle by its upper left and lower right corner.
#[derive(Clone, Copy, PartialEq, Debug)]
pub(super) struct Area {
    pub(super) from: Point,
    pub(super) to: Point,
}

impl Area {
    /// The smallest area around two points, with a margin.
    pub(super) fn around(a: Point, b: Point, margin: f64) -> Self {
        Self {
            from: (a.0.min(b.0) - margin, a.1.min(b.1) - margin),
            to: (a.0.max(b.0) + margin, a.1.max(b.1) + margin),
        }
    }

    fn meets(&self, other: &Self) -> bool {
        self.from.0 < other.to.0
            && other.from.0 < self.to.0
            && self.from.1 < other.to.1
            && other.from.1 < self.to.1
    }

    /// The point of the area that is nearest to `point`.
    fn nearest(&self, point: Point) -> Point {
        (
            point.0.clamp(self.from.0, self.to.0),
            point.1.clamp(self.from.1, self.to.1),
        )
    }
}

/// A label that looks for its place.
pub(super) struct Label {
    pub(super) lines: Vec<String>,
    pub(super) look: Type,
    /// Points of the curve that it names; each may be pointed at.
    pub(super) targets: Vec<Point>,
}

/// A panel with what is drawn in it already.
pub(super) struct Places {
    panel: Panel,
    taken: Vec<Area>,
}

const LINE: f64 = LABEL * 1.2;

impl Places {
    pub(super) fn new(panel: Panel) -> Self {
        Self {
            panel,
            taken: Vec::new(),
        }
    }

    /// Keeps labels off an area.
    pub(super) fn take(&mut self, area: Area) {
        self.taken.push(area);
    }

    /// Keeps labels off a line.
    pub(super) fn take_line(&mut self, points: &[Point]) {
        let segments = points
            .windows(2)
            .map(|pair| Area::around(pair[0], pair[1], 1.0));
        self.taken.extend(segments);
    }

    /// Draws the label at the best free place; where none is free, not at all.
    pub(super) fn put(&mut self, canvas: &mut Canvas, label: &Label) -> Result<(), Error> {
        let Some((area, target)) = self.best(label) else {
            return Ok(());
        };
        self.taken.push(area);
        let inner = Area::around(
            (area.from.0 + 3.0, area.from.1 + 2.0),
            (area.to.0 - 3.0, area.to.1 - 2.0),
            0.0,
        );
        let start = inner.nearest(target);
        if (start.0 - target.0).hypot(start.1 - target.1) > 9.0 {
            let thin = Stroke {
                color: SOFT,
                width: 0.8,
            };
            canvas.line(start, target, thin)?;
            canvas.disc(target, 2.0, SOFT)?;
            self.take_line(&[start, target]);
        }
        let mut look = label.look;
        look.anchor = Anchor::Middle;
        let middle = (area.from.0 + area.to.0) / 2.0;
        let mut y = area.from.1 + PAD.1 + LINE / 2.0;
        for line in &label.lines {
            canvas.text(line, (middle, y), &look)?;
            y += LINE;
        }
        Ok(())
    }

    /// The free area whose way to a target is the shortest, with that target.
    fn best(&self, label: &Label) -> Option<(Area, Point)> {
        let (width, height) = extent(label);
        let mut best: Option<(f64, Area, Point)> = None;
        for area in self.candidates(width, height) {
            if self.taken.iter().any(|taken| taken.meets(&area)) {
                continue;
            }
            for &target in &label.targets {
                let start = area.nearest(target);
                let way = (start.0 - target.0).hypot(start.1 - target.1);
                if best.is_none_or(|(least, _, _)| way < least - 1e-6)
                    && self.is_clear(start, target, way)
                {
                    best = Some((way, area, target));
                }
            }
        }
        best.map(|(_, area, target)| (area, target))
    }

    /// Whether the way to a target crosses nothing until just before it.
    fn is_clear(&self, start: Point, target: Point, way: f64) -> bool {
        const NEAR: f64 = 7.0;
        const PACE: f64 = 4.0;
        let mut gone = 0.0;
        while gone < way - NEAR {
            let part = gone / way;
            let at = (
                start.0 + part * (target.0 - start.0),
                start.1 + part * (target.1 - start.1),
            );
            let spot = Area::around(at, at, 0.5);
            if self.taken.iter().any(|taken| taken.meets(&spot)) {
                return false;
            }
            gone += PACE;
        }
        true
    }

    fn candidates(&self, width: f64, height: f64) -> impl Iterator<Item = Area> + use<> {
        const ACROSS: f64 = 9.0;
        const DOWN: f64 = 6.0;
        let Panel { top, bottom } = self.panel;
        let along = |from: f64, to: f64, pace: f64| {
            (0..)
                .map(move |i| from + pace * f64::from(i))
                .take_while(move |at| *at <= to)
        };
        along(top + 4.0, bottom - height - 4.0, DOWN).flat_map(move |y| {
            along(LEFT + 6.0, RIGHT - width - 6.0, ACROSS).map(move |x| Area {
                from: (x, y),
                to: (x + width, y + height),
            })
        })
    }
}

/// Room around the words.
const PAD: Point = (5.0, 2.0);

fn extent(label: &Label) -> Point {
    let widths = label
        .lines
        .iter()
        .map(|line| text_width(line, label.look.size));
    let width = widths.fold(0.0, f64::max) * if label.look.bold { 1.08 } else { 1.0 };
    let lines = u32::try_from(label.lines.len()).map_or(1.0, f64::from);
    (width + 2.0 * PAD.0, lines * LINE + 2.0 * PAD.1)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::figure::frame::SPECTRA;
    use crate::export::figure::palette::INK;

    fn label(target: Point) -> Label {
        Label {
            lines: vec!["a label".to_owned()],
            look: Type::new(INK, LABEL, Anchor::Middle),
            targets: vec![target],
        }
    }

    #[test]
    fn a_label_avoids_what_is_taken() {
        let mut places = Places::new(SPECTRA);
        let (first, _) = places.best(&label((500.0, 200.0))).unwrap();
        assert!(first.meets(&Area::around((500.0, 200.0), (500.0, 200.0), 8.0)));
        places.take(Area::around((400.0, 150.0), (600.0, 250.0), 0.0));
        places.take_line(&[(LEFT, 240.0), (RIGHT, 240.0)]);
        let (second, _) = places.best(&label((500.0, 146.0))).unwrap();
        assert!(places.taken.iter().all(|taken| !taken.meets(&second)));
    }

    #[test]
    fn a_full_panel_gets_no_label() {
        let mut places = Places::new(SPECTRA);
        places.take(Area::around((0.0, 0.0), (2000.0, 2000.0), 0.0));
        assert!(places.best(&label((500.0, 200.0))).is_none());
    }
}
