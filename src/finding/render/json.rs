//! Findings for programs, in a shape of phasewright's own.
//!
//! One object: `format` (`"phasewright findings"`), `version` (of this shape, 1), `errors`, `warnings`, `notes` (how many
//! findings of each), `left_out` (how many of them are not listed) and `findings`, a list in the order of the text form.
//! Each has `code`, `severity` (`error`, `warning`, `note`), `message`, `count` (how often it was found at this place),
//! `place`, `also` (null, or a place with a `label`) and `help` (null, or a line). A place has `file`, `line`, `column`
//! (from 1, in characters), `end_line`, `end_column` (of the first character after it), `start_byte` and `end_byte`
//! (from 0). Keys may be added; those there keep their meaning while `version` is 1.

use super::{Tally, printed};
use crate::finding::{Finding, Locator, Place, Sources};
use serde::Serialize;
use serde_json::Value;
use std::io::{self, Write};

#[derive(Serialize)]
struct Document<'a> {
    format: &'static str,
    version: u32,
    errors: usize,
    warnings: usize,
    notes: usize,
    left_out: usize,
    findings: Vec<Entry<'a>>,
}

#[derive(Serialize)]
struct Entry<'a> {
    code: &'static str,
    severity: &'static str,
    message: &'a str,
    count: u64,
    place: Where<'a>,
    also: Option<Labelled<'a>>,
    help: Option<&'a str>,
}

#[derive(Serialize)]
struct Where<'a> {
    file: &'a str,
    line: usize,
    column: usize,
    end_line: usize,
    end_column: usize,
    start_byte: usize,
    end_byte: usize,
}

#[derive(Serialize)]
struct Labelled<'a> {
    label: &'a str,
    #[serde(flatten)]
    place: Where<'a>,
}

pub(super) fn write(
    findings: &[Finding],
    sources: &Sources,
    out: &mut dyn Write,
) -> io::Result<()> {
    let locator = Locator::new(sources);
    let tally = Tally::of(findings);
    let (shown, left_out) = printed(findings);
    let document = Document {
        format: "phasewright findings",
        version: 1,
        errors: tally.errors,
        warnings: tally.warnings,
        notes: tally.notes,
        left_out: left_out.total(),
        findings: shown
            .iter()
            .map(|finding| entry(finding, &locator))
            .collect(),
    };
    serde_json::to_writer_pretty(&mut *out, &document)?;
    writeln!(out)
}

/// The findings (the first [`super::MOST_PRINTED`] of them) as the JSON objects of this form's list.
#[must_use]
pub fn values(findings: &[Finding], sources: &Sources) -> Vec<Value> {
    let locator = Locator::new(sources);
    let (shown, _) = printed(findings);
    let entries = shown.iter().map(|finding| entry(finding, &locator));
    // Nothing in an entry can fail to become a value; were it so, the finding would be left out.
    entries
        .filter_map(|entry| serde_json::to_value(entry).ok())
        .collect()
}

fn entry<'a>(finding: &'a Finding, locator: &Locator<'a>) -> Entry<'a> {
    Entry {
        code: finding.code.text(),
        severity: finding.severity.word(),
        message: &finding.message,
        count: finding.count,
        place: place(finding.place, locator),
        also: finding.also.as_ref().map(|(second, label)| Labelled {
            label,
            place: place(*second, locator),
        }),
        help: finding.help.as_deref(),
    }
}

fn place<'a>(place: Place, locator: &Locator<'a>) -> Where<'a> {
    let (start, end) = (locator.start(place), locator.end(place));
    Where {
        file: locator.name(place.file),
        line: start.line,
        column: start.column,
        end_line: end.line,
        end_column: end.column,
        start_byte: place.start,
        end_byte: place.end.max(place.start),
    }
}
