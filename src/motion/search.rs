//! Branch and bound over the smooth pieces of a law: the stretch with the greatest bound is halved until it is settled.

use super::derivatives::Piece;
use std::cmp::Ordering;
use std::collections::BinaryHeap;

/// How closely a reported supremum is known, relative to its size.
const SHARPNESS: f64 = 1e-11;

/// Boxes narrower than this (in u, or a Bézier's parameter) are judged by their own samples.
pub(super) const NARROWEST: f64 = 1e-12;

/// No search looks at more boxes: far more than any law takes, so that none can hang.
const MOST_BOXES: usize = 20_000;

/// A stretch of a piece's own variable, with a bound for what is looked at.
#[derive(Clone, Copy, Debug)]
struct Stretch {
    piece: usize,
    low: f64,
    high: f64,
    bound: f64,
}

impl PartialEq for Stretch {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other) == Ordering::Equal
    }
}
impl Eq for Stretch {}
impl PartialOrd for Stretch {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}
impl Ord for Stretch {
    fn cmp(&self, other: &Self) -> Ordering {
        // Ties by place, so that the search goes the same way on every machine.
        self.bound
            .total_cmp(&other.bound)
            .then(other.piece.cmp(&self.piece))
            .then(other.low.total_cmp(&self.low))
    }
}

/// What a look at one stretch tells: a bound over all of it, and the largest sampled value with its place.
#[derive(Clone, Copy, Debug)]
pub(super) struct Look {
    /// Nothing on the stretch is above this.
    pub(super) bound: f64,
    /// The largest sample.
    pub(super) best: f64,
    /// Where that is, in the piece's own variable.
    pub(super) at: f64,
}

/// The outcome of a search: the largest value sampled, where, and a bound that nothing exceeds.
#[derive(Clone, Copy, Debug)]
pub(super) struct Outcome {
    /// The largest sample.
    pub(super) best: f64,
    /// The piece it lies in.
    pub(super) piece: usize,
    /// Where, in the piece's own variable.
    pub(super) at: f64,
    /// Nothing at all is above this.
    pub(super) bound: f64,
}

/// Best first: halve the stretch with the greatest bound until it is settled.
///
/// `enough` ends the search early: values above it need no closer look, bounds at or below it neither.
pub(super) fn search(
    pieces: &[Piece],
    enough: Option<f64>,
    look: impl Fn(usize, f64, f64) -> Look,
) -> Outcome {
    let mut heap = BinaryHeap::new();
    let mut outcome = Outcome {
        best: f64::NEG_INFINITY,
        piece: 0,
        at: 0.0,
        bound: f64::NEG_INFINITY,
    };
    let add = |heap: &mut BinaryHeap<Stretch>, outcome: &mut Outcome, piece, low, high| {
        let seen = look(piece, low, high);
        if seen.best > outcome.best {
            (outcome.best, outcome.piece, outcome.at) = (seen.best, piece, seen.at);
        }
        let bound = if seen.bound.is_nan() {
            f64::INFINITY
        } else {
            seen.bound.max(seen.best)
        };
        heap.push(Stretch {
            piece,
            low,
            high,
            bound,
        });
    };
    for (index, piece) in pieces.iter().enumerate() {
        let width = (piece.to - piece.from) / 4.0;
        for quarter in 0..4 {
            let low = piece.from + width * f64::from(quarter);
            let high = if quarter == 3 { piece.to } else { low + width };
            add(&mut heap, &mut outcome, index, low, high);
        }
    }
    for _ in 0..MOST_BOXES {
        let Some(top) = heap.pop() else {
            outcome.bound = outcome.best;
            break;
        };
        outcome.bound = top.bound;
        let settled = outcome.best + SHARPNESS * outcome.best.abs();
        let asked = enough.is_some_and(|enough| top.bound <= enough || outcome.best > enough);
        if top.bound <= settled || asked {
            break;
        }
        if top.high - top.low < NARROWEST {
            continue;
        }
        let middle = top.low + (top.high - top.low) / 2.0;
        add(&mut heap, &mut outcome, top.piece, top.low, middle);
        add(&mut heap, &mut outcome, top.piece, middle, top.high);
    }
    outcome
}
