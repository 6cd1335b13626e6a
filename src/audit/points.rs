//! Set-points of a pack, or of knots, against the plan, tick by tick.

use super::expected::{Expected, RowWanted};
use super::straight::{HoldLine, Line};
use super::{Problem, Report};
use crate::exact::{ratio, whole};
use crate::plan::{LegKind, Plan};
use crate::rig::{Pair, RotorId};
use crate::setpoint::pack::PackPoint;
use num_traits::ToPrimitive;

/// Ticks of a straight stretch that are looked at after those that are not, and how long such a stretch is.
const EDGE: u64 = 1 << 12;
const LONG: u64 = 1 << 20;

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
    /// The leg of the last set-point, and its lines where it is a hold of knots.
    leg: Option<usize>,
    lines: Option<Pair<HoldLine>>,
    /// Whether the last set-point was where it must be.
    in_place: bool,
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
            leg: None,
            lines: None,
            in_place: true,
        }
    }

    /// How many ticks after `tick`, the one checked last, need not be looked at one by one, of `straight` in which the table
    /// runs along the lines `next`, given for the first of them: those of a hold in which these keep to the plan's own.
    ///
    /// Where they do not, the ticks are looked at until one is out of place; then that is said, and the rest left out.
    pub(super) fn skip(
        &mut self,
        tick: u64,
        straight: u64,
        next: [Line; 2],
        report: &mut Report,
    ) -> u64 {
        if straight <= LONG + 2 * EDGE || !tick.is_multiple_of(EDGE) {
            return 0;
        }
        let (Some(lines), Some(leg)) = (
            &self.lines,
            self.leg.and_then(|index| self.plan.legs.get(index)),
        ) else {
            return 0;
        };
        let (first, quiet) = (tick + 1, self.expected.quiet_until(tick));
        let ahead = straight.min(quiet.saturating_sub(first));
        if ahead <= LONG + 2 * EDGE {
            return 0;
        }
        let ticks = ahead - EDGE;
        let from = first - leg.start.0;
        let [a, b] = next;
        let keeps = lines.a.keeps(from, ticks, a) && lines.b.keeps(from, ticks, b);
        if !keeps {
            if self.in_place {
                return 0;
            }
            report.add(Problem {
                tick: Some(first),
                column: "knots".to_owned(),
                wanted: "the line of the hold".to_owned(),
                found: format!(
                    "another one, as far as tick {}: not looked at one by one",
                    first + ticks - 1
                ),
            });
        }
        self.expected.jump();
        self.reached = None;
        report.rows += ticks;
        ticks
    }

    /// Takes the lines of the leg that the set-point asked for last is in.
    fn enter(&mut self) {
        let leg = self.expected.leg();
        if self.leg == Some(leg) {
            return;
        }
        self.leg = Some(leg);
        let holds = |index: usize| {
            self.plan
                .legs
                .get(index)
                .is_some_and(|leg| leg.kind == LegKind::Hold)
        };
        self.lines = None;
        if self.tolerance > 0 && holds(leg) {
            self.lines = self.plan.moves(leg).map(|moves| {
                Pair::each(|id| {
                    let counts = self.plan.rig.rotor(id).counts;
                    HoldLine::new(moves.of(id), self.plan.tick().value(), counts)
                })
            });
        }
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
        self.enter();
        let exact = self
            .plan
            .legs
            .get(self.expected.leg())
            .is_none_or(|leg| leg.start.0 == tick);
        let before = report.count;
        for (index, id) in RotorId::BOTH.into_iter().enumerate() {
            self.rotor(index, id, point, &wanted, exact, report);
        }
        self.in_place = report.count == before;
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
        let in_leg = self
            .lines
            .as_ref()
            .map_or(self.tolerance, |lines| lines.of(id).allowed());
        let allowed = if exact { 0 } else { in_leg };
        let name = id.name();
        let within = |value: i128| match allowed {
            0 => value.to_string(),
            allowed => format!("{value} within {allowed}"),
        };
        if !now.near(found, allowed, turn) {
            let wanted = within(now.value.rem_euclid(turn));
            report.add(problem(tick, &format!("{name}_counts"), wanted, found));
        }
        let straight = next.value - now.value;
        // Between two roundings that are both right, either may have been taken at each end.
        if !now.leads_to(next, step, 2 * in_leg) {
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
