//! The cubic Bézier timing function: u = x(t), s = y(t) with control points (0,0), (x1,y1), (x2,y2), (1,1).
//!
//! Source of the definition: W3C CSS Easing Functions Level 1, cubic Bézier easing functions.

use super::LawKind;
use crate::exact::root::{RisingCubic, root_polynomial, root_steps};
use crate::exact::{Rational, ratio, whole};
use num_bigint::BigInt;
use num_traits::{One, Zero};

/// The coefficients of t, t², t³ across (x) and up (y).
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Bezier {
    pub(super) across: [Rational; 3],
    pub(super) up: [Rational; 3],
}

impl Bezier {
    /// The curve of a Bézier law, `None` for any other law.
    pub(super) fn of(kind: &LawKind) -> Option<Self> {
        match kind {
            LawKind::Bezier { x1, y1, x2, y2 } => Some(Self {
                across: coefficients(x1, x2),
                up: coefficients(y1, y2),
            }),
            _ => None,
        }
    }

    /// ∫₀¹ y dx = ∫ y·x′ dt, exact.
    pub(super) fn gain(&self) -> Rational {
        self.area().iter().sum()
    }

    /// The coefficients of t² … t⁶ of S = ∫ y·x′ dt. (y and x have no constant, so S starts with t².)
    fn area(&self) -> [Rational; 5] {
        let [x1, x2, x3] = &self.across;
        let [y1, y2, y3] = &self.up;
        let (two, three) = (whole(2), whole(3));
        [
            y1 * x1 / &two,
            (y1 * x2 * &two + y2 * x1) / &three,
            (y1 * x3 * &three + y2 * x2 * &two + y3 * x1) / whole(4),
            (y2 * x3 * &three + y3 * x2 * &two) / whole(5),
            y3 * x3 / two,
        ]
    }

    /// Whether x and y are the same function, which makes s = u whatever the parameter does.
    pub(super) fn is_line(&self) -> bool {
        self.across == self.up
    }

    /// Whether the slope ds/du is finite everywhere.
    ///
    /// x′ vanishes at the start where x1 = 0, at the end where x2 = 1 and in the middle where x1 = 1 and x2 = 0. At an end
    /// y′ may vanish with it; the slope is then that towards the next control point, unless that one is straight above
    /// too. In the middle y′ vanishes with x′ for the straight line only.
    pub(super) fn slope_is_finite(&self) -> bool {
        if self.is_line() {
            return true;
        }
        let [first, last] = self.end_tangents();
        let steep = |(across, up, next): &(Rational, Rational, Rational)| {
            across.is_zero() && (!up.is_zero() || next.is_zero())
        };
        let [(x1, ..), (x2, ..)] = [&first, &last];
        !(steep(&first) || steep(&last) || (x1.is_one() && x2.is_one()))
    }

    /// Whether a jerk limit can never hold: the acceleration steps at an end, or the curvature has no bound there.
    ///
    /// It holds only for 0 < x1, y1 = 0 and x2 < 1, y2 = 1: with a vertical or vanishing first arm y goes like u^(2/3),
    /// u^(1/2), or like a·u + b·u^(3/2) with b ≠ 0 off the straight line.
    pub(super) fn steps(&self) -> bool {
        let smooth =
            |(across, up, _): &(Rational, Rational, Rational)| up.is_zero() && !across.is_zero();
        let [first, last] = self.end_tangents();
        !(smooth(&first) && smooth(&last) && self.slope_is_finite())
    }

    /// For each end, seen from it: its own control point across and up, and the other control point across.
    fn end_tangents(&self) -> [(Rational, Rational, Rational); 2] {
        let [x1, x2] = controls(&self.across);
        let [y1, y2] = controls(&self.up);
        let one = Rational::one();
        [
            (x1.clone(), y1, x2.clone()),
            (&one - &x2, &one - y2, &one - x1),
        ]
    }
}

/// (3a, 3b − 6a, 1 + 3a − 3b): the Bernstein form 3a·t(1−t)² + 3b·t²(1−t) + t³ by powers.
fn coefficients(first: &Rational, second: &Rational) -> [Rational; 3] {
    let (a, b) = (first * whole(3), second * whole(3));
    [a.clone(), &b - &a * whole(2), whole(1) + a - b]
}

/// The control values behind the coefficients.
fn controls([c1, c2, _]: &[Rational; 3]) -> [Rational; 2] {
    [c1 / whole(3), (c2 + c1 * whole(2)) * ratio(1, 3)]
}

/// The curve made ready for rows.
///
/// Numbers are counts of 2⁻²⁵⁶, so heights of up to 10⁹ are nothing special. The parameter is known to a residual of
/// 2⁻²⁵⁰ in u, so s is off by at most 2⁻²⁵⁰ times the largest slope and S by at most 2⁻²⁵⁰ times the largest height:
/// even with 15-digit control points (heights of 10⁹, slopes of 10²⁴) the errors are below 2⁻¹⁶⁵ and 2⁻²¹⁰.
#[derive(Clone, Debug)]
pub(super) struct BezierRows {
    across: RisingCubic,
    up: [BigInt; 3],
    area: [BigInt; 6],
}

impl BezierRows {
    pub(super) fn new(curve: &Bezier) -> Self {
        let [a2, a3, a4, a5, a6] = curve.area().each_ref().map(root_steps);
        Self {
            across: RisingCubic::new(&curve.across),
            up: curve.up.each_ref().map(root_steps),
            area: [BigInt::zero(), a2, a3, a4, a5, a6],
        }
    }

    /// (S(u), s(u)) in counts of 2⁻²⁵⁶, for u in counts of 2⁻²⁵⁶.
    pub(super) fn at(&self, u: &BigInt) -> (BigInt, BigInt) {
        let t = self.across.parameter(u);
        (
            root_polynomial(&self.area, &t),
            root_polynomial(&self.up, &t),
        )
    }
}
