//! An independent second look at a table.
//!
//! The auditor reads the bytes of a table and works every row out again from the plan's exact moves, with an evaluator of
//! its own. Where rows are made by exact running sums, it divides; where they are made in integer fixed point, it uses
//! double-double arithmetic and other algebraic forms of the laws. Heads it makes from the rig by itself. A slip in one of
//! the two shows as a difference.
//!
//! What both rest on, and what no audit therefore shows: the plan (where legs start and land, which speeds they have),
//! rational arithmetic, the reader of packs with its checksum, the table's ID, and in a C header the text
//! around the bytes, the player included.
//!
//! [`Auditor`] takes bytes as they come, so it can look at a stream while it is written; [`audit`] reads a whole table.
//! Memory is bounded whatever the length.

mod any;
mod bezier;
mod double;
mod expected;
mod fields;
mod head;
mod header;
mod knots;
mod laws;
pub mod log;
mod pack;
mod pack_head;
mod points;
mod rows;
mod runner;
mod sine;
mod straight;
mod stream;
mod wanted;

pub use any::{TableAuditor, audit_table};
pub use stream::{Auditor, audit};

use std::fmt;

/// Problems kept in full; the rest are counted.
pub const MOST_PROBLEMS: usize = 50;

/// One thing that is not as it must be.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Problem {
    /// The tick of the row, where it is in a row.
    pub tick: Option<u64>,
    /// The column, the key of the head, or the part of the table.
    pub column: String,
    /// What must stand there.
    pub wanted: String,
    /// What stands there.
    pub found: String,
}

impl Problem {
    /// Whether it is in what a table tells about itself (titles, names, fingerprints of the files' text, the program),
    /// and not in its form, nor in anything that is played or that a controller goes by.
    #[must_use]
    pub fn is_told(&self) -> bool {
        let Some(key) = self.column.strip_prefix("head, ") else {
            return false;
        };
        let told = [
            "program",
            "show.title",
            "show.sha256",
            "rig.title",
            "rig.sha256",
        ];
        let of_a_cue = key.starts_with("cues, cue ")
            && [".name", ".figure"].iter().any(|end| key.ends_with(end));
        told.contains(&key) || of_a_cue
    }
}

impl fmt::Display for Problem {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        if let Some(tick) = self.tick {
            write!(out, "tick {tick}, ")?;
        }
        write!(
            out,
            "{}: wanted {}, found {}",
            self.column, self.wanted, self.found
        )
    }
}

/// What an audit came to.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Report {
    /// Rows read.
    pub rows: u64,
    /// The first problems, at most [`MOST_PROBLEMS`], in the order of the table.
    pub problems: Vec<Problem>,
    /// How many there are in all.
    pub count: u64,
    /// How many of them are in what the table tells, see [`Problem::is_told`].
    pub told: u64,
}

impl Report {
    /// Whether nothing is wrong.
    #[must_use]
    pub fn is_clean(&self) -> bool {
        self.count == 0
    }

    fn add(&mut self, problem: Problem) {
        self.count += 1;
        self.told += u64::from(problem.is_told());
        if self.problems.len() < MOST_PROBLEMS {
            self.problems.push(problem);
        }
    }

    fn absorb(&mut self, other: Self) {
        self.rows += other.rows;
        self.count += other.count;
        self.told += other.told;
        let room = MOST_PROBLEMS.saturating_sub(self.problems.len());
        self.problems.extend(other.problems.into_iter().take(room));
    }
}

/// A piece of the table as a message shows it: cut where it is long.
fn shown(bytes: &[u8]) -> String {
    const MOST: usize = 60;
    let text = String::from_utf8_lossy(bytes);
    let mut short: String = text.chars().take(MOST).collect();
    if short.len() < text.len() {
        short.push('…');
    }
    let mut plain = String::with_capacity(short.len() + 2);
    for sign in short.chars() {
        match sign {
            // Half of a table is quotes.
            '"' | '\'' => plain.push(sign),
            sign => plain.extend(sign.escape_debug()),
        }
    }
    format!("`{plain}`")
}
