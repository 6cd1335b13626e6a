//! `compile`: validate, plan, write the set-point table.

use super::deliver::Table;
use super::load::{Loader, is_standard_input};
use super::progress::Progress;
use super::report::{Target, Verdict, report, wants_words};
use super::{Common, Failure, Streams};
use crate::check::storage;
use crate::finding::render::json_values;
use crate::finding::{Code, Finding, Place, ordered};
use crate::plan::Plan;
use crate::rig::TableKind;
use crate::setpoint::c_header::identifier;
use crate::setpoint::pack::Content;
use crate::setpoint::{Form, Head, MOST_ROWS, Output, table_id};
use clap::{Args, ValueEnum};
use std::ffi::OsString;
use std::fs;
use std::path::{Path, PathBuf};

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
    /// Write knots, short tables for small controllers, as pack, c or json; `--knots within N counts`: with each tick within
    /// N counts of the rows (1 if left out)
    #[arg(
        long,
        value_name = "within N counts",
        num_args = 0..=1,
        require_equals = true,
        default_missing_value = "within 1 counts",
        value_parser = knots_within,
        overrides_with = "rows"
    )]
    knots: Option<u32>,
    /// Write rows, whatever the rig says of its table
    #[arg(long, overrides_with = "knots")]
    rows: bool,
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
    /// A C header with the table and its player
    C,
    /// Binary, for controllers
    Pack,
}

impl TableForm {
    /// The form that goes by this ending.
    fn of_ending(ending: &str) -> Option<Self> {
        match ending {
            "csv" => Some(Self::Csv),
            "json" => Some(Self::Json),
            "h" => Some(Self::C),
            "pack" => Some(Self::Pack),
            _ => None,
        }
    }

    fn ending(self) -> &'static str {
        match self {
            Self::Csv => "csv",
            Self::Json => "json",
            Self::C => "h",
            Self::Pack => "pack",
        }
    }
}

/// The largest tolerance of knots, in counts.
const MOST_TOLERANCE: u32 = 65_535;

/// Reads what stands after `--knots`: `within N counts`.
fn knots_within(text: &str) -> Result<u32, String> {
    let words: Vec<&str> = text.split_whitespace().collect();
    let number = match words.as_slice() {
        ["within", number, "counts" | "count"] => number.parse().ok(),
        _ => None,
    };
    number
        .filter(|number| (1..=MOST_TOLERANCE).contains(number))
        .ok_or_else(|| format!("write `--knots within N counts`, N from 1 to {MOST_TOLERANCE}"))
}

/// Joins `--knots within N counts` to one argument, so that what follows a bare `--knots` is not taken for its value.
pub(super) fn joined_knots(arguments: impl IntoIterator<Item = OsString>) -> Vec<OsString> {
    let mut joined: Vec<OsString> = Vec::new();
    let mut arguments = arguments.into_iter().peekable();
    while let Some(mut argument) = arguments.next() {
        if argument == "--knots" && arguments.peek().is_some_and(|next| next == "within") {
            for (index, word) in arguments.by_ref().take(3).enumerate() {
                argument.push(if index == 0 { "=" } else { " " });
                argument.push(word);
            }
        }
        joined.push(argument);
    }
    joined
}

