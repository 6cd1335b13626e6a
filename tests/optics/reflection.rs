//! Reflection and the cone of one tilted mirror against published values and closed forms.

use crate::assert_close;
use phasewright::optics::trace::{Deflect, Geometry, Trace, Vec3, reflect};
use phasewright::rig::{Pair, RotorId};
use std::f64::consts::FRAC_1_SQRT_2;

fn geometry(tilt: [f64; 2], incidence: f64, spacing: f64, throw: f64) -> Geometry {
    Geometry {
        deflect: Deflect::Spinning,
        angle: Pair {
            a: tilt[0].to_radians(),
            b: tilt[1].to_radians(),
        },
        incidence: Pair {
            a: incidence.to_radians(),
            b: incidence.to_radians(),
        },
        spacing,
        throw,
    }
}

/// r = d − 2(d·n)n: Hecht, *Optics*; Pharr et al., *Physically Based Rendering* (both from memory). The three examples are
/// worked by hand.
#[test]
#[allow(
    clippy::approx_constant,
    reason = "published digits, which happen to be those of a constant"
)]
fn reflection_follows_the_law() {
    let (sin, cos) = 3_f64.to_radians().sin_cos();
    let cases = [
        (
            (0.0, 0.0, -1.0),
            (1.0 / 3.0, 2.0 / 3.0, 2.0 / 3.0),
            (4.0 / 9.0, 8.0 / 9.0, -1.0 / 9.0),
        ),
        (
            (0.0, 0.0, -1.0),
            (sin, 0.0, cos),
            (0.104_528_463, 0.0, 0.994_521_895),
        ),
        (
            (FRAC_1_SQRT_2, 0.0, -FRAC_1_SQRT_2),
            (0.0, sin, cos),
            (0.707_106_78, 0.073_912_79, 0.703_233_18),
        ),
    ];
    for (d, n, want) in cases {
        let got = reflect(Vec3::new(d.0, d.1, d.2), Vec3::new(n.0, n.1, n.2));
        assert_close(got.x, want.0, 5e-9, "x");
        assert_close(got.y, want.1, 5e-9, "y");
        assert_close(got.z, want.2, 5e-9, "z");
    }
}

/// Across the plane of incidence the light turns by exactly 2·asin(cos β·sin τ), in the plane by exactly 2τ (derived, and
/// checked in the table that the values come from); the wall's ellipse has the ratio of the tangents.
#[test]
fn the_cone_of_one_mirror_is_the_published_ellipse() {
    // incidence, tilt, angle across in degrees, ratio of the ellipse on the wall
    let table = [
        (10.0, 1.0, 1.969_612_490, 0.984_794_2),
        (22.5, 3.0, 5.542_905_925, 0.923_352_6),
        (30.0, 3.0, 5.195_558_390, 0.865_231_0),
        (45.0, 1.0, 1.414_177_661, 0.706_999_1),
        (45.0, 3.0, 4.241_670_935, 0.706_135_1),
    ];
    for (incidence, tilt, across, ratio) in table {
        // The second mirror alone, so that no spacing comes in.
        let trace = Trace::new(&geometry([0.0, tilt], incidence, 0.0, 1.0)).unwrap();
        let up = trace.after_b(Pair { a: 0.0, b: 0.25 }).1;
        let angle = (-up.z).acos().to_degrees();
        assert_close(angle, across, 1e-9, "across the plane of incidence");
        let side = trace.after_b(Pair { a: 0.0, b: 0.0 }).1;
        assert_close(
            (-side.z).acos().to_degrees(),
            2.0 * tilt,
            1e-9,
            "in the plane",
        );
        // The ellipse's upright semi-axis, unit throw; its level one is tan 2τ.
        let highest = (0..20_000)
            .map(|step| f64::from(step) / 20_000.0)
            .map(|phase| trace.spot(Pair { a: 0.0, b: phase }).y)
            .fold(0.0, f64::max);
        let got = highest / (2.0 * tilt).to_radians().tan();
        // Seven digits are published; the first of them is one too low in the last.
        assert_close(got, ratio, 1.5e-7, "ratio of the ellipse");
    }
}

/// A mirror alone throws right, up, left, down at phase 0, ¼, ½, ¾, whichever of the two it is.
#[test]
fn quarters_point_right_up_left_down() {
    for tilt in [[2.0, 0.0], [0.0, 2.0]] {
        let trace = Trace::new(&geometry(tilt, 20.0, 0.05, 3.0)).unwrap();
        for (quarter, (x, y)) in [(1, 0), (0, 1), (-1, 0), (0, -1)].into_iter().enumerate() {
            let phase = quarter as f64 / 4.0;
            let spot = trace.spot(Pair { a: phase, b: phase });
            let size = spot.to_vec2().hypot();
            assert!(size > 0.15, "a spot far from the middle: {spot:?}");
            // Up and down are bent aside by second order, τ²·sin 2β.
            assert_close(spot.x / size, f64::from(x), 0.03, "x");
            assert_close(spot.y / size, f64::from(y), 0.03, "y");
        }
    }
}

/// How far the sum of two turning vectors is from the trace, as a share of the full radius 4τ: two facing mirrors, square
/// on, spacing ignored, the second turning 1.7 times as fast (values of a second implementation).
#[test]
fn the_first_order_sum_errs_as_published() {
    for (tilt, share) in [
        (0.5, 4.06e-4),
        (1.0, 1.63e-3),
        (2.0, 6.55e-3),
        (3.0, 1.49e-2),
    ] {
        let trace = Trace::new(&geometry([tilt, tilt], 0.0, 0.0, 1.0)).unwrap();
        let angle = 2.0 * tilt.to_radians();
        let mut largest: f64 = 0.0;
        for step in 0..4000 {
            let turn = f64::from(step) / 400.0;
            let phases = Pair {
                a: turn,
                b: 1.7 * turn,
            };
            let spot = trace.spot(phases);
            let (sin_a, cos_a) = (phases.a * std::f64::consts::TAU).sin_cos();
            let (sin_b, cos_b) = (phases.b * std::f64::consts::TAU).sin_cos();
            let x = spot.x - angle * (cos_a + cos_b);
            let y = spot.y - angle * (sin_a + sin_b);
            largest = largest.max(x.hypot(y));
        }
        // Three digits are published, and the largest of 4000 spots may miss the peak by a little.
        assert_close(largest / (2.0 * angle), share, 0.005 * share, "share");
    }
}

#[test]
fn geometry_that_cannot_be_is_refused_with_its_reason() {
    use phasewright::optics::trace::Impossible;
    let refused =
        |tilt, incidence, throw| Trace::new(&geometry(tilt, incidence, 0.03, throw)).err();
    let edge = Some(Impossible::Grazes(RotorId::A));
    assert_eq!(refused([4.0, 4.0], 87.0, 4.0), edge);
    let second = Some(Impossible::Grazes(RotorId::B));
    assert_eq!(refused([20.0, 10.0], 45.0, 4.0), second);
    assert_eq!(
        refused([23.0, 23.0], 0.0, 4.0),
        Some(Impossible::MissesWall)
    );
    assert_eq!(refused([4.0, 4.0], 10.0, 0.0), Some(Impossible::NoNumber));
    assert_eq!(
        refused([4.0, f64::NAN], 10.0, 4.0),
        Some(Impossible::NoNumber)
    );
    assert_eq!(refused([4.0, 4.0], 10.0, 4.0), None);
}
