//! The whole show on one contact sheet, cue by cue.

use super::cue::lit;
use super::facts::{Subject, class_of, lobes, subjects, transition_words};
use super::still::Scenery;
use super::svg::{Frame, Svg, TEXT, fitted};
use super::tile::{Lit, Style, light, tile};
use super::{Look, Show};
use crate::exact::decimal;
use crate::finding::{Finding, Severity};
use crate::plan::LegKind;
use crate::runsheet::words;
use crate::setpoint::table_id;
use rayon::prelude::{IntoParallelRefIterator, ParallelIterator};
use std::collections::BTreeMap;

/// Cells in a row.
const COLUMNS: usize = 4;
/// Width of a cell.
const CELL: f64 = 280.0;
/// Height of a cell.
const TALL: f64 = 292.0;
/// Between cells.
const GAP: f64 = 18.0;
/// Room at the edges.
const EDGE: f64 = 28.0;
/// Height of the head.
const HEAD: f64 = 108.0;
/// Small pictures of the way into a cue.
const STILLS: usize = 5;
/// Cells at most: who has more cues looks at single pictures.
pub const MOST_CELLS: usize = 400;
/// Side of the figure.
const FIGURE: f64 = 176.0;

/// The light of one cell, ready to be drawn.
struct Cell {
    subject: Subject,
    figure: Vec<super::light::Piece>,
    stills: Vec<super::still::Still>,
}

/// The SVG file of the sheet.
#[must_use]
pub fn sheet(show: &Show, look: &Look) -> String {
    let plan = show.plan;
    let all = subjects(plan);
    let shown = all.get(..all.len().min(MOST_CELLS)).unwrap_or_default();
    // The run-up is the way into the first cue: they share a cell.
    let cells = joined(shown);
    let mut first: BTreeMap<(Option<u32>, u32, bool), usize> = BTreeMap::new();
    let mut fresh = Vec::new();
    for (index, subject) in cells.iter().enumerate() {
        first.entry(subject.likeness(plan)).or_insert_with(|| {
            fresh.push(index);
            index
        });
    }
    let figure_style = Style::new(&show.optics, FIGURE);
    let still_style = Style::new(&show.optics, still_side());
    let drawn: BTreeMap<usize, Cell> = fresh
        .par_iter()
        .filter_map(|index| {
            let subject = *cells.get(*index)?;
            Some((*index, cell(show, subject, figure_style, still_style)))
        })
        .collect();
    let mut svg = Svg::new();
    head(&mut svg, show, all.len().saturating_sub(shown.len()));
    for (index, subject) in cells.iter().enumerate() {
        let origin = origin(index);
        let first = first.get(&subject.likeness(plan)).copied().unwrap_or(index);
        if let Some(cell) = drawn.get(&index) {
            svg.raw(format_args!("<g id=\"c{index}\">"));
            pictures(&mut svg, show, cell, origin, (figure_style, still_style));
            svg.raw("</g>");
        } else {
            let from = self::origin(first);
            svg.raw(format_args!(
                "<use href=\"#c{first}\" x=\"{}\" y=\"{}\"/>",
                super::svg::number(origin.0 - from.0),
                super::svg::number(origin.1 - from.1)
            ));
        }
        captions(&mut svg, show, subject, origin);
    }
    let rows = cells.len().div_ceil(COLUMNS).max(1);
    #[expect(clippy::cast_precision_loss, reason = "a few hundred cells")]
    let (columns, rows) = (COLUMNS as f64, rows as f64);
    let width = 2.0 * EDGE + columns * CELL + (columns - 1.0) * GAP;
    let height = HEAD + rows * (TALL + GAP) + 28.0;
    svg.text((EDGE, height - 18.0), "xs f", &show.small_print());
    let about = format!(
        "Contact sheet of {}: {} cues",
        show.title,
        plan.show.order.len()
    );
    svg.finish(
        width,
        height,
        look.width.unwrap_or(width),
        &show.title,
        &about,
    )
}

/// The first cue takes the run-up's leg for its transition.
fn joined(subjects: &[Subject]) -> Vec<Subject> {
    let mut cells = Vec::with_capacity(subjects.len());
    for subject in subjects {
        match cells.last_mut() {
            Some(
                last @ Subject {
                    number: 0,
                    hold: None,
                    ..
                },
            ) if subject.transition.is_none() => {
                *last = Subject {
                    transition: last.transition,
                    ..*subject
                };
            }
            _ => cells.push(*subject),
        }
    }
    cells
}

