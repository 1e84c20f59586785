//! `bandrule compare`.

use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::path::{Path, PathBuf};

use clap::Args;

use super::reading::rendered;
use super::{DONE, FINDINGS, Least, print, refuse, say};
use crate::compare::{Error, Outcome, Study, compare};
use crate::export;
use crate::schema::{Finding, ResultDocument, Severity};

/// Arguments of `compare`.
#[derive(Debug, Args)]
#[command(after_help = "\
Each study writes result.json, figure.svg, report.html and the curves as CSV. Several studies write
each to a folder in DIR that is named as the study file.

Exit status: 0 done; 1 done, with findings at or above --severity; 2 could not be done. The verdict
does not change it.")]
pub(super) struct Arguments {
    /// Study files (TOML)
    #[arg(required = true, value_name = "STUDY.toml")]
    studies: Vec<PathBuf>,
    /// Folder to write the results to
    #[arg(long, value_name = "DIR")]
    out: PathBuf,
    /// Replace the files of an earlier result in DIR
    #[arg(long)]
    replace: bool,
    /// Print the result as one JSON document (an array for several studies) instead of text
    #[arg(long)]
    json: bool,
    /// Exit with 1 on findings of this severity or above
    #[arg(long, value_enum, default_value_t = Least::Error)]
    severity: Least,
}

/// Runs the command and returns the exit status. Nothing is written before every study is answered.
pub(super) fn run(arguments: &Arguments) -> u8 {
    let folders = match folders(arguments) {
        Ok(folders) => folders,
        Err(message) => return refuse(&message),
    };
    for folder in &folders {
        if let Err(error) = export::check_target(folder, arguments.replace) {
            return refuse(&format!("error: {error}"));
        }
    }
    let mut outcomes = Vec::new();
    let mut refusals = Vec::new();
    for path in &arguments.studies {
        match compared(path) {
            Ok(outcome) => outcomes.push(outcome),
            Err(message) => refusals.push(message),
        }
    }
    if !refusals.is_empty() {
        return refuse(&refusals.join("\n\n"));
    }
    let mut results = Vec::new();
    for (outcome, folder) in outcomes.into_iter().zip(&folders) {
        match written(outcome, folder, arguments.replace) {
            Ok(result) => results.push(result),
            Err(message) => return refuse(&message),
        }
    }
    report(arguments, &folders, &results)
}

/// Where each study's result goes.
fn folders(arguments: &Arguments) -> Result<Vec<PathBuf>, String> {
    if let [_] = arguments.studies.as_slice() {
        return Ok(vec![arguments.out.clone()]);
    }
    let mut taken = BTreeSet::new();
    arguments
        .studies
        .iter()
        .map(|study| {
            let stem = study.file_stem().unwrap_or_default();
            if taken.insert(stem.to_owned()) {
                Ok(arguments.out.join(stem))
            } else {
                Err(format!(
                    "error: two studies are named {}, their results would share a folder\n  help: \
                     rename one of the study files",
                    stem.display()
                ))
            }
        })
        .collect()
}

fn compared(path: &Path) -> Result<Outcome, String> {
    let shown = path.display().to_string();
    let study = Study::read(path, &shown).map_err(|problems| rendered(&problems))?;
    compare(&study).map_err(|error| match error {
        Error::Refused(problems) => rendered(&problems),
        Error::Findings(findings) => told(&findings),
    })
}

fn written(mut outcome: Outcome, folder: &Path, replace: bool) -> Result<ResultDocument, String> {
    export::write_result(&mut outcome.result, &outcome.curves, folder, replace)
        .map_err(|error| format!("error: {error}"))?;
    Ok(outcome.result)
}

fn told(findings: &[Finding]) -> String {
    let list: Vec<String> = findings
        .iter()
        .map(|finding| {
            let Finding {
                rule,
                severity,
                file,
                line,
                column,
                message,
                evidence,
                remedy,
                ..
            } = finding;
            let word = severity.name();
            format!(
                "{word}[{rule}]: {message}\n  --> {file}:{line}:{column}: {evidence}\n  help: {remedy}"
            )
        })
        .collect();
    list.join("\n\n")
}

/// Prints results on standard output and findings on standard error.
fn report(arguments: &Arguments, folders: &[PathBuf], results: &[ResultDocument]) -> u8 {
    let mut text = String::new();
    if arguments.json {
        let json = match results {
            [one] => serde_json::to_string_pretty(one),
            many => serde_json::to_string_pretty(many),
        };
        match json {
            Ok(json) => text = json + "\n",
            Err(error) => return refuse(&format!("error: {error}")),
        }
    } else {
        for (result, folder) in results.iter().zip(folders) {
            text += &export::summary(result);
            let tables = result
                .files
                .iter()
                .filter(|f| Path::new(&f.file).extension().is_some_and(|e| e == "csv"))
                .count();
            // Writing to a string cannot fail.
            let _ = writeln!(
                text,
                "\nWritten to {}: report.html, figure.svg, result.json, {tables} tables (CSV)",
                folder.display()
            );
        }
    }
    let findings: Vec<Finding> = results.iter().flat_map(|r| r.findings.clone()).collect();
    if !findings.is_empty() {
        say(&told(&findings));
    }
    print(&text);
    let least = Severity::from(arguments.severity);
    if findings.iter().any(|finding| finding.severity >= least) {
        FINDINGS
    } else {
        DONE
    }
}
