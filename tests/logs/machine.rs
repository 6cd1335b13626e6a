//! A machine that plays a table, and its loggers.

use super::common::{brief, plan_of};
use phasewright::audit::log::{LogReport, audit};
use phasewright::finding::{Finding, Place};
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::RotorId;
use phasewright::setpoint::Rows;
use std::fmt::Write;

/// Seeded chance (xorshift64, Marsaglia 2003).
pub(crate) struct Dice(u64);

impl Dice {
    pub(crate) fn new(seed: u64) -> Self {
        let mut dice = Self(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) | 1);
        for _ in 0..20 {
            dice.even();
        }
        dice
    }
    /// Evenly from 0 to 1.
    pub(crate) fn even(&mut self) -> f64 {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }
    /// Normal, of deviation 1 (Box & Muller 1958).
    pub(crate) fn normal(&mut self) -> f64 {
        let (a, b) = (self.even().max(1e-300), self.even());
        (-2.0 * a.ln()).sqrt() * (2.0 * std::f64::consts::PI * b).cos()
    }
}

/// Motor turns of both rotors, a first.
pub(crate) type Turns = [f64; 2];

/// Unwrapped set-points of a table, and motors that follow them smoothly from row to row.
pub(crate) struct Machine {
    pub(crate) plan: Plan,
    tick: f64,
    turns: Vec<Turns>,
    speed: Vec<Turns>,
    loop_start: usize,
}

impl Machine {
    pub(crate) fn new(rig: &str, show: &str) -> Self {
        let (plan, findings) = plan_of(rig, show);
        assert!(
            super::common::errors(&findings).is_empty(),
            "{:#?}",
            brief(&findings)
        );
        let rows = Rows::new(&plan).collect(0..plan.rows());
        let mut counts = [0_i64; 2];
        let (mut turns, mut speed) = (Vec::new(), Vec::new());
        for row in &rows {
            let both = [(row.rotors.a, RotorId::A), (row.rotors.b, RotorId::B)];
            let here = [0, 1].map(|at| {
                let (rotor, id) = both[at];
                let rough = counts[at] as f64 / f64::from(plan.rig.rotor(id).counts);
                let part = rotor.turns as f64 / 1e12;
                (rough - part).round() + part
            });
            turns.push(here);
            speed.push([0, 1].map(|at| both[at].0.rpm as f64 / 6e7));
            counts = [0, 1].map(|at| counts[at] + both[at].0.step);
        }
        let loop_start = plan.loop_start().map_or(0, |start| start.0 as usize);
        // One more row, so that the last has a next: the loop start again, whole turns further, or rest.
        let after = [0, 1].map(|at| {
            let per_turn = f64::from(plan.rig.rotor(RotorId::BOTH[at]).counts);
            let rough = counts[at] as f64 / per_turn;
            if plan.loop_leg.is_some() {
                turns[loop_start][at] + (rough - turns[loop_start][at]).round()
            } else {
                turns.last().unwrap()[at]
            }
        });
        turns.push(after);
        speed.push(if plan.loop_leg.is_some() {
            speed[loop_start]
        } else {
            [0.0; 2]
        });
        Self {
            tick: plan.tick().to_f64(),
            plan,
            turns,
            speed,
            loop_start,
        }
    }

    /// Motor turns `time` seconds after row 0; the loop goes on for ever.
    pub(crate) fn motors(&self, time: f64) -> Turns {
        if time <= 0.0 {
            return [0.0; 2];
        }
        let last = self.turns.len() - 1;
        let mut at = time / self.tick;
        let mut gained = [0.0; 2];
        if at >= last as f64 {
            if self.plan.loop_leg.is_none() {
                return self.turns[last];
            }
            let length = (last - self.loop_start) as f64;
            let passes = ((at - self.loop_start as f64) / length).floor();
            at -= passes * length;
            gained =
                [0, 1].map(|r| passes * (self.turns[last][r] - self.turns[self.loop_start][r]));
        }
        let row = (at.floor() as usize).min(last - 1);
        let u = at - row as f64;
        [0, 1].map(|r| {
            // Cubic Hermite interpolation: both ends with their speeds.
            let (x0, x1) = (self.turns[row][r], self.turns[row + 1][r]);
            let (v0, v1) = (
                self.speed[row][r] * self.tick,
                self.speed[row + 1][r] * self.tick,
            );
            let (u2, u3) = (u * u, u * u * u);
            gained[r]
                + x0 * (2.0 * u3 - 3.0 * u2 + 1.0)
                + v0 * (u3 - 2.0 * u2 + u)
                + x1 * (3.0 * u2 - 2.0 * u3)
                + v1 * (u3 - u2)
        })
    }

    /// Mirror turns (counter-clockwise, index angle aside) of motor turns.
    pub(crate) fn mirrors(&self, motors: Turns) -> Turns {
        [0, 1].map(|at| {
            let rotor = self.plan.rig.rotor(RotorId::BOTH[at]);
            let gear = rotor.gear.value;
            motors[at] * f64::from(rotor.sense) * f64::from(gear.mirror) / f64::from(gear.motor)
        })
    }

    /// First and last moment of the hold of cue `cue`, in plan seconds of the first pass, and its p and q.
    pub(crate) fn hold(&self, cue: u32) -> (f64, f64, f64, f64) {
        let leg = self
            .plan
            .legs
            .iter()
            .find(|leg| leg.kind == LegKind::Hold && leg.cue == cue)
            .unwrap();
        let ratio = self.plan.cue(leg).unwrap().figure.ratio;
        let from = leg.start.0 as f64 * self.tick;
        let until = from + leg.ticks.0 as f64 * self.tick;
        (from, until, f64::from(ratio.p()), f64::from(ratio.q()))
    }

