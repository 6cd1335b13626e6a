//! The laws once more, for the auditor: other algebraic forms than those that rows are made from.
//!
//! * polynomial laws in Bernstein form: s is a sum of the upper Bernstein polynomials, its integral too;
//! * all others by their curvature s″ (in the cam handbooks the acceleration), in stretches, integrated three times in
//!   closed form and scaled so that s(½) = ½: harmonic, cycloidal, modified sine and modified trapezoid are one family (a
//!   quarter sine over b/2, a constant over c/2, a quarter cosine over d/2, b + c + d = 1: Norton, *Cam Design and
//!   Manufacturing Handbook*, ch. 3, from memory); `scurve` is a constant and then nothing.
//!
//! Only the first half is written down: s(1 − u) = 1 − s(u) gives the second, and a skew stretches the two.

use super::bezier::Bezier;
use super::double::Double;
use super::sine::sine_cosine;
use crate::exact::{Rational, ratio};
use crate::motion::{Law, LawKind, Shape};

/// s and S = ∫s at one place.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Value {
    pub(super) speed: Double,
    pub(super) gain: Double,
}

/// A law ready to be evaluated.
#[derive(Clone, Debug)]
pub(super) enum Curve {
    Halves(Halves),
    Bezier(Bezier),
}

/// A law whose second half mirrors the first, each stretched to its share of the time.
#[derive(Clone, Debug)]
pub(super) struct Halves {
    half: Half,
    /// Twice the share of the first half, and of the second: 1 and 1 without a skew.
    rise: Double,
    fall: Double,
    /// S(1).
    whole: Double,
}

#[derive(Clone, Debug)]
enum Half {
    Linear,
    Cubic,
    Quintic,
    Septic,
    Stretches(Vec<Stretch>),
}

/// A stretch of one kind of curvature s″, and the state it starts from.
#[derive(Clone, Copy, Debug)]
struct Stretch {
    from: Double,
    length: Double,
    kind: Kind,
    state: State,
    /// What everything is multiplied by so that s(½) = ½.
    factor: Double,
}

#[derive(Clone, Copy, Debug)]
enum Kind {
    /// 1 throughout.
    Constant,
    /// 0 throughout.
    Nothing,
    /// A quarter of a sine wave, from 0 to 1.
    SineRise,
    /// A quarter of a cosine wave, from 1 to 0.
    CosineFall,
}

/// Slope, s and S.
#[derive(Clone, Copy, Debug, Default)]
struct State {
    slope: Double,
    speed: Double,
    gain: Double,
}

impl Curve {
    /// The curve of a shape; `None` for a hold.
    pub(super) fn new(shape: &Shape) -> Option<Self> {
        match shape {
            Shape::Hold => None,
            Shape::Scurve(share) => Some(Self::halves(scurve(share), &ratio(1, 2))),
            Shape::Law(law) => Some(Self::of_law(law)),
        }
    }

    fn of_law(law: &Law) -> Self {
        let family = |b, c, d| {
            Half::Stretches(stretches(&[
                (Kind::SineRise, ratio(b, 8)),
                (Kind::Constant, ratio(c, 8)),
                (Kind::CosineFall, ratio(d, 8)),
            ]))
        };
        let half = match &law.kind {
            LawKind::Linear => Half::Linear,
            LawKind::Cubic => Half::Cubic,
            LawKind::Quintic => Half::Quintic,
            LawKind::Septic => Half::Septic,
            LawKind::Harmonic => family(0, 0, 4),
            LawKind::Cycloidal => family(2, 0, 2),
            LawKind::ModifiedSine => family(1, 0, 3),
            LawKind::ModifiedTrapezoid => family(1, 2, 1),
            // A plan gives `scurve` its share; without one it is the smoothest.
            LawKind::Scurve => scurve(&ratio(1, 2)),
            LawKind::Bezier { x1, y1, x2, y2 } => {
                return Curve::Bezier(Bezier::new(x1, y1, x2, y2));
            }
        };
        Self::halves(half, &law.skew)
    }

