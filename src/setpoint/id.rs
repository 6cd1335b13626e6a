//! The name of a table: the same for every form it is written in.

use super::beam::latency_ticks;
use crate::motion::{Law, LawKind, Move, Shape};
use crate::plan::{LegKind, Plan};
use crate::rig::RotorId;
use rayon::prelude::{IntoParallelIterator, ParallelIterator};
use sha2::{Digest, Sha256};
use std::fmt::Write;

/// Legs put into text at a time, so that a million cues are never all held.
const LEGS_AT_A_TIME: usize = 8192;

/// The table's ID: the first eight hexadecimal digits of the SHA-256 of this text, in UTF-8, LF after each line.
///
/// ```text
/// phasewright-table 1
/// tick TICK                         seconds
/// latency LATENCY                   ticks
/// loop START                        tick, or `-` with a run-down
/// rotor NAME COUNTS N:D SENSE       once for a, once for b; SENSE is 1 or -1
/// leg KIND CUE START TICKS BEAM     in the order of play, followed by one line for each rotor:
/// NAME START END FROM TO CORRECTION SHAPE
/// ```
///
/// Phases are unwrapped motor turns, speeds motor turns/s, all exact fractions in lowest terms (`n/d`, or `n` where
/// d = 1). KIND is `run-up`, `morph`, `hold`, `loop` or `run-down`. SHAPE is `hold`, `scurve R` or the law's word with
/// ` skew L` (and ` X1 Y1 X2 Y2` for `bezier`). Titles, comments, names and files do not enter: two shows that
/// move the mirrors and the beam alike have one ID.
#[must_use]
pub fn table_id(plan: &Plan) -> String {
    let mut hash = Sha256::new();
    hash.update(head(plan));
    let mut first = 0;
    while first < plan.legs.len() {
        let until = first.saturating_add(LEGS_AT_A_TIME).min(plan.legs.len());
        let texts: Vec<String> = (first..until)
            .into_par_iter()
            .map(|index| leg(plan, index))
            .collect();
        for text in &texts {
            hash.update(text);
        }
        first = until;
    }
    let digest = hash.finalize();
    digest.iter().take(4).fold(String::new(), |mut id, byte| {
        put(&mut id, format_args!("{byte:02x}"));
        id
    })
}

fn head(plan: &Plan) -> String {
    let mut text = format!(
        "phasewright-table 1\ntick {}\nlatency {}\n",
        plan.tick().value(),
        latency_ticks(plan)
    );
    match plan.loop_start() {
        Some(start) => put(&mut text, format_args!("loop {}\n", start.0)),
        None => text.push_str("loop -\n"),
    }
    for id in RotorId::BOTH {
        let rotor = plan.rig.rotor(id);
        let gear = rotor.gear.value;
        put(
            &mut text,
            format_args!(
                "rotor {} {} {}:{} {}\n",
                id.name(),
                rotor.counts,
                gear.motor,
                gear.mirror,
                rotor.sense
            ),
        );
    }
    text
}

fn leg(plan: &Plan, index: usize) -> String {
    let mut text = String::new();
    let (Some(leg), Some(moves)) = (plan.legs.get(index), plan.moves(index)) else {
        return text;
    };
    let kind = match leg.kind {
        LegKind::RunUp => "run-up",
        LegKind::Morph => "morph",
        LegKind::Hold => "hold",
        LegKind::LoopMorph => "loop",
        LegKind::RunDown => "run-down",
    };
    put(
        &mut text,
        format_args!(
            "leg {kind} {} {} {} {}\n",
            leg.cue, leg.start.0, leg.ticks.0, leg.beam
        ),
    );
    for id in RotorId::BOTH {
        rotor(&mut text, id, moves.of(id));
    }
    text
}

fn rotor(text: &mut String, id: RotorId, motion: &Move) {
    put(
        text,
        format_args!(
            "{} {} {} {} {} {} ",
            id.name(),
            motion.start.value(),
            motion.end.value(),
            motion.from.value(),
            motion.to.value(),
            motion.correction.value()
        ),
    );
    match &motion.shape {
        Shape::Hold => text.push_str("hold"),
        Shape::Scurve(share) => put(text, format_args!("scurve {share}")),
        Shape::Law(law) => written_law(text, law),
    }
    text.push('\n');
}

fn written_law(text: &mut String, law: &Law) {
    let word = match &law.kind {
        LawKind::Linear => "linear",
        LawKind::Cubic => "cubic",
        LawKind::Quintic => "quintic",
        LawKind::Septic => "septic",
        LawKind::Harmonic => "harmonic",
        LawKind::Cycloidal => "cycloidal",
        LawKind::ModifiedSine => "modified-sine",
        LawKind::ModifiedTrapezoid => "modified-trapezoid",
        LawKind::Scurve => "scurve",
        LawKind::Bezier { .. } => "bezier",
    };
    put(text, format_args!("{word} skew {}", law.skew));
    if let LawKind::Bezier { x1, y1, x2, y2 } = &law.kind {
        put(text, format_args!(" {x1} {y1} {x2} {y2}"));
    }
}

/// Writing to a `String` cannot fail.
fn put(text: &mut String, words: std::fmt::Arguments<'_>) {
    let _ = text.write_fmt(words);
}
