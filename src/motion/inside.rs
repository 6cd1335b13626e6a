//! A move evaluated at every tick, in integer fixed point.
//!
//! # Error
//!
//! In steps of ε = 2⁻¹²⁰, for the symmetric laws: u carries ½ε; w = u/scale at most 8ε for scales down to 1/10 (`scurve`
//! with a small share: at most 2ε/scale, which scale·s′ ≤ 2 brings down again); a polynomial of at most four
//! coefficients below 84, on w ≤ ½, adds at most 8ε and a wave at most 16ε of amplitude ½. Slopes are at most 2.2. So s
//! and S are within 64ε = 2⁻¹¹⁴ (the tests see up to 2⁻¹¹⁷), and a phase of |to − from|·T ≤ 2⁴⁰ turns is within
//! 2⁻⁷⁴ of that, plus half a step of 2⁻⁷² for each of the two products and of the two factors: below 2⁻⁷⁰ turn. For the
//! Bézier see its own module.
//!
//! # Range
//!
//! A show lasts at most 30 days and speeds that can be written are at most 10⁹ turns/s, so |to − from|·T < 2⁵³ turns in a
//! range of 2⁵⁵. Numbers past the range, which no show reaches, give a wrong phase, but no panic.

use super::bezier::{Bezier, BezierRows};
use super::laws::{Curve, Polynomial, Stretch, Symmetric};
use super::{Move, Shape};
use crate::exact::fixed::{PHASE_BITS, Unit, phase_steps};
use crate::exact::root::{ROOT_BITS, root_product, root_steps};
use crate::exact::sine::sine_and_cosine;
use crate::exact::{Rational, Seconds, to_f64, whole};
use num_bigint::BigInt;
use num_traits::{One, Signed, ToPrimitive};

/// What a move adds to the straight line start + from·t, ready to be read at any tick.
#[derive(Clone, Debug)]
pub struct Inside {
    ticks: u64,
    change: Change,
    bump: Option<Bump>,
}

/// The law's part.
#[derive(Clone, Debug)]
enum Change {
    None,
    Symmetric(Box<Skewed>),
    Bezier(Box<Curved>),
}

#[derive(Clone, Debug)]
struct Skewed {
    /// to − from, in 2⁻⁷² turns/s.
    speed: i128,
    /// (to − from)·T, in 2⁻⁷² turns.
    turns: i128,
    /// Where the middle lies.
    skew: Unit,
    /// S(1).
    gain: Unit,
    /// The part before the middle.
    rise: Vec<Piece>,
    /// The part after it, as seen from the end.
    fall: Vec<Piece>,
}

#[derive(Clone, Debug)]
struct Piece {
    until: Unit,
    zoom: Option<Zoom>,
    curve: Curve<Unit>,
}

/// w = u/scale without losing bits where the scale is small: u is doubled first, as often as it stays below 2.
#[derive(Clone, Debug)]
struct Zoom {
    doublings: u32,
    inverse: Unit,
    scale: Unit,
    area: Unit,
}

#[derive(Clone, Debug)]
struct Curved {
    rows: BezierRows,
    /// to − from and (to − from)·T, in 2⁻²⁵⁶.
    speed: BigInt,
    turns: BigInt,
}

/// The landing's correction c.
#[derive(Clone, Debug)]
struct Bump {
    /// c in 2⁻⁷² turns.
    turns: i128,
    /// c/T in 2⁻⁷² turns/s.
    speed: i128,
}

impl Inside {
    /// The move made ready, with ticks of length `tick`.
    #[must_use]
    pub fn new(motion: &Move, tick: &Seconds) -> Self {
        let time = motion.ticks.time(tick);
        let speed = &motion.to - &motion.from;
        let turns = speed.over(&time);
        let curve = match &motion.shape {
            Shape::Law(law) => Bezier::of(&law.kind),
            Shape::Hold | Shape::Scurve(_) => None,
        };
        let change = match (curve, Symmetric::of(&motion.shape)) {
            _ if speed.is_zero() => Change::None,
            (Some(curve), _) => Change::Bezier(Box::new(Curved {
                rows: BezierRows::new(&curve),
                speed: root_steps(speed.value()),
                turns: root_steps(turns.value()),
            })),
            (None, Some(law)) => {
                Change::Symmetric(Box::new(Skewed::new(&law, speed.value(), turns.value())))
            }
            (None, None) => Change::None,
        };
        let correction = motion.correction.value();
        let bumped =
            !(motion.correction.is_zero() || motion.shape == Shape::Hold || time.is_zero());
        Self {
            ticks: motion.ticks.0,
            change,
            bump: bumped.then(|| Bump {
                turns: phase_steps(correction),
                speed: phase_steps(&(correction / time.value())),
            }),
        }
    }

    /// (to − from)·T·S(u) + c·B(u) at u = n/ticks with B = 35u⁴ − 84u⁵ + 70u⁶ − 20u⁷, in 2⁻⁷² turns of the motor; error
    /// below 2⁻⁶⁴ turn for |to − from|·T up to 2⁴⁰ turns. The end's value for n past the end.
    #[must_use]
    pub fn phase(&self, n: u64) -> i128 {
        self.at(n).0
    }

    /// (to − from)·s(u) + (c/T)·140u³(1−u)³ at u = n/ticks, in 2⁻⁷² turns/s of the motor. The end's value for n past the
    /// end.
    #[must_use]
    pub fn speed(&self, n: u64) -> i128 {
        self.at(n).1
    }

