//! The pack form: a binary table for controllers, rows or knots, described byte by byte in `docs/pack.md`.
//!
//! ```text
//! Plan ──► head
//!      ──► rows  ─► Blocks ──► bytes          each block with its own checksum; a reader can start at any
//!      ──► knots ─► Blocks ──► bytes
//! bytes ──► Reader ──► PackPoint, one a tick    shares no arithmetic with the writer
//! ```

mod blocks;
mod bytes;
mod fault;
mod head;
mod motion;
mod read;
mod write_knots;
mod write_rows;

pub use bytes::{crc32, signed_bytes, unsigned_bytes};
pub use fault::{PackFault, PackPoint};
pub use head::{PackForm, PackHead, PackRotor};
pub use read::Reader;

use super::knots::Tolerance;
use crate::plan::Plan;
use std::io::{self, Write};

/// The version that is written, and the only one that is read.
pub const PACK_VERSION: u8 = 1;

/// Bytes of the largest block that is written; the form allows up to [`MOST_BLOCK_BYTES`].
pub const BLOCK_BYTES: usize = 1024;

/// Bytes of the largest block that the form allows.
pub const MOST_BLOCK_BYTES: usize = 4096;

/// What a pack holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Content {
    /// One row a tick.
    Rows,
    /// Pieces of constant change of speed, within this many counts of the rows.
    Knots(Tolerance),
}

/// Writes the pack form of a plan; `progress` hears the number of ticks written so far now and then.
///
/// Only a few blocks of rows, or a handful of legs, are ever held. The same plan gives the same bytes on every machine.
///
/// # Errors
/// Those of `out`.
pub fn write_pack(
    plan: &Plan,
    content: Content,
    out: &mut dyn Write,
    progress: &mut dyn FnMut(u64),
) -> io::Result<u64> {
    let head = PackHead::of(plan, content);
    let mut blocks = blocks::Blocks::new(head, out);
    match content {
        Content::Rows => write_rows::write(plan, &mut blocks, progress)?,
        Content::Knots(tolerance) => write_knots::write(plan, tolerance, &mut blocks, progress)?,
    }
    blocks.finish()
}

/// Bytes that the pack form of a plan takes.
#[must_use]
pub fn pack_size(plan: &Plan, content: Content) -> u64 {
    // A sink takes everything.
    write_pack(plan, content, &mut io::sink(), &mut |_| {}).unwrap_or(u64::MAX)
}
