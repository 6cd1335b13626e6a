//! The way from a schedule to the legs of a plan: where every move ends, exactly.

use super::landing;
use super::passage::{Aim, Passage};
use super::schedule::{Remark, Rounded, Schedule, Slot, ends, schedule};
use super::speeds::CueSpeeds;
use super::{Leg, LegKind, Plan};
use crate::exact::{GridPhase, Rational, Turns, round_half_up, whole};
use crate::motion::{Law, Shape};
use crate::rig::{Pair, Rig};
use crate::show::{Ending, Show, WrittenCue};
use num_traits::ToPrimitive;
use std::sync::Arc;

/// A plan as far as it could be made.
#[derive(Clone, Debug)]
pub struct Draft {
    /// The plan; it has gaps where it is not `complete`.
    pub plan: Plan,
    /// For each leg, whether its own speeds and landing are known, so that it can be judged.
    pub sound: Vec<bool>,
    /// For each leg, whether no candidate correction kept every one-way rotor on its way.
    pub no_way: Vec<bool>,
    /// What was met on the way.
    pub remarks: Vec<Remark>,
    /// Boundaries off the ticks, if any.
    pub rounded: Option<Rounded>,
    /// Whether every cue and the ending could be planned.
    pub complete: bool,
}

/// Plans `show` on `rig`; from cue number `from` on, where one is given (1 to the number of cues).
#[must_use]
pub fn draft(show: &Arc<Show>, rig: &Arc<Rig>, from: Option<u32>) -> Draft {
    let mut speeds: Vec<Option<CueSpeeds>> = vec![None; show.cues.len()];
    for &written in &show.order {
        let index = written as usize;
        if let (Some(slot @ None), Some(WrittenCue::Good(cue))) =
            (speeds.get_mut(index), show.cues.get(index))
        {
            *slot = Some(CueSpeeds::new(cue, rig));
        }
    }
    let whole_show = schedule(show, rig, &speeds);
    let Schedule {
        slots,
        remarks,
        rounded,
        complete,
    } = match from {
        Some(cue) if cue > 1 => turned(show, rig, &speeds, whole_show, cue),
        _ => whole_show,
    };
    let looped = matches!(show.ending, Some(Ending::Loop { .. }));
    let plan = Plan {
        rig: Arc::clone(rig),
        show: Arc::clone(show),
        speeds,
        legs: Vec::with_capacity(slots.len()),
        rest: Pair::each(|_| Turns::zero()),
        loop_leg: looped.then_some(1),
    };
    let mut lander = Lander {
        draft: Draft {
            plan,
            sound: Vec::with_capacity(slots.len()),
            no_way: Vec::with_capacity(slots.len()),
            remarks,
            rounded,
            complete,
        },
    };
    let last = slots.len().saturating_sub(1);
    for (index, slot) in slots.iter().enumerate() {
        let closes = looped && complete && index == last;
        if lander.add(slot, closes).is_none() {
            lander.draft.complete = false;
        }
    }
    lander.draft
}

/// The schedule of a show that starts at cue number `cue`: a run-up into it, then as in the whole show; a loop goes on
/// past its end to the cue's own morph, a show with a run-down ends as ever. Numbers and durations stay.
fn turned(
    show: &Show,
    rig: &Rig,
    speeds: &[Option<CueSpeeds>],
    whole_show: Schedule,
    cue: u32,
) -> Schedule {
    let first = whole_show
        .slots
        .iter()
        .position(|slot| slot.kind == LegKind::Hold && slot.cue == cue);
    let Some(first) = first else {
        return Schedule {
            complete: false,
            ..whole_show
        };
    };
    let Some(hold) = whole_show.slots.get(first) else {
        return Schedule {
            complete: false,
            ..whole_show
        };
    };
    // A show of that one cue alone has the run-up that is needed; of its findings only those of the run-up count.
    let alone = Show {
        order: vec![hold.written],
        ..show.clone()
    };
    let run_up = schedule(&alone, rig, speeds);
    let Schedule {
        remarks,
        rounded,
        complete,
        slots,
    } = whole_show;
    let mut turned: Vec<Slot> = run_up.slots.into_iter().take(1).collect();
    let never = run_up.remarks.into_iter().filter(|remark| {
        matches!(
            remark,
            Remark::NeverFits {
                kind: LegKind::RunUp,
                ..
            }
        )
    });
    let mut remarks: Vec<Remark> = remarks
        .into_iter()
        .filter(|remark| {
            !matches!(
                remark,
                Remark::NeverFits {
                    kind: LegKind::RunUp,
                    ..
                }
            )
        })
        .collect();
    remarks.extend(never);
    turned.extend(slots.iter().skip(first).copied());
    if matches!(show.ending, Some(Ending::Loop { .. })) {
        // Without the run-up: from cue 1's hold to this cue's own morph, which now closes the loop.
        turned.extend(slots.iter().take(first).skip(1).copied());
    }
    Schedule {
        slots: turned,
        remarks,
        rounded,
        complete,
    }
}

struct Lander {
    draft: Draft,
}