    fn halves(half: Half, skew: &Rational) -> Self {
        let rise = Double::from_rational(&(skew * ratio(2, 1)));
        let fall = Double::from_rational(&(ratio(2, 1) - skew * ratio(2, 1)));
        let middle = half.at(Double::new(0.5)).gain;
        let whole = rise.squared() * middle + fall.scaled(0.5) - fall.squared() * middle;
        Curve::Halves(Halves {
            half,
            rise,
            fall,
            whole,
        })
    }

    /// The law `n` of `ticks` ticks into its time.
    pub(super) fn at(&self, n: u64, ticks: u64) -> Value {
        let all = Double::from_whole(ticks);
        let u = Double::from_whole(n) / all;
        let rest = Double::from_whole(ticks.saturating_sub(n)) / all;
        match self {
            Curve::Halves(law) => law.at(u, rest),
            Curve::Bezier(law) => law.at(u, rest),
        }
    }
}

impl Halves {
    fn at(&self, u: Double, rest: Double) -> Value {
        if u.leading() <= 0.5 * self.rise.leading() {
            let value = self.half.at(u / self.rise);
            return Value {
                speed: self.rise * value.speed,
                gain: self.rise.squared() * value.gain,
            };
        }
        let value = self.half.at(rest / self.fall);
        Value {
            speed: Double::ONE - self.fall * value.speed,
            gain: self.whole - rest + self.fall.squared() * value.gain,
        }
    }
}

impl Half {
    /// s and S at w in [0, ½].
    fn at(&self, w: Double) -> Value {
        let v = Double::ONE - w;
        let square = w.squared();
        match self {
            Half::Linear => Value {
                speed: w,
                gain: square.scaled(0.5),
            },
            // B₂,₃ + B₃,₃ and its integral (B₃,₄ + 2B₄,₄)/4.
            Half::Cubic => Value {
                speed: square * (v * 3.0 + w),
                gain: square * w * (v.scaled(2.0) + w).scaled(0.5),
            },
            // B₃,₅ + B₄,₅ + B₅,₅ and (B₄,₆ + 2B₅,₆ + 3B₆,₆)/6.
            Half::Quintic => Value {
                speed: square * w * (v * (v * 10.0 + w * 5.0) + square),
                gain: square.squared() * (v * (v * 5.0 + w.scaled(4.0)) + square).scaled(0.5),
            },
            Half::Septic => septic(w, v),
            Half::Stretches(stretches) => {
                let inside = stretches
                    .iter()
                    .rev()
                    .find(|stretch| stretch.from.leading() <= w.leading())
                    .or(stretches.first());
                inside.map_or(
                    Value {
                        speed: Double::ZERO,
                        gain: Double::ZERO,
                    },
                    |stretch| stretch.value(w - stretch.from),
                )
            }
        }
    }
}

/// The septic law at w in [0, 1] with v = 1 − w: B₄,₇ + … + B₇,₇ and (B₅,₈ + 2B₆,₈ + 3B₇,₈ + 4B₈,₈)/8.
///
/// Its s is also the bump of a landing's correction.
pub(super) fn septic(w: Double, v: Double) -> Value {
    let fourth = w.squared().squared();
    Value {
        speed: fourth * (v * (v * (v * 35.0 + w * 21.0) + w.squared() * 7.0) + w.squared() * w),
        gain: fourth
            * w
            * (v * (v * (v + w) * 14.0 + w.squared() * 6.0) + w.squared() * w).scaled(0.5),
    }
}

/// The motor's acceleration is s′: it rises over the share, so s″ is constant there and nothing after it.
fn scurve(share: &Rational) -> Half {
    if *share <= ratio(0, 1) {
        return Half::Linear;
    }
    Half::Stretches(stretches(&[
        (Kind::Constant, share.clone()),
        (Kind::Nothing, ratio(1, 2) - share),
    ]))
}

