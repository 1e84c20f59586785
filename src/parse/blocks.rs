//! Blocks of rows: what their titles count, or the blank lines between them.

use super::layout::Layout;
use super::title::{Counted, Title, is_like_title, title};
use super::{Problem, Source};

/// What the titles of the blocks count, row by row.
pub(super) struct Numbered {
    /// The number of each row's block.
    pub numbers: Vec<i64>,
    /// The coordinates of each row's k-point, where the titles give them.
    pub points: Option<[Vec<f64>; 3]>,
    /// The line of the first title.
    pub line: usize,
}

/// The numbers that titles give to every row; `None` where there are no such titles, or where rows
/// stand before the first one.
pub(super) fn by_titles(source: &Source, layout: &Layout, counted: Counted) -> Option<Numbered> {
    let titles: Vec<(usize, usize, Title)> = layout
        .titles
        .iter()
        .filter_map(|aside| {
            let title = title(source.slice(aside.span.clone()).trim_start_matches(MARKS))?;
            (title.counted == counted).then_some((aside.row, aside.span.start, title))
        })
        .collect();
    let &(0, at, _) = titles.first()? else {
        return None;
    };
    let mut numbers = Vec::with_capacity(layout.rows);
    let mut points: [Vec<f64>; 3] = Default::default();
    for (index, (row, _, title)) in titles.iter().enumerate() {
        let until = titles.get(index + 1).map_or(layout.rows, |next| next.0);
        let rows = until - row;
        numbers.resize(numbers.len() + rows, title.number);
        for (column, value) in points.iter_mut().zip(title.point.unwrap_or([f64::NAN; 3])) {
            column.resize(column.len() + rows, value);
        }
    }
    let given = titles.iter().all(|(.., title)| title.point.is_some());
    Some(Numbered {
        numbers,
        points: given.then_some(points),
        line: source.place(at..at).line,
    })
}

/// The number of each row's block, counted from 1 by the blank lines; `None` where there is one
/// block, or where they differ in length.
pub(super) fn by_blanks(layout: &Layout) -> Option<Vec<i64>> {
    let length = equal_blocks(layout)?;
    let numbers = (0..layout.rows).map(|row| i64::try_from(row / length + 1).unwrap_or(i64::MAX));
    Some(numbers.collect())
}

/// The length of the blocks that blank lines make, where there are several of the same length.
pub(super) fn equal_blocks(layout: &Layout) -> Option<usize> {
    let length = *layout.breaks.first()?;
    let even = layout
        .breaks
        .iter()
        .enumerate()
        .all(|(block, &row)| row == (block + 1) * length);
    (even && layout.rows == (layout.breaks.len() + 1) * length).then_some(length)
}

/// Whether every block that blank lines make has the same values in a column.
pub(super) fn repeats<T: PartialEq>(layout: &Layout, column: &[T]) -> bool {
    equal_blocks(layout).is_some_and(|length| {
        let mut blocks = column.chunks(length);
        let first = blocks.next();
        blocks.all(|block| Some(block) == first)
    })
}

/// A comment among the rows that begins as the title of a block and says more than is understood.
pub(super) fn odd_title(source: &Source, layout: &Layout) -> Option<Problem> {
    let among = layout.comments.iter().filter(|aside| aside.row > 0);
    let odd = among.map(|aside| &aside.span).find(|span| {
        let text = source.slice((*span).clone());
        is_like_title(text)
    })?;
    Some(
        Problem::new(
            "this comment among the rows begins as the title of a block and is not understood",
        )
        .at(source.place(odd.clone()))
        .with_help(
            "write it as `k-point 3`, `k-point 3: 0.0 0.0 0.5`, `band 4` or `spin 1`, or begin \
                 a remark with another word",
        ),
    )
}

/// Whether a column has one value in each of the blocks that blank lines make.
pub(super) fn is_constant(layout: &Layout, column: &[f64]) -> bool {
    let one = |block: &[f64]| {
        block
            .iter()
            .all(|value| value.to_bits() == block[0].to_bits())
    };
    equal_blocks(layout).is_some_and(|length| column.chunks(length).all(one))
}

const MARKS: [char; 8] = ['#', '!', '%', '@', '/', ';', ' ', '\t'];
