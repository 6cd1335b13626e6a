//! Every sample held against the plan: how far each rotor is from where it should be, whole turns followed by continuity.
//!
//! A wrapped position says only where in a turn the rotor is, a pulse only that its mirror is at its mark. The distance to
//! the plan is taken nearest to what the samples before lead to expect (the median of the last sixteen and their trend),
//! so a rotor may drift away by many turns and is still followed. Then the clock is put right by all samples at once.

use super::align::{Aligned, Stretch};
use super::clock::{Clock, wrapped};
use super::model::Model;
use super::read::{Sample, Value};
use super::robust::{Line, as_float, line, median};
use crate::rig::{Pair, RotorId};
use std::collections::VecDeque;

/// One sample against the plan.
#[derive(Clone, Copy, Debug)]
pub(super) struct Point {
    /// Log time.
    pub(super) time: f64,
    /// Motor turns ahead of the plan; NaN where the sample says nothing of that rotor.
    pub(super) ahead: Pair<f64>,
}

/// A pulse that does not belong, or pulses that are missing.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct PulseEvent {
    pub(super) time: f64,
    /// Pulses missing before this one; 0 for a pulse too many.
    pub(super) missing: u32,
}

/// A stretch of the log as followed.
#[derive(Clone, Debug)]
pub(super) struct Tracked {
    pub(super) clock: Clock,
    /// What each rotor alone says of the clock's rate, with its error; `None` where it says nothing.
    pub(super) rates: Pair<Option<(f64, f64)>>,
    /// The rate's error.
    pub(super) rate_error: f64,
    pub(super) points: Vec<Point>,
    pub(super) pulses: Vec<PulseEvent>,
}

const REMEMBERED: usize = 16;

/// Follows one rotor.
struct Follower {
    modulus: f64,
    recent: VecDeque<(f64, f64)>,
}

impl Follower {
    fn new(modulus: f64) -> Self {
        Self {
            modulus,
            recent: VecDeque::new(),
        }
    }

    fn expected(&self, time: f64) -> f64 {
        let count = self.recent.len();
        if count == 0 {
            return 0.0;
        }
        let middle = |part: &mut dyn Iterator<Item = &(f64, f64)>| -> (f64, f64) {
            let (mut times, mut values): (Vec<f64>, Vec<f64>) = part.copied().unzip();
            (
                median(&mut times).unwrap_or(time),
                median(&mut values).unwrap_or(0.0),
            )
        };
        if count < REMEMBERED {
            return middle(&mut self.recent.iter().rev().take(5)).1;
        }
        let older = middle(&mut self.recent.iter().take(REMEMBERED / 2));
        let newer = middle(&mut self.recent.iter().skip(REMEMBERED / 2));
        let span = newer.0 - older.0;
        let trend = if span > 0.0 {
            (newer.1 - older.1) / span
        } else {
            0.0
        };
        // A trend out of a short memory is not carried far.
        newer.1 + trend * (time - newer.0).min(4.0 * span)
    }

    fn take(&mut self, time: f64, ahead: f64) -> f64 {
        let expected = self.expected(time);
        let near = expected + wrapped(ahead - expected, self.modulus);
        self.recent.push_back((time, near));
        if self.recent.len() > REMEMBERED {
            self.recent.pop_front();
        }
        near
    }
}

/// Follows a stretch of the log and puts its clock right.
pub(super) fn track(stretch: &Stretch<'_>, aligned: &Aligned) -> Tracked {
    let mut clock = aligned.clock;
    let (mut points, mut pulses) = follow(stretch, &clock);
    let resolved = whole_turns(stretch, &mut points, &clock, aligned.start_error);
    clock = rebased(stretch.model, &mut points, clock, [resolved, 0.0]);
    let fitted = fit(stretch.model, &points, &clock);
    clock = rebased(stretch.model, &mut points, clock, fitted.step);
    if fitted.step[1].abs() > 1e-7 {
        // The trend that was followed came from the clock: follow once more without it.
        (points, pulses) = follow(stretch, &clock);
        let again = whole_turns(stretch, &mut points, &clock, 0.0);
        clock = rebased(stretch.model, &mut points, clock, [again, 0.0]);
        let last = fit(stretch.model, &points, &clock);
        clock = rebased(stretch.model, &mut points, clock, last.step);
    }
    Tracked {
        rates: fitted.rates,
        rate_error: fitted.rate_error,
        clock,
        points,
        pulses,
    }
}

