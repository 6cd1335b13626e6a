//! The log's stretches of steady time stamps, each put in its place in the plan, and all of them together as a report.

use super::align::{Aligned, MOST_COST, Stretch};
use super::cadence::{Event, EventKind, Seam};
use super::clock::Clock;
use super::cue::{CueReport, Measured, Stand, cues};
use super::model::{Model, Moment};
use super::read::{Log, LogKind};
use super::track::{Tracked, track};
use super::{ClockReport, Jump, LogReport, TimeStep};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};

/// All stretches that found their place.
pub(super) struct Placed {
    tracked: Vec<(u32, Tracked)>,
    steps: Vec<TimeStep>,
    /// Seams that turned out to be steps of the clock and not gaps.
    stepped: Vec<f64>,
}

/// Puts every stretch in its place; `None` where not one fits.
pub(super) fn place(model: &Model, log: &Log) -> Option<Placed> {
    let mut placed = Placed {
        tracked: Vec::new(),
        steps: Vec::new(),
        stepped: Vec::new(),
    };
    let mut last: Option<(u32, Clock)> = None;
    for samples in log
        .samples
        .chunk_by(|one, next| one.segment == next.segment)
    {
        let Some(number) = samples.first().map(|sample| sample.segment) else {
            continue;
        };
        let stretch = Stretch {
            model,
            kind: log.kind,
            samples,
        };
        let seam = seam_before(log, number);
        let aligned = match (last, seam) {
            (Some((before, clock)), Some(seam)) if before + 1 == number => {
                follow_on(&stretch, seam, clock, log.cadence.period)
            }
            _ => None,
        };
        let Some(aligned) = aligned.or_else(|| fitting(stretch.align())) else {
            if let Some(seam) = seam {
                placed.step(seam, log, None);
            }
            continue;
        };
        let tracked = track(&stretch, &aligned);
        if let (Some((_, before)), Some(seam)) = (last, seam) {
            // The same moment of the log by the clock before and by the one after the seam.
            let by = before.plan(seam.after) - tracked.clock.plan(seam.after);
            if by.abs() > 0.02 || seam.after < seam.before {
                placed.step(seam, log, Some(by));
            }
        }
        last = Some((number, tracked.clock));
        placed.tracked.push((number, tracked));
    }
    (!placed.tracked.is_empty()).then_some(placed)
}

impl Placed {
    fn step(&mut self, seam: Seam, log: &Log, by_s: Option<f64>) {
        self.stepped.push(seam.after);
        self.steps.push(TimeStep {
            at_s: seam.before + origin(log),
            by_s,
        });
    }
}

fn fitting(aligned: Option<Aligned>) -> Option<Aligned> {
    aligned.filter(|aligned| aligned.cost < MOST_COST)
}

fn seam_before(log: &Log, number: u32) -> Option<Seam> {
    let at = usize::try_from(number.checked_sub(1)?).ok()?;
    log.cadence.seams.get(at).copied()
}

/// A stretch after a seam: samples are missing and the clock went on, or the clock stepped and the machine went on.
fn follow_on(
    stretch: &Stretch<'_>,
    seam: Seam,
    clock: Clock,
    period: Option<f64>,
) -> Option<Aligned> {
    let went_on = Clock {
        from: seam.after,
        start: clock.plan(seam.after),
        ..clock
    };
    let stepped = Clock {
        from: seam.after,
        start: clock.plan(seam.before) + period.unwrap_or(0.0),
        ..clock
    };
    let candidates: &[Clock] = if seam.after < seam.before {
        &[stepped]
    } else {
        &[went_on, stepped]
    };
    let mut best: Option<Aligned> = None;
    for candidate in candidates {
        let Some(mut aligned) = fitting(Some(stretch.tried(*candidate))) else {
            continue;
        };
        aligned.start_error = aligned.start_error.min(0.05);
        if best.is_none_or(|have| aligned.cost < have.cost - 0.02) {
            best = Some(aligned);
        }
    }
    best
}

#[expect(
    clippy::cast_precision_loss,
    reason = "seconds since 1970 are far below 2⁵³"
)]
fn origin(log: &Log) -> f64 {
    log.origin as f64
}

/// The whole report.
pub(super) fn report(plan: &Plan, model: &Model, log: &Log, placed: Placed) -> LogReport {
    let Placed {
        tracked,
        steps,
        stepped,
    } = placed;
    let origin = origin(log);
    let clock = clock_report(&tracked, origin);
    let mut events = sample_events(log, &stepped);
    for (segment, stretch) in &tracked {
        events.extend(stretch.pulses.iter().map(|pulse| Event {
            time: pulse.time,
            segment: *segment,
            kind: match pulse.missing {
                0 => EventKind::Doubled,
                missing => EventKind::Lost(u64::from(missing)),
            },
        }));
    }
    let clocks: Vec<(u32, Clock)> = tracked
        .iter()
        .map(|(segment, stretch)| (*segment, stretch.clock))
        .collect();
    let stretches: Vec<Tracked> = tracked.into_iter().map(|(_, stretch)| stretch).collect();
    let mut cues = cues(plan, model, log.kind, log.time_step, &stretches);
    let (lost, late, doubled) = attribute(plan, model, &clocks, &events, &mut cues);
    let jumps = jumps(&cues, origin);
    by_the_log(&mut cues, origin);
    let stepped_away: u64 = lost_in_steps(log, &stepped);
    LogReport {
        kind: log.kind,
        title: plan.show.title.clone(),
        samples: log.lines,
        kept: u64::try_from(log.samples.len()).unwrap_or(u64::MAX),
        unreadable: log.unreadable,
        time_s: (
            log.samples.first().map_or(0.0, |sample| sample.time) + origin,
            log.samples.last().map_or(0.0, |sample| sample.time) + origin,
        ),
        period_s: log.cadence.period,
        clock,
        steps,
        // Totals count what the kept events may have left out; pulses are judged where they were followed.
        lost: match log.kind {
            LogKind::Positions => log.cadence.lost.saturating_sub(stepped_away),
            LogKind::Pulses => lost,
        },
        late: log.cadence.late.max(late),
        doubled: log.cadence.doubled.max(doubled),
        cues,
        jumps,
    }
}

