//! A folder of pictures: everything is written beside its place first, then put there at once; own files of an earlier run
//! go, foreign ones stay.

use super::Failure;
use crate::preview::png::MADE_BY;
use crate::preview::svg::MARK;
use std::collections::BTreeSet;
use std::fs::{self, File};
use std::io::Read;
use std::path::{Path, PathBuf};
use tempfile::TempDir;

/// Bytes at the start of a file in which it says who made it.
const HEAD: u64 = 2048;

/// A folder that is being filled.
pub(super) struct Folder {
    path: PathBuf,
    /// Where files wait; gone with the value.
    waiting: TempDir,
    names: BTreeSet<String>,
    /// Whether the folder was made for this run.
    made: bool,
}

impl Folder {
    /// Opens a folder, making it where it is not there.
    ///
    /// # Errors
    ///
    /// In one sentence, where it is no folder or cannot be written.
    pub(super) fn open(path: &Path) -> Result<Self, Failure> {
        let cannot = |error: std::io::Error| {
            Failure::Cannot(format!("cannot write to {}: {error}", path.display()))
        };
        let made = match fs::metadata(path) {
            Ok(found) if !found.is_dir() => {
                let sentence = format!("cannot write to {}: it is not a folder", path.display());
                return Err(Failure::Cannot(sentence));
            }
            Ok(_) => false,
            Err(_) => {
                fs::create_dir_all(path).map_err(cannot)?;
                true
            }
        };
        let waiting = tempfile::Builder::new()
            .prefix(".phasewright-")
            .tempdir_in(path)
            .map_err(cannot)?;
        Ok(Self {
            path: path.to_owned(),
            waiting,
            names: BTreeSet::new(),
            made,
        })
    }

    /// Says that a file of this name will come.
    ///
    /// # Errors
    ///
    /// Where a foreign file stands in its place.
    pub(super) fn expect(&mut self, name: &str) -> Result<(), Failure> {
        let place = self.path.join(name);
        if place.symlink_metadata().is_ok() && !is_own(&place) {
            return Err(Failure::Cannot(format!(
                "{} was not made by `preview`: nothing was written; move it, or choose another folder",
                place.display()
            )));
        }
        self.names.insert(name.to_owned());
        Ok(())
    }

    /// Writes a file to where it waits.
    pub(super) fn put(&self, name: &str, bytes: &[u8]) -> Result<(), Failure> {
        fs::write(self.waiting.path().join(name), bytes).map_err(|error| {
            let place = self.path.join(name);
            Failure::Cannot(format!("cannot write {}: {error}", place.display()))
        })
    }

    /// Puts every file in its place; with `all`, takes own files of an earlier run away that are not among them.
    pub(super) fn finish(mut self, all: bool) -> Result<(), Failure> {
        let cannot = |place: &Path, error: std::io::Error| {
            Failure::Cannot(format!("cannot write {}: {error}", place.display()))
        };
        for name in &self.names {
            let place = self.path.join(name);
            fs::rename(self.waiting.path().join(name), &place)
                .map_err(|error| cannot(&place, error))?;
        }
        self.made = false;
        if !all {
            return Ok(());
        }
        for entry in fs::read_dir(&self.path)
            .map_err(|error| cannot(&self.path, error))?
            .flatten()
        {
            let name = entry.file_name().to_string_lossy().into_owned();
            if is_name_of_ours(&name) && !self.names.contains(&name) && is_own(&entry.path()) {
                fs::remove_file(entry.path()).map_err(|error| cannot(&entry.path(), error))?;
            }
        }
        Ok(())
    }
}

impl Drop for Folder {
    /// A folder that was made for a run that failed goes again, if nobody put anything in.
    fn drop(&mut self) {
        if self.made {
            drop(fs::remove_dir_all(self.waiting.path()));
            drop(fs::remove_dir(&self.path));
        }
    }
}

/// Whether `preview` gives files such names.
fn is_name_of_ours(name: &str) -> bool {
    let number = name
        .strip_prefix("cue-")
        .and_then(|rest| rest.strip_suffix(".svg"));
    match number {
        Some(digits) => digits.len() >= 3 && digits.bytes().all(|byte| byte.is_ascii_digit()),
        None => matches!(
            name,
            "run-up.svg" | "loop.svg" | "run-down.svg" | "sheet.svg" | "sheet.png" | "index.html"
        ),
    }
}

/// Whether a file says that `preview` made it.
fn is_own(path: &Path) -> bool {
    let is_file = path.symlink_metadata().is_ok_and(|found| found.is_file());
    let mut head = Vec::new();
    let read = File::open(path).and_then(|file| file.take(HEAD).read_to_end(&mut head));
    let says = |mark: &str| {
        head.windows(mark.len())
            .any(|window| window == mark.as_bytes())
    };
    is_file && read.is_ok() && (says(MARK) || says(MADE_BY))
}
