//! `audit`: a second look at a table, or at a log of the machine.

use super::deliver::temporary_beside;
use super::load::{Loader, is_standard_input};
use super::progress::Progress;
use super::report::{Target, report};
use super::{CLEAN, Common, ERRORS, Failure, Streams};
use crate::audit::log::{self, LogReport};
use crate::audit::{Report, audit_table};
use crate::finding::{FileId, Finding, Place, Sources};
use crate::plan::Plan;
use crate::setpoint::c_header;
use crate::setpoint::pack::{Content, PackForm, PackHead};
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

/// What a file is, as its first bytes tell.
#[derive(Clone, Debug, PartialEq, Eq)]
enum Kind {
    Table(Output),
    /// It starts like a table for controllers, and does not go on like one.
    Broken(String),
    Log,
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
            Kind::Table(output) => self.table(&plan, &output, &mut file, common, streams),
            Kind::Broken(what) => Err(Failure::Cannot(format!("{}: {what}", self.file.display()))),
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
        output: &Output,
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
        let found = audit_table(plan, output, &id, file, &mut |rows| progress.rows(rows));
        progress.done();
        let found = found.map_err(|error| self.cannot(&error))?;
        let name = self.file.display().to_string();
        let text = match self.form {
            AuditForm::Text => table_text(&name, &id, &found),
            AuditForm::Json => table_json(&id, &found),
        };
        streams.stdout.write_all(text.as_bytes())?;
        Ok(if found.is_clean() { CLEAN } else { ERRORS })
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

/// A table is known by its first line or sign; all else is taken for a log, whose reader says what is wrong with it.
fn kind(start: &[u8]) -> Kind {
    if start.starts_with(b"PHWT") {
        return match pack_content(start) {
            Ok(content) => Kind::Table(Output::Pack(content)),
            Err(what) => Kind::Broken(what),
        };
    }
    let text = start.strip_prefix(b"\xef\xbb\xbf").unwrap_or(start);
    let text = text.trim_ascii_start();
    if text.starts_with(b"/*") {
        header(text)
    } else if text.starts_with(b"{") {
        match tolerance_within(text) {
            Some(tolerance) => Kind::Table(Output::JsonKnots(tolerance)),
            None => Kind::Table(Output::Rows(Form::Json)),
        }
    } else if text.starts_with(b"tick,") {
        Kind::Table(Output::Rows(Form::Csv))
    } else {
        Kind::Log
    }
}

/// What a pack that starts like this holds.
fn pack_content(start: &[u8]) -> Result<Content, String> {
    let head = PackHead::read(start).map_err(|fault| fault.to_string())?;
    Ok(match head.form {
        PackForm::Rows => Content::Rows,
        PackForm::Knots => Content::Knots(u32::from(head.tolerance)),
    })
}

/// A C header: the table's identifier, and what it holds, from the first lines of its table.
fn header(text: &[u8]) -> Kind {
    let text = String::from_utf8_lossy(text);
    let table = text
        .split_once("static const uint8_t ")
        .and_then(|(_, rest)| {
            let (name, rest) = rest.split_once("_table[] PHW_STORE = {")?;
            let bytes = rest.split_once("};").map_or(rest, |(bytes, _)| bytes);
            Some((name.to_owned(), c_header::elements(bytes)))
        });
    match table {
        None => Kind::Broken("it starts like a C header, but has no table".to_owned()),
        Some((name, start)) => match pack_content(&start) {
            Ok(content) => Kind::Table(Output::Header(content, name)),
            Err(what) => Kind::Broken(what),
        },
    }
}

/// The tolerance of knots, where a JSON table has them in place of rows.
fn tolerance_within(start: &[u8]) -> Option<u32> {
    let text = String::from_utf8_lossy(start);
    let (_, after) = text.split_once("\n\"knots\":{\"tolerance\":")?;
    let (number, _) = after.split_once(',')?;
    number.parse().ok()
}

/// The ID in the start of a table: eight hexadecimal digits.
fn id_within(start: &[u8]) -> Option<String> {
    match kind(start) {
        Kind::Table(Output::Pack(_)) => {
            let head = PackHead::read(start).ok()?;
            Some(format!("{:08x}", head.id))
        }
        Kind::Table(Output::Header(..)) => {
            let text = String::from_utf8_lossy(start);
            let (_, bytes) = text.split_once("_table[] PHW_STORE = {")?;
            let head = PackHead::read(&c_header::elements(bytes)).ok()?;
            Some(format!("{:08x}", head.id))
        }
        Kind::Table(Output::Rows(Form::Json) | Output::JsonKnots(_)) => {
            let text = String::from_utf8_lossy(start);
            let (_, after) = text.split_once("\"table\"")?;
            let value = after.trim_start().strip_prefix(':')?.trim_start();
            let (id, _) = value.strip_prefix('"')?.split_once('"')?;
            let right = id.len() == 8 && id.bytes().all(|sign| sign.is_ascii_hexdigit());
            right.then(|| id.to_owned())
        }
        _ => None,
    }
}

fn table_text(name: &str, id: &str, found: &Report) -> String {
    if found.is_clean() {
        return format!("{name}: table {id}, {} rows, as planned\n", found.rows);
    }
    let mut text = String::new();
    for problem in &found.problems {
        text.push_str(&format!("{name}: {problem}\n"));
    }
    let more = found.count.saturating_sub(found.problems.len() as u64);
    if more > 0 {
        text.push_str(&format!("{name}: and {more} more\n"));
    }
    text.push_str(&format!(
        "{name}: {} differences from table {id} in {} rows read: it must not be played\n",
        found.count, found.rows
    ));
    text
}

fn table_json(id: &str, found: &Report) -> String {
    let problems: Vec<serde_json::Value> = found
        .problems
        .iter()
        .map(|problem| {
            serde_json::json!({
                "tick": problem.tick,
                "column": problem.column,
                "wanted": problem.wanted,
                "found": problem.found,
            })
        })
        .collect();
    let value = serde_json::json!({
        "table": id,
        "rows": found.rows,
        "differences": found.count,
        "problems": problems,
    });
    format!("{value:#}\n")
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
