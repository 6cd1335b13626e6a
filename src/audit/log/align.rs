//! Where in the plan a log begins: found from speeds alone, which need no starting phase and bear whole lost turns.
//!
//! Neighbouring samples of a rotor say how far it turned between them (positions: up to whole turns; pulses: one turn of
//! the mirror). Held against what the plan turns in the same time, they give a cost for every assumed beginning. A grid
//! over the whole show finds the best ones, least squares with outliers set aside (Tukey's biweight) makes them fine,
//! first over a short window, then over windows twice as long until the clock's rate is known over the whole log.

use super::clock::{Clock, Normal, wrapped};
use super::model::Model;
use super::read::{LogKind, Sample, Value};
use super::robust::{as_float, biweight, median};
use crate::rig::{Pair, RotorId};

/// What a rotor turned between two neighbouring samples.
#[derive(Clone, Copy, Debug)]
struct Span {
    rotor: RotorId,
    from: f64,
    until: f64,
    /// Motor turns; for a pulse the turns that one turn of the mirror takes.
    turned: f64,
}

/// One stretch of steady time stamps, with what is needed to read it.
#[derive(Clone, Copy)]
pub(super) struct Stretch<'l> {
    pub(super) model: &'l Model,
    pub(super) kind: LogKind,
    pub(super) samples: &'l [Sample],
}

/// A clock and how well its start is known, in seconds.
#[derive(Clone, Copy, Debug)]
pub(super) struct Aligned {
    pub(super) clock: Clock,
    pub(super) start_error: f64,
    /// How badly the speeds fit, from 0 (perfectly) to 1 (not at all).
    pub(super) cost: f64,
}

/// A cost above this is no fit.
pub(super) const MOST_COST: f64 = 0.35;
/// Differences of more than this share of a turn count alike.
const CAP: f64 = 0.25;
const BEST: usize = 12;
const GRID_SPANS: usize = 160;
const FINE_SPANS: usize = 3000;
const MOST_CANDIDATES: f64 = 1.0e6;

impl<'l> Stretch<'l> {
    /// Motor turns after which a value of this rotor repeats.
    pub(super) fn modulus(&self, rotor: RotorId) -> f64 {
        match self.kind {
            LogKind::Positions => 1.0,
            LogKind::Pulses => 1.0 / self.model.rotors.of(rotor).mirror_per_motor.abs(),
        }
    }

    /// First and last time.
    pub(super) fn times(&self) -> (f64, f64) {
        let first = self.samples.first().map_or(0.0, |sample| sample.time);
        let last = self.samples.last().map_or(first, |sample| sample.time);
        (first, last)
    }

