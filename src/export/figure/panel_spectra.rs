//! The spectra: measured points, fitted model, background and computed density of each side, and
//! the edges as marks with their 95 % intervals.

use super::Error;
use super::canvas::{Anchor, Canvas, Point, Stroke, Type, text_width};
use super::curve::{Scale, stride, unit};
use super::frame::{Frame, LEFT, RESIDUALS, RIGHT, RULER, SPECTRA};
use super::labels::{Area, Label, Places, Room};
use super::palette::{HAIR, INK, LABEL, SOFT, TICK, TITLE, side, side_area, side_text};
use crate::export::words::{interval, typeset, value_with_interval};
use crate::quantity::Reference;
use crate::schema::{Curves, DensityCurve, Quantity, Side, SideCurve};

/// Room above the largest intensity, for labels.
const HEAD: f64 = 1.24;
const MARKER: f64 = 2.3;

/// A side with its largest intensity on the axis.
type Unit<'a> = (&'a SideCurve, f64);

/// Draws the panel.
pub(super) fn draw(canvas: &mut Canvas, frame: &Frame, curves: &Curves) -> Result<(), Error> {
    let with_unit = |curve| Some((curve, unit(curve, frame)?));
    let sides: Vec<Unit> = curves.sides.iter().filter_map(with_unit).collect();
    let scale = Scale {
        frame,
        panel: SPECTRA,
        span: (floor(&sides, frame), HEAD),
    };
    let mut places = Places::new(SPECTRA);
    let shapes: Vec<Shape> = curves
        .densities
        .iter()
        .filter_map(|density| shape(&scale, density, &sides))
        .collect();
    for shape in &shapes {
        canvas.area(&shape.outline, side_area(shape.side))?;
        places.shade(&shape.outline);
    }
    zero(canvas, &scale, &mut places)?;
    edge(canvas, frame, Side::Valence, frame.valence, &mut places)?;
    edge(
        canvas,
        frame,
        Side::Conduction,
        frame.conduction,
        &mut places,
    )?;
    for side in &sides {
        points(canvas, &scale, side, &mut places)?;
        background(canvas, &scale, side, &mut places)?;
        model(canvas, &scale, side, &mut places)?;
    }
    axis(canvas, &scale)?;
    if sides.is_empty() {
        let middle = (
            f64::midpoint(LEFT, RIGHT),
            f64::midpoint(SPECTRA.top, SPECTRA.bottom),
        );
        canvas.text(
            "no measured curve",
            middle,
            &Type::new(SOFT, LABEL, Anchor::Middle),
        )?;
    }
    let labels = labels(&scale, &sides, &shapes);
    labels
        .iter()
        .try_for_each(|label| places.put(canvas, label))
}

/// The lowest value of the panel: a little below zero, or below noise that is.
fn floor(sides: &[Unit], frame: &Frame) -> f64 {
    let lowest = |(curve, largest): &Unit| {
        let values = curve.energy_ev.iter().zip(&curve.measured);
        let on_axis = values.filter(|(energy, _)| frame.holds(**energy));
        on_axis
            .map(|(_, value)| value / largest)
            .fold(0.0, f64::min)
    };
    sides.iter().map(lowest).fold(0.0, f64::min).max(-0.4) - 0.03
}

/// A computed density as the area that it fills.
struct Shape {
    side: Side,
    outline: Vec<Point>,
    /// Places within the area.
    inside: Vec<Point>,
}

