//! Transitions against the motors' limits: speed, acceleration and deceleration, jerk, way of turning, the loop's seam.

use super::gather::Gather;
use super::transition_place;
use super::words::{above, law, limit, rpm, seconds, transition};
use crate::exact::{Rational, Speed, Ticks, Turns};
use crate::finding::{Code, Finding, Place, Severity};
use crate::motion::profile::{Limits, Profile, TOLERANCE};
use crate::plan::passage::{Aim, Passage};
use crate::plan::schedule::{self, ends};
use crate::plan::{LegKind, Plan};
use crate::rig::{Pair, Rotor, RotorId, Turning};
use crate::show::Transition;
use std::collections::BTreeMap;

/// One limit that a rotor breaks.
#[derive(Clone, Debug)]
struct Breach {
    code: Code,
    /// How many times the limit is needed.
    share: f64,
    /// `rotor b would need 7336 rpm/s, the limit is 6000 rpm/s`
    message: String,
    limit: Option<Place>,
}

/// Where a transition stands: kind, cue before, cue it leads to or leaves.
pub(super) type Spot = (LegKind, Option<u32>, u32);

/// What a passage needs, owned.
pub(super) struct Owned<'a> {
    from: Pair<Speed>,
    to: Pair<Speed>,
    aim: Aim,
    transition: &'a Transition,
}

/// Judges the transitions of a plan, each passage once where it can.
pub(super) struct Judge<'a> {
    plan: &'a Plan,
    /// Whether a passage fits at a duration whatever the pose before: then no play of it needs a look of its own.
    fits: BTreeMap<(Spot, bool, Ticks), bool>,
    shortest: BTreeMap<(Spot, bool), Option<Ticks>>,
}

impl<'a> Judge<'a> {
    pub(super) fn new(plan: &'a Plan) -> Self {
        Self {
            plan,
            fits: BTreeMap::new(),
            shortest: BTreeMap::new(),
        }
    }

    pub(super) fn check(&mut self, index: usize, no_way: bool, gather: &mut Gather) {
        let plan = self.plan;
        let Some(leg) = plan.legs.get(index) else {
            return;
        };
        let spot = (leg.kind, before(plan, index), leg.written);
        let closes = plan.closes(index);
        let known = (spot, closes, leg.ticks);
        if self.fits.get(&known) == Some(&true) {
            return;
        }
        let Some(owned) = owned(plan, spot, closes) else {
            return;
        };
        let fits = *self
            .fits
            .entry(known)
            .or_insert_with(|| owned.passage(plan).fits(leg.ticks));
        if fits {
            return;
        }
        let seam = closes && law_alone_fits(plan, &owned, leg.ticks);
        // A seam that is too short is one finding, whatever it breaks first.
        let most = if seam { 1 } else { usize::MAX };
        for breach in real(plan, index, no_way).into_iter().take(most) {
            let code = if seam { Code::LoopSeam } else { breach.code };
            let place = transition_place(plan, leg.kind, leg.written);
            let shortest = &mut self.shortest;
            gather.note(code, Severity::Error, place, || {
                let best = *shortest
                    .entry((spot, closes))
                    .or_insert_with(|| owned.passage(plan).shortest());
                let message = if seam {
                    format!("too short to close the loop: {}", breach.message)
                } else {
                    breach.message.clone()
                };
                Finding::new(code, place, message)
                    .also_at(breach.limit, "the limit")
                    .help_if(best.map(|ticks| hint(plan, leg.kind, owned.transition, ticks)))
            });
        }
    }
}

impl Owned<'_> {
    pub(super) fn passage<'b>(&'b self, plan: &'b Plan) -> Passage<'b> {
        Passage {
            rig: &plan.rig,
            law: &self.transition.law,
            from: &self.from,
            to: &self.to,
            aim: &self.aim,
        }
    }
}

/// The written cue before a transition; none for a run-up or a run-down.
pub(super) fn before(plan: &Plan, index: usize) -> Option<u32> {
    let leg = plan.legs.get(index)?;
    let before = plan.legs.get(index.checked_sub(1)?)?;
    (leg.kind != LegKind::RunDown).then_some(before.written)
}

/// The passage of a transition, owned; `None` where a cue of it is broken.
pub(super) fn owned(plan: &Plan, (kind, before, written): Spot, closes: bool) -> Option<Owned<'_>> {
    let speeds = plan.speeds.get(written as usize)?.as_ref()?;
    let (from, to) = ends(&plan.speeds, kind, before, written)?;
    Some(Owned {
        from,
        to,
        aim: schedule::aim(&plan.rig, speeds, kind, closes),
        transition: plan.transition_for(kind, written)?,
    })
}

/// `morph 3.058 s` is the shortest …
fn hint(plan: &Plan, kind: LegKind, what: &Transition, ticks: Ticks) -> String {
    let word = transition(kind);
    let time = seconds(&ticks.time(plan.tick()));
    let law = law(&what.law);
    let (name, whatever) = match kind {
        LegKind::RunUp => ("run-up", ""),
        LegKind::RunDown => ("run-down", " whatever the pose before"),
        _ => ("morph", " whatever the pose before"),
    };
    format!(
        "`{word} {time}` is the shortest {law} {name} that fits{whatever}; or write `{word} fastest`"
    )
}

