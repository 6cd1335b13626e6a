//! A whole table as bytes: blocks computed in parallel, written in order, never all held.

use super::digits::{Clock, fields};
use super::head::Head;
use super::{COLUMNS, Row, Rows};
use crate::plan::Plan;
use rayon::prelude::{IndexedParallelIterator, IntoParallelRefMutIterator, ParallelIterator};
use std::io::{self, Write};

/// Rows computed at a time by one thread.
pub const BLOCK_ROWS: u64 = 4096;

/// Blocks held at a time, however many threads there are: about 16 MiB of text.
const MOST_BLOCKS: usize = 32;

/// The forms of a set-point table that carry one line of text a row.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Form {
    /// RFC 4180, one header line, LF.
    Csv,
    /// One JSON document: a head, then one line a row.
    Json,
}

impl Form {
    /// The form that a word or a file's ending names: `csv` or `json`.
    #[must_use]
    pub fn from_word(word: &str) -> Option<Self> {
        match word {
            "csv" => Some(Form::Csv),
            "json" => Some(Form::Json),
            _ => None,
        }
    }
}

/// Writes the table of `plan` to `out`; `progress` hears the number of rows written so far after each batch.
///
/// The bytes depend on the plan and the head alone: not on the machine, nor on the number of threads.
///
/// # Errors
/// Those of `out`.
pub fn write_table(
    plan: &Plan,
    form: Form,
    head: &Head<'_>,
    out: &mut dyn Write,
    progress: &mut dyn FnMut(u64),
) -> io::Result<()> {
    match form {
        Form::Csv => {
            out.write_all(COLUMNS.join(",").as_bytes())?;
            out.write_all(b"\n")?;
        }
        Form::Json => head.write(plan, out)?,
    }
    let rows = Rows::new(plan);
    let clock = Clock::new(plan.tick().value());
    let count = rows.count();
    let mut buffers = vec![Vec::new(); (rayon::current_num_threads() * 2).clamp(1, MOST_BLOCKS)];
    let mut first = 0;
    while first < count {
        let blocks = (count - first)
            .div_ceil(BLOCK_ROWS)
            .min(buffers.len() as u64);
        let used = usize::try_from(blocks).unwrap_or(buffers.len());
        buffers
            .par_iter_mut()
            .take(used)
            .enumerate()
            .for_each(|(index, buffer)| {
                buffer.clear();
                let start = first + index as u64 * BLOCK_ROWS;
                let mut line = |row: &Row| match form {
                    Form::Csv => {
                        fields(buffer, &clock, row);
                        buffer.push(b'\n');
                    }
                    Form::Json => {
                        buffer.push(b'[');
                        fields(buffer, &clock, row);
                        let last = row.tick + 1 == count;
                        buffer.extend_from_slice(if last { b"]\n" } else { b"],\n" });
                    }
                };
                rows.each(start..start.saturating_add(BLOCK_ROWS), &mut line);
            });
        for buffer in buffers.iter().take(used) {
            out.write_all(buffer)?;
        }
        first = first.saturating_add(blocks * BLOCK_ROWS).min(count);
        progress(first);
    }
    if form == Form::Json {
        out.write_all(b"]}\n")?;
    }
    Ok(())
}
