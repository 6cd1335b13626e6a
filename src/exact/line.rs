//! Exact straight lines over ticks, floored at every tick without division.
//!
//! A hold is a straight line: after n ticks the phase is start + n·step, both exact rationals, and a set-point
//! is ⌊phase·scale + ½⌋. Written over one common denominator D the line is (s + n·t)/D with whole s, t. Keeping
//! the floor and the remainder of that division apart, one tick is two additions and one comparison:
//!
//! floor += ⌊t/D⌋, rest += t mod D, and where rest ≥ D: rest −= D, floor += 1.
//!
//! Nothing is ever rounded, so a line is as exact after 10 000 hours as after one tick. The remainder lives in a
//! `u128` where D < 2¹²⁷, which covers every usual rig; else in a [`BigInt`], with the same results.

use super::Rational;
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::ToPrimitive;

/// ⌊(start + n·step)·scale + offset⌋ for n = 0, 1, 2 …, exact at every n.
///
/// Values are `i128`; the caller keeps them within ±2¹²⁶ (past that they wrap round as two's complement does).
#[derive(Clone, Debug)]
pub struct Line {
    start: BigInt,
    step: BigInt,
    denominator: BigInt,
    floor: i128,
    floor_step: i128,
    rest: Rest,
}

/// What the division leaves, and what it grows by in one tick; both in [0, D).
#[derive(Clone, Debug)]
enum Rest {
    Narrow {
        now: u128,
        step: u128,
        denominator: u128,
    },
    Wide {
        now: BigInt,
        step: BigInt,
    },
}

/// The largest denominator whose remainders are added in a `u128` without overflow: now + step < 2D ≤ 2¹²⁸.
const NARROW_BITS: u64 = 127;

impl Line {
    /// The line ⌊(start + n·step)·scale + offset⌋ at n = 0.
    #[must_use]
    pub fn new(start: &Rational, step: &Rational, scale: &Rational, offset: &Rational) -> Self {
        Self::with_narrow_bits(start, step, scale, offset, NARROW_BITS)
    }

    /// The same line by way of big integers whatever its denominator: the slow path, so that it can be
    /// compared with the fast one.
    #[must_use]
    pub fn wide(start: &Rational, step: &Rational, scale: &Rational, offset: &Rational) -> Self {
        Self::with_narrow_bits(start, step, scale, offset, 0)
    }

    fn with_narrow_bits(
        start: &Rational,
        step: &Rational,
        scale: &Rational,
        offset: &Rational,
        narrow_bits: u64,
    ) -> Self {
        let first = start * scale + offset;
        let grown = step * scale;
        let denominator = first.denom().lcm(grown.denom());
        let start = first.numer() * (&denominator / first.denom());
        let step = grown.numer() * (&denominator / grown.denom());
        let (floor_step, rest_step) = step.div_mod_floor(&denominator);
        let (floor, rest) = start.div_mod_floor(&denominator);
        let narrow = (denominator.bits() <= narrow_bits)
            .then(|| {
                Some(Rest::Narrow {
                    now: rest.to_u128()?,
                    step: rest_step.to_u128()?,
                    denominator: denominator.to_u128()?,
                })
            })
            .flatten();
        Self {
            start,
            step,
            denominator,
            floor: low_bits(&floor),
            floor_step: low_bits(&floor_step),
            rest: narrow.unwrap_or(Rest::Wide {
                now: rest,
                step: rest_step,
            }),
        }
    }

    /// The value at the present n.
    #[must_use]
    #[inline]
    pub fn value(&self) -> i128 {
        self.floor
    }

    /// Goes on to the next n.
    #[inline]
    pub fn advance(&mut self) {
        let carry = self.rest.advance(&self.denominator);
        self.floor = self
            .floor
            .wrapping_add(self.floor_step)
            .wrapping_add(i128::from(carry));
    }

