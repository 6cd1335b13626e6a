//! Mirror phases over a leg, in `f64`, for checks and pictures.
//!
//! Laws are read once from the exact evaluator ([`Inside`]) at [`NODES`] + 1 evenly spaced places and joined by cubic
//! Hermite pieces: the phase by its values and the speeds there, the speed by its values and finite slopes. With 256 pieces
//! the phase is off by at most 1/384·256⁻⁴·|s‴| ≈ 5·10⁻¹¹ of Δv·T for the smooth laws, about 10⁻⁷ where the curvature
//! steps: below a thousandth of a degree for any morph that a show has. `scurve` has its closed form.
//!
//! Before its start and after its end a leg goes on with the speeds it has there, as the holds beside it do.

use crate::exact::{Seconds, Speed};
use crate::exact::{Ticks, Turns, ratio, to_f64, whole, wrap_unit};
use crate::motion::inside::Inside;
use crate::motion::{Move, Shape};
use crate::plan::{LegKind, Plan};
use crate::rig::{Pair, RotorId};

/// Pieces of a sampled law.
pub const NODES: u64 = 256;

/// How a speed goes over from 0 to 1.
#[derive(Clone, Debug, PartialEq)]
pub enum LawPath {
    /// It does not change.
    Still,
    /// Acceleration rises linearly over this share of the time, stays, falls over it.
    Scurve(f64),
    /// Values at evenly spaced u, first and last included.
    Sampled(Samples),
}

/// A law sampled.
#[derive(Clone, Debug, PartialEq)]
pub struct Samples {
    /// s(u).
    pub speed: Vec<f64>,
    /// S(u) = ∫s.
    pub area: Vec<f64>,
}

/// Laws read so far: a show of a thousand legs has a handful.
#[derive(Clone, Debug, Default)]
pub struct Laws(Vec<(Shape, LawPath)>);

impl Laws {
    /// A law, read if it is none of the last hundred.
    fn of(&mut self, shape: &Shape) -> LawPath {
        if !matches!(shape, Shape::Law(_)) {
            return LawPath::of(shape);
        }
        let last = self.0.iter().rev().take(100);
        if let Some((_, law)) = last.into_iter().find(|(known, _)| known == shape) {
            return law.clone();
        }
        let law = LawPath::of(shape);
        self.0.push((shape.clone(), law.clone()));
        law
    }
}

impl LawPath {
    /// The law of a move.
    #[must_use]
    pub fn of(shape: &Shape) -> Self {
        match shape {
            Shape::Hold => LawPath::Still,
            Shape::Scurve(share) => LawPath::Scurve(to_f64(share)),
            Shape::Law(_) => LawPath::Sampled(Samples::of(shape)),
        }
    }

    /// s, S and s′ at u in [0, 1].
    #[must_use]
    pub fn at(&self, u: f64) -> (f64, f64, f64) {
        match self {
            LawPath::Still => (0.0, 0.0, 0.0),
            LawPath::Scurve(share) => scurve(*share, u),
            LawPath::Sampled(samples) => samples.at(u),
        }
    }
}

/// The closed form: acceleration peaks at 1/(1−r) between u = r and 1 − r.
fn scurve(share: f64, u: f64) -> (f64, f64, f64) {
    let r = share.max(1e-12);
    let top = 1.0 / (1.0 - r);
    if u > 0.5 {
        // s(u) = 1 − s(1−u), so S(u) = u − ½ + S(1−u).
        let (s, area, slope) = scurve(share, 1.0 - u);
        return (1.0 - s, u - 0.5 + area, slope);
    }
    if u < r {
        let s = top * u * u / (2.0 * r);
        return (s, s * u / 3.0, top * u / r);
    }
    let past = u - r;
    let s = top * (r / 2.0 + past);
    (
        s,
        top * (r * r / 6.0 + r * past / 2.0 + past * past / 2.0),
        top,
    )
}

impl Samples {
    fn of(shape: &Shape) -> Self {
        // One turn a second gained in one second: speed and phase are s and S themselves.
        let tick = Seconds::new(ratio(1, i128::from(NODES)));
        let unit = Move {
            shape: shape.clone(),
            start: Turns::zero(),
            end: Turns::new(shape.integral()),
            from: Speed::zero(),
            to: Speed::new(whole(1)),
            correction: Turns::zero(),
            ticks: Ticks(NODES),
        };
        let inside = Inside::new(&unit, &tick);
        let (area, speed) = (0..=NODES)
            .map(|node| inside.at(node))
            .map(|(area, speed)| (steps_to_f64(area), steps_to_f64(speed)))
            .unzip();
        Self { speed, area }
    }

    fn at(&self, u: f64) -> (f64, f64, f64) {
        let pieces = self.speed.len().saturating_sub(1).max(1);
        #[expect(
            clippy::cast_precision_loss,
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "a few hundred pieces; u is cut to [0, 1]"
        )]
        let (scaled, index) = {
            let scaled = u.clamp(0.0, 1.0) * pieces as f64;
            (scaled, (scaled as usize).min(pieces - 1))
        };
        #[expect(clippy::cast_precision_loss, reason = "a few hundred pieces")]
        let (w, width) = (scaled - index as f64, 1.0 / pieces as f64);
        let value = |list: &[f64], at: usize| list.get(at).copied().unwrap_or(0.0);
        let (s0, s1) = (value(&self.speed, index), value(&self.speed, index + 1));
        let (a0, a1) = (value(&self.area, index), value(&self.area, index + 1));
        // Hermite for S from S and s; its derivative is s, its second derivative s′.
        let gain = a1 - a0;
        let c2 = 3.0 * gain - width * (2.0 * s0 + s1);
        let c3 = width * (s0 + s1) - 2.0 * gain;
        let area = a0 + w * (width * s0 + w * (c2 + w * c3));
        let s = s0 + w * (2.0 * c2 + 3.0 * w * c3) / width;
        let slope = (2.0 * c2 + 6.0 * w * c3) / (width * width);
        (s, area, slope)
    }
}

