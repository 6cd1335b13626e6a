//! Sine and cosine against 50-digit values from mpmath 1.3 (data/sine.txt, written by data/make.py beside it), π against
//! Machin's formula.

use crate::{assert_close, power};
use num_bigint::BigInt;
use phasewright::exact::fixed::Unit;
use phasewright::exact::sine::{cosine, cosine_f64, pi, sine, sine_f64};
use phasewright::exact::{Rational, from_f64, ratio, to_f64, whole};

/// The exact value of a decimal such as −0.125.
fn decimal(text: &str) -> Rational {
    let (head, tail) = text.split_once('.').unwrap_or((text, ""));
    let digits: BigInt = format!("{head}{tail}").parse().unwrap();
    let scale = BigInt::from(10).pow(u32::try_from(tail.len()).unwrap());
    Rational::new(digits, scale)
}

/// Angle, sine, cosine.
fn table() -> Vec<(Rational, Rational, Rational)> {
    let lines = include_str!("data/sine.txt").lines();
    lines
        .map(|line| {
            let mut words = line.split(' ');
            let mut next = || words.next().unwrap();
            let angle = Rational::new(next().parse().unwrap(), next().parse().unwrap());
            (angle, decimal(next()), decimal(next()))
        })
        .collect()
}

#[test]
fn sine_and_cosine_agree_with_mpmath() {
    // Argued: 2⁻¹¹⁷ for the routine, and 2π·2⁻¹²¹ for an angle that is not a whole number of steps.
    let tolerance = power(-117) + power(-118);
    for (angle, want_sine, want_cosine) in table() {
        let unit = Unit::nearest(&angle);
        assert_close(
            &sine(unit).to_rational(),
            &want_sine,
            tolerance,
            &format!("sin {angle}"),
        );
        assert_close(
            &cosine(unit).to_rational(),
            &want_cosine,
            tolerance,
            &format!("cos {angle}"),
        );
    }
}

#[test]
fn quarter_turns_are_exact() {
    for (quarters, want) in [
        (0, 0),
        (1, 1),
        (2, 0),
        (3, -1),
        (4, 0),
        (-1, -1),
        (-2, 0),
        (-3, 1),
        (9, 1),
    ] {
        let angle = Unit::nearest(&ratio(quarters, 4));
        assert_eq!(
            sine(angle).to_rational(),
            whole(want),
            "sine of {quarters}/4"
        );
        assert_eq!(
            cosine(angle - Unit::nearest(&ratio(1, 4))).to_rational(),
            whole(want)
        );
    }
}

#[test]
fn floats_are_within_a_unit_in_the_last_place() {
    for (angle, ..) in table() {
        // The table's value belongs to the exact angle; the sine of the float next to it differs by 2π times the gap.
        let turns = to_f64(&angle);
        let gap = to_f64(&(from_f64(turns).unwrap() - &angle)) * std::f64::consts::TAU;
        let (want_sine, want_cosine) =
            (to_f64(&decimal_of(&angle).0), to_f64(&decimal_of(&angle).1));
        // 2⁻⁵² of the value is at most one unit; the gap's second order is below 2⁻⁹⁰.
        let near = |got: f64, want: f64, why: &str| {
            let tolerance = want.abs() * power(-52) + power(-90);
            let got = from_f64(got).unwrap();
            assert_close(
                &got,
                &from_f64(want).unwrap(),
                tolerance,
                &format!("{why} {turns}"),
            );
        };
        near(sine_f64(turns), want_sine + want_cosine * gap, "sine");
        near(cosine_f64(turns), want_cosine - want_sine * gap, "cosine");
    }
}

fn decimal_of(angle: &Rational) -> (Rational, Rational) {
    let found = table().into_iter().find(|(known, ..)| known == angle);
    found.map(|(_, sine, cosine)| (sine, cosine)).unwrap()
}

#[test]
fn tiny_angles_keep_their_relative_accuracy() {
    for exponent in [-1074, -500, -121, -80, -60, -31, -30, -29, -20] {
        let turns = power(exponent);
        // x − x³/6 in f64: the next term is x⁵/120 < 2⁻⁸³·x here.
        let x = std::f64::consts::TAU * turns;
        let want = x - x * x * x / 6.0;
        for sign in [1.0, -1.0] {
            let error = (sine_f64(sign * turns) - sign * want).abs();
            assert!(
                error <= want * power(-51) + power(-1073),
                "sine of 2^{exponent}: off by {error:e}"
            );
        }
    }
}

#[test]
fn huge_and_undefined_angles_have_answers() {
    // Every float from 2⁵³ up is a whole number of turns.
    for turns in [power(53), -power(60) * 3.0, power(200), f64::MAX] {
        assert_eq!(sine_f64(turns).to_bits() << 1, 0, "{turns}");
        assert_eq!(cosine_f64(turns).to_bits(), 1.0_f64.to_bits(), "{turns}");
    }
    assert_eq!(sine_f64(power(50) + 0.25).to_bits(), 1.0_f64.to_bits());
    assert_eq!(cosine_f64(-power(51) - 0.5).to_bits(), (-1.0_f64).to_bits());
    for turns in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        assert!(sine_f64(turns).is_nan() && cosine_f64(turns).is_nan());
    }
}

#[test]
fn pi_agrees_with_machins_formula() {
    // π/4 = 4·arctan(1/5) − arctan(1/239), John Machin 1706; from memory. 200 terms leave less than 25⁻²⁰⁰.
    let arctan = |inverse: i128| -> Rational {
        let x = ratio(1, inverse);
        let square = &x * &x;
        let mut power = x;
        let mut sum = whole(0);
        for term in 0..200 {
            let part = &power / whole(2 * term + 1);
            sum = if term % 2 == 0 {
                sum + part
            } else {
                sum - part
            };
            power *= &square;
        }
        sum
    };
    let want = (arctan(5) * whole(4) - arctan(239)) * whole(4);
    let short = want - pi();
    assert!(
        short > whole(0) && to_f64(&short) < power(-256),
        "cut off after 256 bits"
    );
}
