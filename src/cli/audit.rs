//! `audit`: a second look at a table, or at a log of the machine.

use super::deliver::temporary_beside;
use super::known::{Kind, id_within, kind};
use super::load::{Loader, is_standard_input};
use super::progress::Progress;
use super::report::{Target, report};
use super::verdict::{Table, Verdict, broken_json};
use super::{CLEAN, Common, ERRORS, Failure, Streams};
use crate::audit::log::{self, LogReport};
use crate::audit::{Problem, audit_table};
use crate::finding::{FileId, Finding, Place, Sources};
use crate::plan::Plan;
use crate::setpoint::{Form, Output, table_id};
use clap::{Args, ValueEnum};
use std::fs::{self, File, OpenOptions};
use std::io::{self, BufRead, BufReader, Read, Write};
use std::path::{Path, PathBuf};

/// The head of a table, with its ID, ends within this many bytes (titles and texts aside, which follow the ID).
const HEAD: u64 = 64 * 1024;
/// Bytes read at a time.
const STRETCH: usize = 256 * 1024;

/// Look at a table again, or at a log measured on the machine
#[derive(Args, Debug)]
pub(super) struct Audit {
    /// Table, or log with the columns `time_s,a_counts,b_counts` or `time_s,rotor`; `-` is standard input
    #[arg(value_name = "FILE")]
    file: PathBuf,
    /// The show that was compiled or played; without it only the table's ID is printed
    #[arg(long, value_name = "SHOW")]
    show: Option<PathBuf>,
    /// The cue that the table starts at, where it was compiled with `--from`
    #[arg(long, value_name = "K")]
    from: Option<u32>,
    /// How the result is written
    #[arg(long, value_name = "FORM", default_value = "text")]
    form: AuditForm,
    /// Draw the poses of a log over time; `-` is standard output, in place of the result
    #[arg(long, short, value_name = "FILE.svg")]
    output: Option<PathBuf>,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum AuditForm {
    /// For people
    Text,
    /// For programs
    Json,
}

impl Audit {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        if let (Some(output), true) = (&self.output, self.show.is_none()) {
            return Err(Failure::Usage(format!(
                "`-o {}` draws a log against its show: name it with `--show`",
                output.display()
            )));
        }
        let from_stdin = is_standard_input(&self.file);
        if from_stdin && self.show.as_deref().is_some_and(is_standard_input) {
            return Err(Failure::Usage(
                "standard input `-` can be read only once".to_owned(),
            ));
        }
        let Some(show) = &self.show else {
            return self.identify(streams);
        };
        let mut loader = Loader::new(common.rig.clone(), std::slice::from_ref(show))?;
        let (plan, findings) = loader.plan(show, self.from, &mut streams.stdin)?;
        // What is wrong with the show itself is for `validate` to say, unless it leaves nothing to compare with.
        let errors: Vec<Finding> = findings.into_iter().filter(Finding::is_error).collect();
        let Some(plan) = plan.filter(|_| errors.is_empty()) else {
            let verdict = report(errors, &loader.sources, common, Target::Stderr, streams)?;
            return Ok(verdict.code.max(ERRORS));
        };
        let name = self.file.display().to_string();
        let log_file = loader.sources.add(name, "");
        let mut file = self.open(streams)?;
        let start = fill(&mut file, HEAD as usize).map_err(|error| self.cannot(&error))?;
        let mut file =
            BufReader::with_capacity(STRETCH, io::Cursor::new(start.clone()).chain(file));
        match kind(&start) {
            Kind::Table(output) => {
                let found = Table {
                    output,
                    carries: id_within(&start),
                };
                self.table(&plan, &found, &mut file, common, streams)
            }
            Kind::Broken(what) => self.broken(&plan, what, streams),
            Kind::Log => self.log(&plan, &mut file, log_file, &loader.sources, common, streams),
        }
    }

    fn open(&self, streams: &mut Streams) -> Result<Box<dyn BufRead>, Failure> {
        if is_standard_input(&self.file) {
            let stdin = std::mem::replace(&mut streams.stdin, Box::new(io::empty()));
            return Ok(Box::new(BufReader::with_capacity(STRETCH, stdin)));
        }
        let file = File::open(&self.file).map_err(|error| self.cannot(&error))?;
        if file.metadata().is_ok_and(|found| found.is_dir()) {
            let sentence = format!("{} is a folder, not a file", self.file.display());
            return Err(Failure::Cannot(sentence));
        }
        Ok(Box::new(BufReader::with_capacity(STRETCH, file)))
    }

    fn cannot(&self, error: &io::Error) -> Failure {
        Failure::Cannot(format!("cannot read {}: {error}", self.file.display()))
    }