fn follow(stretch: &Stretch<'_>, clock: &Clock) -> (Vec<Point>, Vec<PulseEvent>) {
    let mut followers = Pair::each(|rotor| Follower::new(stretch.modulus(rotor)));
    let mut points = Vec::with_capacity(stretch.samples.len());
    let mut pulses = Vec::new();
    for sample in stretch.samples {
        let plan_time = clock.plan(sample.time);
        match sample.value {
            Value::Positions(a, b) => {
                let counts = Pair { a, b };
                let ahead = Pair::each(|rotor| {
                    let turns = counts.of(rotor) / stretch.model.rotors.of(rotor).counts;
                    let planned = stretch.model.motor(rotor, plan_time).0;
                    followers.of_mut(rotor).take(sample.time, turns - planned)
                });
                points.push(Point {
                    time: sample.time,
                    ahead,
                });
            }
            Value::Pulse(rotor) => pulse(
                stretch,
                (sample, rotor),
                clock,
                &mut followers,
                &mut points,
                &mut pulses,
            ),
        }
    }
    (points, pulses)
}

/// Takes one pulse: finds which turn of the mirror it belongs to, and so what is missing or doubled before it.
fn pulse(
    stretch: &Stretch<'_>,
    (sample, rotor): (&Sample, RotorId),
    clock: &Clock,
    followers: &mut Pair<Follower>,
    points: &mut Vec<Point>,
    pulses: &mut Vec<PulseEvent>,
) {
    let (planned, speed) = stretch.model.motor(rotor, clock.plan(sample.time));
    let follower = followers.of_mut(rotor);
    let modulus = follower.modulus;
    // Before the new one is taken: how far is it from what was to be expected?
    let expected = follower.expected(sample.time);
    let last = follower.recent.back().map(|(time, _)| *time);
    let point = |ahead: f64| Point {
        time: sample.time,
        ahead: Pair::each(|id| if id == rotor { ahead } else { f64::NAN }),
    };
    if let (Some(before), false) = (last, sample.apart) {
        let earlier = stretch.model.motor(rotor, clock.plan(before)).1;
        let turning = f64::midpoint(speed, earlier).abs() / modulus;
        let turned = turning * (sample.time - before);
        // So soon after the last pulse no mirror comes round again: a contact bounced or a line was written twice.
        if turning > 0.5 && turned < 0.45 {
            let off = wrapped(-planned - expected, modulus).abs();
            let kept = points.iter().rev().find_map(|have| {
                let ahead = *have.ahead.of(rotor);
                (!ahead.is_nan()).then_some(ahead)
            });
            let kept_off = kept.map_or(0.0, |ahead| (ahead - expected).abs());
            pulses.push(PulseEvent {
                time: sample.time,
                missing: 0,
            });
            if off < kept_off {
                let near = follower.take(sample.time, -planned);
                points.push(point(near));
            }
            return;
        }
        let missing = turned.round();
        if turning > 0.5 && (2.0..1e6).contains(&missing) {
            #[expect(
                clippy::cast_possible_truncation,
                clippy::cast_sign_loss,
                reason = "between 2 and a million"
            )]
            pulses.push(PulseEvent {
                time: sample.time,
                missing: missing as u32 - 1,
            });
        }
    }
    let near = follower.take(sample.time, -planned);
    points.push(point(near));
}

