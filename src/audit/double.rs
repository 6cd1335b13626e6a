//! Double-double arithmetic: a number as the unevaluated sum of two `f64`, about 106 bits.
//!
//! Sources: the exact sum of two floats is D. E. Knuth, *The Art of Computer Programming*, vol. 2, section 4.2.2; the exact
//! product by splitting, and the sum and product of pairs, are T. J. Dekker, "A floating-point technique for extending
//! the available precision", *Numerische Mathematik* 18 (1971). Their relative errors, a few 2⁻¹⁰⁴, are those of
//! Y. Hida, X. S. Li, D. H. Bailey, "Algorithms for quad-double precision floating point arithmetic" (2001). Only `+`,
//! `−`, `×` and `/` of IEEE 754 are used, so results are the same on every machine.

use crate::exact::{Rational, from_f64, to_f64};
use std::ops::{Add, Div, Mul, Neg, Sub};

/// `high + low` with |low| at most half a unit in the last place of high.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Double {
    high: f64,
    low: f64,
}

/// a + b exactly, as rounded sum and error.
#[inline]
fn two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    let b_part = sum - a;
    (sum, (a - (sum - b_part)) + (b - b_part))
}

/// The same where |a| ≥ |b|.
#[inline]
fn quick_two_sum(a: f64, b: f64) -> (f64, f64) {
    let sum = a + b;
    (sum, b - (sum - a))
}

/// a in two halves of 26 bits.
#[inline]
fn split(a: f64) -> (f64, f64) {
    const SPLITTER: f64 = 134_217_729.0; // 2²⁷ + 1
    let scaled = SPLITTER * a;
    let high = scaled - (scaled - a);
    (high, a - high)
}

/// a · b exactly, as rounded product and error.
#[inline]
fn two_product(a: f64, b: f64) -> (f64, f64) {
    let product = a * b;
    let (a_high, a_low) = split(a);
    let (b_high, b_low) = split(b);
    let error = ((a_high * b_high - product) + a_high * b_low + a_low * b_high) + a_low * b_low;
    (product, error)
}

impl Double {
    pub(super) const ZERO: Self = Self::new(0.0);
    pub(super) const ONE: Self = Self::new(1.0);
    /// π to 107 bits.
    pub(super) const PI: Self = Self {
        high: std::f64::consts::PI,
        low: 1.224_646_799_147_353_2e-16,
    };

    pub(super) const fn new(value: f64) -> Self {
        Self {
            high: value,
            low: 0.0,
        }
    }

    /// The nearest pair to an exact number.
    pub(super) fn from_rational(value: &Rational) -> Self {
        let high = to_f64(value);
        let low = from_f64(high).map_or(0.0, |high| to_f64(&(value - high)));
        let (high, low) = quick_two_sum(high, low);
        Self { high, low }
    }

    /// A whole number below 2¹⁰⁶, exactly.
    pub(super) fn from_whole(value: u64) -> Self {
        let high = (value >> 32) as f64 * 4_294_967_296.0;
        let (high, low) = two_sum(high, (value & 0xffff_ffff) as f64);
        Self { high, low }
    }

    /// The leading half, for bounds and comparisons.
    pub(super) fn leading(self) -> f64 {
        self.high
    }

    pub(super) fn squared(self) -> Self {
        self * self
    }

    /// Times a power of two, exactly.
    pub(super) fn scaled(self, power_of_two: f64) -> Self {
        Self {
            high: self.high * power_of_two,
            low: self.low * power_of_two,
        }
    }

    /// Whole part (towards −∞) and the rest in [0, 1). The whole part must lie within ±2¹²⁶.
    pub(super) fn floor(self) -> (i128, Self) {
        let mut whole = self.high.floor();
        let mut rest = self - Self::new(whole);
        let below = rest.high.floor();
        rest = rest - Self::new(below);
        // At most one whole number is missing now, where `low` reaches over an edge.
        if rest.high < 0.0 {
            rest = rest + Self::ONE;
            whole -= 1.0;
        }
        (whole as i128 + below as i128, rest)
    }
}

impl Add for Double {
    type Output = Self;
    #[inline]
    fn add(self, other: Self) -> Self {
        let (high, error) = two_sum(self.high, other.high);
        let (low, low_error) = two_sum(self.low, other.low);
        let (high, error) = quick_two_sum(high, error + low);
        let (high, low) = quick_two_sum(high, error + low_error);
        Self { high, low }
    }
}

impl Sub for Double {
    type Output = Self;
    #[inline]
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Neg for Double {
    type Output = Self;
    #[inline]
    fn neg(self) -> Self {
        Self {
            high: -self.high,
            low: -self.low,
        }
    }
}

impl Mul for Double {
    type Output = Self;
    #[inline]
    fn mul(self, other: Self) -> Self {
        let (product, error) = two_product(self.high, other.high);
        let cross = self.high * other.low + self.low * other.high;
        let (high, low) = quick_two_sum(product, error + cross);
        Self { high, low }
    }
}

impl Mul<f64> for Double {
    type Output = Self;
    #[inline]
    fn mul(self, other: f64) -> Self {
        let (product, error) = two_product(self.high, other);
        let (high, low) = quick_two_sum(product, error + self.low * other);
        Self { high, low }
    }
}

impl Div for Double {
    type Output = Self;
    #[inline]
    fn div(self, other: Self) -> Self {
        let first = self.high / other.high;
        let rest = self - other * first;
        let second = rest.high / other.high;
        let rest = rest - other * second;
        let third = rest.high / other.high;
        let (high, low) = quick_two_sum(first, second);
        Self { high, low } + Self::new(third)
    }
}

#[cfg(test)]
mod tests {
    use super::Double;
    use crate::exact::{Rational, from_f64, ratio};
    use num_traits::Signed;

    fn exact(value: Double) -> Rational {
        from_f64(value.high).unwrap_or_default() + from_f64(value.low).unwrap_or_default()
    }

    fn near(got: Double, want: &Rational) {
        let bound = want.abs() * ratio(1, 1 << 102);
        let error = (exact(got) - want).abs();
        assert!(error <= bound, "{got:?} against {want}");
    }

    #[test]
    fn every_operation_against_exact_rationals() {
        // A congruential sequence (Knuth's MMIX constants) gives numerators and denominators of all sizes.
        let mut state = 7_u64;
        let mut next = || {
            state = state
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            i128::from(state >> (state % 50))
        };
        for _ in 0..500 {
            let a = ratio(next() - next() / 2, 1 + next());
            let b = ratio(1 + next(), 1 + next());
            let (x, y) = (Double::from_rational(&a), Double::from_rational(&b));
            near(x, &a);
            let (a, b) = (exact(x), exact(y));
            near(x * y, &(&a * &b));
            near(x / y, &(&a / &b));
            // Same sign: the relative error of a sum is bounded.
            near(Double::from_rational(&a.abs()) + y, &(a.abs() + &b));
            let (whole, rest) = (x * y).floor();
            let product = exact(x * y);
            assert_eq!(product.floor().to_integer(), whole.into());
            near(
                rest + Double::ONE,
                &(&product - product.floor() + ratio(1, 1)),
            );
        }
    }
}