/// What the planned motion of a leg breaks, the worse rotor for each limit.
fn real(plan: &Plan, index: usize, no_way: bool) -> Vec<Breach> {
    let mut found: Vec<Breach> = Vec::new();
    for id in RotorId::BOTH {
        let Some(one) = plan.move_of(index, id) else {
            continue;
        };
        let profile = Profile::of(&one, plan.tick());
        for breach in breaches(plan.rig.rotor(id), id, &profile, no_way) {
            match found.iter_mut().find(|known| known.code == breach.code) {
                Some(known) if known.share < breach.share => *known = breach,
                Some(_) => {}
                None => found.push(breach),
            }
        }
    }
    found
}

fn breaches(rotor: &Rotor, id: RotorId, profile: &Profile, no_way: bool) -> Vec<Breach> {
    let limits = Limits::of(rotor);
    let mut found = Vec::new();
    let mut add = |code, share: f64, need: f64, value: &Rational, unit: &str, limit_place| {
        found.push(Breach {
            code,
            share,
            message: format!(
                "rotor {} would need {} {unit}, the limit is {} {unit}",
                id.name(),
                above(need * 60.0, &rpm(value)),
                limit(&rpm(value))
            ),
            limit: limit_place,
        });
    };
    if !profile.within_speed(&limits) {
        let peak = profile.speed_peak();
        let top = &rotor.top_speed;
        add(
            Code::LimitSpeed,
            peak.value / limits.speed,
            peak.value,
            top.value.value(),
            "rpm",
            top.place,
        );
    }
    if !profile.within_acceleration(&limits) {
        let peak = profile.acceleration_peak(&limits);
        let stated = if peak.slowing {
            &rotor.deceleration
        } else {
            &rotor.acceleration
        };
        add(
            Code::LimitAcceleration,
            peak.share,
            peak.value,
            stated.value.value(),
            "rpm/s",
            stated.place,
        );
    }
    if let (false, Some(jerk)) = (profile.within_jerk(&limits), &rotor.jerk) {
        let peak = profile.jerk_peak();
        add(
            Code::LimitJerk,
            peak.value / limits.jerk,
            peak.value,
            jerk.value.value(),
            "rpm/s^2",
            jerk.place,
        );
    }
    let turning = rotor.turns.value;
    if turning != Turning::Both && (profile.turns_back(turning) || no_way) {
        let way = if turning == Turning::Forward {
            "forward"
        } else {
            "backward"
        };
        found.push(Breach {
            code: Code::TurnDirection,
            share: 1.0 + TOLERANCE,
            message: format!(
                "rotor {} would turn back on the way, it may only turn {way}",
                id.name()
            ),
            limit: rotor.turns.place,
        });
    }
    found
}

/// Whether the law without any correction keeps every limit: then only the correction is too much.
///
/// An `scurve` is taken with the share that it would have if there were nothing to correct.
fn law_alone_fits(plan: &Plan, owned: &Owned, ticks: Ticks) -> bool {
    let free = Aim::Free;
    let alone = Passage {
        aim: &free,
        ..owned.passage(plan)
    };
    let time = ticks.time(plan.tick());
    RotorId::BOTH.into_iter().all(|id| {
        let rotor = plan.rig.rotor(id);
        let ends = (owned.from.of(id), owned.to.of(id));
        let profile = Profile::new(&alone.shape(id, ticks), ends, &Turns::zero(), &time);
        profile.within(&Limits::of(rotor)) && !profile.turns_back(rotor.turns.value)
    })
}

/// The finding of a `fastest` that no duration makes fit: what is broken however long it takes.
pub(super) fn never_fits(plan: &Plan, kind: LegKind, before: Option<u32>, written: u32) -> Finding {
    let place = transition_place(plan, kind, written);
    let word = transition(kind);
    let spot = (kind, before, written);
    let breach = owned(plan, spot, kind == LegKind::LoopMorph).and_then(|owned| {
        let passage = owned.passage(plan);
        let longest = passage.longest();
        let shapes = passage.shapes(longest);
        let all = passage.worst(longest);
        let no_way = all.is_none();
        let all = all.unwrap_or_else(|| vec![Pair::each(|_| Turns::zero())]);
        all.iter().find_map(|pair| {
            RotorId::BOTH.into_iter().find_map(|id| {
                let time = longest.time(plan.tick());
                let ends = (owned.from.of(id), owned.to.of(id));
                let profile = Profile::new(shapes.of(id), ends, pair.of(id), &time);
                breaches(plan.rig.rotor(id), id, &profile, no_way)
                    .into_iter()
                    .next()
            })
        })
    });
    match breach {
        Some(breach) => Finding::new(
            breach.code,
            place,
            format!("no {word} fits, however long: {}", breach.message),
        )
        .also_at(breach.limit, "the limit"),
        None => Finding::new(
            Code::LimitAcceleration,
            place,
            format!("no {word} of up to thirty days fits the motors"),
        ),
    }
}