/// How far the log's beginning must move for the whole turns to be right, found where both rotors fit best; whole turns
/// are taken off the points.
fn whole_turns(
    stretch: &Stretch<'_>,
    points: &mut [Point],
    clock: &Clock,
    start_error: f64,
) -> f64 {
    const SAMPLES: usize = 400;
    const WINDOW: f64 = 60.0;
    let near = points.partition_point(|point| point.time < clock.from - WINDOW / 2.0)
        ..points.partition_point(|point| point.time <= clock.from + WINDOW);
    let window = points.get(near).unwrap_or(&[]);
    let every = (window.len() / SAMPLES).max(1);
    let mut seen: Vec<(RotorId, f64, f64)> = Vec::new();
    for point in window.iter().step_by(every) {
        for rotor in RotorId::BOTH {
            let ahead = *point.ahead.of(rotor);
            if !ahead.is_nan() && stretch.model.rotors.of(rotor).has_index {
                let speed = stretch.model.motor(rotor, clock.plan(point.time)).1;
                seen.push((rotor, speed, ahead));
            }
        }
    }
    let fastest = seen
        .iter()
        .map(|(rotor, speed, _)| speed.abs() / stretch.modulus(*rotor))
        .fold(0.0, f64::max);
    let shift = if fastest > 0.0 {
        best_shift(stretch, &seen, fastest, start_error)
    } else {
        0.0
    };
    for rotor in RotorId::BOTH {
        let modulus = stretch.modulus(rotor);
        let mut left: Vec<f64> = seen
            .iter()
            .filter(|(of, _, _)| *of == rotor)
            .map(|(_, speed, ahead)| ahead - speed * shift)
            .collect();
        let turns = (median(&mut left).unwrap_or(0.0) / modulus).round() * modulus;
        for point in points.iter_mut() {
            *point.ahead.of_mut(rotor) -= turns;
        }
    }
    shift
}

fn best_shift(
    stretch: &Stretch<'_>,
    seen: &[(RotorId, f64, f64)],
    fastest: f64,
    start_error: f64,
) -> f64 {
    const MOST_STEPS: f64 = 4000.0;
    let reach = (6.0 * start_error).max(0.6 / fastest).min(0.25);
    let step = (1.0 / (16.0 * fastest)).max(reach / MOST_STEPS);
    let mut best = (f64::INFINITY, 0.0);
    let steps = (reach / step).ceil();
    let mut at = -steps;
    while at <= steps {
        let shift = at * step;
        let mut sum = 0.0;
        for (rotor, speed, ahead) in seen {
            let modulus = stretch.modulus(*rotor);
            sum += (wrapped(ahead - speed * shift, modulus) / modulus)
                .abs()
                .min(0.25);
        }
        // Of equally good ones the nearest is meant.
        let score = sum / as_float(seen.len().max(1)) + 0.01 * (shift / reach).powi(2);
        if score < best.0 {
            best = (score, shift);
        }
        at += 1.0;
    }
    best.1
}

/// The points as another clock sees them.
fn rebased(model: &Model, points: &mut [Point], clock: Clock, step: [f64; 2]) -> Clock {
    let moved = clock.moved(step);
    for point in points {
        let (old, new) = (clock.plan(point.time), moved.plan(point.time));
        for rotor in RotorId::BOTH {
            let (phase0, speed0) = model.motor(rotor, old);
            let (phase1, speed1) = model.motor(rotor, new);
            let rough = f64::midpoint(speed0, speed1) * (new - old);
            let closing = model.rotors.of(rotor).closing;
            *point.ahead.of_mut(rotor) -= rough + wrapped(phase1 - phase0 - rough, closing);
        }
    }
    moved
}

struct Fitted {
    step: [f64; 2],
    rates: Pair<Option<(f64, f64)>>,
    rate_error: f64,
}

