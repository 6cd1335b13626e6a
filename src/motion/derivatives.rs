//! The laws and their first two derivatives in closed form, for checks: nothing here reaches an output by itself.

use super::Shape;
use super::bezier::Bezier;
use super::laws::{Curve, Polynomial, Stretch, Symmetric, Wave};
use crate::exact::{Rational, to_f64, whole};
use num_traits::{One, Signed, Zero};
use std::f64::consts::TAU;

pub use super::real::{Interval, IntervalDual, Real};

/// A smooth piece of a law, in a variable x of its own that grows with u; [`Piece::u`] tells which u it means.
///
/// For a symmetric law x is w = u/scale before the middle and −w, w = (1−u)/scale, after it: counted from the nearer end and
/// in units of the stretch, so that nothing cancels in `f64` however short the stretch. For a Bézier x is its parameter.
#[derive(Clone, Debug)]
pub struct Piece {
    /// Where x starts.
    pub from: f64,
    /// Where x ends.
    pub to: f64,
    form: Form,
}

#[derive(Clone, Debug)]
enum Form {
    Half(Part),
    Bezier(Arc),
}

/// Part of a half of a symmetric law, in w = x, or w = −x after the middle.
#[derive(Clone, Debug)]
struct Part {
    after: bool,
    scale: f64,
    inverse: f64,
    /// P, P′, P″ by powers of w.
    polynomials: [Vec<f64>; 3],
    wave: Option<Wave<f64>>,
}

/// A Bézier by powers of its parameter t.
///
/// With x′ = f·d and y′ = f·n, f whatever linear factor both share: s′ = n/d, s″ = (n′d − nd′)/(f·d³).
#[derive(Clone, Debug)]
struct Arc {
    across: Vec<f64>,
    up: Vec<f64>,
    factor: Vec<f64>,
    n: Vec<f64>,
    d: Vec<f64>,
    turn: Vec<f64>,
}

/// The law cut at its break points into smooth pieces, in order; together they cover u from 0 to 1.
#[must_use]
pub fn pieces(shape: &Shape) -> Vec<Piece> {
    if let Some(curve) = bezier(shape) {
        return vec![Piece::bezier(&curve)];
    }
    let Some(law) = Symmetric::of(shape) else {
        return vec![Piece::whole(Vec::new())];
    };
    let after = Rational::one() - &law.skew;
    let mut pieces = half(&law.half.stretches, &law.skew, false);
    let mut fall = half(&law.half.stretches, &after, true);
    fall.reverse();
    pieces.append(&mut fall);
    pieces
}

/// Whether no duration helps against a jerk limit: the acceleration steps somewhere, ends included, or the slope of
/// the acceleration has no bound.
///
/// So it is for `linear`, `scurve` without a rise, and a Bézier unless it leaves and arrives level: 0 < x1, y1 = 0,
/// x2 < 1, y2 = 1.
#[must_use]
pub fn steps(shape: &Shape) -> bool {
    match shape {
        Shape::Hold => false,
        Shape::Scurve(share) => *share <= Rational::zero(),
        Shape::Law(law) => {
            Bezier::of(&law.kind).map_or(law.kind == super::LawKind::Linear, |curve| curve.steps())
        }
    }
}

/// Whether the acceleration is finite everywhere: false only for a Bézier with a vertical tangent.
#[must_use]
pub fn slope_is_finite(shape: &Shape) -> bool {
    bezier(shape).is_none_or(|curve| curve.slope_is_finite())
}

fn bezier(shape: &Shape) -> Option<Bezier> {
    match shape {
        Shape::Law(law) => Bezier::of(&law.kind),
        Shape::Hold | Shape::Scurve(_) => None,
    }
}

