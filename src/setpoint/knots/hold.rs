//! A straight line in 2⁻³² counts that rounds to the same counts as an exact one.
//!
//! The rows of a hold are ⌊α + k·β⌋ for k = 0 … n, with exact rationals α (the half count included) and β. Wanted are
//! whole P and S, in 2⁻³² counts, with ⌊(P + k·S)/2³²⌋ = ⌊α + k·β⌋ for every k. With ρ = P/2³² − α and σ = S/2³² − β that
//! holds exactly where
//!
//! ```text
//! −below ≤ ρ + k·σ < above        below = least fraction of α + k·β,  above = 1 − the largest
//! ```
//!
//! at every k; since ρ + k·σ is straight it is enough to ask at k = 0 and k = n. Of all pairs that fit, those with most
//! zero bits at the end are taken: they are stored without them.

use super::FRACTION_BITS;
use super::Tolerance;
use crate::exact::{Rational, ratio, round_half_up, whole};
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{Signed, ToPrimitive, Zero};

/// Ticks over which the fractions of a line are looked at one by one; past that the bound of its denominator serves.
const WALKED: u64 = 1 << 14;

/// A straight line: phase at its start and speed, in 2⁻³² counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Hold {
    /// Unwrapped.
    pub(super) phase: i128,
    /// A tick.
    pub(super) speed: i64,
}

/// The line that stands for α + k·β over k = 0 … `ticks`, the tick after it included.
pub(super) fn straight(
    start: &Rational,
    step: &Rational,
    ticks: u64,
    tolerance: Tolerance,
) -> Hold {
    let unit = whole(1 << FRACTION_BITS);
    let (below, above) = room(start, step, ticks);
    let n = whole(i128::from(ticks));
    // Half of the room for the speed's rounding, half for the phase's.
    let share = (&below + &above) / (&n * whole(2));
    let speed = roundest(&(step * &unit), &(&share * &unit));
    let drift = (whole(i128::from(speed)) / &unit - step) * &n;
    let (least, most) = (
        -&below - drift.clone().min(Rational::zero()),
        &above - drift.clone().max(Rational::zero()),
    );
    let phase = between(&((start + &least) * &unit), &((start + &most) * &unit))
        .unwrap_or_else(|| nearest(&((start - &drift * ratio(1, 2)) * &unit)));
    debug_assert!(drift.abs() <= whole(i128::from(tolerance)));
    Hold { phase, speed }
}

/// How far the line may sink and rise at every tick without another count coming out: `below` may be reached, `above` not.
fn room(start: &Rational, step: &Rational, ticks: u64) -> (Rational, Rational) {
    let fraction = |value: &Rational| value - value.floor();
    let q = step.denom().clone();
    if BigInt::from(ticks) >= q || ticks > WALKED {
        // The fractions of k·β are multiples of 1/q, so those of α + k·β are α₀ + j/q with α₀ in [0, 1/q).
        let scaled = start * Rational::from_integer(q.clone());
        let lowest = fraction(&scaled) / Rational::from_integer(q.clone());
        let above = Rational::new(BigInt::from(1), q) - &lowest;
        return (lowest, above);
    }
    let denominator = start.denom().lcm(&q);
    let first = (start.numer() * (&denominator / start.denom())).mod_floor(&denominator);
    let grown = (step.numer() * (&denominator / &q)).mod_floor(&denominator);
    let (least, most) = match (
        denominator.to_u64().filter(|d| *d < 1 << 63),
        first.to_u64(),
        grown.to_u64(),
    ) {
        (Some(d), Some(first), Some(grown)) => {
            let (least, most) = extremes(first, grown, d, ticks);
            (BigInt::from(least), BigInt::from(most))
        }
        _ => wide_extremes(first, &grown, &denominator, ticks),
    };
    (
        Rational::new(least, denominator.clone()),
        Rational::new(&denominator - most, denominator),
    )
}

fn extremes(first: u64, grown: u64, modulus: u64, ticks: u64) -> (u64, u64) {
    let (mut now, mut least, mut most) = (first, first, first);
    for _ in 0..ticks {
        now += grown;
        if now >= modulus {
            now -= modulus;
        }
        least = least.min(now);
        most = most.max(now);
    }
    (least, most)
}

fn wide_extremes(first: BigInt, grown: &BigInt, modulus: &BigInt, ticks: u64) -> (BigInt, BigInt) {
    let (mut now, mut least, mut most) = (first.clone(), first.clone(), first);
    for _ in 0..ticks {
        now += grown;
        if &now >= modulus {
            now -= modulus;
        }
        if now < least {
            least.clone_from(&now);
        }
        if now > most {
            most.clone_from(&now);
        }
    }
    (least, most)
}

/// The whole number with most zero bits at its end within `room` of `value`; the nearest where there is none.
fn roundest(value: &Rational, room: &Rational) -> i64 {
    for bits in (0..48_u32).rev() {
        let step = whole(1 << bits);
        let candidate = round_half_up(&(value / &step)) << bits;
        if (Rational::from_integer(candidate.clone()) - value).abs() <= *room
            && let Some(found) = candidate.to_i64()
        {
            return found;
        }
    }
    round_half_up(value).to_i64().unwrap_or(i64::MAX)
}

/// The whole number with most zero bits at its end in [least, most).
fn between(least: &Rational, most: &Rational) -> Option<i128> {
    (0..=FRACTION_BITS).rev().find_map(|bits| {
        let step = whole(1 << bits);
        let candidate = (least / &step).ceil() * &step;
        (candidate < *most)
            .then(|| candidate.to_integer().to_i128())
            .flatten()
    })
}

fn nearest(value: &Rational) -> i128 {
    round_half_up(value).to_i128().unwrap_or(i128::MAX)
}
