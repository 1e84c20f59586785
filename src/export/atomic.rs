//! A file that is whole or not there: staged beside its target, synced, renamed.

use std::fs::File;
use std::io::Write;
use std::path::Path;

use tempfile::{Builder, NamedTempFile};

use super::Error;

/// A file that is written and synced under a passing name; dropped, it is gone.
pub(super) struct Staged {
    file: NamedTempFile,
    /// The name that it will have.
    pub(super) name: String,
}

impl Staged {
    /// Writes `bytes` to a passing file in `dir`, with the permissions that any new file gets.
    pub(super) fn write(dir: &Path, name: &str, bytes: &[u8]) -> Result<Self, Error> {
        let target = dir.join(name);
        let suffix = format!("-{name}");
        let mut builder = Builder::new();
        builder.prefix(".bandrule-").suffix(&suffix);
        #[cfg(unix)]
        let permissions = std::os::unix::fs::PermissionsExt::from_mode(0o666);
        #[cfg(unix)]
        builder.permissions(permissions);
        let mut file = builder
            .tempfile_in(dir)
            .map_err(Error::io("create", &target))?;
        file.write_all(bytes)
            .and_then(|()| file.as_file().sync_all())
            .map_err(Error::io("write", &target))?;
        let name = name.to_owned();
        Ok(Self { file, name })
    }

    /// Where the bytes stand now.
    pub(super) fn path(&self) -> &Path {
        self.file.path()
    }

    /// Renames the file to its own name; an existing file is replaced only where `replace` says so.
    pub(super) fn commit(self, dir: &Path, replace: bool) -> Result<(), Error> {
        let target = dir.join(&self.name);
        let renamed = if replace {
            self.file.persist(&target)
        } else {
            self.file.persist_noclobber(&target)
        };
        renamed
            .map(drop)
            .map_err(|failed| Error::io("rename to", &target)(failed.error))
    }
}

/// Syncs the entries of a folder, where the system can.
pub(super) fn sync_folder(dir: &Path) {
    if let Ok(handle) = File::open(dir) {
        // Not every file system syncs folders; the files themselves are synced already.
        let _ = handle.sync_all();
    }
}
