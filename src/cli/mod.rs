//! The program's commands: arguments in, a call, text or JSON out.
//!
//! This room owns wording on the terminal, exit statuses and streams: results on standard output,
//! messages on standard error. It decides nothing about numbers.

mod compare;
mod convert;
mod look;
mod reading;

use std::io::Write as _;
use std::process::ExitCode;

use clap::{Parser, Subcommand, ValueEnum};

use crate::schema::Severity;

/// Done.
const DONE: u8 = 0;
/// Done, with findings at or above the chosen severity.
const FINDINGS: u8 = 1;
/// Could not be done.
const REFUSED: u8 = 2;

/// Compares computed quasiparticle band energies with photoemission and inverse photoemission.
#[derive(Debug, Parser)]
#[command(name = "bandrule", version, max_term_width = 100)]
struct Arguments {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Compare computed levels with measured curves as study files say
    Compare(compare::Arguments),
    /// Convert a file to the neutral document
    Convert(convert::Arguments),
    /// Show what is understood of files, on what evidence
    Look(look::Arguments),
}

/// The least severity of a finding that changes the exit status.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Least {
    Note,
    Warning,
    Error,
}

impl From<Least> for Severity {
    fn from(least: Least) -> Self {
        match least {
            Least::Note => Self::Note,
            Least::Warning => Self::Warning,
            Least::Error => Self::Error,
        }
    }
}

/// Runs the program with the arguments of this process.
#[must_use]
pub fn run() -> ExitCode {
    let status = match Arguments::parse().command {
        Command::Compare(arguments) => compare::run(&arguments),
        Command::Convert(arguments) => convert::run(&arguments),
        Command::Look(arguments) => look::run(&arguments),
    };
    ExitCode::from(status)
}

/// Says why nothing was done.
fn refuse(message: &str) -> u8 {
    say(message);
    REFUSED
}

/// Says something on standard error.
fn say(message: &str) {
    let _ = writeln!(std::io::stderr().lock(), "{message}");
}

/// Prints on standard output. A closed pipe is the reader's choice.
fn print(text: &str) {
    let _ = std::io::stdout().lock().write_all(text.as_bytes());
}
