//! Show + Rig → [`Plan`]: exact moves, landing, seam, fastest.
//!
//! A plan keeps only what cannot be derived (where each hold begins, how long each leg takes), about a hundred
//! bytes a leg, so that a million cues fit easily; [`Plan::moves`] makes the exact moves of a leg on demand.

pub mod build;
pub mod landing;
pub mod passage;
pub mod schedule;
mod speeds;

pub use speeds::CueSpeeds;

use crate::exact::{GridPhase, Seconds, Speed, Ticks, Turns};
use crate::motion::{LawKind, Move, Shape};
use crate::rig::{Pair, Rig, RotorId};
use crate::show::{Cue, Ending, Show, Transition, WrittenCue};
use passage::{Aim, Passage};
use std::sync::Arc;

/// What a stretch of time is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum LegKind {
    /// From rest to the first cue.
    RunUp,
    /// From one cue to the next.
    Morph,
    /// A figure stands.
    Hold,
    /// From the last cue back into the first one's hold, by the `loop` statement's morph.
    LoopMorph,
    /// From the last cue to rest.
    RunDown,
}

/// A stretch of time in which both rotors make one move each.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Leg {
    /// What it is.
    pub kind: LegKind,
    /// The number in the table's `cue` column: 0 in the run-up, then the cue's place in the order of play,
    /// the loop's morph and the run-down going on with the count.
    pub cue: u32,
    /// Which written cue (index into [`Show::cues`]) holds or is led to; in a run-down the one it leaves.
    pub written: u32,
    /// Its first tick.
    pub start: Ticks,
    /// How many ticks it takes, at least one.
    pub ticks: Ticks,
    /// Laser level, 0 to 255, before the latency is taken off.
    pub beam: u8,
    /// Unwrapped mirror phases on the grid: of a hold at its start, of a transition at its end;
    /// of no meaning in a run-down, which may end off the grid, see [`Plan::rest`].
    pub landing: Pair<GridPhase>,
}

/// The exact motion of a whole show.
#[derive(Clone, Debug)]
pub struct Plan {
    /// The machine.
    pub rig: Arc<Rig>,
    /// What it shall do.
    pub show: Arc<Show>,
    /// Speeds of each written cue; `None` where it is broken or never played.
    pub speeds: Vec<Option<CueSpeeds>>,
    /// Every leg in the order of play, without gaps in time.
    pub legs: Vec<Leg>,
    /// Unwrapped motor phases at the end of the run-down; zero where there is none.
    pub rest: Pair<Turns>,
    /// Index of the leg where the loop starts (the hold of the cue played first); `None` with a run-down.
    pub loop_leg: Option<usize>,
}

