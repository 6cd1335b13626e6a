//! The exact line that a hold follows, against straight lines in 2⁻³² counts.
//!
//! A hold's counts are ⌊α + k·β⌋ at its tick k, with exact α (the half count of rounding inside) and β. The fractions of
//! k·β are multiples of 1/q, where q is the denominator of β, so those of α + k·β lie on a grid of that spacing, whose lowest
//! point above a whole number is λ < 1/q. A line that is off by ρ there gives the same counts at every tick where
//!
//! ```text
//! −λ ≤ ρ < 1/q − λ
//! ```
//!
//! and since ρ changes evenly it is enough to ask at both ends.

use super::wanted::nearest;
use crate::exact::{Rational, ratio, whole};
use crate::motion::Move;
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{Signed, ToPrimitive};

/// 2³², the fixed point's units in a count.
const UNIT: i128 = 1 << 32;

/// Ticks of one piece, at most.
const LONGEST: u64 = 1 << 32;

/// A hold no longer than this must be exact wherever its own fractions leave room, a longer one where 1/q does.
const OWN_FRACTIONS: u64 = 1 << 14;

/// Where a straight line of a table stands: phase and change a tick, in 2⁻³² counts, modulo a turn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Line {
    pub(super) phase: i64,
    pub(super) speed: i64,
}

/// One rotor in a hold.
pub(super) struct HoldLine {
    start: Rational,
    step: Rational,
    turn: Rational,
    /// Whether a line can keep to it within 1/q, and whether one can at all.
    roomy: bool,
    exact: bool,
}

impl HoldLine {
    pub(super) fn new(motion: &Move, tick: &Rational, counts: u32) -> Self {
        let turn = whole(i128::from(counts));
        let start = motion.start.value() * &turn + ratio(1, 2);
        let step = motion.from.value() * tick * &turn;
        let ticks = motion.ticks.0.min(LONGEST);
        let grid = Rational::new(BigInt::from(1), step.denom().clone());
        let roomy = can_follow(&step, ticks, &grid);
        let exact = roomy
            || (ticks <= OWN_FRACTIONS && can_follow(&step, ticks, &room(&start, &step, ticks)));
        Self {
            start,
            step,
            turn,
            roomy,
            exact,
        }
    }

    /// Counts by which a tick of this hold may differ from its row, one where no speed in 2⁻³² counts can follow it.
    pub(super) fn allowed(&self) -> i128 {
        i128::from(!self.exact)
    }

    /// Whether a line from tick `first` of the hold on gives, over so many ticks, only counts that are allowed. It may say no
    /// of a line that does.
    pub(super) fn keeps(&self, first: u64, ticks: u64, line: Line) -> bool {
        let here = &self.start + &self.step * whole(first.into());
        let apart = Rational::new(line.phase.into(), UNIT.into()) - &here;
        let off = &apart - (&apart / &self.turn).round() * &self.turn;
        let strays = Rational::new(line.speed.into(), UNIT.into()) - &self.step;
        let ends = [off.clone(), off + strays * whole(ticks.into())];
        if !self.exact {
            // Less than a count between two numbers is at most one between their floors.
            return ends.iter().all(|off| off.abs() < whole(1));
        }
        let grid = self.step.denom();
        let scaled = here * Rational::from_integer(grid.clone());
        let lowest = (&scaled - scaled.floor()) / Rational::from_integer(grid.clone());
        let above = Rational::new(BigInt::from(1), grid.clone()) - &lowest;
        let below = -lowest;
        self.roomy && ends.iter().all(|off| *off >= below && *off < above)
    }
}

/// Whether a line in 2⁻³² counts stays within `room` over so many ticks: the nearest speed takes half of it at most, and
/// the other half holds a phase.
fn can_follow(step: &Rational, ticks: u64, room: &Rational) -> bool {
    let units = step * whole(UNIT);
    let off = (whole(nearest(&units)) - units).abs();
    let room = room * whole(UNIT);
    off * whole(i128::from(ticks) * 2) <= room && room >= whole(2)
}

/// How far apart the least and the largest fraction of α + k·β, k = 0 … `ticks`, leave a line: one less their distance.
fn room(start: &Rational, step: &Rational, ticks: u64) -> Rational {
    let denominator = start.denom().lcm(step.denom());
    let over =
        |value: &Rational| (value.numer() * (&denominator / value.denom())).mod_floor(&denominator);
    let (first, grown) = (over(start), over(step));
    let narrow = (first.to_u64(), grown.to_u64(), denominator.to_u64());
    let (least, most) = if let (Some(first), Some(grown), Some(modulus)) = narrow {
        let at =
            |k: u64| (u128::from(first) + u128::from(grown) * u128::from(k)) % u128::from(modulus);
        let (least, most) = extremes((0..=ticks).map(at));
        (BigInt::from(least), BigInt::from(most))
    } else {
        extremes((0..=ticks).map(|k| (&first + &grown * k).mod_floor(&denominator)))
    };
    whole(1) - Rational::new(most - least, denominator)
}

fn extremes<T: Ord + Clone + Default>(mut values: impl Iterator<Item = T>) -> (T, T) {
    let first = values.next().unwrap_or_default();
    values.fold((first.clone(), first), |(least, most), value| {
        (least.min(value.clone()), most.max(value))
    })
}