impl Lander {
    fn add(&mut self, slot: &Slot, closes: bool) -> Option<()> {
        let plan = &self.draft.plan;
        let index = plan.legs.len();
        let start = plan.total();
        let speeds = plan.speeds.get(slot.written as usize)?.as_ref()?;
        let beam = level(plan, slot);
        let leg = Leg {
            kind: slot.kind,
            cue: slot.cue,
            written: slot.written,
            start,
            ticks: slot.ticks,
            beam,
            landing: Pair::default(),
        };
        let mut no_way = false;
        let landing = if slot.kind == LegKind::Hold {
            if slot.after_gap {
                self.after_gap(speeds)?
            } else {
                plan.legs.last()?.landing
            }
        } else {
            let natural = self.natural(index, slot)?;
            if slot.kind == LegKind::RunDown {
                let rest = Pair {
                    a: landing::at_rest(&plan.rig.rotors.a, &natural.a)?,
                    b: landing::at_rest(&plan.rig.rotors.b, &natural.b)?,
                };
                self.draft.plan.rest = rest;
                Pair::default()
            } else if closes {
                let first = plan.legs.get(plan.loop_leg?)?.landing;
                Pair {
                    a: landing::closed(&plan.rig.rotors.a, first.a, &natural.a)?,
                    b: landing::closed(&plan.rig.rotors.b, first.b, &natural.b)?,
                }
            } else {
                let (landing, way) = self.pose(slot, speeds, &natural)?;
                no_way = !way;
                landing
            }
        };
        self.draft.plan.legs.push(Leg { landing, ..leg });
        self.draft.sound.push(slot.sound && slot.ticks.0 > 0);
        self.draft.no_way.push(no_way);
        Some(())
    }

    /// Phases of a hold whose past is not known: any pair in the wanted pose.
    fn after_gap(&self, speeds: &CueSpeeds) -> Option<Pair<GridPhase>> {
        let zero = Pair::each(|_| Turns::zero());
        match &speeds.pose {
            Some(pose) => landing::on_grid(speeds.shares.ratio, pose, &zero),
            None => landing::free(&zero),
        }
    }

    /// Unwrapped mirror phases to which the speeds alone would lead: start + v0·T + Δv·T·S(1).
    fn natural(&self, index: usize, slot: &Slot) -> Option<Pair<Turns>> {
        let plan = &self.draft.plan;
        let time = slot.ticks.time(plan.tick());
        let (from, to) = ends(&plan.speeds, slot.kind, slot.before, slot.written)?;
        let law = &self.transition_of(slot)?;
        Some(Pair::each(|id| {
            // An `scurve` is symmetric whatever its share.
            let integral = Shape::Law(law.clone()).integral();
            let (from, to) = (from.of(id), to.of(id));
            let change = (to - from).over(&time).times(&integral);
            let motor = &(&plan.phase_before(index, id) + &from.over(&time)) + &change;
            plan.rig.rotor(id).mirror_phase(&motor)
        }))
    }

    fn transition_of(&self, slot: &Slot) -> Option<Law> {
        let plan = &self.draft.plan;
        plan.transition_for(slot.kind, slot.written)
            .map(|transition| transition.law.clone())
    }

    /// Where a morph into a cue lands, and whether every one-way rotor keeps its way.
    fn pose(
        &self,
        slot: &Slot,
        speeds: &CueSpeeds,
        natural: &Pair<Turns>,
    ) -> Option<(Pair<GridPhase>, bool)> {
        let plan = &self.draft.plan;
        let Some(pose) = &speeds.pose else {
            return Some((landing::free(natural)?, true));
        };
        let shares = &speeds.shares;
        let delta = landing::gap(shares.ratio, pose, natural);
        let law = self.transition_of(slot)?;
        let (from, to) = ends(&plan.speeds, slot.kind, slot.before, slot.written)?;
        let aim = Aim::Pose(shares.clone());
        let passage = Passage {
            rig: &plan.rig,
            law: &law,
            from: &from,
            to: &to,
            aim: &aim,
        };
        let chosen = passage.correction(shares, slot.ticks, &delta);
        let way = chosen.is_some();
        let correction = chosen.unwrap_or_else(|| shares.split_of(&delta));
        let ends = Pair {
            a: &natural.a + &correction.a,
            b: &natural.b + &correction.b,
        };
        Some((landing::on_grid(shares.ratio, pose, &ends)?, way))
    }
}

/// The laser level of a leg, 0 to 255: the share of 255, half up; dark transitions have none.
fn level(plan: &Plan, slot: &Slot) -> u8 {
    let Some(WrittenCue::Good(cue)) = plan.show.cues.get(slot.written as usize) else {
        return 0;
    };
    let dark = match slot.kind {
        LegKind::Hold => false,
        LegKind::RunUp | LegKind::RunDown => true,
        _ => plan
            .transition_for(slot.kind, slot.written)
            .is_none_or(|transition| transition.dark),
    };
    if dark {
        return 0;
    }
    let share: &Rational = &cue.beam;
    round_half_up(&(share * whole(255)))
        .to_u8()
        .unwrap_or(u8::MAX)
}
