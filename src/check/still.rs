//! A lit spot that rests: how long it stays within one beam width at the wall.

use super::gather::Gather;
use crate::finding::{Code, Finding, Place, Severity};
use crate::optics::path::LegPath;
use crate::optics::{Optics, spot_width};
use crate::plan::build::Draft;
use crate::plan::{Leg, LegKind, Plan};
use std::collections::BTreeSet;

/// From here on a resting spot is reported, in seconds.
const RESTS: f64 = 0.25;
/// Spacing of the moments that are tried: a rest of [`RESTS`] holds at least one with [`SURE`] seconds of rest after it.
const STEP: f64 = 0.05;
/// Rest after a tried moment that makes it worth a closer look.
const SURE: f64 = RESTS - STEP;
/// Longest stretch of a leg that is looked at, in seconds: a figure whose period is longer moves slowly all over.
const LONGEST: f64 = 120.0;
/// Spacing of the closer look, in seconds.
const CLOSE: f64 = 0.001;
/// Mirrors that turn against each other by more than this, in turns/s, leave no spot at rest.
const FAST: f64 = 16.0;

/// Looks at every lit leg whose ends are `sound`.
pub(super) fn check(draft: &Draft, sound: impl Fn(usize) -> bool, gather: &mut Gather) {
    let plan = &draft.plan;
    let optics = Optics::of(&plan.rig);
    let Some(width) = spot_width(&plan.rig).filter(|width| optics.in_metres() && *width > 0.0)
    else {
        return;
    };
    // Where the pose is fixed, a cue played again comes from the same speeds into the same picture.
    let mut seen: BTreeSet<(u32, Option<u32>)> = BTreeSet::new();
    for (index, leg) in plan.legs.iter().enumerate() {
        if !lit(plan, leg) || !sound(index) {
            continue;
        }
        let before = (leg.kind != LegKind::Hold)
            .then(|| {
                index
                    .checked_sub(1)
                    .and_then(|before| plan.legs.get(before))
            })
            .flatten()
            .map(|leg| leg.written);
        let fixed = plan
            .speeds_of(leg)
            .is_some_and(|speeds| speeds.pose.is_some());
        if fixed && !seen.insert((leg.written, before)) {
            continue;
        }
        if !slow(plan, index) {
            continue;
        }
        let Some(rest) = rest(plan, &optics, index, width) else {
            continue;
        };
        let (place, message) = words(plan, leg, rest, width);
        gather.note(Code::StillSpot, Severity::Warning, place, || {
            Finding::new(Code::StillSpot, place, message).help(
                "let it move: another figure, a higher `rate`, a `spin`, or `dark` (`beam off`) meanwhile",
            )
        });
    }
}

fn lit(plan: &Plan, leg: &Leg) -> bool {
    let dark = plan
        .transition(leg)
        .is_some_and(|transition| transition.dark);
    leg.beam > 0 && !dark
}

/// Whether the mirrors are anywhere near standing, or near turning together, at some moment of a leg: only then can the spot
/// rest. Judged by the speeds at both ends, between which they go over evenly but for a landing's small part.
fn slow(plan: &Plan, index: usize) -> bool {
    let Some(moves) = plan.moves(index) else {
        return false;
    };
    let mirror = |one: &crate::motion::Move, id| {
        let gear = crate::exact::to_f64(&plan.rig.rotor(id).motor_per_mirror());
        (one.from.to_f64() / gear, one.to.to_f64() / gear)
    };
    let a = mirror(&moves.a, crate::rig::RotorId::A);
    let b = mirror(&moves.b, crate::rig::RotorId::B);
    let never = |from: f64, to: f64| from * to > 0.0 && from.abs().min(to.abs()) > FAST;
    let apart = never(a.0 - b.0, a.1 - b.1);
    // A mirror that turns fast throughout moves the spot, whatever the other does, unless both turn alike.
    let turning = never(a.0, a.1) || never(b.0, b.1);
    !(apart && turning)
}

/// A rest: its start and length in seconds, from the leg's start.
struct Rest {
    from: f64,
    length: f64,
}

fn rest(plan: &Plan, optics: &Optics, index: usize, width: f64) -> Option<Rest> {
    let leg = plan.legs.get(index)?;
    let path = LegPath::of(plan, index)?;
    let period = match leg.kind {
        LegKind::Hold => plan
            .speeds_of(leg)
            .map_or(LONGEST, |speeds| 1.0 / speeds.repeat.to_f64().max(1e-9)),
        _ => LONGEST,
    };
    let until = path.length.min(period.max(2.0 * RESTS)).min(LONGEST);
    let spot = |t: f64| optics.spot(path.phases(t));
    let mut longest: Option<Rest> = None;
    let mut t = 0.0;
    while t + SURE <= path.length && t < until {
        let here = spot(t);
        // Uneven spacing, so that a figure that comes back in step is not taken for one that rests.
        let stays = (1..=16).all(|look| {
            let share = (f64::from(look) * 0.618_033_988_75) % 1.0;
            (spot(t + SURE * share) - here).hypot() <= width
        });
        if stays {
            let found = closer(&spot, t, path.length, width);
            t += found.length.max(STEP);
            let better = longest
                .as_ref()
                .is_none_or(|longest| found.length > longest.length);
            if found.length >= RESTS && better {
                longest = Some(found);
            }
        }
        t += STEP;
    }
    longest
}

/// The rest around a moment, forwards and backwards from it.
fn closer(spot: &impl Fn(f64) -> kurbo::Point, at: f64, length: f64, width: f64) -> Rest {
    let here = spot(at);
    let stays = |t: f64| t >= 0.0 && t <= length + 1e-9 && (spot(t) - here).hypot() <= width;
    let mut from = at;
    // Backwards at most one step of the search: before that another moment was tried.
    while at - from < STEP && stays(from - CLOSE) {
        from -= CLOSE;
    }
    let mut to = at;
    while to - at < 1.0 && stays(to + CLOSE) {
        to += CLOSE;
    }
    // A spot that stands for the whole leg need not be followed in small steps all the way.
    while to - at >= 1.0 && stays(to + STEP / 2.0) {
        to += STEP / 2.0;
    }
    while stays(to + CLOSE) {
        to += CLOSE;
    }
    Rest {
        from,
        length: to - from,
    }
}

fn words(plan: &Plan, leg: &Leg, rest: Rest, width: f64) -> (Place, String) {
    let cue = plan.cue(leg);
    let seconds = format!("{:.2}", rest.length);
    let wide = format!("{:.1}", width * 1000.0);
    let (place, when) = match (leg.kind, cue) {
        (LegKind::Hold, Some(cue)) => (cue.figure_place, "while the figure holds".to_owned()),
        _ => (
            super::transition_place(plan, leg.kind, leg.written),
            format!("{:.2} s into the morph", rest.from),
        ),
    };
    (
        place,
        format!("the lit spot rests for {seconds} s within one beam width ({wide} mm) {when}"),
    )
}
