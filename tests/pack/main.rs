//! The pack form, rows and knots, read back and compared with the row table.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod audit;
mod audit_json;
mod audit_lines;
#[path = "../common/mod.rs"]
mod common;
mod hostile;
mod knots;
mod least;
mod load;
mod rows;
mod storage;
mod sweep;
