//! What the numbers of a column are like: how many, their range, their sum, and a small picture.

use super::values::Values;

/// Cells of the picture.
const PICTURE: usize = 24;
const LEVELS: [char; 8] = ['▁', '▂', '▃', '▄', '▅', '▆', '▇', '█'];

/// The numbers of a column, as they stand in the file.
#[derive(Debug, Clone, PartialEq)]
pub struct Summary {
    /// How many values there are: finite numbers, or texts that are not blank.
    pub count: usize,
    /// How many rows have none.
    pub missing: usize,
    /// The least of the numbers.
    pub minimum: Option<f64>,
    /// The greatest of them.
    pub maximum: Option<f64>,
    /// Their sum, compensated for rounding (Knuth's two-sum).
    pub sum: Option<f64>,
    /// Their course over the rows, in up to 24 steps between the least and the greatest.
    pub picture: String,
}

impl Summary {
    pub(super) fn of(values: &Values) -> Self {
        match values {
            Values::Numbers(numbers) => Self::of_numbers(numbers.len(), |row| numbers[row]),
            // Whole numbers are below 2^53.
            #[allow(clippy::cast_precision_loss)]
            Values::Whole(whole) => Self::of_numbers(whole.len(), |row| whole[row] as f64),
            Values::Texts(texts) => {
                let count = texts.iter().filter(|text| !text.is_empty()).count();
                Self {
                    count,
                    missing: texts.len() - count,
                    minimum: None,
                    maximum: None,
                    sum: None,
                    picture: String::new(),
                }
            }
        }
    }

    fn of_numbers(rows: usize, value: impl Fn(usize) -> f64) -> Self {
        let (mut count, mut least, mut most) = (0, f64::INFINITY, f64::NEG_INFINITY);
        let (mut sum, mut lost) = (0.0f64, 0.0f64);
        for value in (0..rows).map(&value).filter(|value| value.is_finite()) {
            count += 1;
            least = least.min(value);
            most = most.max(value);
            let next = sum + value;
            let added = next - sum;
            lost += (sum - (next - added)) + (value - added);
            sum = next;
        }
        let some = |value| (count > 0).then_some(value);
        Self {
            count,
            missing: rows - count,
            minimum: some(least),
            maximum: some(most),
            sum: some(sum + lost),
            picture: picture(rows, value, least, most),
        }
    }
}

/// One sign for each of some rows that stand at even distances.
fn picture(rows: usize, value: impl Fn(usize) -> f64, least: f64, most: f64) -> String {
    let cells = rows.min(PICTURE);
    let sign = |cell: usize| {
        let value = value(cell * (rows - 1) / (cells - 1).max(1));
        let share = if most > least {
            (value - least) / (most - least)
        } else {
            0.5
        };
        // A share of NaN is no level.
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        let level = (share * 7.999) as usize;
        if value.is_finite() {
            LEVELS[level.min(7)]
        } else {
            ' '
        }
    };
    (0..cells).map(sign).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_summed_up() {
        let summary = Summary::of(&Values::Numbers(vec![1e16, 1.0, -1e16, f64::NAN]));
        assert_eq!((summary.count, summary.missing), (3, 1));
        assert_eq!(
            (summary.minimum, summary.maximum),
            (Some(-1e16), Some(1e16))
        );
        // A plain sum gives 0.
        assert_eq!(summary.sum, Some(1.0));
        let ramp = Summary::of(&Values::Whole((0..8).collect()));
        assert_eq!(ramp.picture, "▁▂▃▄▅▆▇█");
        let none = Summary::of(&Values::Numbers(vec![f64::NAN]));
        assert_eq!(
            (none.count, none.sum, none.picture.as_str()),
            (0, None, " ")
        );
        assert_eq!(Summary::of(&Values::Numbers(vec![])).picture, "");
    }
}
