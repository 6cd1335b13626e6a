//! Whether the pose of a figure is known.

use super::Standing;
use crate::finding::{Code, Finding, Severity};
use crate::rig::RotorId;
use crate::show::Land;

pub(super) fn check(standing: &Standing) -> Option<Finding> {
    let Standing { cue, speeds, rig } = standing;
    let without = RotorId::BOTH
        .into_iter()
        .find(|id| rig.rotor(*id).index.is_none());
    let place = cue.land_place.unwrap_or(cue.figure_place);
    if let (Land::Angle(_), Some(id)) = (&cue.land, without) {
        let message = format!(
            "`land` with an angle needs an index on both rotors, rotor {} has none",
            id.name()
        );
        return Some(
            Finding::new(Code::PoseOpen, place, message)
                .severity(Severity::Error)
                .also(rig.rotor(id).place, "the rotor without an index")
                .help("`land free`, or an `index at` angle in the rig, would pass"),
        );
    }
    if speeds.pose.is_some() {
        return None;
    }
    let why = match without {
        Some(id) => format!("rotor {} has no index", id.name()),
        None => "`land free`".to_owned(),
    };
    Some(Finding::new(
        Code::PoseOpen,
        place,
        format!("the pose of the figure is left free: {why}"),
    ))
}