fn origin(index: usize) -> (f64, f64) {
    #[expect(clippy::cast_precision_loss, reason = "a few hundred cells")]
    let (column, row) = ((index % COLUMNS) as f64, (index / COLUMNS) as f64);
    (EDGE + column * (CELL + GAP), HEAD + row * (TALL + GAP))
}

fn still_side() -> f64 {
    #[expect(clippy::cast_precision_loss, reason = "five")]
    let count = STILLS as f64;
    (CELL - 4.0 * (count - 1.0)) / count
}

fn cell(show: &Show, subject: Subject, figure: Style, still: Style) -> Cell {
    let scenery = |leg: Option<usize>| leg.and_then(|leg| Scenery::of(show.plan, leg));
    // A loop's morph ends in the figure of the first cue.
    let closes = subject.transition_leg(show.plan).map(|leg| leg.kind) == Some(LegKind::LoopMorph);
    let first = show.plan.loop_leg.filter(|_| closes);
    let figure = scenery(subject.hold.or(first))
        .map(|scenery| scenery.figure(&show.optics, figure.grain()))
        .unwrap_or_default();
    let stills = scenery(subject.transition)
        .map(|scenery| {
            // The ends are the figures before and after: the sheet shows what lies between.
            let moments = scenery.moments(STILLS + 2);
            let between = moments.get(1..=STILLS).unwrap_or_default();
            between
                .iter()
                .map(|at| scenery.still(&show.optics, *at, still.grain()))
                .collect()
        })
        .unwrap_or_default();
    Cell {
        subject,
        figure,
        stills,
    }
}

fn head(svg: &mut Svg, show: &Show, left_out: usize) {
    let plan = show.plan;
    svg.text((EDGE, 50.0), "xl", &fitted(&show.title, 26.0, 900.0));
    let seconds = |ticks: crate::exact::Ticks| words::duration(&ticks.time(plan.tick()));
    let total = seconds(plan.total());
    let length = match plan.loop_start() {
        Some(start) => {
            let round = crate::exact::Ticks(plan.total().0 - start.0);
            format!(
                "a round lasts {}, after a run-up of {}",
                seconds(round),
                seconds(plan.show_start())
            )
        }
        None => format!("lasts {total}, run-up and run-down included"),
    };
    let rig = plan
        .rig
        .title
        .clone()
        .unwrap_or_else(|| "untitled rig".to_owned());
    let line = format!("{rig}; {length}; table {}", table_id(plan));
    svg.text((EDGE, 74.0), "f", &fitted(&line, 13.0, 1100.0));
    let count = |severity: Severity| {
        show.found
            .iter()
            .filter(|(finding, _)| finding.severity == severity)
            .count()
    };
    let (errors, warnings) = (count(Severity::Error), count(Severity::Warning));
    let plural = |count: usize, word: &str| match count {
        1 => format!("1 {word}"),
        count => format!("{count} {word}s"),
    };
    let right = EDGE + 4.0 * CELL + 3.0 * GAP;
    if errors > 0 {
        svg.text((right, 50.0), "b err e", &plural(errors, "error"));
    }
    if warnings > 0 {
        svg.text((right, 74.0), "b warn e", &plural(warnings, "warning"));
    }
    svg.line((EDGE, 90.0), (right, 90.0), TEXT, 0.6, "");
    if left_out > 0 {
        let text = format!("{left_out} more are not on this sheet");
        svg.text((right - 140.0, 74.0), "b e", &text);
    }
}

fn pictures(svg: &mut Svg, show: &Show, cell: &Cell, origin: (f64, f64), styles: (Style, Style)) {
    let plan = show.plan;
    let (x, y) = origin;
    let (figure_style, still_style) = styles;
    let side = still_side();
    let leg = cell.subject.transition_leg(plan);
    let dark = leg
        .and_then(|leg| plan.transition(leg))
        .is_some_and(|transition| transition.dark);
    let mut at = x;
    for still in &cell.stills {
        let frame = Frame::square(at, y + 24.0, side);
        let lit = leg.map_or(Lit::Dark, |leg| lit(leg.beam, dark));
        tile(svg, frame, still_style, &still.pieces, lit);
        at += side + 4.0;
    }
    let frame = Frame::square(x, y + 24.0 + side + 22.0, FIGURE);
    let first = plan.loop_leg.and_then(|leg| plan.legs.get(leg));
    if let Some(leg) = cell.subject.hold_leg(plan).or(first)
        && !cell.figure.is_empty()
    {
        svg.area(frame, 6.0, super::svg::WALL);
        light(
            svg,
            frame.centre(),
            figure_style,
            &cell.figure,
            lit(leg.beam, false),
        );
    }
}

