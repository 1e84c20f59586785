//! Why a result could not be written, and what to do about it.

use std::io;
use std::path::{Path, PathBuf};

/// Why a result could not be written.
#[derive(thiserror::Error, Debug)]
pub enum Error {
    /// There is a result in the folder already.
    #[error(
        "{} exists already: choose another name, or ask for the old one to be replaced (--replace)",
        path.display()
    )]
    Exists {
        /// The file in the way.
        path: PathBuf,
    },
    /// A file in the way is not part of the result that stands in the folder.
    #[error(
        "{} is in the way and no result.json beside it lists it, so it is not replaced: move it away or choose another folder",
        path.display()
    )]
    NotOurs {
        /// The file in the way.
        path: PathBuf,
    },
    /// The `result.json` in the folder cannot be read as a result.
    #[error(
        "{} is not a result that this program wrote ({what}), so nothing beside it is replaced: move it away or choose another folder",
        path.display()
    )]
    NotAResult {
        /// The file in the way.
        path: PathBuf,
        /// What was found.
        what: String,
    },
    /// The target is there and is not a folder.
    #[error("{} is not a folder: name a folder for the result", path.display())]
    NotAFolder {
        /// The target.
        path: PathBuf,
    },
    /// The target's name does not say a format that is written.
    #[error("{} cannot be written: expected a name that ends in .json", path.display())]
    Format {
        /// The target.
        path: PathBuf,
    },
    /// The target is there and is no regular file.
    #[error("{} is no regular file, so it is not replaced: name another", path.display())]
    NotAFile {
        /// The target.
        path: PathBuf,
    },
    /// The system refused.
    #[error(
        "could not {action} {}: {source}; see that the folder can be written to and has room",
        path.display()
    )]
    Io {
        /// What was tried.
        action: &'static str,
        /// The file or folder.
        path: PathBuf,
        /// Why.
        source: io::Error,
    },
    /// The curves do not make a table.
    #[error(
        "{file} cannot be written: {what}; every column of a curve must have one entry a channel"
    )]
    Columns {
        /// The file that would have been written.
        file: String,
        /// What was found.
        what: String,
    },
    /// A file does not read back as what was meant.
    #[error(
        "{file} does not read back as it was meant: {what}; nothing was written. Look for a number that is not finite among the inputs, else for a failing disk"
    )]
    RoundTrip {
        /// The file.
        file: String,
        /// Where it differs.
        what: String,
    },
    /// A file is not well-formed.
    #[error(
        "{file} is not well-formed: {what}; nothing was written. Look for unusual characters in the study's texts"
    )]
    NotWellFormed {
        /// The file.
        file: String,
        /// What the reader says.
        what: String,
    },
    /// The figure could not be drawn.
    #[error("the figure could not be drawn: {what}; the numbers are not at fault, report this")]
    Figure {
        /// What the drawing library says.
        what: String,
    },
}

impl Error {
    /// For `map_err`: what was tried on which path.
    pub(super) fn io(action: &'static str, path: &Path) -> impl FnOnce(io::Error) -> Self {
        let path = path.to_owned();
        move |source| Self::Io {
            action,
            path,
            source,
        }
    }
}
