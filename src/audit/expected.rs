//! What every row must say, leg by leg along the plan.

use super::wanted::{RotorWanted, Track, Wanted};
use super::{Problem, Report};
use crate::exact::Rational;
use crate::plan::{Leg, Plan};
use crate::rig::Pair;
use num_traits::Zero;

/// What a row must say.
pub(super) struct RowWanted {
    pub(super) cue: u32,
    pub(super) beam: u8,
    pub(super) now: Pair<RotorWanted>,
    /// Unwrapped counts of the row after.
    pub(super) next: Pair<Wanted>,
}

/// Walks along the plan, leg by leg.
pub(super) struct Expected<'p> {
    plan: &'p Plan,
    latency: u64,
    leg: usize,
    tracks: Option<Pair<Track>>,
    /// Worked out with the row before.
    now: Option<Pair<RotorWanted>>,
}

impl<'p> Expected<'p> {
    pub(super) fn new(plan: &'p Plan, latency: u64, first: u64) -> Self {
        let begun = plan.legs.partition_point(|leg| leg.start.0 <= first);
        Self {
            plan,
            latency,
            leg: begun.saturating_sub(1),
            tracks: None,
            now: None,
        }
    }

    /// The next row asked for need not be the one after the last.
    pub(super) fn jump(&mut self) {
        self.now = None;
    }

    pub(super) fn next(&mut self, tick: u64, report: &mut Report) -> RowWanted {
        while let Some(leg) = self.plan.legs.get(self.leg) {
            if tick < leg.start.0 + leg.ticks.0 {
                return self.inside(tick, leg, report);
            }
            self.leg += 1;
            self.tracks = None;
            self.now = None;
        }
        self.at_the_end()
    }

    fn inside(&mut self, tick: u64, leg: &Leg, report: &mut Report) -> RowWanted {
        let n = tick - leg.start.0;
        let plan = self.plan;
        if self.tracks.is_none() {
            self.tracks = plan.moves(self.leg).map(|moves| {
                Pair::each(|id| {
                    let track = Track::new(moves.of(id), plan.tick(), plan.rig.rotor(id).counts);
                    if let (0, Some(gap)) = (n, track.end_gap(moves.of(id))) {
                        report.add(Problem {
                            tick: Some(tick),
                            column: format!("motion of rotor {}", id.name()),
                            wanted: "a law that leads to the end of its leg".to_owned(),
                            found: format!("one that ends {gap:e} turns beside it"),
                        });
                    }
                    track
                })
            });
        }
        let now = match self.now.take() {
            Some(now) => now,
            None if n == 0 => self.exactly(self.leg),
            None => self.at(n),
        };
        let next = if n + 1 == leg.ticks.0 {
            self.exactly(self.leg + 1)
        } else {
            self.at(n + 1)
        };
        let row = RowWanted {
            cue: leg.cue,
            beam: self.beam(tick),
            now,
            next: Pair::each(|id| next.of(id).counts),
        };
        self.now = Some(next);
        row
    }

    /// Both rotors n ticks into the present leg.
    fn at(&self, n: u64) -> Pair<RotorWanted> {
        let Some(tracks) = &self.tracks else {
            return self.exactly(self.leg);
        };
        let mut known = None;
        let a = tracks.a.at(n, &mut known);
        if !tracks.a.same_law(&tracks.b) {
            known = None;
        }
        let b = tracks.b.at(n, &mut known);
        Pair { a, b }
    }

    /// Both rotors where leg `index` starts, or at the end of the show, by the plan's exact state.
    fn exactly(&self, index: usize) -> Pair<RotorWanted> {
        Pair::each(|id| {
            let phase = self.plan.phase_before(index, id);
            let speed = self.plan.speed_before(index, id);
            let counts = self.plan.rig.rotor(id).counts;
            RotorWanted::exact(phase.value(), speed.value(), counts)
        })
    }

    /// The row after a run-down: at rest, dark, with nothing left to move.
    fn at_the_end(&self) -> RowWanted {
        let now = Pair::each(|id| {
            let phase = self.plan.phase_before(self.plan.legs.len(), id);
            let counts = self.plan.rig.rotor(id).counts;
            RotorWanted::exact(phase.value(), &Rational::zero(), counts)
        });
        RowWanted {
            cue: self.plan.legs.last().map_or(0, |leg| leg.cue),
            beam: 0,
            next: Pair::each(|id| now.of(id).counts),
            now,
        }
    }

    /// The level planned a latency later.
    fn beam(&self, tick: u64) -> u8 {
        self.planned(tick).map_or(0, |(leg, _)| leg.beam)
    }

    /// The leg whose level is sent at a tick, a latency early, and how many ticks of it are left: within the loop if there is
    /// one, else none past the end, which is dark.
    fn planned(&self, tick: u64) -> Option<(&'p Leg, u64)> {
        let total = u128::from(self.plan.total().0);
        let mut planned = u128::from(tick) + u128::from(self.latency);
        if planned >= total {
            let start = u128::from(self.plan.loop_start()?.0);
            planned = start + (planned - start) % (total - start).max(1);
        }
        let planned = u64::try_from(planned).ok()?;
        // Near by in nearly every row: the leg that plays, or the next.
        let holds = |leg: &&Leg| (leg.start.0..leg.start.0 + leg.ticks.0).contains(&planned);
        let near = self.plan.legs.iter().skip(self.leg).take(2).find(holds);
        let far = || {
            let legs = &self.plan.legs;
            let begun = legs.partition_point(|leg| leg.start.0 <= planned);
            begun.checked_sub(1).and_then(|index| legs.get(index))
        };
        let leg = near.or_else(far)?;
        Some((leg, (leg.start.0 + leg.ticks.0).saturating_sub(planned)))
    }

    /// Index of the leg of the row that was asked for last; past the last leg for the row after a run-down.
    pub(super) fn leg(&self) -> usize {
        self.leg
    }

    /// The first tick after `tick`, the one asked for last, at which another leg starts, or is sent early to the beam.
    pub(super) fn quiet_until(&self, tick: u64) -> u64 {
        let end = self.plan.legs.get(self.leg);
        let end = end.map_or(tick + 1, |leg| leg.start.0 + leg.ticks.0);
        match self.planned(tick) {
            Some((_, left)) => end.min(tick.saturating_add(left)),
            None => end,
        }
    }
}
