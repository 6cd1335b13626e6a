//! The inside of a move against exact rationals and 55-digit values, at the accuracies it promises.

use crate::support::{
    bezier, decimal, distance, gain_at, inside, kind, plain, power, shapes, skewed, unit_move,
};
use phasewright::exact::fixed::phase_value;
use phasewright::exact::{Rational, ratio, to_f64, whole};
use phasewright::motion::Shape;

/// Law, n, ticks, s, S, from mpmath 1.3: data/laws.txt, written by data/make.py beside it.
fn table() -> Vec<(Shape, String, u64, u64, Rational, Rational)> {
    let lines = include_str!("data/laws.txt").lines();
    lines
        .map(|line| {
            let words: Vec<&str> = line.split(' ').collect();
            let [name, setting, n, ticks, s, gain] = words[..] else {
                panic!("six words: {line}");
            };
            let shape = if name == "bezier" {
                let points: Vec<Rational> = setting.split(',').map(decimal).collect();
                let [x1, y1, x2, y2] = points.try_into().unwrap();
                bezier(x1, y1, x2, y2)
            } else {
                skewed(kind(name), setting.parse().unwrap())
            };
            let (n, ticks) = (n.parse().unwrap(), ticks.parse().unwrap());
            (shape, line.to_owned(), n, ticks, decimal(s), decimal(gain))
        })
        .collect()
}

/// Whether speeds and phases stay below 2⁵⁴: a curve 10⁹ high belongs to a small change of speed, as limits see to it.
fn in_range(change: &Rational, s: &Rational, gain: &Rational) -> bool {
    to_f64(&(change * s)).abs() < power(54) && to_f64(&(change * gain)).abs() < power(54)
}

/// A ladder of sizes: the promise for 2⁴⁰ turns is 2⁻⁶⁴ turn, and small moves are within two steps of 2⁻⁷².
#[test]
fn phases_and_speeds_agree_with_mpmath_at_every_size() {
    for (size, tolerance) in [(0, power(-71)), (20, power(-71)), (40, power(-70))] {
        let change = whole(1 << size);
        for (shape, line, n, ticks, s, gain) in table() {
            if !in_range(&change, &s, &gain) {
                continue;
            }
            let (phase, speed) = inside(&shape, &change, &whole(1), ticks, &whole(0)).at(n);
            let phase = distance(&phase_value(phase), &(gain * &change));
            let speed = distance(&phase_value(speed), &(s * &change));
            assert!(
                phase <= tolerance,
                "2^{size} turns, phase off by {phase:e}: {line}"
            );
            assert!(
                speed <= tolerance,
                "2^{size} turns/s, speed off by {speed:e}: {line}"
            );
        }
    }
}

/// A change of 2⁴⁶ turns in steps of 2⁻⁷² shows errors of s and S down to 2⁻¹¹⁸; argued is 2⁻¹¹⁴.
#[test]
fn laws_themselves_are_within_the_argued_error() {
    let change = whole(1 << 46);
    for (shape, line, n, ticks, s, gain) in table() {
        if !in_range(&change, &s, &gain) {
            continue;
        }
        let (phase, speed) = inside(&shape, &change, &whole(1), ticks, &whole(0)).at(n);
        for (got, want) in [(phase, gain), (speed, s)] {
            let error = distance(&(phase_value(got) / &change), &want);
            assert!(error <= power(-114), "off by {error:e}: {line}");
        }
    }
}

/// Exact s and S of the polynomial laws, from their coefficients by powers of u.
#[test]
fn polynomial_laws_agree_with_exact_rationals_at_every_tick() {
    let laws: [(&str, &[i128]); 4] = [
        ("linear", &[0, 1]),
        ("cubic", &[0, 0, 3, -2]),
        ("quintic", &[0, 0, 0, 10, -15, 6]),
        ("septic", &[0, 0, 0, 0, 35, -84, 70, -20]),
    ];
    let change = whole(1 << 40);
    for (name, coefficients) in laws {
        let rows = inside(&plain(kind(name)), &change, &whole(1), 97, &whole(0));
        for n in 0..=97 {
            let u = ratio(i128::from(n), 97);
            let (mut s, mut gain, mut reach) = (whole(0), whole(0), whole(1));
            for (degree, coefficient) in (0..).zip(coefficients) {
                s += &reach * whole(*coefficient);
                reach *= &u;
                gain += &reach * ratio(*coefficient, degree + 1);
            }
            let (phase, speed) = rows.at(n);
            assert!(
                distance(&phase_value(phase), &(gain * &change)) <= power(-70),
                "{name} S({u})"
            );
            assert!(
                distance(&phase_value(speed), &(s * &change)) <= power(-70),
                "{name} s({u})"
            );
        }
    }
}

