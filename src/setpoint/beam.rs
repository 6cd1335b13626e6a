//! The beam column: the plan's laser level, sent early by the latency.

use crate::plan::{Leg, Plan};

/// The level to send at each tick, and up to which tick it stays.
pub(super) struct Beam<'p> {
    legs: &'p [Leg],
    latency: u64,
    total: u64,
    loop_start: Option<u64>,
}

impl<'p> Beam<'p> {
    pub(super) fn new(plan: &'p Plan) -> Self {
        Self {
            legs: &plan.legs,
            latency: latency_ticks(plan),
            total: plan.total().0,
            loop_start: plan.loop_start().map(|tick| tick.0),
        }
    }

    /// The level to send at `tick`, and the first later tick at which it may be another one.
    ///
    /// It is the level planned for `tick` + latency, which a loop finds within itself however long the latency,
    /// and which is 0 past the end of a run-down.
    pub(super) fn at(&self, tick: u64) -> (u8, u64) {
        let ahead = u128::from(tick) + u128::from(self.latency);
        let Some(planned) = self.within(ahead) else {
            return (0, u64::MAX);
        };
        let after = self.legs.partition_point(|leg| leg.start.0 <= planned);
        let Some(leg) = after.checked_sub(1).and_then(|index| self.legs.get(index)) else {
            return (0, u64::MAX);
        };
        let left = (leg.start.0 + leg.ticks.0).saturating_sub(planned).max(1);
        (leg.beam, tick.saturating_add(left))
    }

    /// The planned tick that `ahead` stands for; `None` past the end.
    fn within(&self, ahead: u128) -> Option<u64> {
        match (u64::try_from(ahead), self.loop_start) {
            (Ok(tick), _) if tick < self.total => Some(tick),
            (_, None) => None,
            (_, Some(start)) => {
                let length = u128::from(self.total.checked_sub(start)?);
                let past = (ahead - u128::from(start)).checked_rem(length)?;
                Some(start + u64::try_from(past).ok()?)
            }
        }
    }
}

/// The laser's latency in ticks, rounded, ties up.
pub(super) fn latency_ticks(plan: &Plan) -> u64 {
    plan.rig
        .latency
        .rounded(plan.tick())
        .map_or(0, |ticks| ticks.0)
}
