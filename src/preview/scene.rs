//! The data of a page that plays the show: moves, not rows, so that a day-long show stays small.
//!
//! Everything about mirrors is in turns, turns/s and seconds, counter-clockwise positive; a motor's value is the mirror's times
//! `motor_per_mirror`. With u = t/length from 0 to 1 in a leg, for each mirror:
//!
//! ```text
//! speed = from + change·s(u) + correction/length·140u³(1−u)³
//! phase = start + from·t + change·length·S(u) + correction·(35u⁴ − 84u⁵ + 70u⁶ − 20u⁷),   S = ∫s
//! ```
//!
//! `law` names an entry of `laws`. A `sampled` one gives s and S at evenly spaced u (join them as cubic Hermite pieces of S
//! with s as slope, see `optics::path`); an `scurve` one its share r, with s = u²/(2r(1−r)), then (u − r/2)/(1−r), then
//! mirrored about the middle. A hold has no change and no correction.
//!
//! The spot is `optics::Optics::spot` of both phases: `optics.trace` holds all that the exact trace needs.

use super::facts::transition_words;
use super::moments::legs_of;
use super::numeral::{Figure, Precise};
use crate::exact::{Rational, Ticks, to_f64};
use crate::finding::{Finding, Locator, Sources};
use crate::optics::path::{LawPath, Laws, LegPath, RotorPath};
use crate::optics::trace::{Trace, Vec3};
use crate::optics::{Optics, colour};
use crate::plan::{Leg, LegKind, Plan};
use crate::rig::{Pair, Projection, RotorId, Turning};
use crate::setpoint::{program, table_id};
use serde::Serialize;

/// Version of the scene.
pub const SCENE_FORMAT: u32 = 1;

/// Legs of a scene at most: what comes after is left out, and with it the loop.
pub const MOST_LEGS: usize = 20_000;

/// The whole show.
#[derive(Debug, Serialize)]
pub struct Scene {
    /// [`SCENE_FORMAT`].
    pub format: u32,
    /// Name and version of the program.
    pub program: String,
    /// The table's ID.
    pub table: String,
    /// Title of the show.
    pub title: Option<String>,
    /// Title of the rig.
    pub rig: Option<String>,
    /// Spacing of set-points.
    pub tick_s: Precise,
    /// The whole table.
    pub run_s: Precise,
    /// End of the run-up, from which show time counts.
    pub show_start_s: Precise,
    /// Where the loop starts again; null with a run-down.
    pub loop_start_s: Option<Precise>,
    /// From phases to the wall.
    pub optics: OpticsScene,
    /// The motors' limits.
    pub rotors: Pair2<RotorScene>,
    /// Laws by number.
    pub laws: Vec<LawScene>,
    /// Cues in the order of play.
    pub cues: Vec<CueScene>,
    /// Legs in the order of play, without gaps.
    pub legs: Vec<LegScene>,
    /// Everything found, with times.
    pub findings: Vec<FindingScene>,
    /// Cues after the last one here, see [`MOST_LEGS`].
    pub left_out: usize,
}

/// One of each rotor.
#[derive(Debug, Serialize)]
pub struct Pair2<T> {
    /// Rotor a's.
    pub a: T,
    /// Rotor b's.
    pub b: T,
}

impl<T> From<Pair<T>> for Pair2<T> {
    fn from(pair: Pair<T>) -> Self {
        Self {
            a: pair.a,
            b: pair.b,
        }
    }
}

/// From phases to the wall.
#[derive(Debug, Serialize)]
pub struct OpticsScene {
    /// `circular` or `crossed`.
    pub projection: &'static str,
    /// How spots are computed, in words.
    pub model: &'static str,
    /// Whether lengths are metres; else the largest radius is 1.
    pub metres: bool,
    /// Largest distance of a spot from the middle.
    pub extent: Precise,
    /// First-order reaches.
    pub reach: Pair2<Precise>,
    /// The exact trace; null where the first-order sum is drawn.
    pub trace: Option<TraceScene>,
    /// Width of the spot on the wall.
    pub beam_width: Figure,
    /// Whether the rig tells it.
    pub beam_width_known: bool,
    /// Wavelength, if told.
    pub wavelength_nm: Option<Figure>,
    /// The light's colour on a screen, `#rrggbb`.
    pub colour: String,
}