#[test]
fn s_curves_agree_with_exact_rationals() {
    let change = whole(1 << 40);
    for (n, d) in [(0, 1), (1, 1_000_000_000_000), (1, 999), (2, 7), (1, 2)] {
        let r = ratio(n, d);
        let rows = inside(
            &Shape::Scurve(r.clone()),
            &change,
            &whole(1),
            1 << 38,
            &whole(0),
        );
        for n in [0, 1, 7, 1 << 20, 1 << 30, (1 << 37) - 1, 1 << 37] {
            let u = ratio(n, 1 << 38);
            let steep = whole(1) - &r;
            let (s, gain) = if u < r {
                (
                    &u * &u / (&r * &steep * whole(2)),
                    &u * &u * &u / (&r * &steep * whole(6)),
                )
            } else {
                let square = (&u * &u - &r * &u) / whole(2) + &r * &r / whole(6);
                ((&u - &r / whole(2)) / &steep, square / &steep)
            };
            // The second half is the first seen from the end.
            let n = u64::try_from(n).unwrap();
            let mirrored = (1 << 38) - n;
            let far = (
                ratio(1, 2) - (whole(1) - (whole(1) - &u)) + &gain,
                whole(1) - &s,
            );
            for (tick, gain, s) in [(n, gain, s), (mirrored, far.0, far.1)] {
                let (phase, speed) = rows.at(tick);
                assert!(
                    distance(&phase_value(phase), &(gain * &change)) <= power(-70),
                    "r {r}, tick {tick}"
                );
                assert!(
                    distance(&phase_value(speed), &(s * &change)) <= power(-70),
                    "r {r}, tick {tick}"
                );
            }
        }
    }
}

#[test]
fn the_correction_is_a_bump_of_speed_with_its_exact_phase() {
    let (correction, time) = (ratio(-355, 113), ratio(7, 2));
    let rows = inside(&plain(kind("quintic")), &whole(0), &time, 61, &correction);
    for n in 0..=61 {
        let u = ratio(i128::from(n), 61);
        let rest = whole(1) - &u;
        let inner = whole(35) - &u * (whole(84) - &u * (whole(70) - &u * whole(20)));
        let phase = &correction * &u * &u * &u * &u * inner;
        let hump = &u * &rest;
        let speed = &correction / &time * whole(140) * &hump * &hump * &hump;
        let got = rows.at(n);
        assert!(
            distance(&phase_value(got.0), &phase) <= power(-71),
            "phase at {u}"
        );
        assert!(
            distance(&phase_value(got.1), &speed) <= power(-71),
            "speed at {u}"
        );
    }
}

#[test]
fn ends_are_exact_and_nothing_lies_past_them() {
    for (name, shape) in shapes() {
        let rows = unit_move(&shape, 1000);
        assert_eq!(rows.at(0), (0, 0), "{name}");
        assert_eq!(rows.speed(1000), 1 << 72, "{name}");
        let gap = distance(&phase_value(rows.phase(1000)), &shape.integral());
        assert!(gap <= power(-73), "{name}: S(1) off by {gap:e}");
        assert_eq!(rows.at(1000), rows.at(5000), "{name}");
        assert_eq!(rows.at(437), (rows.phase(437), rows.speed(437)), "{name}");
    }
}

/// The planned end uses S(1) as a rational, the rows as fixed point: they may not differ by what anyone can see.
#[test]
fn the_integral_is_the_one_that_rows_reach() {
    for (name, shape) in shapes() {
        let change = whole(1 << 50);
        let rows = inside(&shape, &change, &whole(1), 10, &whole(0));
        let gap = to_f64(&(phase_value(rows.phase(10)) / &change - shape.integral())).abs();
        assert!(gap < power(-100), "{name}: off by {gap:e}");
    }
}

#[test]
fn a_hold_and_equal_speeds_add_nothing() {
    for shape in [Shape::Hold, plain(kind("septic"))] {
        let rows = inside(&shape, &whole(0), &whole(1), 100, &whole(0));
        assert_eq!(rows.at(50), (0, 0));
    }
    assert_eq!(Shape::Hold.integral(), ratio(1, 2));
    assert_eq!(gain_at(&Shape::Hold, 7, 9), whole(0));
}

/// Numbers that no show reaches: the answers mean nothing, but there are answers.
#[test]
fn absurd_moves_do_not_panic() {
    let huge = whole(i128::MAX) * whole(i128::MAX);
    for (_, shape) in shapes() {
        for change in [huge.clone(), -huge.clone(), ratio(1, i128::MAX)] {
            let rows = inside(&shape, &change, &huge, u64::MAX, &huge);
            for n in [0, 1, u64::MAX / 2, u64::MAX] {
                let _ = rows.at(n);
            }
        }
        let _ = inside(&shape, &whole(1), &whole(0), 1, &whole(1)).at(1);
    }
    for skew in [ratio(0, 1), ratio(1, 1), ratio(-3, 1), ratio(1, 1_000_000)] {
        let _ = unit_move(&skewed(kind("cycloidal"), skew), 10).at(3);
    }
}
