//! The head of the JSON form: what the table is, what it was made from, and what the machine must be before row 0.
//!
//! Written key by key, one line each, and the cue list line by line, so that a million cues need no memory.
//! Exact quantities are strings (a decimal where there is one, else `n/d`); counts and ticks are numbers.

use super::beam::latency_ticks;
use super::knots::{FRACTION_BITS, Tolerance};
use super::{COLUMNS, TURN_PLACES};
use crate::exact::{Rational, Turns, exact_decimal, ratio, whole};
use crate::figure::Ratio;
use crate::plan::{Leg, LegKind, Plan};
use crate::rig::{Pair, Projection, Rotor, RotorId, Turning};
use serde::Serialize;
use serde_json::Value;
use std::io::{self, Write};

/// Version of the JSON form; it grows where a reader of the old one would go wrong.
pub const JSON_FORMAT: u32 = 1;

/// What the head tells beside the plan.
#[derive(Clone, Copy, Debug, Default)]
pub struct Head<'f> {
    /// The table's ID, see [`table_id`](super::table_id).
    pub id: &'f str,
    /// The findings of the run that made the table, already rendered as JSON objects.
    pub findings: &'f [Value],
}

impl Head<'_> {
    /// Writes everything up to and including the line that opens `rows`.
    pub(super) fn write(&self, plan: &Plan, out: &mut dyn Write) -> io::Result<()> {
        self.write_common(plan, None, out)?;
        line(out, "columns", &COLUMNS)?;
        writeln!(out, "\"rows\":[")
    }

    /// Writes everything up to the lists of pieces.
    pub(super) fn write_knots(
        &self,
        plan: &Plan,
        tolerance: Tolerance,
        out: &mut dyn Write,
    ) -> io::Result<()> {
        let knots = KnotsHead {
            tolerance,
            fraction_bits: FRACTION_BITS,
        };
        self.write_common(plan, Some(knots), out)
    }

    fn write_common(
        &self,
        plan: &Plan,
        knots: Option<KnotsHead>,
        out: &mut dyn Write,
    ) -> io::Result<()> {
        let (show, rig) = (&plan.show, &plan.rig);
        writeln!(out, "{{")?;
        line(out, "format", &JSON_FORMAT)?;
        line(out, "program", &program())?;
        line(out, "table", &self.id)?;
        // Near the start, so that a reader knows early what it has before it.
        if let Some(knots) = knots {
            line(out, "knots", &knots)?;
        }
        line(
            out,
            "show",
            &Origin {
                title: show.title.as_deref(),
                sha256: &show.sha256,
            },
        )?;
        line(
            out,
            "rig",
            &Origin {
                title: rig.title.as_deref(),
                sha256: &rig.sha256,
            },
        )?;
        line(out, "tick_s", &exact(plan.tick().value()))?;
        line(out, "row_count", &plan.rows())?;
        line(out, "loop", &looped(plan))?;
        line(out, "latency_ticks", &latency_ticks(plan))?;
        for id in RotorId::BOTH {
            let key = format!("rotor_{}", id.name());
            line(out, &key, &rotor(rig.rotor(id)))?;
        }
        line(out, "before", &before(plan))?;
        self.write_cues(plan, out)?;
        list(out, "findings", self.findings.iter())
    }

    fn write_cues(self, plan: &Plan, out: &mut dyn Write) -> io::Result<()> {
        let mut index = 0;
        let entries = std::iter::from_fn(|| {
            let leg = plan.legs.get(index)?;
            // A morph and its hold are one cue; every other leg is an entry of its own.
            let hold = plan
                .legs
                .get(index + 1)
                .filter(|next| next.cue == leg.cue && next.kind == LegKind::Hold);
            let entry = cue(plan, index, leg, hold);
            index += 1 + usize::from(hold.is_some());
            Some(entry)
        });
        list(out, "cues", entries)?;
        let end = phases(plan, plan.legs.len());
        line(
            out,
            "end",
            &End {
                tick: plan.total().0,
                a_turns: end.a,
                b_turns: end.b,
            },
        )
    }
}

