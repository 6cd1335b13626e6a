//! A log measured on the machine, held against the plan: what did the mirrors really do?
//!
//! ```text
//!   bytes ── read ──▶ samples ── align ──▶ where in the plan, by speeds alone
//!                        │                      │
//!                        └───── track ◀─────────┘   every sample's distance from the plan; the clock put right
//!                                 │
//!                                cue ──▶ speeds, ratio, pose and its drift, each with its error ──▶ findings
//! ```
//!
//! [`audit`] reads a log of positions (`time_s,a_counts,b_counts`) or of index pulses (`time_s,rotor`) as a stream and in
//! bounded memory, and gives a [`LogReport`] and findings; `text`, `json` and `plot` render the report. The planned
//! motion is evaluated here in floating point, from the plan's exact moves, with nothing of `plan/` and `setpoint/` that
//! evaluates. Statistical methods and their sources stand in `robust`.

#![allow(
    clippy::disallowed_methods,
    reason = "the library's sine, cosine and logarithm: a measurement is judged and drawn, no table is made from it"
)]

mod align;
mod cadence;
mod clock;
mod cue;
mod findings;
mod json;
mod law;
mod line;
mod model;
mod plot;
mod ratio;
mod read;
mod robust;
mod segment;
mod student;
mod text;
mod track;

pub use cue::{CueReport, Following, Measured};
pub use findings::refusal;
pub use read::{LogKind, NoLog};

use crate::finding::{Finding, Place};
use crate::plan::Plan;
use crate::rig::Pair;
use model::Model;
use std::io::BufRead;

/// What a log says, whole.
#[derive(Clone, Debug)]
pub struct LogReport {
    /// Positions or index pulses.
    pub kind: LogKind,
    /// Title of the show, if it has one.
    pub title: Option<String>,
    /// Lines with a sample, in the whole file.
    pub samples: u64,
    /// Samples that the estimates rest on; fewer than `samples` in a very long log.
    pub kept: u64,
    /// Lines that do not read, and the first of them.
    pub unreadable: (u64, Option<u64>),
    /// First and last time stamp, in seconds.
    pub time_s: (f64, f64),
    /// Seconds from one sample to the next; positions only.
    pub period_s: Option<f64>,
    /// How the log's clock goes against the controller's.
    pub clock: ClockReport,
    /// Where the time stamps step.
    pub steps: Vec<TimeStep>,
    /// Samples (pulses) that are missing.
    pub lost: u64,
    /// Samples out of their turn.
    pub late: u64,
    /// Samples that came twice, pulses too many.
    pub doubled: u64,
    /// Every cue whose figure stood within the log, in the order of play.
    pub cues: Vec<CueReport>,
    /// Rotors that left their place in a stretch between two holds.
    pub jumps: Vec<Jump>,
}

/// How the log's clock goes against the controller's.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ClockReport {
    /// The log's time at row 0 of the table, in seconds, in the first stretch of steady time stamps.
    pub row_0_s: f64,
    /// How much faster the controller's clock runs than the logger's, in parts per million.
    pub rate_ppm: Measured,
    /// The same from each rotor alone; `None` where it says nothing. They differ where the rotors do not keep their ratio.
    pub rotor_ppm: Pair<Option<Measured>>,
}

/// A step of the log's time stamps that the machine did not make.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TimeStep {
    /// The last time stamp before it.
    pub at_s: f64,
    /// By how much the stamps step forward (back: negative) beyond the time that went by; `None` where the rest of the
    /// log could not be placed.
    pub by_s: Option<f64>,
}

/// A rotor that stood elsewhere after a transition than the hold before led to expect.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Jump {
    /// `a` or `b`.
    pub rotor: &'static str,
    /// The cue that it shows in.
    pub cue: u32,
    /// Index of the written cue.
    pub written: u32,
    /// Log time.
    pub at_s: f64,
    /// Degrees of the mirror, counter-clockwise positive.
    pub by_deg: f64,
}

impl LogReport {
    /// For reading on a terminal.
    #[must_use]
    pub fn text(&self) -> String {
        text::text(self)
    }
    /// For programs, see docs/audit.md.
    #[must_use]
    pub fn json(&self) -> String {
        json::json(self)
    }
    /// The pose of every cue over time, as an SVG picture.
    #[must_use]
    pub fn plot(&self) -> String {
        plot::plot(self)
    }
}

/// Reads a log of a machine that played `plan`, and says what it did.
///
/// `place` names the log in findings. The report is `None` where the log matches the show nowhere; the findings say so.
///
/// # Errors
/// [`NoLog`] where the file is no log; [`refusal`] makes a finding of it.
pub fn audit(
    file: &mut dyn BufRead,
    plan: &Plan,
    place: Place,
) -> Result<(Option<LogReport>, Vec<Finding>), NoLog> {
    let mut log = read::read(file)?;
    let model = Model::of(plan);
    let counts = Pair::each(|rotor| model.rotors.of(rotor).counts);
    read::unroll(&mut log.samples, &counts);
    let Some(placed) = segment::place(&model, &log) else {
        return Ok((None, findings::no_match(&log, place)));
    };
    let report = segment::report(plan, &model, &log, placed);
    let findings = findings::of(plan, &report, place);
    Ok((Some(report), findings))
}
