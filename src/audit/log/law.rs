//! The laws once more, in floating point and by formulas of their own, for comparing a machine's motion with its plan.
//!
//! S(u) = ∫₀ᵘ s is the phase gained, s the share of the speed. Sources: the displacement diagrams of cam design
//! (Rothbart, *Cam Design Handbook*, 2004) integrated by hand; CSS Easing Functions Level 1 for the Bézier. Accurate to
//! about 10⁻¹⁴, which is far below what any log resolves.

use crate::exact::to_f64;
use crate::motion::{LawKind, Shape};
use std::f64::consts::PI;

/// A shape ready for floating point.
#[derive(Clone, Debug)]
pub(super) enum Law {
    /// The speed stays.
    Hold,
    /// A symmetric law whose middle lies at `skew`.
    Skewed {
        base: Base,
        skew: f64,
        half_gain: f64,
    },
    /// Control points x1, y1, x2, y2.
    Bezier([f64; 4]),
}

/// The symmetric laws.
#[derive(Clone, Copy, Debug)]
pub(super) enum Base {
    Linear,
    Cubic,
    Quintic,
    Septic,
    Harmonic,
    Cycloidal,
    ModifiedSine,
    ModifiedTrapezoid,
    /// With its share of the time for each rise and fall of acceleration.
    Scurve(f64),
}

impl Law {
    pub(super) fn of(shape: &Shape) -> Self {
        let (base, skew) = match shape {
            Shape::Hold => return Self::Hold,
            Shape::Scurve(share) => (Base::Scurve(to_f64(share)), 0.5),
            Shape::Law(law) => match &law.kind {
                LawKind::Bezier { x1, y1, x2, y2 } => {
                    return Self::Bezier([x1, y1, x2, y2].map(to_f64));
                }
                kind => (Base::of(kind), to_f64(&law.skew)),
            },
        };
        Self::Skewed {
            base,
            skew,
            half_gain: base.gain_of_half(0.5),
        }
    }

    /// s(u) and S(u), u from 0 to 1.
    pub(super) fn at(&self, u: f64) -> (f64, f64) {
        match self {
            Self::Hold => (0.0, 0.0),
            Self::Bezier(points) => bezier(points, u),
            Self::Skewed {
                base,
                skew,
                half_gain,
            } => {
                // s(u) = 2λ·s₀(u/2λ) before the middle, 1 − 2(1−λ)·s₀((1−u)/2(1−λ)) after it.
                let before = 2.0 * skew;
                let after = 2.0 * (1.0 - skew);
                if u <= *skew {
                    let w = u / before;
                    (
                        before * base.half(w),
                        before * before * base.gain_of_half(w),
                    )
                } else {
                    let w = (1.0 - u) / after;
                    let gain = before * before * half_gain + (u - skew)
                        - after * after * (half_gain - base.gain_of_half(w));
                    (1.0 - after * base.half(w), gain)
                }
            }
        }
    }
}

impl Base {
    fn of(kind: &LawKind) -> Self {
        match kind {
            // A Bézier never comes here and an s-curve without a share is straight.
            LawKind::Linear | LawKind::Bezier { .. } => Self::Linear,
            LawKind::Cubic => Self::Cubic,
            LawKind::Quintic => Self::Quintic,
            LawKind::Septic => Self::Septic,
            LawKind::Harmonic => Self::Harmonic,
            LawKind::Cycloidal => Self::Cycloidal,
            LawKind::ModifiedSine => Self::ModifiedSine,
            LawKind::ModifiedTrapezoid => Self::ModifiedTrapezoid,
            LawKind::Scurve => Self::Scurve(0.5),
        }
    }