/// All that the exact trace needs; vectors are [right, up, towards the audience].
#[derive(Debug, Serialize)]
pub struct TraceScene {
    /// Direction of the light before mirror a.
    pub incoming: [Precise; 3],
    /// From mirror a to mirror b.
    pub a_to_b: [Precise; 3],
    /// Second mirror to wall.
    pub throw: Precise,
    /// Each mirror.
    pub mirrors: Pair2<MirrorScene>,
}

/// A mirror: its normal is shaft·cos α + (across·cos 2πθ + up·sin 2πθ)·sin α, up = [0, 1, 0], with α = `tilt`; a swinging one
/// (crossed) is shaft·cos α + w·sin α, α = `tilt`·sin 2πθ, w = across for a and up for b.
#[derive(Debug, Serialize)]
pub struct MirrorScene {
    /// The untilted normal.
    pub shaft: [Precise; 3],
    /// The horizontal lean that throws the light right.
    pub across: [Precise; 3],
    /// Tilt or swing, in radians.
    pub tilt: Precise,
}

/// A motor and its limits, at the motor; null: no limit.
#[derive(Debug, Serialize)]
pub struct RotorScene {
    /// Motor turns for one counter-clockwise turn of the mirror, signed.
    pub motor_per_mirror: Precise,
    /// Largest speed.
    pub top_rpm: Figure,
    /// Below this it does not run evenly.
    pub stall_rpm: Figure,
    /// While the speed grows in size.
    pub acceleration_rpm_s: Figure,
    /// While it shrinks.
    pub deceleration_rpm_s: Figure,
    /// Change of acceleration.
    pub jerk_rpm_s2: Option<Figure>,
    /// `both`, `forward` or `backward`.
    pub turns: &'static str,
    /// Whether its start position is known.
    pub index: bool,
}

/// How a speed goes over.
#[derive(Debug, PartialEq, Serialize)]
#[serde(tag = "kind", rename_all = "lowercase")]
pub enum LawScene {
    /// Evenly spaced values.
    Sampled {
        /// s, first and last included.
        s: Vec<Precise>,
        /// ∫s.
        area: Vec<Precise>,
    },
    /// The closed form.
    Scurve {
        /// r.
        share: Precise,
    },
}

/// One cue as it is played.
#[derive(Debug, Serialize)]
pub struct CueScene {
    /// Its number in the order of play.
    pub cue: u32,
    /// Its label, if it has one.
    pub name: Option<String>,
    /// Its line in the show file, from 1.
    pub line: usize,
    /// The figure as written.
    pub figure: String,
    /// p and q.
    pub ratio: [i32; 2],
    /// |p − q|.
    pub lobes: u32,
    /// How often it repeats.
    pub repeat_hz: Figure,
    /// How it is come into: `5 s quintic, dark`.
    pub way: Option<String>,
    /// Start of its transition.
    pub start_s: Precise,
    /// Start of its hold.
    pub hold_start_s: Precise,
    /// End of its hold.
    pub end_s: Precise,
    /// Spin in degrees a second.
    pub spin_deg_s: Figure,
    /// Laser level, 0 to 1.
    pub beam: Figure,
}

/// One leg.
#[derive(Debug, Serialize)]
pub struct LegScene {
    /// `run-up`, `morph`, `hold`, `loop` or `run-down`.
    pub kind: &'static str,
    /// The number in the table's cue column.
    pub cue: u32,
    /// Start in seconds of table time.
    pub start_s: Precise,
    /// Length in seconds.
    pub length_s: Precise,
    /// Laser level, 0 to 1.
    pub beam: Figure,
    /// Mirror a.
    pub a: MoveScene,
    /// Mirror b.
    pub b: MoveScene,
}

/// One mirror in a leg, see the module.
#[derive(Debug, Serialize)]
pub struct MoveScene {
    /// Phase at the start, [0, 1).
    pub start: Precise,
    /// Speed at the start.
    pub from: Precise,
    /// Change of speed.
    #[serde(skip_serializing_if = "is_none")]
    pub change: Precise,
    /// The landing's correction.
    #[serde(skip_serializing_if = "is_none")]
    pub correction: Precise,
    /// Number of the law.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub law: Option<usize>,
}

fn is_none(value: &Precise) -> bool {
    value.0 == 0.0
}

