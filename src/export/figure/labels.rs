//! Direct labels: each is put where nothing lies under it, near the curve that it names.

use std::ops::Range;

use super::Error;
use super::canvas::{Anchor, BOLD, Canvas, Point, Stroke, Type, text_width};
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

    /// The point of the area that is nearest to `point`.
    fn nearest(&self, point: Point) -> Point {
        (
            point.0.clamp(self.from.0, self.to.0),
            point.1.clamp(self.from.1, self.to.1),
        )
    }
}

/// Where a label may stand.
#[derive(Clone, Copy, PartialEq)]
pub(super) enum Room {
    /// Above its target and off the shaded areas, its colour saying what it names.
    Above,
    /// Anywhere.
    Any,
}

/// A label that looks for its place.
pub(super) struct Label {
    /// The first line as `look` says, the others in plain weight.
    pub(super) lines: Vec<String>,
    pub(super) look: Type,
    pub(super) room: Room,
    /// Points of the curve that it names; each may be pointed at.
    pub(super) targets: Vec<Point>,
}

/// The side of a cell in which a panel's ground is surveyed.
const CELL: f64 = 3.0;
const LINE: f64 = LABEL * 1.2;
/// Room around the words.
const PAD: Point = (5.0, 2.0);

/// How close to a target its own curve may lie in the way.
const NEAR: f64 = 8.0;

/// What lies in a cell.
#[derive(Clone, Copy, PartialEq, PartialOrd)]
enum Ground {
    White,
    Shaded,
    Taken,
}

/// A panel with what is drawn in it already.
pub(super) struct Places {
    panel: Panel,
    across: usize,
    ground: Vec<Ground>,
}

impl Places {
    pub(super) fn new(panel: Panel) -> Self {
        let across = cells(RIGHT - LEFT) + 1;
        let down = cells(panel.bottom - panel.top) + 1;
        let ground = vec![Ground::White; across * down];
        Self {
            panel,
            across,
            ground,
        }
    }

    /// Keeps labels off an area.
    pub(super) fn take(&mut self, area: Area) {
        self.mark(&area, Ground::Taken);
    }

    /// Keeps labels off a line.
    pub(super) fn take_line(&mut self, points: &[Point]) {
        for pair in points.windows(2) {
            let length = (pair[1].0 - pair[0].0).hypot(pair[1].1 - pair[0].1);
            for part in steps(0.0, 1.0, (CELL / 2.0 / length).max(1e-3)) {
                let at = between(pair[0], pair[1], part);
                self.mark(&Area::around(at, at, 1.0), Ground::Taken);
            }
        }
    }

    /// Marks what lies between an outline and the line from its first to its last point, and keeps
    /// labels off the outline.
    pub(super) fn shade(&mut self, outline: &[Point]) {
        let base = outline.first().map_or(0.0, |point| point.1);
        for pair in outline.windows(2) {
            let top = (pair[0].0, pair[0].1.min(pair[1].1));
            self.mark(&Area::around(top, (pair[1].0, base), 0.0), Ground::Shaded);
        }
        self.take_line(outline);
    }

    /// Draws the label at the best free place; where none is free, not at all.
    pub(super) fn put(&mut self, canvas: &mut Canvas, label: &Label) -> Result<(), Error> {
        let Some((area, target)) = self.best(label) else {
            return Ok(());
        };
        self.take(area);
        let start = area.nearest(target);
        if label.room == Room::Any && distance(start, target) > 7.0 {
            let thin = Stroke {
                color: SOFT,
                width: 0.8,
            };
            canvas.line(start, target, thin)?;
            canvas.disc(target, 2.0, SOFT)?;
            self.take_line(&[start, target]);
        }
        let middle = f64::midpoint(area.from.0, area.to.0);
        let mut look = label.look;
        look.anchor = Anchor::Middle;
        let mut y = area.from.1 + PAD.1 + LINE / 2.0;
        for line in &label.lines {
            canvas.text(line, (middle, y), &look)?;
            look.bold = false;
            y += LINE;
        }
        Ok(())
    }

    /// The free area whose way to a target is the shortest, with that target; where every way is
    /// blocked, one that crosses what lies close to the target, as its own outline may.
    fn best(&self, label: &Label) -> Option<(Area, Point)> {
        let white = match label.room {
            Room::Any => None,
            Room::Above => self.best_on(label, Ground::White, NEAR),
        };
        let mut nears = [NEAR, 3.0 * NEAR].into_iter();
        white.or_else(|| nears.find_map(|near| self.best_on(label, Ground::Shaded, near)))
    }

    fn best_on(&self, label: &Label, ground: Ground, near: f64) -> Option<(Area, Point)> {
        const TARGETS: usize = 80;
        let targets = label
            .targets
            .iter()
            .step_by(label.targets.len() / TARGETS + 1);
        let targets: Vec<Point> = targets.copied().collect();
        let mut best: Option<(f64, Area, Point)> = None;
        for area in self.candidates(extent(label)) {
            if !self.is_free(&area, ground) {
                continue;
            }
            for &target in &targets {
                let start = area.nearest(target);
                let way = distance(start, target);
                let allowed = label.room != Room::Above || area.to.1 <= target.1;
                let better = best.is_none_or(|(least, _, _)| way < least - 1e-6);
                if allowed && better && self.is_clear(start, target, near) {
                    best = Some((way, area, target));
                }
            }
        }
        best.map(|(_, area, target)| (area, target))
    }

