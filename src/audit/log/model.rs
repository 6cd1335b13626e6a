//! The planned motion at any moment, in floating point, read off the plan's exact moves with the auditor's laws.
//!
//! Phases are kept modulo the motor turns after which motor and mirror are both where they were (N of a gear N:D), so
//! that a show of thirty days is as fine as one of a minute: within 10⁻⁷ turn, a hold of 30 days at 10 000 rpm included.
//! The plan's loop goes on for ever; before its first row and after a run-down both rotors rest.

use super::law::{Law, Laws};
use crate::exact::to_f64;
use crate::motion::Move;
use crate::plan::{LegKind, Plan};
use crate::rig::{Pair, Projection, RotorId};
use num_traits::ToPrimitive;

/// What a log's samples are compared with.
#[derive(Clone, Debug)]
pub(super) struct Model {
    legs: Vec<LegModel>,
    /// Seconds of the whole table.
    total: f64,
    /// Seconds from row 0 to the loop's start, and how long one pass takes.
    looped: Option<(f64, f64)>,
    /// Both rotors' own numbers.
    pub(super) rotors: Pair<RotorModel>,
    /// The largest change of speed of either rotor, motor turns/s².
    pub(super) steepest: f64,
    /// The highest planned speed of each motor, turns/s, above zero.
    pub(super) fastest: Pair<f64>,
    /// The longest hold with the transitions around it, in seconds.
    pub(super) longest_stretch: f64,
}

/// What leads from a motor to its mirror.
#[derive(Clone, Copy, Debug)]
pub(super) struct RotorModel {
    /// Position counts in a motor turn.
    pub(super) counts: f64,
    /// Mirror turns, counter-clockwise positive, of one motor turn.
    pub(super) mirror_per_motor: f64,
    /// Motor turns after which motor and mirror are both where they were.
    pub(super) closing: f64,
    /// Whether the phase at row 0 is known.
    pub(super) has_index: bool,
}

#[derive(Clone, Debug)]
struct LegModel {
    start: f64,
    length: f64,
    moves: Pair<MoveModel>,
}

#[derive(Clone, Debug)]
struct MoveModel {
    law: Law,
    /// Modulo the closing turns.
    start: f64,
    from: f64,
    change: f64,
    correction: f64,
}

/// Where a moment falls in the plan.
#[derive(Clone, Copy, Debug)]
pub(super) struct Moment {
    /// Index of the leg.
    pub(super) leg: usize,
    /// Which pass of the loop, 0 the first; 0 before it.
    pub(super) pass: u64,
    /// Seconds since the leg began.
    pub(super) inside: f64,
}

/// A hold as the audit needs it.
#[derive(Clone, Copy, Debug)]
pub(super) struct HoldModel {
    /// Number in the table's `cue` column.
    pub(super) cue: u32,
    /// Index of the written cue.
    pub(super) written: u32,
    /// p and q.
    pub(super) terms: (i32, i32),
    /// f, in Hz, before spin.
    pub(super) repeat: f64,
    /// Planned motor speeds, spin included, turns/s.
    pub(super) motor: Pair<f64>,
    /// Turns of the pose for one turn of q·θa − p·θb: 1/(q − p); 1 where p = q or the rig is crossed.
    pub(super) pose_per_phase: f64,
}

impl Model {
    /// Reads the whole plan once; about 150 bytes a leg.
    pub(super) fn of(plan: &Plan) -> Self {
        let tick = plan.tick().to_f64();
        let mut legs = Vec::with_capacity(plan.legs.len());
        let mut laws = Laws::default();
        let mut steepest = 0.0_f64;
        let mut fastest = Pair {
            a: 1e-3_f64,
            b: 1e-3,
        };
        for (index, leg) in plan.legs.iter().enumerate() {
            let Some(moves) = plan.moves(index) else {
                break;
            };
            let length = ticks(leg.ticks.0) * tick;
            let moves = Pair::each(|id| {
                let planned = moves.of(id);
                let closing = plan.rig.rotor(id).closing_turns();
                let start = planned.start.value();
                let rest = start - (start / &closing).floor() * &closing;
                let model = MoveModel::of(planned, to_f64(&rest), &mut laws);
                steepest = steepest.max(2.2 * model.change.abs() / length);
                let most = fastest.of_mut(id);
                *most = most.max(model.from.abs());
                model
            });
            legs.push(LegModel {
                start: ticks(leg.start.0) * tick,
                length,
                moves,
            });
        }
        Self {
            total: ticks(plan.total().0) * tick,
            looped: plan.loop_start().map(|start| {
                let start = ticks(start.0) * tick;
                (start, ticks(plan.total().0) * tick - start)
            }),
            rotors: Pair::each(|id| {
                let rotor = plan.rig.rotor(id);
                RotorModel {
                    counts: f64::from(rotor.counts),
                    mirror_per_motor: 1.0 / to_f64(&rotor.motor_per_mirror()),
                    closing: to_f64(&rotor.closing_turns()),
                    has_index: rotor.index.is_some(),
                }
            }),
            steepest,
            fastest,
            longest_stretch: longest_stretch(plan, &legs),
            legs,
        }
    }

