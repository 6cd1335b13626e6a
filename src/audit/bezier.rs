//! The cubic Bézier timing function once more (W3C CSS Easing Functions Level 1), in Bernstein form.
//!
//! The curve is (x(τ), y(τ)) with control points (0,0), (x1,y1), (x2,y2), (1,1); s(u) = y(τ) where x(τ) = u, and
//! S(u) = ∫ y dx = ∫ y·x′ dτ, the integral of a product of Bernstein polynomials: again a Bernstein sum, of degree 6.

use super::double::Double;
use super::laws::Value;
use crate::exact::{Rational, ratio};

#[derive(Clone, Debug)]
pub(super) struct Bezier {
    /// Control ordinates across and up.
    x: [Double; 4],
    y: [Double; 4],
    /// Coefficients of τᵐ(1−τ)⁶⁻ᵐ in S, binomials included.
    gain: [Double; 7],
}

const BINOMIALS_3: [i128; 4] = [1, 3, 3, 1];
const BINOMIALS_2: [i128; 3] = [1, 2, 1];
const BINOMIALS_5: [i128; 6] = [1, 5, 10, 10, 5, 1];
const BINOMIALS_6: [i128; 7] = [1, 6, 15, 20, 15, 6, 1];

/// Steps of the bracketed root: enough for bisection alone to reach the last of 106 bits.
const MOST_STEPS: u32 = 110;

impl Bezier {
    pub(super) fn new(x1: &Rational, y1: &Rational, x2: &Rational, y2: &Rational) -> Self {
        let (zero, one) = (ratio(0, 1), ratio(1, 1));
        let x = [zero.clone(), x1.clone(), x2.clone(), one.clone()];
        let y = [zero, y1.clone(), y2.clone(), one];
        let pair = |points: &[Rational; 4]| points.each_ref().map(Double::from_rational);
        Self {
            gain: gain(&x, &y).map(|coefficient| Double::from_rational(&coefficient)),
            x: pair(&x),
            y: pair(&y),
        }
    }

    /// s and S at u, with rest = 1 − u.
    pub(super) fn at(&self, u: Double, rest: Double) -> Value {
        let tau = if u.leading() <= 0.0 {
            Double::ZERO
        } else if rest.leading() <= 0.0 {
            Double::ONE
        } else {
            self.parameter(u)
        };
        let back = Double::ONE - tau;
        Value {
            speed: cubic(&self.y, tau),
            gain: homogeneous(&self.gain, tau, back),
        }
    }

    /// τ with x(τ) = u: Newton's steps, kept inside a bracket that is halved where they would leave it. x never falls, so
    /// the bracket always holds the root, and x(τ) − u is what the result is good to, also where x′ vanishes.
    fn parameter(&self, u: Double) -> Double {
        let (mut low, mut high) = (Double::ZERO, Double::ONE);
        let mut tau = u;
        for _ in 0..MOST_STEPS {
            let miss = cubic(&self.x, tau) - u;
            if miss.leading().abs() < f64::EPSILON * f64::EPSILON * u.leading() {
                break;
            }
            if miss.leading() > 0.0 {
                high = tau;
            } else {
                low = tau;
            }
            let newton = tau - miss / self.slope(tau);
            let inside = (newton - low).leading() > 0.0 && (high - newton).leading() > 0.0;
            let next = if inside {
                newton
            } else {
                (low + high).scaled(0.5)
            };
            if next == tau {
                break;
            }
            tau = next;
        }
        tau
    }

    /// x′(τ); not a number where it vanishes is caught by the bracket.
    fn slope(&self, tau: Double) -> Double {
        let [x0, x1, x2, x3] = self.x;
        let back = Double::ONE - tau;
        let across = (tau * back).scaled(2.0);
        (back.squared() * (x1 - x0) + across * (x2 - x1) + tau.squared() * (x3 - x2)) * 3.0
    }
}

/// Σ C(3,i)·pᵢ·τⁱ(1−τ)³⁻ⁱ.
fn cubic(points: &[Double; 4], tau: Double) -> Double {
    let [p0, p1, p2, p3] = *points;
    homogeneous(&[p0, p1 * 3.0, p2 * 3.0, p3], tau, Double::ONE - tau)
}