impl Plan {
    /// Spacing of set-points.
    #[must_use]
    pub fn tick(&self) -> &Seconds {
        &self.rig.tick
    }
    /// Ticks of the whole table: the last tick of a run-down, or the tick that would be the loop start again.
    #[must_use]
    pub fn total(&self) -> Ticks {
        self.legs
            .last()
            .map_or(Ticks(0), |leg| Ticks(leg.start.0 + leg.ticks.0))
    }
    /// The tick at which the loop starts: the first row of the first cue's hold; `None` with a run-down.
    #[must_use]
    pub fn loop_start(&self) -> Option<Ticks> {
        self.loop_leg
            .and_then(|leg| self.legs.get(leg))
            .map(|leg| leg.start)
    }
    /// Set-point rows of the table: [`Plan::total`] of a loop, one more with a run-down.
    #[must_use]
    pub fn rows(&self) -> u64 {
        self.total().0 + u64::from(self.loop_leg.is_none())
    }
    /// The end of the run-up, from which show time counts.
    #[must_use]
    pub fn show_start(&self) -> Ticks {
        self.legs.first().map_or(Ticks(0), |leg| leg.ticks)
    }
    /// The written cue that a leg holds, leads to or (run-down) leaves.
    #[must_use]
    pub fn cue(&self, leg: &Leg) -> Option<&Cue> {
        match self.show.cues.get(leg.written as usize) {
            Some(WrittenCue::Good(cue)) => Some(cue),
            _ => None,
        }
    }
    /// The speeds of the written cue of a leg.
    #[must_use]
    pub fn speeds_of(&self, leg: &Leg) -> Option<&CueSpeeds> {
        self.speeds
            .get(leg.written as usize)
            .and_then(Option::as_ref)
    }
    /// The transition that a leg follows; `None` for a hold.
    #[must_use]
    pub fn transition(&self, leg: &Leg) -> Option<&Transition> {
        self.transition_for(leg.kind, leg.written)
    }
    pub(crate) fn transition_for(&self, kind: LegKind, written: u32) -> Option<&Transition> {
        match kind {
            LegKind::Hold => None,
            LegKind::RunUp => Some(&self.show.run_up),
            LegKind::Morph => match self.show.cues.get(written as usize) {
                Some(WrittenCue::Good(cue)) => Some(&cue.morph),
                _ => None,
            },
            LegKind::LoopMorph => match &self.show.ending {
                Some(Ending::Loop { morph, .. }) => Some(morph),
                _ => None,
            },
            LegKind::RunDown => match &self.show.ending {
                Some(Ending::RunDown(transition)) => Some(transition),
                _ => None,
            },
        }
    }
    /// Motor speed at the start of a leg: the speed that the leg before ends with.
    #[must_use]
    pub fn speed_before(&self, index: usize, rotor: RotorId) -> Speed {
        match (index.checked_sub(1), self.legs.get(index)) {
            (_, Some(leg)) if leg.kind == LegKind::Hold => self.speed_after(leg, rotor),
            (Some(before), _) => self
                .legs
                .get(before)
                .map_or_else(Speed::zero, |leg| self.speed_after(leg, rotor)),
            (None, _) => Speed::zero(),
        }
    }
    fn speed_after(&self, leg: &Leg, rotor: RotorId) -> Speed {
        match (leg.kind, self.speeds_of(leg)) {
            (LegKind::RunDown, _) | (_, None) => Speed::zero(),
            (_, Some(speeds)) => speeds.motor.of(rotor).clone(),
        }
    }
    /// The unwrapped motor phase at the end of a leg.
    #[must_use]
    pub fn phase_after(&self, index: usize, rotor: RotorId) -> Turns {
        let Some(leg) = self.legs.get(index) else {
            return Turns::zero();
        };
        match leg.kind {
            LegKind::RunDown => self.rest.of(rotor).clone(),
            LegKind::Hold => {
                let held = self
                    .speed_after(leg, rotor)
                    .over(&leg.ticks.time(self.tick()));
                &self.phase_before(index, rotor) + &held
            }
            _ => self.landed(leg, rotor),
        }
    }
    /// The unwrapped motor phase at the start of a leg; 0 at the start of the run-up.
    #[must_use]
    pub fn phase_before(&self, index: usize, rotor: RotorId) -> Turns {
        match (index.checked_sub(1), self.legs.get(index)) {
            (_, Some(leg)) if leg.kind == LegKind::Hold => self.landed(leg, rotor),
            (Some(before), _) => self.phase_after(before, rotor),
            (None, _) => Turns::zero(),
        }
    }
    fn landed(&self, leg: &Leg, rotor: RotorId) -> Turns {
        self.rig
            .rotor(rotor)
            .motor_phase(&leg.landing.of(rotor).turns())
    }
    /// The exact move of one rotor in a leg.
    #[must_use]
    pub fn move_of(&self, index: usize, rotor: RotorId) -> Option<Move> {
        let leg = self.legs.get(index)?;
        let from = self.speed_before(index, rotor);
        let to = self.speed_after(leg, rotor);
        let start = self.phase_before(index, rotor);
        let end = self.phase_after(index, rotor);
        let shape = match self.transition(leg) {
            None => Shape::Hold,
            Some(transition) => self.shape(index, rotor, transition),
        };
        Some(Move::between(
            shape,
            (start, from),
            (end, to),
            leg.ticks,
            self.tick(),
        ))
    }
    /// The exact moves of both rotors in a leg; `None` past the last leg.
    #[must_use]
    pub fn moves(&self, index: usize) -> Option<Pair<Move>> {
        Some(Pair {
            a: self.move_of(index, RotorId::A)?,
            b: self.move_of(index, RotorId::B)?,
        })
    }
}

impl Plan {
    /// Whether a leg closes the loop: the last one of a show that loops.
    #[must_use]
    pub fn closes(&self, index: usize) -> bool {
        self.loop_leg.is_some() && index + 1 == self.legs.len()
    }
    /// What a transition has to end on; `None` for a hold.
    #[must_use]
    pub fn aim(&self, index: usize) -> Option<Aim> {
        let leg = self.legs.get(index)?;
        let speeds = self.speeds_of(leg)?;
        (leg.kind != LegKind::Hold)
            .then(|| schedule::aim(&self.rig, speeds, leg.kind, self.closes(index)))
    }
    fn shape(&self, index: usize, rotor: RotorId, transition: &Transition) -> Shape {
        let law = &transition.law;
        if law.kind != LawKind::Scurve {
            return Shape::Law(law.clone());
        }
        let (Some(leg), Some(aim)) = (self.legs.get(index), self.aim(index)) else {
            return Shape::Hold;
        };
        let from = Pair::each(|id| self.speed_before(index, id));
        let to = Pair::each(|id| self.speed_after(leg, id));
        let passage = Passage {
            rig: &self.rig,
            law,
            from: &from,
            to: &to,
            aim: &aim,
        };
        passage.shape(rotor, leg.ticks)
    }
}
