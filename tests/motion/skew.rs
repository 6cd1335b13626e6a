//! Skewed laws: the middle is where it is asked for, the slope stays continuous and as steep, the curvature is stretched.

use crate::support::{SYMMETRIC, assert_close, gain_at, kind, skewed, speed_at};
use phasewright::exact::{ratio, to_f64};
use phasewright::motion::derivatives::pieces;

/// H = ∫₀^½ s₀ of the laws, closed forms from Norton's displacement diagrams (from memory), evaluated here in f64.
fn half_integral(name: &str) -> f64 {
    use std::f64::consts::PI;
    match name {
        "cubic" => 3.0 / 32.0,
        "quintic" => 5.0 / 64.0,
        "septic" => 35.0 / 512.0,
        "harmonic" => 0.25 - 1.0 / (2.0 * PI),
        "cycloidal" => 0.125 - 1.0 / (2.0 * PI * PI),
        "modified-sine" => (PI * PI + 6.0 * PI - 14.0) / (8.0 * PI * (PI + 4.0)),
        "modified-trapezoid" => {
            let top = 13.0 * PI.powi(3) + 48.0 * PI * PI - 24.0 * PI - 48.0;
            top / (192.0 * PI * PI * (PI + 2.0))
        }
        _ => panic!("no half integral for {name}"),
    }
}

#[test]
fn the_integral_follows_from_the_half_integral() {
    for (name, law) in &SYMMETRIC[1..] {
        for percent in [5, 30, 50, 62, 95] {
            let skew = f64::from(percent) / 100.0;
            let shape = skewed(law.clone(), ratio(i128::from(percent), 100));
            let want = 1.0 - skew - 4.0 * half_integral(name) * (1.0 - 2.0 * skew);
            let why = format!("{name} skew {percent} %");
            assert_close(to_f64(&shape.integral()), want, 1e-15, &why);
        }
    }
}

#[test]
fn a_rational_half_integral_gives_an_exact_integral() {
    // 1 − 3/10 − 4·(5/64)·(4/10) = 23/40.
    assert_eq!(
        skewed(kind("quintic"), ratio(3, 10)).integral(),
        ratio(23, 40)
    );
    // 1 − 3/10 − 4·(35/512)·(4/10) = 189/320.
    assert_eq!(
        skewed(kind("septic"), ratio(3, 10)).integral(),
        ratio(189, 320)
    );
}

#[test]
fn the_middle_is_where_it_is_asked_for() {
    for (name, law) in &SYMMETRIC[1..] {
        for percent in [5_u64, 30, 95] {
            let skew = ratio(i128::from(percent), 100);
            let shape = skewed(law.clone(), skew.clone());
            // s(λ) = 2λ·s₀(½) = λ, and S(λ) = 4λ²·H.
            let s = to_f64(&speed_at(&shape, percent, 100));
            assert_close(s, to_f64(&skew), 1e-16, &format!("{name} s at its middle"));
            let want = 4.0 * to_f64(&skew).powi(2) * half_integral(name);
            let gain = to_f64(&gain_at(&shape, percent, 100));
            assert_close(gain, want, 1e-15, &format!("{name} S at its middle"));
        }
    }
}

/// Peak slope Cv at u = λ for every skew, peak curvature Ca/2λ before and Ca/2(1−λ) after.
#[test]
fn the_steepest_slope_stays_and_the_curvature_is_stretched() {
    for (name, law) in &SYMMETRIC[1..] {
        let plain = pieces(&skewed(law.clone(), ratio(1, 2)));
        let peak = |before: bool, pieces: &[phasewright::motion::derivatives::Piece], at: f64| {
            let side = pieces
                .iter()
                .filter(|piece| (piece.u(piece.to) <= at + 1e-12) == before);
            let samples = side.flat_map(|piece| {
                (0..=2000).map(move |k| {
                    let x = piece.from + (piece.to - piece.from) * f64::from(k) / 2000.0;
                    (piece.ds(x), piece.dds(x).abs())
                })
            });
            samples.fold((0.0_f64, 0.0_f64), |one, two| {
                (one.0.max(two.0), one.1.max(two.1))
            })
        };
        let (cv, ca) = peak(true, &plain, 0.5);
        for percent in [5, 30, 80] {
            let skew = f64::from(percent) / 100.0;
            let pieces = pieces(&skewed(law.clone(), ratio(i128::from(percent), 100)));
            for (before, length) in [(true, skew), (false, 1.0 - skew)] {
                let (slope, curvature) = peak(before, &pieces, skew);
                assert_close(slope, cv, 1e-12, &format!("{name} {percent} %: slope"));
                let want = ca / (2.0 * length);
                assert_close(
                    curvature,
                    want,
                    1e-9 * want,
                    &format!("{name} {percent} %: curvature"),
                );
            }
        }
    }
}
