//! The table `(X++(Y..Y))`: from lines to ordinates, with the checks that the standard asks for.

use std::ops::Range;

use super::axis::Axis;
use super::block::BlockReader;
use super::checks::{Extent, agree, check_count, check_end, check_extremes, check_last};
use super::document::Ordinates;
use super::label::XY_DATA;
use super::number::last_place;
use super::place::Anchors;
use super::token::{Fault, Token, line};
use crate::parse::problem::visible;
use crate::parse::{Problem, Source};

/// Ordinates beyond one a byte that counts of equal ordinates may add, all tables together.
const SPARE: usize = 10_000_000;
/// Whole numbers up to here are exact, and so are their sums.
const EXACT: f64 = 9_007_199_254_740_992.0;

/// How many ordinates a text may give: counts in it are not trusted with memory.
pub(super) fn room(source: &Source) -> usize {
    source.text().len() + SPARE
}

/// Reads the table of a record.
pub(super) fn read(
    block: BlockReader<'_>,
    table: usize,
    room: &mut usize,
) -> Result<Ordinates, Problem> {
    let raw = &block.raws[table];
    check_form(block, table, "(X++(Y..Y))")?;
    block.need("XUNITS")?;
    block.need("YUNITS")?;
    let missing = |label| move || block.need_number(label).map(|it| it.value);
    let x_factor = block
        .factor("XFACTOR")?
        .map_or_else(missing("XFACTOR"), Ok)?;
    let y_factor = block
        .factor("YFACTOR")?
        .map_or_else(missing("YFACTOR"), Ok)?;
    let mut decoder = Decoder::new(block.source, Axis::of(block)?, x_factor, room);
    for content in raw
        .pieces(block.source)
        .skip(1)
        .filter_map(|piece| piece.content)
    {
        if !content.is_empty() {
            decoder.line(content)?;
        }
    }
    decoder.finish(block, y_factor)
}

/// Holds the first line of a table to the only form that is read under its label.
pub(super) fn check_form(block: BlockReader<'_>, table: usize, form: &str) -> Result<(), Problem> {
    let raw = &block.raws[table];
    let head = raw
        .pieces(block.source)
        .next()
        .and_then(|piece| piece.content);
    let found = head.map_or("", |head| block.source.slice(head));
    let plain: String = found.chars().filter(|c| !c.is_whitespace()).collect();
    if plain.eq_ignore_ascii_case(form) {
        return Ok(());
    }
    let help = "`##XYDATA=` has the form `(X++(Y..Y))`, `##XYPOINTS=` the form `(XY..XY)`; values \
                begin on the next line";
    Err(raw
        .expected(block.source, &format!("`{form}`"), found)
        .with_help(help))
}

/// What is known while the lines go by.
struct Decoder<'a> {
    source: &'a Source,
    axis: Axis,
    x_factor: f64,
    room: &'a mut usize,
    values: Vec<f64>,
    anchors: Anchors,
    /// Whether the next line begins with a repeat of the last ordinate.
    repeats: bool,
    /// The difference that a count would repeat.
    difference: Option<f64>,
    /// The finest last place of an ordinate.
    place: f64,
    /// The first line whose abscissa does not fit. A wrong NPOINTS shows here too, so it is told later.
    off_axis: Option<Problem>,
    last_line: Range<usize>,
}

impl<'a> Decoder<'a> {
    fn new(source: &'a Source, axis: Axis, x_factor: f64, room: &'a mut usize) -> Self {
        Self {
            source,
            axis,
            x_factor,
            room,
            values: Vec::new(),
            anchors: Anchors::default(),
            repeats: false,
            difference: None,
            place: 1.0,
            off_axis: None,
            last_line: 0..0,
        }
    }

    fn line(&mut self, span: Range<usize>) -> Result<(), Problem> {
        let within = |part: &Range<usize>| span.start + part.start..span.start + part.end;
        let text = self.source.slice(span.clone());
        let refuse = |fault: Fault| {
            let found = visible(&text[fault.span.clone()]);
            Problem::new(format!(
                "`##XYDATA=`: expected {} and found `{found}`",
                fault.expected
            ))
            .at(self.source.place(within(&fault.span)))
        };
        let (x, tokens) = line(text).map_err(refuse)?;
        self.check_abscissa(x.1, within(&x.0));
        self.anchors
            .note(self.values.len(), span.start, self.repeats);
        let repeats = std::mem::take(&mut self.repeats);
        let mut before = None;
        for token in tokens {
            let (part, token) = token.map_err(refuse)?;
            match (before, token) {
                (None, _) if repeats => self.check_repeat(token, within(&part))?,
                _ => self.token(before, token, within(&part))?,
            }
            self.repeats = token.ends_in_difference(self.repeats);
            before = Some(token);
        }
        if before.is_none() {
            return Err(self.expected("an ordinate after the abscissa", span.end..span.end));
        }
        self.last_line = span;
        Ok(())
    }

    /// The X check: the abscissa of the line's first ordinate, within half a step.
    fn check_abscissa(&mut self, written: f64, span: Range<usize>) {
        let row = self.values.len() - usize::from(self.repeats);
        let (found, expected) = (written * self.x_factor, self.axis.at(row));
        if self.off_axis.is_none() && !agree(found, expected, self.axis.step.abs() / 2.0) {
            let problem = Problem::new(format!(
                "abscissa of the line (X check): expected {expected} for ordinate {}, within half a \
                 step of {}, and found {found}",
                row + 1,
                self.axis.step
            ))
            .at(self.source.place(span))
            .with_help(
                "the abscissa times XFACTOR is FIRSTX plus as many steps as ordinates stand before; \
                 a step is (LASTX - FIRSTX)/(NPOINTS - 1)",
            );
            self.off_axis = Some(problem);
        }
    }

