//! The folder of a result: what may be replaced in it, and how it is filled.
//!
//! Every file is staged, read back and verified before the first is renamed to its own name, and
//! `result.json` comes last. So a refusal or a failed check leaves the folder as it was, and a folder
//! whose `result.json` matches the hashes in it is whole.

use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::fs;
use std::path::{Component, Path, PathBuf};

use serde::Deserialize;
use sha2::{Digest, Sha256};

use super::atomic::{Staged, sync_folder};
use super::csv_curves::{computed_file, measured_file, render, tables};
use super::read_back::{Meant, verify};
use super::{Error, figure_svg, report_html};
use crate::schema::{Curves, FileRecord, ResultDocument, Side};

const RESULT: &str = "result.json";
const FIGURE: &str = "figure.svg";
const REPORT: &str = "report.html";

/// Every name that a result may put into its folder.
const NAMES: [&str; 7] = [
    measured_file(Side::Valence),
    measured_file(Side::Conduction),
    computed_file(Side::Valence),
    computed_file(Side::Conduction),
    FIGURE,
    REPORT,
    RESULT,
];

/// Writes the result into `dir`, which is made where it is missing, and fills `result.files`.
///
/// With `replace` the files that the `result.json` in `dir` lists make way; no others ever do.
///
/// # Errors
/// Those of [`check_target`]; where the system refuses; where a file does not read back as what was
/// meant. Nothing is left behind then, and `result` is unchanged. Only a rename that fails after
/// every check has passed can leave an old result partly replaced; its hashes then tell.
pub fn write_result(
    result: &mut ResultDocument,
    curves: &Curves,
    dir: &Path,
    replace: bool,
) -> Result<(), Error> {
    let old = old_files(dir, replace)?;
    let made: Vec<&Path> = dir
        .ancestors()
        .take_while(|path| !path.as_os_str().is_empty() && !path.exists())
        .collect();
    fs::create_dir_all(dir).map_err(Error::io("create", dir))?;
    let written = stage(result, curves, dir)
        .and_then(|(staged, files)| commit(staged, dir, &old).map(|()| files));
    match written {
        Ok(files) => {
            result.files = files;
            Ok(())
        }
        Err(error) => {
            // Folders that are not empty stay, and so they should.
            made.iter().all(|path| fs::remove_dir(path).is_ok());
            Err(error)
        }
    }
}

/// Whether [`write_result`] would refuse `dir`, before the work is done.
///
/// # Errors
/// Where `dir` is not a folder; where one of the names of a result is taken in it, without `replace`
/// or by a file that the `result.json` in `dir` does not list.
pub fn check_target(dir: &Path, replace: bool) -> Result<(), Error> {
    old_files(dir, replace).map(drop)
}

/// The files in `dir` that may be replaced.
fn old_files(dir: &Path, replace: bool) -> Result<BTreeSet<String>, Error> {
    if dir.exists() && !dir.is_dir() {
        return Err(Error::NotAFolder {
            path: dir.to_owned(),
        });
    }
    let is_there = |name: &&str| dir.join(name).symlink_metadata().is_ok();
    let taken: Vec<&str> = NAMES.into_iter().filter(is_there).collect();
    if let (Some(name), false) = (taken.last(), replace) {
        return Err(Error::Exists {
            path: dir.join(name),
        });
    }
    let listed = listed_files(dir)?;
    let ours = |name: &str| listed.contains(name) && !dir.join(name).is_dir();
    match taken.into_iter().find(|name| !ours(name)) {
        Some(name) => Err(Error::NotOurs {
            path: dir.join(name),
        }),
        None => Ok(listed),
    }
}

/// As much of an old result as it takes to know its files.
#[derive(Deserialize)]
struct Listing {
    schema: String,
    files: Vec<FileRecord>,
}

/// The files of the result in `dir`, itself included; only plain names inside `dir` count.
fn listed_files(dir: &Path) -> Result<BTreeSet<String>, Error> {
    let path = dir.join(RESULT);
    if path.symlink_metadata().is_err() {
        return Ok(BTreeSet::new());
    }
    let refuse = |what: String| Error::NotAResult {
        path: path.clone(),
        what,
    };
    let bytes = fs::read(&path).map_err(|problem| refuse(problem.to_string()))?;
    let listing: Listing =
        serde_json::from_slice(&bytes).map_err(|problem| refuse(problem.to_string()))?;
    if !listing.schema.starts_with("bandrule/result/") {
        return Err(refuse(format!("its schema is `{}`", listing.schema)));
    }
    let names = listing.files.into_iter().map(|record| record.file);
    let mut files: BTreeSet<String> = names.filter(|name| is_plain_name(name)).collect();
    files.insert(RESULT.to_owned());
    Ok(files)
}