/// The stretches one after the other from rest at 0 up to ½, those of no length left out.
fn stretches(parts: &[(Kind, Rational)]) -> Vec<Stretch> {
    let mut all: Vec<Stretch> = Vec::new();
    let mut from = ratio(0, 1);
    let mut state = State::default();
    for (kind, length) in parts {
        if *length <= ratio(0, 1) {
            continue;
        }
        let stretch = Stretch {
            from: Double::from_rational(&from),
            length: Double::from_rational(length),
            kind: *kind,
            state,
            factor: Double::ONE,
        };
        state = stretch.state_at(stretch.length);
        from += length;
        all.push(stretch);
    }
    let factor = Double::new(0.5) / state.speed;
    for stretch in &mut all {
        stretch.factor = factor;
    }
    all
}

impl Stretch {
    fn value(&self, h: Double) -> Value {
        let state = self.state_at(h);
        Value {
            speed: state.speed * self.factor,
            gain: state.gain * self.factor,
        }
    }

    /// Slope, s and S a time h into the stretch: its curvature integrated once, twice and three times.
    fn state_at(&self, h: Double) -> State {
        let (slope, speed, gain) = self.integrals(h);
        let State {
            slope: slope0,
            speed: speed0,
            gain: gain0,
        } = self.state;
        State {
            slope: slope0 + slope,
            speed: speed0 + slope0 * h + speed,
            gain: gain0 + speed0 * h + slope0 * h.squared().scaled(0.5) + gain,
        }
    }

    fn integrals(&self, h: Double) -> (Double, Double, Double) {
        let square = h.squared().scaled(0.5);
        match self.kind {
            Kind::Constant => (h, square, square * h / Double::new(3.0)),
            Kind::Nothing => (Double::ZERO, Double::ZERO, Double::ZERO),
            // A quarter wave over a length ℓ has the rate ω = π/2ℓ: with y = h/2ℓ the angle is πy, and 1/ω = 2ℓ/π.
            Kind::SineRise => {
                let (sine, cosine, inverse) = self.wave(h);
                let versine = Double::ONE - cosine;
                (
                    inverse * versine,
                    inverse * (h - inverse * sine),
                    inverse * (square - inverse.squared() * versine),
                )
            }
            Kind::CosineFall => {
                let (sine, cosine, inverse) = self.wave(h);
                (
                    inverse * sine,
                    inverse.squared() * (Double::ONE - cosine),
                    inverse.squared() * (h - inverse * sine),
                )
            }
        }
    }

    fn wave(&self, h: Double) -> (Double, Double, Double) {
        let double = self.length.scaled(2.0);
        let (sine, cosine) = sine_cosine(h / double);
        (sine, cosine, double / Double::PI)
    }
}

#[cfg(test)]
mod tests {
    use super::{Curve, Value};
    use crate::audit::double::Double;
    use crate::exact::{Rational, ratio};
    use crate::motion::{Law, LawKind, Shape};

    fn curve(kind: LawKind, skew: Rational) -> Option<Curve> {
        Curve::new(&Shape::Law(Law { kind, skew }))
    }

    fn at(curve: Option<&Curve>, n: u64, ticks: u64) -> Value {
        let nothing = Value {
            speed: Double::ZERO,
            gain: Double::ZERO,
        };
        curve.map_or(nothing, |curve| curve.at(n, ticks))
    }

    /// s(0.1), s(0.25), s(0.4) and the integral up to ½, to ten places. From the handbook formulas (Rothbart, *Cam Design
    /// Handbook*, 2004; Norton, *Cam Design and Manufacturing Handbook*, 2nd ed. 2009), evaluated elsewhere.
    const SAMPLES: [(LawKind, [f64; 4]); 7] = [
        (
            LawKind::Harmonic,
            [0.0244717419, 0.1464466094, 0.3454915028, 0.0908450569],
        ),
        (LawKind::Cubic, [0.028, 0.15625, 0.352, 0.09375]),
        (
            LawKind::ModifiedSine,
            [0.0106972128, 0.1171784846, 0.3278651875, 0.0820064668],
        ),
        (LawKind::Quintic, [0.00856, 0.103515625, 0.31744, 0.078125]),
        (
            LawKind::ModifiedTrapezoid,
            [0.0094590641, 0.1044801940, 0.3094590641, 0.0773287574],
        ),
        (
            LawKind::Cycloidal,
            [0.0064510716, 0.0908450569, 0.3064510716, 0.0743394082],
        ),
        (
            LawKind::Septic,
            [0.002728, 0.0705566406, 0.289792, 0.068359375],
        ),
    ];

