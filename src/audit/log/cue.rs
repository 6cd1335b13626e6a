//! What the log says of each figure that stood: speeds, ratio, pose and its drift.

use super::model::{HoldModel, Model, hold};
use super::ratio::{SMALL, nearest};
use super::read::LogKind;
use super::robust::{Line, line, median};
use super::track::{Point, Tracked};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};
use std::collections::BTreeMap;

/// A measured value with its standard error; three errors cover 99.73 %.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measured {
    /// The value.
    pub value: f64,
    /// Its standard error, in the same unit.
    pub error: f64,
}

/// How far a rotor was from where it should have been.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Following {
    /// The usual distance: the median, in degrees of the motor, ahead positive.
    pub usual_deg: f64,
    /// The largest distance from the usual one, single wild samples set aside (the 99.5th percentile).
    pub spread_deg: f64,
}

/// One cue of the show, as measured while its figure stood.
#[derive(Clone, Debug)]
pub struct CueReport {
    /// Its number in the table's `cue` column.
    pub cue: u32,
    /// Index of the written cue in the show.
    pub written: u32,
    /// Its name, if it has one.
    pub name: Option<String>,
    /// The figure as written.
    pub figure: String,
    /// Planned p and q.
    pub planned: (i32, i32),
    /// Times that it stood within the log.
    pub passes: usize,
    /// First and last moment in the plan, seconds after row 0; of the first pass seen.
    pub span_s: (f64, f64),
    /// Samples with a weight in the pose's drift (pulses: of both rotors).
    pub used: usize,
    /// Samples set aside as outliers.
    pub removed: usize,
    /// Measured motor speeds by the controller's clock, rpm; `None` where too little was seen of that rotor.
    pub rpm: Pair<Option<Measured>>,
    /// Planned motor speeds, rpm.
    pub planned_rpm: Pair<f64>,
    /// Speed of mirror a over that of mirror b, the planned spin taken off; `None` where b stands or too little was seen.
    pub ratio: Option<Measured>,
    /// The nearest ratio of small whole numbers.
    pub nearest: Option<(i64, i64)>,
    /// How fast the pose turns away from the planned one, degrees a minute, counter-clockwise positive (crossed: the
    /// relative phase).
    pub drift_deg_per_min: Option<Measured>,
    /// Where the pose stands against the planned one, in degrees; `None` where the pose is not known.
    pub pose_off_deg: Option<f64>,
    /// Distances from the plan.
    pub following: Pair<Option<Following>>,
    /// Samples missing, late, doubled during the hold.
    pub lost: u64,
    /// Samples out of their turn.
    pub late: u64,
    /// Samples that came twice.
    pub doubled: u64,
    /// The pose's distance in degrees over time (log seconds), thinned for the plot.
    pub(super) trace: Vec<(f64, f64)>,
    /// Where the rotors stood at the ends of the hold, for jumps between holds: plan-ordered.
    pub(super) stands: Vec<Stand>,
}

/// Where both rotors stood against the plan over one hold: (log time, mirror turns, mirror turns/s).
#[derive(Clone, Copy, Debug)]
pub(super) struct Stand {
    /// Which stretch of steady time stamps: stands of different ones are not compared.
    pub(super) stretch: usize,
    pub(super) from: f64,
    pub(super) until: f64,
    pub(super) at: Pair<Option<f64>>,
    pub(super) drift: Pair<f64>,
}

/// Samples of one hold, pass by pass.
#[derive(Default)]
struct Bin {
    passes: Vec<Vec<(f64, Point)>>,
    /// The stretch of steady time stamps that each pass is in.
    stretches: Vec<usize>,
    last_pass: Option<(usize, u64)>,
}

