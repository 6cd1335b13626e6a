//! The row of every tick.

use super::beam::Beam;
use super::track::{Sample, Track, exact_counts, exact_sample};
use crate::exact::Rational;
use crate::plan::{Leg, LegKind, Plan};
use crate::rig::{Pair, RotorId};
use num_traits::Zero;
use std::ops::Range;

/// One rotor's part of a row.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct RotorRow {
    /// Motor phase in 10⁻¹² turns, rounded half up, in 0 … 10¹² − 1.
    pub turns: u64,
    /// Motor speed in 10⁻⁶ rpm, rounded half up.
    pub rpm: i64,
    /// Position set-point: ⌊unwrapped phase · counts + ½⌋ mod counts.
    pub counts: u32,
    /// Counts to move until the next row; their running sum is the unwrapped phase in counts.
    pub step: i64,
}

/// The set-point of one tick.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Row {
    /// Ticks since row 0.
    pub tick: u64,
    /// 0 in the run-up, then the cue's place in the order of play.
    pub cue: u32,
    /// Both rotors.
    pub rotors: Pair<RotorRow>,
    /// Laser level to send now, the latency taken off.
    pub beam: u8,
}

/// Every row of a plan's table, computed on demand.
pub struct Rows<'p> {
    plan: &'p Plan,
    beam: Beam<'p>,
}

/// Row `tick` of the loop start, or the end, seen from the row before it: unwrapped counts of both rotors.
type Next = Pair<i128>;

impl<'p> Rows<'p> {
    /// The rows of `plan`.
    #[must_use]
    pub fn new(plan: &'p Plan) -> Self {
        Self {
            plan,
            beam: Beam::new(plan),
        }
    }

    /// How many rows the table has.
    #[must_use]
    pub fn count(&self) -> u64 {
        self.plan.rows()
    }

    /// Hands the rows of `ticks`, in order, to `take`. Ticks past the table are left out.
    ///
    /// Any range gives the same rows as the same ticks within any other: each leg is entered from its own exact
    /// start. Cost: one binary search over the legs, two moves a leg touched, then a constant a row.
    pub fn each(&self, ticks: Range<u64>, mut take: impl FnMut(&Row)) {
        let mut tick = ticks.start;
        let end = ticks.end.min(self.count());
        let mut beam = (0, tick);
        let after = self.plan.legs.partition_point(|leg| leg.start.0 <= tick);
        let mut index = after.saturating_sub(1);
        while tick < end {
            match self.plan.legs.get(index) {
                Some(leg) if tick < leg.start.0 + leg.ticks.0 => {
                    let until = end.min(leg.start.0 + leg.ticks.0);
                    if !self.leg_rows(index, leg, tick..until, &mut beam, &mut take) {
                        return;
                    }
                    tick = until;
                    index += 1;
                }
                Some(_) if index + 1 < self.plan.legs.len() => index += 1,
                // Past the last leg there is one row at most: the end of a run-down.
                _ => {
                    take(&self.last_row(tick));
                    return;
                }
            }
        }
    }

    /// The rows of `ticks`, all at once: for tests and short tables.
    #[must_use]
    pub fn collect(&self, ticks: Range<u64>) -> Vec<Row> {
        let mut rows = Vec::new();
        self.each(ticks, |row| rows.push(*row));
        rows
    }

    fn leg_rows(
        &self,
        index: usize,
        leg: &Leg,
        ticks: Range<u64>,
        beam: &mut (u8, u64),
        take: &mut impl FnMut(&Row),
    ) -> bool {
        let Some(moves) = self.plan.moves(index) else {
            return false;
        };
        let first = ticks.start - leg.start.0;
        let tick = self.plan.tick();
        let mut tracks =
            Pair::each(|id| Track::new(moves.of(id), tick, self.plan.rig.rotor(id).counts, first));
        let leg_end = leg.start.0 + leg.ticks.0;
        let mut now = samples(&tracks);
        for tick in ticks {
            let next = if tick + 1 == leg_end {
                Reached::End(self.counts_at(moves.a.end.value(), moves.b.end.value()))
            } else {
                tracks.a.advance();
                tracks.b.advance();
                Reached::Inside(samples(&tracks))
            };
            if tick >= beam.1 {
                *beam = self.beam.at(tick);
            }
            let ahead = next.counts();
            take(&Row {
                tick,
                cue: leg.cue,
                rotors: Pair {
                    a: rotor_row(&now.a, ahead.a),
                    b: rotor_row(&now.b, ahead.b),
                },
                beam: beam.0,
            });
            if let Reached::Inside(samples) = next {
                now = samples;
            }
        }
        true
    }

    fn counts_at(&self, a: &Rational, b: &Rational) -> Next {
        Pair {
            a: exact_counts(a, self.plan.rig.rotors.a.counts),
            b: exact_counts(b, self.plan.rig.rotors.b.counts),
        }
    }

    /// The row after a run-down: at rest, dark, nothing more to move.
    fn last_row(&self, tick: u64) -> Row {
        let last = self.plan.legs.last();
        let rotors = Pair::each(|id| {
            let counts = self.plan.rig.rotor(id).counts;
            let phase = self.end_phase(id);
            let sample = exact_sample(&phase, &Rational::zero(), counts);
            rotor_row(&sample, sample.unwrapped)
        });
        Row {
            tick,
            cue: last.map_or(0, |leg| leg.cue),
            rotors,
            beam: 0,
        }
    }

    fn end_phase(&self, id: RotorId) -> Rational {
        match self.plan.legs.last() {
            Some(leg) if leg.kind == LegKind::RunDown => self.plan.rest.of(id).value().clone(),
            _ => self
                .plan
                .phase_before(self.plan.legs.len(), id)
                .value()
                .clone(),
        }
    }
}

/// The rotors one tick on: still inside the leg, or at its exact end, which only the step needs.
enum Reached {
    Inside(Pair<Sample>),
    End(Next),
}

impl Reached {
    fn counts(&self) -> Next {
        match self {
            Reached::Inside(samples) => Pair {
                a: samples.a.unwrapped,
                b: samples.b.unwrapped,
            },
            Reached::End(next) => *next,
        }
    }
}

fn samples(tracks: &Pair<Track>) -> Pair<Sample> {
    Pair {
        a: tracks.a.sample(),
        b: tracks.b.sample(),
    }
}

fn rotor_row(sample: &Sample, next: i128) -> RotorRow {
    let step = next - sample.unwrapped;
    RotorRow {
        turns: sample.turns,
        rpm: sample.rpm,
        counts: sample.counts,
        step: i64::try_from(step).unwrap_or(if step < 0 { i64::MIN } else { i64::MAX }),
    }
}