    /// Whether the way to a target crosses nothing until `near` it.
    fn is_clear(&self, start: Point, target: Point, near: f64) -> bool {
        let way = distance(start, target);
        if way <= near {
            return true;
        }
        // From the target outwards: what is in the way mostly lies close to it.
        let mut parts = steps(near / way, 1.0, CELL / way);
        parts.all(|part| self.at(between(target, start, part)) <= Ground::Shaded)
    }

    /// What lies under a point; nothing beyond the panel.
    fn at(&self, point: Point) -> Ground {
        let (across, down) = (
            cells(point.0 - LEFT).min(self.across - 1),
            cells(point.1 - self.panel.top),
        );
        let cell = self.ground.get(down * self.across + across);
        cell.copied().unwrap_or(Ground::White)
    }

    fn candidates(&self, (width, height): Point) -> impl Iterator<Item = Area> + use<> {
        let Panel { top, bottom } = self.panel;
        steps(top + 3.0, bottom - height - 3.0, 2.0 * CELL).flat_map(move |y| {
            steps(LEFT + 6.0, RIGHT - width - 6.0, 3.0 * CELL).map(move |x| Area {
                from: (x, y),
                to: (x + width, y + height),
            })
        })
    }

    /// The rows of cells under an area, as ranges of the ground.
    fn rows(&self, area: &Area) -> impl Iterator<Item = Range<usize>> + use<> {
        let across = self.across;
        let down = self.ground.len() / across;
        let (left, right) = (cells(area.from.0 - LEFT), cells(area.to.0 - LEFT) + 1);
        let (top, bottom) = (
            cells(area.from.1 - self.panel.top),
            cells(area.to.1 - self.panel.top) + 1,
        );
        let (left, right) = (left.min(across), right.min(across));
        (top..bottom.min(down)).map(move |row| row * across + left..row * across + right)
    }

    fn mark(&mut self, area: &Area, ground: Ground) {
        for row in self.rows(area) {
            for cell in &mut self.ground[row] {
                if *cell < ground {
                    *cell = ground;
                }
            }
        }
    }

    /// Whether nothing worse than `ground` lies under an area.
    fn is_free(&self, area: &Area, ground: Ground) -> bool {
        self.rows(area)
            .all(|row| self.ground[row].iter().all(|cell| *cell <= ground))
    }
}

/// A length in whole cells; none of what is before the panel.
fn cells(length: f64) -> usize {
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)] // Between 0 and 1000.
    let whole = (length / CELL).clamp(0.0, 1000.0) as usize;
    whole
}

fn steps(from: f64, to: f64, pace: f64) -> impl Iterator<Item = f64> {
    (0..)
        .map(move |i| from + pace * f64::from(i))
        .take_while(move |at| *at <= to)
}

fn distance(a: Point, b: Point) -> f64 {
    (a.0 - b.0).hypot(a.1 - b.1)
}

fn between(a: Point, b: Point, part: f64) -> Point {
    (a.0 + part * (b.0 - a.0), a.1 + part * (b.1 - a.1))
}

fn extent(label: &Label) -> Point {
    let widths = label
        .lines
        .iter()
        .map(|line| text_width(line, label.look.size));
    let width = widths.fold(0.0, f64::max) * if label.look.bold { BOLD } else { 1.0 };
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
            room: Room::Above,
            targets: vec![target],
        }
    }

    #[test]
    fn a_label_avoids_what_is_taken_and_shaded() {
        let mut places = Places::new(SPECTRA);
        let (first, _) = places.best(&label((500.0, 200.0))).unwrap();
        assert!(distance(first.nearest((500.0, 200.0)), (500.0, 200.0)) < 2.0 * CELL);
        places.take(Area::around((400.0, 150.0), (600.0, 250.0), 0.0));
        places.take_line(&[(LEFT, 80.0), (RIGHT, 80.0)]);
        places.shade(&[(600.0, 250.0), (600.0, 90.0), (RIGHT, 90.0), (RIGHT, 250.0)]);
        let (second, _) = places.best(&label((500.0, 146.0))).unwrap();
        assert!(places.is_free(&second, Ground::White));
        assert!(second.to.0 <= 400.0 || second.to.1 <= 150.0 || second.from.1 >= 250.0);
    }

    #[test]
    fn a_leader_crosses_no_line() {
        let mut places = Places::new(SPECTRA);
        places.take_line(&[(LEFT, 200.0), (RIGHT, 260.0)]);
        assert!(!places.is_clear((500.0, 100.0), (500.0, 400.0), NEAR));
        assert!(places.is_clear((500.0, 100.0), (500.0, 222.0), NEAR));
    }

    #[test]
    fn a_full_panel_gets_no_label() {
        let mut places = Places::new(SPECTRA);
        places.take(Area::around((0.0, 0.0), (2000.0, 2000.0), 0.0));
        assert!(places.best(&label((500.0, 200.0))).is_none());
    }
}