/// The reports of every hold that the tracked stretches touch, in the order of play.
pub(super) fn cues(
    plan: &Plan,
    model: &Model,
    kind: LogKind,
    time_step: f64,
    stretches: &[Tracked],
) -> Vec<CueReport> {
    let mut bins: BTreeMap<usize, Bin> = BTreeMap::new();
    for (number, stretch) in stretches.iter().enumerate() {
        for point in &stretch.points {
            let Some(moment) = model.moment(stretch.clock.plan(point.time)) else {
                continue;
            };
            if hold_kind(plan, moment.leg) {
                let bin = bins.entry(moment.leg).or_default();
                if bin.last_pass != Some((number, moment.pass)) {
                    bin.passes.push(Vec::new());
                    bin.stretches.push(number);
                    bin.last_pass = Some((number, moment.pass));
                }
                if let Some(pass) = bin.passes.last_mut() {
                    pass.push((moment.inside, *point));
                }
            }
        }
    }
    bins.into_iter()
        .filter_map(|(leg, bin)| {
            let planned = hold(plan, leg)?;
            let rate_error = bin
                .stretches
                .iter()
                .filter_map(|number| stretches.get(*number))
                .map(|stretch| stretch.rate_error.min(MOST_RATE_ERROR))
                .fold(0.0, f64::max);
            let scene = Scene {
                rate_error,
                plan,
                model,
                kind,
                time_step,
                hold: planned,
                leg,
            };
            Some(scene.report(&bin.passes, &bin.stretches))
        })
        .collect()
}

fn hold_kind(plan: &Plan, leg: usize) -> bool {
    plan.legs
        .get(leg)
        .is_some_and(|leg| leg.kind == crate::plan::LegKind::Hold)
}

/// A clock whose rate is not known at all is still no further off than this.
const MOST_RATE_ERROR: f64 = 0.01;

struct Scene<'a> {
    /// Of the controller's clock: how long a minute is.
    rate_error: f64,
    plan: &'a Plan,
    model: &'a Model,
    kind: LogKind,
    time_step: f64,
    hold: HoldModel,
    leg: usize,
}

/// The slope of q·θa − p·θb against the plan in turns/s, and what it rests on.
struct PhaseLine {
    slope: f64,
    error: f64,
    used: usize,
    removed: usize,
}

