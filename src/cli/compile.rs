//! `compile`: validate, plan, write the set-point table.

use super::deliver::Table;
use super::load::{Loader, is_standard_input};
use super::progress::Progress;
use super::report::{Target, Verdict, report, wants_words};
use super::{Common, Failure, Streams};
use crate::finding::render::json_values;
use crate::finding::{Code, Finding, Place, ordered};
use crate::plan::Plan;
use crate::setpoint::{Form, Head, table_id};
use clap::{Args, ValueEnum};
use std::fs;
use std::path::{Path, PathBuf};

/// Rows of a table with one row a tick, at most.
const MOST_ROWS: u64 = 100_000_000;

/// Check a show and write its set-point table
#[derive(Args, Debug)]
pub(super) struct Compile {
    /// Show file; `-` is standard input
    #[arg(value_name = "SHOW")]
    show: PathBuf,
    /// Table file; `-` is standard output; left out: the show's name with the form's ending, in the current folder
    #[arg(long, short, value_name = "TABLE")]
    output: Option<PathBuf>,
    /// How the table is written; left out: by the ending of TABLE, else csv
    #[arg(long, value_name = "FORM")]
    form: Option<TableForm>,
    /// Start at this cue, in the order of play
    #[arg(long, value_name = "K")]
    from: Option<u32>,
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum TableForm {
    /// RFC 4180, one header line
    Csv,
    /// The same rows after a head that tells what they are
    Json,
}

impl From<TableForm> for Form {
    fn from(form: TableForm) -> Self {
        match form {
            TableForm::Csv => Form::Csv,
            TableForm::Json => Form::Json,
        }
    }
}

impl Compile {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        let form = self.form()?;
        let output = self.output(form);
        let mut loader = Loader::new(common.rig.clone(), std::slice::from_ref(&self.show))?;
        let (plan, mut findings) = loader.plan(&self.show, self.from, &mut streams.stdin)?;
        findings.extend(plan.as_ref().and_then(too_many_rows));
        let findings = ordered(findings);
        let sources = &loader.sources;
        let verdict = report(findings.clone(), sources, common, Target::Stderr, streams)?;
        let Some(plan) = plan.filter(|_| !verdict.stops()) else {
            return Ok(self.nothing_written(verdict, common, streams));
        };
        refuse_to_overwrite(&output, sources.names())?;
        let (id, findings) = (table_id(&plan), json_values(&findings, sources));
        let head = Head {
            id: &id,
            findings: &findings,
        };
        let table = Table {
            plan: &plan,
            form,
            id: &id,
            head,
        };
        let progress = Progress::new(plan.rows(), common, streams);
        let written = if is_standard_input(&output) {
            table.stream(&mut streams.stdout, &progress)?
        } else {
            table.file(&output, &progress)
        };
        progress.done();
        written?;
        say_done(&plan, &id, &output, common, streams)?;
        Ok(verdict.code)
    }

    /// `--form`, else the ending of the table's name, else csv.
    fn form(&self) -> Result<Form, Failure> {
        if let Some(form) = self.form {
            return Ok(form.into());
        }
        let named = self.output.as_deref();
        let Some(output) = named.filter(|path| !is_standard_input(path)) else {
            return Ok(Form::Csv);
        };
        let ending = output.extension().map(|ending| ending.to_string_lossy());
        match ending.as_deref() {
            Some("csv") => Ok(Form::Csv),
            Some("json") => Ok(Form::Json),
            _ => Err(Failure::Usage(format!(
                "the name {} does not end in .csv or .json: say `--form csv` or `--form json`",
                output.display()
            ))),
        }
    }

    /// Where the table goes: `-o`, else standard output for a show from standard input, else the show's name with the
    /// form's ending, in the current folder.
    fn output(&self, form: Form) -> PathBuf {
        if let Some(output) = &self.output {
            return output.clone();
        }
        let ending = match form {
            Form::Csv => "csv",
            Form::Json => "json",
        };
        match self.show.file_stem() {
            Some(name) if !is_standard_input(&self.show) => {
                let mut file = name.to_owned();
                file.push(".");
                file.push(ending);
                PathBuf::from(file)
            }
            _ => PathBuf::from("-"),
        }
    }
}

impl Compile {
    /// Says that there is no table, where a person reads it.
    fn nothing_written(&self, verdict: Verdict, common: &Common, streams: &mut Streams) -> u8 {
        if wants_words(common) {
            let tally = verdict.tally;
            let why = if tally.errors == 0 { " (--strict)" } else { "" };
            let words = format!("{tally}: no table was written{why}");
            drop(writeln!(streams.stderr, "{words}"));
        }
        verdict.code
    }
}

/// Names the table: on standard output, or on standard error where the table itself went, or may have gone, there.
fn say_done(
    plan: &Plan,
    id: &str,
    output: &Path,
    common: &Common,
    streams: &mut Streams,
) -> Result<(), Failure> {
    let rows = plan.rows();
    if common.quiet {
        return Ok(());
    }
    let words = format!("{}: table {id}, {rows} rows", output.display());
    // A device may be standard output under another name.
    let streamed = fs::metadata(output).map_or(true, |found| !found.is_file());
    if !streamed {
        writeln!(streams.stdout, "{words}")?;
    } else if wants_words(common) {
        drop(writeln!(streams.stderr, "{words}"));
    }
    Ok(())
}

/// A table with one row a tick that is longer than any controller plays; the place is the cue in which it gets too long.
fn too_many_rows(plan: &Plan) -> Option<Finding> {
    let rows = plan.rows();
    if rows <= MOST_ROWS {
        return None;
    }
    let at = plan.legs.partition_point(|leg| leg.start.0 < MOST_ROWS);
    let leg = plan.legs.get(at.saturating_sub(1))?;
    let place = match (plan.cue(leg), plan.transition(leg)) {
        (Some(cue), _) => cue.place,
        (None, Some(transition)) => transition.place,
        (None, None) => Place::default(),
    };
    let factor = rows.div_ceil(MOST_ROWS);
    let message = format!("the table would have {rows} rows, the limit is {MOST_ROWS}");
    let help = format!("a `tick` {factor} times as long, or a shorter show, fits");
    Some(Finding::new(Code::TextTooMuch, place, message).help(help))
}

/// A table must never take the place of the show or the rig that it is made from.
fn refuse_to_overwrite<'n>(
    output: &Path,
    inputs: impl Iterator<Item = &'n str>,
) -> Result<(), Failure> {
    // What does not exist yet cannot be an input.
    let Ok(target) = fs::canonicalize(output) else {
        return Ok(());
    };
    for input in inputs.filter(|name| *name != "-") {
        if fs::canonicalize(input).is_ok_and(|input| input == target) {
            let sentence =
                format!("the table would overwrite {input}: give another name with `-o`");
            return Err(Failure::Usage(sentence));
        }
    }
    Ok(())
}
