//! Text → syntax tree → resolved rig and show, with every finding of the text.
//!
//! ```text
//! text ── outline ──▶ statements and blocks ── grammar ──▶ syntax tree ── names, usual, repeat ──▶ Show
//!                                                      └─▶ fields ── like, defaults ──────────────▶ Rig
//! ```
//!
//! The grammars stand in `grammar/`. [`outline`] cuts the text into statements and matches the braces; each statement is
//! then read by the rule that its first word names, so that a broken one ends with its (continued) line, all others are
//! still read, and no input makes the reader recurse deeper than blocks may be nested.

mod clauses;
mod diagnose;
mod figures;
mod findings;
mod grammar;
mod law;
mod length;
mod merge;
mod names;
mod nearest;
mod number;
mod outline;
mod reader;
mod resolve;
mod rig;
mod script;
mod span;
mod tree;
mod unfold;
mod unit;

use crate::finding::Code;
use findings::Findings;
use span::Span;

pub use resolve::resolve_show;
pub use rig::read_rig;
pub use script::{ShowScript, parse_show};

/// The largest file that is read.
pub const MOST_FILE_BYTES: u64 = 8 * 1024 * 1024;
/// The most cues of a show, `repeat` and `play` unfolded.
pub const MOST_CUES: usize = 1_000_000;
/// The longest show, in days.
pub const MOST_DAYS: u64 = 30;

/// The names that a figure has without a definition.
pub fn figure_names() -> impl Iterator<Item = &'static str> {
    figures::names()
}

/// The words of the laws.
#[must_use]
pub fn law_words() -> &'static [&'static str] {
    &diagnose::LAWS
}

/// The length of the byte-order mark that `text` begins with; 0 without one.
fn byte_order_mark(text: &str) -> usize {
    if text.starts_with('\u{feff}') {
        '\u{feff}'.len_utf8()
    } else {
        0
    }
}

/// Whether `text` is larger than a file may be; reported if so.
fn too_large(text: &str, findings: &mut Findings) -> bool {
    let large = text.len() as u64 > MOST_FILE_BYTES;
    if large {
        let mib = MOST_FILE_BYTES / (1024 * 1024);
        findings.add(
            Code::TextTooMuch,
            Span::new(0, 0),
            format!("this file is larger than {mib} MiB"),
        );
    }
    large
}