/// In the unit of its side; of its own largest value where that side is not there.
fn shape(scale: &Scale, curve: &DensityCurve, sides: &[Unit]) -> Option<Shape> {
    let finite =
        |(energy, density): &(&f64, &f64)| density.is_finite() && scale.frame.holds(**energy);
    let pairs: Vec<(&f64, &f64)> = curve
        .energy_ev
        .iter()
        .zip(&curve.density)
        .filter(finite)
        .collect();
    let own = pairs
        .iter()
        .map(|(_, density)| **density)
        .fold(0.0, f64::max);
    let same_side = sides.iter().find(|(side, _)| side.side == curve.side);
    let largest = same_side.map_or(own, |(_, largest)| *largest);
    let (first, last) = (pairs.first()?.0, pairs.last()?.0);
    if largest <= 0.0 {
        return None;
    }
    let value = |density: f64| scale.within(density / largest);
    let mut outline = vec![scale.point(*first, 0.0)];
    outline.extend(
        pairs
            .iter()
            .map(|(e, density)| scale.point(**e, value(**density))),
    );
    outline.push(scale.point(*last, 0.0));
    let high = pairs.iter().filter(|(_, density)| value(**density) > 0.2);
    let inside = high
        .map(|(e, density)| scale.point(**e, 0.6 * value(**density)))
        .collect();
    Some(Shape {
        side: curve.side,
        outline,
        inside,
    })
}

/// The line of no intensity, and the level that energies are counted from.
fn zero(canvas: &mut Canvas, scale: &Scale, places: &mut Places) -> Result<(), Error> {
    let hair = Stroke {
        color: HAIR,
        width: 0.9,
    };
    let base = SPECTRA.y(0.0, scale.span);
    canvas.line((LEFT, base), (RIGHT, base), hair)?;
    places.take_line(&[(LEFT, base), (RIGHT, base)]);
    let frame = scale.frame;
    if frame.reference != Reference::Fermi || !frame.holds(0.0) {
        return Ok(());
    }
    let x = frame.x(0.0);
    let line = [(x, SPECTRA.top), (x, RESIDUALS.bottom)];
    let soft = Stroke {
        color: SOFT,
        width: 0.9,
    };
    canvas.dashed(&line, soft, (7.0, 5.0))?;
    places.take_line(&line);
    // On the side where the nearer edge is not.
    let edges = [frame.valence, frame.conduction].into_iter().flatten();
    let nearest = edges
        .map(|edge| edge.value)
        .min_by(|a, b| a.abs().total_cmp(&b.abs()));
    let (shift, anchor) = match nearest {
        Some(edge) if edge > 0.0 => (-6.0, Anchor::End),
        _ => (6.0, Anchor::Start),
    };
    let at = (x + shift, SPECTRA.top + 15.0);
    canvas.text("E_F", at, &Type::new(SOFT, LABEL, anchor))?;
    places.take(Area::around((x, at.1), (x + 5.0 * shift, at.1), 10.0));
    Ok(())
}

/// A mark that runs down to the ruler, its 95 % interval as a bar, its name above the panel.
fn edge(
    canvas: &mut Canvas,
    frame: &Frame,
    side: Side,
    quantity: Option<Quantity>,
    places: &mut Places,
) -> Result<(), Error> {
    let Some(quantity) = quantity.filter(|quantity| frame.holds(quantity.value)) else {
        return Ok(());
    };
    let color = side_text(side);
    let x = frame.x(quantity.value);
    let mark = [(x, SPECTRA.top), (x, RULER.top)];
    canvas.line(mark[0], mark[1], Stroke { color, width: 1.3 })?;
    places.take_line(&mark);
    if let Some((lower, upper)) = interval(&quantity) {
        let y = SPECTRA.top + 16.0;
        let (from, to) = (
            frame.x(lower.max(frame.start)),
            frame.x(upper.min(frame.stop)),
        );
        bar(canvas, (from, y), (to, y), Stroke { color, width: 2.2 })?;
        places.take(Area::around((from, y), (to, y), 8.0));
    }
    let text = format!(
        "{} edge {}",
        side.name(),
        typeset(&value_with_interval(&quantity))
    );
    let width = text_width(&text, LABEL);
    let (at, anchor) = match side {
        Side::Valence if x - width < LEFT => (LEFT, Anchor::Start),
        Side::Valence => (x + 2.0, Anchor::End),
        Side::Conduction if x + width > RIGHT => (RIGHT, Anchor::End),
        Side::Conduction => (x - 2.0, Anchor::Start),
    };
    canvas.text(
        &text,
        (at, SPECTRA.top - 15.0),
        &Type::new(color, LABEL, anchor),
    )
}

