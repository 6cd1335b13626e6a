//! From bytes to lines and columns: where a [`Place`] stands in its file, as a person counts.

use super::{FileId, Place, Source, Sources};
use std::cell::OnceCell;

/// A position as editors show it: both count from 1, columns in characters (Unicode scalar values).
///
/// A byte-order mark at the start of a file is not counted.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Position {
    /// Line, from 1.
    pub line: usize,
    /// Column in characters, from 1.
    pub column: usize,
}

/// The byte-order mark, which readers skip.
const BYTE_ORDER_MARK: char = '\u{feff}';

/// Finds the position of places; makes the list of line starts of a file when it is first asked for one.
#[derive(Debug)]
pub struct Locator<'a> {
    files: Vec<Located<'a>>,
}

#[derive(Debug)]
struct Located<'a> {
    source: &'a Source,
    starts: OnceCell<Vec<usize>>,
}

impl<'a> Locator<'a> {
    /// A locator for the files of a run.
    #[must_use]
    pub fn new(sources: &'a Sources) -> Self {
        let located = |source| Located {
            source,
            starts: OnceCell::new(),
        };
        Self {
            files: sources.files.iter().map(located).collect(),
        }
    }
    /// The name by which the user knows a file.
    #[must_use]
    pub fn name(&self, file: FileId) -> &'a str {
        self.located(file).map_or("?", |found| &found.source.name)
    }
    /// The whole text of a file; empty where it could not be read.
    #[must_use]
    pub fn text(&self, file: FileId) -> &'a str {
        self.located(file).map_or("", |found| &found.source.text)
    }
    /// Where a place begins.
    #[must_use]
    pub fn start(&self, place: Place) -> Position {
        self.position(place.file, place.start)
    }
    /// Where a place ends: the position of the first character after it.
    #[must_use]
    pub fn end(&self, place: Place) -> Position {
        self.position(place.file, place.end.max(place.start))
    }
    /// The position of a byte; of the end of the file, where the byte is past it.
    #[must_use]
    pub fn position(&self, file: FileId, byte: usize) -> Position {
        let text = self.text(file);
        let byte = boundary_before(text, byte);
        let (line, start) = self.line_of(file, byte);
        let before = text.get(start..byte).unwrap_or_default();
        Position {
            line,
            column: before
                .chars()
                .filter(|sign| *sign != BYTE_ORDER_MARK)
                .count()
                + 1,
        }
    }
    /// The line (from 1) in which a byte stands, and the byte at which that line starts.
    #[must_use]
    pub fn line_of(&self, file: FileId, byte: usize) -> (usize, usize) {
        let starts = self.starts(file);
        let line = starts.partition_point(|start| *start <= byte).max(1);
        (line, starts.get(line - 1).copied().unwrap_or_default())
    }
    /// The text of the line that starts at a byte, without its line end.
    #[must_use]
    pub fn line_from(&self, file: FileId, start: usize) -> &'a str {
        let rest = self.text(file).get(start..).unwrap_or_default();
        let line = rest.split('\n').next().unwrap_or_default();
        line.strip_suffix('\r').unwrap_or(line)
    }

    fn located(&self, file: FileId) -> Option<&Located<'a>> {
        self.files.get(usize::from(file.0))
    }
    fn starts(&self, file: FileId) -> &[usize] {
        self.located(file).map_or(&[], |found| {
            found.starts.get_or_init(|| line_starts(&found.source.text))
        })
    }
}

/// The bytes at which lines start; never empty.
fn line_starts(text: &str) -> Vec<usize> {
    let after_ends = text.bytes().enumerate().filter(|(_, byte)| *byte == b'\n');
    std::iter::once(0)
        .chain(after_ends.map(|(at, _)| at + 1))
        .collect()
}

/// `byte`, or the nearest byte before it at which a character of `text` starts or the text ends.
#[must_use]
pub(crate) fn boundary_before(text: &str, byte: usize) -> usize {
    let mut byte = byte.min(text.len());
    while !text.is_char_boundary(byte) {
        byte -= 1;
    }
    byte
}