/// The pieces of one half that takes `length` of the morph, from its own end towards the middle.
fn half(stretches: &[Stretch], length: &Rational, after: bool) -> Vec<Piece> {
    if !length.is_positive() {
        return Vec::new();
    }
    let stretched = length * whole(2);
    let mut low = Rational::zero();
    let mut pieces = Vec::new();
    for stretch in stretches {
        let high = &stretch.until * &stretched;
        let scale = &stretch.scale * &stretched;
        let (near, far) = (to_f64(&(&low / &scale)), to_f64(&(&high / &scale)));
        let ends = if after { (-far, -near) } else { (near, far) };
        let part = Part::new(&stretch.float, to_f64(&scale), after);
        // A stretch so short that it vanishes in `f64` has nothing to say.
        if ends.0 < ends.1 && part.inverse.is_finite() {
            pieces.push(Piece {
                from: ends.0,
                to: ends.1,
                form: Form::Half(part),
            });
        }
        low = high;
    }
    pieces
}

impl Part {
    fn new(curve: &Curve<f64>, scale: f64, after: bool) -> Self {
        let polynomial = by_powers(&curve.speed);
        let slope = derivative(&polynomial);
        let curvature = derivative(&slope);
        Self {
            after,
            scale,
            inverse: 1.0 / scale,
            polynomials: [polynomial, slope, curvature],
            wave: curve.wave.clone(),
        }
    }

    fn w<R: Real>(&self, x: R) -> R {
        if self.after { -x } else { x }
    }

    fn u<R: Real>(&self, x: R) -> R {
        let u = x * R::constant(self.scale);
        if self.after { u + R::constant(1.0) } else { u }
    }

    /// The wave's part of P, P′ or P″: each derivative brings a factor 2π·rate and a quarter turn.
    fn wave<R: Real>(&self, order: u8, w: R) -> R {
        let Some(wave) = &self.wave else {
            return R::constant(0.0);
        };
        let angle = w * R::constant(wave.rate) + R::constant(wave.offset);
        let factor = TAU * wave.rate;
        match order {
            0 => angle.sin_turns() * R::constant(wave.sine),
            1 => angle.cos_turns() * R::constant(wave.sine * factor),
            _ => angle.sin_turns() * R::constant(-wave.sine * factor * factor),
        }
    }

    fn s<R: Real>(&self, x: R) -> R {
        let [polynomial, ..] = &self.polynomials;
        let w = self.w(x);
        let s = (horner(polynomial, w) + self.wave(0, w)) * R::constant(self.scale);
        if self.after { R::constant(1.0) - s } else { s }
    }

    fn ds<R: Real>(&self, x: R) -> R {
        let [_, slope, _] = &self.polynomials;
        let w = self.w(x);
        horner(slope, w) + self.wave(1, w)
    }

    fn dds<R: Real>(&self, x: R) -> R {
        let [.., curvature] = &self.polynomials;
        let w = self.w(x);
        let sign = if self.after {
            -self.inverse
        } else {
            self.inverse
        };
        (horner(curvature, w) + self.wave(2, w)) * R::constant(sign)
    }
}

impl Piece {
    /// A single polynomial in u, by powers.
    fn whole(coefficients: Vec<f64>) -> Self {
        let curve = Curve {
            speed: Polynomial {
                power: 0,
                coefficients,
            },
            gain: Polynomial {
                power: 0,
                coefficients: Vec::new(),
            },
            wave: None,
        };
        Self {
            from: 0.0,
            to: 1.0,
            form: Form::Half(Part::new(&curve, 1.0, false)),
        }
    }

    fn bezier(curve: &Bezier) -> Self {
        if curve.is_line() {
            return Self::whole(vec![0.0, 1.0]);
        }
        Self {
            from: 0.0,
            to: 1.0,
            form: Form::Bezier(Arc::new(curve)),
        }
    }

    /// u at the piece's own x in [`from`, `to`].
    ///
    /// [`from`]: Piece::from
    /// [`to`]: Piece::to
    pub fn u<R: Real>(&self, x: R) -> R {
        match &self.form {
            Form::Half(part) => part.u(x),
            Form::Bezier(arc) => horner(&arc.across, x),
        }
    }

