//! How many bytes a table takes in each form.

use super::c_header::header_bytes;
use super::head::Head;
use super::knots::write_json_knots;
use super::pack::{Content, pack_size};
use super::table::{Form, write_table};
use super::table_id;
use crate::plan::Plan;
use std::io::{self, Write};

/// The most rows of a table with one row a tick; knots have no such limit.
pub const MOST_ROWS: u64 = 100_000_000;

/// Rows up to which the forms of text are written out to be measured.
const MOST_ROWS_OF_TEXT: u64 = 2_000_000;

/// Bytes of a table, form by form.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Sizes {
    /// CSV; `None` where nobody would wait for it.
    pub csv: Option<u64>,
    /// JSON, the findings in its head left out; likewise.
    pub json: Option<u64>,
    /// As a pack and as a C header, the player included; `None` where there are more rows than any table may have.
    pub rows: Option<Binary>,
    /// Knots within one count, likewise.
    pub knots: Binary,
    /// Knots within one count: as JSON.
    pub json_knots: Option<u64>,
}

/// Bytes of the forms for controllers.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Binary {
    /// As a pack.
    pub pack: u64,
    /// As a C header.
    pub c: u64,
}

/// The sizes of a plan's table; `name` is the identifier of a C header.
#[must_use]
pub fn sizes(plan: &Plan, name: &str) -> Sizes {
    let id = table_id(plan);
    let head = Head {
        id: &id,
        findings: &[],
    };
    let text = plan.rows() <= MOST_ROWS_OF_TEXT;
    let rows = |form: Form| {
        let mut counted = Counted(0);
        write_table(plan, form, &head, &mut counted, &mut |_| {}).ok()?;
        Some(counted.0)
    };
    let knots = || {
        let mut counted = Counted(0);
        write_json_knots(plan, 1, &head, &mut counted, &mut |_| {}).ok()?;
        Some(counted.0)
    };
    let binary = |content: Content| {
        let pack = pack_size(plan, content);
        Binary {
            pack,
            c: header_bytes(plan, name, pack),
        }
    };
    Sizes {
        csv: text.then(|| rows(Form::Csv)).flatten(),
        json: text.then(|| rows(Form::Json)).flatten(),
        rows: (plan.rows() <= MOST_ROWS).then(|| binary(Content::Rows)),
        knots: binary(Content::Knots(1)),
        json_knots: knots(),
    }
}

/// Counts bytes and keeps none.
struct Counted(u64);

impl Write for Counted {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.0 += bytes.len() as u64;
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}
