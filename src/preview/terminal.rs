//! Figures in braille dots.
//!
//! A braille sign has two dots across and four up (Unicode block U+2800), and stands in a cell about twice as tall as wide:
//! the dots are square.

use super::cue::lit;
use super::facts::{Subject, lobes, subjects, transition_words};
use super::light::{Grain, Piece};
use super::still::Scenery;
use super::tile::Lit;
use super::{Show, svg::fitted};
use crate::optics::Optics;
use crate::optics::colour::{UNKNOWN, of_wavelength};
use crate::runsheet::words;
use kurbo::ParamCurve;
use std::fmt::Write;

/// Narrowest and widest picture, in columns.
const COLUMNS: (usize, usize) = (8, 36);
/// Pictures of a transition beside the figure, at most.
const MOST_STILLS: usize = 5;
/// Columns between pictures.
const BETWEEN: usize = 2;

/// How a terminal is drawn on.
#[derive(Clone, Copy, Debug)]
pub struct Screen {
    /// Columns of the terminal.
    pub columns: usize,
    /// Whether colour may be used.
    pub colour: bool,
}

/// A show, subject by subject: a line of words, then stills of the way into it and the figure, side by side.
///
/// `only` keeps these cue numbers (the run-up is 0) where it is not empty.
#[must_use]
pub fn pictures(show: &Show, screen: Screen, only: &[u32]) -> String {
    let mut out = String::new();
    let wanted = |subject: &&Subject| only.is_empty() || only.contains(&subject.number);
    for subject in subjects(show.plan).iter().filter(wanted) {
        head(&mut out, show, subject, screen);
        let pictures = side_by_side(show, subject, screen);
        let rows = pictures
            .iter()
            .map(|(lines, _)| lines.len())
            .max()
            .unwrap_or(0);
        for row in 0..rows {
            let mut line = String::new();
            for (index, (lines, lit)) in pictures.iter().enumerate() {
                if index > 0 {
                    line.push_str(&" ".repeat(BETWEEN));
                }
                let signs = lines.get(row).map_or("", String::as_str);
                painted(&mut line, signs, *lit, show, screen);
            }
            out.push_str(line.trim_end());
            out.push('\n');
        }
        out.push('\n');
    }
    out
}

fn head(out: &mut String, show: &Show, subject: &Subject, screen: Screen) {
    let plan = show.plan;
    let mut line = String::new();
    if subject.hold.is_some() {
        let _ = write!(line, "{}  ", subject.number);
    }
    line.push_str(&subject.title(plan));
    if let Some(cue) = subject.cue(plan) {
        let figure = cue.figure.ratio;
        let _ = write!(line, "   {figure}, {}", lobes(figure, plan.rig.projection));
    }
    let (start, _) = subject.span(plan);
    let _ = write!(line, "   {}", words::clock(&start.time(plan.tick())));
    if let Some(leg) = subject.transition_leg(plan) {
        let words = transition_words(plan, leg).unwrap_or_default();
        let _ = write!(line, "   {words}");
    }
    // A column is one sign: the size and the width cancel.
    #[expect(clippy::cast_precision_loss, reason = "some hundred columns")]
    let line = fitted(&line, 1.0, 0.54 * screen.columns as f64 + 0.01);
    let _ = if screen.colour {
        writeln!(out, "\u{1b}[1m{line}\u{1b}[0m")
    } else {
        writeln!(out, "{line}")
    };
}

/// The lines of each picture of a subject with its light.
fn side_by_side(show: &Show, subject: &Subject, screen: Screen) -> Vec<(Vec<String>, Lit)> {
    let plan = show.plan;
    let stills = if subject.transition.is_some() {
        MOST_STILLS
    } else {
        0
    };
    let figure = usize::from(subject.hold.is_some());
    // As many pictures as fit side by side at the least width; then as wide as there is room for.
    let fitting = (screen.columns + BETWEEN) / (COLUMNS.0 + BETWEEN);
    let stills = stills.min(fitting.saturating_sub(figure));
    let count = (stills + figure).max(1);
    let columns = ((screen.columns + BETWEEN) / count)
        .saturating_sub(BETWEEN)
        .clamp(COLUMNS.0, COLUMNS.1);
    let canvas = Canvas::new(&show.optics, columns);
    let mut pictures = Vec::new();
    if let Some((index, leg)) = subject.transition.zip(subject.transition_leg(plan))
        && let Some(scenery) = Scenery::of(plan, index)
    {
        let dark = plan
            .transition(leg)
            .is_some_and(|transition| transition.dark);
        let moments = scenery.moments(stills + 2);
        for at in moments.get(1..=stills).unwrap_or_default() {
            let still = scenery.still(&show.optics, *at, canvas.grain());
            pictures.push((canvas.dots(&still.pieces), lit(leg.beam, dark)));
        }
    }
    if let Some((index, leg)) = subject.hold.zip(subject.hold_leg(plan))
        && let Some(scenery) = Scenery::of(plan, index)
    {
        let pieces = scenery.figure(&show.optics, canvas.grain());
        pictures.push((canvas.dots(&pieces), lit(leg.beam, false)));
    }
    pictures
}