    #[test]
    fn handbook_samples() {
        for (kind, [tenth, quarter, two_fifths, half]) in SAMPLES {
            let name = format!("{kind:?}");
            let law = curve(kind, ratio(1, 2));
            for (n, want) in [(2, tenth), (5, quarter), (8, two_fifths)] {
                let got = at(law.as_ref(), n, 20).speed.leading();
                assert!(
                    (got - want).abs() < 6e-11,
                    "{name} s({n}/20) = {got}, want {want}"
                );
            }
            let got = at(law.as_ref(), 10, 20).gain.leading();
            assert!(
                (got - half).abs() < 6e-11,
                "{name} integral {got}, want {half}"
            );
        }
    }

    #[test]
    fn an_s_curve_rises_over_its_share() {
        // By its definition: s′ rises to 1/(1 − r) over the share r, so s(r) = r/(2(1 − r)), then goes on straight.
        for (share, n) in [(0, 8), (2, 8), (5, 8), (10, 10)] {
            let r = f64::from(share) / 20.0;
            let law = Curve::new(&Shape::Scurve(ratio(share.into(), 20)));
            let got = at(law.as_ref(), n, 20).speed.leading();
            let want = (n as f64 / 20.0 - r / 2.0) / (1.0 - r);
            assert!((got - want).abs() < 1e-15, "share {r}: {got}, want {want}");
        }
        let law = Curve::new(&Shape::Scurve(ratio(1, 2)));
        let got = at(law.as_ref(), 1, 20).speed.leading();
        assert!(
            (got - 2.0 / 400.0).abs() < 1e-17,
            "2u² for a share of ½: {got}"
        );
    }

    #[test]
    fn gain_is_the_integral_of_speed() {
        let mut laws: Vec<Shape> = [ratio(1, 2), ratio(3, 10), ratio(19, 20)]
            .iter()
            .flat_map(|skew| {
                SAMPLES.iter().map(|(kind, _)| {
                    Shape::Law(Law {
                        kind: kind.clone(),
                        skew: skew.clone(),
                    })
                })
            })
            .collect();
        laws.extend([ratio(0, 1), ratio(1, 8), ratio(1, 2)].map(Shape::Scurve));
        laws.push(Shape::Law(Law {
            kind: LawKind::Bezier {
                x1: ratio(1, 4),
                y1: ratio(1, 10),
                x2: ratio(1, 4),
                y2: ratio(1, 1),
            },
            skew: ratio(1, 2),
        }));
        for shape in laws {
            let law = Curve::new(&shape);
            let ticks = 4000;
            let mut previous = at(law.as_ref(), 0, ticks);
            for n in (2..=ticks).step_by(2) {
                // Simpson's rule over two ticks: error below h⁵·s⁗/90, with s⁗ of at most some 10⁵ at a kink.
                let middle = at(law.as_ref(), n - 1, ticks);
                let here = at(law.as_ref(), n, ticks);
                let sum =
                    previous.speed.leading() + 4.0 * middle.speed.leading() + here.speed.leading();
                let gained = (here.gain - previous.gain).leading();
                let want = sum / 6.0 * 2.0 / ticks as f64;
                assert!(
                    (gained - want).abs() < 3e-9 / ticks as f64,
                    "{shape:?} at {n}: {gained} against {want}"
                );
                previous = here;
            }
            assert!((previous.speed.leading() - 1.0).abs() < 1e-15);
        }
    }
}
