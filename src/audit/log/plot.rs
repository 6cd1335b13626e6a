//! A log's report as one picture: above, how far the pose stands from the planned one over the time of the log; below,
//! the drift of each cue with a bar of three errors either way. A bar that misses the zero line is a pose that turns.

use super::robust::as_float;
use super::{CueReport, LogReport};
use std::fmt::Write;

const WIDTH: f64 = 960.0;
const LEFT: f64 = 84.0;
const RIGHT: f64 = 24.0;
const POSE: Lane = Lane {
    top: 78.0,
    height: 250.0,
};
const DRIFT: Lane = Lane {
    top: 392.0,
    height: 150.0,
};
const HEIGHT: f64 = 600.0;
/// Width of a sign of a label, about.
const SIGN: f64 = 7.4;

const STYLE: &str = "svg{background:#fbfaf6;color:#1d2430;font:13px system-ui,sans-serif}\
text{fill:currentColor}.quiet{opacity:.72}.frame{fill:none;stroke:currentColor;stroke-opacity:.35}\
.grid{stroke:currentColor;stroke-opacity:.14}.zero{stroke:currentColor;stroke-opacity:.6}\
.band{fill:#3b6ea8;fill-opacity:.08}.still{fill:#2d6a8a;stroke:#2d6a8a}.turning{fill:#b4541a;stroke:#b4541a}\
.bar{stroke-width:2}.trace circle{stroke:none;fill-opacity:.7}\
@media (prefers-color-scheme:dark){svg{background:#14181f;color:#e6e3da}.still{fill:#7cc0e0;stroke:#7cc0e0}\
.turning{fill:#f0a066;stroke:#f0a066}.band{fill:#8ab4e8}}";

struct Lane {
    top: f64,
    height: f64,
}

/// A straight scale of one axis.
struct Scale {
    from: f64,
    until: f64,
    at: f64,
    length: f64,
}

impl Scale {
    fn place(&self, value: f64) -> f64 {
        self.at + (value - self.from) / (self.until - self.from) * self.length
    }

    /// Round values within the range, about `count` of them.
    fn marks(&self, count: f64) -> Vec<f64> {
        let step = round_step((self.until - self.from) / count);
        let mut marks = Vec::new();
        let mut number = (self.from / step).ceil();
        while number * step <= self.until + 1e-9 * step && marks.len() < 50 {
            // Adding nothing turns −0 into 0.
            marks.push(number * step + 0.0);
            number += 1.0;
        }
        marks
    }
}

/// 1, 2 or 5 times a power of ten, at least `least`.
fn round_step(least: f64) -> f64 {
    let power = 10.0_f64.powi(whole(least.max(1e-12).log10().floor()));
    let factor = [1.0, 2.0, 5.0, 10.0]
        .into_iter()
        .find(|factor| factor * power >= least * 0.999_999)
        .unwrap_or(10.0);
    factor * power
}

#[expect(
    clippy::cast_possible_truncation,
    reason = "the logarithm of a finite number"
)]
fn whole(value: f64) -> i32 {
    value as i32
}

/// The picture.
pub(super) fn plot(report: &LogReport) -> String {
    let mut out = String::new();
    // Writing to a text cannot fail.
    let _ = draw(&mut out, report);
    out
}

fn turns(cue: &CueReport) -> bool {
    cue.drift_deg_per_min
        .is_some_and(|drift| drift.value.abs() > 3.0 * drift.error)
}

