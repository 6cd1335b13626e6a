//! What a log's report means for the maker: findings, each with its page of likely causes.

use super::read::{Log, LogKind, NoLog};
use super::{CueReport, LogReport};
use crate::finding::{Code, Finding, Place};
use crate::plan::Plan;
use crate::show::WrittenCue;

/// A clock further off than this is worth a word: crystals keep within about 100 ppm (common practice, no source).
const CLOCK_PPM: f64 = 200.0;
/// A pose further off than this, in degrees, is worth a word (our own choice).
const POSE_OFF_DEG: f64 = 3.0;

/// The finding for a file that is no log.
#[must_use]
pub fn refusal(reason: &NoLog, place: Place) -> Finding {
    let forms =
        "a log's lines are `time_s,a_counts,b_counts` (positions) or `time_s,rotor` (index pulses)";
    match reason {
        NoLog::Io(error) => Finding::new(
            Code::AuditLog,
            place,
            format!("the log cannot be read: {error}"),
        ),
        NoLog::Empty => {
            Finding::new(Code::AuditLog, place, "there is not one sample in the log").help(forms)
        }
        NoLog::Columns(line) => Finding::new(
            Code::AuditLog,
            place,
            format!("the first line names no columns of a log and is no sample: `{line}`"),
        )
        .help(forms),
        NoLog::Unreadable(line) => Finding::new(
            Code::AuditLog,
            place,
            format!("most lines are no samples, the first of them is line {line}"),
        )
        .help(forms),
    }
}

/// The findings for a log that fits the show nowhere.
pub(super) fn no_match(log: &Log, place: Place) -> Vec<Finding> {
    let message = format!("the log's {} samples match this show nowhere", log.lines);
    let help = "is it the show that was loaded (compare the table's ID), are the times in seconds, are `counts` and `gear` right, do both rotors run?";
    let mut findings = vec![Finding::new(Code::AuditNoMatch, place, message).help(help)];
    of_unreadable(log.unreadable, place, &mut findings);
    findings
}

/// Everything worth a word.
pub(super) fn of(plan: &Plan, report: &LogReport, place: Place) -> Vec<Finding> {
    let mut findings = Vec::new();
    of_lines(report, place, &mut findings);
    of_clock(report, place, &mut findings);
    // Where the rotors run apart, every pose is off because of it; once is enough.
    let apart = findings
        .iter()
        .any(|finding| finding.code == Code::DriftRotors);
    for cue in &report.cues {
        of_cue(plan, report.kind, cue, place, &mut findings);
        if !apart {
            findings.extend(off_pose(plan, cue, place));
        }
    }
    for jump in &report.jumps {
        let at = place_of(plan, jump.written, place);
        let way = if jump.by_deg > 0.0 {
            "counter-clockwise"
        } else {
            "clockwise"
        };
        findings.push(
            Finding::new(
                Code::DriftJump,
                at,
                format!(
                    "cue {}: mirror {} stands {:.1} deg further {way} than the hold before leads to expect, from {:.3} s of the log on",
                    jump.cue,
                    jump.rotor,
                    jump.by_deg.abs(),
                    jump.at_s
                ),
            )
            .help("lost steps or a slipping belt or coupling in the transition before: a longer morph asks less of the motor"),
        );
    }
    findings
}

fn place_of(plan: &Plan, written: u32, log: Place) -> Place {
    match plan.show.cues.get(written as usize) {
        Some(WrittenCue::Good(cue)) => cue.place,
        _ => log,
    }
}

fn of_unreadable(unreadable: (u64, Option<u64>), place: Place, findings: &mut Vec<Finding>) {
    if let (count, Some(first)) = unreadable {
        let message = match count {
            1 => format!("line {first} is no sample"),
            _ => format!("{count} lines are no samples, the first of them is line {first}"),
        };
        findings.push(Finding::new(Code::AuditLines, place, message));
    }
}

