//! Plan → knots: a short table of pieces of constant integer change of speed.
//!
//! Each rotor has its own list of [`Piece`]s. Inside one, everything is an integer in units of 2⁻³² counts and a player
//! only adds:
//!
//! ```text
//! counts = phase >> 32        phase += speed        speed += change        once a tick
//! ```
//!
//! so after k ticks the phase is P + k·S + k(k−1)/2·C. The half count of rounding is inside the phase. Every tick is
//! within [`Tolerance`] counts of the row table; the first tick of every leg is exact, and so is every tick of a hold
//! wherever a speed in 2⁻³² counts can follow it ([`hold`]). Pieces are cut at every leg.
//!
//! A piece that *goes on* keeps the running phase and speed and gives a new change alone; one that *shifts* moves the phase
//! too, within the tolerance; one that is *set* gives phase and speed. How many bytes each takes is the business of
//! [`super::pack`]; [`search`] looks for the fewest.
//!
//! Legs are independent of one another: a hold's line is found from the plan alone, and the move after it starts
//! where that line ends.

mod corridor;
mod curve;
mod hold;
mod json;
mod search;
mod steps;

pub use json::write_json_knots;

use super::rows::Rows;
use crate::exact::{Rational, ratio, whole};
use crate::motion::{Move, Shape};
use crate::plan::{Leg, Plan};
use crate::rig::{Pair, RotorId};
use hold::{Hold, straight};
use num_traits::Zero;
use rayon::prelude::{IntoParallelIterator, ParallelIterator};
use steps::Effort;

/// Counts by which a tick of the knots table may differ from the row table; at least 1.
pub type Tolerance = u32;

/// Bits of a count's fraction: phases, speeds and changes are in units of 2⁻³² counts.
pub const FRACTION_BITS: u32 = 32;

/// Ticks of one piece, at most.
pub const MOST_TICKS: u64 = 1 << 32;

/// How the phase and the speed of a piece come about.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Entry {
    /// Phase and speed run on; the speed has grown by this piece's change, no more by that of the piece before.
    GoesOn,
    /// The phase moves by `units` · 2^`grain` from where it has run to; the speed runs on likewise.
    Shifts {
        /// How far, in steps of the grain.
        units: i64,
    },
    /// A new phase and, where there is one, a new speed.
    Sets {
        /// The new phase in 2⁻³² counts, modulo the counts of a turn wherever it is compared.
        phase: i128,
        /// The speed of the piece's first tick in 2⁻³² counts a tick.
        speed: i64,
    },
}

/// Ticks of one rotor over which its speed changes by the same amount each tick.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Piece {
    /// How many, 1 … 2³².
    pub ticks: u64,
    /// How it starts.
    pub entry: Entry,
    /// Change of speed a tick in 2⁻³² counts.
    pub change: i64,
    /// Changes of a leg are whole multiples of 2^scale more or less than the change before.
    pub scale: u8,
    /// Shifts of a leg are whole multiples of 2^grain.
    pub grain: u8,
    /// Ticks are mostly whole multiples of 2^pace.
    pub pace: u8,
}

/// The pieces of both rotors in one leg.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct LegPieces {
    /// First tick of the leg.
    pub start: u64,
    /// The pieces, in order; their ticks add up to the leg's.
    pub pieces: Pair<Vec<Piece>>,
}

/// Legs whose pieces are looked for at a time.
const LEGS_AT_A_TIME: usize = 64;

/// Hands the pieces of every leg, in order, to `take`; after a run-down one more leg of a single tick, at rest.
///
/// Only a handful of legs is ever held, and of a move's rows at most [`corridor::MOST_ROWS`].
///
/// # Errors
/// Whatever `take` reports.
pub fn each_leg<E>(
    plan: &Plan,
    tolerance: Tolerance,
    mut take: impl FnMut(LegPieces) -> Result<(), E>,
) -> Result<(), E> {
    let rows = Rows::new(plan);
    let mut first = 0;
    while first < plan.legs.len() {
        let until = (first + LEGS_AT_A_TIME).min(plan.legs.len());
        let found: Vec<Option<LegPieces>> = (first..until)
            .into_par_iter()
            .map(|index| leg_pieces(plan, &rows, index, tolerance))
            .collect();
        for leg in found.into_iter().flatten() {
            take(leg)?;
        }
        first = until;
    }
    if plan.loop_leg.is_none() && plan.total().0 > 0 {
        take(at_rest(plan))?;
    }
    Ok(())
}

