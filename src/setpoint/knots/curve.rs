//! The rows of a curved move, stretch by stretch, for the search.

use super::corridor::{Corridor, MOST_ROWS, Place};
use super::hold::Hold;
use super::search::{Search, Start};
use super::steps::{Effort, Steps, fresh};
use super::{FRACTION_BITS, Piece, Tolerance};
use crate::plan::Leg;
use crate::rig::{Pair, RotorId};
use crate::setpoint::rows::Rows;

/// Finds the pieces of those rotors of a leg that have none yet.
pub(super) fn search(
    rows: &Rows<'_>,
    leg: &Leg,
    entries: &Pair<Option<Hold>>,
    counts: Pair<u32>,
    (tolerance, effort): (Tolerance, Effort),
    pieces: &mut Pair<Vec<Piece>>,
) {
    let wanted = Pair::each(|id| pieces.of(id).is_empty());
    if !wanted.a && !wanted.b {
        return;
    }
    let mut ways = Pair::each(|id| Way::new(*entries.of(id), *counts.of(id)));
    let mut first = 0;
    while first < leg.ticks.0 {
        let length = (leg.ticks.0 - first).min(MOST_ROWS);
        let from = leg.start.0 + first;
        let stretch = Stretch::read(rows, from..from + length);
        let last = first + length == leg.ticks.0;
        for id in RotorId::BOTH {
            if *wanted.of(id) {
                let corridor =
                    Corridor::new(stretch.unwrapped.of(id).clone(), tolerance, *counts.of(id));
                let found =
                    ways.of_mut(id)
                        .go(&corridor, *stretch.first.of(id), effort, (length, last));
                pieces.of_mut(id).extend(found);
            }
        }
        first += length;
    }
}

/// The rows of a stretch.
#[derive(Default)]
struct Stretch {
    /// Counts of the first row.
    first: Pair<u32>,
    /// Unwrapped counts of every row, less the first, and of where the last step leads.
    unwrapped: Pair<Vec<i64>>,
}

impl Stretch {
    fn read(rows: &Rows<'_>, ticks: std::ops::Range<u64>) -> Self {
        let mut stretch = Self::default();
        let mut sums: Pair<i64> = Pair::default();
        rows.each(ticks, |row| {
            for id in RotorId::BOTH {
                let rotor = row.rotors.of(id);
                if stretch.unwrapped.of(id).is_empty() {
                    *stretch.first.of_mut(id) = rotor.counts;
                }
                stretch.unwrapped.of_mut(id).push(*sums.of(id));
                *sums.of_mut(id) = sums.of(id).saturating_add(rotor.step);
            }
        });
        for id in RotorId::BOTH {
            stretch.unwrapped.of_mut(id).push(*sums.of(id));
        }
        stretch
    }
}

/// One rotor on its way through the stretches of a move.
struct Way {
    entry: Option<Hold>,
    counts: u32,
    start: Option<Start>,
    steps: Option<Steps>,
}

impl Way {
    fn new(entry: Option<Hold>, counts: u32) -> Self {
        Self {
            entry,
            counts,
            start: None,
            steps: None,
        }
    }

    fn go(
        &mut self,
        corridor: &Corridor,
        row: u32,
        effort: Effort,
        (length, last): (u64, bool),
    ) -> Vec<Piece> {
        let start = self.start.unwrap_or_else(|| self.first(corridor, row));
        let steps = Steps::of(corridor).after(self.steps);
        self.steps = Some(steps);
        let length = usize::try_from(length).unwrap_or(usize::MAX);
        let (pieces, leads) =
            Search::new(corridor, steps, effort, length, last).run(start, i64::from(row));
        self.start = Some(leads);
        pieces
    }

    /// Where the move is entered: as the line before runs into it, else with a phase and a speed of its own.
    fn first(&self, corridor: &Corridor, row: u32) -> Start {
        let half = 1_i64 << (FRACTION_BITS - 1);
        let runs_in = self.entry.map(|entry| Place {
            tick: 0,
            off: i64::try_from(entry.phase & ((1 << FRACTION_BITS) - 1)).unwrap_or(half),
            speed: entry.speed,
        });
        let exact = |entry: &Hold| {
            (entry.phase >> FRACTION_BITS).rem_euclid(i128::from(self.counts)) == i128::from(row)
        };
        match runs_in.filter(|place| corridor.reach(*place, 1) > 1) {
            Some(place) if self.entry.as_ref().is_some_and(exact) => Start {
                place,
                change: 0,
                set: false,
            },
            _ => Start {
                place: fresh(corridor, 0).0,
                change: 0,
                set: true,
            },
        }
    }
}
