//! Set-points of a pack, or of knots, against the plan, tick by tick.

use super::rows::{Expected, RowWanted};
use super::{Problem, Report};
use crate::exact::{ratio, whole};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};
use crate::setpoint::pack::PackPoint;
use num_traits::ToPrimitive;

/// Looks at one set-point after the other.
pub(super) struct PointChecker<'p> {
    plan: &'p Plan,
    expected: Expected<'p>,
    /// Counts by which a set-point may differ from its row; 0 for rows.
    tolerance: i128,
    /// The largest step that the motors can do.
    most: Pair<i128>,
    /// Where the step before leads, and where the loop starts.
    reached: Option<[i128; 2]>,
    looped: Option<[i128; 2]>,
    /// First tick of the next leg.
    leg: usize,
}

impl<'p> PointChecker<'p> {
    pub(super) fn new(plan: &'p Plan, tolerance: u32) -> Self {
        let tick = plan.tick().value();
        let latency = plan.rig.latency.value() / tick;
        let latency = super::wanted::nearest(&latency).to_u64().unwrap_or(0);
        let slack = whole(1) + ratio(1, 1_000_000_000);
        let tolerance = i128::from(tolerance);
        Self {
            plan,
            expected: Expected::new(plan, latency, 0),
            tolerance,
            most: Pair::each(|id| {
                let rotor = plan.rig.rotor(id);
                let top =
                    rotor.top_speed.value.value() * &slack * tick * whole(rotor.counts.into());
                let most = top.floor().to_integer().to_i128().unwrap_or(i128::MAX);
                // Two roundings of half a count each may add one, the tolerance of two ticks twice that.
                most.saturating_add(1 + 2 * tolerance)
            }),
            reached: None,
            looped: None,
            leg: 0,
        }
    }

    /// The ticks from here to `tick` are not looked at.
    pub(super) fn skipped(&mut self) {
        self.expected.jump();
        self.reached = None;
    }

    pub(super) fn check(&mut self, point: &PackPoint, report: &mut Report) {
        report.rows += 1;
        let tick = point.tick;
        let wanted = self.expected.next(tick, report);
        let mut same = |column: &str, wanted: i128, found: i128| {
            if wanted != found {
                report.add(problem(tick, column, wanted.to_string(), found));
            }
        };
        same("cue", wanted.cue.into(), point.cue.into());
        same("beam", wanted.beam.into(), point.beam.into());
        let exact = self.starts_leg(tick);
        for (index, id) in RotorId::BOTH.into_iter().enumerate() {
            self.rotor(index, id, point, &wanted, exact, report);
        }
        let here = point.counts.map(i128::from);
        if let Some(led) = self.reached {
            self.joined(tick, led, here, report);
        }
        if self.plan.loop_start().is_some_and(|start| start.0 == tick) {
            self.looped = Some(here);
        }
        let [a, b] = here;
        let [a_step, b_step] = point.steps.map(i128::from);
        self.reached = Some([a + a_step, b + b_step]);
    }

    /// After the last set-point: a loop leads back to its start.
    pub(super) fn close(&mut self, report: &mut Report) {
        if let (Some(led), Some(start), Some(tick)) =
            (self.reached, self.looped, self.plan.loop_start())
        {
            self.joined(tick.0, led, start, report);
        }
    }

    fn starts_leg(&mut self, tick: u64) -> bool {
        while self
            .plan
            .legs
            .get(self.leg)
            .is_some_and(|leg| leg.start.0 < tick)
        {
            self.leg += 1;
        }
        let last = self.plan.loop_leg.is_none() && tick == self.plan.total().0;
        last || self
            .plan
            .legs
            .get(self.leg)
            .is_some_and(|leg| leg.start.0 == tick)
    }

    fn rotor(
        &self,
        index: usize,
        id: RotorId,
        point: &PackPoint,
        wanted: &RowWanted,
        exact: bool,
        report: &mut Report,
    ) {
        let tick = point.tick;
        let turn = i128::from(self.plan.rig.rotor(id).counts);
        let found = i128::from(point.counts.get(index).copied().unwrap_or_default());
        let step = i128::from(point.steps.get(index).copied().unwrap_or_default());
        let (now, next) = (wanted.now.of(id).counts, *wanted.next.of(id));
        let allowed = if exact { 0 } else { self.tolerance };
        let near = |value: i128| {
            let off = (found - value).rem_euclid(turn);
            off.min(turn - off) <= allowed
        };
        let name = id.name();
        let within = |value: i128| match allowed {
            0 => value.to_string(),
            allowed => format!("{value} within {allowed}"),
        };
        if !near(now.value) && !now.other.is_some_and(near) {
            let wanted = within(now.value.rem_euclid(turn));
            report.add(problem(tick, &format!("{name}_counts"), wanted, found));
        }
        let straight = next.value - now.value;
        let off = (step - straight).abs();
        // Between two roundings that are both right, either may have been taken at each end.
        let either = i128::from(now.other.is_some()) + i128::from(next.other.is_some());
        let most_off = match self.tolerance {
            0 => 0,
            tolerance => 2 * tolerance + either,
        };
        if off > most_off && !now.leads_to(next, step) {
            report.add(problem(
                tick,
                &format!("{name}_step"),
                within(straight),
                step,
            ));
        }
        let most = *self.most.of(id);
        if step.abs() > most {
            let wanted = format!("at most {most} for the motor");
            report.add(problem(tick, &format!("{name}_step"), wanted, step));
        }
    }

    fn joined(&self, tick: u64, led: [i128; 2], here: [i128; 2], report: &mut Report) {
        let ways = led.into_iter().zip(here);
        for (id, (led, here)) in RotorId::BOTH.into_iter().zip(ways) {
            let wanted = led.rem_euclid(i128::from(self.plan.rig.rotor(id).counts));
            if wanted != here {
                let wanted = format!("{wanted}, where the step before leads");
                report.add(problem(
                    tick,
                    &format!("{}_counts", id.name()),
                    wanted,
                    here,
                ));
            }
        }
    }
}

fn problem(tick: u64, column: &str, wanted: String, found: i128) -> Problem {
    Problem {
        tick: Some(tick),
        column: column.to_owned(),
        wanted,
        found: found.to_string(),
    }
}