/// One finding.
#[derive(Debug, Serialize)]
pub struct FindingScene {
    /// `area/what`.
    pub code: &'static str,
    /// `error`, `warning` or `note`.
    pub severity: &'static str,
    /// One sentence.
    pub message: String,
    /// The value that would pass.
    pub help: Option<String>,
    /// The file it stands in.
    pub file: String,
    /// Its line, from 1.
    pub line: usize,
    /// How often it was found.
    pub count: u64,
    /// Numbers of the legs (from 0) that it is about.
    pub legs: Vec<usize>,
}

impl Scene {
    /// The scene of a plan with its findings (ordered as they shall be listed).
    #[must_use]
    pub fn new(plan: &Plan, findings: &[Finding], sources: &Sources) -> Self {
        let (mut laws, mut read) = (Vec::new(), Laws::default());
        let shown = plan.legs.len().min(MOST_LEGS);
        let whole = shown == plan.legs.len();
        let legs = (0..shown)
            .filter_map(|index| leg(plan, index, &mut read, &mut laws))
            .collect();
        let seconds = |ticks: Ticks| Precise(ticks.time(plan.tick()).to_f64());
        let end = shown
            .checked_sub(1)
            .and_then(|last| plan.legs.get(last))
            .map_or(Ticks(0), |leg| Ticks(leg.start.0 + leg.ticks.0));
        let locator = Locator::new(sources);
        let cues = cues(plan, shown, &locator);
        Self {
            format: SCENE_FORMAT,
            program: program(),
            table: table_id(plan),
            title: plan.show.title.clone(),
            rig: plan.rig.title.clone(),
            tick_s: Precise(plan.tick().to_f64()),
            run_s: seconds(end),
            show_start_s: seconds(plan.show_start()),
            loop_start_s: plan.loop_start().filter(|_| whole).map(seconds),
            optics: optics(&Optics::of(&plan.rig)),
            rotors: Pair::each(|id| rotor(plan, id)).into(),
            laws,
            left_out: plan.show.order.len().saturating_sub(cues.len()),
            cues,
            legs,
            findings: findings
                .iter()
                .map(|finding| found(plan, finding, &locator))
                .collect(),
        }
    }

    /// The scene as one line of JSON.
    ///
    /// # Errors
    ///
    /// None that a scene can cause; a serializer's type says otherwise.
    pub fn json(&self) -> serde_json::Result<String> {
        serde_json::to_string(self)
    }
}

fn optics(optics: &Optics) -> OpticsScene {
    let beam = optics.beam();
    let reach = optics.reach();
    OpticsScene {
        projection: match optics.projection() {
            Projection::Circular => "circular",
            Projection::Crossed => "crossed",
        },
        model: optics.model().words(),
        metres: optics.in_metres(),
        extent: Precise(optics.extent()),
        reach: Pair2 {
            a: Precise(reach.a),
            b: Precise(reach.b),
        },
        trace: optics.trace().map(trace),
        beam_width: Figure(beam.width),
        beam_width_known: beam.known,
        wavelength_nm: beam.wavelength.map(Figure),
        colour: beam
            .wavelength
            .map_or(colour::UNKNOWN, colour::of_wavelength)
            .hex(),
    }
}

fn trace(trace: &Trace) -> TraceScene {
    let list = |v: Vec3| [v.x, v.y, v.z].map(Precise);
    let geometry = trace.geometry();
    let mirrors = Pair::each(|id| {
        let (shaft, across) = trace.mirror(id);
        MirrorScene {
            shaft: list(shaft),
            across: list(across),
            tilt: Precise(*geometry.angle.of(id)),
        }
    });
    TraceScene {
        incoming: list(trace.incoming()),
        a_to_b: list(trace.a_to_b()),
        throw: Precise(geometry.throw),
        mirrors: mirrors.into(),
    }
}

