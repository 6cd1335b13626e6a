//! When everything happens: the legs of a show with their ticks, before any phase is known.
//!
//! Every boundary is the exact sum of the durations before it, rounded once to the nearest tick, ties up, so that
//! roundings never add up. `fastest` is found here too: it counts with the worst landing and so knows no phases.

use super::LegKind;
use super::passage::{Aim, Passage};
use super::speeds::CueSpeeds;
use crate::exact::{Rational, Seconds, Speed, Ticks, round_half_up, whole};
use crate::motion::Law;
use crate::rig::{Pair, Rig};
use crate::show::{Cue, Ending, Hold, Length, Show, Transition, WrittenCue};
use num_traits::{Signed, ToPrimitive, Zero};
use std::collections::BTreeMap;

/// The longest show, in seconds: thirty days.
pub const MOST_SECONDS: i128 = 30 * 24 * 3600;

/// Something that the planner met on its way; the checks make findings of it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Remark {
    /// A leg that rounds to no tick at all.
    Short {
        /// What it is.
        kind: LegKind,
        /// The cue it belongs to.
        written: u32,
    },
    /// `hold until` a time that is past.
    Past {
        /// The cue.
        written: u32,
        /// How long past.
        by: Seconds,
    },
    /// `fastest` that no duration makes fit.
    NeverFits {
        /// The transition.
        kind: LegKind,
        /// The cue it leads to, or leaves.
        written: u32,
        /// The cue before, where there is one.
        before: Option<u32>,
    },
    /// The show is longer than thirty days at this cue.
    TooLong {
        /// The cue.
        written: u32,
    },
}

/// The boundaries that were moved to the nearest tick.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rounded {
    /// What ends at the first of them.
    pub kind: LegKind,
    /// The cue that belongs to.
    pub written: u32,
    /// The furthest that any was moved, without sign.
    pub furthest: Seconds,
    /// How many.
    pub count: u64,
}

/// A leg before its phases are known.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Slot {
    /// What it is.
    pub kind: LegKind,
    /// The number in the `cue` column.
    pub cue: u32,
    /// The cue it holds, leads to, or (run-down) leaves.
    pub written: u32,
    /// The cue before a morph.
    pub before: Option<u32>,
    /// How long it takes.
    pub ticks: Ticks,
    /// A hold whose cue before is broken: nobody knows the phases it starts with.
    pub after_gap: bool,
    /// Whether its speeds can be judged: its duration is known.
    pub sound: bool,
}

/// The schedule of a whole show.
#[derive(Clone, Debug, Default)]
pub struct Schedule {
    /// Its legs in the order of play.
    pub slots: Vec<Slot>,
    /// What was met on the way.
    pub remarks: Vec<Remark>,
    /// Boundaries off the ticks, if any.
    pub rounded: Option<Rounded>,
    /// Whether every cue and the ending has its legs.
    pub complete: bool,
}

/// Speeds at rest.
#[must_use]
pub fn at_rest() -> Pair<Speed> {
    Pair::each(|_| Speed::zero())
}

/// What a transition of this kind into (or out of) a cue has to end on.
#[must_use]
pub fn aim(rig: &Rig, speeds: &CueSpeeds, kind: LegKind, closes: bool) -> Aim {
    match kind {
        LegKind::RunDown => Aim::Close(Pair::each(|id| rig.rotor(id).index.is_some())),
        _ if closes => Aim::Close(Pair::each(|_| true)),
        _ if speeds.pose.is_some() => Aim::Pose(speeds.shares.clone()),
        _ => Aim::Free,
    }
}

type Legs = (Option<u32>, u32, LegKind);
type Motion = (
    Pair<Speed>,
    Pair<Speed>,
    Law,
    Option<crate::figure::Ratio>,
    LegKind,
);

/// Finds `fastest` once for each passage, however often it is played or written.
struct Fastest<'a> {
    rig: &'a Rig,
    speeds: &'a [Option<CueSpeeds>],
    by_legs: BTreeMap<Legs, Option<Ticks>>,
    by_motion: BTreeMap<Motion, Option<Ticks>>,
}