/// Whether a name stands for an entry of the folder itself, on any system.
fn is_plain_name(name: &str) -> bool {
    let mut parts = Path::new(name).components();
    matches!(parts.next(), Some(Component::Normal(part)) if part.to_str() == Some(name))
        && parts.next().is_none()
        && !name.contains(['/', '\\', ':'])
}

/// Every file staged and verified, `result.json` last, with the records of the others.
fn stage(
    result: &ResultDocument,
    curves: &Curves,
    dir: &Path,
) -> Result<(Vec<Staged>, Vec<FileRecord>), Error> {
    let mut desk = Desk::new(dir);
    for table in tables(result, curves)? {
        let text = render(&table, result);
        desk.put(table.file, &text, &Meant::Table(&table))?;
    }
    let figure = figure_svg(result, curves)?;
    desk.put(FIGURE, &figure, &Meant::Svg)?;
    desk.put(REPORT, &report_html(result, &figure), &Meant::Page)?;
    let files = desk.records.clone();
    let full = ResultDocument {
        files: files.clone(),
        ..result.clone()
    };
    let json = serde_json::to_string_pretty(&full).map_err(|problem| Error::RoundTrip {
        file: RESULT.to_owned(),
        what: problem.to_string(),
    })?;
    desk.put(RESULT, &format!("{json}\n"), &Meant::Result(&full))?;
    Ok((desk.staged, files))
}

/// Where files lie before they get their names.
struct Desk<'a> {
    dir: &'a Path,
    staged: Vec<Staged>,
    records: Vec<FileRecord>,
}

impl<'a> Desk<'a> {
    fn new(dir: &'a Path) -> Self {
        Self {
            dir,
            staged: Vec::new(),
            records: Vec::new(),
        }
    }

    fn put(&mut self, name: &str, text: &str, meant: &Meant) -> Result<(), Error> {
        let bytes = text.as_bytes();
        let staged = Staged::write(self.dir, name, bytes)?;
        verify(staged.path(), name, bytes, meant)?;
        self.staged.push(staged);
        self.records.push(FileRecord {
            file: name.to_owned(),
            size_bytes: bytes.len() as u64,
            sha256: hexadecimal(&Sha256::digest(bytes)),
        });
        Ok(())
    }
}

fn hexadecimal(bytes: &[u8]) -> String {
    bytes.iter().fold(String::new(), |mut text, byte| {
        let _ = write!(text, "{byte:02x}");
        text
    })
}

/// Gives every file its name. Old files that have no successor go before `result.json` changes.
fn commit(mut staged: Vec<Staged>, dir: &Path, old: &BTreeSet<String>) -> Result<(), Error> {
    let names: BTreeSet<String> = staged.iter().map(|file| file.name.clone()).collect();
    let Some(last) = staged.pop() else {
        return Ok(());
    };
    let mut fresh = Vec::new();
    let outcome = staged
        .into_iter()
        .try_for_each(|file| name_one(file, dir, old, &mut fresh))
        .and_then(|()| {
            old.difference(&names)
                .try_for_each(|name| remove(&dir.join(name)))
        })
        .and_then(|()| name_one(last, dir, old, &mut fresh));
    if outcome.is_err() {
        for path in fresh {
            // The first error is the one worth telling.
            let _ = fs::remove_file(path);
        }
    }
    sync_folder(dir);
    outcome
}

fn name_one(
    file: Staged,
    dir: &Path,
    old: &BTreeSet<String>,
    fresh: &mut Vec<PathBuf>,
) -> Result<(), Error> {
    let replaces = old.contains(&file.name);
    let path = dir.join(&file.name);
    file.commit(dir, replaces)?;
    if !replaces {
        fresh.push(path);
    }
    Ok(())
}

fn remove(path: &Path) -> Result<(), Error> {
    match fs::remove_file(path) {
        Err(problem) if problem.kind() != std::io::ErrorKind::NotFound => {
            Err(Error::io("remove", path)(problem))
        }
        _ => Ok(()),
    }
}

#[cfg(test)]
#[path = "folder_tests.rs"]
mod tests;
