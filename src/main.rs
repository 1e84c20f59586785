//! The program `bandrule`.
#![forbid(unsafe_code)]

use std::process::ExitCode;

fn main() -> ExitCode {
    bandrule::cli::run()
}