    fn between(&self, from: f64, until: f64) -> &'l [Sample] {
        let low = self.samples.partition_point(|sample| sample.time < from);
        let high = self.samples.partition_point(|sample| sample.time <= until);
        self.samples.get(low..high.max(low)).unwrap_or(&[])
    }

    /// At most `most` spans, evenly over the samples from `from` until `until`.
    fn spans(&self, from: f64, until: f64, most: usize) -> Vec<Span> {
        let samples = self.between(from, until);
        let every = (samples.len() / most.max(1)).max(1);
        let mut spans = Vec::new();
        for at in (0..samples.len()).step_by(every) {
            match self.kind {
                LogKind::Positions => self.position_spans(samples, at, &mut spans),
                LogKind::Pulses => spans.extend(self.pulse_span(samples, at)),
            }
        }
        spans
    }

    fn position_spans(&self, samples: &[Sample], at: usize, spans: &mut Vec<Span>) {
        let Some(Sample {
            time: from,
            value: Value::Positions(a0, b0),
            ..
        }) = samples.get(at).copied()
        else {
            return;
        };
        // Rounding of the counts matters less over a few milliseconds.
        let later = samples
            .iter()
            .skip(at + 1)
            .take(16)
            .take_while(|sample| !sample.apart)
            .find(|sample| sample.time - from >= 0.004);
        if let Some(Sample {
            time: until,
            value: Value::Positions(a1, b1),
            ..
        }) = later.copied()
        {
            let counts = Pair {
                a: a1 - a0,
                b: b1 - b0,
            };
            for rotor in RotorId::BOTH {
                spans.push(Span {
                    rotor,
                    from,
                    until,
                    turned: counts.of(rotor) / self.model.rotors.of(rotor).counts,
                });
            }
        }
    }

    fn pulse_span(&self, samples: &[Sample], at: usize) -> Option<Span> {
        let here = samples.get(at)?;
        let Value::Pulse(rotor) = here.value else {
            return None;
        };
        let mut apart = here.apart;
        for before in samples.get(..at)?.iter().rev().take(64) {
            if apart {
                return None;
            }
            if before.value == here.value {
                return Some(Span {
                    rotor,
                    from: before.time,
                    until: here.time,
                    turned: self.modulus(rotor),
                });
            }
            apart = before.apart;
        }
        None
    }

    /// What the span turned more than the plan says, in turns of its modulus, and the planned speeds at both ends.
    fn misfit(&self, span: &Span, clock: &Clock) -> (f64, [f64; 2]) {
        let modulus = self.modulus(span.rotor);
        let (phase0, speed0) = self.model.motor(span.rotor, clock.plan(span.from));
        let (phase1, speed1) = self.model.motor(span.rotor, clock.plan(span.until));
        let planned = phase1 - phase0;
        let misfit = match self.kind {
            LogKind::Positions => wrapped(span.turned - planned, modulus) / modulus,
            LogKind::Pulses => {
                // The planned phases are known up to whole turns of the gear; the speeds tell which.
                let rough = f64::midpoint(speed0, speed1) * (span.until - span.from);
                let closing = self.model.rotors.of(span.rotor).closing;
                let planned = rough + wrapped(planned - rough, closing);
                let sign = if planned < 0.0 { -1.0 } else { 1.0 };
                (span.turned * sign - planned) / modulus
            }
        };
        (misfit, [speed0 / modulus, speed1 / modulus])
    }

    fn cost(&self, spans: &[Span], clock: &Clock, give_up: f64) -> f64 {
        let most = give_up * as_float(spans.len()) * CAP;
        let mut sum = 0.0;
        for span in spans {
            sum += self.misfit(span, clock).0.abs().min(CAP);
            if sum > most {
                return f64::INFINITY;
            }
        }
        sum / (CAP * as_float(spans.len().max(1)))
    }

    /// Least squares with outliers set aside, from a clock that is nearly right.
    fn refine(&self, spans: &[Span], clock: Clock) -> Aligned {
        let mut best = clock;
        let mut error = [1.0, 1e-3];
        for _ in 0..12 {
            let misfits: Vec<(f64, [f64; 2])> =
                spans.iter().map(|span| self.misfit(span, &best)).collect();
            let mut sizes: Vec<f64> = misfits.iter().map(|(misfit, _)| misfit.abs()).collect();
            let scale = (1.5 * median(&mut sizes).unwrap_or(0.0)).max(1e-4);
            let mut normal = Normal::with_prior([1.0 / scale, 3e-3 / scale]);
            for (span, (misfit, [speed0, speed1])) in spans.iter().zip(misfits) {
                let weight = biweight(misfit / scale);
                let at = [span.from - best.from, span.until - best.from];
                let [t0, t1] = at;
                let slopes = [speed1 - speed0, speed1 * t1 - speed0 * t0];
                normal.add(weight, slopes, misfit);
            }
            let Some((step, deviations)) = normal.solve() else {
                break;
            };
            best = best.moved(step);
            error = deviations.map(|deviation| deviation * scale);
            if step[0].abs() < 1e-9 && step[1].abs() < 1e-12 {
                break;
            }
        }
        Aligned {
            clock: best,
            start_error: error[0],
            cost: self.cost(spans, &best, f64::INFINITY),
        }
    }

    /// A clock already known, tried on this stretch.
    pub(super) fn tried(&self, clock: Clock) -> Aligned {
        let (first, last) = self.times();
        let spans = self.spans(first, last, FINE_SPANS);
        self.refine(&spans, clock)
    }

    /// The clock, found from nothing; `None` where there are too few samples.
    pub(super) fn align(&self) -> Option<Aligned> {
        let (first, last) = self.times();
        let length = (self.model.longest_stretch + 5.0).min(last - first);
        let windows = if last - first > 1.5 * length { 6 } else { 1 };
        let mut found: Option<(Aligned, f64)> = None;
        for window in 0..windows {
            let share = f64::from(window) / f64::from(windows);
            let from = first + share * (last - first);
            let until = (from + length).min(last);
            let Some((candidate, clear)) = self.search(from, until, first) else {
                continue;
            };
            let better = found.is_none_or(|(best, _)| candidate.cost < 0.8 * best.cost);
            if clear && candidate.cost < MOST_COST {
                found = Some((candidate, until));
                break;
            }
            if better {
                found = Some((candidate, until));
            }
        }
        let (window, until) = found?;
        Some(self.widened(window, until, first, last))
    }

    /// Goes from the window to the whole stretch, twice as long each time.
    fn widened(&self, window: Aligned, until: f64, first: f64, last: f64) -> Aligned {
        let from = window.clock.from;
        let mut reach = until - from;
        let mut aligned = window;
        while from - reach > first || from + reach < last {
            reach *= 2.0;
            let spans = self.spans(from - reach, from + reach, FINE_SPANS);
            let next = self.refine(&spans, aligned.clock);
            // A longer stretch may hold more that does not fit (a belt that slips, a restart): the clock stays then.
            if next.cost > 2.0 * aligned.cost + 0.1 {
                break;
            }
            aligned = next;
        }
        aligned
    }

    /// The best beginning for the samples from `from` until `until`, and whether no other is nearly as good.
    fn search(&self, from: f64, until: f64, first: f64) -> Option<(Aligned, bool)> {
        let spans = self.spans(from, until, GRID_SPANS);
        if spans.len() < 8 {
            return None;
        }
        let mut lengths: Vec<f64> = spans.iter().map(|span| span.until - span.from).collect();
        let length = median(&mut lengths)?.max(1e-4);
        let low = -(until - from);
        let high = self.model.span();
        let wanted = 0.12 / (self.model.steepest.max(1e-6) * length);
        let step = wanted.clamp(0.002, 2.0).max((high - low) / MOST_CANDIDATES);
        let clock = |start: f64| Clock {
            from,
            start,
            rate: 0.0,
        };
        // A spread order of the spans lets a bad candidate fail early.
        let spans = spread_out(spans);
        let mut best: Vec<(f64, f64)> = Vec::new();
        let mut start = low;
        while start <= high {
            let give_up = if best.len() < BEST {
                1.0
            } else {
                best.last().map_or(1.0, |(cost, _)| *cost)
            };
            let cost = self.cost(&spans, &clock(start), give_up);
            if cost < give_up || best.is_empty() {
                let at = best.partition_point(|(have, _)| *have <= cost);
                best.insert(at, (cost, start));
                best.truncate(BEST);
            }
            start += step;
        }
        let first_best = best.first().map_or(0.0, |(_, start)| *start);
        let clear = best
            .iter()
            .all(|(cost, start)| *cost > 0.1 || (start - first_best).abs() < 6.0 * step + 0.5);
        // The log's times may be the table's own, or count from its first row: then this is meant, where it fits.
        let usual = [from, from - first];
        let mut refined: Option<Aligned> = None;
        for start in usual.iter().chain(best.iter().map(|(_, start)| start)) {
            let fine = self.refine(&spans, clock(*start));
            if refined.is_none_or(|have| fine.cost < have.cost - 0.005) {
                refined = Some(fine);
            }
        }
        refined.map(|aligned| (aligned, clear))
    }
}

/// The same spans, every 17th first.
fn spread_out(spans: Vec<Span>) -> Vec<Span> {
    const APART: usize = 17;
    (0..APART)
        .flat_map(|start| spans.iter().skip(start).step_by(APART))
        .copied()
        .collect()
}