/// What the distances say of the clock: a rotor whose distance, taken as time, grows evenly is one whose clock is off.
fn fit(model: &Model, points: &[Point], clock: &Clock) -> Fitted {
    let lines = Pair::each(|rotor| rotor_line(model, points, clock, rotor));
    // Only a rotor with an index tells where the beginning is; one that runs away tells it best at first.
    let at_origin = |rotor: RotorId, line: &Line| {
        let (time, late) = line.centres.first()?;
        let known = model.rotors.of(rotor).has_index;
        known.then_some(late - line.slope * time)
    };
    let total = |line: &Line| clock.rate + line.slope;
    let (chosen, rate_error) = match (&lines.a, &lines.b) {
        (Some(a), Some(b)) => {
            let apart = (a.slope - b.slope).abs();
            if apart <= 4.0 * a.error.hypot(b.error) + 1e-8 {
                let weight = b.error.powi(2) / (a.error.powi(2) + b.error.powi(2)).max(1e-300);
                let rate = weight * a.slope + (1.0 - weight) * b.slope;
                let starts = [at_origin(RotorId::A, a), at_origin(RotorId::B, b)];
                let known: Vec<f64> = starts.into_iter().flatten().collect();
                let start = known.iter().sum::<f64>() / as_float(known.len().max(1));
                (Some((start, rate)), a.error.min(b.error))
            } else {
                // They do not agree: the one that runs more evenly is believed, else the one nearer to the plan.
                let even = a.scale.max(b.scale) > 3.0 * a.scale.min(b.scale);
                let first = if even {
                    a.scale < b.scale
                } else {
                    total(a).abs() <= total(b).abs()
                };
                let (rotor, line) = if first {
                    (RotorId::A, a)
                } else {
                    (RotorId::B, b)
                };
                let start = at_origin(rotor, line).unwrap_or(0.0);
                (Some((start, line.slope)), apart / 2.0)
            }
        }
        (Some(line), None) => (
            Some((at_origin(RotorId::A, line).unwrap_or(0.0), line.slope)),
            line.error,
        ),
        (None, Some(line)) => (
            Some((at_origin(RotorId::B, line).unwrap_or(0.0), line.slope)),
            line.error,
        ),
        (None, None) => (None, f64::INFINITY),
    };
    Fitted {
        step: chosen.map_or([0.0; 2], |(start, rate)| [start, rate]),
        rates: Pair::each(|rotor| {
            lines
                .of(rotor)
                .as_ref()
                .map(|line| (total(line), line.error))
        }),
        rate_error,
    }
}

/// Distance over planned speed, against time: the slope is a share by which the clock is off.
///
/// A rotor that is driven keeps one line through the whole log, and a long line is known best. One that runs free keeps
/// it within a hold only, since its distance goes with the turns and not with the time. The line with the smaller error
/// is taken; without an index there is an unknown distance to begin with, and only the second way is open.
fn rotor_line(model: &Model, points: &[Point], clock: &Clock, rotor: RotorId) -> Option<Line> {
    const SAMPLES: usize = 20_000;
    let every = (points.len() / SAMPLES).max(1);
    let mut whole: Vec<(f64, f64)> = Vec::new();
    let mut parts: Vec<Vec<(f64, f64)>> = Vec::new();
    let mut leg = None;
    for point in points.iter().step_by(every) {
        let ahead = *point.ahead.of(rotor);
        let plan_time = clock.plan(point.time);
        let speed = model.motor(rotor, plan_time).1;
        if ahead.is_nan() || speed.abs() < 0.2 * model.fastest.of(rotor) {
            continue;
        }
        let late = (point.time - clock.from, ahead / speed);
        whole.push(late);
        let here = model
            .moment(plan_time)
            .map(|moment| (moment.leg, moment.pass));
        if parts.is_empty() || here != leg {
            parts.push(Vec::new());
        }
        leg = here;
        if let Some(part) = parts.last_mut() {
            part.push(late);
        }
    }
    parts.retain(|part| part.len() >= 4);
    let by_parts = line(&parts, 0.0);
    if !model.rotors.of(rotor).has_index {
        return by_parts;
    }
    match (line(&[whole], 0.0), by_parts) {
        (Some(long), Some(short)) if short.error < long.error => Some(short),
        (long, short) => long.or(short),
    }
}
