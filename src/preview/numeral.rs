//! Numbers as JSON writes them for the page.

use serde::{Serialize, Serializer};

/// A number to be read: ten significant digits.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Figure(pub f64);

/// A number to compute with: all its digits, since a day of turns multiplies what is left out.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Precise(pub f64);

impl Serialize for Figure {
    fn serialize<S: Serializer>(&self, to: S) -> Result<S::Ok, S::Error> {
        let rounded: f64 = format!("{:.9e}", self.0).parse().unwrap_or(0.0);
        short(rounded, to)
    }
}

impl Serialize for Precise {
    fn serialize<S: Serializer>(&self, to: S) -> Result<S::Ok, S::Error> {
        short(self.0, to)
    }
}

/// The shortest digits that read back as the same number; a whole number has no point.
fn short<S: Serializer>(value: f64, to: S) -> Result<S::Ok, S::Error> {
    #[expect(
        clippy::cast_possible_truncation,
        clippy::float_cmp,
        reason = "whole numbers are written without a point; below 2⁵³ none is cut"
    )]
    if libm::trunc(value) == value && value.abs() < 9e15 {
        to.serialize_i64(value as i64)
    } else {
        to.serialize_f64(value)
    }
}
