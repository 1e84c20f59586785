//! Any table of numbers with names, as our own exports are.

use super::header_line::Name;
use super::layout::Layout;
use super::problem::Problems;
use super::role::{Hints, Kind};
use super::table::Table;
use super::values::{Content, Values, values};
use super::{Problem, Source};

/// Reads every column of a table of numbers with its header, values to their last bit. A blank cell
/// is `NaN`.
///
/// # Errors
/// Everything that keeps the table from being read.
///
/// ```
/// use bandrule::parse::{Source, read_columns};
/// let source = Source::from_text("a.csv", "energy_ev,total\n-1.5,2e-3\n");
/// let columns = read_columns(&source).unwrap();
/// assert_eq!(columns[1], ("total".to_owned(), vec![2e-3]));
/// ```
pub fn read_columns(source: &Source) -> Result<Vec<(String, Vec<f64>)>, Vec<Problem>> {
    let mut problems = Problems::default();
    let hints = Hints::default();
    let layout = problems.keep(Layout::of(source, &hints));
    let table =
        layout.and_then(|layout| Table::open(source, layout, Kind::Any, &hints, &mut problems));
    let columns = table.map(|table| {
        let wanted: Vec<_> = (0..table.layout.fields())
            .map(|field| (field, Content::Number))
            .collect();
        let read = values(source, &table.layout, &table.names, &wanted, &mut problems);
        let header = |name: Name| name.text;
        let numbers = read.columns.into_iter().map(Values::numbers);
        table.names.into_iter().map(header).zip(numbers).collect()
    });
    match (columns, problems.is_empty()) {
        (Some(columns), true) => Ok(columns),
        _ => Err(problems.into_list()),
    }
}
