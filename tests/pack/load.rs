//! Shows read from files and planned.

use phasewright::check::planned;
use phasewright::finding::{FileId, Severity};
use phasewright::language::{parse_show, read_rig, resolve_show};
use phasewright::plan::Plan;
use std::fs;
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The plan of a show with its own rig.
pub(crate) fn plan_of(path: &Path) -> Plan {
    let text = fs::read_to_string(path).unwrap();
    let rig_name = text
        .lines()
        .find_map(|line| line.strip_prefix("rig"))
        .and_then(|rest| rest.split('"').nth(1))
        .unwrap();
    let rig_text = fs::read_to_string(path.with_file_name(rig_name)).unwrap();
    plan_of_texts(&text, &rig_text)
}

/// The plan of a show and a rig given as texts.
pub(crate) fn plan_of_texts(show: &str, rig: &str) -> Plan {
    let (rig, found) = read_rig(FileId(1), rig, "0".repeat(64));
    assert!(
        found.iter().all(|one| one.severity != Severity::Error),
        "{found:#?}"
    );
    let (script, _) = parse_show(FileId(0), show);
    let (show, found) = resolve_show(&script, "1".repeat(64), false);
    assert!(
        found.iter().all(|one| one.severity != Severity::Error),
        "{found:#?}"
    );
    let (plan, found) = planned(&Arc::new(show), &Arc::new(rig.unwrap()), None);
    let errors: Vec<_> = found
        .iter()
        .filter(|one| one.severity == Severity::Error)
        .collect();
    // A plan that breaks a motor's limits is still a plan.
    plan.unwrap_or_else(|| panic!("no plan: {errors:#?}"))
}

/// The folder of the project's example shows.
pub(crate) fn examples() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("shows")
}