    /// How fast the pose of `cue` turned away from the planned one, in degrees a minute, where `actual` gives what the
    /// motors really did at a plan time: α = (q·θa − p·θb)/(q − p), from the two ends of the hold.
    pub(crate) fn drift(&self, cue: u32, actual: &dyn Fn(f64) -> Turns) -> f64 {
        let (from, until, p, q) = self.hold(cue);
        let (from, until) = (from + 0.01, until - 0.01);
        let off = |time: f64| {
            let (is, should) = (self.mirrors(actual(time)), self.mirrors(self.motors(time)));
            (q * (is[0] - should[0]) - p * (is[1] - should[1])) / (q - p)
        };
        (off(until) - off(from)) / (until - from) * 360.0 * 60.0
    }

    /// How many cues there are.
    pub(crate) fn cues(&self) -> u32 {
        self.plan.legs.iter().map(|leg| leg.cue).max().unwrap()
            - u32::from(self.plan.loop_leg.is_some())
    }

    pub(crate) fn audit(&self, log: &str) -> (Option<LogReport>, Vec<Finding>) {
        audit(&mut log.as_bytes(), &self.plan, Place::default()).unwrap()
    }

    /// The report of a log that must fit.
    #[track_caller]
    pub(crate) fn report(&self, log: &str) -> (LogReport, Vec<Finding>) {
        let (report, findings) = self.audit(log);
        (report.expect("the log fits"), findings)
    }
}

/// How a logger sees the machine: its clock reads `row_0` when the table starts, and the controller's runs `ppm` faster.
#[derive(Clone, Copy)]
pub(crate) struct Logger {
    pub(crate) row_0: f64,
    pub(crate) ppm: f64,
    /// Deviation of its time stamps, s.
    pub(crate) jitter: f64,
    /// Deviation of its positions before they are rounded, counts.
    pub(crate) noise: f64,
}

impl Logger {
    pub(crate) fn plan(&self, stamp: f64) -> f64 {
        (stamp - self.row_0) * (1.0 + self.ppm * 1e-6)
    }
    fn stamp(&self, plan: f64) -> f64 {
        plan / (1.0 + self.ppm * 1e-6) + self.row_0
    }

    /// Samples of both positions every `period` from `from` until `until` of the logger's time.
    pub(crate) fn positions(
        &self,
        machine: &Machine,
        (from, until, period): (f64, f64, f64),
        actual: &dyn Fn(f64) -> Turns,
        dice: &mut Dice,
    ) -> Vec<(f64, i64, i64)> {
        let count = ((until - from) / period) as usize;
        (0..count)
            .map(|number| {
                let when = from + number as f64 * period;
                let motors = actual(self.plan(when));
                let [a, b] = [0, 1].map(|at| {
                    let counts = f64::from(machine.plan.rig.rotor(RotorId::BOTH[at]).counts);
                    (motors[at] * counts + self.noise * dice.normal()).round() as i64
                });
                (when + self.jitter * dice.normal(), a, b)
            })
            .collect()
    }

    /// Index pulses of both mirrors, in the order of time.
    pub(crate) fn pulses(
        &self,
        machine: &Machine,
        (from, until): (f64, f64),
        actual: &dyn Fn(f64) -> Turns,
        dice: &mut Dice,
    ) -> Vec<(f64, char)> {
        let step = 5e-4;
        let mut pulses = Vec::new();
        let mut before = machine.mirrors(actual(self.plan(from)));
        let mut time = from;
        while time < until {
            let next = time + step;
            let after = machine.mirrors(actual(self.plan(next)));
            for at in [0, 1] {
                if (before[at].floor() - after[at].floor()).abs() > 0.5 {
                    let mark = before[at].floor().max(after[at].floor());
                    let (mut low, mut high) = (time, next);
                    for _ in 0..26 {
                        let middle = f64::midpoint(low, high);
                        let there = machine.mirrors(actual(self.plan(middle)))[at];
                        if (there < mark) == (before[at] < mark) {
                            low = middle;
                        } else {
                            high = middle;
                        }
                    }
                    pulses.push((low + self.jitter * dice.normal(), ['a', 'b'][at]));
                }
            }
            before = after;
            time = next;
        }
        pulses.sort_by(|one, other| one.0.total_cmp(&other.0));
        pulses
    }

    /// The logger's time of a moment of the plan.
    pub(crate) fn at(&self, plan: f64) -> f64 {
        self.stamp(plan)
    }
}

/// A position log as text, counts within a turn.
pub(crate) fn wrapped_csv(machine: &Machine, samples: &[(f64, i64, i64)]) -> String {
    let turn = RotorId::BOTH.map(|id| i64::from(machine.plan.rig.rotor(id).counts));
    let mut text = String::from("time_s,a_counts,b_counts\n");
    for (time, a, b) in samples {
        writeln!(
            text,
            "{time:.6},{},{}",
            a.rem_euclid(turn[0]),
            b.rem_euclid(turn[1])
        )
        .unwrap();
    }
    text
}

/// A pulse log as text.
pub(crate) fn pulse_csv(pulses: &[(f64, char)]) -> String {
    let mut text = String::from("time_s,rotor\n");
    for (time, rotor) in pulses {
        writeln!(text, "{time:.6},{rotor}").unwrap();
    }
    text
}
