//! How many bytes a table takes in each form.

use super::c_header::header_bytes;
use super::head::Head;
use super::knots::write_json_knots;
use super::pack::{Content, pack_size};
use super::table::{Form, write_table};
use super::table_id;
use crate::plan::Plan;
use std::io::{self, Write};

/// Rows up to which the forms of text are written out to be measured.
const MOST_ROWS: u64 = 2_000_000;

/// Bytes of a table, form by form.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Sizes {
    /// CSV.
    pub csv: u64,
    /// JSON, the findings in its head left out.
    pub json: u64,
    /// As a pack.
    pub pack: u64,
    /// As a C header, the player included.
    pub c: u64,
    /// Knots within one count: as a pack.
    pub pack_knots: u64,
    /// Knots within one count: as a C header.
    pub c_knots: u64,
    /// Knots within one count: as JSON.
    pub json_knots: u64,
}

/// The sizes of a plan's table; `None` for a table so long that nobody would wait for them.
#[must_use]
pub fn sizes(plan: &Plan) -> Option<Sizes> {
    if plan.rows() > MOST_ROWS {
        return None;
    }
    let id = table_id(plan);
    let head = Head {
        id: &id,
        findings: &[],
    };
    let rows = |form: Form| {
        let mut counted = Counted(0);
        write_table(plan, form, &head, &mut counted, &mut |_| {}).ok()?;
        Some(counted.0)
    };
    let mut json_knots = Counted(0);
    write_json_knots(plan, 1, &head, &mut json_knots, &mut |_| {}).ok()?;
    let (pack, pack_knots) = (
        pack_size(plan, Content::Rows),
        pack_size(plan, Content::Knots(1)),
    );
    Some(Sizes {
        csv: rows(Form::Csv)?,
        json: rows(Form::Json)?,
        pack,
        c: header_bytes(plan, "show", pack),
        pack_knots,
        c_knots: header_bytes(plan, "show", pack_knots),
        json_knots: json_knots.0,
    })
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
