//! The fixed-point sine and cosine of an angle in turns, and π.
//!
//! Angles are reduced exactly: a turn is the unit, so whole turns and quarter turns are bits of the number. What is left,
//! at most an eighth of a turn, x = 2π·angle ≤ π/4, goes through a Taylor polynomial.
//!
//! # Error
//!
//! Below 2⁻¹¹⁷ = 8ε absolute, with steps of ε = 2⁻¹²⁰:
//! * x carries the rounding of 2π (at most ½ε, times ⅛) and its own: 0.6ε. y = x² ≤ 0.617 is off by 2x·0.6ε + ½ε < 1.5ε,
//!   which moves the sine by less than 1.5ε/6 and the cosine by less than 1.5ε/2;
//! * in the Horner scheme in y every step adds at most ε (coefficient and product, ½ε each) and damps what came before by
//!   y: together below ε/(1 − 0.617) < 2.7ε. The sine's last product with x ≤ 0.786 adds ½ε;
//! * the first term left out is x³¹/31! < 2⁻¹²³ = ⅛ε for the sine and x³⁰/30! < 2⁻¹¹⁸ = 4ε for the cosine.
//!
//! The sine comes to less than 0.6 + 0.3 + 2.7 + 0.5 + 0.2 < 5ε, the cosine to less than 0.8 + 2.7 + 4 < 8ε. The largest
//! error seen in the tests is 2⁻¹¹⁸·², for both at an eighth of a turn.

use super::Rational;
use super::fixed::{UNIT_BITS, Unit};
use num_bigint::BigInt;

/// The first 256 bits of π − 3, most significant first: 3.243F6A88 85A308D3 13198A2E 03707344 … in hexadecimal.
///
/// Computed with mpmath 1.3; the tests compute it again by Machin's formula.
const PI_FRACTION: [u64; 4] = [
    0x243f_6a88_85a3_08d3,
    0x1319_8a2e_0370_7344,
    0xa409_3822_299f_31d0,
    0x082e_fa98_ec4e_6c89,
];

/// 2π: twice the 121-bit head of π, rounded.
const TAU: Unit = {
    let [first, second, ..] = PI_FRACTION;
    let head = (3_u128 << 121) | ((first as u128) << 57) | ((second as u128) >> 7);
    Unit::from_raw(head.cast_signed() + ((second >> 6) & 1) as i128)
};

/// π cut off after 256 bits: below π by less than 2⁻²⁵⁶.
#[must_use]
pub fn pi() -> Rational {
    let numerator = PI_FRACTION.iter().fold(BigInt::from(3), |head, limb| {
        (head << 64_u32) + BigInt::from(*limb)
    });
    Rational::new(numerator, BigInt::from(1) << 256_u32)
}

/// How many Taylor terms each polynomial keeps.
const TERMS: usize = 15;

/// ±1/n! for n = first, first + 2, …, alternating in sign.
const fn taylor(first: u128) -> [Unit; TERMS] {
    let mut coefficients = [Unit::ZERO; TERMS];
    let mut factorial = 1_u128;
    let mut rest: &mut [Unit] = &mut coefficients;
    let (mut n, mut sign) = (first, 1);
    while let [head, tail @ ..] = rest {
        *head =
            Unit::from_raw(sign * (((1 << UNIT_BITS) + factorial / 2) / factorial).cast_signed());
        // The largest one used is 29!, below 2¹⁰⁴; the last step makes 31!, below 2¹¹³.
        factorial *= (n + 1) * (n + 2);
        n += 2;
        sign = -sign;
        rest = tail;
    }
    coefficients
}

/// 1/1!, −1/3!, … 1/29!.
const SINE: [Unit; TERMS] = taylor(1);
/// 1/0!, −1/2!, … 1/28!.
const COSINE: [Unit; TERMS] = taylor(0);

