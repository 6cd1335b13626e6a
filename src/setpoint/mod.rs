//! Plan → rows, and the forms they are written in.
//!
//! ```text
//! Plan ── Rows ──► Row, one a tick ──► csv / json bytes, pack
//!      ── knots ─► pieces ───────────► json bytes, pack
//!                                      pack ──► C header, with the player
//! ```
//!
//! * [`Rows`] computes the row of any tick from the plan alone, so blocks of ticks are independent of one another;
//! * [`write_table`] computes blocks in parallel and writes them in order; only a handful is ever held;
//! * [`table_id`] names a table whatever its form.

mod beam;
pub mod c_header;
mod digits;
mod events;
mod head;
mod id;
pub mod knots;
mod output;
pub mod pack;
mod rows;
mod sizes;
mod table;
mod track;

pub use head::{Head, JSON_FORMAT, allowance, most_sensitive, program};
pub use id::table_id;
pub use output::Output;
pub use rows::{RotorRow, Row, Rows};
pub use sizes::{Binary, MOST_ROWS, Sizes, sizes};
pub use table::{BLOCK_ROWS, Form, write_table};

/// The columns of a table, in order.
pub const COLUMNS: [&str; 12] = [
    "tick", "time_s", "cue", "a_turns", "b_turns", "a_rpm", "b_rpm", "a_counts", "b_counts",
    "a_step", "b_step", "beam",
];

/// Decimals of the turns columns.
pub const TURN_PLACES: u32 = 12;

/// Decimals of the rpm columns.
pub const RPM_PLACES: u32 = 6;