    /// Prints the ID that a table carries.
    fn identify(&self, streams: &mut Streams) -> Result<u8, Failure> {
        let file = self.open(streams)?;
        let mut start = Vec::new();
        file.take(HEAD)
            .read_to_end(&mut start)
            .map_err(|error| self.cannot(&error))?;
        let name = self.file.display();
        match (kind(&start), id_within(&start)) {
            (Kind::Table(Output::Rows(Form::Csv)), _) => Err(Failure::Cannot(format!(
                "{name} is a table as CSV, which carries no ID: say `--show SHOW` to compare it with its show"
            ))),
            (Kind::Table(_), Some(id)) => {
                writeln!(streams.stdout, "{id}")?;
                Ok(CLEAN)
            }
            (Kind::Broken(what), _) => Err(Failure::Cannot(format!("{name}: {what}"))),
            (Kind::Table(_), None) => Err(Failure::Cannot(format!(
                "{name}: no table ID in its first {HEAD} bytes"
            ))),
            (Kind::Log, _) => Err(Failure::Usage(format!(
                "{name} is no table; if it is a log of the machine, name the show with `--show`"
            ))),
        }
    }

    fn table(
        &self,
        plan: &Plan,
        table: &Table,
        file: &mut dyn Read,
        common: &Common,
        streams: &mut Streams,
    ) -> Result<u8, Failure> {
        if self.output.is_some() {
            let sentence = "`-o` draws a log; this is a table".to_owned();
            return Err(Failure::Usage(sentence));
        }
        let id = table_id(plan);
        let progress = Progress::new(plan.rows(), common, streams);
        progress.phase("checking");
        let found = audit_table(plan, &table.output, &id, file, &mut |rows| {
            progress.rows(rows);
        });
        progress.done();
        let found = found.map_err(|error| self.cannot(&error))?;
        let verdict = Verdict {
            name: self.file.display().to_string(),
            show: self.show.as_deref().map(|show| show.display().to_string()),
            id: &id,
            table,
            found: &found,
        };
        self.say(&verdict, streams)?;
        Ok(if found.is_clean() { CLEAN } else { ERRORS })
    }

    fn say(&self, verdict: &Verdict<'_>, streams: &mut Streams) -> Result<(), Failure> {
        let text = match self.form {
            AuditForm::Text => verdict.text(),
            AuditForm::Json => verdict.json(),
        };
        streams.stdout.write_all(text.as_bytes())?;
        Ok(())
    }

    /// A file that starts like a table and cannot be one.
    fn broken(&self, plan: &Plan, what: String, streams: &mut Streams) -> Result<u8, Failure> {
        let name = self.file.display().to_string();
        if self.form == AuditForm::Text {
            return Err(Failure::Cannot(format!("{name}: {what}")));
        }
        let problem = Problem {
            tick: None,
            column: "form".to_owned(),
            wanted: "a table".to_owned(),
            found: what,
        };
        let value = broken_json(&table_id(plan), &problem);
        streams.stdout.write_all(value.as_bytes())?;
        Ok(ERRORS)
    }

    fn log(
        &self,
        plan: &Plan,
        file: &mut dyn BufRead,
        log_file: FileId,
        sources: &Sources,
        common: &Common,
        streams: &mut Streams,
    ) -> Result<u8, Failure> {
        let place = Place {
            file: log_file,
            start: 0,
            end: 0,
        };
        let (found, findings) = match log::audit(file, plan, place) {
            Ok(found) => found,
            Err(refused) => (None, vec![log::refusal(&refused, place)]),
        };
        let verdict = report(findings, sources, common, Target::Stderr, streams)?;
        let Some(found) = found else {
            return Ok(verdict.code);
        };
        self.deliver(&found, streams)?;
        Ok(verdict.code)
    }

    /// The picture, and the result unless the picture takes its place.
    fn deliver(&self, found: &LogReport, streams: &mut Streams) -> Result<(), Failure> {
        if let Some(output) = &self.output {
            let picture = found.plot();
            if is_standard_input(output) {
                streams.stdout.write_all(picture.as_bytes())?;
                return Ok(());
            }
            write_whole(output, picture.as_bytes())?;
        }
        let text = match self.form {
            AuditForm::Text => found.text(),
            AuditForm::Json => found.json(),
        };
        streams.stdout.write_all(text.as_bytes())?;
        Ok(())
    }
}

/// The first bytes of a file, up to `most` of them.
fn fill(file: &mut dyn Read, most: usize) -> io::Result<Vec<u8>> {
    let mut start = Vec::new();
    file.take(most as u64).read_to_end(&mut start)?;
    Ok(start)
}

/// Writes a small file: a regular one is replaced as a whole, a device or a pipe is written straight through.
fn write_whole(target: &Path, bytes: &[u8]) -> Result<(), Failure> {
    let cannot =
        |error: io::Error| Failure::Cannot(format!("cannot write {}: {error}", target.display()));
    match fs::metadata(target) {
        Ok(found) if found.is_dir() => {
            let sentence = format!("cannot write {}: it is a folder", target.display());
            Err(Failure::Cannot(sentence))
        }
        Ok(found) if !found.is_file() => {
            let mut device = OpenOptions::new()
                .write(true)
                .open(target)
                .map_err(cannot)?;
            device.write_all(bytes).map_err(cannot)
        }
        _ => {
            let mut temporary = temporary_beside(target).map_err(cannot)?;
            temporary.write_all(bytes).map_err(cannot)?;
            temporary
                .persist(target)
                .map(drop)
                .map_err(|failed| cannot(failed.error))
        }
    }
}