/// Name and version of the program, as the head states it.
#[must_use]
pub fn program() -> String {
    format!("{} {}", env!("CARGO_PKG_NAME"), env!("CARGO_PKG_VERSION"))
}

fn line(out: &mut dyn Write, key: &str, value: &impl Serialize) -> io::Result<()> {
    write!(out, "\"{key}\":")?;
    serde_json::to_writer(&mut *out, value)?;
    writeln!(out, ",")
}

/// An array with one entry a line.
fn list<T: Serialize>(
    out: &mut dyn Write,
    key: &str,
    entries: impl Iterator<Item = T>,
) -> io::Result<()> {
    write!(out, "\"{key}\":[")?;
    for (index, entry) in entries.enumerate() {
        writeln!(out, "{}", if index == 0 { "" } else { "," })?;
        serde_json::to_writer(&mut *out, &entry)?;
    }
    writeln!(out, "\n],")
}

/// Title and fingerprint of an input file.
#[derive(Serialize)]
struct Origin<'p> {
    title: Option<&'p str>,
    sha256: &'p str,
}

#[derive(Serialize)]
struct KnotsHead {
    tolerance: Tolerance,
    fraction_bits: u32,
}

#[derive(Serialize)]
struct Looped {
    start: u64,
    length: u64,
}

#[derive(Serialize)]
struct RotorHead {
    gear: [u32; 2],
    counts: u32,
    sense: i32,
    index_deg: Option<String>,
    turns: &'static str,
    top_speed_rpm: String,
    acceleration_rpm_s: String,
    deceleration_rpm_s: String,
    jerk_rpm_s2: Option<String>,
}

#[derive(Serialize)]
struct Before {
    at_rest: bool,
    a_on_mark: bool,
    b_on_mark: bool,
    off_deg_per_pose_deg: Option<String>,
    most_sensitive_cue: Option<u32>,
}

#[derive(Serialize)]
struct CueHead<'p> {
    cue: u32,
    kind: &'static str,
    name: Option<&'p str>,
    figure: Option<&'p str>,
    ratio: Option<[i32; 2]>,
    start: u64,
    a_turns: String,
    b_turns: String,
    hold: Option<u64>,
    hold_a_turns: Option<String>,
    hold_b_turns: Option<String>,
    beam: Option<u8>,
}

#[derive(Serialize)]
struct End {
    tick: u64,
    a_turns: String,
    b_turns: String,
}

fn exact(value: &Rational) -> String {
    exact_decimal(value, TURN_PLACES).unwrap_or_else(|| value.to_string())
}

fn looped(plan: &Plan) -> Option<Looped> {
    plan.loop_start().map(|start| Looped {
        start: start.0,
        length: plan.total().0.saturating_sub(start.0),
    })
}

fn rotor(rotor: &Rotor) -> RotorHead {
    let rpm = |value: &Rational| exact(&(value * whole(60)));
    RotorHead {
        gear: [rotor.gear.value.motor, rotor.gear.value.mirror],
        counts: rotor.counts,
        sense: rotor.sense,
        index_deg: rotor
            .index
            .as_ref()
            .map(|index| exact(&index.value.degrees())),
        turns: match rotor.turns.value {
            Turning::Both => "both",
            Turning::Forward => "forward",
            Turning::Backward => "backward",
        },
        top_speed_rpm: rpm(rotor.top_speed.value.value()),
        acceleration_rpm_s: rpm(rotor.acceleration.value.value()),
        deceleration_rpm_s: rpm(rotor.deceleration.value.value()),
        jerk_rpm_s2: rotor.jerk.as_ref().map(|jerk| rpm(jerk.value.value())),
    }
}

