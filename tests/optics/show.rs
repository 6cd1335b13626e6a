//! A show and a rig from text to plan and findings.

use phasewright::check;
use phasewright::finding::{Finding, Sources};
use phasewright::language::{parse_show, read_rig, resolve_show};
use phasewright::plan::Plan;
use std::sync::Arc;

/// The plan and the findings of its checks; fails where the text has errors.
pub(crate) fn planned(show: &str, rig: &str) -> (Plan, Vec<Finding>) {
    let mut sources = Sources::default();
    let rig_file = sources.add("x.rig", rig);
    let show_file = sources.add("x.show", show);
    let (rig, found) = read_rig(rig_file, rig, String::new());
    assert!(
        found.iter().all(|finding| !finding.is_error()),
        "{found:#?}"
    );
    let (script, found) = parse_show(show_file, show);
    assert!(found.is_empty(), "{found:#?}");
    let (show, found) = resolve_show(&script, String::new(), true);
    assert!(
        found.iter().all(|finding| !finding.is_error()),
        "{found:#?}"
    );
    let (plan, findings) = check::planned(&Arc::new(show), &Arc::new(rig.unwrap()), None);
    (plan.unwrap(), findings)
}