    /// The first planned moment and the last one that differs from all before.
    pub(super) fn span(&self) -> f64 {
        self.total
    }

    /// The moment `time` seconds after row 0; `None` before row 0 and after a run-down.
    pub(super) fn moment(&self, time: f64) -> Option<Moment> {
        if time < 0.0 {
            return None;
        }
        let (folded, pass) = self.fold(time)?;
        let leg = self
            .legs
            .partition_point(|leg| leg.start <= folded)
            .checked_sub(1)?;
        let start = self.legs.get(leg)?.start;
        Some(Moment {
            leg,
            pass,
            inside: folded - start,
        })
    }

    fn fold(&self, time: f64) -> Option<(f64, u64)> {
        if time < self.total {
            return Some((time, 0));
        }
        let (start, length) = self.looped?;
        let passes = ((time - start) / length).floor();
        let folded = (time - start - passes * length).clamp(0.0, length) + start;
        // Rounding may touch the very end of a pass, which is the start of the next.
        Some((
            if folded >= self.total { start } else { folded },
            passes.to_u64().unwrap_or(0),
        ))
    }

    /// Motor phase (turns, modulo the closing turns, not wrapped) and speed (turns/s) `time` seconds after row 0.
    pub(super) fn motor(&self, id: RotorId, time: f64) -> (f64, f64) {
        match self.moment(time) {
            Some(moment) => self.motor_at(id, moment),
            None if time < 0.0 => (0.0, 0.0),
            None => self.legs.last().map_or((0.0, 0.0), |leg| {
                (leg.moves.of(id).at(leg.length, leg.length).0, 0.0)
            }),
        }
    }

    fn motor_at(&self, id: RotorId, moment: Moment) -> (f64, f64) {
        self.legs.get(moment.leg).map_or((0.0, 0.0), |leg| {
            leg.moves.of(id).at(moment.inside, leg.length)
        })
    }
}

impl MoveModel {
    fn of(planned: &Move, start: f64, laws: &mut Laws) -> Self {
        Self {
            law: laws.of(&planned.shape),
            start,
            from: planned.from.to_f64(),
            change: (&planned.to - &planned.from).to_f64(),
            correction: planned.correction.to_f64(),
        }
    }

    fn at(&self, inside: f64, length: f64) -> (f64, f64) {
        if matches!(self.law, Law::Hold) {
            return (self.start + self.from * inside, self.from);
        }
        let u = (inside / length).clamp(0.0, 1.0);
        let (share, gain) = self.law.at(u);
        let bump = u.powi(4) * (35.0 + u * (-84.0 + u * (70.0 - 20.0 * u)));
        let bump_slope = 140.0 * (u * (1.0 - u)).powi(3);
        (
            self.start + self.from * inside + self.change * length * gain + self.correction * bump,
            self.from + self.change * share + self.correction / length * bump_slope,
        )
    }
}

/// The hold that leg `index` is; `None` for any other kind of leg.
pub(super) fn hold(plan: &Plan, index: usize) -> Option<HoldModel> {
    let leg = plan.legs.get(index)?;
    if leg.kind != LegKind::Hold {
        return None;
    }
    let ratio = plan.cue(leg)?.figure.ratio;
    let speeds = plan.speeds_of(leg)?;
    let crossed = plan.rig.projection == Projection::Crossed;
    let between = ratio.q() - ratio.p();
    Some(HoldModel {
        cue: leg.cue,
        written: leg.written,
        terms: (ratio.p(), ratio.q()),
        repeat: speeds.repeat.to_f64(),
        motor: Pair::each(|id| speeds.motor.of(id).to_f64()),
        pose_per_phase: if crossed || between == 0 {
            1.0
        } else {
            1.0 / f64::from(between)
        },
    })
}

fn longest_stretch(plan: &Plan, legs: &[LegModel]) -> f64 {
    let mut longest = 0.0_f64;
    for (index, leg) in legs.iter().enumerate() {
        if plan
            .legs
            .get(index)
            .is_some_and(|leg| leg.kind == LegKind::Hold)
        {
            let around = [index.checked_sub(1), Some(index + 1)];
            let beside: f64 = around
                .iter()
                .filter_map(|at| at.and_then(|at| legs.get(at)))
                .map(|leg| leg.length)
                .sum();
            longest = longest.max(leg.length + beside);
        }
    }
    longest
}

#[expect(
    clippy::cast_precision_loss,
    reason = "a show has at most 10¹¹ ticks, far below 2⁵³"
)]
fn ticks(count: u64) -> f64 {
    count as f64
}
