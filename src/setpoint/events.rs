//! Changes of beam and cue over a whole table, one entry for each stretch in which both stay.

use super::beam::Beam;
use super::knots::MOST_TICKS;
use crate::plan::Plan;

/// A stretch of ticks with one cue and one beam level.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Event {
    /// Its first tick.
    pub(super) start: u64,
    /// Its length, 1 … 2³².
    pub(super) ticks: u64,
    /// The cue column.
    pub(super) cue: u32,
    /// The beam column.
    pub(super) beam: u8,
}

impl Event {
    /// First tick after it.
    pub(super) fn end(&self) -> u64 {
        self.start + self.ticks
    }
}

/// Every stretch of a plan's table, in order, without gaps; cut where the loop starts, the last ends with the table.
pub(super) fn events(plan: &Plan) -> impl Iterator<Item = Event> {
    let beam = Beam::new(plan);
    let end = plan.rows();
    let loop_start = plan.loop_start().map(|start| start.0);
    let mut tick = 0;
    std::iter::from_fn(move || {
        (tick < end).then(|| {
            let mut event = at(plan, &beam, tick);
            while event.end() < end && loop_start != Some(event.end()) {
                let next = at(plan, &beam, event.end());
                let alike = (next.cue, next.beam) == (event.cue, event.beam);
                if !alike || event.ticks + next.ticks > MOST_TICKS {
                    break;
                }
                event.ticks += next.ticks;
            }
            tick = event.end();
            event
        })
    })
}

/// Beam and cue at a tick, and how long they are sure to stay.
fn at(plan: &Plan, beam: &Beam<'_>, tick: u64) -> Event {
    let end = plan.rows();
    let (level, stays) = beam.at(tick);
    let after = plan.legs.partition_point(|leg| leg.start.0 <= tick);
    let leg = after.checked_sub(1).and_then(|index| plan.legs.get(index));
    // Past the last leg there is the last row of a run-down, still in its cue.
    let leg_end = leg
        .map(|leg| leg.start.0 + leg.ticks.0)
        .filter(|leg_end| *leg_end > tick)
        .unwrap_or(end);
    let until = stays.min(leg_end).min(tick + MOST_TICKS).min(end);
    Event {
        start: tick,
        ticks: until - tick,
        cue: leg.map_or(0, |leg| leg.cue),
        beam: level,
    }
}
