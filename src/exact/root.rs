//! The parameter of a rising cubic, in fixed point of any size: the one root finder on the way to an output.
//!
//! Numbers are [`BigInt`] counts of 2⁻²⁵⁶ ([`ROOT_BITS`]), for values of any size.

use super::Rational;
use super::fixed::scaled;
use num_bigint::BigInt;
use num_traits::{Signed, ToPrimitive, Zero};

/// Bits after the point of the numbers here.
pub const ROOT_BITS: u32 = 256;

/// The nearest count of 2⁻²⁵⁶: error at most ½ ulp.
#[must_use]
pub fn root_steps(value: &Rational) -> BigInt {
    scaled(value, ROOT_BITS)
}

/// The product, rounded down: error below one ulp.
#[must_use]
pub fn root_product(a: &BigInt, b: &BigInt) -> BigInt {
    (a * b) >> ROOT_BITS
}

/// c₁t + c₂t² + … by Horner's scheme. For t in [0, 1] the error is below one ulp a coefficient, plus what the
/// coefficients carry themselves.
#[must_use]
pub fn root_polynomial(coefficients: &[BigInt], t: &BigInt) -> BigInt {
    coefficients
        .iter()
        .rev()
        .fold(BigInt::zero(), |sum, coefficient| {
            root_product(&(sum + coefficient), t)
        })
}

/// A cubic x(t) = c₁t + c₂t² + c₃t³ that rises from x(0) = 0 to x(1) = 1 with slopes of at most 3.
#[derive(Clone, Debug)]
pub struct RisingCubic {
    fixed: [BigInt; 3],
    float: [f64; 3],
}

impl RisingCubic {
    /// The cubic of these coefficients c₁, c₂, c₃.
    #[must_use]
    pub fn new(coefficients: &[Rational; 3]) -> Self {
        Self {
            fixed: coefficients.each_ref().map(root_steps),
            float: coefficients.each_ref().map(super::to_f64),
        }
    }

    /// A t in [0, 1] with |x(t) − target| < 2⁻²⁵⁰, for a target in [0, 1].
    ///
    /// What is promised is the residual, not t itself, which has no well-conditioned value where the cubic is flat. A
    /// curve y = s(x) read at t is then s(x(t)), off by no more than 2⁻²⁵⁰ times the slope of s.
    ///
    /// Newton's steps, kept inside a bracket that shrinks with every look, from a start that 53 bisections in `f64`
    /// give; should they not arrive within 64 steps, bisection ends it: the slope is at most 3, so a bracket of one ulp
    /// means a residual of at most 3 ulp, and the evaluation adds less than 5.
    #[must_use]
    pub fn parameter(&self, target: &BigInt) -> BigInt {
        let one = BigInt::from(1) << ROOT_BITS;
        if !target.is_positive() {
            return BigInt::zero();
        }
        if *target >= one {
            return one;
        }
        let enough = BigInt::from(16);
        let (mut low, mut high) = (BigInt::zero(), one);
        let mut t = self.start(target);
        for look in 0..64 + ROOT_BITS + 2 {
            let residual = root_polynomial(&self.fixed, &t) - target;
            if residual.abs() <= enough {
                break;
            }
            if residual.is_negative() {
                low.clone_from(&t);
            } else {
                high.clone_from(&t);
            }
            let newton = self.newton(&t, &residual).filter(|_| look < 64);
            t = newton
                .filter(|next| *next > low && *next < high)
                .unwrap_or_else(|| (&low + &high) >> 1_u32);
        }
        t
    }

    fn newton(&self, t: &BigInt, residual: &BigInt) -> Option<BigInt> {
        let [c1, c2, c3] = &self.fixed;
        let slope = c1 + root_product(&(c2 * 2 + root_product(&(c3 * 3), t)), t);
        slope
            .is_positive()
            .then(|| t - (residual << ROOT_BITS) / slope)
    }

    /// A first guess, from plain arithmetic only, so that it too is the same on every machine.
    #[expect(
        clippy::cast_precision_loss,
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a guess in [0, 1): any rounding of it will do"
    )]
    fn start(&self, target: &BigInt) -> BigInt {
        const HEAD: u32 = 63;
        const SCALE: f64 = (1_u64 << HEAD) as f64;
        let [c1, c2, c3] = self.float;
        let head = (target >> (ROOT_BITS - HEAD)).to_u64().unwrap_or(0);
        let aim = head as f64 / SCALE;
        let (mut low, mut high) = (0.0, 1.0);
        for _ in 0..53 {
            let middle = 0.5 * (low + high);
            if ((c3 * middle + c2) * middle + c1) * middle < aim {
                low = middle;
            } else {
                high = middle;
            }
        }
        BigInt::from((0.5 * (low + high) * SCALE) as u64) << (ROOT_BITS - HEAD)
    }
}
