//! The commands, one file each; no mathematics here.
//!
//! | exit code | when |
//! | --- | --- |
//! | 0 | done; there may be warnings, unless `--strict` |
//! | 1 | errors (with `--strict`, warnings too), or something could not be read or written |
//! | 2 | wrong usage |

mod atlas;
mod audit;
mod compile;
mod deliver;
mod explain;
mod folder;
mod known;
mod load;
mod preview;
mod progress;
mod report;
mod runsheet;
mod validate;
mod verdict;

use crate::finding::render::Form as FindingsForm;
use clap::error::ErrorKind;
use clap::{Args, CommandFactory, Parser, Subcommand, ValueEnum};
use std::ffi::OsString;
use std::io::{self, Read, Write};
use std::path::PathBuf;

/// The exit code of a run without errors.
pub const CLEAN: u8 = 0;
/// The exit code of a run with errors.
pub const ERRORS: u8 = 1;
/// The exit code of wrong usage.
pub const USAGE: u8 = 2;

/// Standard input, output and error, and what is known of them; opened in `main`.
pub struct Streams {
    /// Standard input.
    pub stdin: Box<dyn Read>,
    /// Standard output.
    pub stdout: Box<dyn Write>,
    /// Standard error.
    pub stderr: Box<dyn Write>,
    /// Whether standard output is a terminal.
    pub stdout_is_terminal: bool,
    /// Whether standard error is a terminal.
    pub stderr_is_terminal: bool,
    /// Whether the environment asks for no colour.
    pub color_unwanted: bool,
}

/// Compiles a plain-text cue script for two spinning mirrors and a laser into a verified set-point table.
#[derive(Debug, Parser)]
#[command(name = "phasewright", version, arg_required_else_help = true)]
struct Arguments {
    #[command(subcommand)]
    command: Command,
    #[command(flatten)]
    common: Common,
}

/// Options of every command.
#[derive(Args, Debug)]
struct Common {
    /// Take this rig file instead of the one the show names
    #[arg(long, global = true, value_name = "FILE")]
    rig: Option<PathBuf>,
    /// Treat warnings as errors: exit code 1, nothing written
    #[arg(long, global = true)]
    strict: bool,
    /// How findings are written
    #[arg(long, global = true, value_name = "FORM", default_value = "text")]
    findings: Findings,
    /// Leave out notes, summary and progress
    #[arg(long, short, global = true)]
    quiet: bool,
    /// Colour in findings; `auto`: on a terminal, unless NO_COLOR is set
    #[arg(long, global = true, value_name = "WHEN", default_value = "auto")]
    color: Color,
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum Findings {
    /// For people
    Text,
    /// For programs
    Json,
    /// SARIF 2.1.0, for viewers and continuous integration
    Sarif,
}

impl From<Findings> for FindingsForm {
    fn from(findings: Findings) -> Self {
        match findings {
            Findings::Text => Self::Text,
            Findings::Json => Self::Json,
            Findings::Sarif => Self::Sarif,
        }
    }
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
enum Color {
    Auto,
    Always,
    Never,
}

#[derive(Debug, Subcommand)]
enum Command {
    Validate(validate::Validate),
    Compile(compile::Compile),
    Preview(preview::Preview),
    Runsheet(runsheet::Runsheet),
    Audit(audit::Audit),
    Atlas(atlas::Atlas),
    Explain(explain::Explain),
}

/// Why a command stopped before its end.
#[derive(Debug)]
enum Failure {
    /// Wrong usage, in one sentence.
    Usage(String),
    /// Something could not be done, in one sentence.
    Cannot(String),
    /// Whoever read standard output is gone.
    Pipe,
}

impl From<io::Error> for Failure {
    /// For errors while writing to standard output.
    fn from(error: io::Error) -> Self {
        if error.kind() == io::ErrorKind::BrokenPipe {
            Failure::Pipe
        } else {
            Failure::Cannot(format!("cannot write to standard output: {error}"))
        }
    }
}

/// Runs one command line, program name first, and returns the exit code.
pub fn run(arguments: impl IntoIterator<Item = OsString>, streams: &mut Streams) -> u8 {
    let arguments = match Arguments::try_parse_from(compile::joined_knots(arguments)) {
        Ok(arguments) => arguments,
        // Help and version come this way too, with exit code 0.
        Err(answer) => {
            drop(answer.print());
            return u8::try_from(answer.exit_code()).unwrap_or(USAGE);
        }
    };
    let common = &arguments.common;
    let result = match &arguments.command {
        Command::Validate(command) => command.run(common, streams),
        Command::Compile(command) => command.run(common, streams),
        Command::Preview(command) => command.run(common, streams),
        Command::Runsheet(command) => command.run(common, streams),
        Command::Audit(command) => command.run(common, streams),
        Command::Atlas(command) => command.run(common, streams),
        Command::Explain(command) => command.run(streams),
    };
    let result = result.and_then(|code| {
        streams.stdout.flush()?;
        Ok(code)
    });
    match result {
        Ok(code) => code,
        Err(Failure::Pipe) => ERRORS,
        Err(Failure::Cannot(sentence)) => {
            drop(writeln!(streams.stderr, "phasewright: {sentence}"));
            ERRORS
        }
        Err(Failure::Usage(sentence)) => {
            let error = Arguments::command().error(ErrorKind::ValueValidation, sentence);
            drop(error.print());
            USAGE
        }
    }
}
