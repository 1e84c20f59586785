//! What a block states of its table, held to the table: NPOINTS, FIRSTX, LASTX, FIRSTY, the extremes.
//!
//! A number agrees where it differs by no more than half the unit of the last place in which ordinates
//! are written (times the factor), or than the rounding of its own text where it has a decimal point.

use super::axis::Axis;
use super::block::{BlockReader, Stated};
use crate::parse::{Place, Problem};

/// Relative slack for what arithmetic in doubles loses.
const SLACK: f64 = 1e-12;

/// Whether two numbers differ by no more than a tolerance.
pub(super) fn agree(a: f64, b: f64, tolerance: f64) -> bool {
    (a - b).abs() <= tolerance * (1.0 + SLACK) + SLACK * a.abs().max(b.abs())
}

/// The least and the greatest of some values, those that are no number left aside.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Extent {
    least: f64,
    greatest: f64,
}

impl Extent {
    pub fn of(values: impl Iterator<Item = f64>, factor: f64) -> Self {
        let empty = Self {
            least: f64::INFINITY,
            greatest: f64::NEG_INFINITY,
        };
        values
            .map(|value| value * factor)
            .fold(empty, |extent, value| Self {
                least: extent.least.min(value),
                greatest: extent.greatest.max(value),
            })
    }

    /// Whether there is no value, or every one is finite.
    pub fn is_finite(&self) -> bool {
        self.is_empty() || (self.least.is_finite() && self.greatest.is_finite())
    }

    fn is_empty(&self) -> bool {
        self.least > self.greatest
    }
}

/// Holds NPOINTS to the number of values.
pub(super) fn check_count(
    block: BlockReader<'_>,
    table: &str,
    found: usize,
    end: Place,
    off_axis: Option<&Problem>,
) -> Result<(), Problem> {
    let (stated, span) = block.points()?;
    if u64::try_from(found) == Ok(stated) && found > 0 {
        return Ok(());
    }
    let source = block.source;
    let mut problem = Problem::new(format!(
        "`##NPOINTS=`: expected the number of ordinates in `##{table}=`, {found}, and found {stated}"
    ))
    .at(source.place(span));
    if found == 0 {
        problem
            .message
            .push_str("; a table needs one ordinate at least");
    } else {
        problem = problem.with_related(end, format!("ordinate {found} is the last"));
    }
    if let Some(place) = off_axis.and_then(|problem| problem.place.clone()) {
        problem = problem.with_related(
            place,
            "with this NPOINTS the first abscissa that does not fit: if a line is missing, it is before here",
        );
    }
    Err(problem)
}

/// Holds LASTX to FIRSTX, DELTAX and NPOINTS, where DELTAX is stated.
pub(super) fn check_last(block: BlockReader<'_>, axis: &Axis) -> Result<(), Problem> {
    let (count, _) = block.points()?;
    #[allow(clippy::cast_precision_loss)] // It is the number of ordinates in memory.
    let steps = count.saturating_sub(1) as f64;
    let last = block.need_number("LASTX")?;
    if count == 1 && !agree(last.value, axis.first, last.rounding) {
        return Err(mismatch(
            block,
            &last,
            "FIRSTX, as there is one point only,",
            axis.first,
        ));
    }
    let Some(delta) = block.stated("DELTAX").filter(|_| count > 1) else {
        return Ok(());
    };
    let reached = axis.first + steps * delta.value;
    let tolerance = axis.step.abs().min(delta.value.abs()) / 2.0 + steps * delta.rounding;
    if agree(last.value, reached, tolerance) {
        return Ok(());
    }
    let place = block.source.place(delta.span);
    Err(mismatch(
        block,
        &last,
        "FIRSTX + (NPOINTS - 1) DELTAX within half a step,",
        reached,
    )
    .with_related(
        place,
        format!("DELTAX; (LASTX - FIRSTX)/(NPOINTS - 1) is {}", axis.step),
    ))
}

/// Holds what is stated of a value at an end, if it is stated, to the value.
pub(super) fn check_end(
    block: BlockReader<'_>,
    label: &'static str,
    found: Option<f64>,
    quantum: f64,
) -> Result<(), Problem> {
    let Some((stated, found)) = block.stated(label).zip(found) else {
        return Ok(());
    };
    if found.is_nan() || fits(&stated, found, quantum) {
        return Ok(());
    }
    let what = match label {
        "FIRSTX" => "the first abscissa times XFACTOR,",
        "LASTX" => "the last abscissa times XFACTOR,",
        _ => "the first ordinate times YFACTOR,",
    };
    Err(mismatch(block, &stated, what, found))
}

/// Holds what is stated of the least and the greatest value to the values.
pub(super) fn check_extremes(
    block: BlockReader<'_>,
    extent: &Extent,
    [least, greatest]: [&'static str; 2],
    quantum: f64,
) -> Result<(), Problem> {
    let ends = [
        (least, extent.least, "the least value of the table,"),
        (
            greatest,
            extent.greatest,
            "the greatest value of the table,",
        ),
    ];
    for (label, found, what) in ends {
        match block.stated(label) {
            Some(stated) if !extent.is_empty() && !fits(&stated, found, quantum) => {
                return Err(mismatch(block, &stated, what, found));
            }
            _ => {}
        }
    }
    Ok(())
}

fn fits(stated: &Stated, found: f64, quantum: f64) -> bool {
    agree(stated.value, found, stated.rounding.max(quantum / 2.0))
}

fn mismatch(block: BlockReader<'_>, stated: &Stated, what: &str, found: f64) -> Problem {
    Problem::new(format!(
        "`##{}=`: expected {what} {found}, and found {}",
        stated.label, stated.value
    ))
    .at(block.source.place(stated.span.clone()))
}