    /// Goes to any n at once, forward or back, by one division.
    pub fn jump(&mut self, n: u64) {
        let (floor, rest) =
            (&self.start + &self.step * BigInt::from(n)).div_mod_floor(&self.denominator);
        self.floor = low_bits(&floor);
        self.rest.set(rest);
    }
}

impl Rest {
    /// One tick on; whether the floor grows by one for it.
    #[inline]
    fn advance(&mut self, whole: &BigInt) -> bool {
        match self {
            Rest::Narrow {
                now,
                step,
                denominator,
            } => {
                *now += *step;
                let carry = *now >= *denominator;
                if carry {
                    *now -= *denominator;
                }
                carry
            }
            Rest::Wide { now, step } => {
                *now += &*step;
                let carry = &*now >= whole;
                if carry {
                    *now -= whole;
                }
                carry
            }
        }
    }

    fn set(&mut self, value: BigInt) {
        match self {
            // The remainder is below a denominator that fits, so the conversion always answers.
            Rest::Narrow { now, .. } => *now = value.to_u128().unwrap_or_default(),
            Rest::Wide { now, .. } => *now = value,
        }
    }
}

/// A line taken modulo a whole number: ⌊(start + n·step)·scale + offset⌋ mod `modulus`, in [0, modulus).
///
/// For positions on a circle: turns that are printed modulo one never grow, however long the hold.
#[derive(Clone, Debug)]
pub struct Ring {
    line: Line,
    now: u64,
    step: u64,
    modulus: u64,
}

impl Ring {
    /// The ring at n = 0. `modulus` lies in 1 … 2⁶³ (0 counts as 1).
    #[must_use]
    pub fn new(
        start: &Rational,
        step: &Rational,
        scale: &Rational,
        offset: &Rational,
        modulus: u64,
    ) -> Self {
        Self::of(Line::new(start, step, scale, offset), modulus)
    }

    /// `line` modulo `modulus`, at n = 0.
    #[must_use]
    pub fn of(mut line: Line, modulus: u64) -> Self {
        let modulus = modulus.clamp(1, 1 << 63);
        // Whole steps of the modulus change nothing on a ring and are taken out before they could overflow.
        let around = &line.denominator * BigInt::from(modulus);
        line.start = line.start.mod_floor(&around);
        line.step = line.step.mod_floor(&around);
        line.floor_step = low_bits(&line.step.div_floor(&line.denominator));
        let step = u64::try_from(line.floor_step).unwrap_or_default();
        let mut ring = Self {
            line,
            now: 0,
            step,
            modulus,
        };
        ring.jump(0);
        ring
    }

    /// The value at the present n.
    #[must_use]
    #[inline]
    pub fn value(&self) -> u64 {
        self.now
    }

    /// Goes on to the next n.
    #[inline]
    pub fn advance(&mut self) {
        let carry = self.line.rest.advance(&self.line.denominator);
        // Both are below the modulus, which is at most 2⁶³, so the sum and its carry fit.
        self.now += self.step + u64::from(carry);
        if self.now >= self.modulus {
            self.now -= self.modulus;
        }
    }

    /// Goes to any n at once.
    pub fn jump(&mut self, n: u64) {
        let total = &self.line.start + &self.line.step * BigInt::from(n);
        let (floor, rest) = total.div_mod_floor(&self.line.denominator);
        let on_ring = floor.mod_floor(&BigInt::from(self.modulus));
        self.now = on_ring.to_u64().unwrap_or_default();
        self.line.rest.set(rest);
    }
}

/// `value` modulo 2¹²⁸ as a two's complement number: the value itself within the range of `i128`.
fn low_bits(value: &BigInt) -> i128 {
    value.to_i128().unwrap_or_else(|| {
        let span = BigInt::from(1) << 128_u32;
        let low = value.mod_floor(&span);
        let half = BigInt::from(1) << 127_u32;
        let signed = if low >= half { low - span } else { low };
        signed.to_i128().unwrap_or_default()
    })
}