    /// s at the piece's own x.
    pub fn s<R: Real>(&self, x: R) -> R {
        match &self.form {
            Form::Half(part) => part.s(x),
            Form::Bezier(arc) => horner(&arc.up, x),
        }
    }

    /// ds/du at the piece's own x.
    pub fn ds<R: Real>(&self, x: R) -> R {
        match &self.form {
            Form::Half(part) => part.ds(x),
            Form::Bezier(arc) => horner(&arc.n, x) / horner(&arc.d, x),
        }
    }

    /// d²s/du² at the piece's own x.
    pub fn dds<R: Real>(&self, x: R) -> R {
        match &self.form {
            Form::Half(part) => part.dds(x),
            Form::Bezier(arc) => {
                let d = horner(&arc.d, x);
                horner(&arc.turn, x) / (horner(&arc.factor, x) * d * d * d)
            }
        }
    }
}

impl Arc {
    fn new(curve: &Bezier) -> Self {
        let (x, y) = (slope(&curve.across), slope(&curve.up));
        let zero = Rational::zero();
        let share = |at: fn(&[Rational; 3]) -> Rational| at(&x).is_zero() && at(&y).is_zero();
        let (factor, d, n) = if share(|[c0, ..]| c0.clone()) {
            // f = t.
            let rest = |[_, c1, c2]: &[Rational; 3]| [c1.clone(), c2.clone(), Rational::zero()];
            (vec![0.0, 1.0], rest(&x), rest(&y))
        } else if share(|coefficients| coefficients.iter().sum()) {
            // f = 1 − t: (1−t)(c0 − c2·t) = c0 + c1·t + c2·t², since the three sum to zero.
            let rest = |[c0, _, c2]: &[Rational; 3]| [c0.clone(), -c2, Rational::zero()];
            (vec![1.0, -1.0], rest(&x), rest(&y))
        } else {
            (vec![1.0], x, y)
        };
        let [n0, n1, n2] = &n;
        let [d0, d1, d2] = &d;
        // n′d − nd′: the cubic terms cancel.
        let turn = [
            n1 * d0 - n0 * d1,
            (n2 * d0 - n0 * d2) * whole(2),
            n2 * d1 - n1 * d2,
        ];
        let powers = |[c1, c2, c3]: &[Rational; 3]| {
            floats(&[zero.clone(), c1.clone(), c2.clone(), c3.clone()])
        };
        Self {
            across: powers(&curve.across),
            up: powers(&curve.up),
            factor,
            n: floats(&n),
            d: floats(&d),
            turn: floats(&turn),
        }
    }
}

/// The derivative of c₁t + c₂t² + c₃t³ by powers.
fn slope([c1, c2, c3]: &[Rational; 3]) -> [Rational; 3] {
    [c1.clone(), c2 * whole(2), c3 * whole(3)]
}

fn floats(coefficients: &[Rational]) -> Vec<f64> {
    coefficients.iter().map(to_f64).collect()
}

fn by_powers(polynomial: &Polynomial<f64>) -> Vec<f64> {
    (0..polynomial.power)
        .map(|_| 0.0)
        .chain(polynomial.coefficients.iter().copied())
        .collect()
}

fn derivative(coefficients: &[f64]) -> Vec<f64> {
    (0_u32..)
        .map(f64::from)
        .zip(coefficients)
        .skip(1)
        .map(|(power, coefficient)| power * coefficient)
        .collect()
}

fn horner<R: Real>(coefficients: &[f64], x: R) -> R {
    let Some((last, rest)) = coefficients.split_last() else {
        return R::constant(0.0);
    };
    rest.iter()
        .rev()
        .fold(R::constant(*last), |sum, coefficient| {
            sum * x + R::constant(*coefficient)
        })
}
