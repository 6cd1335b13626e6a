//! The counts that one rotor's phase must keep within over the ticks of a move, and how far a piece gets in them.
//!
//! From a tick with phase P on, S being the step that led there, a piece of change C is at P + k·S + k(k+1)/2·C after k ticks. The corridor
//! asks r(k) − N ≤ ⌊that/2³²⌋ ≤ r(k) + N of each, with the rows r and the tolerance N, which is one interval of C a tick:
//! a piece fits as long as the intervals so far have a change in common. All of it in whole numbers.

use super::{FRACTION_BITS, Tolerance};

/// Rows of a move held at a time; a longer move is searched stretch by stretch.
pub(super) const MOST_ROWS: u64 = 1 << 16;

/// Counts that rows may bend away from a straight line within one piece; keeps every product within 64 bits.
const MOST_BEND: i64 = 1 << 29;

/// The rows of one rotor over a stretch of a move.
#[derive(Clone, Debug)]
pub(super) struct Corridor {
    /// Unwrapped counts from the first row of the stretch on, and of the row after its last.
    rows: Vec<i64>,
    /// N, but never more than a quarter of a turn.
    tolerance: i64,
    /// Counts of a turn.
    counts: u32,
}

/// Phase and speed at a tick, in 2⁻³² counts, the phase less the row of that tick.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Place {
    /// Index of the tick in the stretch.
    pub(super) tick: usize,
    /// Phase − row·2³².
    pub(super) off: i64,
    /// The step that led here: that of the piece before. The piece that starts here adds its change to it at once.
    pub(super) speed: i64,
}

/// The changes that fit up to some tick; empty where `least > most`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Changes {
    pub(super) least: i64,
    pub(super) most: i64,
}

impl Changes {
    const ANY: Self = Self {
        least: i64::MIN >> 1,
        most: i64::MAX >> 1,
    };

    pub(super) fn is_empty(self) -> bool {
        self.least > self.most
    }
}

/// k(k+1)/2.
pub(super) fn triangle(k: usize) -> i64 {
    let k = k as i64;
    k * (k + 1) / 2
}

impl Corridor {
    pub(super) fn new(rows: Vec<i64>, tolerance: Tolerance, counts: u32) -> Self {
        let quarter = counts.saturating_sub(1) / 4;
        Self {
            rows,
            tolerance: i64::from(tolerance.max(1).min(quarter)),
            counts,
        }
    }

    /// Whether a phase this far from its row finds the nearest way to it: less than half a turn.
    pub(super) fn finds_its_row(&self, off: i64) -> bool {
        let half = 1_i128 << (FRACTION_BITS - 1);
        (i128::from(off) - half).abs() < i128::from(self.counts) * half
    }

    pub(super) fn len(&self) -> usize {
        self.rows.len()
    }

    pub(super) fn row(&self, tick: usize) -> i64 {
        self.rows.get(tick).copied().unwrap_or_default()
    }

    /// The offsets, in 2⁻³² counts, that a phase may have from its row: from −N counts to just below N + 1.
    pub(super) fn span(&self) -> (i64, i64) {
        (
            -self.tolerance << FRACTION_BITS,
            ((self.tolerance + 1) << FRACTION_BITS) - 1,
        )
    }

    /// Hands on, tick by tick from `place` on, the changes that fit all ticks so far; stops where none does, where
    /// `take` says so, and at the end of the rows. Of ticks past the second only each `stride`th is looked at.
    #[expect(
        clippy::indexing_slicing,
        reason = "hot loop: k stays below the number of rows from `place.tick` on"
    )]
    pub(super) fn narrow(
        &self,
        place: Place,
        stride: usize,
        mut take: impl FnMut(usize, Changes) -> bool,
    ) {
        let Some(rows) = self.rows.get(place.tick..) else {
            return;
        };
        let (span_least, span_most) = self.span();
        let whole = place.speed >> FRACTION_BITS;
        let fraction = place.speed & ((1 << FRACTION_BITS) - 1);
        let mut changes = Changes::ANY;
        let mut k = 0;
        while k < rows.len() {
            let ticks = k as i64;
            let bend = rows[k] - rows[0] - ticks * whole;
            if bend.abs() >= MOST_BEND && k > 2 {
                return;
            }
            let clamped = bend.clamp(-MOST_BEND, MOST_BEND) << FRACTION_BITS;
            let line = clamped - place.off - ticks * fraction;
            let (least, most) = (line + span_least, line + span_most);
            if k == 0 {
                if least > 0 || most < 0 {
                    return;
                }
            } else {
                let weight = triangle(k);
                if i128::from(changes.least) * i128::from(weight) < i128::from(least) {
                    changes.least =
                        least.div_euclid(weight) + i64::from(least.rem_euclid(weight) != 0);
                }
                if i128::from(changes.most) * i128::from(weight) > i128::from(most) {
                    changes.most = most.div_euclid(weight);
                }
                if changes.is_empty() {
                    return;
                }
            }
            if !take(k, changes) {
                return;
            }
            k += if k < 2 { 1 } else { stride };
        }
    }

    /// Ticks from `place` on that one piece can cover, `stride` apart; 0 where not even its own tick and the next fit.
    pub(super) fn reach(&self, place: Place, stride: usize) -> usize {
        let mut reach = 0;
        self.narrow(place, stride, |k, _| {
            reach = k + 1;
            true
        });
        if reach < 2 && place.tick + 2 <= self.rows.len() {
            0
        } else {
            reach
        }
    }

    /// Where a piece of `change` leads after `ticks`.
    pub(super) fn after(&self, place: Place, change: i64, ticks: usize) -> Place {
        let tick = place.tick + ticks;
        let moved = i128::from(place.off)
            + i128::from(place.speed) * (ticks as i128)
            + i128::from(change) * i128::from(triangle(ticks));
        let grown = i128::from(self.row(tick) - self.row(place.tick)) << FRACTION_BITS;
        Place {
            tick,
            // Within the corridor, or near it just past its end: far below 64 bits.
            off: saturated(moved - grown),
            speed: saturated(i128::from(place.speed) + i128::from(change) * ticks as i128),
        }
    }
}

fn saturated(value: i128) -> i64 {
    i64::try_from(value).unwrap_or(if value < 0 {
        i64::MIN >> 1
    } else {
        i64::MAX >> 1
    })
}