fn captions(svg: &mut Svg, show: &Show, subject: &Subject, origin: (f64, f64)) {
    let plan = show.plan;
    let (x, y) = origin;
    let side = still_side();
    let title = fitted(&subject.title(plan), 13.0, CELL - 70.0);
    if subject.hold.is_some() {
        svg.text((x, y + 15.0), "b f", &subject.number.to_string());
        let indent = 12.0 + 8.0 * f64::from(subject.number.max(1).ilog10() + 1);
        svg.text((x + indent, y + 15.0), "b", &title);
    } else {
        svg.text((x, y + 15.0), "b", &title);
    }
    let (start, _) = subject.span(plan);
    let stands = subject.hold_leg(plan).map_or(start, |leg| leg.start);
    let clock = words::clock(&stands.time(plan.tick()));
    svg.text(
        (x + CELL, y + 15.0),
        "s f e",
        clock.trim_end_matches("000").trim_end_matches('.'),
    );
    let below = y + 24.0 + side;
    if let Some(words) = subject
        .transition_leg(plan)
        .and_then(|leg| transition_words(plan, leg))
    {
        svg.text((x, below + 14.0), "xs f", &fitted(&words, 10.0, CELL));
    }
    let column = (x + FIGURE + 10.0, below + 22.0);
    let findings = subject.findings(&show.found);
    let Some(cue) = subject.cue(plan) else {
        closing(svg, show, subject, (x, below + 40.0), &findings);
        return;
    };
    let mut line = column.1 + 14.0;
    let mut put = |class: &str, text: &str, size: f64| {
        svg.text(
            (column.0, line),
            class,
            &fitted(text, size, CELL - FIGURE - 8.0),
        );
        line += 16.0;
    };
    put("b", &cue.figure.ratio.to_string(), 13.0);
    put("s", &lobes(cue.figure.ratio, plan.rig.projection), 11.0);
    if let Some(speeds) = subject.hold_leg(plan).and_then(|leg| plan.speeds_of(leg)) {
        let repeat = decimal(speeds.repeat.value(), 1);
        put("s", &format!("{} Hz", repeat.trim_end_matches(".0")), 11.0);
    }
    if let Some(leg) = subject.hold_leg(plan) {
        let held = words::duration(&leg.ticks.time(plan.tick()));
        put("s", &format!("holds {held}"), 11.0);
    }
    if !cue.spin.is_zero() {
        let degrees = crate::exact::to_f64(cue.spin.value()) * 360.0;
        put(
            "s",
            &format!("spins {} deg/s", super::svg::number(degrees)),
            11.0,
        );
    }
    listed(svg, &findings, (column.0, line + 4.0));
}

/// What is said of a loop's morph, beside the figure of the first cue, or of a run-down.
fn closing(svg: &mut Svg, show: &Show, subject: &Subject, at: (f64, f64), findings: &[&Finding]) {
    let (x, y) = at;
    match subject.transition_leg(show.plan).map(|leg| leg.kind) {
        Some(LegKind::LoopMorph) => {
            svg.text((x + FIGURE + 10.0, y - 4.0), "s", "back into");
            svg.text((x + FIGURE + 10.0, y + 12.0), "s", "the first cue");
            listed(svg, findings, (x + FIGURE + 10.0, y + 34.0));
        }
        _ => {
            svg.text(
                (x, y),
                "s",
                "to rest, each mirror with an index on its mark",
            );
            listed(svg, findings, (x, y + 22.0));
        }
    }
}

fn listed(svg: &mut Svg, findings: &[&Finding], at: (f64, f64)) {
    let mut y = at.1;
    let told: Vec<&&Finding> = findings
        .iter()
        .filter(|finding| finding.severity != Severity::Note)
        .collect();
    for finding in told.iter().take(4) {
        let class = format!("xs b {}", class_of(finding.severity));
        svg.text((at.0, y), &class, finding.code.text());
        y += 14.0;
    }
    if told.len() > 4 {
        svg.text((at.0, y), "xs f", &format!("and {} more", told.len() - 4));
    }
}