impl Fastest<'_> {
    fn of(&mut self, kind: LegKind, before: Option<u32>, written: u32, law: &Law) -> Option<Ticks> {
        if let Some(known) = self.by_legs.get(&(before, written, kind)) {
            return *known;
        }
        let found = self.search(kind, before, written, law);
        self.by_legs.insert((before, written, kind), found);
        found
    }

    fn search(
        &mut self,
        kind: LegKind,
        before: Option<u32>,
        written: u32,
        law: &Law,
    ) -> Option<Ticks> {
        let speeds = self.speeds.get(written as usize)?.as_ref()?;
        let (from, to) = ends(self.speeds, kind, before, written)?;
        let aim = aim(self.rig, speeds, kind, kind == LegKind::LoopMorph);
        let ratio = matches!(aim, Aim::Pose(_)).then_some(speeds.shares.ratio);
        let key = (from.clone(), to.clone(), law.clone(), ratio, kind);
        if let Some(known) = self.by_motion.get(&key) {
            return *known;
        }
        let passage = Passage {
            rig: self.rig,
            law,
            from: &from,
            to: &to,
            aim: &aim,
        };
        let found = passage.shortest();
        self.by_motion.insert(key, found);
        found
    }
}

/// Motor speeds at both ends of a transition.
#[must_use]
pub fn ends(
    speeds: &[Option<CueSpeeds>],
    kind: LegKind,
    before: Option<u32>,
    written: u32,
) -> Option<(Pair<Speed>, Pair<Speed>)> {
    let motor = |index: u32| Some(speeds.get(index as usize)?.as_ref()?.motor.clone());
    Some(match (kind, before) {
        (LegKind::RunDown, _) => (motor(written)?, at_rest()),
        (LegKind::Hold, _) => (motor(written)?, motor(written)?),
        (_, Some(before)) => (motor(before)?, motor(written)?),
        (_, None) => (at_rest(), motor(written)?),
    })
}

struct Scheduler<'a> {
    tick: &'a Seconds,
    fastest: Fastest<'a>,
    schedule: Schedule,
    /// Exact time since row 0, in ticks.
    time: Rational,
    /// `time` rounded: where the next leg starts.
    now: i128,
    /// Exact time at which the run-up ends, in ticks.
    show_start: Rational,
    /// Whether `time` can be trusted: no broken cue so far.
    known: bool,
    too_long: bool,
}

/// The schedule of `show`, whose cues have `speeds` on `rig`.
#[must_use]
pub fn schedule(show: &Show, rig: &Rig, speeds: &[Option<CueSpeeds>]) -> Schedule {
    let mut maker = Scheduler {
        tick: &rig.tick,
        fastest: Fastest {
            rig,
            speeds,
            by_legs: BTreeMap::new(),
            by_motion: BTreeMap::new(),
        },
        schedule: Schedule {
            complete: true,
            ..Schedule::default()
        },
        time: Rational::zero(),
        now: 0,
        show_start: Rational::zero(),
        known: true,
        too_long: false,
    };
    maker.run(show);
    maker.schedule
}