fn of_lines(report: &LogReport, place: Place, findings: &mut Vec<Finding>) {
    of_unreadable(report.unreadable, place, findings);
    if report.lost + report.late + report.doubled > 0 {
        let what = match report.kind {
            LogKind::Positions => "samples",
            LogKind::Pulses => "pulses",
        };
        findings.push(
            Finding::new(
                Code::AuditSamples,
                place,
                format!(
                    "{what}: {} lost, {} late, {} doubled, of {} in the log",
                    report.lost, report.late, report.doubled, report.samples
                ),
            )
            .help("estimates leave them out; many of them mean that the logger or the sensor cannot keep up"),
        );
    }
    for step in &report.steps {
        let by = step.by_s.map_or_else(
            || "what follows could not be placed in the show".to_owned(),
            |by| format!("by {by:+.3} s"),
        );
        findings.push(Finding::new(
            Code::AuditTimeStep,
            place,
            format!("the log's time stamps step after {:.3} s, {by}", step.at_s),
        ));
    }
}

fn of_clock(report: &LogReport, place: Place, findings: &mut Vec<Finding>) {
    let clock = report.clock;
    let rate = clock.rate_ppm;
    if let (Some(a), Some(b)) = (clock.rotor_ppm.a, clock.rotor_ppm.b) {
        let apart = (a.value - b.value).abs();
        if apart > 3.0 * a.error.hypot(b.error) + 1.0 {
            findings.push(
                Finding::new(
                    Code::DriftRotors,
                    place,
                    format!(
                        "over the whole log rotor a runs {:+.1} ppm against its plan and rotor b {:+.1} ppm: they do not keep their ratio",
                        a.value, b.value
                    ),
                )
                .help("motors without position control do this, each on a clock of its own; so does a belt that creeps"),
            );
            return;
        }
    }
    if rate.value.abs() > CLOCK_PPM && rate.value.abs() > 3.0 * rate.error {
        findings.push(
            Finding::new(
                Code::AuditClock,
                place,
                format!(
                    "the controller's clock runs {:+.1} ± {:.1} ppm against the logger's",
                    rate.value, rate.error
                ),
            )
            .help("crystals keep within about 100 ppm; ratio and pose do not depend on it"),
        );
    }
}

fn of_cue(plan: &Plan, kind: LogKind, cue: &CueReport, log: Place, findings: &mut Vec<Finding>) {
    let place = place_of(plan, cue.written, log);
    let (p, q) = cue.planned;
    if let (Some((near_p, near_q)), Some(ratio)) = (cue.nearest, cue.ratio)
        && (near_p, near_q) != (i64::from(p), i64::from(q))
    {
        findings.push(
            Finding::new(
                Code::DriftRatio,
                place,
                format!(
                    "cue {}: the mirrors ran {near_p}:{near_q} ({:.7} ± {:.7}), the figure is {p}:{q}",
                    cue.cue, ratio.value, ratio.error
                ),
            )
            .help("does each motor reach its speed, are `gear` and `counts` those of the machine?"),
        );
    }
    match cue.drift_deg_per_min {
        Some(drift) if drift.value.abs() > 3.0 * drift.error => {
            let way = if drift.value > 0.0 {
                "counter-clockwise"
            } else {
                "clockwise"
            };
            findings.push(
                Finding::new(
                    Code::DriftPose,
                    place,
                    format!(
                        "cue {}: the pose turns {way} by {} deg a minute",
                        cue.cue,
                        super::text::plus_minus(drift.value.abs(), drift.error)
                    ),
                )
                .help("lost steps, a slipping belt, or motors that run free instead of following positions"),
            );
        }
        Some(_) => {}
        None => findings.push(Finding::new(
            Code::AuditUnseen,
            place,
            match kind {
                LogKind::Pulses if p == 0 || q == 0 => {
                    format!(
                        "cue {}: a mirror that stands gives no pulses, so its pose was not judged",
                        cue.cue
                    )
                }
                _ => format!("cue {}: too few samples to judge its pose", cue.cue),
            },
        )),
    }
}

fn off_pose(plan: &Plan, cue: &CueReport, log: Place) -> Option<Finding> {
    let off = cue.pose_off_deg.filter(|off| off.abs() > POSE_OFF_DEG)?;
    let message = format!(
        "cue {}: the pose began {off:+.1} deg from the planned one",
        cue.cue
    );
    let place = place_of(plan, cue.written, log);
    let help = "one rotor lags more than the other, or began off its mark";
    Some(Finding::new(Code::DriftOffset, place, message).help(help))
}