impl Compile {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        let form = self.form()?;
        let target = self.target(form);
        let mut loader = Loader::new(common.rig.clone(), std::slice::from_ref(&self.show))?;
        let (plan, mut findings) = loader.plan(&self.show, self.from, &mut streams.stdin)?;
        let output = match &plan {
            Some(plan) => Some(self.output(form, &target, plan)?),
            None => None,
        };
        if let (Some(plan), Some(output)) = (&plan, &output) {
            let too_long = too_many_rows(plan, output);
            if too_long.is_none() {
                findings.extend(storage::check(plan, output.content()));
            }
            findings.extend(too_long);
        }
        let findings = ordered(findings);
        let sources = &loader.sources;
        let verdict = report(findings.clone(), sources, common, Target::Stderr, streams)?;
        let Some((plan, output)) = plan.zip(output).filter(|_| !verdict.stops()) else {
            return Ok(self.nothing_written(verdict, common, streams));
        };
        refuse_to_overwrite(&target, sources.names())?;
        let (id, findings) = (table_id(&plan), json_values(&findings, sources));
        let head = Head {
            id: &id,
            findings: &findings,
        };
        let table = Table {
            plan: &plan,
            output,
            id: &id,
            head,
        };
        let progress = Progress::new(plan.rows(), common, streams);
        let written = if is_standard_input(&target) {
            table.stream(&mut streams.stdout, &progress)?
        } else {
            table.file(&target, &progress)
        };
        progress.done();
        written?;
        say_done(&table, &target, common, streams)?;
        Ok(verdict.code)
    }

    /// `--form`, else the ending of the table's name, else csv.
    fn form(&self) -> Result<TableForm, Failure> {
        if let Some(form) = self.form {
            return Ok(form);
        }
        let named = self.output.as_deref();
        let Some(output) = named.filter(|path| !is_standard_input(path)) else {
            return Ok(TableForm::Csv);
        };
        let ending = output.extension().map(|ending| ending.to_string_lossy());
        ending.as_deref().and_then(TableForm::of_ending).ok_or_else(|| {
            Failure::Usage(format!(
                "the name {} does not end in .csv, .json, .h or .pack: say `--form csv`, `json`, `c` or `pack`",
                output.display()
            ))
        })
    }

    /// The form with what it holds: knots where `--knots` says so, or the rig for the forms of controllers.
    fn output(&self, form: TableForm, target: &Path, plan: &Plan) -> Result<Output, Failure> {
        let by_rig = plan.rig.table == TableKind::Knots && !self.rows;
        let content = match self.knots {
            Some(tolerance) => Content::Knots(tolerance),
            None if by_rig => Content::Knots(1),
            None => Content::Rows,
        };
        match (form, self.knots) {
            (TableForm::Csv, None) => Ok(Output::Rows(Form::Csv)),
            (TableForm::Csv, Some(_)) => Err(Failure::Usage(
                "csv has a line a row: write knots as `--form pack`, `c` or `json`".to_owned(),
            )),
            (TableForm::Json, None) => Ok(Output::Rows(Form::Json)),
            (TableForm::Json, Some(tolerance)) => Ok(Output::JsonKnots(tolerance)),
            (TableForm::Pack, _) => Ok(Output::Pack(content)),
            (TableForm::C, _) => Ok(Output::Header(content, self.name(target))),
        }
    }

    /// The identifier of a C header: from the file's name, for standard output from the show's.
    fn name(&self, target: &Path) -> String {
        let named = [target, &self.show]
            .into_iter()
            .find(|path| !is_standard_input(path));
        let stem = named.and_then(Path::file_stem);
        stem.map_or_else(
            || "show".to_owned(),
            |stem| identifier(&stem.to_string_lossy()),
        )
    }

    /// Where the table goes: `-o`, else standard output for a show from standard input, else the show's name with the
    /// form's ending, in the current folder.
    fn target(&self, form: TableForm) -> PathBuf {
        if let Some(output) = &self.output {
            return output.clone();
        }
        match self.show.file_stem() {
            Some(name) if !is_standard_input(&self.show) => {
                let mut file = name.to_owned();
                file.push(".");
                file.push(form.ending());
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
    table: &Table<'_>,
    target: &Path,
    common: &Common,
    streams: &mut Streams,
) -> Result<(), Failure> {
    if common.quiet {
        return Ok(());
    }
    let (id, rows) = (table.id, table.plan.rows());
    let what = if table.output.has_rows() {
        "rows"
    } else {
        "ticks in knots"
    };
    let words = format!("{}: table {id}, {rows} {what}", target.display());
    // A device may be standard output under another name.
    let streamed = fs::metadata(target).map_or(true, |found| !found.is_file());
    if !streamed {
        writeln!(streams.stdout, "{words}")?;
    } else if wants_words(common) {
        drop(writeln!(streams.stderr, "{words}"));
    }
    Ok(())
}

/// A table with one row a tick that is longer than any controller plays; the place is the cue in which it gets too long.
fn too_many_rows(plan: &Plan, output: &Output) -> Option<Finding> {
    let rows = plan.rows();
    if rows <= MOST_ROWS || !output.has_rows() {
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
    let help = format!(
        "`--knots` (as pack, c or json) has no such limit; else a `tick` {factor} times as long, or a shorter show, fits"
    );
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
