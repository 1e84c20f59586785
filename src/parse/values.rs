//! The values of a table, read in parallel from its bytes. A line that is written plainly is read as
//! bytes; any other line goes the careful way of [`cells::split`], and a test holds the two together.

use std::ops::Range;

use rayon::prelude::*;

use super::cells::{self, NoRow};
use super::dialect::{Delimiter, Dialect};
use super::header_line::Name;
use super::layout::Layout;
use super::line;
use super::number::{Decimal, has_decimal_comma, is_missing, number_in};
use super::plain_line::PlainLines;
use super::problem::{Problems, visible};
use super::{Problem, Source};
use crate::schema::Texts;

/// Rows that are read at once, about.
const TASK_ROWS: usize = 16_000;
/// Lines of which is said that something in them was left out.
const LEFT_OUT: usize = 20;

/// What the cells of a column hold.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Content {
    /// A number; a missing one is `NaN`.
    Number,
    /// A whole number.
    Integer,
    /// A whole number, or a direction: +1 for up, -1 for down.
    Spin,
    /// Any text; a blank cell is an empty one.
    Text,
    /// A number of a column that is not used: what is none counts as missing.
    Unused,
}

/// The values of a column.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Values {
    Numbers(Vec<f64>),
    Whole(Vec<i64>),
    Texts(Texts),
}

impl Values {
    fn of(content: Content, rows: usize) -> Self {
        match content {
            Content::Number | Content::Unused => Self::Numbers(vec![0.0; rows]),
            Content::Integer | Content::Spin => Self::Whole(vec![0; rows]),
            Content::Text => Self::Texts(Texts::default()),
        }
    }

    /// The numbers, where they are such.
    pub fn numbers(self) -> Vec<f64> {
        match self {
            Self::Numbers(numbers) => numbers,
            // Whole numbers are below 2^53.
            #[allow(clippy::cast_precision_loss)]
            Self::Whole(whole) => whole.into_iter().map(|value| value as f64).collect(),
            Self::Texts(_) => Vec::new(),
        }
    }

    /// The whole numbers, where they are such.
    pub fn whole(self) -> Vec<i64> {
        match self {
            Self::Whole(whole) => whole,
            _ => Vec::new(),
        }
    }

    /// The texts, where they are such.
    pub fn texts(self) -> Texts {
        match self {
            Self::Texts(texts) => texts,
            _ => Texts::default(),
        }
    }
}

/// What was read of a table.
#[derive(Debug, Default)]
pub(super) struct Read {
    /// The wanted columns.
    pub columns: Vec<Values>,
    /// Text after the fields of rows: the first places, and how many there are.
    pub left_out: Vec<Range<usize>>,
    pub left_out_rows: usize,
}

/// The part of a column that a task fills.
pub(super) enum Slot<'a> {
    Numbers(&'a mut [f64]),
    Whole(&'a mut [i64], Content),
    Texts(Texts),
}

/// Reads the wanted fields of every row.
pub(super) fn values(
    source: &Source,
    layout: &Layout,
    names: &[Name],
    wanted: &[(usize, Content)],
    problems: &mut Problems,
) -> Read {
    read_all(source, layout, names, wanted, problems, true)
}

/// Reads every row, plain lines as bytes where `plainly` says so.
fn read_all(
    source: &Source,
    layout: &Layout,
    names: &[Name],
    wanted: &[(usize, Content)],
    problems: &mut Problems,
    plainly: bool,
) -> Read {
    let mut columns: Vec<Values> = wanted
        .iter()
        .map(|&(_, content)| Values::of(content, layout.rows))
        .collect();
    let mut plan = vec![None; layout.fields()];
    for (slot, &(field, _)) in wanted.iter().enumerate() {
        plan[field] = Some(slot);
    }
    let reader = Reader {
        source,
        layout,
        names,
        wanted,
        plan,
        plainly,
    };
    let tasks = tasks(layout, wanted, &mut columns);
    let done: Vec<Done> = tasks
        .into_par_iter()
        .map(|(anchor, rows, slots)| reader.read(anchor, rows, slots))
        .collect();
    let mut read = Read::default();
    for task in done {
        problems.append(task.problems);
        let room = LEFT_OUT - read.left_out.len();
        read.left_out_rows += task.left_out_rows;
        read.left_out.extend(task.left_out.into_iter().take(room));
        for (column, texts) in columns.iter_mut().zip(task.texts) {
            if let (Values::Texts(all), Some(texts)) = (column, texts) {
                all.append(&texts);
            }
        }
    }
    read.columns = columns;
    read
}

/// One task's first anchor, its number of rows and its parts of the columns.
type Task<'a> = (usize, usize, Vec<Slot<'a>>);

