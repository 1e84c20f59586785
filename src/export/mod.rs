//! A result becomes files in a folder, a figure, a report and a screen of text; a document becomes a
//! file.
//!
//! This room owns the names of the files, what each holds, and how they come to stand in a folder
//! whole or not at all. It computes no physics: every number that it shows is already in the result
//! or in its curves. It knows nothing of the command line, and of reading only as much as it takes
//! to read back what it wrote.

mod atomic;
mod csv_curves;
mod document;
mod error;
mod figure;
mod folder;
pub mod iso14976;
pub mod jcamp_dx;
mod read_back;
mod report;
#[cfg(test)]
mod sample;
mod summary;
mod words;

pub use document::write_document;
pub use error::Error;
pub use figure::figure_svg;
pub use folder::{check_target, write_result};
pub use report::report_html;
pub use summary::summary;
