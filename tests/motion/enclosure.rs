//! Interval duals hold every value and slope that occurs, and tighten with the square of the width.

use crate::support::{assert_close, kind, plain, shapes};
use phasewright::exact::sine::{cosine_f64, sine_f64};
use phasewright::motion::derivatives::{IntervalDual, Piece, Real, pieces};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use std::sync::LazyLock;

fn config() -> ProptestConfig {
    ProptestConfig {
        cases: 2000,
        rng_seed: RngSeed::Fixed(3),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

static PIECES: LazyLock<Vec<(String, Vec<Piece>)>> = LazyLock::new(|| {
    let shapes = shapes().into_iter();
    shapes.map(|(name, shape)| (name, pieces(&shape))).collect()
});

/// Inside up to the rounding of ends that are not rounded outwards.
fn holds((low, high): (f64, f64), value: f64) -> bool {
    let slack = 1e-13 * (1.0 + value.abs());
    value >= low - slack && value <= high + slack
}

/// The quantities of a piece by number, for both kinds of numbers.
fn quantity<R: Real>(piece: &Piece, which: usize, x: R) -> R {
    match which {
        0 => piece.u(x),
        1 => piece.s(x),
        2 => piece.ds(x),
        _ => piece.dds(x),
    }
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn boxes_hold_their_samples(which in 0_usize..4, shape in any::<prop::sample::Index>(), a in 0.0..=1.0_f64, width in 0.0..=0.3_f64, part in 0.0..=1.0_f64) {
        let (name, pieces) = shape.get(&PIECES);
        for piece in pieces {
            let length = piece.to - piece.from;
            let low = piece.from + a * length;
            let high = (low + width * length).min(piece.to);
            let dual = quantity(piece, which, IntervalDual::variable(low, high));
            let x = low + part * (high - low);
            let value = quantity(piece, which, x);
            prop_assert!(!value.is_finite() || holds(dual.value, value), "{name} {which}: {value} outside {:?}", dual.value);
            let centre = quantity(piece, which, low + (high - low) / 2.0);
            let range = dual.range(centre, high - low);
            prop_assert!(!value.is_finite() || holds(range, value), "{name} {which}: {value} outside {range:?}");
            // The slope from here to any other point of the box is a mean of slopes in it.
            let other = quantity(piece, which, high);
            let run = high - x;
            if run > 1e-4 * length && other.is_finite() && value.is_finite() {
                let mean = (other - value) / run;
                let noise = 1e-14 * (1.0 + other.abs() + value.abs()) / run;
                prop_assert!(mean >= dual.slope.0 - noise && mean <= dual.slope.1 + noise, "{name} {which}: {mean} outside {:?}", dual.slope);
            }
        }
    }

    #[test]
    fn arithmetic_holds_its_samples(a in -5.0..5.0_f64, b in -5.0..5.0_f64, wide in 0.0..2.0_f64, part in 0.0..=1.0_f64) {
        let x = IntervalDual::variable(a, a + wide);
        let (value, shift) = (a + part * wide, IntervalDual::constant(b));
        prop_assert!(holds((x + shift).value, value + b));
        prop_assert!(holds((x - shift).value, value - b));
        prop_assert!(holds((-x).value, -value));
        prop_assert!(holds((x * (x + shift)).value, value * (value + b)));
        let quotient = x / (x + shift);
        let want = value / (value + b);
        prop_assert!(!want.is_finite() || holds(quotient.value, want), "{want} outside {quotient:?}");
        let slope = b / ((value + b) * (value + b));
        prop_assert!(!slope.is_finite() || holds(quotient.slope, slope), "{slope} outside {quotient:?}");
        prop_assert!(holds(x.sin_turns().value, sine_f64(value)));
        prop_assert!(holds(x.cos_turns().value, cosine_f64(value)));
        prop_assert!(holds(x.sin_turns().slope, std::f64::consts::TAU * cosine_f64(value)));
        prop_assert!(holds(x.cos_turns().slope, -std::f64::consts::TAU * sine_f64(value)));
    }
}

#[test]
fn waves_reach_their_peaks_inside_a_box_only() {
    let sine = |low, high| IntervalDual::variable(low, high).sin_turns().value;
    assert_eq!(sine(0.2, 0.3).1.to_bits(), 1.0_f64.to_bits());
    assert!(sine(0.26, 0.3).1 < 1.0 && sine(0.2, 0.24).1 < 1.0);
    assert_eq!(sine(-0.3, -0.2).0.to_bits(), (-1.0_f64).to_bits());
    let cosine = |low, high| IntervalDual::variable(low, high).cos_turns().value;
    assert_eq!(
        cosine(0.9, 1.1),
        (cosine_f64(0.9).min(cosine_f64(1.1)), 1.0)
    );
    assert_eq!(cosine(0.4, 0.6).0.to_bits(), (-1.0_f64).to_bits());
    assert_eq!(cosine(0.0, 7.0), (-1.0, 1.0));
}

#[test]
fn a_division_by_a_box_around_zero_says_nothing_and_nothing_wrong() {
    let x = IntervalDual::variable(-1.0, 2.0);
    let everything = (f64::NEG_INFINITY, f64::INFINITY);
    assert_eq!((IntervalDual::constant(1.0) / x).value, everything);
    assert_eq!((IntervalDual::constant(1.0) / x).slope, everything);
    let range = (IntervalDual::constant(1.0) / x).range(2.0, 3.0);
    assert_eq!(range, everything);
    assert!(!(x / x * x - x / x).value.0.is_nan());
}

/// Halving a box must quarter what the centred form adds to the true range. (For a single wave the plain interval is
/// exact already.)
#[test]
fn the_centred_form_tightens_with_the_square_of_the_width() {
    for name in ["quintic", "septic"] {
        let piece = &pieces(&plain(kind(name)))[0];
        let spare = |width: f64| {
            let (low, high) = (0.07 - width / 2.0, 0.07 + width / 2.0);
            let dual = piece.ds(IntervalDual::variable(low, high));
            let range = dual.range(piece.ds(0.07), width);
            // s′ rises here, so its true range is between the ends.
            (range.1 - range.0) - (piece.ds(high) - piece.ds(low))
        };
        let ratio = spare(0.001) / spare(0.0005);
        assert_close(ratio, 4.0, 0.4, &format!("{name}: excess shrinks by"));
    }
}
