//! Gathers findings and merges those of one code at one place as they come, so that a cue played a million times costs one.

use crate::finding::{Code, Finding, Place, Severity};
use std::collections::BTreeMap;

/// Findings so far.
#[derive(Debug, Default)]
pub(super) struct Gather {
    findings: Vec<Finding>,
    /// Where each stands.
    known: BTreeMap<(Code, Severity, Place), usize>,
}

impl Gather {
    /// Counts a finding once more, or makes it where it is new.
    pub(super) fn note(
        &mut self,
        code: Code,
        severity: Severity,
        place: Place,
        make: impl FnOnce() -> Finding,
    ) {
        match self.known.get(&(code, severity, place)) {
            Some(&index) => {
                if let Some(finding) = self.findings.get_mut(index) {
                    finding.count += 1;
                }
            }
            None => {
                self.known
                    .insert((code, severity, place), self.findings.len());
                self.findings.push(make());
            }
        }
    }

    /// Adds a finding that is already made.
    pub(super) fn add(&mut self, finding: Finding) {
        self.note(finding.code, finding.severity, finding.place, || {
            finding.clone()
        });
    }

    /// Everything found.
    pub(super) fn into_findings(self) -> Vec<Finding> {
        self.findings
    }
}
