//! `preview`: pictures of every figure and every transition.

use super::folder::Folder;
use super::load::Loader;
use super::progress::Progress;
use super::report::{Target, report, uses_color, wants_words};
use super::{Common, Failure, Streams};
use crate::finding::render::counted;
use crate::finding::{Finding, Severity, ordered};
use crate::plan::Plan;
use crate::preview::facts::{Subject, subjects};
use crate::preview::scene::Scene;
use crate::preview::{Look, Show, cue, page, png, sheet, terminal};
use clap::Args;
use rayon::prelude::{IntoParallelRefIterator, ParallelIterator};
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

/// Pictures drawn, and held, at a time.
const AT_A_TIME: usize = 64;
/// Up to here each cue has a file of its own; a longer show leaves out cues that look like an earlier one.
const EACH: usize = 200;
/// Columns where nobody says how wide the terminal is.
const COLUMNS: usize = 100;

/// Draw every figure and every transition
#[derive(Args, Debug)]
pub(super) struct Preview {
    /// Show file; `-` is standard input
    #[arg(value_name = "SHOW")]
    show: PathBuf,
    /// Folder for the pictures; it is made if it is not there
    #[arg(
        long,
        short,
        value_name = "FOLDER",
        required_unless_present = "terminal"
    )]
    output: Option<PathBuf>,
    /// Draw in the terminal instead, in braille dots
    #[arg(long, conflicts_with = "output")]
    terminal: bool,
    /// Only these cues, by their numbers in the order of play: `3,5` (0 is the run-up)
    #[arg(long, value_name = "CUES", value_delimiter = ',')]
    only: Vec<u32>,
    /// Width in pixels at which pictures show themselves
    #[arg(long, value_name = "PIXELS", value_parser = clap::value_parser!(u32).range(200..=8000))]
    size: Option<u32>,
}

impl Preview {
    pub(super) fn run(&self, common: &Common, streams: &mut Streams) -> Result<u8, Failure> {
        let mut loader = Loader::new(common.rig.clone(), std::slice::from_ref(&self.show))?;
        let (plan, findings) = loader.plan(&self.show, None, &mut streams.stdin)?;
        let findings = ordered(findings);
        let sources = &loader.sources;
        let verdict = report(findings.clone(), sources, common, Target::Stderr, streams)?;
        // A show that breaks limits is drawn all the same: that is when one needs to look. Text errors leave nothing to draw.
        let Some(plan) = plan.filter(|_| !findings.iter().any(is_of_the_text)) else {
            if wants_words(common) {
                let words = format!("{}: nothing was drawn", verdict.tally);
                drop(writeln!(streams.stderr, "{words}"));
            }
            return Ok(verdict.code);
        };
        let subjects = self.chosen(&plan)?;
        // The page plays the whole show, so it is made with the sheet.
        let scene = (!self.terminal && self.only.is_empty())
            .then(|| Scene::new(&plan, &findings, &loader.sources));
        let show = Show::new(&plan, findings);
        if self.terminal {
            let screen = terminal::Screen {
                columns: terminal_size::terminal_size()
                    .map_or(COLUMNS, |(width, _)| usize::from(width.0)),
                colour: uses_color(common, Target::Stdout, streams),
            };
            let text = terminal::pictures(&show, screen, &self.only);
            streams.stdout.write_all(text.as_bytes())?;
            return Ok(verdict.code);
        }
        if let Some(output) = &self.output {
            let progress = Progress::pictures(subjects.len(), common, streams);
            let count = self.draw(&show, scene.as_ref(), &subjects, output, &progress)?;
            progress.done();
            if wants_words(common) {
                let page = if scene.is_some() { " and a page" } else { "" };
                let pictures = counted(count, "picture");
                let words = format!("{pictures}{page} in {}", output.display());
                drop(writeln!(streams.stderr, "{words}"));
            }
        }
        Ok(verdict.code)
    }

    /// The subjects that were asked for, or all of them.
    fn chosen(&self, plan: &Plan) -> Result<Vec<Subject>, Failure> {
        let all = subjects(plan);
        if self.only.is_empty() {
            return Ok(if all.len() > EACH {
                unlike(plan, all)
            } else {
                all
            });
        }
        let last = all.last().map_or(0, |subject| subject.number);
        if let Some(number) = self.only.iter().find(|number| **number > last) {
            let sentence = format!("`--only {number}`: the show's numbers end at {last}");
            return Err(Failure::Usage(sentence));
        }
        let wanted = |subject: &Subject| self.only.contains(&subject.number);
        Ok(all.into_iter().filter(wanted).collect())
    }

    /// Draws into a folder, with the page where there is a scene, and says how many pictures there are.
    fn draw(
        &self,
        show: &Show,
        scene: Option<&Scene>,
        subjects: &[Subject],
        output: &Path,
        progress: &Progress,
    ) -> Result<usize, Failure> {
        let look = Look {
            width: self.size.map(f64::from),
        };
        let mut folder = Folder::open(output)?;
        let whole = self.only.is_empty();
        let names: Vec<String> = subjects
            .iter()
            .map(|subject| subject.file(show.plan))
            .collect();
        let sheets = ["sheet.svg", "sheet.png", "index.html"];
        for name in names.iter().map(String::as_str) {
            folder.expect(name)?;
        }
        for name in sheets.into_iter().filter(|_| whole) {
            folder.expect(name)?;
        }
        let mut count = 0;
        for stretch in subjects.chunks(AT_A_TIME) {
            let drawn: Vec<(String, String)> = stretch
                .par_iter()
                .map(|subject| {
                    let text = cue::picture(show, subject, &look);
                    (subject.file(show.plan), text)
                })
                .collect();
            for (name, text) in &drawn {
                folder.put(name, text.as_bytes())?;
            }
            count += drawn.len();
            progress.at(count);
        }
        if whole {
            let text = sheet::sheet(show, &look);
            let pixels = png::png(&text)
                .map_err(|why| Failure::Cannot(format!("cannot draw sheet.png: {why}")))?;
            folder.put("sheet.svg", text.as_bytes())?;
            folder.put("sheet.png", &pixels)?;
            count += 2;
        }
        if let Some(scene) = scene {
            let text = page::page(show, scene)
                .map_err(|why| Failure::Cannot(format!("cannot make index.html: {why}")))?;
            folder.put("index.html", text.as_bytes())?;
        }
        folder.finish(whole)?;
        Ok(count)
    }
}

fn is_of_the_text(finding: &Finding) -> bool {
    finding.severity == Severity::Error && finding.code.text().starts_with("text/")
}

/// Without the cues that look like an earlier one.
fn unlike(plan: &Plan, all: Vec<Subject>) -> Vec<Subject> {
    let mut seen = BTreeSet::new();
    all.into_iter()
        .filter(|subject| seen.insert(subject.likeness(plan)))
        .collect()
}