/// A horizontal bar with ends.
pub(super) fn bar(
    canvas: &mut Canvas,
    from: Point,
    to: Point,
    stroke: Stroke,
) -> Result<(), Error> {
    const END: f64 = 5.5;
    canvas.line(from, to, stroke)?;
    for x in [from.0, to.0] {
        canvas.line((x, from.1 - END), (x, from.1 + END), stroke)?;
    }
    Ok(())
}

fn points(
    canvas: &mut Canvas,
    scale: &Scale,
    &(curve, largest): &Unit,
    places: &mut Places,
) -> Result<(), Error> {
    let color = side(curve.side);
    let thin = Stroke { color, width: 0.8 };
    let rows = curve
        .energy_ev
        .iter()
        .zip(&curve.measured)
        .zip(&curve.standard_uncertainty);
    for ((&energy, &measured), &uncertainty) in rows.step_by(stride(curve, scale.frame)) {
        let (value, u) = (measured / largest, uncertainty / largest);
        if !scale.shows(energy, value) {
            continue;
        }
        let at = scale.point(energy, value);
        places.take(Area::around(at, at, 4.0));
        let ends = [value - u, value + u].map(|end| scale.point(energy, scale.within(end)));
        if u.is_finite() && (ends[0].1 - ends[1].1) > 2.0 * MARKER {
            canvas.line(ends[0], ends[1], thin)?;
            places.take(Area::around(ends[0], ends[1], 2.0));
        }
        match curve.side {
            Side::Valence => canvas.disc(at, MARKER, color)?,
            Side::Conduction => canvas.ring(at, MARKER, Stroke { color, width: 1.2 })?,
        }
    }
    Ok(())
}

fn background(
    canvas: &mut Canvas,
    scale: &Scale,
    &(curve, largest): &Unit,
    places: &mut Places,
) -> Result<(), Error> {
    let values = curve.background.iter().map(|value| value / largest);
    let dots = Stroke {
        color: INK,
        width: 1.5,
    };
    for line in scale.lines(&curve.energy_ev, values) {
        canvas.dashed(&line, dots, (1.6, 4.0))?;
        places.take_line(&line);
    }
    Ok(())
}

/// Solid in the fitted window, dashed beyond.
fn model(
    canvas: &mut Canvas,
    scale: &Scale,
    &(curve, largest): &Unit,
    places: &mut Places,
) -> Result<(), Error> {
    let (first, last) = curve.window_ev;
    let (solid, thin) = (
        Stroke {
            color: INK,
            width: 2.0,
        },
        Stroke {
            color: INK,
            width: 0.9,
        },
    );
    let from = curve.energy_ev.partition_point(|&energy| energy < first);
    let to = curve.energy_ev.partition_point(|&energy| energy <= last);
    // Neighbours share a channel, so that the line does not break.
    let parts = [
        (0..from + 1, false),
        (from..to, true),
        (to.saturating_sub(1)..curve.energy_ev.len(), false),
    ];
    for (rows, fitted) in parts {
        let Some(energies) = curve
            .energy_ev
            .get(rows.start..rows.end.min(curve.energy_ev.len()))
        else {
            continue;
        };
        let values = curve
            .model
            .iter()
            .skip(rows.start)
            .map(|value| value / largest);
        for line in scale.lines(energies, values) {
            if fitted {
                canvas.path(&line, solid)?;
            } else {
                canvas.dashed(&line, thin, (5.0, 3.0))?;
            }
            places.take_line(&line);
        }
    }
    Ok(())
}

