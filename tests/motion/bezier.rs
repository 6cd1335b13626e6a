//! The Bézier timing functions.
//!
//! Source of the definition and of the four keywords: W3C CSS Easing Functions Level 1 (Candidate Recommendation Draft
//! 2023-02-13). The sampled values are computed from that definition outside this project; the integrals are exact.

use crate::support::{assert_close, gain_at, plain, speed_at};
use phasewright::exact::{Rational, ratio, to_f64};
use phasewright::motion::{LawKind, Shape};

/// Half a unit in the tenth decimal, what a value printed with ten decimals promises.
const TEN_DIGITS: f64 = 0.6e-10;

fn hundredths(x1: i128, y1: i128, x2: i128, y2: i128) -> Shape {
    let [x1, y1, x2, y2] = [x1, y1, x2, y2].map(|value| ratio(value, 100));
    plain(LawKind::Bezier { x1, y1, x2, y2 })
}

/// Keyword, its curve, y at 0.1, 0.25, 0.5, 0.75, and ∫₀¹ y dx.
fn keywords() -> [(&'static str, Shape, [f64; 4], Rational); 4] {
    [
        (
            "ease",
            hundredths(25, 10, 25, 100),
            [0.0947963057, 0.4085105914, 0.8024033876, 0.9604589783],
            ratio(66_875, 100_000),
        ),
        (
            "ease-in",
            hundredths(42, 0, 100, 100),
            [0.0170266097, 0.0934646507, 0.3153568126, 0.6218618692],
            ratio(374, 1000),
        ),
        (
            "ease-out",
            hundredths(0, 0, 58, 100),
            [0.1605721542, 0.3781381308, 0.6846431874, 0.9065353493],
            ratio(626, 1000),
        ),
        (
            "ease-in-out",
            hundredths(42, 0, 58, 100),
            [0.0197224536, 0.1291619310, 0.5, 0.8708380690],
            ratio(1, 2),
        ),
    ]
}

#[test]
fn css_keywords_have_their_values() {
    for (name, shape, values, _) in keywords() {
        for (n, want) in [2, 5, 10, 15].into_iter().zip(values) {
            let got = to_f64(&speed_at(&shape, n, 20));
            assert_close(got, want, TEN_DIGITS, &format!("{name} y({n}/20)"));
        }
    }
}

#[test]
fn css_keywords_have_their_exact_integrals() {
    for (name, shape, _, integral) in keywords() {
        assert_eq!(shape.integral(), integral, "{name}");
        let got = to_f64(&(gain_at(&shape, 20, 20) - integral));
        assert_close(got, 0.0, 2.0_f64.powi(-72), &format!("{name} S(1) inside"));
    }
}
