//! Every ratio up to a bound on one sheet, and what a rig cannot draw.

use super::light::{self, Grain};
use super::svg::{Frame, Svg, TEXT, number, wrapped};
use super::tile::{Lit, Style, light, tile};
use super::{Look, facts};
use crate::exact::{Rational, Speed, decimal, ratio, to_f64, whole};
use crate::figure::Ratio;
use crate::optics::Optics;
use crate::optics::path::{LawPath, LegPath, RotorPath};
use crate::rig::{Pair, Projection, Rig, RotorId, Turning};
use num_traits::Signed;
use rayon::prelude::{IntoParallelRefIterator, ParallelIterator};

/// Largest bound: beyond it nobody can read the sheet.
pub const MOST: i64 = 24;
/// Side of a cell's picture.
const SIDE: f64 = 84.0;
/// Width of a cell.
const CELL: f64 = 96.0;
/// Height of a cell.
const TALL: f64 = 130.0;
/// Room at the edges.
const EDGE: f64 = 40.0;
/// Height of the head.
const HEAD: f64 = 136.0;

/// One ratio on a rig.
#[derive(Clone, Debug)]
pub struct Entry {
    /// p : q.
    pub ratio: Ratio,
    /// How often it repeats with the faster motor at the working speed.
    pub repeat: Speed,
    /// Why the rig cannot draw it, or not well; empty where it can.
    pub faults: Vec<Fault>,
}

/// What stands against a ratio on a rig.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Fault {
    /// It repeats so slowly that it flickers.
    TooSlow,
    /// This rotor would hold below its stall speed.
    Stalls(RotorId),
    /// This rotor would have to turn the way it cannot.
    WrongWay(RotorId),
    /// This rotor would be faster than it can be.
    TooFast(RotorId),
}

impl Fault {
    /// In few words.
    #[must_use]
    pub fn words(self) -> String {
        match self {
            Fault::TooSlow => "flickers".to_owned(),
            Fault::Stalls(id) => format!("{} stalls", id.name()),
            Fault::WrongWay(id) => format!("{} wrong way", id.name()),
            Fault::TooFast(id) => format!("{} too fast", id.name()),
        }
    }
}

/// A ratio judged on a rig: p : q, or both turned round where only that way each rotor turns its own way (the same curve, run
/// backwards).
#[must_use]
pub fn judge(rig: &Rig, figure: Ratio) -> Entry {
    let forwards = judged(rig, figure);
    let wrong = |entry: &Entry| {
        entry
            .faults
            .iter()
            .any(|fault| matches!(fault, Fault::WrongWay(_)))
    };
    if wrong(&forwards)
        && let Some(back) = Ratio::new(-i64::from(figure.p()), -i64::from(figure.q()))
    {
        let backwards = judged(rig, back);
        if !wrong(&backwards) {
            return backwards;
        }
    }
    forwards
}

fn judged(rig: &Rig, figure: Ratio) -> Entry {
    let terms = Pair {
        a: whole(i128::from(figure.p())),
        b: whole(i128::from(figure.q())),
    };
    let motor = Pair::each(|id| rig.rotor(id).motor_per_mirror() * terms.of(id));
    let faster = motor.a.abs().max(motor.b.abs());
    let repeat = rig.working_speed.value.times(&faster.recip());
    let mut faults = Vec::new();
    for id in RotorId::BOTH {
        let rotor = rig.rotor(id);
        let speed: Rational = repeat.value() * motor.of(id);
        let wrong = match rotor.turns.value {
            Turning::Both => false,
            Turning::Forward => speed.is_negative(),
            Turning::Backward => speed.is_positive(),
        };
        if wrong {
            faults.push(Fault::WrongWay(id));
        }
        if speed.abs() > *rotor.top_speed.value.value() {
            faults.push(Fault::TooFast(id));
        }
        if speed != whole(0) && speed.abs() < *rotor.stall_speed.value.value() {
            faults.push(Fault::Stalls(id));
        }
    }
    if repeat < rig.repeat.value {
        faults.push(Fault::TooSlow);
    }
    Entry {
        ratio: figure,
        repeat,
        faults,
    }
}

