//! When a finding happens: a finding has a place in the text, a picture needs a time.

use crate::finding::{Code, Finding, Place};
use crate::plan::{LegKind, Plan};
use crate::show::{Ending, WrittenCue};

/// Legs that are looked for at most: a cue that a `repeat` plays a thousand times needs no thousand marks.
const MOST: usize = 50;

/// The legs (indices into [`Plan::legs`]) that a finding is about, in the order of play; empty where it is about the rig
/// or the show as a whole.
#[must_use]
pub fn legs_of(plan: &Plan, finding: &Finding) -> Vec<usize> {
    let place = finding.place;
    let show = &plan.show;
    let closing = match &show.ending {
        Some(Ending::Loop { place, morph }) => [*place, morph.place],
        Some(Ending::RunDown(transition)) => [transition.place; 2],
        None => [Place::default(); 2],
    };
    let wanted = |kind: LegKind, written: u32| -> bool {
        match kind {
            LegKind::RunUp => within(place, show.run_up.place),
            LegKind::LoopMorph | LegKind::RunDown => {
                closing.into_iter().any(|closing| within(place, closing))
            }
            LegKind::Morph | LegKind::Hold => {
                let Some(WrittenCue::Good(cue)) = show.cues.get(written as usize) else {
                    return false;
                };
                within(place, cue.place)
                    && (kind == LegKind::Morph) == in_transition(finding, place, cue.morph.place)
            }
        }
    };
    plan.legs
        .iter()
        .enumerate()
        .filter(|(_, leg)| wanted(leg.kind, leg.written))
        .map(|(index, _)| index)
        .take(MOST)
        .collect()
}

fn within(inner: Place, outer: Place) -> bool {
    inner.file == outer.file && inner.start >= outer.start && inner.end <= outer.end
}

/// Whether a finding inside a cue is about the transition into it.
fn in_transition(finding: &Finding, place: Place, morph: Place) -> bool {
    match finding.code {
        Code::LimitAcceleration | Code::LimitJerk | Code::StallCrossing | Code::LoopSeam => true,
        _ => within(place, morph),
    }
}