    /// Phase and speed in one go, see [`Inside::phase`] and [`Inside::speed`].
    #[must_use]
    pub fn at(&self, n: u64) -> (i128, i128) {
        let u = Unit::share(n, self.ticks);
        let (turns, speed) = match &self.change {
            Change::None => (0, 0),
            Change::Symmetric(law) => law.at(u),
            Change::Bezier(law) => law.at(n, self.ticks),
        };
        let Some(bump) = &self.bump else {
            return (turns, speed);
        };
        let (turned, rate) = bump.at(u);
        (turns.wrapping_add(turned), speed.wrapping_add(rate))
    }
}

impl Skewed {
    fn new(law: &Symmetric, speed: &Rational, turns: &Rational) -> Self {
        let side = |length: &Rational| -> Vec<Piece> {
            let stretched = length * whole(2);
            // A skew that leaves nothing of a side cannot be written; such a side says nothing.
            let pieces = law.half.stretches.iter();
            pieces
                .filter(|_| stretched.is_positive())
                .map(|part| Piece::new(part, &stretched))
                .collect()
        };
        Self {
            speed: phase_steps(speed),
            turns: phase_steps(turns),
            skew: Unit::nearest(&law.skew),
            gain: Unit::nearest(&law.gain()),
            rise: side(&law.skew),
            fall: side(&(Rational::one() - &law.skew)),
        }
    }

    #[inline]
    fn at(&self, u: Unit) -> (i128, i128) {
        let (gain, speed) = if u <= self.skew {
            half(&self.rise, u)
        } else {
            // From the end: s = 1 − s₀, and S(1) − S = ∫ from u to 1 of s = (1−u) − S₀.
            let rest = Unit::ONE - u;
            let (gain, speed) = half(&self.fall, rest);
            (self.gain - rest + gain, Unit::ONE - speed)
        };
        (gain.of(self.turns), speed.of(self.speed))
    }
}

/// (S, s) of the piece that holds u; the last one where rounding put u past its end.
#[inline]
fn half(pieces: &[Piece], u: Unit) -> (Unit, Unit) {
    let piece = pieces
        .iter()
        .find(|piece| u < piece.until)
        .or_else(|| pieces.last());
    piece.map_or((Unit::ZERO, Unit::ZERO), |piece| piece.at(u))
}

impl Piece {
    fn new(part: &Stretch, stretched: &Rational) -> Self {
        let scale = &part.scale * stretched;
        Self {
            until: Unit::nearest(&(&part.until * stretched)),
            zoom: (!scale.is_one()).then(|| Zoom::new(&scale)),
            curve: part.fixed.clone(),
        }
    }

    #[inline]
    fn at(&self, u: Unit) -> (Unit, Unit) {
        let Some(zoom) = &self.zoom else {
            return self.curve.at(u);
        };
        let (gain, speed) = self.curve.at(u.doubled(zoom.doublings).times(zoom.inverse));
        (gain.times(zoom.area), speed.times(zoom.scale))
    }
}

impl Zoom {
    /// Below a scale of 2⁻⁶⁴ no tick but the first falls into the stretch, and 0 needs no zoom.
    fn new(scale: &Rational) -> Self {
        let doublings = (0..64)
            .find(|doublings| to_f64(scale) * to_f64(&whole(1 << doublings)) >= 0.5)
            .unwrap_or(64);
        Self {
            doublings,
            inverse: Unit::nearest(&(scale * whole(1 << doublings)).recip()),
            scale: Unit::nearest(scale),
            area: Unit::nearest(&(scale * scale)),
        }
    }
}

impl Curve<Unit> {
    /// (Q, P), each with its wave.
    #[inline]
    fn at(&self, w: Unit) -> (Unit, Unit) {
        let (gain, speed) = (self.gain.at(w), self.speed.at(w));
        let Some(wave) = &self.wave else {
            return (gain, speed);
        };
        let (sine, cosine) = sine_and_cosine(wave.rate.times(w) + wave.offset);
        (
            gain + wave.cosine.times(cosine),
            speed + wave.sine.times(sine),
        )
    }
}

impl Polynomial<Unit> {
    #[inline]
    fn at(&self, w: Unit) -> Unit {
        let Some((last, rest)) = self.coefficients.split_last() else {
            return Unit::ZERO;
        };
        let sum = rest
            .iter()
            .rev()
            .fold(*last, |sum, coefficient| sum.times(w) + *coefficient);
        (0..self.power).fold(sum, |sum, _| sum.times(w))
    }
}

impl Curved {
    fn at(&self, n: u64, ticks: u64) -> (i128, i128) {
        let ticks = ticks.max(1);
        let u = (BigInt::from(n.min(ticks)) << ROOT_BITS) / ticks;
        let (gain, speed) = self.rows.at(&u);
        (
            to_phase(&root_product(&gain, &self.turns)),
            to_phase(&root_product(&speed, &self.speed)),
        )
    }
}

/// From counts of 2⁻²⁵⁶ to the nearest count of 2⁻⁷².
fn to_phase(value: &BigInt) -> i128 {
    const SPARE: u32 = ROOT_BITS - PHASE_BITS;
    let half = BigInt::one() << (SPARE - 1);
    ((value + half) >> SPARE).to_i128().unwrap_or(0)
}

impl Bump {
    /// c·(35u⁴ − 84u⁵ + 70u⁶ − 20u⁷) and (c/T)·140u³(1−u)³.
    #[inline]
    fn at(&self, u: Unit) -> (i128, i128) {
        let square = u.times(u);
        let inner = small(35) - u.times(small(84) - u.times(small(70) - u.multiple(20)));
        let hump = u.times(Unit::ONE - u);
        (
            square.times(square).times(inner).of(self.turns),
            hump.times(hump).times(hump).multiple(140).of(self.speed),
        )
    }
}

const fn small(value: i128) -> Unit {
    Unit::ONE.multiple(value)
}
