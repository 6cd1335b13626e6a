//! The root finder: what it promises is the residual.

use crate::power;
use num_bigint::BigInt;
use phasewright::exact::root::{ROOT_BITS, RisingCubic, root_steps};
use phasewright::exact::{Rational, ratio, to_f64, whole};

/// The cubic of a timing function with these control points across.
fn across(x1: &Rational, x2: &Rational) -> [Rational; 3] {
    let (a, b) = (x1 * whole(3), x2 * whole(3));
    [a.clone(), &b - &a * whole(2), whole(1) + &a - &b]
}

#[test]
fn residuals_are_below_the_promise_even_where_the_curve_is_flat() {
    let tiny = ratio(1, 1_000_000_000_000_000);
    let points = [
        (ratio(1, 4), ratio(1, 4)),
        (whole(0), ratio(58, 100)),
        (whole(0), whole(0)),
        (whole(1), whole(1)),
        // Flat in the middle, and as good as flat.
        (whole(1), whole(0)),
        (whole(1) - &tiny, tiny.clone()),
        (tiny.clone(), whole(1) - &tiny),
        (ratio(1, 3), ratio(2, 3)),
    ];
    let targets = [
        (1, 3),
        (1, 2),
        (1, 7),
        (1, 1 << 38),
        ((1 << 38) - 1, 1 << 38),
        (500_001, 1_000_000),
    ];
    for (x1, x2) in &points {
        let coefficients = across(x1, x2);
        let cubic = RisingCubic::new(&coefficients);
        for (n, d) in targets {
            let target = root_steps(&ratio(n, d));
            let t = Rational::new(cubic.parameter(&target), BigInt::from(1) << ROOT_BITS);
            assert!(t >= whole(0) && t <= whole(1));
            let [c1, c2, c3] = &coefficients;
            let x = ((c3 * &t + c2) * &t + c1) * &t;
            let residual = to_f64(&(x - ratio(n, d))).abs();
            assert!(
                residual < power(-250),
                "x1 {x1}, x2 {x2}, target {n}/{d}: residual {residual:e}"
            );
        }
    }
}

#[test]
fn ends_are_exact_and_targets_outside_are_brought_in() {
    let cubic = RisingCubic::new(&across(&ratio(1, 4), &ratio(1, 4)));
    let one = BigInt::from(1) << ROOT_BITS;
    assert_eq!(cubic.parameter(&BigInt::from(0)), BigInt::from(0));
    assert_eq!(cubic.parameter(&BigInt::from(-5)), BigInt::from(0));
    assert_eq!(cubic.parameter(&one), one);
    assert_eq!(cubic.parameter(&(&one * 2)), one);
}
