//! Plan → findings: one file a kind of limit.
//!
//! A cue with an error takes only itself and the moves that touch it out of the checks; all others are judged.

mod flicker;
mod gather;
mod hold;
mod limits;
mod optics;
mod optics_shape;
mod peaks;
mod pose;
mod stall;
mod still;
pub mod storage;
mod time;
mod words;

pub use peaks::{Peak, Peaks, peaks};

use crate::finding::{Finding, Place, Severity};
use crate::plan::build::{Draft, draft};
use crate::plan::schedule::Remark;
use crate::plan::{CueSpeeds, LegKind, Plan};
use crate::rig::Rig;
use crate::show::{Cue, Ending, Show, WrittenCue};
use gather::Gather;
use std::sync::Arc;

/// Plans `show` on `rig` (from cue number `from` on, where given) and checks it.
///
/// The plan is there where every cue and the ending could be planned, even where it breaks limits; the findings come in
/// no particular order, see [`crate::finding::ordered`].
#[must_use]
pub fn planned(
    show: &Arc<Show>,
    rig: &Arc<Rig>,
    from: Option<u32>,
) -> (Option<Plan>, Vec<Finding>) {
    let draft = draft(show, rig, from);
    let mut gather = Gather::default();
    let mut faulty: Vec<bool> = show
        .cues
        .iter()
        .map(|cue| matches!(cue, WrittenCue::Broken(_)))
        .collect();
    time::check(&draft, &mut gather, &mut faulty);
    let plays = plays(&draft);
    for (index, cue) in show.cues.iter().enumerate() {
        let speeds = draft.plan.speeds.get(index).and_then(Option::as_ref);
        let count = plays.get(index).copied().unwrap_or(0);
        if let (WrittenCue::Good(cue), Some(speeds), true) = (cue, speeds, count > 0) {
            let standing = Standing { cue, speeds, rig };
            let mut found = hold::check(&standing);
            found.extend(pose::check(&standing));
            if let Some(slot) = faulty.get_mut(index) {
                *slot |= found
                    .iter()
                    .any(|finding| finding.severity == Severity::Error);
            }
            found.extend(flicker::check(&standing));
            optics_shape::check(cue, count, rig, &mut gather);
            for mut finding in found {
                finding.count = count;
                gather.add(finding);
            }
        }
    }
    transitions(&draft, &faulty, &mut gather);
    optics::check(rig, &mut gather);
    still::check(&draft, |leg| judged(&draft, &faulty, leg), &mut gather);
    (draft.complete.then_some(draft.plan), gather.into_findings())
}

/// A cue as it stands.
struct Standing<'a> {
    cue: &'a Cue,
    speeds: &'a CueSpeeds,
    rig: &'a Rig,
}

impl Standing<'_> {
    /// Where its speed is decided: the `rate` or `lead` clause, else the figure.
    fn pace_place(&self) -> Place {
        self.cue.pace_place.unwrap_or(self.cue.figure_place)
    }
}

/// How often each written cue is played.
fn plays(draft: &Draft) -> Vec<u64> {
    let mut plays = vec![0; draft.plan.show.cues.len()];
    for leg in &draft.plan.legs {
        if let (LegKind::Hold, Some(count)) = (leg.kind, plays.get_mut(leg.written as usize)) {
            *count += 1;
        }
    }
    plays
}

fn transitions(draft: &Draft, faulty: &[bool], gather: &mut Gather) {
    let plan = &draft.plan;
    let is_faulty = |written: u32| faulty.get(written as usize).copied().unwrap_or(true);
    for remark in &draft.remarks {
        if let Remark::NeverFits {
            kind,
            written,
            before,
        } = remark
            && !is_faulty(*written)
            && !before.is_some_and(is_faulty)
        {
            gather.add(limits::never_fits(plan, *kind, *before, *written));
        }
    }
    let mut limits = limits::Judge::new(plan);
    let mut stall = stall::Judge::new(plan);
    for (index, leg) in plan.legs.iter().enumerate() {
        if leg.kind == LegKind::Hold || !judged(draft, faulty, index) {
            continue;
        }
        let no_way = draft.no_way.get(index).copied().unwrap_or(false);
        limits.check(index, no_way, gather);
        stall.check(index, gather);
    }
}

/// Whether a leg can be judged: the cues at both its ends are without errors of their own, and its landing is known.
fn judged(draft: &Draft, faulty: &[bool], index: usize) -> bool {
    let legs = &draft.plan.legs;
    let is_faulty = |written: u32| faulty.get(written as usize).copied().unwrap_or(true);
    let Some(leg) = legs.get(index) else {
        return false;
    };
    let before = index.checked_sub(1).and_then(|before| legs.get(before));
    let from_gap = !matches!(leg.kind, LegKind::RunUp | LegKind::Hold)
        && before.is_none_or(|before| is_faulty(before.written));
    let sound = draft.sound.get(index).copied().unwrap_or(false);
    sound && !is_faulty(leg.written) && !from_gap
}

/// Where a transition can be mended: its own clause or statement; where a cue leaves its morph out, the cue.
fn transition_place(plan: &Plan, kind: LegKind, written: u32) -> Place {
    let show = &plan.show;
    let cue = match show.cues.get(written as usize) {
        Some(WrittenCue::Good(cue)) => Some(cue),
        _ => None,
    };
    match (kind, &show.ending, cue) {
        (LegKind::Morph, _, Some(cue)) => {
            let (own, whole) = (cue.morph.place, cue.place);
            let inside = own.file == whole.file && own.start >= whole.start && own.end <= whole.end;
            if inside { own } else { whole }
        }
        (LegKind::LoopMorph, Some(Ending::Loop { place, .. }), _) => *place,
        (LegKind::RunDown, Some(Ending::RunDown(transition)), _) => transition.place,
        (LegKind::Hold, _, Some(cue)) => cue.hold_place,
        _ => show.run_up.place,
    }
}