fn rotor(plan: &Plan, id: RotorId) -> RotorScene {
    let rotor = plan.rig.rotor(id);
    let rpm = |value: &Rational| Figure(to_f64(value) * 60.0);
    RotorScene {
        motor_per_mirror: Precise(to_f64(&rotor.motor_per_mirror())),
        top_rpm: rpm(rotor.top_speed.value.value()),
        stall_rpm: rpm(rotor.stall_speed.value.value()),
        acceleration_rpm_s: rpm(rotor.acceleration.value.value()),
        deceleration_rpm_s: rpm(rotor.deceleration.value.value()),
        jerk_rpm_s2: rotor.jerk.as_ref().map(|jerk| rpm(jerk.value.value())),
        turns: match rotor.turns.value {
            Turning::Both => "both",
            Turning::Forward => "forward",
            Turning::Backward => "backward",
        },
        index: rotor.index.is_some(),
    }
}

fn leg(plan: &Plan, index: usize, read: &mut Laws, laws: &mut Vec<LawScene>) -> Option<LegScene> {
    let leg = plan.legs.get(index)?;
    let path = LegPath::read(plan, index, read)?;
    let mut mirror = |rotor: &RotorPath| MoveScene {
        start: Precise(rotor.start),
        from: Precise(rotor.from),
        change: Precise(rotor.change),
        correction: Precise(rotor.correction),
        law: number_of(law(&rotor.law), laws),
    };
    Some(LegScene {
        kind: match leg.kind {
            LegKind::RunUp => "run-up",
            LegKind::Morph => "morph",
            LegKind::Hold => "hold",
            LegKind::LoopMorph => "loop",
            LegKind::RunDown => "run-down",
        },
        cue: leg.cue,
        start_s: Precise(path.start),
        length_s: Precise(path.length),
        beam: Figure(f64::from(leg.beam) / 255.0),
        a: mirror(&path.rotors.a),
        b: mirror(&path.rotors.b),
    })
}

fn law(path: &LawPath) -> Option<LawScene> {
    let list = |values: &[f64]| values.iter().copied().map(Precise).collect();
    match path {
        LawPath::Still => None,
        LawPath::Scurve(share) => Some(LawScene::Scurve {
            share: Precise(*share),
        }),
        LawPath::Sampled(samples) => Some(LawScene::Sampled {
            s: list(&samples.speed),
            area: list(&samples.area),
        }),
    }
}

/// The number of a law, which joins the list where it is new. A show has a handful of laws, but as many `scurve` shares as
/// legs: only the last few hundred are looked through.
fn number_of(law: Option<LawScene>, laws: &mut Vec<LawScene>) -> Option<usize> {
    let law = law?;
    let known = laws.iter().rev().take(300).position(|known| *known == law);
    if let Some(back) = known {
        return Some(laws.len() - 1 - back);
    }
    laws.push(law);
    Some(laws.len() - 1)
}

fn cues(plan: &Plan, shown: usize, locator: &Locator) -> Vec<CueScene> {
    let time = |ticks: Ticks| Precise(ticks.time(plan.tick()).to_f64());
    let mut before: Option<&Leg> = None;
    let mut cues = Vec::new();
    for leg in plan.legs.iter().take(shown) {
        if leg.kind != LegKind::Hold {
            before = Some(leg);
            continue;
        }
        let (Some(cue), Some(speeds)) = (plan.cue(leg), plan.speeds_of(leg)) else {
            continue;
        };
        let ratio = cue.figure.ratio;
        cues.push(CueScene {
            cue: leg.cue,
            name: cue.name.clone(),
            line: locator.start(cue.place).line,
            figure: cue.figure.written.clone(),
            ratio: [ratio.p(), ratio.q()],
            lobes: ratio.lobes(),
            repeat_hz: Figure(speeds.repeat.to_f64()),
            way: before.and_then(|way| transition_words(plan, way)),
            start_s: time(before.take().unwrap_or(leg).start),
            hold_start_s: time(leg.start),
            end_s: time(Ticks(leg.start.0 + leg.ticks.0)),
            spin_deg_s: Figure(cue.spin.to_f64() * 360.0),
            beam: Figure(to_f64(&cue.beam)),
        });
    }
    cues
}

fn found(plan: &Plan, finding: &Finding, locator: &Locator) -> FindingScene {
    FindingScene {
        code: finding.code.text(),
        severity: finding.severity.word(),
        message: finding.message.clone(),
        help: finding.help.clone(),
        file: locator.name(finding.place.file).to_owned(),
        line: locator.start(finding.place).line,
        count: finding.count,
        legs: legs_of(plan, finding)
            .into_iter()
            .filter(|leg| *leg < MOST_LEGS)
            .collect(),
    }
}
