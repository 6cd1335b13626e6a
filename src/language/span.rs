//! Stretches of one file's text, small enough to stand in every node of a syntax tree.

use crate::finding::{FileId, Place};

/// A stretch of the text, in bytes from the start of the file.
///
/// Four bytes each are enough: a file past [`super::MOST_FILE_BYTES`] is not read.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Span {
    pub(super) start: u32,
    pub(super) end: u32,
}

impl Span {
    pub(super) fn new(start: usize, end: usize) -> Self {
        let narrow = |at| u32::try_from(at).unwrap_or(u32::MAX);
        Self {
            start: narrow(start),
            end: narrow(end),
        }
    }
    pub(super) fn place(self, file: FileId) -> Place {
        Place {
            file,
            start: self.start as usize,
            end: self.end as usize,
        }
    }
    /// The text of it; empty where it does not lie in `text`, which no span of that text does.
    pub(super) fn of(self, text: &str) -> &str {
        text.get(self.start as usize..self.end as usize)
            .unwrap_or_default()
    }
    pub(super) fn len(self) -> usize {
        self.end.saturating_sub(self.start) as usize
    }
}

/// A value and the stretch of text that gives it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Spanned<T> {
    pub(super) value: T,
    pub(super) span: Span,
}

impl<T> Spanned<T> {
    pub(super) fn new(value: T, span: Span) -> Self {
        Self { value, span }
    }
}
