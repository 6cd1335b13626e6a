//! The laws, each written once: rows, checks and tables all read these formulas.
//!
//! Every law here but the Bézier is symmetric, s(u) + s(1−u) = 1, so its first half says everything. A half is a list of
//! [`Stretch`]es, and on a stretch the law is a polynomial and at most one sine wave in w = u/scale:
//!
//! s(u) = scale·(P(w) + A·sin 2π(αw + β)), and S(u) = ∫₀ᵘ s = scale²·(Q(w) − A/(2πα)·cos 2π(αw + β)),
//!
//! with Q the integral of P, its constant fixed by continuity. Sources of the formulas: the usual displacement diagrams
//! of cam design (Rothbart, *Cam Design Handbook*, 2004; Norton, *Cam Design and Manufacturing Handbook*, 2009, from
//! memory), with exact coefficients instead of the printed decimals, which are off by up to 10⁻⁶.

use super::{LawKind, Shape};
use crate::exact::fixed::Unit;
use crate::exact::sine::{cosine, pi};
use crate::exact::{Rational, ratio, round_half_up, to_f64, whole};
use num_bigint::BigInt;
use num_traits::{One, Zero};
use std::borrow::Cow;
use std::sync::LazyLock;

/// c₀·w^power + c₁·w^(power+1) + …
#[derive(Clone, Debug)]
pub(super) struct Polynomial<T> {
    pub(super) power: u32,
    pub(super) coefficients: Vec<T>,
}

/// A·sin 2π(rate·w + offset) in s, and cosine·cos 2π(rate·w + offset) in S.
#[derive(Clone, Debug)]
pub(super) struct Wave<T> {
    pub(super) rate: T,
    pub(super) offset: T,
    pub(super) sine: T,
    pub(super) cosine: T,
}

/// A law on one stretch, in w.
#[derive(Clone, Debug)]
pub(super) struct Curve<T> {
    /// P, s without its wave.
    pub(super) speed: Polynomial<T>,
    /// Q, S without its wave.
    pub(super) gain: Polynomial<T>,
    pub(super) wave: Option<Wave<T>>,
}

/// A smooth part of the first half of a symmetric law.
#[derive(Clone, Debug)]
pub(super) struct Stretch {
    /// The u where it ends; the first starts at 0, the last ends at ½.
    pub(super) until: Rational,
    /// w = u/scale.
    pub(super) scale: Rational,
    /// The curve for rows.
    pub(super) fixed: Curve<Unit>,
    /// The same curve for checks.
    pub(super) float: Curve<f64>,
}

/// The first half of a symmetric law.
#[derive(Clone, Debug)]
pub(super) struct Half {
    pub(super) stretches: Vec<Stretch>,
    /// H = ∫₀^½ s: exact where it is rational, else within 2⁻¹⁶⁰.
    pub(super) gain: Rational,
}

/// A symmetric law before its skew, and where the skew puts its middle.
pub(super) struct Symmetric {
    pub(super) half: Cow<'static, Half>,
    pub(super) skew: Rational,
}

impl Symmetric {
    /// The symmetric law behind `shape`; `None` for a hold and a Bézier.
    pub(super) fn of(shape: &Shape) -> Option<Self> {
        match shape {
            Shape::Hold => None,
            Shape::Law(law) => Some(Self {
                half: Cow::Borrowed(first_half(&law.kind)?),
                skew: law.skew.clone(),
            }),
            Shape::Scurve(share) => Some(Self {
                half: Cow::Owned(scurve(share)),
                skew: ratio(1, 2),
            }),
        }
    }

    /// S(1) = 1 − λ − 4H(1 − 2λ), which is ½ for λ = ½.
    pub(super) fn gain(&self) -> Rational {
        let one = Rational::one();
        let lean = &one - &self.skew * whole(2);
        one - &self.skew - &self.half.gain * whole(4) * lean
    }
}

