//! Bringing a table to its place: a reader sees the old one or the new one, whole, and no table that was not looked at
//! a second time.

use super::Failure;
use super::progress::Progress;
use crate::audit::{Report, TableAuditor};
use crate::finding::render::counted;
use crate::plan::Plan;
use crate::setpoint::{Head, Output};
use std::fs::{self, File, OpenOptions};
use std::io::{self, BufWriter, Read, Write};
use std::path::{Path, PathBuf};
use tempfile::NamedTempFile;

/// Bytes written or read back at a time.
const STRETCH: usize = 256 * 1024;

/// A table to be written.
pub(super) struct Table<'t> {
    /// What it is made from.
    pub(super) plan: &'t Plan,
    /// How it is written.
    pub(super) output: Output,
    /// Its ID.
    pub(super) id: &'t str,
    /// What its head tells beside the plan.
    pub(super) head: Head<'t>,
}

impl Table<'_> {
    /// Writes the table straight through to a stream, auditing the bytes as they go by.
    ///
    /// # Errors
    ///
    /// What `out` reports; the outer error is of the stream, the inner one what the audit found.
    pub(super) fn stream(
        &self,
        out: &mut dyn Write,
        progress: &Progress,
    ) -> io::Result<Result<(), Failure>> {
        let mut tee = Tee {
            out,
            auditor: self.auditor(),
        };
        self.write(&mut tee, progress)?;
        tee.out.flush()?;
        Ok(judged(&tee.auditor.finish(), "the stream"))
    }

    /// Writes the table to a file: a regular one is replaced as a whole once the new one has been read back and audited;
    /// into anything else that exists (a device, a pipe) it is written straight through.
    pub(super) fn file(&self, target: &Path, progress: &Progress) -> Result<(), Failure> {
        let cannot = |error: io::Error| {
            Failure::Cannot(format!("cannot write {}: {error}", target.display()))
        };
        match fs::metadata(target) {
            Ok(found) if found.is_dir() => {
                let sentence = format!("cannot write {}: it is a folder", target.display());
                Err(Failure::Cannot(sentence))
            }
            Ok(found) if !found.is_file() => {
                let device = OpenOptions::new().write(true).open(target);
                let mut device = device.map_err(cannot)?;
                self.stream(&mut device, progress).map_err(cannot)?
            }
            Ok(found) => {
                // A link stays a link: what it leads to is replaced.
                let real = fs::canonicalize(target).map_err(cannot)?;
                self.replace(&real, Some(found.permissions()), progress)
            }
            Err(error) if error.kind() == io::ErrorKind::NotFound => {
                self.replace(target, None, progress)
            }
            Err(error) => Err(cannot(error)),
        }
    }

    /// Writes a temporary file beside the target, reads it back, audits it, and gives it the target's name.
    fn replace(
        &self,
        target: &Path,
        permissions: Option<fs::Permissions>,
        progress: &Progress,
    ) -> Result<(), Failure> {
        let cannot = |error: io::Error| {
            Failure::Cannot(format!("cannot write {}: {error}", target.display()))
        };
        let temporary = temporary_beside(target).map_err(cannot)?;
        {
            let mut out = BufWriter::with_capacity(STRETCH, temporary.as_file());
            self.write(&mut out, progress).map_err(cannot)?;
            out.flush().map_err(cannot)?;
        }
        // A name must never be given to a table that a loss of power could still leave empty.
        temporary.as_file().sync_all().map_err(cannot)?;
        let mut written = temporary.reopen().map_err(cannot)?;
        let report = self.read_back(&mut written, progress).map_err(cannot)?;
        judged(&report, &target.display().to_string())?;
        if let Some(permissions) = permissions {
            fs::set_permissions(temporary.path(), permissions).map_err(cannot)?;
        }
        temporary
            .persist(target)
            .map_err(|failed| cannot(failed.error))?;
        Ok(())
    }

    fn write(&self, out: &mut dyn Write, progress: &Progress) -> io::Result<()> {
        progress.phase("writing");
        let mut heard = |rows| progress.rows(rows);
        self.output.write(self.plan, &self.head, out, &mut heard)
    }

    fn read_back(&self, written: &mut File, progress: &Progress) -> io::Result<Report> {
        progress.phase("checking");
        let mut auditor = self.auditor();
        let mut stretch = vec![0; STRETCH];
        loop {
            let length = match written.read(&mut stretch) {
                Ok(length) => length,
                Err(error) if error.kind() == io::ErrorKind::Interrupted => continue,
                Err(error) => return Err(error),
            };
            if length == 0 {
                return Ok(auditor.finish());
            }
            auditor.push(stretch.get(..length).unwrap_or_default());
            progress.rows(auditor.rows());
        }
    }

    fn auditor(&self) -> TableAuditor<'_> {
        TableAuditor::new(self.plan, &self.output, self.id)
    }
}

/// A new file in the target's folder, with the permissions that any new file would get.
pub(super) fn temporary_beside(target: &Path) -> io::Result<NamedTempFile> {
    let folder = match target.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder.to_owned(),
        _ => PathBuf::from("."),
    };
    let mut builder = tempfile::Builder::new();
    builder.prefix(".phasewright-").suffix(".part");
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        // The process's mask is taken off this, as of every new file.
        builder.permissions(fs::Permissions::from_mode(0o666));
    }
    // What is said is about the target: that the file beside it has a name of its own is nobody's business.
    fs::metadata(&folder)?;
    let made = builder.tempfile_in(folder);
    made.map_err(|error| io::Error::from(error.kind()))
}

/// What to say where a table is not the one that was planned: a fault of this program or of the disk, never of the show.
fn judged(report: &Report, name: &str) -> Result<(), Failure> {
    let Some(first) = report.problems.first() else {
        return Ok(());
    };
    let count = usize::try_from(report.count).unwrap_or(usize::MAX);
    let problems = counted(count, "difference");
    Err(Failure::Cannot(format!(
        "the table written to {name} does not match its plan, so it must not be played: {problems}, the first: {first}"
    )))
}

/// Writes to a stream and shows the auditor what went through.
struct Tee<'t, 'p> {
    out: &'t mut dyn Write,
    auditor: TableAuditor<'p>,
}

impl Write for Tee<'_, '_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        let length = self.out.write(bytes)?;
        self.auditor.push(bytes.get(..length).unwrap_or_default());
        Ok(length)
    }
    fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }
}
