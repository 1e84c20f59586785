//! The ruler: the energy axis with fine divisions, the measured gap lying on it and the computed one
//! under it, both from the measured valence edge, so that the two lengths compare at a glance.

use super::Error;
use super::canvas::{Anchor, BOLD, Canvas, Stroke, Type, text_width};
use super::frame::{Frame, LEFT, RIGHT, RULER, usable};
use super::palette::{INK, LABEL, RULE, SOFT, TICK, TITLE};
use super::panel_spectra::bar;
use crate::export::words::{
    counted_from, energy_title, interval, typeset, value, value_with_interval,
};
use crate::quantity::Reference;
use crate::schema::{Quantity, ResultDocument};

/// From the ruler to the line of a bracket.
const OFF: f64 = 17.0;
/// From a bracket to its label.
const APART: f64 = 14.0;

/// Draws the ruler and both gaps.
pub(super) fn draw(
    canvas: &mut Canvas,
    frame: &Frame,
    result: &ResultDocument,
) -> Result<(), Error> {
    rule(canvas, frame)?;
    titles(canvas, frame)?;
    if let Some(gap) = usable(result.measured.gap) {
        let ends = frame
            .valence
            .zip(frame.conduction)
            .map(|(v, c)| (v.value, c.value));
        bracket(
            canvas,
            frame,
            &Length {
                name: "measured gap",
                gap,
                ends,
                above: true,
            },
        )?;
    }
    if let Some(gap) = usable(result.computed.corrected_gap) {
        let from_valence = frame
            .valence
            .map(|edge| (edge.value, edge.value + gap.value));
        let to_conduction = frame
            .conduction
            .map(|edge| (edge.value - gap.value, edge.value));
        let ends = from_valence.or(to_conduction);
        bracket(
            canvas,
            frame,
            &Length {
                name: "computed gap",
                gap,
                ends,
                above: false,
            },
        )?;
    }
    Ok(())
}

/// The body with its divisions on both sides and the numbers between them.
fn rule(canvas: &mut Canvas, frame: &Frame) -> Result<(), Error> {
    let ink = Stroke {
        color: INK,
        width: 1.1,
    };
    canvas.block((LEFT, RULER.top), (RIGHT, RULER.bottom), RULE)?;
    let step = frame.step();
    // The finest division that leaves the marks apart.
    let parts = if step / 10.0 * frame.electronvolt() >= 3.6 {
        10
    } else {
        5
    };
    let division = step / f64::from(parts);
    for tick in frame.ticks(division) {
        let x = frame.x(f64::from(tick) * division);
        let (length, width) = match tick.rem_euclid(parts) {
            0 => (15.0, 1.3),
            5 if parts == 10 => (10.5, 1.0),
            _ => (6.5, 0.8),
        };
        let stroke = Stroke { color: INK, width };
        canvas.line((x, RULER.top), (x, RULER.top + length), stroke)?;
        canvas.line((x, RULER.bottom), (x, RULER.bottom - length), stroke)?;
    }
    canvas.frame((LEFT, RULER.top), (RIGHT, RULER.bottom), ink)?;
    let middle = f64::midpoint(RULER.top, RULER.bottom);
    let decimals = usize::from(step < 0.95);
    for tick in frame.ticks(step) {
        let value = f64::from(tick) * step;
        let x = frame.x(value);
        let text = typeset(&format!("{value:.decimals$}"));
        let half = text_width(&text, TICK) / 2.0 + 2.0;
        if x - half >= LEFT && x + half <= RIGHT {
            let look = Type {
                bold: tick == 0 && frame.reference == Reference::Fermi,
                ..Type::new(INK, TICK, Anchor::Middle)
            };
            canvas.text(&text, (x, middle), &look)?;
        }
    }
    Ok(())
}

fn titles(canvas: &mut Canvas, frame: &Frame) -> Result<(), Error> {
    const Y: f64 = 708.0;
    let title = match frame.reference {
        Reference::Fermi => typeset(energy_title(frame.reference)),
        other => format!("{}, from {}", energy_title(other), counted_from(other)),
    };
    let soft = |anchor| Type::new(SOFT, TICK, anchor);
    canvas.text(
        "\u{2190} more strongly bound",
        (LEFT, Y),
        &soft(Anchor::Start),
    )?;
    canvas.text(
        &title,
        (f64::midpoint(LEFT, RIGHT), Y),
        &Type::new(INK, TITLE, Anchor::Middle),
    )?;
    let note = "± and bars: 95 % intervals";
    canvas.text(note, (RIGHT, Y), &soft(Anchor::End))
}

/// A gap as a length on the ruler.
struct Length {
    name: &'static str,
    gap: Quantity,
    /// Where it lies; none where nothing ties it to the axis.
    ends: Option<(f64, f64)>,
    above: bool,
}

/// A bracket with its interval at the upper end, its name and value beside it.
fn bracket(canvas: &mut Canvas, frame: &Frame, length: &Length) -> Result<(), Error> {
    let (edge, line) = if length.above {
        (RULER.top, RULER.top - OFF)
    } else {
        (RULER.bottom, RULER.bottom + OFF)
    };
    let text = name(length);
    let bold = |anchor| Type {
        bold: true,
        ..Type::new(INK, LABEL, anchor)
    };
    let Some(ends) = length
        .ends
        .filter(|(a, b)| frame.holds(*a) && frame.holds(*b))
    else {
        let middle = f64::midpoint(LEFT, RIGHT);
        return canvas.text(&text, (middle, line), &bold(Anchor::Middle));
    };
    let (from, to) = (frame.x(ends.0), frame.x(ends.1));
    let ink = |width| Stroke { color: INK, width };
    canvas.path(
        &[(from, edge), (from, line), (to, line), (to, edge)],
        ink(1.8),
    )?;
    let (mut first, mut last) = (from.min(to), from.max(to));
    if let Some((lower, upper)) = interval(&length.gap) {
        let moved = |end: f64| ends.1 + end - length.gap.value;
        let reach = |end: f64| frame.x(moved(end).clamp(frame.start, frame.stop));
        bar(canvas, (reach(lower), line), (reach(upper), line), ink(2.2))?;
        (first, last) = (first.min(reach(lower)), last.max(reach(upper)));
    }
    let width = text_width(&text, LABEL) * BOLD;
    let (at, anchor) = if last + APART + width <= RIGHT {
        ((last + APART, line), Anchor::Start)
    } else if first - APART - width >= LEFT {
        ((first - APART, line), Anchor::End)
    } else {
        let middle = f64::midpoint(from, to).clamp(LEFT + width / 2.0, RIGHT - width / 2.0);
        let beyond = if length.above { -APART } else { APART };
        ((middle, line + beyond), Anchor::Middle)
    };
    canvas.text(&text, at, &bold(anchor))
}

/// What is written beside a bracket.
fn name(length: &Length) -> String {
    let value = match interval(&length.gap) {
        Some(_) => value_with_interval(&length.gap),
        None => format!("{} eV, ± not stated", value(&length.gap)),
    };
    format!("{} {}", length.name, typeset(&value))
}