/// The first half of the law as written; `None` for the Bézier, which has no halves.
///
/// `scurve` as written knows no share yet; it counts as the one with the softest acceleration, share ½.
fn first_half(kind: &LawKind) -> Option<&'static Half> {
    macro_rules! law {
        ($build:expr) => {{
            static HALF: LazyLock<Half> = LazyLock::new(|| $build);
            Some(&*HALF)
        }};
    }
    match kind {
        LawKind::Linear => law!(single(1, vec![whole(1)], None)),
        LawKind::Cubic => law!(single(2, vec![whole(3), whole(-2)], None)),
        LawKind::Quintic => law!(single(3, vec![whole(10), whole(-15), whole(6)], None)),
        LawKind::Septic => law!(single(4, [35, -84, 70, -20].map(whole).to_vec(), None)),
        // ½ − ½·cos πu, the cosine as a sine a quarter turn ahead.
        LawKind::Harmonic => law!(single(
            0,
            vec![ratio(1, 2)],
            Some((ratio(-1, 2), ratio(1, 2), ratio(1, 4)))
        )),
        LawKind::Cycloidal => law!(single(
            1,
            vec![whole(1)],
            Some((-(pi() * whole(2)).recip(), whole(1), whole(0)))
        )),
        LawKind::ModifiedSine => law!(modified_sine()),
        LawKind::ModifiedTrapezoid => law!(modified_trapezoid()),
        LawKind::Scurve => law!(scurve(&ratio(1, 2))),
        LawKind::Bezier { .. } => None,
    }
}

/// A sine wave as (amplitude, rate, offset).
type Sine = (Rational, Rational, Rational);

fn single(power: u32, coefficients: Vec<Rational>, sine: Option<Sine>) -> Half {
    Builder::new()
        .stretch(ratio(1, 2), whole(1), (power, coefficients), sine)
        .half()
}

/// With D = 4(4+π): (4πu − sin 4πu)/D to ⅛, then (8 + 4πu − 9 sin((4πu+π)/3))/D.
fn modified_sine() -> Half {
    let over = (whole(16) + pi() * whole(4)).recip();
    let slope = pi() * whole(4) * &over;
    let rise = Some((-&over, whole(2), whole(0)));
    let middle = Some((&over * whole(-9), ratio(2, 3), ratio(1, 6)));
    Builder::new()
        .stretch(ratio(1, 8), whole(1), (1, vec![slope.clone()]), rise)
        .stretch(
            ratio(1, 2),
            whole(1),
            (0, vec![over * whole(8), slope]),
            middle,
        )
        .half()
}

/// With D = 2π(2+π): (4πu − sin 4πu)/D to ⅛, (64π²u² − 16π(π−2)u + π² − 8)/8D to ⅜, then (4π(1+π)u + sin 4πu − π²)/D.
fn modified_trapezoid() -> Half {
    let (pi, square) = (pi(), pi() * pi());
    let over = (&pi * whole(4) + &square * whole(2)).recip();
    let constant = |value: Rational| value * &over;
    let rise = vec![constant(&pi * whole(4))];
    let steep = vec![
        constant(&square / whole(8) - whole(1)),
        constant((&pi * whole(2) - &square) * whole(2)),
        constant(&square * whole(8)),
    ];
    let middle = vec![constant(-&square), constant((&pi + &square) * whole(4))];
    let wave = |sign| Some((&over * whole(sign), whole(2), whole(0)));
    Builder::new()
        .stretch(ratio(1, 8), whole(1), (1, rise), wave(-1))
        .stretch(ratio(3, 8), whole(1), (0, steep), None)
        .stretch(ratio(1, 2), whole(1), (0, middle), wave(1))
        .half()
}

/// u²/(2r(1−r)) to r, then (u − r/2)/(1−r): acceleration rises over the share r, stays, and falls over r.
///
/// The rise is written in w = u/r, so that no coefficient grows where r is small; r = 0 has no rise, r = ½ nothing else.
fn scurve(share: &Rational) -> Half {
    let half = ratio(1, 2);
    let share = share.clamp(&Rational::zero(), &half).clone();
    let steep = (whole(1) - &share).recip();
    let mut builder = Builder::new();
    if !share.is_zero() {
        let rise = vec![&steep / whole(2)];
        builder = builder.stretch(share.clone(), share.clone(), (2, rise), None);
    }
    if share.is_zero() {
        builder = builder.stretch(half, whole(1), (1, vec![steep]), None);
    } else if share < half {
        let line = vec![-(&share * &steep) / whole(2), steep];
        builder = builder.stretch(half, whole(1), (0, line), None);
    }
    builder.half()
}

