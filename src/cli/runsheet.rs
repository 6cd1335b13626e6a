//! `runsheet`: the show cue by cue.

use super::load::Loader;
use super::report::{Target, report};
use super::{Common, Failure, Streams};
use crate::finding::Locator;
use crate::runsheet::{self, Form};
use clap::{Args, ValueEnum};
use std::path::PathBuf;

/// Write the show cue by cue, for the people who run it
#[derive(Args, Debug)]
pub(super) struct Runsheet {
    /// Show file; `-` is standard input
    #[arg(value_name = "SHOW")]
    show: PathBuf,
    /// How it is written
    #[arg(long, value_name = "FORM", default_value = "text")]
    form: SheetForm,
}

#[derive(Clone, Copy, Debug, ValueEnum)]
enum SheetForm {
    /// For paper
    Text,
    /// One line a cue
    Csv,
    /// For programs
    Json,
    /// Markdown
    Md,
}

impl From<SheetForm> for Form {
    fn from(form: SheetForm) -> Self {
        match form {
            SheetForm::Text => Self::Text,
            SheetForm::Csv => Self::Csv,
            SheetForm::Json => Self::Json,
            SheetForm::Md => Self::Markdown,
        }
    }
}

impl Runsheet {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        let mut loader = Loader::new(common.rig.clone(), std::slice::from_ref(&self.show))?;
        let (plan, findings) = loader.plan(&self.show, None, &mut streams.stdin)?;
        let sources = &loader.sources;
        let verdict = report(findings.clone(), sources, common, Target::Stderr, streams)?;
        if verdict.stops() {
            return Ok(verdict.code);
        }
        if let Some(plan) = plan {
            let locator = Locator::new(sources);
            let form = self.form.into();
            runsheet::write(form, &plan, &findings, &locator, &mut streams.stdout)?;
        }
        Ok(verdict.code)
    }
}
