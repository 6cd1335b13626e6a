//! A log's report for programs.

use super::read::LogKind;
use super::{CueReport, Following, LogReport, Measured};
use serde_json::{Map, Value, json};

/// The report as JSON, one key a line; numbers are measured values, so they have no exact form.
pub(super) fn json(report: &LogReport) -> String {
    let clock = report.clock;
    let value = json!({
        "title": report.title,
        "log": match report.kind {
            LogKind::Positions => "positions",
            LogKind::Pulses => "pulses",
        },
        "samples": report.samples,
        "samples_used": report.kept,
        "first_s": report.time_s.0,
        "last_s": report.time_s.1,
        "period_s": report.period_s,
        "row_0_s": clock.row_0_s,
        "clock_ppm": clock.rate_ppm.value,
        "clock_error": finite(clock.rate_ppm.error),
        "a_clock_ppm": clock.rotor_ppm.a.map(|ppm| ppm.value),
        "b_clock_ppm": clock.rotor_ppm.b.map(|ppm| ppm.value),
        "lost": report.lost,
        "late": report.late,
        "doubled": report.doubled,
        "unreadable": report.unreadable.0,
        "time_steps": report.steps.iter().map(|step| json!({"at_s": step.at_s, "by_s": step.by_s})).collect::<Vec<_>>(),
        "jumps": report.jumps.iter().map(|jump| json!({
            "rotor": jump.rotor, "cue": jump.cue, "at_s": jump.at_s, "by_deg": jump.by_deg,
        })).collect::<Vec<_>>(),
        "cues": report.cues.iter().map(cue).collect::<Vec<_>>(),
    });
    // Serialising a value made of plain keys cannot fail.
    let mut text = serde_json::to_string_pretty(&value).unwrap_or_default();
    text.push('\n');
    text
}

fn cue(cue: &CueReport) -> Value {
    let mut object = Map::new();
    let mut put = |key: &str, value: Value| {
        object.insert(key.to_owned(), value);
    };
    let (p, q) = cue.planned;
    put("cue", json!(cue.cue));
    put("name", json!(cue.name));
    put("figure", json!(cue.figure));
    put("planned", json!([p, q]));
    put("passes", json!(cue.passes));
    put("from_s", json!(cue.span_s.0));
    put("until_s", json!(cue.span_s.1));
    put("ratio", value(cue.ratio));
    put("ratio_error", error(cue.ratio));
    put("nearest", json!(cue.nearest.map(|(p, q)| [p, q])));
    put("drift_deg_per_min", value(cue.drift_deg_per_min));
    put("drift_error", error(cue.drift_deg_per_min));
    put("pose_off_deg", json!(cue.pose_off_deg));
    for (letter, rpm, planned, following) in [
        ("a", cue.rpm.a, cue.planned_rpm.a, cue.following.a),
        ("b", cue.rpm.b, cue.planned_rpm.b, cue.following.b),
    ] {
        put(&format!("{letter}_rpm"), value(rpm));
        put(&format!("{letter}_rpm_error"), error(rpm));
        put(&format!("{letter}_rpm_planned"), json!(planned));
        let usual = following.map(|Following { usual_deg, .. }| usual_deg);
        let spread = following.map(|Following { spread_deg, .. }| spread_deg);
        put(&format!("{letter}_following_deg"), json!(usual));
        put(&format!("{letter}_following_spread_deg"), json!(spread));
    }
    put("samples_used", json!(cue.used));
    put("samples_removed", json!(cue.removed));
    put("lost", json!(cue.lost));
    put("late", json!(cue.late));
    put("doubled", json!(cue.doubled));
    Value::Object(object)
}

fn value(measured: Option<Measured>) -> Value {
    json!(measured.map(|measured| measured.value))
}

fn error(measured: Option<Measured>) -> Value {
    json!(measured.map(|measured| measured.error))
}

fn finite(value: f64) -> Option<f64> {
    value.is_finite().then_some(value)
}
