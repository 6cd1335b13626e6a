//! Where the findings of one file gather, and how many are kept.

use super::span::Span;
use crate::finding::{Code, FileId, Finding, Place};

/// How many findings of one file are kept; a file with more is no script, and reading it stops.
pub(super) const MOST_FINDINGS: usize = 10_000;

/// The findings of one file in one stage.
pub(super) struct Findings {
    file: FileId,
    list: Vec<Finding>,
    over: bool,
}

impl Findings {
    pub(super) fn new(file: FileId) -> Self {
        Self {
            file,
            list: Vec::new(),
            over: false,
        }
    }
    pub(super) fn place(&self, span: Span) -> Place {
        span.place(self.file)
    }
    /// Adds one, unless there are too many already.
    pub(super) fn push(&mut self, finding: Finding) {
        if self.list.len() < MOST_FINDINGS {
            self.list.push(finding);
        } else {
            self.over = true;
        }
    }
    /// Adds one with nothing but its sentence.
    pub(super) fn add(&mut self, code: Code, span: Span, message: impl Into<String>) {
        let finding = Finding::new(code, self.place(span), message);
        self.push(finding);
    }
    /// Adds one with its help.
    pub(super) fn add_help(
        &mut self,
        code: Code,
        span: Span,
        message: impl Into<String>,
        help: impl Into<String>,
    ) {
        let finding = Finding::new(code, self.place(span), message).help(help);
        self.push(finding);
    }
    /// Adds "given twice", with the place of the first.
    pub(super) fn twice(&mut self, span: Span, first: Span, what: &str) {
        let finding = Finding::new(
            Code::TextDuplicate,
            self.place(span),
            format!("{what} is given twice"),
        )
        .also(self.place(first), "first given here")
        .help("keep one of the two");
        self.push(finding);
    }
    /// Whether more were found than are kept.
    pub(super) fn over(&self) -> bool {
        self.over
    }
    /// All of them; the first says so where there were more than are kept.
    pub(super) fn finish(mut self) -> Vec<Finding> {
        if self.over {
            let start = Span::new(0, 0);
            let finding = Finding::new(
                Code::TextTooMuch,
                self.place(start),
                format!(
                    "more than {MOST_FINDINGS} errors in this file; it is not read any further"
                ),
            )
            .help("mend the first ones, or look whether this is the right file");
            self.list.insert(0, finding);
        }
        self.list
    }
}
