//! The way from a schedule to the legs of a plan: where every move ends, exactly.

use super::landing;
use super::passage::{Aim, Passage};
use super::schedule::{Remark, Rounded, Schedule, Slot, ends, schedule};
use super::speeds::CueSpeeds;
use super::{Leg, LegKind, Plan};
use crate::exact::{GridPhase, Rational, Ticks, Turns, round_half_up, whole};
use crate::motion::Shape;
use crate::rig::{Pair, Rig, RotorId, Turning};
use crate::show::{Ending, Show, WrittenCue};
use num_traits::ToPrimitive;
use std::collections::BTreeMap;
use std::collections::btree_map::Entry;
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
        gains: BTreeMap::new(),
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

/// What is alike in every play of a transition: its kind, the hold before and its ticks, the cue, its own ticks.
type Passed = (LegKind, Option<(u32, Ticks)>, u32, Ticks);

struct Lander {
    draft: Draft,
    /// Mirror turns through a hold and the transition after it, found once for all its plays.
    gains: BTreeMap<Passed, Pair<Turns>>,
}

/// Unwrapped mirror phases to which the speeds alone would lead: from where the hold before landed, through that hold
/// and the transition, v·t + v0·T + Δv·T·S(1).
fn natural(
    plan: &Plan,
    gains: &mut BTreeMap<Passed, Pair<Turns>>,
    slot: &Slot,
) -> Option<Pair<Turns>> {
    let hold = plan.legs.last();
    let held = hold.map(|hold| (hold.written, hold.ticks));
    let gain = match gains.entry((slot.kind, held, slot.written, slot.ticks)) {
        Entry::Occupied(known) => known.into_mut(),
        Entry::Vacant(new) => {
            new.insert(gain(plan, slot, hold.map_or(Ticks(0), |hold| hold.ticks))?)
        }
    };
    Some(Pair::each(|id| {
        let start = hold.map_or_else(
            || plan.rig.rotor(id).index_angle(),
            |hold| hold.landing.of(id).turns(),
        );
        &start + gain.of(id)
    }))
}

/// Mirror turns that the speeds alone give in the hold before a transition, of `held` ticks, and in the transition.
fn gain(plan: &Plan, slot: &Slot, held: Ticks) -> Option<Pair<Turns>> {
    let (hold, time) = (held.time(plan.tick()), slot.ticks.time(plan.tick()));
    let (from, to) = ends(&plan.speeds, slot.kind, slot.before, slot.written)?;
    let law = &plan.transition_for(slot.kind, slot.written)?.law;
    // An `scurve` is symmetric whatever its share.
    let integral = Shape::Law(law.clone()).integral();
    Some(Pair::each(|id| {
        let (from, to) = (from.of(id), to.of(id));
        let changed = (to - from).over(&time).times(&integral);
        let motor = &(&from.over(&hold) + &from.over(&time)) + &changed;
        motor.times(&plan.rig.rotor(id).motor_per_mirror().recip())
    }))
}

impl Lander {
    fn add(&mut self, slot: &Slot, closes: bool) -> Option<()> {
        let plan = &self.draft.plan;
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
            let natural = natural(plan, &mut self.gains, slot)?;
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

    /// Where a morph into a cue lands, and whether every one-way rotor keeps its way.
    fn pose(
        &self,
        slot: &Slot,
        speeds: &CueSpeeds,
        natural: &Pair<Turns>,
    ) -> Option<(Pair<GridPhase>, bool)> {
        let Some(pose) = &speeds.pose else {
            return Some((landing::free(natural)?, true));
        };
        let shares = &speeds.shares;
        let delta = landing::gap(shares.ratio, pose, natural);
        let chosen = self.correction(slot, speeds, &delta)?;
        let way = chosen.is_some();
        let correction = chosen.unwrap_or_else(|| shares.split_of(&delta));
        let ends = Pair {
            a: &natural.a + &correction.a,
            b: &natural.b + &correction.b,
        };
        Some((landing::on_grid(shares.ratio, pose, &ends)?, way))
    }

    /// The correction for the gap δ, or (inside) none where every candidate turns a one-way rotor back.
    fn correction(
        &self,
        slot: &Slot,
        speeds: &CueSpeeds,
        delta: &Rational,
    ) -> Option<Option<Pair<Turns>>> {
        let plan = &self.draft.plan;
        let shares = &speeds.shares;
        let both_ways = |id: RotorId| plan.rig.rotor(id).turns.value == Turning::Both;
        if RotorId::BOTH.into_iter().all(both_ways) {
            return Some(Some(shares.split_of(delta)));
        }
        let (from, to) = ends(&plan.speeds, slot.kind, slot.before, slot.written)?;
        let aim = Aim::Pose(shares.clone());
        let passage = Passage {
            rig: &plan.rig,
            law: &plan.transition_for(slot.kind, slot.written)?.law,
            from: &from,
            to: &to,
            aim: &aim,
        };
        Some(passage.correction(shares, slot.ticks, delta))
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
