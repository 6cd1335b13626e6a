//! Findings on their stream, and the exit code that follows from them.

use super::{CLEAN, Color, Common, ERRORS, Streams};
use crate::finding::render::{self, Form, Tally};
use crate::finding::{Finding, Severity, Sources, ordered};
use std::io;

/// Where findings go.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Target {
    /// Standard output: of `validate`, whose result they are.
    Stdout,
    /// Standard error: of every other command.
    Stderr,
}

/// Findings that have been printed.
#[derive(Clone, Copy, Debug)]
pub(super) struct Verdict {
    /// How many there were, those that `--quiet` leaves out included.
    pub(super) tally: Tally,
    /// What the run exits with: errors, or with `--strict` warnings, make it 1.
    pub(super) code: u8,
}

impl Verdict {
    /// Whether something is wrong enough that nothing is written.
    pub(super) fn stops(self) -> bool {
        self.code != CLEAN
    }
}

/// Orders findings, prints them and judges them.
///
/// # Errors
///
/// What the stream reports.
pub(super) fn report(
    findings: Vec<Finding>,
    sources: &Sources,
    common: &Common,
    target: Target,
    streams: &mut Streams,
) -> io::Result<Verdict> {
    let mut findings = ordered(findings);
    let tally = Tally::of(&findings);
    if common.quiet {
        findings.retain(|finding| finding.severity != Severity::Note);
    }
    let color = uses_color(common, target, streams);
    let out = match target {
        Target::Stdout => &mut streams.stdout,
        Target::Stderr => &mut streams.stderr,
    };
    render::write(common.findings.into(), &findings, sources, color, out)?;
    let fails = tally.errors > 0 || (common.strict && tally.warnings > 0);
    Ok(Verdict {
        tally,
        code: if fails { ERRORS } else { CLEAN },
    })
}

/// Whether a summary in words may be written: not beside findings that a program reads on the same stream.
pub(super) fn wants_words(common: &Common) -> bool {
    !common.quiet && Form::from(common.findings) == Form::Text
}

/// Whether colour is written to a stream.
pub(super) fn uses_color(common: &Common, target: Target, streams: &Streams) -> bool {
    let terminal = match target {
        Target::Stdout => streams.stdout_is_terminal,
        Target::Stderr => streams.stderr_is_terminal,
    };
    match common.color {
        Color::Always => true,
        Color::Never => false,
        Color::Auto => terminal && !streams.color_unwanted,
    }
}