fn axis(canvas: &mut Canvas, scale: &Scale) -> Result<(), Error> {
    let ink = Stroke {
        color: INK,
        width: 1.1,
    };
    canvas.frame((LEFT, SPECTRA.top), (RIGHT, SPECTRA.bottom), ink)?;
    for (value, text) in [(0.0, "0"), (0.5, "0.5"), (1.0, "1")] {
        let y = SPECTRA.y(value, scale.span);
        canvas.line((LEFT - 6.0, y), (LEFT, y), ink)?;
        canvas.text(text, (LEFT - 10.0, y), &Type::new(INK, TICK, Anchor::End))?;
    }
    let step = scale.frame.step();
    for tick in scale.frame.ticks(step) {
        let x = scale.frame.x(f64::from(tick) * step);
        canvas.line((x, SPECTRA.bottom), (x, SPECTRA.bottom - 6.0), ink)?;
    }
    let look = Type {
        upright: true,
        ..Type::new(INK, TITLE, Anchor::Middle)
    };
    let middle = f64::midpoint(SPECTRA.top, SPECTRA.bottom);
    canvas.text("intensity (each side's maximum = 1)", (26.0, middle), &look)
}

/// The names of what is drawn, the most important first.
fn labels(scale: &Scale, sides: &[Unit], shapes: &[Shape]) -> Vec<Label> {
    let plain = |lines: &[&str], targets: Vec<Point>| Label {
        lines: lines.iter().map(|&line| line.to_owned()).collect(),
        look: Type::new(INK, LABEL, Anchor::Middle),
        room: Room::Any,
        targets,
    };
    let inside = shapes
        .iter()
        .flat_map(|shape| shape.inside.clone())
        .collect();
    let model = |curve: &SideCurve| curve.model.clone();
    let background = |curve: &SideCurve| curve.background.clone();
    let mut labels: Vec<Label> = sides.iter().map(|side| technique(scale, side)).collect();
    labels.push(plain(
        &["computed density,", "shifted and broadened"],
        inside,
    ));
    labels.push(plain(
        &["fitted model", "(dashed: not fitted)"],
        along(scale, sides, model, true),
    ));
    labels.push(plain(
        &["background"],
        along(scale, sides, background, false),
    ));
    labels
}

/// The points of a curve of every side; of the fitted window only, where that is asked for.
fn along(
    scale: &Scale,
    sides: &[Unit],
    pick: fn(&SideCurve) -> Vec<f64>,
    fitted: bool,
) -> Vec<Point> {
    let of_side = |(curve, largest): &Unit| {
        let (first, last) = curve.window_ev;
        let rows = curve.energy_ev.clone().into_iter().zip(pick(curve));
        let inside = move |energy: f64| !fitted || (first..=last).contains(&energy);
        let unit = *largest;
        rows.map(move |(energy, value)| (energy, value / unit))
            .filter(move |&(energy, _)| inside(energy))
    };
    let rows = sides.iter().flat_map(of_side);
    let shown = rows.filter(|&(energy, value)| scale.shows(energy, value));
    shown
        .map(|(energy, value)| scale.point(energy, value))
        .collect()
}

/// The name of a side, above its points, saying where not every channel is drawn.
fn technique(scale: &Scale, &(curve, largest): &Unit) -> Label {
    let mut lines = vec![curve.side.technique().to_owned()];
    let every = stride(curve, scale.frame);
    if every > 1 {
        lines.push(format!("one channel in {every} shown"));
    }
    let rows = curve.energy_ev.iter().zip(&curve.measured);
    let rows = rows.map(|(&energy, &value)| (energy, value / largest));
    let high = rows.filter(|&(energy, value)| value > 0.45 && scale.shows(energy, value));
    Label {
        lines,
        look: Type {
            bold: true,
            ..Type::new(side_text(curve.side), LABEL, Anchor::Middle)
        },
        room: Room::Above,
        targets: high
            .map(|(energy, value)| scale.point(energy, value))
            .collect(),
    }
}
