//! The one place where findings become something to read: text for people, JSON and SARIF for programs.
//!
//! All three print at most [`MOST_PRINTED`] findings and say how many they leave out.

mod excerpt;
mod json;
mod sarif;
mod text;

pub use excerpt::printable;
pub use json::values as json_values;

use super::{Finding, Severity, Sources};
use std::io::{self, Write};

/// The most findings that are printed in one run; the others are counted.
pub const MOST_PRINTED: usize = 1000;

/// How findings are rendered.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Form {
    /// For people, with an excerpt of each place.
    #[default]
    Text,
    /// phasewright's own JSON: one object with `format` (`"phasewright findings"`), `version` (1), `errors`, `warnings`,
    /// `notes`, `left_out` and `findings`; see `docs/commands.md`.
    Json,
    /// SARIF 2.1.0, the OASIS standard for results of checkers.
    Sarif,
}

/// Writes findings, which must be in the order of [`super::ordered`].
///
/// Text writes nothing where there are none; JSON and SARIF always write one whole document, ending in a line end.
///
/// # Errors
///
/// What `out` reports.
pub fn write(
    form: Form,
    findings: &[Finding],
    sources: &Sources,
    color: bool,
    out: &mut dyn Write,
) -> io::Result<()> {
    match form {
        Form::Text => text::write(findings, sources, color, out),
        Form::Json => json::write(findings, sources, out),
        Form::Sarif => sarif::write(findings, sources, out),
    }
}

/// How many findings there are of each severity; those merged into one count once.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Tally {
    /// Findings that keep the table from being written.
    pub errors: usize,
    /// Findings that someone should look at.
    pub warnings: usize,
    /// Good to know.
    pub notes: usize,
}

impl Tally {
    /// Counts findings.
    #[must_use]
    pub fn of(findings: &[Finding]) -> Self {
        let mut tally = Self::default();
        for finding in findings {
            match finding.severity {
                Severity::Error => tally.errors += 1,
                Severity::Warning => tally.warnings += 1,
                Severity::Note => tally.notes += 1,
            }
        }
        tally
    }
    /// How many there are of any severity.
    #[must_use]
    pub fn total(self) -> usize {
        self.errors + self.warnings + self.notes
    }
}

impl std::fmt::Display for Tally {
    /// `2 errors, 1 warning`; what there is none of is not mentioned, nothing at all is `no findings`.
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        let counts = [
            (self.errors, Severity::Error),
            (self.warnings, Severity::Warning),
            (self.notes, Severity::Note),
        ];
        let words: Vec<String> = counts
            .iter()
            .filter(|(count, _)| *count > 0)
            .map(|(count, severity)| counted(*count, severity.word()))
            .collect();
        if words.is_empty() {
            write!(out, "no findings")
        } else {
            write!(out, "{}", words.join(", "))
        }
    }
}

/// `1 warning`, `2 warnings`.
#[must_use]
pub fn counted(count: usize, word: &str) -> String {
    let plural = if count == 1 { "" } else { "s" };
    format!("{count} {word}{plural}")
}

/// The findings that are printed, and the tally of those that are left out.
fn printed(findings: &[Finding]) -> (&[Finding], Tally) {
    let (shown, rest) = findings.split_at(findings.len().min(MOST_PRINTED));
    (shown, Tally::of(rest))
}