    /// s₀(u) for u in [0, ½].
    fn half(self, u: f64) -> f64 {
        match self {
            Self::Linear => u,
            Self::Cubic => u * u * (3.0 - 2.0 * u),
            Self::Quintic => u * u * u * (10.0 + u * (-15.0 + 6.0 * u)),
            Self::Septic => u.powi(4) * (35.0 + u * (-84.0 + u * (70.0 - 20.0 * u))),
            Self::Harmonic => (1.0 - (PI * u).cos()) / 2.0,
            Self::Cycloidal => u - (2.0 * PI * u).sin() / (2.0 * PI),
            Self::ModifiedSine => {
                let scale = 4.0 * (4.0 + PI);
                let x = 4.0 * PI * u;
                if u <= 0.125 {
                    (x - x.sin()) / scale
                } else {
                    (8.0 + x - 9.0 * ((x + PI) / 3.0).sin()) / scale
                }
            }
            Self::ModifiedTrapezoid => {
                let scale = 2.0 * PI * (2.0 + PI);
                let x = 4.0 * PI * u;
                if u <= 0.125 {
                    (x - x.sin()) / scale
                } else if u <= 0.375 {
                    (4.0 * x * (x - PI + 2.0) + PI * PI - 8.0) / (8.0 * scale)
                } else {
                    (x * (1.0 + PI) + x.sin() - PI * PI) / scale
                }
            }
            Self::Scurve(share) => {
                let peak = 1.0 / (1.0 - share);
                if u < share {
                    peak * u * u / (2.0 * share)
                } else {
                    peak * (u - share / 2.0)
                }
            }
        }
    }

    /// ∫₀ᵘ s₀ for u in [0, ½].
    fn gain_of_half(self, u: f64) -> f64 {
        match self {
            Self::Linear => u * u / 2.0,
            Self::Cubic => u * u * u * (1.0 - u / 2.0),
            Self::Quintic => u.powi(4) * (2.5 + u * (-3.0 + u)),
            Self::Septic => u.powi(5) * (7.0 + u * (-14.0 + u * (10.0 - 2.5 * u))),
            Self::Harmonic => (u - (PI * u).sin() / PI) / 2.0,
            Self::Cycloidal => u * u / 2.0 - (1.0 - (2.0 * PI * u).cos()) / (4.0 * PI * PI),
            Self::ModifiedSine => modified_sine_gain(u),
            Self::ModifiedTrapezoid => modified_trapezoid_gain(u),
            Self::Scurve(share) => {
                let peak = 1.0 / (1.0 - share);
                if u < share {
                    peak * u * u * u / (6.0 * share)
                } else {
                    peak * (u * u / 2.0 - share * u / 2.0 + share * share / 6.0)
                }
            }
        }
    }
}

/// ∫(x − sin x) du with x = 4πu.
fn first_eighth(u: f64) -> f64 {
    let x = 4.0 * PI * u;
    2.0 * PI * u * u - (1.0 - x.cos()) / (4.0 * PI)
}

fn modified_sine_gain(u: f64) -> f64 {
    let scale = 4.0 * (4.0 + PI);
    if u <= 0.125 {
        return first_eighth(u) / scale;
    }
    // The antiderivative of 8 + 4πu − 9·sin((4πu + π)/3); the cosine is zero at u = 1/8.
    let inner =
        |u: f64| 8.0 * u + 2.0 * PI * u * u + 27.0 / (4.0 * PI) * ((4.0 * PI * u + PI) / 3.0).cos();
    (first_eighth(0.125) + inner(u) - inner(0.125)) / scale
}

fn modified_trapezoid_gain(u: f64) -> f64 {
    let scale = 2.0 * PI * (2.0 + PI);
    if u <= 0.125 {
        return first_eighth(u) / scale;
    }
    // 4x(x − π + 2) with x = 4πu is 64π²u² − 16π(π − 2)u.
    let middle = |u: f64| {
        (64.0 * PI * PI * u * u * u / 3.0 - 8.0 * PI * (PI - 2.0) * u * u + (PI * PI - 8.0) * u)
            / 8.0
    };
    let last =
        |u: f64| 2.0 * PI * (1.0 + PI) * u * u - (4.0 * PI * u).cos() / (4.0 * PI) - PI * PI * u;
    let until_middle = first_eighth(0.125) + middle(u.min(0.375)) - middle(0.125);
    let rest = if u > 0.375 {
        last(u) - last(0.375)
    } else {
        0.0
    };
    (until_middle + rest) / scale
}