/// The sine and the cosine of an angle in turns, each with an error below 2⁻¹¹⁷. Exact at every quarter turn.
#[must_use]
pub fn sine_and_cosine(turns: Unit) -> (Unit, Unit) {
    const QUARTER: i128 = 1 << (UNIT_BITS - 2);
    let quarters = (turns.raw() >> (UNIT_BITS - 2)) & 3;
    let rest = turns.raw() & (QUARTER - 1);
    let mirrored = rest > QUARTER / 2;
    let small = if mirrored { QUARTER - rest } else { rest };
    let x = TAU.times(Unit::from_raw(small));
    let y = x.times(x);
    let (sine, cosine) = (x.times(horner(&SINE, y)), horner(&COSINE, y));
    let (sine, cosine) = if mirrored {
        (cosine, sine)
    } else {
        (sine, cosine)
    };
    match quarters {
        0 => (sine, cosine),
        1 => (cosine, -sine),
        2 => (-sine, -cosine),
        _ => (-cosine, sine),
    }
}

fn horner(coefficients: &[Unit; TERMS], y: Unit) -> Unit {
    coefficients
        .iter()
        .rev()
        .fold(Unit::ZERO, |sum, coefficient| sum.times(y) + *coefficient)
}

/// The sine of an angle in turns, see [`sine_and_cosine`].
#[must_use]
pub fn sine(turns: Unit) -> Unit {
    sine_and_cosine(turns).0
}

/// The cosine of an angle in turns, see [`sine_and_cosine`].
#[must_use]
pub fn cosine(turns: Unit) -> Unit {
    sine_and_cosine(turns).1
}

/// The sine of an angle in turns, the same on every machine: for checks that decide an output.
///
/// Within one unit in the last place of the true value; NaN for an infinite or undefined angle.
#[must_use]
pub fn sine_f64(turns: f64) -> f64 {
    sine_and_cosine_f64(turns).0
}

/// The cosine of an angle in turns, the same on every machine: for checks that decide an output.
///
/// Within one unit in the last place of the true value; NaN for an infinite or undefined angle.
#[must_use]
pub fn cosine_f64(turns: f64) -> f64 {
    sine_and_cosine_f64(turns).1
}

/// Both at once, see [`sine_f64`] and [`cosine_f64`].
#[must_use]
pub fn sine_and_cosine_f64(turns: f64) -> (f64, f64) {
    // Below 2⁻³⁰ turn sin x = x up to a share (2π·2⁻³⁰)²/6 < 2⁻⁵⁷, and steps of 2⁻¹²⁰ would begin to show.
    const TINY: f64 = 1.0 / 1_073_741_824.0;
    let Some(angle) = angle(turns) else {
        return (f64::NAN, f64::NAN);
    };
    let (sine, cosine) = sine_and_cosine(angle);
    let sine = if turns.abs() < TINY {
        std::f64::consts::TAU * turns
    } else {
        sine.to_f64()
    };
    (sine, cosine.to_f64())
}

/// The angle without its whole turns, exact but for bits below 2⁻¹²⁰; `None` where it is not finite.
fn angle(turns: f64) -> Option<Unit> {
    if !turns.is_finite() {
        return None;
    }
    let bits = turns.abs().to_bits();
    let exponent = bits >> 52;
    let mantissa = i128::from(bits & ((1 << 52) - 1)) | i128::from(exponent > 0) << 52;
    // |turns| = mantissa · 2^(exponent − 1075), and steps of 2⁻¹²⁰ are wanted.
    let shift = i64::try_from(exponent.max(1)).unwrap_or(0) - 1075 + i64::from(UNIT_BITS);
    let steps = match u32::try_from(shift.unsigned_abs()).unwrap_or(u32::MAX) {
        // A shift of 120 or more leaves whole turns only.
        left @ 0..UNIT_BITS if shift >= 0 => mantissa << left,
        right @ 0..64 if shift < 0 => mantissa >> right,
        _ => 0,
    };
    Some(Unit::from_raw(if turns < 0.0 {
        steps.wrapping_neg()
    } else {
        steps
    }))
}
