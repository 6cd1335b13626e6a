//! The C player against the rows: on the host under sanitizers, on an emulated Cortex-M, built for an 8-bit chip; and a
//! reader in Python written from the page of the pack form.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::print_stderr,
    reason = "tests say what they skip and what they measure"
)]

#[path = "../pack/load.rs"]
mod load;

mod avr;
mod chips;
mod edges;
mod host;
mod python;
mod sketches;
mod stop;
mod tables;
mod tools;