    /// The Y check: after differences a line begins with the last ordinate of the one before.
    fn check_repeat(&mut self, token: Token, span: Range<usize>) -> Result<(), Problem> {
        let last = self.values.last().copied().unwrap_or(f64::NAN);
        self.difference = None;
        match token {
            Token::Number(value) | Token::Squeezed(value) if exactly(value, last) => Ok(()),
            Token::Number(value) | Token::Squeezed(value) => Err(Problem::new(format!(
                "first ordinate of the line (Y check): expected {last}, the last ordinate of the \
                 line before, and found {value}"
            ))
            .at(self.source.place(span))
            .with_related(self.source.place(self.last_line.clone()), "the line before")
            .with_help(
                "a line that ends in differences is followed by one that repeats its last ordinate; \
                 where the two differ, a line is damaged or missing",
            )),
            _ => Err(self.expected("the last ordinate of the line before (Y check)", span)),
        }
    }

    fn token(
        &mut self,
        before: Option<Token>,
        token: Token,
        span: Range<usize>,
    ) -> Result<(), Problem> {
        let last = self.values.last().copied().unwrap_or(f64::NAN);
        match (before, token) {
            (_, Token::Number(value) | Token::Squeezed(value)) => {
                if matches!(token, Token::Number(_)) {
                    self.place = self.place.min(last_place(self.source.slice(span.clone())));
                }
                self.difference = None;
                self.push(value, 1, span)
            }
            (_, Token::Invalid) => {
                self.difference = None;
                self.push(f64::NAN, 1, span)
            }
            (None, Token::Difference(_) | Token::Duplicate(_)) => Err(self.expected(
                "an ordinate in AFFN or SQZ form at the start of the line",
                span,
            )),
            (Some(Token::Duplicate(_)), Token::Duplicate(_)) => {
                Err(self.expected("an ordinate between two counts of equal ones", span))
            }
            (_, Token::Difference(difference)) => {
                if last.is_nan() {
                    return Err(
                        self.expected("an ordinate that is valid before a difference", span)
                    );
                }
                if last.fract() != 0.0 {
                    return Err(self.expected("a whole ordinate before a difference", span));
                }
                self.difference = Some(difference);
                self.push(last + difference, 1, span)
            }
            (_, Token::Duplicate(_)) => match self.difference {
                None => self.push(last, token.rows(), span),
                Some(difference) => self.climb(difference, token.rows(), span),
            },
        }
    }

    /// Repeats a difference.
    fn climb(&mut self, difference: f64, times: usize, span: Range<usize>) -> Result<(), Problem> {
        self.take_room(times, &span)?;
        let mut value = self.values.last().copied().unwrap_or(f64::NAN);
        for _ in 0..times {
            value += difference;
            self.values.push(value);
        }
        self.check_exact(value, span)
    }

    fn push(&mut self, value: f64, times: usize, span: Range<usize>) -> Result<(), Problem> {
        self.take_room(times, &span)?;
        self.values.extend(std::iter::repeat_n(value, times));
        match self.difference {
            Some(_) => self.check_exact(value, span),
            None => Ok(()),
        }
    }

    fn check_exact(&self, value: f64, span: Range<usize>) -> Result<(), Problem> {
        if value.abs() > EXACT {
            return Err(self.expected("differences that add up to at most 2^53", span));
        }
        Ok(())
    }

    fn take_room(&mut self, times: usize, span: &Range<usize>) -> Result<(), Problem> {
        match self.room.checked_sub(times) {
            Some(left) => {
                *self.room = left;
                Ok(())
            }
            None => Err(self.expected(
                "no more ordinates than one a byte and ten million in counts",
                span.clone(),
            )),
        }
    }

    fn expected(&self, what: &str, span: Range<usize>) -> Problem {
        let found = self.source.slice(span.clone());
        let found = match found {
            "" => "the end of the line".to_owned(),
            found => format!("`{}`", visible(found)),
        };
        Problem::new(format!("`##XYDATA=`: expected {what} and found {found}"))
            .at(self.source.place(span))
    }

    /// The checks that need the whole table.
    fn finish(self, block: BlockReader<'_>, y_factor: f64) -> Result<Ordinates, Problem> {
        let end = self.source.place(self.last_line.clone());
        check_count(
            block,
            XY_DATA,
            self.values.len(),
            end,
            self.off_axis.as_ref(),
        )?;
        check_last(block, &self.axis)?;
        if let Some(problem) = self.off_axis {
            return Err(problem);
        }
        let step = self.axis.step.abs();
        let abscissas = Extent::of([self.axis.first, self.axis.last].into_iter(), 1.0);
        check_extremes(block, &abscissas, ["MINX", "MAXX"], step)?;
        let quantum = self.place * y_factor.abs();
        let ordinates = Extent::of(self.values.iter().copied(), y_factor);
        if !ordinates.is_finite() {
            let what = "a factor that keeps every ordinate finite";
            return Err(block
                .need("YFACTOR")?
                .expected(self.source, what, &y_factor.to_string()));
        }
        let first = self.values.first().map(|value| value * y_factor);
        check_end(block, "FIRSTY", first, quantum)?;
        check_extremes(block, &ordinates, ["MINY", "MAXY"], quantum)?;
        Ok(Ordinates {
            values: self.values,
            anchors: self.anchors,
        })
    }
}

/// Whether two ordinates are the same number; a zero has no sign here.
#[allow(clippy::float_cmp)] // Both are whole, or one is the repeat of the other's text.
fn exactly(a: f64, b: f64) -> bool {
    a == b
}
