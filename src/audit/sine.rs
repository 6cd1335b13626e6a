//! Sine and cosine of a share of π, for the auditor alone: Taylor's series about 33 tabulated angles.

use super::double::Double;
use std::sync::LazyLock;

/// Angles of the table to one right angle.
const STEPS: usize = 32;

/// Terms of each series about a tabulated angle: the first one left out is below (π/128)¹⁵/15! < 2⁻¹²⁰.
const NEAR_TERMS: usize = 7;

/// Terms of each series from zero up to a right angle: the first one left out is below (π/2)³⁵/35! < 2⁻¹⁰⁸.
const FAR_TERMS: usize = 17;

static TABLE: LazyLock<Vec<(Double, Double)>> = LazyLock::new(|| {
    (0..=STEPS)
        .map(|index| {
            let share = Double::from_whole(index as u64).scaled(0.5 / STEPS as f64);
            series(share * Double::PI, FAR_TERMS)
        })
        .collect()
});

static INVERSES: LazyLock<Vec<Double>> = LazyLock::new(|| {
    (0..=2 * FAR_TERMS as u64 + 1)
        .scan(Double::ONE, |factorial, n| {
            *factorial = *factorial * Double::from_whole(n.max(1));
            Some(Double::ONE / *factorial)
        })
        .collect()
});

/// (sin x, cos x) by the first `terms` terms of x − x³/3! + … and 1 − x²/2! + ….
fn series(x: Double, terms: usize) -> (Double, Double) {
    let square = -(x * x);
    let inverse = |n: usize| INVERSES.get(n).copied().unwrap_or(Double::ZERO);
    let mut sine = Double::ZERO;
    let mut cosine = Double::ZERO;
    for term in (0..terms).rev() {
        sine = sine * square + inverse(2 * term + 1);
        cosine = cosine * square + inverse(2 * term);
    }
    (sine * x, cosine)
}

/// (sin πy, cos πy) for y in [0, ½], to about 2⁻¹⁰⁰.
pub(super) fn sine_cosine(y: Double) -> (Double, Double) {
    let nearest = (y.leading() * (2 * STEPS) as f64).round();
    let index = (nearest.max(0.0) as usize).min(STEPS);
    let base = Double::from_whole(index as u64).scaled(0.5 / STEPS as f64);
    let (sine, cosine) = series((y - base) * Double::PI, NEAR_TERMS);
    // The table has an entry for every index up to STEPS.
    let (base_sine, base_cosine) = TABLE.get(index).copied().unwrap_or_default();
    (
        base_sine * cosine + base_cosine * sine,
        base_cosine * cosine - base_sine * sine,
    )
}

#[cfg(test)]
mod tests {
    use super::sine_cosine;
    use crate::audit::double::Double;

    #[test]
    fn known_angles_and_the_circle() {
        let tiny = 2.0_f64.powi(-98);
        let close = |got: Double, want: Double| {
            assert!(
                (got - want).leading().abs() < tiny,
                "{got:?} against {want:?}"
            );
        };
        // sin 30° = cos 60° = 1/2, and 5·sin²36° = (5 − √5)·5/8: exact values of the regular polygons.
        let third = Double::ONE / Double::new(3.0);
        close(sine_cosine(third.scaled(0.5)).0, Double::new(0.5));
        close(sine_cosine(third).1, Double::new(0.5));
        close(sine_cosine(Double::new(0.25)).0.squared(), Double::new(0.5));
        let fifth = Double::ONE / Double::new(5.0);
        // (8·sin²36° − 5)² = 5.
        let polygon = sine_cosine(fifth).0.squared().scaled(8.0) - Double::new(5.0);
        close(polygon.squared(), Double::new(5.0));
        for n in 0..=500 {
            let y = Double::from_whole(n) / Double::new(1000.0);
            let (sine, cosine) = sine_cosine(y);
            close(sine.squared() + cosine.squared(), Double::ONE);
            // The double angle, reached through another entry of the table.
            let (double, _) = sine_cosine(if n <= 250 {
                y.scaled(2.0)
            } else {
                Double::ONE - y.scaled(2.0)
            });
            close((sine * cosine).scaled(2.0), double);
        }
    }
}