fn leg_pieces(
    plan: &Plan,
    rows: &Rows<'_>,
    index: usize,
    tolerance: Tolerance,
) -> Option<LegPieces> {
    let leg = plan.legs.get(index)?;
    let moves = plan.moves(index)?;
    let mut pieces = Pair::each(|id| {
        let motion = moves.of(id);
        if is_straight(motion) {
            hold_pieces(&line_of(plan, motion, id), leg.ticks.0, tolerance)
        } else {
            Vec::new()
        }
    });
    let entries = Pair::each(|id| entry(plan, index, id, tolerance));
    let counts = Pair::each(|id| plan.rig.rotor(id).counts);
    let effort = Effort::of(plan.legs.len());
    curve::search(
        rows,
        leg,
        &entries,
        counts,
        (tolerance, effort),
        &mut pieces,
    );
    Some(LegPieces {
        start: leg.start.0,
        pieces,
    })
}

/// Whether a rotor's speed does not change in a move.
fn is_straight(motion: &Move) -> bool {
    motion.shape == Shape::Hold || (motion.from == motion.to && motion.correction.is_zero())
}

/// The line that a straight move follows: counts at its start, the half count of rounding included, and counts a tick.
fn line_of(plan: &Plan, motion: &Move, id: RotorId) -> (Rational, Rational) {
    let counts = whole(i128::from(plan.rig.rotor(id).counts));
    (
        motion.start.value() * &counts + ratio(1, 2),
        motion.from.value() * plan.tick().value() * counts,
    )
}

fn hold_pieces(line: &(Rational, Rational), ticks: u64, tolerance: Tolerance) -> Vec<Piece> {
    let mut pieces = Vec::new();
    let mut first = 0;
    while first < ticks {
        let length = (ticks - first).min(MOST_TICKS);
        let start = &line.0 + &line.1 * whole(i128::from(first));
        let Hold { phase, speed } = straight(&start, &line.1, length, tolerance);
        pieces.push(Piece {
            ticks: length,
            entry: Entry::Sets { phase, speed },
            change: 0,
            scale: 0,
            grain: 0,
            pace: 0,
        });
        first += length;
    }
    pieces
}

/// Phase (unwrapped) and speed that run into a leg from the straight move before it, or from rest; `None` where there is
/// no such thing.
fn entry(plan: &Plan, index: usize, id: RotorId, tolerance: Tolerance) -> Option<Hold> {
    let Some(before) = index.checked_sub(1) else {
        return Some(Hold {
            phase: 1 << (FRACTION_BITS - 1),
            speed: 0,
        });
    };
    let motion = plan.move_of(before, id)?;
    if !is_straight(&motion) {
        return None;
    }
    let last = hold_pieces(&line_of(plan, &motion, id), motion.ticks.0, tolerance).pop()?;
    match last.entry {
        Entry::Sets { phase, speed } => Some(Hold {
            phase: phase + i128::from(speed) * i128::from(last.ticks),
            speed,
        }),
        _ => None,
    }
}

/// The last row of a run-down, as a leg of one tick.
fn at_rest(plan: &Plan) -> LegPieces {
    let end = plan.legs.len();
    LegPieces {
        start: plan.total().0,
        pieces: Pair::each(|id| {
            let counts = whole(i128::from(plan.rig.rotor(id).counts));
            let phase = match plan.legs.last().map(|leg: &Leg| leg.kind) {
                Some(crate::plan::LegKind::RunDown) => plan.rest.of(id).clone(),
                _ => plan.phase_before(end, id),
            };
            let start = phase.value() * counts + ratio(1, 2);
            hold_pieces(&(start, Rational::zero()), 1, 1)
        }),
    }
}

/// How many pieces a plan takes, both rotors together.
#[must_use]
pub fn count(plan: &Plan, tolerance: Tolerance) -> u64 {
    let mut total = 0;
    let counted: Result<(), std::convert::Infallible> = each_leg(plan, tolerance, |leg| {
        total += (leg.pieces.a.len() + leg.pieces.b.len()) as u64;
        Ok(())
    });
    match counted {
        Ok(()) => total,
    }
}
