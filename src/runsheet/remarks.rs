//! Which findings belong to which cue: a run sheet repeats the warnings where they matter.

use crate::finding::{Finding, Place, Severity};
use crate::plan::Plan;
use crate::show::WrittenCue;
use std::collections::BTreeMap;

/// The warnings of a plan, by cue.
pub(super) struct Remarks {
    by_cue: BTreeMap<usize, Vec<String>>,
    /// Those that belong to no one cue, such as what comes of `usual`.
    pub(super) general: Vec<String>,
}

impl Remarks {
    pub(super) fn new(plan: &Plan, findings: &[Finding]) -> Self {
        let starts: BTreeMap<usize, Place> = plan
            .show
            .cues
            .iter()
            .filter_map(|written| match written {
                WrittenCue::Good(cue) => Some((cue.place.start, cue.place)),
                WrittenCue::Broken(_) => None,
            })
            .collect();
        let mut remarks = Self {
            by_cue: BTreeMap::new(),
            general: Vec::new(),
        };
        let warnings = findings
            .iter()
            .filter(|finding| finding.severity == Severity::Warning);
        for finding in warnings {
            let before = starts.range(..=finding.place.start).next_back();
            match before {
                Some((start, cue)) if holds(*cue, finding.place) => remarks
                    .by_cue
                    .entry(*start)
                    .or_default()
                    .push(finding.message.clone()),
                _ => remarks.general.push(finding.message.clone()),
            }
        }
        remarks.general.dedup();
        remarks
    }
    /// The warnings at a cue.
    pub(super) fn of(&self, cue: Place) -> &[String] {
        self.by_cue.get(&cue.start).map_or(&[], Vec::as_slice)
    }
}

fn holds(cue: Place, place: Place) -> bool {
    cue.file == place.file && cue.start <= place.start && place.end <= cue.end
}
