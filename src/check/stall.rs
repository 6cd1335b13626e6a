//! Time spent below the stall speed in a morph between cues, or the loop's.

use super::gather::Gather;
use super::limits::{Spot, before, owned};
use super::transition_place;
use super::words::speed;
use crate::exact::{Speed, Ticks, decimal, from_f64};
use crate::finding::{Code, Finding, Severity};
use crate::motion::profile::Profile;
use crate::plan::{Leg, LegKind, Plan};
use crate::rig::RotorId;
use std::collections::BTreeMap;

pub(super) struct Judge<'a> {
    plan: &'a Plan,
    /// Whether a transition between two speeds above the stall speed can dip below it for some landing: found once for
    /// all its plays, since most never can.
    dips: BTreeMap<(Spot, bool, Ticks), bool>,
}

impl<'a> Judge<'a> {
    pub(super) fn new(plan: &'a Plan) -> Self {
        Self {
            plan,
            dips: BTreeMap::new(),
        }
    }

    pub(super) fn check(&mut self, index: usize, gather: &mut Gather) {
        let plan = self.plan;
        let Some(leg) = plan.legs.get(index) else {
            return;
        };
        if !matches!(leg.kind, LegKind::Morph | LegKind::LoopMorph) {
            return;
        }
        let may_dip = self.may_dip(index, leg);
        let crossing: Vec<RotorId> = RotorId::BOTH
            .into_iter()
            .filter(|id| crosses(plan, index, *id, may_dip))
            .collect();
        if crossing.is_empty() {
            return;
        }
        let place = transition_place(plan, leg.kind, leg.written);
        gather.note(Code::StallCrossing, Severity::Warning, place, || {
            let spent: Vec<String> = crossing
                .iter()
                .filter_map(|id| {
                    let seconds = from_f64(time_below(plan, index, *id))?;
                    let stall = &plan.rig.rotor(*id).stall_speed.value;
                    let shown = decimal(&seconds, 3);
                    Some(format!(
                        "rotor {} spends {shown} s below its stall speed of {}",
                        id.name(),
                        speed(stall)
                    ))
                })
                .collect();
            let help = if plan
                .transition(leg)
                .is_some_and(|transition| transition.dark)
            {
                "a figure with the same senses before it would not pass through"
            } else {
                "a figure with the same senses before it, or a dark morph, would not show it"
            };
            let first = crossing.first().copied().unwrap_or(RotorId::A);
            Finding::new(Code::StallCrossing, place, spent.join("; "))
                .also_at(plan.rig.rotor(first).stall_speed.place, "the stall speed")
                .help(help)
        });
    }
}

impl Judge<'_> {
    fn may_dip(&mut self, index: usize, leg: &Leg) -> bool {
        let plan = self.plan;
        let spot = (leg.kind, before(plan, index), leg.written);
        let closes = plan.closes(index);
        *self
            .dips
            .entry((spot, closes, leg.ticks))
            .or_insert_with(|| dips(plan, spot, closes, leg.ticks))
    }
}

/// Whether either motor dips below its stall speed for one of the worst landings.
fn dips(plan: &Plan, spot: Spot, closes: bool, ticks: Ticks) -> bool {
    let Some(owned) = owned(plan, spot, closes) else {
        return true;
    };
    let passage = owned.passage(plan);
    let shapes = passage.shapes(ticks);
    let time = ticks.time(plan.tick());
    // Without a worst landing (a one-way rotor turns back) each play is looked at by itself.
    passage.worst(ticks).is_none_or(|all| {
        all.iter().any(|pair| {
            RotorId::BOTH.into_iter().any(|id| {
                let stall = plan.rig.rotor(id).stall_speed.value.to_f64();
                let ends = (passage.from.of(id), passage.to.of(id));
                Profile::new(shapes.of(id), ends, pair.of(id), &time).time_below(stall) > 0.0
            })
        })
    })
}

fn time_below(plan: &Plan, index: usize, id: RotorId) -> f64 {
    let stall = plan.rig.rotor(id).stall_speed.value.to_f64();
    plan.move_of(index, id)
        .map_or(0.0, |one| Profile::of(&one, plan.tick()).time_below(stall))
}

/// Whether a rotor is at 0 < |v| < stall speed at some time of a morph; one that stands before and after is only
/// nudged by a landing and does not count.
fn crosses(plan: &Plan, index: usize, id: RotorId, may_dip: bool) -> bool {
    let stall = &plan.rig.rotor(id).stall_speed.value;
    if stall.is_zero() {
        return false;
    }
    let from = plan.speed_before(index, id);
    let to = plan
        .legs
        .get(index)
        .and_then(|leg| plan.speeds_of(leg))
        .map_or_else(Speed::zero, |speeds| speeds.motor.of(id).clone());
    if from.is_zero() && to.is_zero() {
        return false;
    }
    let below = |speed: &Speed| &speed.abs() < stall;
    if below(&from) || below(&to) || from.sign() != to.sign() {
        return true;
    }
    // Both ends run evenly, the same way: only an overshoot or a strong correction dips below.
    may_dip && time_below(plan, index, id) > 0.0
}
