//! Parse arguments, run one command, render findings, set the exit code.

use phasewright::cli::{self, Streams};
use std::io::{self, BufWriter, IsTerminal, Write};
use std::process::ExitCode;

fn main() -> ExitCode {
    let (stdout, stderr) = (io::stdout(), io::stderr());
    let mut streams = Streams {
        stdout_is_terminal: stdout.is_terminal(),
        stderr_is_terminal: stderr.is_terminal(),
        color_unwanted: color_unwanted(),
        stdin: Box::new(io::stdin()),
        stdout: Box::new(BufWriter::new(stdout)),
        stderr: Box::new(BufWriter::new(stderr)),
    };
    let code = cli::run(std::env::args_os(), &mut streams);
    // Whoever read the output may be gone; there is nobody left to tell.
    drop(streams.stdout.flush());
    drop(streams.stderr.flush());
    ExitCode::from(code)
}

/// Whether the environment asks for no colour: `NO_COLOR` set and not empty, or a terminal that can show none.
fn color_unwanted() -> bool {
    let asked = std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty());
    let dumb = std::env::var_os("TERM").is_some_and(|terminal| terminal == "dumb");
    asked || dumb
}
