//! Durations that round, are past, or are too short.

use super::gather::Gather;
use super::transition_place;
use super::words::{limit, seconds, transition};
use crate::exact::{Seconds, whole};
use crate::finding::{Code, Finding};
use crate::plan::build::Draft;
use crate::plan::schedule::{MOST_SECONDS, Remark};
use crate::show::{Hold, WrittenCue};

pub(super) fn check(draft: &Draft, gather: &mut Gather, faulty: &mut [bool]) {
    let plan = &draft.plan;
    let tick = plan.tick();
    for remark in &draft.remarks {
        let (finding, written) = match remark {
            Remark::Short { kind, written } => {
                let word = transition(*kind);
                let message = format!(
                    "the {word} rounds to no tick at all, a tick is {}",
                    seconds(tick)
                );
                let place = transition_place(plan, *kind, *written);
                let help = format!("`{word} {}` is the shortest that passes", seconds(tick));
                (
                    Finding::new(Code::TimeShort, place, message).help(help),
                    Some(*written),
                )
            }
            Remark::Past { written, by } => (past(draft, *written, by), Some(*written)),
            Remark::TooLong { written } => {
                let days = MOST_SECONDS / (24 * 3600);
                let message = format!("the show is longer than {days} days here");
                let place = match plan.show.cues.get(*written as usize) {
                    Some(WrittenCue::Good(cue)) => cue.place,
                    Some(WrittenCue::Broken(place)) => *place,
                    None => continue,
                };
                let help = format!("a show may last {days} days");
                (
                    Finding::new(Code::TextTooMuch, place, message).help(help),
                    None,
                )
            }
            // Judged with the transitions, when it is known which cues are sound.
            Remark::NeverFits { .. } => continue,
        };
        if let Some(slot) = written.and_then(|written: u32| faulty.get_mut(written as usize)) {
            *slot = true;
        }
        gather.add(finding);
    }
    if let Some(rounded) = &draft.rounded {
        let milliseconds = rounded.furthest.value() * whole(1000);
        let message = format!(
            "{} moved to the nearest tick of {}, by at most {} ms",
            match rounded.count {
                1 => "a boundary is".to_owned(),
                count => format!("{count} boundaries are"),
            },
            seconds(tick),
            limit(&milliseconds),
        );
        let place = transition_place(plan, rounded.kind, rounded.written);
        gather.add(Finding::new(Code::TimeRounded, place, message));
    }
}

fn past(draft: &Draft, written: u32, by: &Seconds) -> Finding {
    let plan = &draft.plan;
    let place = transition_place(plan, crate::plan::LegKind::Hold, written);
    let message = format!("this time is past by {} when the hold begins", seconds(by));
    let finding = Finding::new(Code::TimePast, place, message);
    match plan.show.cues.get(written as usize) {
        Some(WrittenCue::Good(cue)) => match &cue.hold {
            Hold::Until(until) => {
                let earliest = &(until + by) + plan.tick();
                finding.help(format!(
                    "`hold until {}` is the earliest that passes",
                    seconds(&earliest)
                ))
            }
            Hold::For(_) => finding,
        },
        _ => finding,
    }
}