impl Scene<'_> {
    fn report(&self, passes: &[Vec<(f64, Point)>], stretches: &[usize]) -> CueReport {
        let lines = Pair::each(|rotor| self.rotor_line(passes, rotor));
        let phase = match self.kind {
            LogKind::Positions => self.phase_line(passes),
            LogKind::Pulses => self.combined(&lines),
        };
        let ratio = self.ratio(&lines, phase.as_ref());
        let (p, q) = self.hold.terms;
        let most = SMALL.max(i64::from(p.abs())).max(i64::from(q.abs()));
        let planned = self.plan.legs.get(self.leg);
        let cue = planned.and_then(|leg| self.plan.cue(leg));
        let times: Vec<f64> = passes
            .iter()
            .flatten()
            .map(|(_, point)| point.time)
            .collect();
        CueReport {
            cue: self.hold.cue,
            written: self.hold.written,
            name: cue.and_then(|cue| cue.name.clone()),
            figure: cue.map_or_else(String::new, |cue| cue.figure.written.clone()),
            planned: self.hold.terms,
            passes: passes.len(),
            span_s: (
                times.first().copied().unwrap_or(0.0),
                times.last().copied().unwrap_or(0.0),
            ),
            used: phase.as_ref().map_or(0, |phase| phase.used),
            removed: phase.as_ref().map_or(0, |phase| phase.removed),
            rpm: self.rpm(&lines),
            planned_rpm: Pair::each(|rotor| 60.0 * self.hold.motor.of(rotor)),
            nearest: match (q, ratio) {
                (0, _) => None,
                (_, Some(measured)) => {
                    Some(signed(nearest(measured.value, measured.error, most), q))
                }
                _ => None,
            },
            ratio,
            drift_deg_per_min: phase.as_ref().map(|phase| self.drift(phase)),
            pose_off_deg: self.pose_off(&lines),
            following: Pair::each(|rotor| following(passes, rotor)),
            lost: 0,
            late: 0,
            doubled: 0,
            trace: self.trace(passes),
            stands: self.stands(passes, stretches, &lines),
        }
    }

    fn rpm(&self, lines: &Pair<Option<Line>>) -> Pair<Option<Measured>> {
        Pair::each(|rotor| {
            let line = lines.of(rotor).as_ref()?;
            let planned = self.hold.motor.of(rotor);
            Some(Measured {
                value: 60.0 * (planned + line.slope),
                error: 60.0 * line.error.hypot(planned * self.rate_error),
            })
        })
    }

    fn drift(&self, phase: &PhaseLine) -> Measured {
        let scale = self.hold.pose_per_phase * 360.0 * 60.0;
        // Where the clock's rate is not known well, neither is the length of a minute.
        let clock = (phase.slope.abs() + self.spin()) * self.rate_error;
        Measured {
            value: phase.slope * scale,
            error: phase.error.hypot(clock) * scale.abs(),
        }
    }

    /// The smallest difference of the motor's phase that the log knows, in turns.
    fn resolution(&self, rotor: RotorId) -> f64 {
        match self.kind {
            LogKind::Positions => 1.0 / self.model.rotors.of(rotor).counts,
            LogKind::Pulses => self.time_step * self.hold.motor.of(rotor).abs(),
        }
    }

    fn rotor_line(&self, passes: &[Vec<(f64, Point)>], rotor: RotorId) -> Option<Line> {
        let groups: Vec<Vec<(f64, f64)>> = passes
            .iter()
            .map(|pass| {
                pass.iter()
                    .map(|(inside, point)| (*inside, *point.ahead.of(rotor)))
                    .filter(|(_, ahead)| !ahead.is_nan())
                    .collect()
            })
            .collect();
        line(&groups, self.resolution(rotor))
    }

    /// How fast q·θa − p·θb turns as planned, turns/s, without its sign.
    fn spin(&self) -> f64 {
        let shares = self.shares();
        (shares.a * self.hold.motor.a + shares.b * self.hold.motor.b).abs()
    }

    /// Motor turns to turns of q·θa − p·θb.
    fn shares(&self) -> Pair<f64> {
        let (p, q) = self.hold.terms;
        let rotors = &self.model.rotors;
        Pair {
            a: f64::from(q) * rotors.a.mirror_per_motor,
            b: -f64::from(p) * rotors.b.mirror_per_motor,
        }
    }

    fn phase_of(&self, point: &Point) -> f64 {
        let shares = self.shares();
        shares.a * point.ahead.a + shares.b * point.ahead.b
    }

    /// Positions of both rotors belong to one moment: their errors of time cancel in the pose, so it is fitted itself.
    fn phase_line(&self, passes: &[Vec<(f64, Point)>]) -> Option<PhaseLine> {
        let shares = self.shares();
        let groups: Vec<Vec<(f64, f64)>> = passes
            .iter()
            .map(|pass| {
                pass.iter()
                    .map(|(inside, point)| (*inside, self.phase_of(point)))
                    .collect()
            })
            .collect();
        let resolution =
            (shares.a * self.resolution(RotorId::A)).hypot(shares.b * self.resolution(RotorId::B));
        let fitted = line(&groups, resolution)?;
        Some(PhaseLine {
            slope: fitted.slope,
            error: fitted.error,
            used: fitted.used,
            removed: fitted.removed,
        })
    }

    /// Pulses of the two rotors come at moments of their own: two lines make the pose.
    fn combined(&self, lines: &Pair<Option<Line>>) -> Option<PhaseLine> {
        let shares = self.shares();
        let mut sum = PhaseLine {
            slope: 0.0,
            error: 0.0,
            used: 0,
            removed: 0,
        };
        for rotor in RotorId::BOTH {
            let share = *shares.of(rotor);
            if share != 0.0 {
                let line = lines.of(rotor).as_ref()?;
                sum.slope += share * line.slope;
                sum.error = sum.error.hypot(share * line.error);
                sum.used += line.used;
                sum.removed += line.removed;
            }
        }
        Some(sum)
    }

    /// (p·f + δa)/(q·f + δb) = p/q + (q·δa − p·δb)/(q·(q·f + δb)), with δ what the mirrors turn faster than planned.
    fn ratio(&self, lines: &Pair<Option<Line>>, phase: Option<&PhaseLine>) -> Option<Measured> {
        let (p, q) = self.hold.terms;
        let phase = phase?;
        if q == 0 {
            return None;
        }
        let mirror = self.model.rotors.b.mirror_per_motor;
        let faster = lines.b.as_ref().map_or(0.0, |line| line.slope * mirror);
        let (p, q) = (f64::from(p), f64::from(q));
        let speed = q * self.hold.repeat + faster;
        Some(Measured {
            value: p / q + phase.slope / (q * speed),
            error: phase.error / (q * speed).abs(),
        })
    }

    fn pose_off(&self, lines: &Pair<Option<Line>>) -> Option<f64> {
        if !self.plan.rig.knows_pose() {
            return None;
        }
        let shares = self.shares();
        let mut phase = 0.0;
        for rotor in RotorId::BOTH {
            let share = *shares.of(rotor);
            if share != 0.0 {
                let line = lines.of(rotor).as_ref()?;
                let (middle, ahead) = line.centres.first()?;
                // The pose is that of the first row of the hold, where it lands.
                phase += share * (ahead - line.slope * middle);
            }
        }
        Some(super::clock::wrapped(phase, 1.0) * self.hold.pose_per_phase * 360.0)
    }

    fn trace(&self, passes: &[Vec<(f64, Point)>]) -> Vec<(f64, f64)> {
        const MOST: usize = 240;
        let degrees = self.hold.pose_per_phase * 360.0;
        let points: Vec<(f64, f64)> = match self.kind {
            LogKind::Positions => passes
                .iter()
                .flatten()
                .map(|(_, point)| (point.time, self.phase_of(point) * degrees))
                .collect(),
            LogKind::Pulses => pulse_trace(passes, self.shares(), degrees),
        };
        let block = points.len().div_ceil(MOST).max(1);
        points
            .chunks(block)
            .filter_map(|chunk| {
                let (mut times, mut values): (Vec<f64>, Vec<f64>) = chunk.iter().copied().unzip();
                Some((median(&mut times)?, median(&mut values)?))
            })
            .collect()
    }

    fn stands(
        &self,
        passes: &[Vec<(f64, Point)>],
        stretches: &[usize],
        lines: &Pair<Option<Line>>,
    ) -> Vec<Stand> {
        passes
            .iter()
            .zip(stretches)
            .enumerate()
            .filter_map(|(number, (pass, stretch))| {
                let from = pass.first()?.1.time;
                let until = pass.last()?.1.time;
                let turns = |rotor: RotorId, value: f64| {
                    value * self.model.rotors.of(rotor).mirror_per_motor
                };
                Some(Stand {
                    stretch: *stretch,
                    from,
                    until,
                    at: Pair::each(|rotor| {
                        let (_, ahead) = lines.of(rotor).as_ref()?.centres.get(number)?;
                        let seen = pass
                            .iter()
                            .any(|(_, point)| !point.ahead.of(rotor).is_nan());
                        seen.then(|| turns(rotor, *ahead))
                    }),
                    drift: Pair::each(|rotor| {
                        turns(
                            rotor,
                            lines.of(rotor).as_ref().map_or(0.0, |line| line.slope),
                        )
                    }),
                })
            })
            .collect()
    }
}