fn tasks<'a>(
    layout: &Layout,
    wanted: &[(usize, Content)],
    columns: &'a mut [Values],
) -> Vec<Task<'a>> {
    let starts: Vec<usize> = layout.anchors().collect();
    let mut rest: Vec<Slot<'a>> = columns
        .iter_mut()
        .zip(wanted)
        .map(|(column, &(_, content))| match column {
            Values::Numbers(numbers) => Slot::Numbers(numbers),
            Values::Whole(whole) => Slot::Whole(whole, content),
            Values::Texts(_) => Slot::Texts(Texts::default()),
        })
        .collect();
    let mut tasks = Vec::new();
    let mut first = 0;
    while first < starts.len() {
        let until = starts[first] + TASK_ROWS;
        let next = first + starts[first..].partition_point(|&start| start < until);
        let end = starts.get(next).copied().unwrap_or(layout.rows);
        let rows = end - starts[first];
        let taken = rest.iter_mut().map(|slot| slot.take(rows)).collect();
        tasks.push((first, rows, taken));
        first = next;
    }
    tasks
}

impl<'a> Slot<'a> {
    /// The first rows of what is left.
    fn take(&mut self, rows: usize) -> Slot<'a> {
        match self {
            Self::Numbers(left) => {
                let (taken, rest) = std::mem::take(left).split_at_mut(rows);
                *left = rest;
                Slot::Numbers(taken)
            }
            Self::Whole(left, content) => {
                let (taken, rest) = std::mem::take(left).split_at_mut(rows);
                *left = rest;
                Slot::Whole(taken, *content)
            }
            Self::Texts(_) => Slot::Texts(Texts::default()),
        }
    }
}

/// What a task found.
#[derive(Default)]
struct Done {
    texts: Vec<Option<Texts>>,
    problems: Problems,
    left_out: Vec<Range<usize>>,
    left_out_rows: usize,
}

struct Reader<'a> {
    source: &'a Source,
    layout: &'a Layout,
    names: &'a [Name],
    wanted: &'a [(usize, Content)],
    /// For each field, which of the wanted columns it is.
    plan: Vec<Option<usize>>,
    /// Whether plain lines are read as bytes.
    plainly: bool,
}

