use std::collections::HashMap;

use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::{Finding, Levels};

rule! {
    /// # What it looks for
    /// The same k-point, band and spin in two rows.
    ///
    /// # Why it matters
    /// A level that stands twice counts twice in the density of states and, where the two energies
    /// differ, one of them is wrong.
    ///
    /// # Example
    /// Two runs appended to one table, each with k-point 1, band 4.
    ///
    /// # How to answer it
    /// Keep one of the rows.
    ///
    /// # Source
    /// Common practice, no source.
    LevelRepeated, "level-repeated", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(levels) = subject.levels() else {
        return Vec::new();
    };
    if levels.band.is_none() || (levels.k_index.is_none() && levels.k_x.is_none()) {
        return Vec::new();
    }
    let mut seen = HashMap::with_capacity(levels.rows);
    let repeated = (0..levels.rows).filter_map(|row| {
        let first = *seen.entry(identity(levels, row)).or_insert(row);
        (first != row).then_some((first, row))
    });
    let repeated: Vec<_> = repeated.collect();
    most(
        repeated
            .into_iter()
            .map(|(first, row)| {
                subject.finding(
                    rule,
                    (row, Role::Band),
                    "this k-point, band and spin stand in an earlier row too".to_owned(),
                    format!(
                        "lines {} and {}",
                        subject.line(first, Role::Band),
                        subject.line(row, Role::Band)
                    ),
                    "keep one of the two rows",
                )
            })
            .collect(),
    )
}

/// What makes a level one: k by number or, without numbers, by the bits of its coordinates.
fn identity(levels: &Levels, row: usize) -> [Option<i64>; 6] {
    let whole = |list: &Option<Vec<i64>>| list.as_ref().map(|list| list[row]);
    // A pattern of bits serves as an integer here.
    let bits = |list: &Option<Vec<f64>>| {
        list.as_ref()
            .map(|list| i64::from_ne_bytes(list[row].to_ne_bytes()))
    };
    let k_index = whole(&levels.k_index);
    let coordinate = |list| if k_index.is_some() { None } else { bits(list) };
    [
        k_index,
        coordinate(&levels.k_x),
        coordinate(&levels.k_y),
        coordinate(&levels.k_z),
        whole(&levels.band),
        whole(&levels.spin),
    ]
}