/// The SVG file: p downwards from 1, q across from −`up_to` to `up_to`.
#[must_use]
pub fn atlas(rig: &Rig, up_to: i64, look: &Look) -> String {
    let up_to = up_to.clamp(1, MOST);
    let optics = Optics::of(rig);
    let style = Style::new(&optics, SIDE);
    let places: Vec<(i64, i64)> = (1..=up_to)
        .flat_map(|p| (-up_to..=up_to).map(move |q| (p, q)))
        .collect();
    let cells: Vec<Cell> = places
        .par_iter()
        .filter_map(|place| cell(rig, &optics, *place, style.grain()))
        .collect();
    let mut svg = Svg::new();
    #[expect(clippy::cast_precision_loss, reason = "a few dozen")]
    let bound = up_to as f64;
    let width = 2.0 * EDGE + (2.0 * bound + 1.0) * CELL;
    let legend = wrapped(LEGEND, 11.0, width - 2.0 * EDGE, 6);
    #[expect(clippy::cast_precision_loss, reason = "a few lines")]
    let height = HEAD + bound * TALL + 46.0 + 16.0 * legend.len() as f64;
    let title = format!(
        "{}: what it draws",
        rig.title.as_deref().unwrap_or("Untitled rig")
    );
    head(&mut svg, rig, &title, &optics, up_to);
    let corner = |(p, q): (i64, i64)| {
        #[expect(clippy::cast_precision_loss, reason = "a few dozen")]
        let at = (
            EDGE + (q + up_to) as f64 * CELL + (CELL - SIDE) / 2.0,
            HEAD + (p - 1) as f64 * TALL,
        );
        at
    };
    for place in &places {
        let Some(lowest) = Ratio::new(place.0, place.1) else {
            continue;
        };
        if i64::from(lowest.p()) != place.0 {
            let (x, y) = corner(*place);
            let middle = (x + SIDE / 2.0, y + SIDE / 2.0 + 4.0);
            svg.text(middle, "xs f m", &format!("as {lowest}"));
        }
    }
    for p in 1..=up_to {
        let (_, y) = corner((p, 0));
        svg.text((EDGE - 14.0, y + SIDE / 2.0 + 4.0), "b f m", &p.to_string());
    }
    for q in -up_to..=up_to {
        let (x, _) = corner((1, q));
        svg.text((x + SIDE / 2.0, HEAD - 10.0), "b f m", &q.to_string());
    }
    for cell in &cells {
        let at = corner(cell.place);
        draw(&mut svg, rig, cell, style, at);
    }
    let mut line = HEAD + bound * TALL + 28.0;
    for words in &legend {
        svg.text((EDGE, line), "s f", words);
        line += 16.0;
    }
    svg.text((EDGE, height - 16.0), "xs f", optics.model().words());
    let shown = look.width.unwrap_or(width);
    svg.finish(
        width,
        height,
        shown,
        &title,
        "Every ratio of the two mirrors up to a bound, in both senses",
    )
}

const LEGEND: &str = "Down: turns of mirror a. Across: turns of mirror b in the same time, minus the other way round. \
    Hz: repeats a second with the faster motor at its working speed. Grey: what the rig cannot draw, or not steadily, and why.";

/// A cell with its light.
struct Cell {
    place: (i64, i64),
    entry: Entry,
    pieces: Vec<light::Piece>,
}

fn cell(rig: &Rig, optics: &Optics, place: (i64, i64), grain: Grain) -> Option<Cell> {
    let figure = Ratio::new(place.0, place.1)?;
    // Only lowest terms: 2:4 is 1:2, which has its own cell.
    if i64::from(figure.p()) != place.0 {
        return None;
    }
    let entry = judge(rig, figure);
    let pieces = traced(rig, optics, entry.ratio, grain);
    Some(Cell {
        place,
        entry,
        pieces,
    })
}

