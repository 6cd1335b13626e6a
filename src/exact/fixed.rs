//! Integer fixed point inside a move.
//!
//! Two scales, both in an `i128`:
//!
//! * [`Unit`]: numbers around 1 (a share of a morph, the value of a law) with [`UNIT_BITS`] = 120 bits after the point.
//!   Range ±128, one step (*ulp*) is 2⁻¹²⁰.
//! * phases and speeds: plain `i128` counts of 2⁻⁷² turn, or 2⁻⁷² turn/s ([`PHASE_BITS`]). Range ±2⁵⁵ turns.
//!   A show of 30 days at the fastest speed that can be written (10⁹ turns/s) turns less than 2⁵² times.
//!
//! Every operation rounds to the nearest step, so its error is at most half a step of the result's scale. Results past
//! the range wrap around: callers argue why theirs stay inside, and nothing panics.

use super::Rational;
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{Signed, ToPrimitive};
use std::ops::{Add, Neg, Sub};

/// Bits after the point of a [`Unit`].
pub const UNIT_BITS: u32 = 120;

/// Bits after the point of a phase in turns and of a speed in turns per second.
pub const PHASE_BITS: u32 = 72;

/// A number around 1 in steps of 2⁻¹²⁰, between −128 and 128.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub struct Unit(i128);

impl Unit {
    /// 0.
    pub const ZERO: Self = Self(0);
    /// 1.
    pub const ONE: Self = Self(1 << UNIT_BITS);
    /// ½.
    pub const HALF: Self = Self(1 << (UNIT_BITS - 1));

    /// The number of this many steps of 2⁻¹²⁰.
    #[must_use]
    pub const fn from_raw(steps: i128) -> Self {
        Self(steps)
    }

    /// The size in steps of 2⁻¹²⁰.
    #[must_use]
    pub const fn raw(self) -> i128 {
        self.0
    }

    /// The nearest step to `value`: error at most ½ ulp for |value| < 128, the end of the range beyond.
    #[must_use]
    pub fn nearest(value: &Rational) -> Self {
        Self(steps(value, UNIT_BITS))
    }

    /// The share `part / of` rounded to the nearest step, brought to [0, 1]: error at most ½ ulp.
    ///
    /// `of` = 0 counts as 1.
    #[must_use]
    pub fn share(part: u64, of: u64) -> Self {
        const LIMB: u32 = UNIT_BITS / 2;
        if part >= of {
            return Self::ONE;
        }
        // Long division, 60 bits at a time: remainders are below `of` < 2⁶⁴, so nothing leaves 124 bits.
        let of = u128::from(of);
        let first = u128::from(part) << LIMB;
        let second = (first % of) << LIMB;
        let (high, low) = (first / of, second / of);
        let up = u128::from((second % of) * 2 >= of);
        Self((((high << LIMB) + low + up) & u128::MAX >> 1).cast_signed())
    }

    /// The product, error at most ½ ulp.
    #[must_use]
    #[inline]
    pub const fn times(self, other: Self) -> Self {
        Self(product(self.0, other.0))
    }

    /// This share of a phase or a speed, error at most half a step of 2⁻⁷².
    #[must_use]
    #[inline]
    pub const fn of(self, phase: i128) -> i128 {
        product(phase, self.0)
    }

    /// `count` times this number, exact within the range.
    #[must_use]
    #[inline]
    pub const fn multiple(self, count: i128) -> Self {
        Self(self.0.wrapping_mul(count))
    }

    /// The number doubled `count` times, exact within the range.
    #[must_use]
    #[inline]
    pub const fn doubled(self, count: u32) -> Self {
        Self(self.0.wrapping_shl(count))
    }

    /// Half of the number, rounded down.
    #[must_use]
    #[inline]
    pub const fn halved(self) -> Self {
        Self(self.0 >> 1)
    }

    /// The exact value.
    #[must_use]
    pub fn to_rational(self) -> Rational {
        Rational::new(BigInt::from(self.0), BigInt::from(1) << UNIT_BITS)
    }

    /// The nearest `f64`, for checks and pictures.
    #[must_use]
    #[expect(
        clippy::cast_precision_loss,
        reason = "the rounding of the cast is the one that is promised"
    )]
    pub fn to_f64(self) -> f64 {
        // 2⁻¹²⁰ as bits: the scaling is exact, so the cast is the only rounding.
        self.0 as f64 * f64::from_bits((1023 - UNIT_BITS as u64) << 52)
    }
}

impl Add for Unit {
    type Output = Self;
    #[inline]
    fn add(self, other: Self) -> Self {
        Self(self.0.wrapping_add(other.0))
    }
}

impl Sub for Unit {
    type Output = Self;
    #[inline]
    fn sub(self, other: Self) -> Self {
        Self(self.0.wrapping_sub(other.0))
    }
}

impl Neg for Unit {
    type Output = Self;
    #[inline]
    fn neg(self) -> Self {
        Self(self.0.wrapping_neg())
    }
}

/// `value` in steps of 2⁻⁷²: error at most half a step within ±2⁵⁵, the end of the range beyond.
#[must_use]
pub fn phase_steps(value: &Rational) -> i128 {
    steps(value, PHASE_BITS)
}

/// The exact value of a phase or speed in steps of 2⁻⁷².
#[must_use]
pub fn phase_value(steps: i128) -> Rational {
    Rational::new(BigInt::from(steps), BigInt::from(1) << PHASE_BITS)
}

/// `value · 2^bits` rounded half up, or the end of the range on its side.
fn steps(value: &Rational, bits: u32) -> i128 {
    scaled(value, bits)
        .to_i128()
        .unwrap_or(if value.is_negative() {
            i128::MIN
        } else {
            i128::MAX
        })
}

/// `value · 2^bits` rounded half up: ⌊value·2^bits + ½⌋, without bringing the product to lowest terms first.
#[must_use]
pub(crate) fn scaled(value: &Rational, bits: u32) -> BigInt {
    let doubled: BigInt = value.numer() << (bits + 1);
    (doubled + value.denom()).div_floor(&(value.denom() * 2))
}

/// a·b / 2¹²⁰ from the full 256-bit product, rounded to nearest, ties away from zero.
const fn product(a: i128, b: i128) -> i128 {
    const HALF: u128 = 1 << (UNIT_BITS - 1);
    let (high, low) = wide(a.unsigned_abs(), b.unsigned_abs());
    let (low, carry) = low.overflowing_add(HALF);
    let high = high.wrapping_add(carry as u128);
    let size = ((high << (128 - UNIT_BITS)) | (low >> UNIT_BITS)).cast_signed();
    if (a < 0) == (b < 0) {
        size
    } else {
        size.wrapping_neg()
    }
}

/// The 256-bit product as (high, low) halves, by the schoolbook on 64-bit digits.
#[expect(
    clippy::cast_possible_truncation,
    reason = "taking the low 64-bit digit is what is meant"
)]
const fn wide(a: u128, b: u128) -> (u128, u128) {
    let (a1, a0) = ((a >> 64) as u64 as u128, a as u64 as u128);
    let (b1, b0) = ((b >> 64) as u64 as u128, b as u64 as u128);
    let low = a0 * b0;
    // Each digit product is at most (2⁶⁴−1)², so a digit product plus two carries of 64 bits cannot overflow.
    let cross = a1 * b0 + (low >> 64);
    let middle = a0 * b1 + (cross as u64 as u128);
    let high = a1 * b1 + (cross >> 64) + (middle >> 64);
    (high, (middle << 64) | (low as u64 as u128))
}
