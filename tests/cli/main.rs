//! The built program as its users meet it: standard output, standard error and exit status of each run.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod audit;
mod audit_tables;
mod builder;
mod compile;
mod controllers;
mod explain;
mod inputs;
mod pages;
mod preview;
mod runsheet;
#[path = "../common/steady.rs"]
mod steady;
mod streams;
mod usage;
mod validate;