impl Reader<'_> {
    fn read(&self, anchor: usize, rows: usize, mut slots: Vec<Slot<'_>>) -> Done {
        let mut done = Done::default();
        let plain = PlainLines::new(self.source.text(), &self.layout.dialect, &self.plan);
        let plain = plain.filter(|_| self.plainly);
        let text = self.source.text().as_bytes();
        let (mut at, mut row) = (self.layout.anchor_start(anchor), 0);
        while row < rows {
            let plainly = |at: usize, slots: &mut [Slot<'_>]| plain.as_ref()?.read(at, row, slots);
            let begins = line::begins_row(&text[at..]);
            if begins && let Some(next) = plainly(at, &mut slots) {
                (at, row) = (next, row + 1);
                continue;
            }
            let Some(line) = self.source.lines_from(at).next() else {
                break;
            };
            let span = line.start..line.end;
            if self.layout.is_row(self.source.slice(span.clone())) {
                if begins || plainly(line.start, &mut slots).is_none() {
                    self.carefully(&span, row, &mut slots, &mut done);
                }
                row += 1;
            }
            at = line.next;
        }
        let texts = |slot| match slot {
            Slot::Texts(texts) => Some(texts),
            _ => None,
        };
        done.texts = slots.into_iter().map(texts).collect();
        done
    }

    fn carefully(&self, line: &Range<usize>, row: usize, slots: &mut [Slot<'_>], done: &mut Done) {
        let cells = match cells::split(self.source, line, &self.layout.dialect) {
            Ok(cells) => cells,
            Err(why) => {
                done.problems.push_with(|| self.no_row(why, line));
                for slot in slots {
                    if let Slot::Texts(texts) = slot {
                        texts.push("");
                    }
                }
                return;
            }
        };
        if let Some(text) = cells.left_out {
            done.left_out_rows += 1;
            if done.left_out.len() < LEFT_OUT {
                done.left_out.push(text);
            }
        }
        for (&(field, content), slot) in self.wanted.iter().zip(slots) {
            let span = &cells.spans[field];
            let text = cells::text_of(self.source, span);
            if self.place(&text, content, row, slot).is_none() {
                done.problems.push_with(|| {
                    unreadable(&text, content, &self.names[field])
                        .at(self.source.place(span.clone()))
                });
            }
        }
    }

    /// Puts the value of a cell into its column; `None` where it is none.
    fn place(&self, text: &str, content: Content, row: usize, slot: &mut Slot<'_>) -> Option<()> {
        let decimal = self.layout.dialect.decimal;
        match slot {
            Slot::Numbers(numbers) if is_missing(text) => numbers[row] = f64::NAN,
            Slot::Numbers(numbers) if content == Content::Unused => {
                numbers[row] = number_in(text, decimal).unwrap_or(f64::NAN);
            }
            Slot::Numbers(numbers) => numbers[row] = number_in(text, decimal)?,
            Slot::Whole(whole, _) => whole[row] = whole_number(text, content, decimal)?,
            Slot::Texts(texts) => texts.push(text),
        }
        Some(())
    }

    fn no_row(&self, why: NoRow, line: &Range<usize>) -> Problem {
        match why {
            NoRow::Quotes(why) => cells::unquotable(self.source, why),
            NoRow::Count(found, spans) => {
                ragged(self.source, &self.layout.dialect, line, found, &spans)
            }
        }
    }
}

/// A whole number below 2^53.
pub(super) fn as_whole(value: f64) -> Option<i64> {
    const LARGEST: f64 = 9_007_199_254_740_992.0;
    #[allow(clippy::cast_possible_truncation)]
    (value.fract() == 0.0 && value.abs() < LARGEST).then_some(value as i64)
}

fn whole_number(text: &str, content: Content, decimal: Decimal) -> Option<i64> {
    match (content, text.to_ascii_lowercase().as_str()) {
        (Content::Spin, "up" | "+") => Some(1),
        (Content::Spin, "down" | "dn" | "-") => Some(-1),
        _ => number_in(text, decimal).and_then(as_whole),
    }
}

fn ragged(
    source: &Source,
    dialect: &Dialect,
    row: &Range<usize>,
    found: usize,
    spans: &[Range<usize>],
) -> Problem {
    let span = spans
        .get(dialect.fields)
        .cloned()
        .unwrap_or(row.end..row.end);
    let help = match dialect.delimiter {
        Delimiter::Comma if found > dialect.fields => {
            "if commas are decimal marks here, write points"
        }
        Delimiter::Blanks if found > 1 => {
            "a blank cell needs another delimiter, such as a comma, or columns that are aligned at \
             their ends"
        }
        _ => "give every row the same number of fields; a remark begins with #",
    };
    Problem::new(format!(
        "expected {} fields {}, as in most rows, and found {}",
        dialect.fields,
        dialect.delimiter.in_words(),
        found
    ))
    .at(source.place(span))
    .with_help(help)
}

fn unreadable(text: &str, content: Content, name: &Name) -> Problem {
    let expected = match content {
        Content::Number | Content::Unused => "a number",
        Content::Integer => "a whole number",
        Content::Spin => "a whole number, `up` or `down`",
        Content::Text => "a text",
    };
    let column = match name.text.as_str() {
        "" => String::new(),
        header => format!(" in column `{header}`"),
    };
    let found = if text.is_empty() {
        "a blank cell".to_owned()
    } else {
        format!("`{}`", visible(text))
    };
    let problem = Problem::new(format!("expected {expected}{column} and found {found}"));
    problem.with_help(advice(text))
}

/// What to do about a text that is no number, by its form.
fn advice(text: &str) -> &'static str {
    let digit = |c: char| c.is_ascii_digit();
    if has_decimal_comma(text) || (text.contains(',') && text.contains(digit)) {
        "write a point where the fraction begins and no separators of thousands, in the whole file; \
         or say that commas are decimal marks (decimal comma)"
    } else if text.contains(digit) && text.parse().is_ok_and(f64::is_infinite) {
        "it is beyond the largest number, about 1.8e308"
    } else {
        "write the number there; a row that has none may be removed on purpose, and `#` before a \
         line makes it a comment"
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;
    use crate::parse::header_line;
    use crate::parse::role::Hints;

    /// What one way reads: the columns to the bit, the problems, the text left out.
    fn read(text: &str, content: &[Content], plainly: bool) -> Option<(Vec<String>, Vec<String>)> {
        let source = Source::from_text("t", text);
        let layout = Layout::of(&source, &Hints::default()).ok()?;
        let names = header_line::nameless(&layout);
        let wanted: Vec<_> = (0..layout.fields())
            .filter(|field| field % 4 != 3)
            .map(|field| (field, content[field % content.len()]))
            .collect();
        let mut problems = Problems::default();
        let read = read_all(&source, &layout, &names, &wanted, &mut problems, plainly);
        let shown = |values: &Values| match values {
            Values::Numbers(numbers) => {
                let bits = |x: &f64| if x.is_nan() { 1 } else { x.to_bits() };
                format!("{:?}", numbers.iter().map(bits).collect::<Vec<_>>())
            }
            other => format!("{other:?}"),
        };
        let problems = problems.into_list();
        let columns = match problems.is_empty() {
            true => read.columns.iter().map(shown).collect(),
            // A refused row leaves its cells open.
            false => Vec::new(),
        };
        let mut said: Vec<String> = problems.iter().map(ToString::to_string).collect();
        said.push(format!("{:?} {}", read.left_out, read.left_out_rows));
        Some((columns, said))
    }

    fn cell() -> impl Strategy<Value = String> {
        prop_oneof![
            4 => "-?[0-9]{1,4}(\\.[0-9]{0,9})?",
            2 => "[+-]?[0-9]{1,3}\\.[0-9]{1,3}[eEdD][+-]?[0-9]{1,3}",
            2 => "[0-9]{1,6}",
            1 => prop::sample::select(vec![
                "", "nan", "NaN", "inf", "--", "****", "1e400", "-0.0", "−1.5", "1.0-101", "x", "up",
                "\"1\"", "\"a\"\"b\"", "# 1", "!", "1.2500-3.2500", "12.345612.3456", "é", "123456789012345678",
                "9007199254740993", "1,5", ".", "-", "+7", "0x1", "1_0", "Xa",
            ]).prop_map(str::to_owned),
        ]
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(2_000))]
        #[test]
        fn both_ways_read_the_same(
            rows in prop::collection::vec(prop::collection::vec(cell(), 1..6), 1..12),
            delimiter in prop::sample::select(vec![",", ", ", ";", "\t", "  ", " ", " \t", "|"]),
            end in prop::sample::select(vec!["\n", "\r\n", "\r"]),
            between in prop::sample::select(vec!["", "\n", "# c\n", " trailing", ",", "  \t"]),
            kinds in prop::collection::vec(0usize..5, 1..5),
        ) {
            let contents = [Content::Number, Content::Number, Content::Integer, Content::Text, Content::Unused];
            let content: Vec<_> = kinds.into_iter().map(|kind| contents[kind]).collect();
            let lines: Vec<String> = rows.iter().map(|row| row.join(delimiter)).collect();
            let text = lines.join(&format!("{between}{end}"));
            prop_assert_eq!(read(&text, &content, true), read(&text, &content, false), "{:?}", text);
        }
    }
}