/// Stretches joined one by one, each S starting where the last one ended.
struct Builder {
    stretches: Vec<Stretch>,
    from: Rational,
    gain: Rational,
    rounded: bool,
}

impl Builder {
    fn new() -> Self {
        Self {
            stretches: Vec::new(),
            from: Rational::zero(),
            gain: Rational::zero(),
            rounded: false,
        }
    }

    fn stretch(
        mut self,
        until: Rational,
        scale: Rational,
        (power, coefficients): (u32, Vec<Rational>),
        sine: Option<Sine>,
    ) -> Self {
        self.rounded |= sine.is_some();
        let wave = sine.map(|(sine, rate, offset)| Wave {
            cosine: -&sine / (pi() * whole(2) * &rate),
            rate,
            offset,
            sine,
        });
        let speed = Polynomial {
            power,
            coefficients,
        };
        let area = &scale * &scale;
        let mut curve = Curve {
            gain: speed.integral(),
            speed,
            wave,
        };
        let constant = &self.gain / &area - curve.gain_at(&(&self.from / &scale));
        curve.gain = curve.gain.lifted(constant);
        self.gain = curve.gain_at(&(&until / &scale)) * area;
        self.from = until.clone();
        self.stretches.push(Stretch {
            until,
            scale,
            fixed: curve.map(Unit::nearest),
            float: curve.map(to_f64),
        });
        self
    }

    fn half(self) -> Half {
        let gain = if self.rounded {
            let scale = Rational::from_integer(BigInt::one() << 160_u32);
            Rational::from_integer(round_half_up(&(self.gain * &scale))) / scale
        } else {
            self.gain
        };
        Half {
            stretches: self.stretches,
            gain,
        }
    }
}

impl Polynomial<Rational> {
    /// ∫ from 0.
    fn integral(&self) -> Self {
        let power = self.power + 1;
        let coefficients = (i128::from(power)..)
            .zip(&self.coefficients)
            .map(|(degree, coefficient)| coefficient / whole(degree))
            .collect();
        Self {
            power,
            coefficients,
        }
    }

    /// The polynomial plus a constant, for one without a constant of its own.
    fn lifted(self, constant: Rational) -> Self {
        if constant.is_zero() {
            return self;
        }
        let gap = (1..self.power).map(|_| Rational::zero());
        Self {
            power: 0,
            coefficients: std::iter::once(constant)
                .chain(gap)
                .chain(self.coefficients)
                .collect(),
        }
    }

    fn at(&self, w: &Rational) -> Rational {
        let sum = self
            .coefficients
            .iter()
            .rev()
            .fold(Rational::zero(), |sum, coefficient| sum * w + coefficient);
        (0..self.power).fold(sum, |sum, _| sum * w)
    }
}

impl Curve<Rational> {
    /// S/scale². Stretches meet where the wave's angle is a whole number of quarter turns, so its cosine is exact.
    fn gain_at(&self, w: &Rational) -> Rational {
        let wave = self.wave.as_ref().map_or_else(Rational::zero, |wave| {
            let angle = &wave.rate * w + &wave.offset;
            cosine(Unit::nearest(&angle)).to_rational() * &wave.cosine
        });
        self.gain.at(w) + wave
    }

    fn map<T>(&self, change: impl Fn(&Rational) -> T) -> Curve<T> {
        let polynomial = |from: &Polynomial<Rational>| Polynomial {
            power: from.power,
            coefficients: from.coefficients.iter().map(&change).collect(),
        };
        Curve {
            speed: polynomial(&self.speed),
            gain: polynomial(&self.gain),
            wave: self.wave.as_ref().map(|wave| Wave {
                rate: change(&wave.rate),
                offset: change(&wave.offset),
                sine: change(&wave.sine),
                cosine: change(&wave.cosine),
            }),
        }
    }
}
