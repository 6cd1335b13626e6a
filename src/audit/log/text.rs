//! A log's report for reading on a terminal.

use super::read::LogKind;
use super::{CueReport, LogReport, Measured};
use std::fmt::Write;

/// The whole report.
pub(super) fn text(report: &LogReport) -> String {
    let mut out = String::new();
    // Writing to a text cannot fail.
    let _ = head(&mut out, report);
    for cue in &report.cues {
        let _ = one(&mut out, cue);
    }
    out
}

fn head(out: &mut String, report: &LogReport) -> std::fmt::Result {
    let kind = match report.kind {
        LogKind::Positions => "positions",
        LogKind::Pulses => "index pulses",
    };
    if let Some(title) = &report.title {
        writeln!(out, "Show      {title}")?;
    }
    let (first, last) = report.time_s;
    writeln!(
        out,
        "Log       {} {kind}, {first:.3} s to {last:.3} s",
        report.samples
    )?;
    if report.kept < report.samples {
        writeln!(out, "          estimates from {} of them", report.kept)?;
    }
    if let Some(period) = report.period_s {
        writeln!(out, "Spacing   {:.6} s", period)?;
    }
    writeln!(
        out,
        "Samples   {} lost, {} late, {} doubled",
        report.lost, report.late, report.doubled
    )?;
    writeln!(
        out,
        "Start     row 0 of the table at {:.6} s of the log",
        report.clock.row_0_s
    )?;
    let rate = report.clock.rate_ppm;
    if rate.error.is_finite() {
        writeln!(
            out,
            "Clock     controller against logger {} ppm",
            signed(rate)
        )?;
    } else {
        writeln!(out, "Clock     too little to tell")?;
    }
    for step in &report.steps {
        match step.by_s {
            Some(by) => writeln!(
                out,
                "Step      time stamps step by {by:+.3} s after {:.3} s",
                step.at_s
            )?,
            None => writeln!(
                out,
                "Step      time stamps step after {:.3} s; the rest has no place in the show",
                step.at_s
            )?,
        }
    }
    Ok(())
}

fn one(out: &mut String, cue: &CueReport) -> std::fmt::Result {
    writeln!(out)?;
    let name = cue
        .name
        .as_ref()
        .map_or_else(String::new, |name| format!(" \"{name}\""));
    let (p, q) = cue.planned;
    let times = match cue.passes {
        1 => "once".to_owned(),
        many => format!("{many} times"),
    };
    writeln!(
        out,
        "Cue {}{name}: {} ({p}:{q}), seen {times}, from {:.3} s",
        cue.cue, cue.figure, cue.span_s.0
    )?;
    motors(out, cue)?;
    if let (Some(ratio), Some((near_p, near_q))) = (cue.ratio, cue.nearest) {
        writeln!(
            out,
            "  ratio     {}, nearest {near_p}:{near_q}",
            plus_minus(ratio.value, ratio.error)
        )?;
    }
    match cue.drift_deg_per_min {
        Some(drift) => {
            let verdict = if drift.value.abs() > 3.0 * drift.error {
                "it turns"
            } else {
                "steady within three errors"
            };
            writeln!(out, "  drift     {} deg a minute: {verdict}", signed(drift))?;
        }
        None => writeln!(out, "  drift     not to be told from this log")?,
    }
    if let Some(off) = cue.pose_off_deg {
        writeln!(out, "  pose      began {off:+.2} deg from the planned one")?;
    }
    for (letter, following) in [("a", cue.following.a), ("b", cue.following.b)] {
        if let Some(following) = following {
            writeln!(
                out,
                "  follow {letter}  {:+.2} deg of the motor, within {:.2} deg of that",
                following.usual_deg, following.spread_deg
            )?;
        }
    }
    writeln!(
        out,
        "  samples   {} used, {} set aside; {} lost, {} late, {} doubled",
        cue.used, cue.removed, cue.lost, cue.late, cue.doubled
    )
}

fn motors(out: &mut String, cue: &CueReport) -> std::fmt::Result {
    for (letter, rpm, planned) in [
        ("a", cue.rpm.a, cue.planned_rpm.a),
        ("b", cue.rpm.b, cue.planned_rpm.b),
    ] {
        match rpm {
            Some(rpm) => writeln!(
                out,
                "  motor {letter}   {} rpm, planned {planned:.6}",
                signed(rpm)
            )?,
            None => writeln!(out, "  motor {letter}   not seen, planned {planned:.6} rpm")?,
        }
    }
    Ok(())
}

fn signed(measured: Measured) -> String {
    let text = plus_minus(measured.value, measured.error);
    if measured.value >= 0.0 {
        format!("+{text}")
    } else {
        text
    }
}

/// `value ± error`, both with two leading digits of the error.
pub(super) fn plus_minus(value: f64, error: f64) -> String {
    let places = places(error);
    format!("{value:.places$} ± {error:.places$}")
}

/// Decimal places at which `error` shows two digits.
fn places(error: f64) -> usize {
    if error <= 0.0 || !error.is_finite() {
        return 9;
    }
    let wanted = 1.0 - error.log10().floor();
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "between 0 and 12"
    )]
    let places = wanted.clamp(0.0, 12.0) as usize;
    places
}