fn draw(out: &mut String, report: &LogReport) -> std::fmt::Result {
    let (first, last) = report.time_s;
    let time = Scale {
        from: 0.0,
        until: (last - first).max(1e-3),
        at: LEFT,
        length: WIDTH - LEFT - RIGHT,
    };
    let title = report
        .title
        .as_deref()
        .map_or_else(|| "Log of the machine".to_owned(), escaped);
    write!(
        out,
        "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {WIDTH} {HEIGHT}\" role=\"img\" aria-labelledby=\"t d\">\n\
         <title id=\"t\">{title}: the pose as measured</title>\n\
         <desc id=\"d\">Above, degrees between the measured and the planned pose over the time of the log; below, the drift of each cue in degrees a minute with three standard errors either way.</desc>\n\
         <style>{STYLE}</style>\n\
         <text x=\"{LEFT}\" y=\"28\" font-size=\"18\">{title}</text>\n"
    )?;
    legend(out)?;
    bands(out, report, &time)?;
    pose_lane(out, report, &time)?;
    drift_lane(out, report, &time)?;
    for mark in time.marks(8.0) {
        let x = time.place(mark);
        writeln!(
            out,
            "<text class=\"quiet\" x=\"{x:.1}\" y=\"{:.1}\" text-anchor=\"middle\">{}</text>",
            DRIFT.top + DRIFT.height + 20.0,
            plain(mark)
        )?;
    }
    writeln!(
        out,
        "<text class=\"quiet\" x=\"{:.1}\" y=\"{:.1}\" text-anchor=\"end\">seconds since the first sample</text>\n</svg>",
        WIDTH - RIGHT,
        DRIFT.top + DRIFT.height + 42.0
    )
}

fn legend(out: &mut String) -> std::fmt::Result {
    for (x, class, words) in [
        (672.0, "still", "stands"),
        (747.0, "turning", "turns, beyond three errors"),
    ] {
        writeln!(
            out,
            "<g class=\"{class}\"><circle cx=\"{x}\" cy=\"23.5\" r=\"3.6\"/></g><text class=\"quiet\" x=\"{}\" y=\"28\">{words}</text>",
            x + 9.0
        )?;
    }
    Ok(())
}

/// Where each figure stood, a band for each pass.
fn bands(out: &mut String, report: &LogReport, time: &Scale) -> std::fmt::Result {
    let mut stands: Vec<(f64, f64, &CueReport)> = report
        .cues
        .iter()
        .flat_map(|cue| cue.stands.iter().take(400).map(move |stand| (stand, cue)))
        .map(|(stand, cue)| {
            let place = |at: f64| time.place(at - report.time_s.0);
            (place(stand.from), place(stand.until), cue)
        })
        .collect();
    stands.sort_by(|one, other| one.0.total_cmp(&other.0));
    // A label is written where it does not run into the one before or the next band.
    let mut free = 0.0;
    for (number, (from, until, cue)) in stands.iter().enumerate() {
        for lane in [&POSE, &DRIFT] {
            writeln!(
                out,
                "<rect class=\"band\" x=\"{from:.1}\" y=\"{:.1}\" width=\"{:.1}\" height=\"{:.1}\"/>",
                lane.top,
                (until - from).max(0.5),
                lane.height
            )?;
        }
        let next = stands.get(number + 1).map_or(WIDTH, |next| next.0);
        let room = |text: &str| *from + SIGN * as_float(text.chars().count()) < next;
        let label = cue.cue.to_string();
        if *from >= free && room(&label) {
            writeln!(
                out,
                "<text x=\"{from:.1}\" y=\"{:.1}\">{label}</text>",
                POSE.top - 22.0
            )?;
            free = from + SIGN * as_float(label.len());
            if room(&cue.figure) {
                writeln!(
                    out,
                    "<text class=\"quiet\" x=\"{from:.1}\" y=\"{:.1}\">{}</text>",
                    POSE.top - 7.0,
                    escaped(&cue.figure)
                )?;
            }
        }
    }
    Ok(())
}

fn pose_lane(out: &mut String, report: &LogReport, time: &Scale) -> std::fmt::Result {
    let all = || report.cues.iter().flat_map(|cue| cue.trace.iter());
    let scale = frame(
        out,
        &POSE,
        all().map(|(_, value)| *value),
        "pose, degrees from the plan",
    )?;
    for cue in &report.cues {
        let class = if turns(cue) { "turning" } else { "still" };
        writeln!(out, "<g class=\"trace {class}\">")?;
        for (at, value) in &cue.trace {
            writeln!(
                out,
                "<circle cx=\"{:.1}\" cy=\"{:.1}\" r=\"1.7\"/>",
                time.place(at - report.time_s.0),
                scale.place(*value)
            )?;
        }
        writeln!(out, "</g>")?;
    }
    Ok(())
}

