//! The abscissas of a table of ordinates, as FIRSTX, LASTX and NPOINTS give them.

use super::block::BlockReader;
use crate::parse::Problem;

/// Abscissas at equal steps.
#[derive(Debug, Clone)]
pub(super) struct Axis {
    pub first: f64,
    pub last: f64,
    /// How many steps lie between the two.
    steps: f64,
    /// From one abscissa to the next.
    pub step: f64,
}

impl Axis {
    /// The axis of a block: from FIRSTX to LASTX in NPOINTS.
    pub fn of(block: BlockReader<'_>) -> Result<Self, Problem> {
        let first = block.need_number("FIRSTX")?.value;
        let last = block.need_number("LASTX")?.value;
        let (count, _) = block.points()?;
        let axis = Self::between([first, last], count);
        if axis.step.is_finite() {
            return Ok(axis);
        }
        let what = "an abscissa at a finite distance from FIRSTX";
        Err(block
            .need("LASTX")?
            .expected(block.source, what, &last.to_string()))
    }

    /// The axis of so many points between two abscissas.
    #[allow(clippy::cast_precision_loss)] // A count that is no such exact number is refused later.
    pub fn between([first, last]: [f64; 2], count: u64) -> Self {
        let steps = count.saturating_sub(1) as f64;
        let step = if steps > 0.0 {
            (last - first) / steps
        } else {
            0.0
        };
        Self {
            first,
            last,
            steps,
            step,
        }
    }

    /// The abscissa of a row; the last one is the stated one to the last bit.
    #[allow(clippy::cast_precision_loss, clippy::float_cmp)] // Rows are held in memory.
    pub fn at(&self, row: usize) -> f64 {
        let row = row as f64;
        if row > 0.0 && row == self.steps {
            return self.last;
        }
        self.first + row * self.step
    }
}
