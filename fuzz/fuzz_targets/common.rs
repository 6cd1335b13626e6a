//! The show whose tables and logs are looked at.

use phasewright::check::planned;
use phasewright::finding::Sources;
use phasewright::language::{parse_show, read_rig, resolve_show};
use phasewright::plan::Plan;
use std::sync::Arc;

const RIG: &str = "\
rotor a {
  top-speed     6000 rpm
  acceleration  60000 rpm/s
  counts        400
  draws         counter-clockwise
  index         at 0 deg
}
rotor b like a {
  draws         clockwise
  index         at 0 deg
}
controller {
  tick          5 ms
}
";

const SHOW: &str = "\
rig \"x.rig\"
run-up 400 ms
cue deltoid hold 300 ms
cue trifolium morph 500 ms hold 200 ms
loop morph 400 ms
";

/// The plan of a small show.
pub fn plan() -> Plan {
    let (plan, findings) = read(RIG, SHOW);
    plan.unwrap_or_else(|| panic!("{findings:?}"))
}

/// Reads, plans and checks a show on a rig; says what was found.
pub fn read(rig: &str, show: &str) -> (Option<Plan>, String) {
    let mut sources = Sources::default();
    let show_file = sources.add("fuzz.show", show);
    let rig_file = sources.add("fuzz.rig", rig);
    let (rig, mut findings) = read_rig(rig_file, rig, String::new());
    let (script, more) = parse_show(show_file, show);
    findings.extend(more);
    let (show, more) = resolve_show(&script, String::new(), true);
    findings.extend(more);
    let plan = rig.and_then(|rig| {
        let (plan, more) = planned(&Arc::new(show), &Arc::new(rig), None);
        findings.extend(more);
        plan
    });
    (plan, format!("{findings:?}"))
}
