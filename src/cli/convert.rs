//! `bandrule convert`.

use std::path::PathBuf;

use clap::Args;

use super::reading::ReadingOptions;
use super::{DONE, print, refuse};
use crate::export;

/// Arguments of `convert`.
#[derive(Debug, Args)]
#[command(after_help = "\
The document is written as a whole or not at all, read back, and compared value by value with what
was meant.

Exit status: 0 done; 2 could not be done, nothing written.")]
pub(super) struct Arguments {
    /// File to convert
    #[arg(value_name = "IN")]
    file: PathBuf,
    /// File to write: the neutral document (.json)
    #[arg(long, value_name = "OUT.json")]
    to: PathBuf,
    /// Replace OUT where it exists
    #[arg(long)]
    replace: bool,
    /// Print what was understood as one JSON document instead of a line of text
    #[arg(long)]
    json: bool,
    #[command(flatten)]
    reading: ReadingOptions,
}

/// Runs the command and returns the exit status.
pub(super) fn run(arguments: &Arguments) -> u8 {
    let read = match arguments.reading.read(&arguments.file) {
        Ok(read) => read,
        Err(message) => return refuse(&message),
    };
    let [document] = read.as_slice() else {
        return refuse(&format!(
            "error: {} holds {} curves, and a document holds one\n  help: say which, as in --block 1; \
             `bandrule look` lists them",
            arguments.file.display(),
            read.len()
        ));
    };
    if let Err(error) = export::write_document(document, &arguments.to, arguments.replace) {
        return refuse(&format!("error: {error}"));
    }
    let look = document.look();
    let text = match arguments.json {
        true => serde_json::to_string_pretty(&look).map(|json| json + "\n"),
        false => Ok(format!(
            "{}: {} of {} rows, written to {}\n",
            look.file,
            look.kind,
            look.rows,
            arguments.to.display()
        )),
    };
    match text {
        Ok(text) => print(&text),
        Err(error) => return refuse(&format!("error: {error}")),
    }
    DONE
}
