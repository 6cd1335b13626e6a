//! Every form in which a table can be written.

use super::c_header::write_header;
use super::head::Head;
use super::knots::{Tolerance, write_json_knots};
use super::pack::{Content, write_pack};
use super::table::{Form, write_table};
use crate::plan::Plan;
use std::io::{self, Write};

/// A form, and what it holds.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Output {
    /// CSV or JSON, one line a row.
    Rows(Form),
    /// JSON, one line a piece.
    JsonKnots(Tolerance),
    /// The binary form for controllers.
    Pack(Content),
    /// A C header, with this identifier.
    Header(Content, String),
}

impl Output {
    /// What the pack form of it holds, where it is one for controllers.
    #[must_use]
    pub fn content(&self) -> Option<Content> {
        match self {
            Self::Pack(content) | Self::Header(content, _) => Some(*content),
            Self::Rows(_) | Self::JsonKnots(_) => None,
        }
    }

    /// Whether it has a line, or a byte at least, for every row.
    #[must_use]
    pub fn has_rows(&self) -> bool {
        matches!(
            self,
            Self::Rows(_) | Self::Pack(Content::Rows) | Self::Header(Content::Rows, _)
        )
    }

    /// Writes the table of a plan; `progress` hears the number of ticks written so far now and then.
    ///
    /// The bytes depend on the plan and the head alone: not on the machine, nor on the number of threads.
    ///
    /// # Errors
    /// Those of `out`.
    pub fn write(
        &self,
        plan: &Plan,
        head: &Head<'_>,
        out: &mut dyn Write,
        progress: &mut dyn FnMut(u64),
    ) -> io::Result<()> {
        match self {
            Self::Rows(form) => write_table(plan, *form, head, out, progress),
            Self::JsonKnots(tolerance) => write_json_knots(plan, *tolerance, head, out, progress),
            Self::Pack(content) => write_pack(plan, *content, out, progress).map(drop),
            Self::Header(content, name) => write_header(plan, *content, name, out, progress),
        }
    }
}