/// One period of a figure in its usual pose, at one repeat a second.
fn traced(rig: &Rig, optics: &Optics, figure: Ratio, grain: Grain) -> Vec<light::Piece> {
    let up = crate::exact::Turns::new(ratio(1, 4));
    let crossed = rig.projection == Projection::Crossed;
    let odd = figure.p() % 2 != 0 && figure.q() % 2 != 0;
    let wanted = match (crossed, odd) {
        (true, true) => 0.25,
        (true, false) => 0.0,
        (false, _) if figure.p() == figure.q() => 0.0,
        (false, _) => to_f64(figure.phase_of_pose(&up).value()),
    };
    // Φ = q·θa − p·θb, all on one mirror.
    let (p, q) = (f64::from(figure.p()), f64::from(figure.q()));
    let start = if figure.p() != 0 {
        (0.0, -wanted / p)
    } else {
        (wanted / q, 0.0)
    };
    let rotor = |start: f64, from: f64| RotorPath {
        start,
        from,
        change: 0.0,
        correction: 0.0,
        law: LawPath::Still,
    };
    let path = LegPath {
        rotors: Pair {
            a: rotor(start.0, p),
            b: rotor(start.1, q),
        },
        length: 1.0,
        start: 0.0,
    };
    light::collect(&path, optics, (0.0, 1.0), 1.0, grain)
}

fn head(svg: &mut Svg, rig: &Rig, title: &str, optics: &Optics, up_to: i64) {
    svg.text((EDGE, 50.0), "xl", title);
    let rpm = decimal(&rig.working_speed.value.rpm(), 1);
    let viewing = decimal(rig.repeat.value.value(), 2);
    let mut line = format!(
        "ratios a : b up to {up_to}; faster motor at {} rpm; steady from {} Hz",
        rpm.trim_end_matches(".0"),
        viewing.trim_end_matches('0').trim_end_matches('.')
    );
    if optics.in_metres() {
        line.push_str(&format!(
            "; tiles {} m wide on the wall",
            number(2.0 * optics.extent() / 0.9)
        ));
    }
    svg.text((EDGE, 74.0), "f", &line);
    #[expect(clippy::cast_precision_loss, reason = "a few dozen")]
    let (right, middle) = (
        EDGE + (2 * up_to + 1) as f64 * CELL,
        EDGE + (up_to as f64 + 0.5) * CELL,
    );
    svg.line((EDGE, 88.0), (right, 88.0), TEXT, 0.6, "");
    let words = ["opposite senses", "same sense"];
    for (words, (x, class)) in words
        .iter()
        .zip([(middle - CELL, "s f e"), (middle + CELL, "s f")])
    {
        svg.text((x, 106.0), class, words);
    }
}

fn draw(svg: &mut Svg, rig: &Rig, cell: &Cell, style: Style, at: (f64, f64)) {
    let frame = Frame::square(at.0, at.1, SIDE);
    let entry = &cell.entry;
    let good = entry.faults.is_empty();
    if good {
        tile(svg, frame, style, &cell.pieces, Lit::On(1.0));
    } else {
        svg.area(frame, 4.0, "#dedbd2");
        light(svg, frame.centre(), style, &cell.pieces, Lit::Never);
    }
    let middle = at.0 + SIDE / 2.0;
    let class = if good { "b m" } else { "b f m" };
    svg.text(
        (middle, frame.bottom() + 14.0),
        class,
        &entry.ratio.to_string(),
    );
    let repeat = decimal(entry.repeat.value(), 1);
    let repeat = repeat.trim_end_matches(".0");
    let lines = if good {
        vec![format!(
            "{}, {repeat} Hz",
            facts::lobes(entry.ratio, rig.projection)
        )]
    } else {
        entry
            .faults
            .iter()
            .map(|fault| match fault {
                Fault::TooSlow => format!("flickers, {repeat} Hz"),
                other => other.words(),
            })
            .collect()
    };
    let class = if good { "xs f m" } else { "xs warn m" };
    for (line, y) in lines.iter().zip([27.0, 39.0]) {
        svg.text((middle, frame.bottom() + y), class, line);
    }
}
