//! Laws as they are written.

use super::grammar::Rule;
use super::number::written;
use super::reader::Reader;
use super::span::Span;
use crate::exact::{Rational, whole};
use crate::finding::Code;
use crate::motion::LawKind;
use num_traits::{One, Signed, Zero};
use pest::iterators::Pair;

/// The word of a law.
pub(super) fn word(kind: &LawKind) -> &'static str {
    match kind {
        LawKind::Linear => "linear",
        LawKind::Cubic => "cubic",
        LawKind::Quintic => "quintic",
        LawKind::Septic => "septic",
        LawKind::Harmonic => "harmonic",
        LawKind::Cycloidal => "cycloidal",
        LawKind::ModifiedSine => "modified-sine",
        LawKind::ModifiedTrapezoid => "modified-trapezoid",
        LawKind::Scurve => "scurve",
        LawKind::Bezier { .. } => "bezier",
    }
}

/// Whether the point of steepest change of this law can be moved.
pub(super) fn takes_skew(kind: &LawKind) -> bool {
    !matches!(
        kind,
        LawKind::Linear | LawKind::Scurve | LawKind::Bezier { .. }
    )
}

/// A pair `law`; what is wrong with it is reported.
pub(super) fn read(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<LawKind> {
    let inner = pair.into_inner().next()?;
    if inner.as_rule() == Rule::bezier {
        return bezier(reader, inner);
    }
    [
        LawKind::Linear,
        LawKind::Cubic,
        LawKind::Quintic,
        LawKind::Septic,
        LawKind::Harmonic,
        LawKind::Cycloidal,
        LawKind::ModifiedSine,
        LawKind::ModifiedTrapezoid,
        LawKind::Scurve,
    ]
    .into_iter()
    .find(|kind| word(kind) == inner.as_str())
}

fn bezier(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<LawKind> {
    let span = reader.span(&pair);
    let mut numbers = Vec::with_capacity(4);
    let plain: Vec<_> = pair
        .into_inner()
        .filter(|inner| inner.as_rule() == Rule::plain)
        .collect();
    for number in &plain {
        numbers.push(reader.plain(number));
    }
    let numbers: Vec<_> = numbers.into_iter().collect::<Option<_>>()?;
    let Ok([x1, y1, x2, y2]) = <[_; 4]>::try_from(numbers) else {
        return None;
    };
    let mut inside = true;
    for x in [&x1, &x2] {
        if x.value.is_negative() || x.value > Rational::one() {
            inside = false;
            reader.findings.add_help(
                Code::TextNumber,
                x.span,
                "X1 and X2 of a bezier lie from 0 to 1",
                format!("nearest is {}", if x.value.is_negative() { 0 } else { 1 }),
            );
        }
    }
    if !inside {
        return None;
    }
    let (x1, y1, x2, y2) = (x1.value, y1.value, x2.value, y2.value);
    if let Some(steep) = steep_place(&x1, &y1, &x2, &y2) {
        report_steep(reader, span, steep, [&x1, &y1, &x2, &y2]);
        return None;
    }
    Some(LawKind::Bezier { x1, y1, x2, y2 })
}

/// Where a curve is infinitely steep.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Steep {
    Start,
    Middle,
    End,
}

fn report_steep(reader: &mut Reader<'_>, span: Span, steep: Steep, points: [&Rational; 4]) {
    let [x1, y1, x2, y2] = points.map(written);
    let (at, help) = match steep {
        Steep::Start => (
            "start",
            format!("let X1 be above 0, e.g. `bezier(0.01 {y1} {x2} {y2})`"),
        ),
        Steep::Middle => (
            "middle",
            format!("let X1 be below 1, e.g. `bezier(0.99 {y1} {x2} {y2})`"),
        ),
        Steep::End => (
            "end",
            format!("let X2 be below 1, e.g. `bezier({x1} {y1} 0.99 {y2})`"),
        ),
    };
    reader.findings.add_help(
        Code::TextNumber,
        span,
        format!("this bezier is infinitely steep at its {at}: the motor would have to jump"),
        help,
    );
}

/// Where the slope dy/dx of the curve with control points (0, 0), (x1, y1), (x2, y2), (1, 1) is not finite, x1 and x2 in [0, 1].
///
/// x′(t) = 3[(1−t)²·x1 + 2t(1−t)·(x2−x1) + t²·(1−x2)] is never below zero there, and zero only
///
/// * at t = 0 where x1 = 0. The slope there is y1/x1, so infinite for y1 ≠ 0. With y1 = 0 too it is y2/x2, and with x2 = 0
///   as well x = t³, so that it is finite for y2 = 0 alone (then the curve is the straight line);
/// * at t = 1 where x2 = 1: the same mirrored, with 1 − x2, 1 − y2, 1 − x1, 1 − y1;
/// * at t = ½ for x1 = 1, x2 = 0, where x′ = 3(1−2t)². y′ has the same double root for y1 = 1, y2 = 0 alone
///   (the straight line once more). For other x1 > x2 the discriminant (x1−x2)² − x1(1−x2) is below zero, since x1 and
///   1 − x2 are both at least x1 − x2 and equal to it only there.
pub(super) fn steep_place(
    x1: &Rational,
    y1: &Rational,
    x2: &Rational,
    y2: &Rational,
) -> Option<Steep> {
    let one = whole(1);
    let steep_end = |x1: &Rational, y1: &Rational, x2: &Rational, y2: &Rational| {
        x1.is_zero() && (!y1.is_zero() || (x2.is_zero() && !y2.is_zero()))
    };
    if steep_end(x1, y1, x2, y2) {
        return Some(Steep::Start);
    }
    if steep_end(&(&one - x2), &(&one - y2), &(&one - x1), &(&one - y1)) {
        return Some(Steep::End);
    }
    if x1.is_one() && x2.is_zero() && !(y1.is_one() && y2.is_zero()) {
        return Some(Steep::Middle);
    }
    None
}

#[cfg(test)]
mod tests {
    use super::{Steep, steep_place};
    use crate::exact::ratio;

    /// Largest slope between neighbours of 2¹⁶ points of the curve, in f64: a slope that is not finite grows with the
    /// square root or the cube root of their number at least, a finite one of these small control points stays small.
    fn steepest(points: [f64; 4]) -> f64 {
        let [x1, y1, x2, y2] = points;
        let at = |p1: f64, p2: f64, t: f64| {
            3.0 * (1.0 - t) * (1.0 - t) * t * p1 + 3.0 * (1.0 - t) * t * t * p2 + t * t * t
        };
        let steps = 1 << 16;
        (0..steps)
            .map(|index| {
                let (t0, t1) = (
                    index as f64 / steps as f64,
                    (index + 1) as f64 / steps as f64,
                );
                let rise = at(y1, y2, t1) - at(y1, y2, t0);
                (rise / (at(x1, x2, t1) - at(x1, x2, t0))).abs()
            })
            .fold(0.0, f64::max)
    }

    #[test]
    fn every_case_of_a_slope_that_is_not_finite_is_found_and_no_other() {
        // Own derivation, checked against differences of the sampled curve.
        let quarters = [0_i32, 1, 2, 4];
        for x1 in quarters {
            for x2 in quarters {
                for y1 in [-4, 0, 1, 4, 8] {
                    for y2 in [-4, 0, 1, 4, 8] {
                        let exact = [x1, y1, x2, y2].map(|value| ratio(i128::from(value), 4));
                        let [ex1, ey1, ex2, ey2] = &exact;
                        let found = steep_place(ex1, ey1, ex2, ey2);
                        let slope = steepest([x1, y1, x2, y2].map(|value| f64::from(value) / 4.0));
                        assert_eq!(
                            found.is_some(),
                            slope > 60.0,
                            "bezier({x1}/4 {y1}/4 {x2}/4 {y2}/4): {found:?}, sampled slope {slope}"
                        );
                    }
                }
            }
        }
    }

    #[test]
    fn the_place_of_the_steep_slope_is_named() {
        let of = |x1, y1, x2, y2| {
            steep_place(&ratio(x1, 1), &ratio(y1, 1), &ratio(x2, 1), &ratio(y2, 1))
        };
        assert_eq!(of(0, 1, 0, 1), Some(Steep::Start));
        assert_eq!(of(1, 0, 1, 0), Some(Steep::End));
        assert_eq!(of(1, 0, 0, 1), Some(Steep::Middle));
        assert_eq!(of(1, 1, 0, 0), None);
        assert_eq!(of(0, 0, 1, 1), None);
    }
}
