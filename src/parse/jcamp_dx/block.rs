//! One data block: which records it must have, and the table that it holds.

use std::ops::Range;

use super::document::{Record, Value};
use super::label::{self, DATA_TYPE, Kind, STRUCTURE, VERSION};
use super::number::rounding;
use super::ordinates;
use super::points;
use super::raw::Raw;
use super::structure::version;
use crate::parse::{Problem, Source};

/// The version from which `XYPOINTS` and the rest are no longer read.
const FIFTH: f64 = 5.0;

/// The records of a block, each as read and as typed.
#[derive(Clone, Copy)]
pub(super) struct BlockReader<'a> {
    pub source: &'a Source,
    pub raws: &'a [Raw],
    pub records: &'a [Record],
}

/// A number that the block states.
#[derive(Debug, Clone)]
pub(super) struct Stated {
    /// The label in normal form.
    pub label: &'static str,
    /// The number.
    pub value: f64,
    /// The most by which rounding can have moved it.
    pub rounding: f64,
    /// Where it stands.
    pub span: Range<usize>,
}

/// Reads the table of a block into its record.
pub(super) fn read_table(
    source: &Source,
    raws: &[Raw],
    records: &mut [Record],
    room: &mut usize,
) -> Result<(), Problem> {
    let block = BlockReader {
        source,
        raws,
        records,
    };
    if block.find(STRUCTURE).is_some() {
        return Ok(());
    }
    block.refuse_repeated()?;
    let version = version(source, block.need(VERSION)?)?;
    block.need(DATA_TYPE)?;
    let table = block.table()?;
    let kind = table.map(|index| label::kind(&raws[index].normal));
    let (index, value) = match (table, kind) {
        (Some(index), Some(Kind::Ordinates)) => (
            index,
            Value::Ordinates(ordinates::read(block, index, room)?),
        ),
        (Some(index), Some(Kind::Points)) if version < FIFTH => {
            (index, Value::Points(points::read(block, index)?))
        }
        (Some(_), Some(Kind::Text)) => return Ok(()),
        (None, _) if version < FIFTH => return Ok(()),
        _ => return Err(block.later_version()?),
    };
    records[index].value = value;
    Ok(())
}

impl<'a> BlockReader<'a> {
    /// The index of the first record with a label in normal form.
    pub fn find(self, normal: &str) -> Option<usize> {
        self.raws.iter().position(|raw| raw.normal == normal)
    }

    /// The record with a label that the block must have.
    pub fn need(self, normal: &'static str) -> Result<&'a Raw, Problem> {
        match self.find(normal) {
            Some(index) => Ok(&self.raws[index]),
            None => Err(self.missing(normal)),
        }
    }

    fn missing(self, normal: &str) -> Problem {
        let problem = Problem::new(format!(
            "`##{}=`: expected it in the block that begins here, and found no such record",
            spelled(normal)
        ))
        .at(self.source.place(self.raws[0].label.clone()))
        .with_help(
            "a block needs TITLE, JCAMP-DX and DATA TYPE; one with XYDATA also XUNITS, YUNITS, \
             FIRSTX, LASTX, NPOINTS, XFACTOR and YFACTOR; one with XYPOINTS also XUNITS, YUNITS \
             and NPOINTS",
        );
        let unlisted = |raw: &&Raw| label::is_unlisted(&raw.normal);
        let unlisted = self.raws.iter().filter(unlisted).take(3);
        unlisted.fold(problem, |problem, raw| {
            let place = self.source.place(raw.label.clone());
            problem.with_related(place, "no label of the standard: is it misspelt?")
        })
    }

    /// A number, where the block states it.
    pub fn stated(self, normal: &'static str) -> Option<Stated> {
        let index = self.find(normal)?;
        let Value::Number(value) = self.records[index].value else {
            return None;
        };
        let raw = &self.raws[index];
        Some(Stated {
            label: normal,
            value,
            rounding: rounding(&raw.text(self.source)),
            span: raw.head(self.source),
        })
    }

    /// A number that the block must state.
    pub fn need_number(self, normal: &'static str) -> Result<Stated, Problem> {
        self.stated(normal).ok_or_else(|| self.missing(normal))
    }

    /// A factor, which cannot be zero.
    pub fn factor(self, normal: &'static str) -> Result<Option<f64>, Problem> {
        match self.stated(normal) {
            Some(factor) if factor.value == 0.0 => {
                let raw = self.need(normal)?;
                Err(raw.expected(self.source, "a factor other than zero", "0"))
            }
            factor => Ok(factor.map(|factor| factor.value)),
        }
    }

    /// NPOINTS and where it stands.
    pub fn points(self) -> Result<(u64, Range<usize>), Problem> {
        let missing = || self.missing("NPOINTS");
        let index = self.find("NPOINTS").ok_or_else(missing)?;
        match self.records[index].value {
            Value::Count(count) => Ok((count, self.raws[index].head(self.source))),
            _ => Err(missing()),
        }
    }

    /// The record that holds the block's only table.
    fn table(self) -> Result<Option<usize>, Problem> {
        let is_table = |raw: &Raw| {
            matches!(label::kind(&raw.normal), Kind::Ordinates | Kind::Points)
                || label::no_curve(&raw.normal).is_some()
        };
        let mut tables = (0..self.raws.len()).filter(|&index| is_table(&self.raws[index]));
        match (tables.next(), tables.next()) {
            (Some(first), Some(second)) => Err(self.twice(first, second, "one table a block")),
            (table, _) => Ok(table),
        }
    }

    /// Refuses two records that would say a number, or how numbers are read, in two ways.
    fn refuse_repeated(self) -> Result<(), Problem> {
        let single = |index: &usize| label::is_single(&self.raws[*index].normal);
        for index in (0..self.raws.len()).filter(single) {
            match self.find(&self.raws[index].normal) {
                Some(first) if first < index => {
                    return Err(self.twice(first, index, "this record once a block"));
                }
                _ => {}
            }
        }
        Ok(())
    }

    fn twice(self, first: usize, second: usize, expected: &str) -> Problem {
        let label = |index: usize| self.raws[index].label.clone();
        Problem::new(format!(
            "`{}`: expected {expected} and found a second",
            self.source.slice(label(second))
        ))
        .at(self.source.place(label(second)))
        .with_related(self.source.place(label(first)), "the first")
    }

    fn later_version(self) -> Result<Problem, Problem> {
        let raw = self.need(VERSION)?;
        Ok(Problem::new(format!(
            "`{}`: of version {} only blocks with `##XYDATA= (X++(Y..Y))` are read, and this one has none",
            self.source.slice(raw.label.clone()),
            raw.text(self.source)
        ))
        .at(self.source.place(raw.head(self.source)))
        .with_help("write the block in version 4.24"))
    }
}

/// A label in normal form as the standard spells it.
fn spelled(normal: &str) -> &str {
    match normal {
        VERSION => "JCAMP-DX",
        DATA_TYPE => "DATA TYPE",
        other => other,
    }
}
