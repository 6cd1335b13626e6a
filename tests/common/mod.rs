//! What several test targets share.
#![allow(dead_code, clippy::unwrap_used, clippy::panic)]

use phasewright::check::planned;
use phasewright::finding::{Finding, Severity, Sources};
use phasewright::language::{parse_show, read_rig, resolve_show};
use phasewright::plan::Plan;
use std::sync::Arc;

/// Two-sided comparison; `why` says where the tolerance comes from.
#[track_caller]
pub(crate) fn assert_close(got: f64, want: f64, tolerance: f64, why: &str) {
    assert!(
        (got - want).abs() <= tolerance,
        "got {got}, want {want} ± {tolerance} ({why})"
    );
}

/// Reads, plans and checks a show on a rig, both given as text; panics where the plan could not be made.
#[track_caller]
pub(crate) fn plan_of(rig: &str, show: &str) -> (Plan, Vec<Finding>) {
    let (plan, findings) = try_plan(rig, show, None);
    let plan =
        plan.unwrap_or_else(|| panic!("no plan for\n{rig}\n{show}\n{:#?}", brief(&findings)));
    (plan, findings)
}

/// Reads, plans and checks a show on a rig, from cue `from` on where given.
pub(crate) fn try_plan(rig: &str, show: &str, from: Option<u32>) -> (Option<Plan>, Vec<Finding>) {
    let mut sources = Sources::default();
    let show_file = sources.add("test.show", show);
    let rig_file = sources.add("test.rig", rig);
    let (rig, mut findings) = read_rig(rig_file, rig, String::new());
    let (script, more) = parse_show(show_file, show);
    findings.extend(more);
    let (show, more) = resolve_show(&script, String::new(), true);
    findings.extend(more);
    let Some(rig) = rig else {
        return (None, findings);
    };
    let (plan, more) = planned(&Arc::new(show), &Arc::new(rig), from);
    findings.extend(more);
    (plan, findings)
}

/// Code, severity and message of each, for a failing test.
pub(crate) fn brief(findings: &[Finding]) -> Vec<String> {
    findings
        .iter()
        .map(|one| {
            format!(
                "{} {}: {} / {:?}",
                one.severity.word(),
                one.code.text(),
                one.message,
                one.help
            )
        })
        .collect()
}

/// The findings that are errors.
pub(crate) fn errors(findings: &[Finding]) -> Vec<&Finding> {
    findings
        .iter()
        .filter(|finding| finding.severity == Severity::Error)
        .collect()
}

/// The codes of findings.
pub(crate) fn codes(findings: &[Finding]) -> Vec<&'static str> {
    findings.iter().map(|finding| finding.code.text()).collect()
}
