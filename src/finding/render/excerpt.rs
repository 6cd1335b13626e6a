//! What is shown of a file for a place in it: one line, or a window of a long one, safe to print on a terminal.

use crate::finding::lines::boundary_before;
use crate::finding::{Locator, Place, Position};
use std::borrow::Cow;
use std::ops::Range;

/// Characters of a line that are shown at most, the marks of a cut not counted.
const WINDOW: usize = 120;
/// Characters of a long line that are shown before the place.
const LEAD: usize = 40;
/// Stands where a line was cut.
const CUT: char = '…';

/// One line of a file with a place in it.
#[derive(Debug)]
pub(super) struct Excerpt {
    /// The file's name.
    pub(super) name: String,
    /// Where the place begins.
    pub(super) position: Position,
    /// What is shown, always one sign longer than the line, so that the end of a line can be pointed at.
    pub(super) shown: String,
    /// The bytes of `shown` that belong to the place; of the first line only, where it has several.
    pub(super) marked: Range<usize>,
}

impl Excerpt {
    /// The excerpt for a place; `None` where the file has no text to show.
    pub(super) fn of(locator: &Locator<'_>, place: Place) -> Option<Self> {
        let text = locator.text(place.file);
        if text.is_empty() {
            return None;
        }
        let start = boundary_before(text, place.start);
        let (_, line_start) = locator.line_of(place.file, start);
        let line = locator.line_from(place.file, line_start);
        // A place may begin at the line end itself, which is not shown.
        let from = (start - line_start).min(line.len());
        let end = boundary_before(text, place.end).saturating_sub(line_start);
        let to = end.clamp(from, line.len());
        let (shown, marked) = window(line, from..to);
        Some(Self {
            name: locator.name(place.file).to_owned(),
            position: locator.start(place),
            shown,
            marked,
        })
    }
}

/// At most [`WINDOW`] characters of `line` around the bytes `place`, made printable, and where the place is in them.
fn window(line: &str, place: Range<usize>) -> (String, Range<usize>) {
    let (before, rest) = line.split_at(place.start);
    let fits = line.chars().nth(WINDOW).is_none();
    let first = if fits {
        0
    } else {
        // The LEAD-th character from the end of what stands before the place.
        let lead = before.char_indices().rev().nth(LEAD - 1);
        lead.map_or(0, |(at, _)| at)
    };
    let mut shown = String::new();
    if first > 0 {
        shown.push(CUT);
    }
    push_printable(&mut shown, before.get(first..).unwrap_or_default());
    let mark_start = shown.len();
    let mut mark_end = mark_start;
    let room = WINDOW.saturating_sub(before.get(first..).unwrap_or_default().chars().count());
    let mut room_left = if fits { usize::MAX } else { room };
    for (at, sign) in rest.char_indices() {
        if room_left == 0 {
            shown.push(CUT);
            break;
        }
        room_left -= 1;
        shown.push(printable_sign(sign));
        if at + place.start < place.end {
            mark_end = shown.len();
        }
    }
    shown.push(' ');
    (shown, mark_start..mark_end)
}

fn push_printable(out: &mut String, text: &str) {
    out.extend(text.chars().map(printable_sign));
}

/// `text` with nothing in it that could steer a terminal or turn the direction of writing.
#[must_use]
pub fn printable(text: &str) -> Cow<'_, str> {
    if text
        .chars()
        .all(|sign| printable_sign(sign) == sign && sign != '\t')
    {
        return Cow::Borrowed(text);
    }
    let space_for_tab = |sign| {
        if sign == '\t' {
            ' '
        } else {
            printable_sign(sign)
        }
    };
    Cow::Owned(text.chars().map(space_for_tab).collect())
}

/// A sign as it may be printed: control signs as their Unicode control pictures, tabs kept for the renderer to widen.
fn printable_sign(sign: char) -> char {
    match sign {
        '\t' => '\t',
        '\0'..='\u{1f}' => char::from_u32(0x2400 + u32::from(sign)).unwrap_or('\u{fffd}'),
        '\u{7f}' => '\u{2421}',
        // C1 controls, line and paragraph separators, everything that turns the direction of writing, invisible marks.
        '\u{80}'..='\u{9f}'
        | '\u{200b}'..='\u{200f}'
        | '\u{2028}'..='\u{202e}'
        | '\u{2060}'..='\u{206f}'
        | '\u{feff}' => '\u{fffd}',
        sign => sign,
    }
}