#[expect(clippy::cast_precision_loss, reason = "pictures need no more")]
fn steps_to_f64(steps: i128) -> f64 {
    // 2⁻⁷²
    steps as f64 / 4_722_366_482_869_645_213_696.0
}

/// One mirror over a leg, in turns of the mirror, counter-clockwise positive.
#[derive(Clone, Debug)]
pub struct RotorPath {
    /// Phase at the start, in [0, 1).
    pub start: f64,
    /// Speed at the start in turns/s.
    pub from: f64,
    /// Change of speed over the leg in turns/s.
    pub change: f64,
    /// The landing's correction in turns.
    pub correction: f64,
    /// How the speed goes over.
    pub law: LawPath,
}

/// Both mirrors over a leg.
#[derive(Clone, Debug)]
pub struct LegPath {
    /// Each mirror.
    pub rotors: Pair<RotorPath>,
    /// Length of the leg in seconds.
    pub length: f64,
    /// Start of the leg in seconds of table time.
    pub start: f64,
}

/// What a rotor does at one moment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    /// Phase in turns, unwrapped from the leg's start.
    pub phase: f64,
    /// Turns/s.
    pub speed: f64,
    /// Turns/s².
    pub acceleration: f64,
}

impl RotorPath {
    fn of(plan: &Plan, index: usize, id: RotorId, laws: &mut Laws) -> Option<Self> {
        let leg = plan.legs.get(index)?;
        let one = plan.move_of(index, id)?;
        let rotor = plan.rig.rotor(id);
        let mirror = |motor: f64| motor / to_f64(&rotor.motor_per_mirror());
        let start = rotor.mirror_phase(&one.start);
        let held = leg.kind == LegKind::Hold;
        Some(Self {
            start: to_f64(&wrap_unit(start.value())),
            from: mirror(one.from.to_f64()),
            change: mirror((&one.to - &one.from).to_f64()),
            correction: if held {
                0.0
            } else {
                mirror(one.correction.to_f64())
            },
            law: laws.of(&one.shape),
        })
    }

    /// Phase, speed and acceleration `t` seconds after the start of a leg of this length.
    #[must_use]
    pub fn at(&self, t: f64, length: f64) -> State {
        let u = t / length;
        if u < 0.0 {
            return State {
                phase: self.start + self.from * t,
                speed: self.from,
                acceleration: 0.0,
            };
        }
        if u > 1.0 {
            let (_, area, _) = self.law.at(1.0);
            let over = t - length;
            let end = self.start + (self.from + self.change * area) * length + self.correction;
            return State {
                phase: end + (self.from + self.change) * over,
                speed: self.from + self.change,
                acceleration: 0.0,
            };
        }
        let (s, area, slope) = self.law.at(u);
        // The landing's bump of speed, 140u³(1−u)³, its integral and its slope.
        let (v, uu) = (1.0 - u, u * u);
        let bump = 140.0 * uu * u * v * v * v;
        let bump_area = uu * uu * (35.0 + u * (-84.0 + u * (70.0 - 20.0 * u)));
        let bump_slope = 420.0 * uu * v * v * (1.0 - 2.0 * u);
        let c = self.correction;
        State {
            phase: self.start + self.from * t + self.change * length * area + c * bump_area,
            speed: self.from + self.change * s + c / length * bump,
            acceleration: self.change / length * slope + c / (length * length) * bump_slope,
        }
    }
}

impl LegPath {
    /// Both mirrors over leg number `index` of a plan; `None` past the last leg.
    #[must_use]
    pub fn of(plan: &Plan, index: usize) -> Option<Self> {
        Self::read(plan, index, &mut Laws::default())
    }
    /// The same, with the laws that other legs have used.
    #[must_use]
    pub fn read(plan: &Plan, index: usize, laws: &mut Laws) -> Option<Self> {
        let leg = plan.legs.get(index)?;
        Some(Self {
            rotors: Pair {
                a: RotorPath::of(plan, index, RotorId::A, laws)?,
                b: RotorPath::of(plan, index, RotorId::B, laws)?,
            },
            length: leg.ticks.time(plan.tick()).to_f64(),
            start: leg.start.time(plan.tick()).to_f64(),
        })
    }
    /// What both mirrors do `t` seconds after the leg's start.
    #[must_use]
    pub fn at(&self, t: f64) -> Pair<State> {
        Pair {
            a: self.rotors.a.at(t, self.length),
            b: self.rotors.b.at(t, self.length),
        }
    }
    /// Both mirrors' phases `t` seconds after the leg's start.
    #[must_use]
    pub fn phases(&self, t: f64) -> Pair<f64> {
        let Pair { a, b } = self.at(t);
        Pair {
            a: a.phase,
            b: b.phase,
        }
    }
}
