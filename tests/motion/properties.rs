//! What is true of every law at every tick.

use crate::support::{SYMMETRIC, plain, power, shapes, skewed, unit_move};
use phasewright::exact::fixed::phase_value;
use phasewright::exact::{ratio, to_f64};
use phasewright::motion::Shape;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

fn config() -> ProptestConfig {
    ProptestConfig {
        cases: 80,
        rng_seed: RngSeed::Fixed(2),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

/// A classical law with any skew, or an s-curve with any share.
fn classical() -> impl Strategy<Value = Shape> {
    prop_oneof![
        (0..SYMMETRIC.len(), 5_i128..=95).prop_map(|(law, skew)| {
            let (name, kind) = &SYMMETRIC[law];
            if *name == "linear" {
                plain(kind.clone())
            } else {
                skewed(kind.clone(), ratio(skew, 100))
            }
        }),
        (0_i128..=500_000).prop_map(|share| Shape::Scurve(ratio(share, 1_000_000))),
    ]
}

proptest! {
    #![proptest_config(config())]

    /// Exact on the integers of the rows: a law may not turn back by a single step of 2⁻⁷².
    #[test]
    fn speed_never_falls(shape in classical(), ticks in 2_u64..1000) {
        let rows = unit_move(&shape, ticks);
        let mut last = 0;
        for n in 0..=ticks {
            let speed = rows.speed(n);
            prop_assert!(speed >= last, "{shape:?} falls at {n}/{ticks}");
            last = speed;
        }
        prop_assert_eq!(last, 1 << 72);
    }

    /// Between two ticks a rising s lies between its ends, so S grows by at least and at most their product with the time.
    #[test]
    fn phase_grows_as_speed_says(shape in classical(), ticks in 1_u64..400) {
        let rows = unit_move(&shape, ticks);
        let time = ratio(1, i128::from(ticks));
        for n in 0..ticks {
            let (here, there) = (rows.at(n), rows.at(n + 1));
            let grown = phase_value(there.0 - here.0);
            let (least, most) = (phase_value(here.1) * &time, phase_value(there.1) * &time);
            // Phases and speeds are each rounded to 2⁻⁷².
            let slack = phase_value(3);
            prop_assert!(grown >= &least - &slack && grown <= most + slack, "{:?} at {}/{}", shape, n, ticks);
        }
    }

    /// Simpson's rule over two ticks: exact to a fourth derivative, which 0.02 of a stretch of these laws keeps small.
    #[test]
    fn phase_is_the_integral_of_speed(law in 0..SYMMETRIC.len(), n in 0_u64..4998) {
        let rows = unit_move(&plain(SYMMETRIC[law].1.clone()), 5000);
        let [a, b, c] = [0, 1, 2].map(|step| rows.at(n + step));
        let grown = to_f64(&phase_value(c.0 - a.0));
        let simpson = to_f64(&phase_value(a.1 + 4 * b.1 + c.1)) / 15_000.0;
        // h⁵/90·max|s⁗| with h = 1/5000: s⁗ ≤ 1000 inside a stretch; across a joint where s‴ jumps by J ≤ 120 the error is
        // below h⁴·J.
        let tolerance = 2.0e-4_f64.powi(4) * 120.0;
        prop_assert!((grown - simpson).abs() <= tolerance, "{grown:e} {simpson:e}");
    }

    /// s(u) + s(1−u) = 1 without skew; with one, the law with the other skew is its mirror image.
    #[test]
    fn mirrored_skews_are_mirror_images(law in 1..SYMMETRIC.len(), skew in 5_i128..=95, ticks in 1_u64..100_000, part in 0_u64..100_000) {
        let n = part % (ticks + 1);
        let kind = &SYMMETRIC[law].1;
        let one = unit_move(&skewed(kind.clone(), ratio(skew, 100)), ticks);
        let two = unit_move(&skewed(kind.clone(), ratio(100 - skew, 100)), ticks);
        let sum = one.speed(n) + two.speed(ticks - n);
        // Each is rounded to the nearest step of 2⁻⁷².
        prop_assert!((sum - (1 << 72)).abs() <= 1, "{sum}");
    }
}

#[test]
fn unskewed_laws_gain_one_half() {
    for (name, kind) in SYMMETRIC {
        assert_eq!(plain(kind).integral(), ratio(1, 2), "{name}");
    }
    assert_eq!(Shape::Scurve(ratio(1, 7)).integral(), ratio(1, 2));
}

/// S(1) against the mean of s over many ticks, for every shape there is: the midpoint rule with 2000 cells.
#[test]
fn the_integral_is_the_mean_of_the_law() {
    for (name, shape) in shapes() {
        let rows = unit_move(&shape, 4000);
        let sum: i128 = (0..2000).map(|cell| rows.speed(2 * cell + 1)).sum();
        let mean = to_f64(&phase_value(sum)) / 2000.0;
        // h²/24·(s′(1) − s′(0)) and jumps of s′, with h = 1/2000 and slopes up to 1000.
        let error = (mean - to_f64(&shape.integral())).abs();
        assert!(
            error <= 1000.0 / 24.0 * 2000.0_f64.powi(-2) + power(-60),
            "{name}: {error:e}"
        );
    }
}