/// What the machine must be before row 0.
fn before(plan: &Plan) -> Before {
    let marked = |id: RotorId| plan.rig.rotor(id).index.is_some();
    let sensitive = most_sensitive(plan);
    Before {
        at_rest: true,
        a_on_mark: marked(RotorId::A),
        b_on_mark: marked(RotorId::B),
        off_deg_per_pose_deg: sensitive.as_ref().map(|(allowed, _)| allowed.to_string()),
        most_sensitive_cue: sensitive.map(|(_, cue)| cue),
    }
}

/// How many degrees a mirror may stand off its mark for each degree that the pose may be off, and the number of the
/// cue that decides it: the first one with the least |p − q|/(|p| + |q|). `None` where no cue is played.
///
/// Both mirrors off by ε the worst way round move Φ = q·φa − p·φb by (|p| + |q|)·ε, and a lobe points to
/// Φ/(q − p). Where the pose is Φ itself (p = q, or crossed mirrors) it is 1/(|p| + |q|).
#[must_use]
pub fn most_sensitive(plan: &Plan) -> Option<(Rational, u32)> {
    let mut known: Vec<Option<Rational>> = vec![None; plan.show.cues.len()];
    let mut least: Option<(Rational, u32)> = None;
    for leg in plan.legs.iter().filter(|leg| leg.kind == LegKind::Hold) {
        let Some(slot) = known.get_mut(leg.written as usize) else {
            continue;
        };
        if slot.is_some() {
            continue;
        }
        let Some(cue) = plan.cue(leg) else { continue };
        let allowed = allowance(cue.figure.ratio, plan.rig.projection);
        if least.as_ref().is_none_or(|(best, _)| allowed < *best) {
            least = Some((allowed.clone(), leg.cue));
        }
        *slot = Some(allowed);
    }
    least
}

/// Degrees that each mirror may be off for a degree of the pose, see [`most_sensitive`].
#[must_use]
pub fn allowance(figure: Ratio, projection: Projection) -> Rational {
    let pose_is_phase = figure.lobes() == 0 || projection == Projection::Crossed;
    let factor = if pose_is_phase { 1 } else { figure.lobes() };
    let terms = figure.p().unsigned_abs() + figure.q().unsigned_abs();
    // A figure is never 0:0, so the terms are at least one.
    ratio(i128::from(factor), i128::from(terms.max(1)))
}

/// The cue list's entry for the leg at `index` and, with a morph, the hold after it.
fn cue<'p>(plan: &'p Plan, index: usize, leg: &Leg, hold: Option<&Leg>) -> CueHead<'p> {
    let kind = match leg.kind {
        LegKind::RunUp => "run-up",
        LegKind::Morph | LegKind::Hold => "cue",
        LegKind::LoopMorph => "loop",
        LegKind::RunDown => "run-down",
    };
    let shown = if kind == "cue" { plan.cue(leg) } else { None };
    let start = phases(plan, index);
    let standing = hold.or(Some(leg).filter(|leg| leg.kind == LegKind::Hold));
    let landed = standing.map(|_| phases(plan, index + usize::from(hold.is_some())));
    CueHead {
        cue: leg.cue,
        kind,
        name: shown.and_then(|cue| cue.name.as_deref()),
        figure: shown.map(|cue| cue.figure.written.as_str()),
        ratio: shown.map(|cue| [cue.figure.ratio.p(), cue.figure.ratio.q()]),
        start: leg.start.0,
        a_turns: start.a,
        b_turns: start.b,
        hold: standing.map(|hold| hold.start.0),
        hold_a_turns: landed.as_ref().map(|pair| pair.a.clone()),
        hold_b_turns: landed.map(|pair| pair.b),
        beam: standing.map(|hold| hold.beam),
    }
}

/// Exact unwrapped mirror phases at the start of a leg (or at the end of the show), in turns.
fn phases(plan: &Plan, index: usize) -> Pair<String> {
    Pair::each(|id| {
        let motor: Turns = plan.phase_before(index, id);
        plan.rig.rotor(id).mirror_phase(&motor).value().to_string()
    })
}
