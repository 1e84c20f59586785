//! The tangent protocol: the leading edge, continued as a straight line to the background.
//!
//! Stated criterion. The background is the mean of the gap side, farther than one resolution width
//! from where the signal first rises. The signal begins where the smoothed curve stays above the
//! background by four standard deviations. Within `reach` of there, the steepest local line over one
//! resolution width is the leading edge; it is fitted by weighted least squares over that width and
//! cut with the background. Common practice, no single source; the bias is measured by replicas.

use super::noise::moving_average;
use crate::schema::Side;

/// How a tangent is laid.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TangentOptions {
    /// Which side of the gap.
    pub side: Side,
    /// Width over which lines are fitted, eV: the total width of the broadening.
    pub width: f64,
    /// How far into the band the steepest slope is sought, eV.
    pub reach: f64,
}

/// A tangent to a leading edge.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Tangent {
    /// Where the line meets the background.
    pub onset: f64,
    /// Slope of the line.
    pub slope: f64,
    /// The background.
    pub baseline: f64,
    /// Middle of the channels that the line was fitted to.
    pub centre: f64,
}

/// Lays a tangent on a curve. `energies` ascending, `values` and `variances` of the same length,
/// variances positive. `None` where no edge stands out of the background or fewer than three
/// channels make the line.
#[must_use]
pub fn tangent(
    energies: &[f64],
    values: &[f64],
    variances: &[f64],
    options: TangentOptions,
) -> Option<Tangent> {
    let curve = GapSide::new(energies, values, variances, options.side);
    let rise = curve.rise(options.width)?;
    let baseline = curve.baseline(curve.depth[rise] - options.width)?;
    let last = curve
        .depth
        .partition_point(|&d| d <= curve.depth[rise] + options.reach);
    let line = (rise..last)
        .filter_map(|middle| curve.line(curve.depth[middle], options.width))
        .max_by(|a, b| a.slope.total_cmp(&b.slope))?;
    let depth = line.centre - (line.level - baseline) / line.slope;
    (line.slope > 0.0).then(|| Tangent {
        onset: curve.energy(depth),
        slope: line.slope,
        baseline,
        centre: curve.energy(line.centre),
    })
}

/// A curve counted from the gap into the band.
struct GapSide {
    depth: Vec<f64>,
    values: Vec<f64>,
    variances: Vec<f64>,
    sign: f64,
}

struct Line {
    centre: f64,
    level: f64,
    slope: f64,
}

impl GapSide {
    fn new(energies: &[f64], values: &[f64], variances: &[f64], side: Side) -> Self {
        let order = |list: &[f64]| -> Vec<f64> {
            match side {
                Side::Valence => list.iter().rev().copied().collect(),
                Side::Conduction => list.to_vec(),
            }
        };
        let sign = if side == Side::Valence { -1.0 } else { 1.0 };
        Self {
            depth: order(energies).iter().map(|e| e * sign).collect(),
            values: order(values),
            variances: order(variances),
            sign,
        }
    }

    fn energy(&self, depth: f64) -> f64 {
        depth * self.sign
    }

    /// First channel from which five in a row stand above the background of the gap's far end.
    fn rise(&self, width: f64) -> Option<usize> {
        let smooth = moving_average(&self.values, 1);
        let start = self.depth.first()? + width;
        let mut known = self.depth.partition_point(|&d| d <= start).max(4);
        while known + 5 <= self.depth.len() {
            let (level, variance) = mean(&self.values[..known], &self.variances[..known]);
            let above =
                |i: usize| smooth[i] > level + 4.0 * (variance + self.variances[i] / 3.0).sqrt();
            if (known..known + 5).all(above) {
                return Some(known);
            }
            known += 1;
        }
        None
    }

    fn baseline(&self, until: f64) -> Option<f64> {
        let last = self.depth.partition_point(|&d| d <= until).max(3);
        (last <= self.depth.len()).then(|| mean(&self.values[..last], &self.variances[..last]).0)
    }

    /// The weighted least-squares line over `width` about `middle`.
    fn line(&self, middle: f64, width: f64) -> Option<Line> {
        let first = self.depth.partition_point(|&d| d < middle - 0.5 * width);
        let last = self.depth.partition_point(|&d| d <= middle + 0.5 * width);
        if last - first < 3 || self.depth[last - 1] < middle + 0.25 * width {
            return None;
        }
        let [mut w, mut wx, mut wy, mut wxx, mut wxy] = [0.0; 5];
        for i in first..last {
            let weight = 1.0 / self.variances[i];
            let x = self.depth[i] - middle;
            w += weight;
            wx += weight * x;
            wy += weight * self.values[i];
            wxx += weight * x * x;
            wxy += weight * x * self.values[i];
        }
        let slope = (w * wxy - wx * wy) / (w * wxx - wx * wx);
        Some(Line {
            centre: middle + wx / w,
            level: wy / w,
            slope,
        })
    }
}

/// Mean of values and its variance; unweighted, since small counts have small variances.
fn mean(values: &[f64], variances: &[f64]) -> (f64, f64) {
    let n = f64::from(u32::try_from(values.len()).unwrap_or(1));
    let level = values.iter().sum::<f64>() / n;
    (level, variances.iter().sum::<f64>() / (n * n))
}
