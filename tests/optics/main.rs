//! From mirror phases to the wall: published reflections, an independent ray tracer, colours.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod against_a_ray_tracer;
mod checks;
mod colour;
mod path;
mod reflection;
mod show;

/// Both ways: too small fails like too large, and so does no number.
pub(crate) fn assert_close(got: f64, want: f64, tolerance: f64, why: &str) {
    let difference = (got - want).abs();
    assert!(
        difference <= tolerance,
        "{why}: got {got}, want {want}, off by {difference}, allowed {tolerance}"
    );
}
