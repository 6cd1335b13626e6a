//! Findings for people, drawn by miette: where and what, the sentence, the line in question, the second place, help.

use super::excerpt::{Excerpt, printable};
use super::{counted, printed};
use crate::finding::{Finding, Locator, Severity, Sources};
use miette::{
    Diagnostic, GraphicalReportHandler, GraphicalTheme, LabeledSpan, MietteError,
    MietteSpanContents, SourceCode, SourceSpan, SpanContents, ThemeCharacters, ThemeStyles,
};
use std::fmt;
use std::io::{self, Write};

/// Writes each finding, an empty line after each, and the count of those that are left out.
pub(super) fn write(
    findings: &[Finding],
    sources: &Sources,
    color: bool,
    out: &mut dyn Write,
) -> io::Result<()> {
    let locator = Locator::new(sources);
    let handler = handler(color);
    let (shown, left_out) = printed(findings);
    let mut drawn = String::new();
    for finding in shown {
        drawn.clear();
        let report = Report::of(finding, &locator);
        handler
            .render_report(&mut drawn, &report)
            .map_err(io::Error::other)?;
        for line in drawn.lines() {
            writeln!(out, "{}", line.trim_end())?;
        }
        writeln!(out)?;
    }
    if left_out.total() > 0 {
        let more = counted(left_out.total(), "more finding");
        writeln!(out, "{more} not printed: {left_out}\n")?;
    }
    Ok(())
}

fn handler(color: bool) -> GraphicalReportHandler {
    let theme = GraphicalTheme {
        characters: ThemeCharacters::unicode(),
        styles: if color {
            ThemeStyles::ansi()
        } else {
            ThemeStyles::none()
        },
    };
    GraphicalReportHandler::new_themed(theme)
        .with_wrap_lines(false)
        .with_context_lines(0)
        .with_urls(false)
        .without_syntax_highlighting()
}

/// A finding in the form miette draws.
#[derive(Debug)]
struct Report {
    /// `FILE:LINE:COLUMN: error text/unit`.
    head: String,
    message: String,
    help: Option<String>,
    severity: miette::Severity,
    also: Option<String>,
    excerpts: Excerpts,
}

impl Report {
    fn of(finding: &Finding, locator: &Locator<'_>) -> Self {
        let position = locator.start(finding.place);
        let mut head = format!(
            "{}:{}:{}: {} {}",
            printable(locator.name(finding.place.file)),
            position.line,
            position.column,
            finding.severity.word(),
            finding.code.text(),
        );
        if finding.count > 1 {
            head.push_str(&format!(", {} times", finding.count));
        }
        let first = Excerpt::of(locator, finding.place);
        let second = finding
            .also
            .as_ref()
            .and_then(|(place, _)| Excerpt::of(locator, *place));
        Self {
            head,
            message: printable(&finding.message).into_owned(),
            help: finding
                .help
                .as_deref()
                .map(|help| printable(help).into_owned()),
            severity: match finding.severity {
                Severity::Error => miette::Severity::Error,
                Severity::Warning => miette::Severity::Warning,
                Severity::Note => miette::Severity::Advice,
            },
            also: finding
                .also
                .as_ref()
                .map(|(_, label)| printable(label).into_owned()),
            excerpts: Excerpts { first, second },
        }
    }
}

impl fmt::Display for Report {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str(&self.message)
    }
}

impl std::error::Error for Report {}

impl Diagnostic for Report {
    fn code<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        Some(Box::new(&self.head))
    }
    fn severity(&self) -> Option<miette::Severity> {
        Some(self.severity)
    }
    fn help<'a>(&'a self) -> Option<Box<dyn fmt::Display + 'a>> {
        self.help.as_ref().map(|help| Box::new(help) as _)
    }
    fn source_code(&self) -> Option<&dyn SourceCode> {
        Some(&self.excerpts)
    }
    fn labels(&self) -> Option<Box<dyn Iterator<Item = LabeledSpan> + '_>> {
        let first = self.excerpts.first.as_ref().map(|excerpt| {
            LabeledSpan::new_primary_with_span(None, SourceSpan::from(excerpt.marked.clone()))
        });
        let second = self.excerpts.second.as_ref().map(|excerpt| {
            let base = self.excerpts.second_base();
            let marked = excerpt.marked.start + base..excerpt.marked.end + base;
            LabeledSpan::new_with_span(self.also.clone(), SourceSpan::from(marked))
        });
        Some(Box::new(first.into_iter().chain(second)))
    }
}

/// Up to two excerpts, laid one after the other in a space of bytes of their own.
///
/// miette reads a whole source for every look at a place; these two short lines are all it ever sees,
/// whatever the size of the file.
#[derive(Debug)]
struct Excerpts {
    /// The place of the finding; its name is left out, since it stands in the head.
    first: Option<Excerpt>,
    /// The second place.
    second: Option<Excerpt>,
}

impl Excerpts {
    /// The byte at which the second excerpt starts: not next to the first, so that no mark can reach over.
    fn second_base(&self) -> usize {
        self.first.as_ref().map_or(0, |first| first.shown.len() + 1)
    }
}

impl SourceCode for Excerpts {
    fn read_span<'a>(
        &'a self,
        span: &SourceSpan,
        _lines_before: usize,
        _lines_after: usize,
    ) -> Result<Box<dyn SpanContents<'a> + 'a>, MietteError> {
        let base = self.second_base();
        let in_second = span.offset() >= base;
        let (excerpt, base) = if in_second {
            (&self.second, base)
        } else {
            (&self.first, 0)
        };
        let excerpt = excerpt.as_ref().ok_or(MietteError::OutOfBounds)?;
        let length = excerpt.shown.len();
        // A span over both is refused, which keeps miette from drawing them as one.
        if span.offset() + span.len() > base + length {
            return Err(MietteError::OutOfBounds);
        }
        let data = excerpt.shown.as_bytes();
        let whole = SourceSpan::from((base, length));
        let (line, column) = (excerpt.position.line - 1, excerpt.position.column - 1);
        Ok(Box::new(if in_second {
            let name = printable(&excerpt.name).into_owned();
            MietteSpanContents::new_named(name, data, whole, line, column, 1)
        } else {
            MietteSpanContents::new(data, whole, line, column, 1)
        }))
    }
}
