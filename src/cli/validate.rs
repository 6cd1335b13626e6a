//! `validate`: all findings, on standard output, since they are its result.

use super::load::Loader;
use super::report::{Target, report, wants_words};
use super::{Common, Failure, Streams};
use crate::check::storage;
use crate::finding::render::counted;
use clap::Args;
use std::path::PathBuf;

/// Check shows and report everything found
#[derive(Args, Debug)]
pub(super) struct Validate {
    /// Show files; `-` is standard input
    #[arg(required = true, value_name = "SHOW")]
    shows: Vec<PathBuf>,
}

impl Validate {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        let mut loader = Loader::new(common.rig.clone(), &self.shows)?;
        let mut findings = Vec::new();
        for show in &self.shows {
            let (plan, found) = loader.plan(show, None, &mut streams.stdin)?;
            findings.extend(found);
            findings.extend(plan.and_then(|plan| storage::check(&plan, None)));
        }
        let verdict = report(findings, &loader.sources, common, Target::Stdout, streams)?;
        if wants_words(common) {
            let shows = counted(self.shows.len(), "show");
            writeln!(streams.stdout, "{shows} checked: {}", verdict.tally)?;
        }
        Ok(verdict.code)
    }
}