/// Σ cᵢ·τⁱ·backⁿ⁻ⁱ: Horner's rule in τ, each next coefficient with one more power of `back`.
fn homogeneous<const N: usize>(coefficients: &[Double; N], tau: Double, back: Double) -> Double {
    let mut power = Double::ONE;
    coefficients
        .iter()
        .rev()
        .fold(Double::ZERO, |sum, coefficient| {
            let sum = sum * tau + *coefficient * power;
            power = power * back;
            sum
        })
}

/// Coefficients of τᵐ(1−τ)⁶⁻ᵐ in ∫ y·x′.
///
/// y = Σ yᵢB_{i,3} and x′ = 3Σ(xⱼ₊₁ − xⱼ)B_{j,2}; B_{i,3}·B_{j,2} = C(3,i)C(2,j)/C(5,i+j)·B_{i+j,5}; and the integral of
/// Σ cₖB_{k,5} is Σ bₘB_{m,6} with bₘ = (c₀ + … + cₘ₋₁)/6.
fn gain(x: &[Rational; 4], y: &[Rational; 4]) -> [Rational; 7] {
    let mut product = [(); 6].map(|()| ratio(0, 1));
    let rises = x.windows(2).filter_map(|pair| match pair {
        [from, to] => Some(to - from),
        _ => None,
    });
    for (j, rise) in rises.enumerate() {
        for (i, height) in y.iter().enumerate() {
            let weight = |of: &[i128], at: usize| of.get(at).copied().unwrap_or(1);
            let factor = ratio(
                3 * weight(&BINOMIALS_3, i) * weight(&BINOMIALS_2, j),
                weight(&BINOMIALS_5, i + j),
            );
            if let Some(slot) = product.get_mut(i + j) {
                *slot += factor * height * &rise;
            }
        }
    }
    let mut sum = ratio(0, 1);
    let mut product = product.into_iter();
    BINOMIALS_6.map(|binomial| {
        let coefficient = &sum * ratio(binomial, 6);
        if let Some(next) = product.next() {
            sum += next;
        }
        coefficient
    })
}

#[cfg(test)]
mod tests {
    use super::Bezier;
    use crate::audit::double::Double;
    use crate::exact::ratio;

    fn at(curve: &Bezier, n: u64, ticks: u64) -> (f64, f64) {
        let share = |n: u64| Double::from_whole(n) / Double::from_whole(ticks);
        let value = curve.at(share(n), share(ticks - n));
        (value.speed.leading(), value.gain.leading())
    }

    #[test]
    fn control_points_on_the_diagonal_give_the_identity() {
        // CSS Easing Functions Level 1: equal ordinates describe the straight line, here with a point where both
        // derivatives vanish.
        for (c1, c2) in [(ratio(1, 3), ratio(2, 3)), (ratio(1, 1), ratio(0, 1))] {
            let curve = Bezier::new(&c1, &c1, &c2, &c2);
            for n in 0..=1000 {
                let u = n as f64 / 1000.0;
                let (speed, gain) = at(&curve, n, 1000);
                assert!((speed - u).abs() < 1e-15, "{c1} {c2}: s({u}) = {speed}");
                assert!(
                    (gain - u * u / 2.0).abs() < 1e-15,
                    "{c1} {c2}: S({u}) = {gain}"
                );
            }
        }
    }

    #[test]
    fn a_point_of_the_curve_is_found_at_its_parameter() {
        // `ease` of CSS Easing Functions Level 1, (0.25, 0.1, 0.25, 1), at τ = ½: x = (3·¼ + 3·¼ + 1)/8 = 5/16 and
        // y = (3·0.1 + 3 + 1)/8 = 43/80, by the definition.
        let curve = Bezier::new(&ratio(1, 4), &ratio(1, 10), &ratio(1, 4), &ratio(1, 1));
        let (speed, _) = at(&curve, 5, 16);
        assert!((speed - 43.0 / 80.0).abs() < 1e-15, "{speed}");
    }
}