impl Scheduler<'_> {
    fn run(&mut self, show: &Show) {
        let good = |index: u32| match show.cues.get(index as usize) {
            Some(WrittenCue::Good(cue)) => Some(&**cue),
            _ => None,
        };
        let mut before = None;
        for (position, &written) in show.order.iter().enumerate() {
            let number = u32::try_from(position + 1).unwrap_or(u32::MAX);
            let Some(cue) = good(written) else {
                (self.known, self.schedule.complete) = (false, false);
                before = None;
                continue;
            };
            let first = position == 0;
            if first {
                self.transition(LegKind::RunUp, 0, written, None, &show.run_up);
                self.show_start = self.time.clone();
            } else if before.is_some() {
                self.transition(LegKind::Morph, number, written, before, &cue.morph);
            }
            self.hold(number, written, cue, !first && before.is_none());
            before = Some(written);
            if self.too_long {
                return;
            }
        }
        let number = u32::try_from(show.order.len() + 1).unwrap_or(u32::MAX);
        let first = show
            .order
            .first()
            .copied()
            .filter(|index| good(*index).is_some());
        match (&show.ending, before, first) {
            (Some(Ending::Loop { morph, .. }), Some(_), Some(first)) => {
                self.transition(LegKind::LoopMorph, number, first, before, morph);
            }
            (Some(Ending::RunDown(transition)), Some(last), _) => {
                self.transition(LegKind::RunDown, number, last, None, transition);
            }
            _ => self.schedule.complete = false,
        }
    }

    fn transition(
        &mut self,
        kind: LegKind,
        cue: u32,
        written: u32,
        before: Option<u32>,
        transition: &Transition,
    ) {
        let mut sound = true;
        let duration = match &transition.length {
            Length::Given(duration) => self.in_ticks(duration),
            Length::Fastest { at_least } => {
                let shortest = self.fastest.of(kind, before, written, &transition.law);
                if shortest.is_none() {
                    sound = false;
                    self.schedule.remarks.push(Remark::NeverFits {
                        kind,
                        written,
                        before,
                    });
                }
                let least = at_least
                    .as_ref()
                    .map_or_else(Rational::zero, |least| self.in_ticks(least).ceil());
                whole(i128::from(shortest.map_or(1, |ticks| ticks.0))).max(least)
            }
        };
        let slot = Slot {
            kind,
            cue,
            written,
            before,
            ticks: Ticks(0),
            after_gap: false,
            sound,
        };
        self.advance(slot, duration);
    }

    fn hold(&mut self, cue: u32, written: u32, what: &Cue, after_gap: bool) {
        let duration = match &what.hold {
            Hold::For(duration) => self.in_ticks(duration),
            Hold::Until(until) => {
                let left = &self.show_start + self.in_ticks(until) - &self.time;
                if self.known && left.is_negative() {
                    let by = self.seconds(&-left);
                    self.schedule.complete = false;
                    self.schedule.remarks.push(Remark::Past { written, by });
                    whole(1)
                } else if self.known {
                    left
                } else {
                    // The time before it is not known; from here on it is, again.
                    self.known = true;
                    left.max(whole(1))
                }
            }
        };
        let slot = Slot {
            kind: LegKind::Hold,
            cue,
            written,
            before: None,
            ticks: Ticks(0),
            after_gap,
            sound: true,
        };
        self.advance(slot, duration);
    }

    /// Ends a leg `duration` ticks later, the boundary rounded once.
    fn advance(&mut self, slot: Slot, duration: Rational) {
        let Slot { kind, written, .. } = slot;
        self.time += duration;
        let end = round_half_up(&self.time).to_i128().unwrap_or(i128::MAX);
        if !self.time.is_integer() {
            let moved = self.seconds(&(whole(end) - &self.time).abs());
            let rounded = self.schedule.rounded.get_or_insert(Rounded {
                kind,
                written,
                furthest: Seconds::zero(),
                count: 0,
            });
            rounded.count += 1;
            if moved > rounded.furthest {
                rounded.furthest = moved;
            }
        }
        let ticks = u64::try_from(end - self.now).unwrap_or(0);
        self.now = end;
        if ticks == 0 {
            self.schedule.complete = false;
            self.schedule.remarks.push(Remark::Short { kind, written });
        }
        if *self.seconds(&self.time).value() > whole(MOST_SECONDS) {
            self.too_long = true;
            self.schedule.complete = false;
            self.schedule.remarks.push(Remark::TooLong { written });
        }
        self.schedule.slots.push(Slot {
            ticks: Ticks(ticks),
            ..slot
        });
    }

    fn in_ticks(&self, duration: &Seconds) -> Rational {
        duration.value() / self.tick.value()
    }

    fn seconds(&self, ticks: &Rational) -> Seconds {
        Seconds::new(ticks * self.tick.value())
    }
}