fn painted(line: &mut String, signs: &str, lit: Lit, show: &Show, screen: Screen) {
    if !screen.colour {
        line.push_str(signs);
        return;
    }
    let _ = match lit {
        Lit::On(_) => {
            let beam = show.optics.beam();
            let colour = beam.wavelength.map_or(UNKNOWN, of_wavelength);
            write!(
                line,
                "\u{1b}[38;2;{};{};{}m{signs}\u{1b}[0m",
                colour.r, colour.g, colour.b
            )
        }
        Lit::Dark | Lit::Never => write!(line, "\u{1b}[2m{signs}\u{1b}[0m"),
    };
}

/// A square of braille signs.
struct Canvas {
    columns: usize,
    rows: usize,
    /// Dots to a unit of the optics.
    scale: f64,
}

impl Canvas {
    fn new(optics: &Optics, columns: usize) -> Self {
        #[expect(clippy::cast_precision_loss, reason = "some hundred dots")]
        let dots = (columns * 2) as f64;
        Self {
            columns,
            rows: columns.div_ceil(2),
            scale: (dots - 1.0) / 2.0 / optics.extent().max(f64::MIN_POSITIVE),
        }
    }

    fn grain(&self) -> Grain {
        Grain {
            tolerance: 0.25 / self.scale,
            width: 1.0 / self.scale,
        }
    }

    /// One text a row, top first.
    fn dots(&self, pieces: &[Piece]) -> Vec<String> {
        let mut cells = vec![0_u8; self.columns * self.rows];
        for piece in pieces {
            // Dots at most half a dot apart.
            let reach = (piece.curve.p3 - piece.curve.p0).hypot()
                + (piece.curve.p1 - piece.curve.p0).hypot()
                + (piece.curve.p3 - piece.curve.p2).hypot();
            let steps = libm::ceil(reach * self.scale * 2.0).clamp(1.0, 500.0);
            let mut step = 0.0;
            while step <= steps {
                self.set(&mut cells, piece.curve.eval(step / steps));
                step += 1.0;
            }
        }
        cells
            .chunks(self.columns)
            .map(|row| row.iter().map(|dots| braille(*dots)).collect())
            .collect()
    }

    fn set(&self, cells: &mut [u8], point: kurbo::Point) {
        #[expect(clippy::cast_precision_loss, reason = "some hundred dots")]
        let (across, down) = (
            self.columns as f64 - 0.5 + point.x * self.scale,
            self.rows as f64 * 2.0 - 0.5 - point.y * self.scale,
        );
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "not below zero after the cut"
        )]
        let (x, y) = (
            libm::round(across).max(0.0) as usize,
            libm::round(down).max(0.0) as usize,
        );
        let (column, row) = (x / 2, y / 4);
        if column >= self.columns {
            return;
        }
        if let Some(cell) = cells.get_mut(row * self.columns + column) {
            *cell |= dot(x % 2, y % 4);
        }
    }
}

/// The bit of a dot in its sign: 1 2 3 7 down the left, 4 5 6 8 down the right (Unicode, block Braille Patterns).
fn dot(right: usize, down: usize) -> u8 {
    match (right, down) {
        (0, 3) => 1 << 6,
        (0, down) => 1 << down,
        (_, 3) => 1 << 7,
        (_, down) => 1 << (3 + down),
    }
}

fn braille(dots: u8) -> char {
    if dots == 0 {
        return ' ';
    }
    char::from_u32(0x2800 + u32::from(dots)).unwrap_or(' ')
}
