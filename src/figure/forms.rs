//! The forms a figure can be written in: rose, ring and wheel, star → p : q.

use super::{MOST_TERM, Ratio};
use crate::exact::{Rational, whole};
use num_integer::Integer;
use num_traits::{One, Signed, ToPrimitive, Zero};

/// Why a form has no p : q.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Impossible {
    /// A size that is zero or below.
    NotPositive,
    /// A rose's number below zero.
    Negative,
    /// A wheel inside a ring that is not smaller than the ring.
    WheelTooLarge,
    /// A star of `points` that steps by less than one point, or by all of them or more.
    Step {
        /// N of N/M.
        points: i64,
    },
    /// A star whose numbers have a common factor; the reduced ones.
    CommonFactor {
        /// N of the reduced N/M.
        points: i64,
        /// M of the reduced N/M.
        step: i64,
    },
    /// A term of p : q past ±[`MOST_TERM`]; both in lowest terms.
    TooLarge {
        /// p and q as decimal text.
        terms: (String, String),
    },
}

/// x : y in lowest terms, for rationals that are not both zero.
fn proportion(x: &Rational, y: &Rational) -> Result<Ratio, Impossible> {
    let p = x.numer() * y.denom();
    let q = y.numer() * x.denom();
    let divisor = p.gcd(&q);
    if divisor.is_zero() {
        return Err(Impossible::NotPositive);
    }
    let (p, q) = (p / &divisor, q / &divisor);
    let small = p.to_i64().zip(q.to_i64());
    small
        .and_then(|(p, q)| Ratio::new(p, q))
        .ok_or_else(|| Impossible::TooLarge {
            terms: (p.to_string(), q.to_string()),
        })
}

/// The rose r = cos(k·angle), k = N/D ≥ 0: p : q = (N + D) : (D − N).
///
/// With z = e^{iθa} + e^{iθb} = 2·cos((θa − θb)/2)·e^{i(θa + θb)/2} the radius runs (p − q)/(p + q) = N/D times as fast as the angle.
///
/// # Errors
/// k below zero; a term past ±[`MOST_TERM`].
pub fn rose(k: &Rational) -> Result<Ratio, Impossible> {
    if k.is_negative() {
        return Err(Impossible::Negative);
    }
    proportion(&(k + Rational::one()), &(Rational::one() - k))
}

/// A wheel of size `wheel` rolling inside a ring of size `ring`: 1 : −(R − W)/W.
///
/// # Errors
/// Sizes not above zero; a wheel not smaller than its ring; a term past ±[`MOST_TERM`].
pub fn ring(ring: &Rational, wheel: &Rational) -> Result<Ratio, Impossible> {
    if !ring.is_positive() || !wheel.is_positive() {
        return Err(Impossible::NotPositive);
    }
    if wheel >= ring {
        return Err(Impossible::WheelTooLarge);
    }
    proportion(wheel, &(wheel - ring))
}

/// A wheel of size `wheel` rolling around a ring of size `ring`: 1 : (R + W)/W.
///
/// # Errors
/// Sizes not above zero; a term past ±[`MOST_TERM`].
pub fn ring_outside(ring: &Rational, wheel: &Rational) -> Result<Ratio, Impossible> {
    if !ring.is_positive() || !wheel.is_positive() {
        return Err(Impossible::NotPositive);
    }
    proportion(wheel, &(ring + wheel))
}

/// The star of `points`, stepping `step`: M : −(N − M).
///
/// # Errors
/// Not 1 ≤ M < N; N and M with a common factor; a term past ±[`MOST_TERM`].
pub fn star(points: i64, step: i64) -> Result<Ratio, Impossible> {
    if step < 1 || step >= points {
        return Err(Impossible::Step { points });
    }
    let common = points.gcd(&step);
    if common != 1 {
        return Err(Impossible::CommonFactor {
            points: points / common,
            step: step / common,
        });
    }
    proportion(
        &whole(i128::from(step)),
        &whole(i128::from(step) - i128::from(points)),
    )
}

/// P : Q as written.
///
/// # Errors
/// 0 : 0 is [`Impossible::NotPositive`]; a written term past ±[`MOST_TERM`].
pub fn written(p: i64, q: i64) -> Result<Ratio, Impossible> {
    let too_large = || Impossible::TooLarge {
        terms: (p.to_string(), q.to_string()),
    };
    if p.unsigned_abs().max(q.unsigned_abs()) > MOST_TERM.unsigned_abs() {
        return Err(too_large());
    }
    if p == 0 && q == 0 {
        return Err(Impossible::NotPositive);
    }
    Ratio::new(p, q).ok_or_else(too_large)
}

#[cfg(test)]
#[allow(
    clippy::disallowed_methods,
    reason = "checks against a definition, far from any output"
)]
mod tests {
    use super::{Impossible, ring, ring_outside, rose, star, written};
    use crate::exact::{ratio, whole};
    use std::f64::consts::TAU;

    #[test]
    fn a_rose_with_equal_reaches_lies_on_its_polar_equation() {
        // r = 2R·cos(k·angle), the definition of the rose (Grandi); angles are taken as they grow with time.
        for (n, d) in [(5, 3), (3, 1), (1, 1), (2, 7), (10_i128, 9_i128), (0, 1)] {
            let figure = rose(&ratio(n, d)).ok();
            let Some(figure) = figure else {
                unreachable!("rose {n}/{d} has small terms");
            };
            let (p, q) = (f64::from(figure.p()), f64::from(figure.q()));
            #[expect(clippy::cast_precision_loss, reason = "small numbers")]
            let k = n as f64 / d as f64;
            for step in 0..200 {
                let t = f64::from(step) / 200.0 * TAU;
                let (x, y) = ((p * t).cos() + (q * t).cos(), (p * t).sin() + (q * t).sin());
                let angle = (p + q) / 2.0 * t;
                let r = 2.0 * (k * angle).cos();
                assert!((x - r * angle.cos()).abs() < 1e-9, "rose {n}/{d} at {t}");
                assert!((y - r * angle.sin()).abs() < 1e-9, "rose {n}/{d} at {t}");
            }
        }
    }

    #[test]
    fn wheels_have_as_many_lobes_as_their_curves_have_cusps() {
        // Cusps of hypo- and epicycloids, R/W = n/d in lowest terms has n (J. D. Lawrence, A Catalog of Special Plane
        // Curves, from memory).
        for (large, small, cusps) in [(3, 1, 3), (4, 1, 4), (5, 2, 5), (75, 28, 75), (8, 3, 8)] {
            let lobes = |figure: Result<super::Ratio, Impossible>| figure.map(super::Ratio::lobes);
            assert_eq!(lobes(ring(&whole(large), &whole(small))), Ok(cusps));
            assert_eq!(lobes(ring_outside(&whole(large), &whole(small))), Ok(cusps));
        }
    }

    #[test]
    fn what_cannot_be_is_named() {
        assert_eq!(
            star(10, 4),
            Err(Impossible::CommonFactor { points: 5, step: 2 })
        );
        assert_eq!(star(5, 5), Err(Impossible::Step { points: 5 }));
        assert_eq!(ring(&whole(3), &whole(3)), Err(Impossible::WheelTooLarge));
        assert_eq!(rose(&whole(-1)), Err(Impossible::Negative));
        assert_eq!(written(0, 0), Err(Impossible::NotPositive));
        assert!(matches!(
            written(20_000, 10_000),
            Err(Impossible::TooLarge { .. })
        ));
        assert_eq!(
            star(5, 2).map(|figure| figure.to_string()),
            Ok("2:-3".to_owned())
        );
    }
}
