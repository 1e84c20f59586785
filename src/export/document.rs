//! A document as neutral JSON: written whole, read back, compared with what was meant.

use std::path::Path;

use super::Error;
use super::atomic::{Staged, sync_folder};
use crate::parse::{AnyParsed, Hints, Source, read_any};

/// Writes a document to a `.json` file.
///
/// # Errors
/// A target of another format, one that exists where `replace` does not allow it, a document that
/// does not read back as it was meant, and what the system refuses. Nothing is left behind.
pub fn write_document(document: &AnyParsed, path: &Path, replace: bool) -> Result<(), Error> {
    let is_json = path
        .extension()
        .is_some_and(|e| e.eq_ignore_ascii_case("json"));
    let (Some(name), true) = (path.file_name().and_then(|name| name.to_str()), is_json) else {
        return Err(Error::Format {
            path: path.to_owned(),
        });
    };
    let folder = match path.parent() {
        Some(folder) if folder != Path::new("") => folder,
        _ => Path::new("."),
    };
    match path.symlink_metadata() {
        Ok(metadata) if !metadata.is_file() => {
            return Err(Error::NotAFile {
                path: path.to_owned(),
            });
        }
        Ok(_) if !replace => {
            return Err(Error::Exists {
                path: path.to_owned(),
            });
        }
        _ => {}
    }
    let wrong = |what: String| Error::RoundTrip {
        file: name.to_owned(),
        what,
    };
    let mut text = document
        .to_json()
        .map_err(|error| wrong(error.to_string()))?;
    text.push('\n');
    let staged = Staged::write(folder, name, text.as_bytes())?;
    let source = Source::read(staged.path(), name).map_err(|problem| wrong(problem.message))?;
    let back = read_any(source, None, &Hints::default());
    let back = back.map_err(|problems| {
        wrong(
            problems
                .first()
                .map_or_else(String::new, ToString::to_string),
        )
    })?;
    let again = back.first().map(AnyParsed::to_json).transpose();
    let again = again.map_err(|error| wrong(error.to_string()))?;
    // Bit for bit: every finite double has one shortest text, and the others travel as words.
    if again.as_deref() != Some(text.trim_end()) {
        return Err(wrong("its values differ".to_owned()));
    }
    staged.commit(folder, replace)?;
    sync_folder(folder);
    Ok(())
}