fn drift_lane(out: &mut String, report: &LogReport, time: &Scale) -> std::fmt::Result {
    let reaches = report
        .cues
        .iter()
        .filter_map(|cue| cue.drift_deg_per_min)
        .flat_map(|drift| [-3.0, 3.0].map(|times| drift.value + times * drift.error));
    let scale = frame(out, &DRIFT, reaches, "drift, degrees a minute")?;
    for cue in &report.cues {
        let Some(drift) = cue.drift_deg_per_min else {
            continue;
        };
        let middle = f64::midpoint(
            cue.span_s.0,
            cue.stands.first().map_or(cue.span_s.1, |stand| stand.until),
        ) - report.time_s.0;
        let x = time.place(middle);
        let (low, high) = (
            scale.place(drift.value - 3.0 * drift.error),
            scale.place(drift.value + 3.0 * drift.error),
        );
        let class = if turns(cue) { "turning" } else { "still" };
        writeln!(
            out,
            "<g class=\"{class}\"><line class=\"bar\" x1=\"{x:.1}\" x2=\"{x:.1}\" y1=\"{low:.1}\" y2=\"{high:.1}\"/>\
             <circle cx=\"{x:.1}\" cy=\"{:.1}\" r=\"3.6\"><title>cue {}: {} deg a minute</title></circle></g>",
            scale.place(drift.value),
            cue.cue,
            super::text::plus_minus(drift.value, drift.error)
        )?;
    }
    Ok(())
}

/// A lane's frame, grid and name, wide enough for zero and all values.
fn frame(
    out: &mut String,
    lane: &Lane,
    values: impl Iterator<Item = f64>,
    name: &str,
) -> Result<Scale, std::fmt::Error> {
    let (low, high) = values
        .filter(|value| value.is_finite())
        .fold((-1e-3, 1e-3), |(low, high): (f64, f64), value| {
            (low.min(value), high.max(value))
        });
    let margin = 0.06 * (high - low);
    let scale = Scale {
        from: low - margin,
        until: high + margin,
        at: lane.top + lane.height,
        length: -lane.height,
    };
    let right = WIDTH - RIGHT;
    for mark in scale.marks(6.0) {
        let y = scale.place(mark);
        let class = if mark == 0.0 { "zero" } else { "grid" };
        writeln!(
            out,
            "<line class=\"{class}\" x1=\"{LEFT}\" x2=\"{right}\" y1=\"{y:.1}\" y2=\"{y:.1}\"/>\
             <text class=\"quiet\" x=\"{:.1}\" y=\"{:.1}\" text-anchor=\"end\">{}</text>",
            LEFT - 8.0,
            y + 4.5,
            plain(mark)
        )?;
    }
    let middle = lane.top + lane.height / 2.0;
    writeln!(
        out,
        "<rect class=\"frame\" x=\"{LEFT}\" y=\"{}\" width=\"{}\" height=\"{}\"/>\
         <text class=\"quiet\" transform=\"translate(16 {middle:.1}) rotate(-90)\" text-anchor=\"middle\">{name}</text>",
        lane.top,
        right - LEFT,
        lane.height
    )?;
    Ok(scale)
}

/// The shortest decimal of a round mark.
fn plain(value: f64) -> String {
    let text = format!("{value:.6}");
    text.trim_end_matches('0')
        .trim_end_matches('.')
        .replace('-', "\u{2212}")
}

fn escaped(text: &str) -> String {
    text.replace('&', "&amp;")
        .replace('<', "&lt;")
        .replace('>', "&gt;")
}
