//! Measured minus model in standard uncertainties, within the fitted windows only.

use super::Error;
use super::canvas::{Anchor, Canvas, Point, Stroke, Type, text_width};
use super::curve::{Scale, stride};
use super::frame::{Frame, LEFT, RESIDUALS, RIGHT};
use super::palette::{BAND, HAIR, INK, SOFT, TICK, TITLE, side};
use crate::export::words::typeset;
use crate::schema::{Curves, Side, SideCurve};

/// Draws the panel.
pub(super) fn draw(canvas: &mut Canvas, frame: &Frame, curves: &Curves) -> Result<(), Error> {
    let limit = limit(curves);
    let scale = Scale {
        frame,
        panel: RESIDUALS,
        span: (-limit, limit),
    };
    let y = |value: f64| RESIDUALS.y(value, scale.span);
    for curve in &curves.sides {
        let (first, last) = window(curve, frame);
        if first < last {
            canvas.block((frame.x(first), y(2.0)), (frame.x(last), y(-2.0)), BAND)?;
        }
    }
    let hair = Stroke {
        color: HAIR,
        width: 0.9,
    };
    canvas.line((LEFT, y(0.0)), (RIGHT, y(0.0)), hair)?;
    for curve in &curves.sides {
        points(canvas, &scale, curve)?;
    }
    key(canvas, frame, curves)?;
    axis(canvas, &scale)
}

/// What the band is, where there is room beside the windows.
fn key(canvas: &mut Canvas, frame: &Frame, curves: &Curves) -> Result<(), Error> {
    const TEXT: &str = "grey: ±2 σ";
    let width = text_width(TEXT, TICK) + 16.0;
    let windows = || curves.sides.iter().map(|curve| window(curve, frame));
    let first = windows().fold(f64::INFINITY, |least, (start, _)| least.min(start));
    let last = windows().fold(f64::NEG_INFINITY, |most, (_, stop)| most.max(stop));
    let (x, anchor) = if curves.sides.is_empty() {
        return Ok(());
    } else if frame.x(last) + width <= RIGHT {
        (RIGHT - 8.0, Anchor::End)
    } else if frame.x(first) - width >= LEFT {
        (LEFT + 8.0, Anchor::Start)
    } else {
        return Ok(());
    };
    let at = (x, RESIDUALS.top + TICK);
    canvas.text(TEXT, at, &Type::new(SOFT, TICK, anchor))
}

/// The end of the scale: all residuals, but 3.5 at least and 8 at most; what is beyond is an arrow at it.
fn limit(curves: &Curves) -> f64 {
    let fitted = curves.sides.iter().flat_map(residuals);
    let largest = fitted.map(|(_, value)| value.abs()).fold(0.0, f64::max);
    (largest + 0.4).clamp(3.5, 8.0)
}

/// Energies and residuals in the fitted window.
fn residuals(curve: &SideCurve) -> impl Iterator<Item = (f64, f64)> {
    let (first, last) = curve.window_ev;
    let rows = curve
        .energy_ev
        .iter()
        .copied()
        .zip(curve.residual.iter().copied());
    rows.filter(move |&(energy, value)| (first..=last).contains(&energy) && value.is_finite())
}

fn window(curve: &SideCurve, frame: &Frame) -> (f64, f64) {
    (
        curve.window_ev.0.max(frame.start),
        curve.window_ev.1.min(frame.stop),
    )
}

fn points(canvas: &mut Canvas, scale: &Scale, curve: &SideCurve) -> Result<(), Error> {
    const RADIUS: f64 = 2.1;
    let color = side(curve.side);
    let shown = residuals(curve).filter(|(energy, _)| scale.frame.holds(*energy));
    for (energy, value) in shown.step_by(stride(curve, scale.frame)) {
        let at = scale.point(energy, scale.within(value));
        if scale.within(value).total_cmp(&value).is_ne() {
            canvas.area(&arrow(at, value.signum()), color)?;
            continue;
        }
        match curve.side {
            Side::Valence => canvas.disc(at, RADIUS, color)?,
            Side::Conduction => canvas.ring(at, RADIUS, Stroke { color, width: 1.2 })?,
        }
    }
    Ok(())
}

/// A head at the end of the scale that points beyond it, upwards for a positive sign.
fn arrow((x, y): Point, sign: f64) -> [Point; 3] {
    let foot = y + 7.0 * sign;
    [(x, y), (x - 3.2, foot), (x + 3.2, foot)]
}

fn axis(canvas: &mut Canvas, scale: &Scale) -> Result<(), Error> {
    let ink = Stroke {
        color: INK,
        width: 1.1,
    };
    canvas.frame((LEFT, RESIDUALS.top), (RIGHT, RESIDUALS.bottom), ink)?;
    let step = if scale.span.1 > 5.0 { 5.0 } else { 2.0 };
    for value in [-step, 0.0, step] {
        let y = RESIDUALS.y(value, scale.span);
        let text = typeset(&value.to_string());
        canvas.line((LEFT - 6.0, y), (LEFT, y), ink)?;
        canvas.text(&text, (LEFT - 10.0, y), &Type::new(INK, TICK, Anchor::End))?;
    }
    let look = Type {
        upright: true,
        ..Type::new(INK, TITLE, Anchor::Middle)
    };
    let middle = f64::midpoint(RESIDUALS.top, RESIDUALS.bottom);
    canvas.text("residual (σ)", (26.0, middle), &look)
}