/// The pose between pulses: each pulse with the last one of the other rotor.
fn pulse_trace(passes: &[Vec<(f64, Point)>], shares: Pair<f64>, degrees: f64) -> Vec<(f64, f64)> {
    let mut trace = Vec::new();
    for pass in passes {
        let mut last = Pair {
            a: (shares.a == 0.0).then_some(0.0),
            b: (shares.b == 0.0).then_some(0.0),
        };
        for (_, point) in pass {
            for rotor in RotorId::BOTH {
                let ahead = *point.ahead.of(rotor);
                if !ahead.is_nan() {
                    *last.of_mut(rotor) = Some(ahead);
                }
            }
            if let (Some(a), Some(b)) = (last.a, last.b) {
                trace.push((point.time, (shares.a * a + shares.b * b) * degrees));
            }
        }
    }
    trace
}

fn following(passes: &[Vec<(f64, Point)>], rotor: RotorId) -> Option<Following> {
    let mut values: Vec<f64> = passes
        .iter()
        .flatten()
        .map(|(_, point)| *point.ahead.of(rotor))
        .filter(|ahead| !ahead.is_nan())
        .collect();
    let usual = median(&mut values)?;
    let mut apart: Vec<f64> = values.iter().map(|value| (value - usual).abs()).collect();
    let at = (apart.len().saturating_sub(1)) * 199 / 200;
    let (_, spread, _) = apart.select_nth_unstable_by(at, f64::total_cmp);
    Some(Following {
        usual_deg: usual * 360.0,
        spread_deg: *spread * 360.0,
    })
}

/// p : q as the show writes it: the sign of q is the planned one where b turns.
fn signed((p, q): (i64, i64), planned: i32) -> (i64, i64) {
    if planned < 0 { (-p, -q) } else { (p, q) }
}