/// Times as the log writes them.
fn by_the_log(cues: &mut [CueReport], origin: f64) {
    for cue in cues {
        cue.span_s.0 += origin;
        cue.span_s.1 += origin;
        for (time, _) in &mut cue.trace {
            *time += origin;
        }
        for stand in &mut cue.stands {
            stand.from += origin;
            stand.until += origin;
        }
    }
}

fn lost_in_steps(log: &Log, stepped: &[f64]) -> u64 {
    log.cadence
        .events
        .iter()
        .filter(|event| stepped.contains(&event.time))
        .map(|event| match event.kind {
            EventKind::Lost(count) => count,
            _ => 0,
        })
        .sum()
}

fn sample_events(log: &Log, stepped: &[f64]) -> Vec<Event> {
    log.cadence
        .events
        .iter()
        .filter(|event| {
            !(stepped.contains(&event.time) && matches!(event.kind, EventKind::Lost(_)))
        })
        .copied()
        .collect()
}

fn clock_report(tracked: &[(u32, Tracked)], origin: f64) -> ClockReport {
    let ppm = |(rate, error): (f64, f64)| Measured {
        value: rate * 1e6,
        error: error * 1e6,
    };
    let longest = tracked
        .iter()
        .map(|(_, stretch)| stretch)
        .max_by_key(|stretch| stretch.points.len());
    let first = tracked.first().map(|(_, stretch)| stretch.clock);
    ClockReport {
        row_0_s: first.map_or(0.0, |clock| {
            clock.from - clock.start / (1.0 + clock.rate) + origin
        }),
        rate_ppm: longest.map_or(
            Measured {
                value: 0.0,
                error: f64::INFINITY,
            },
            |stretch| ppm((stretch.clock.rate, stretch.rate_error)),
        ),
        rotor_ppm: Pair::each(|rotor| longest.and_then(|stretch| stretch.rates.of(rotor).map(ppm))),
    }
}

/// Counts events into the cues that were on then; gives the totals lost, late, doubled.
fn attribute(
    plan: &Plan,
    model: &Model,
    clocks: &[(u32, Clock)],
    events: &[Event],
    cues: &mut [CueReport],
) -> (u64, u64, u64) {
    let (mut lost, mut late, mut doubled) = (0_u64, 0_u64, 0_u64);
    for event in events {
        let (gone, slow, twice) = match event.kind {
            EventKind::Lost(count) => (count, 0, 0),
            EventKind::Late => (0, 1, 0),
            EventKind::Doubled => (0, 0, 1),
        };
        lost = lost.saturating_add(gone);
        late += slow;
        doubled += twice;
        let clock = clocks.iter().find(|(segment, _)| *segment == event.segment);
        let moment = clock.and_then(|(_, clock)| model.moment(clock.plan(event.time)));
        let number = moment
            .and_then(|Moment { leg, .. }| plan.legs.get(leg))
            .map(|leg| leg.cue);
        let Some(number) = number else { continue };
        if let Ok(at) = cues.binary_search_by_key(&number, |cue| cue.cue)
            && let Some(cue) = cues.get_mut(at)
        {
            cue.lost = cue.lost.saturating_add(gone);
            cue.late += slow;
            cue.doubled += twice;
        }
    }
    (lost, late, doubled)
}

/// Rotors that stood elsewhere after a transition than the hold before and after lead to expect.
fn jumps(cues: &[CueReport], origin: f64) -> Vec<Jump> {
    const MOST: usize = 100;
    /// Mirror turns: five degrees.
    const LEAST: f64 = 5.0 / 360.0;
    let mut stands: Vec<(&CueReport, &Stand)> = cues
        .iter()
        .flat_map(|cue| cue.stands.iter().map(move |stand| (cue, stand)))
        .collect();
    stands.sort_by(|one, other| one.1.from.total_cmp(&other.1.from));
    let mut jumps = Vec::new();
    for ((_, before), (cue, after)) in stands.iter().zip(stands.iter().skip(1)) {
        for rotor in RotorId::BOTH {
            let (Some(stood), Some(stands)) = (before.at.of(rotor), after.at.of(rotor)) else {
                continue;
            };
            let gap = after.from - before.until;
            if gap < 0.0 || before.stretch != after.stretch {
                continue;
            }
            let halves = Pair {
                a: (before.until - before.from) / 2.0,
                b: (after.until - after.from) / 2.0,
            };
            let (earlier, later) = (*before.drift.of(rotor), *after.drift.of(rotor));
            let expected = earlier * (halves.a + gap / 2.0) + later * (halves.b + gap / 2.0);
            let by = stands - stood - expected;
            let unsure = 3.0 * (earlier - later).abs() * (gap + halves.a.max(halves.b));
            if by.abs() > LEAST + unsure && jumps.len() < MOST {
                jumps.push(Jump {
                    rotor: rotor.name(),
                    cue: cue.cue,
                    written: cue.written,
                    at_s: after.from + origin,
                    by_deg: by * 360.0,
                });
            }
        }
    }
    jumps
}