/// y over x of the cubic through (0, 0), (x1, y1), (x2, y2), (1, 1), and ∫y dx up to there.
fn bezier([x1, y1, x2, y2]: &[f64; 4], u: f64) -> (f64, f64) {
    let cubic = |p1: f64, p2: f64| [3.0 * p1, 3.0 * (p2 - 2.0 * p1), 1.0 + 3.0 * (p1 - p2)];
    let at = |c: &[f64; 3], w: f64| {
        let [c1, c2, c3] = *c;
        w * (c1 + w * (c2 + w * c3))
    };
    let x = cubic(*x1, *x2);
    let y = cubic(*y1, *y2);
    // x grows with w (x1 and x2 lie in [0, 1]), so halving finds its only root.
    let (mut low, mut high) = (0.0_f64, 1.0_f64);
    for _ in 0..56 {
        let middle = f64::midpoint(low, high);
        if at(&x, middle) < u {
            low = middle;
        } else {
            high = middle;
        }
    }
    let w = f64::midpoint(low, high);
    let [x_1, x_2, x_3] = x;
    // ∫ y·x′ dw, x′ = x₁ + 2x₂w + 3x₃w², term by term.
    let slope = [x_1, 2.0 * x_2, 3.0 * x_3];
    let mut gain = 0.0;
    for (power, coefficient) in (1_i32..).zip(y) {
        for (order, factor) in (0_i32..).zip(slope) {
            let exponent = power + order + 1;
            gain += coefficient * factor * w.powi(exponent) / f64::from(exponent);
        }
    }
    (at(&y, w), gain)
}

#[cfg(test)]
mod tests {
    use super::{Base, Law, LawKind};
    use crate::exact::ratio;
    use crate::motion::{Law as WrittenLaw, Shape};

    fn every_law() -> Vec<Law> {
        let kinds = [
            LawKind::Linear,
            LawKind::Cubic,
            LawKind::Quintic,
            LawKind::Septic,
            LawKind::Harmonic,
            LawKind::Cycloidal,
            LawKind::ModifiedSine,
            LawKind::ModifiedTrapezoid,
            LawKind::Bezier {
                x1: ratio(42, 100),
                y1: ratio(0, 1),
                x2: ratio(58, 100),
                y2: ratio(1, 1),
            },
        ];
        let mut laws: Vec<Law> = kinds
            .iter()
            .map(|kind| {
                Law::of(&Shape::Law(WrittenLaw {
                    kind: kind.clone(),
                    skew: ratio(1, 2),
                }))
            })
            .collect();
        for kind in [
            LawKind::Cycloidal,
            LawKind::ModifiedTrapezoid,
            LawKind::ModifiedSine,
        ] {
            laws.push(Law::of(&Shape::Law(WrittenLaw {
                kind,
                skew: ratio(3, 10),
            })));
        }
        laws.push(Law::of(&Shape::Scurve(ratio(1, 5))));
        laws
    }

    /// The fundamental theorem of calculus is the source: the slope of S is s, by central differences; ends are 0, 1.
    #[test]
    fn the_gain_is_the_integral_of_the_share() {
        for law in every_law() {
            let (start, _) = law.at(0.0);
            let (end, _) = law.at(1.0);
            assert!(start.abs() < 1e-12 && (end - 1.0).abs() < 1e-12, "{law:?}");
            for step in 1..200 {
                let u = f64::from(step) / 200.0;
                let h = 1e-5;
                let (s, _) = law.at(u);
                let slope = (law.at(u + h).1 - law.at(u - h).1) / (2.0 * h);
                assert!(
                    (slope - s).abs() < 2e-7,
                    "{law:?} at {u}: {slope} against {s}"
                );
            }
        }
    }

    /// Exact values: S(1) = ½ of a symmetric law; with skew 1 − λ − 4H(1 − 2λ), for the cycloidal H = 1/8 − 1/2π².
    #[test]
    fn whole_gains_are_the_closed_forms() {
        for base in [
            Base::Septic,
            Base::ModifiedSine,
            Base::ModifiedTrapezoid,
            Base::Scurve(0.3),
        ] {
            let law = Law::Skewed {
                base,
                skew: 0.5,
                half_gain: base.gain_of_half(0.5),
            };
            assert!((law.at(1.0).1 - 0.5).abs() < 1e-13, "{base:?}");
        }
        let skewed = Law::of(&Shape::Law(WrittenLaw {
            kind: LawKind::Cycloidal,
            skew: ratio(3, 10),
        }));
        let half = 0.125 - 1.0 / (2.0 * std::f64::consts::PI.powi(2));
        assert!((skewed.at(1.0).1 - (0.7 - 4.0 * half * 0.4)).abs() < 1e-13);
    }
}
