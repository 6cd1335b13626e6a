//! Where the findings of one file gather, and how many are kept.

use super::span::Span;
use crate::finding::{Code, FileId, Finding, Place};
use std::collections::BTreeMap;

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
    /// How many there are.
    pub(super) fn len(&self) -> usize {
        self.list.len()
    }
    /// Forgets all past the first `len`: what was found in a stretch that is not of this language.
    pub(super) fn truncate(&mut self, len: usize) {
        self.list.truncate(len);
    }
    /// Whether more were found than are kept.
    pub(super) fn over(&self) -> bool {
        self.over
    }
    /// Several things missing at one place become one finding that names them all: findings of one code at one place are
    /// merged later on, and only the first would be seen.
    fn join_missing(&mut self) {
        let mut first: BTreeMap<Place, usize> = BTreeMap::new();
        let mut joined: Vec<Finding> = Vec::with_capacity(self.list.len());
        for finding in self.list.drain(..) {
            let known = first.get(&finding.place).copied();
            let earlier = known.and_then(|index| joined.get_mut(index));
            match earlier {
                Some(earlier)
                    if finding.code == Code::TextMissing && earlier.message != finding.message =>
                {
                    earlier.message = format!("{}; {}", earlier.message, finding.message);
                    earlier.help = match (earlier.help.take(), finding.help) {
                        (Some(one), Some(two)) if !one.contains(&two) => {
                            Some(format!("{one}; {two}"))
                        }
                        (one, two) => one.or(two),
                    };
                }
                _ => {
                    if finding.code == Code::TextMissing {
                        first.insert(finding.place, joined.len());
                    }
                    joined.push(finding);
                }
            }
        }
        self.list = joined;
    }
    /// All of them; the first says so where there were more than are kept.
    pub(super) fn finish(mut self) -> Vec<Finding> {
        self.join_missing();
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
