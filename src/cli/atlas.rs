//! `atlas`: every ratio up to a bound, and what the rig cannot draw.

use super::load::{Loader, is_standard_input};
use super::report::{Target, report};
use super::{Common, Failure, Streams};
use crate::preview::{Look, atlas, png};
use clap::Args;
use std::io::Write;
use std::path::{Path, PathBuf};

/// Draw every ratio up to a bound, and what the rig cannot draw
#[derive(Args, Debug)]
pub(super) struct Atlas {
    /// Rig file; `-` is standard input
    #[arg(value_name = "RIG")]
    rig: PathBuf,
    /// Picture, by its ending .svg or .png; `-` writes SVG to standard output
    #[arg(long, short, value_name = "FILE")]
    output: PathBuf,
    /// Largest term of a ratio
    #[arg(long, value_name = "N", default_value = "6", value_parser = clap::value_parser!(u32).range(1..=24))]
    up_to: u32,
    /// Width in pixels at which the picture shows itself
    #[arg(long, value_name = "PIXELS", value_parser = clap::value_parser!(u32).range(200..=8000))]
    size: Option<u32>,
}

impl Atlas {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        let pixels = self.wants_pixels()?;
        let mut loader = Loader::new(None, std::slice::from_ref(&self.rig))?;
        let mut findings = Vec::new();
        let rig = loader.rig(&self.rig, None, &mut streams.stdin, &mut findings);
        let verdict = report(findings, &loader.sources, common, Target::Stderr, streams)?;
        let Some(rig) = rig.filter(|_| !verdict.stops()) else {
            return Ok(verdict.code);
        };
        let look = Look {
            width: self.size.map(f64::from),
        };
        let text = atlas::atlas(&rig, i64::from(self.up_to), &look);
        if is_standard_input(&self.output) {
            streams.stdout.write_all(text.as_bytes())?;
            return Ok(verdict.code);
        }
        let bytes = if pixels {
            png::png(&text).map_err(|why| Failure::Cannot(format!("cannot draw: {why}")))?
        } else {
            text.into_bytes()
        };
        replace(&self.output, &bytes)?;
        Ok(verdict.code)
    }

    fn wants_pixels(&self) -> Result<bool, Failure> {
        if is_standard_input(&self.output) {
            return Ok(false);
        }
        let ending = self
            .output
            .extension()
            .map(|ending| ending.to_string_lossy());
        match ending.as_deref() {
            Some("svg") => Ok(false),
            Some("png") => Ok(true),
            _ => Err(Failure::Usage(format!(
                "the name {} does not end in .svg or .png",
                self.output.display()
            ))),
        }
    }
}

/// Gives a file its new content as a whole: a reader sees the old picture or the new one.
fn replace(target: &Path, bytes: &[u8]) -> Result<(), Failure> {
    let cannot = |error: std::io::Error| {
        Failure::Cannot(format!("cannot write {}: {error}", target.display()))
    };
    if target.is_dir() {
        let sentence = format!("cannot write {}: it is a folder", target.display());
        return Err(Failure::Cannot(sentence));
    }
    // A device or a pipe is written straight through.
    if target.exists() && !target.is_file() {
        return std::fs::write(target, bytes).map_err(cannot);
    }
    let mut temporary = super::deliver::temporary_beside(target).map_err(cannot)?;
    temporary.write_all(bytes).map_err(cannot)?;
    temporary
        .persist(target)
        .map_err(|failed| cannot(failed.error))?;
    Ok(())
}
