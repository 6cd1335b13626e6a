//! Fixed point, sine and root finder against exact rational arithmetic and values computed elsewhere.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod fixed;
mod root;
mod sine;

use phasewright::exact::{Rational, to_f64};

/// Two-sided: |got − want| ≤ tolerance, the difference taken exactly.
#[track_caller]
pub(crate) fn assert_close(got: &Rational, want: &Rational, tolerance: f64, why: &str) {
    let difference = to_f64(&(got - want)).abs();
    assert!(
        difference <= tolerance,
        "{why}: got {:e}, want {:e}, off by {difference:e} > {tolerance:e}",
        to_f64(got),
        to_f64(want)
    );
}

/// 2^exponent.
pub(crate) fn power(exponent: i32) -> f64 {
    2.0_f64.powi(exponent)
}
