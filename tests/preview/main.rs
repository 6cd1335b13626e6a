//! Pictures, the scene for the page, and what the commands leave on the disk.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod light;
mod look;
mod pictures;
mod scene;
#[path = "../optics/show.rs"]
mod show;
