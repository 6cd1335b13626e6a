//! Sampled values, half integrals and peaks of the cam laws.
//!
//! Sources: Rothbart (ed.), *Cam Design Handbook*, 2004, App. B (peak factors, seen in extracts); Norton, *Cam Design and
//! Manufacturing Handbook*, 2009, ch. 3 (from memory). The ten-digit values are computed from those formulas outside this
//! project, since printed tables carry few digits and some misprints.

use crate::support::{assert_close, gain_at, kind, plain, speed_at};
use phasewright::exact::{ratio, to_f64};
use phasewright::motion::Shape;

/// Half a unit in the tenth decimal, what a value printed with ten decimals promises.
const TEN_DIGITS: f64 = 0.6e-10;

/// Law, H = ∫₀^½ s, s(0.1), s(0.25), s(0.4).
const SAMPLES: [(&str, f64, f64, f64, f64); 7] = [
    (
        "harmonic",
        0.0908450569,
        0.0244717419,
        0.1464466094,
        0.3454915028,
    ),
    ("cubic", 0.09375, 0.028, 0.15625, 0.352),
    (
        "modified-sine",
        0.0820064668,
        0.0106972128,
        0.1171784846,
        0.3278651875,
    ),
    ("quintic", 0.078125, 0.00856, 0.103515625, 0.31744),
    (
        "modified-trapezoid",
        0.0773287574,
        0.0094590641,
        0.1044801940,
        0.3094590641,
    ),
    (
        "cycloidal",
        0.0743394082,
        0.0064510716,
        0.0908450569,
        0.3064510716,
    ),
    ("septic", 0.068359375, 0.002728, 0.0705566406, 0.289792),
];

#[test]
fn laws_have_their_published_values() {
    for (name, _, tenth, quarter, two_fifths) in SAMPLES {
        let shape = plain(kind(name));
        for (n, want) in [(10, tenth), (25, quarter), (40, two_fifths)] {
            let got = to_f64(&speed_at(&shape, n, 100));
            assert_close(got, want, TEN_DIGITS, &format!("{name} s({n}/100)"));
        }
    }
}

#[test]
fn laws_have_their_published_half_integrals() {
    for (name, half, ..) in SAMPLES {
        let got = to_f64(&gain_at(&plain(kind(name)), 50, 100));
        assert_close(got, half, TEN_DIGITS, &format!("{name} S(1/2)"));
    }
}

/// Constant acceleration up, then down: the parabolic law (Rothbart, p. 35, eqs 2.17–2.20), here `scurve` at its softest.
#[test]
fn the_s_curve_without_a_plateau_is_the_parabolic_law() {
    let shape = Shape::Scurve(ratio(1, 2));
    for (n, want) in [(10, 0.02), (25, 0.125), (40, 0.32)] {
        let got = to_f64(&speed_at(&shape, n, 100));
        assert_close(got, want, 1e-16, &format!("s({n}/100)"));
    }
    let half = to_f64(&gain_at(&shape, 50, 100));
    assert_close(half, 1.0 / 12.0, 1e-16, "S(1/2)");
}
