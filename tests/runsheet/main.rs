//! Run sheets of plans built by hand, in all four forms.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    dead_code,
    reason = "the plans are shared with the tests of rows, which use more of them"
)]

mod forms;
#[path = "../setpoint/plans.rs"]
mod plans;
#[path = "../common/steady.rs"]
mod steady;
mod values;

use phasewright::finding::{Finding, Locator, Sources};
use phasewright::motion::LawKind;
use phasewright::plan::Plan;
use phasewright::runsheet::{Form, write};

/// The run sheet of a plan with these findings.
fn sheet(plan: &Plan, findings: &[Finding], form: Form) -> String {
    let mut sources = Sources::default();
    sources.add("evening.show", "cue ring 8\n");
    let mut out = Vec::new();
    write(form, plan, findings, &Locator::new(&sources), &mut out).unwrap();
    String::from_utf8(out).unwrap()
}

/// A looped evening of three cues on a geared pair.
fn evening() -> Plan {
    plans::evening([
        LawKind::Quintic,
        LawKind::Cycloidal,
        LawKind::Septic,
        LawKind::Linear,
    ])
}

/// One cue and a run-down.
fn there_and_back() -> Plan {
    plans::there_and_back(LawKind::Harmonic, LawKind::Cubic)
}
