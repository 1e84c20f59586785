//! The table `(XY..XY)`: pairs of an abscissa and an ordinate, `x, y` or `x y`, separated by blanks,
//! semicolons or line ends.

use std::ops::Range;

use nom::branch::alt;
use nom::character::complete::{char, space1};
use nom::combinator::{eof, map, not, recognize};
use nom::sequence::terminated;
use nom::{IResult, Parser};

use super::block::BlockReader;
use super::checks::{Extent, check_count, check_end, check_extremes};
use super::document::Points;
use super::label::XY_POINTS;
use super::number::{blanks, decimal, last_place};
use super::ordinates::check_form;
use super::token::{At, Fault};
use crate::parse::Problem;
use crate::parse::problem::visible;

/// An abscissa and an ordinate, with the bytes of the line that they stand in.
pub(super) type Pair = (At<f64>, At<f64>);

/// The pairs of a line; nothing follows a fault.
pub(super) fn pairs(text: &str) -> impl Iterator<Item = Result<Pair, Fault>> {
    let mut rest = text.trim_start();
    std::iter::from_fn(move || {
        if rest.is_empty() {
            return None;
        }
        let at = |rest: &str| text.len() - rest.len();
        if let Ok((next, pair)) = pair(rest, at) {
            rest = next;
            return Some(Ok(pair));
        }
        let from = std::mem::take(&mut rest);
        Some(Err(fault(text, at(from))))
    })
}

fn pair(input: &str, at: impl Fn(&str) -> usize) -> IResult<&str, Pair> {
    let (after_x, x) = decimal(input)?;
    let comma = recognize((blanks, char(','), blanks));
    let (from_y, _) = alt((comma, space1)).parse(after_x)?;
    let (after_y, y) = alt((decimal, map(char('?'), |_| f64::NAN))).parse(from_y)?;
    let end = alt((recognize((blanks, char(';'), blanks)), space1, eof));
    let (rest, _) = terminated(end, not(char(','))).parse(after_y)?;
    let x = (at(input)..at(after_x), x);
    let y = (at(from_y)..at(after_y), y);
    Ok((rest, (x, y)))
}

fn fault(text: &str, at: usize) -> Fault {
    let length = text[at..].find(';').unwrap_or(text.len() - at);
    Fault {
        span: at..at + length,
        expected: "a pair `x, y` of finite numbers with decimal points (or `?` for y), pairs \
                   separated by blanks or semicolons,",
    }
}

/// Reads the table of a record.
pub(super) fn read(block: BlockReader<'_>, table: usize) -> Result<Points, Problem> {
    check_form(block, table, "(XY..XY)")?;
    block.need("XUNITS")?;
    block.need("YUNITS")?;
    let mut points = Points::default();
    let (mut places, mut end) = ([1.0_f64; 2], 0..0);
    let pieces = block.raws[table].pieces(block.source).skip(1);
    for line in pieces.filter_map(|piece| piece.content) {
        points
            .anchors
            .note(points.abscissas.len(), line.start, false);
        let text = block.source.slice(line.clone());
        for pair in pairs(text) {
            let (x, y) = pair.map_err(|fault| refuse(block, &line, &fault))?;
            for (place, span) in places.iter_mut().zip([&x.0, &y.0]) {
                *place = place.min(last_place(&text[span.clone()]));
            }
            points.abscissas.push(x.1);
            points.ordinates.push(y.1);
            end = line.clone();
        }
    }
    check_count(
        block,
        XY_POINTS,
        points.abscissas.len(),
        block.source.place(end),
        None,
    )?;
    check(block, &points, places)?;
    Ok(points)
}

fn refuse(block: BlockReader<'_>, line: &Range<usize>, fault: &Fault) -> Problem {
    let span = line.start + fault.span.start..line.start + fault.span.end;
    let found = visible(block.source.slice(span.clone()));
    Problem::new(format!(
        "`##XYPOINTS=`: expected {} and found `{found}`",
        fault.expected
    ))
    .at(block.source.place(span))
}

fn check(block: BlockReader<'_>, points: &Points, places: [f64; 2]) -> Result<(), Problem> {
    let columns = [
        (&points.abscissas, "XFACTOR", ["MINX", "MAXX"]),
        (&points.ordinates, "YFACTOR", ["MINY", "MAXY"]),
    ];
    for ((values, label, extremes), place) in columns.into_iter().zip(places) {
        let factor = block.factor(label)?.unwrap_or(1.0);
        let extent = Extent::of(values.iter().copied(), factor);
        if !extent.is_finite() {
            let what = "a factor that keeps every value finite";
            return Err(block
                .need(label)?
                .expected(block.source, what, &factor.to_string()));
        }
        let quantum = place * factor.abs();
        let ends = match label {
            "XFACTOR" => vec![("FIRSTX", values.first()), ("LASTX", values.last())],
            // The standard states no last ordinate.
            _ => vec![("FIRSTY", values.first())],
        };
        for (label, end) in ends {
            check_end(block, label, end.map(|value| value * factor), quantum)?;
        }
        check_extremes(block, &extent, extremes, quantum)?;
    }
    Ok(())
}
