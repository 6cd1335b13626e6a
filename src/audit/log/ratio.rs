//! The nearest ratio of small whole numbers to a measured one, found in the Stern–Brocot tree.
//!
//! Source of the tree: Stern 1858, Brocot 1861; the descent with whole runs of equal turns is the usual one (Graham,
//! Knuth & Patashnik, *Concrete Mathematics*, §4.5, from memory).

/// Terms up to here count as small.
pub(super) const SMALL: i64 = 64;

/// The p : q, q ≥ 0, in lowest terms, that a measured ratio p/q = `value` ± `error` most simply is: the first of the tree within three
/// errors; where none with terms up to `most` is so near, the nearest of those.
pub(super) fn nearest(value: f64, error: f64, most: i64) -> (i64, i64) {
    let size = value.abs();
    let sign = if value < 0.0 { -1 } else { 1 };
    let (p, q) = if size <= 3.0 * error {
        (0, 1)
    } else {
        positive(size, 3.0 * error, most)
    };
    (sign * p, q)
}

fn positive(value: f64, near: f64, most: i64) -> (i64, i64) {
    let (mut low, mut high) = ((0_i64, 1_i64), (1_i64, 0_i64));
    loop {
        let middle = (low.0 + high.0, low.1 + high.1);
        if middle.0 > most || middle.1 > most {
            // 1 : 0 is no number; it is meant where the value lies far above every ratio that is left.
            return match high {
                (_, 0) if value > 2.0 * as_float(most) => high,
                (_, 0) => low,
                _ if off(low, value) <= off(high, value) => low,
                _ => high,
            };
        }
        let apart = as_float(middle.0) / as_float(middle.1) - value;
        if apart.abs() <= near {
            return middle;
        }
        if apart < 0.0 {
            low = middle;
        } else {
            high = middle;
        }
    }
}

fn off((p, q): (i64, i64), value: f64) -> f64 {
    (as_float(p) / as_float(q) - value).abs()
}

#[expect(clippy::cast_precision_loss, reason = "terms are at most 20 000")]
fn as_float(term: i64) -> f64 {
    term as f64
}

#[cfg(test)]
mod tests {
    use super::nearest;

    /// Expected values by trying every ratio with terms up to the bound.
    #[test]
    fn it_is_the_nearest_of_all() {
        for step in 1..400_i32 {
            let value = f64::from(step) * 0.013_7;
            let (p, q) = nearest(value, 0.0, 20);
            let mut best = f64::INFINITY;
            for p in 0..=20_i32 {
                for q in 1..=20_i32 {
                    best = best.min((f64::from(p) / f64::from(q) - value).abs());
                }
            }
            #[expect(clippy::cast_precision_loss, reason = "at most 20")]
            let found = (p as f64 / q as f64 - value).abs();
            assert!((found - best).abs() < 1e-12, "{value}: {p}:{q}");
        }
    }

    #[test]
    fn the_simplest_within_the_error_wins() {
        assert_eq!(nearest(8.0 / 3.0 + 1e-5, 1e-5, 64), (8, 3));
        assert_eq!(nearest(-1.25 - 2e-6, 1e-6, 64), (-5, 4));
        // 22/7 is the simplest ratio within 0.0013 of π, 3 : 1 is not near enough.
        assert_eq!(nearest(std::f64::consts::PI, 0.000_5, 64), (22, 7));
        assert_eq!(nearest(0.000_1, 0.000_2, 64), (0, 1));
        assert_eq!(nearest(1e9, 0.0, 64), (1, 0));
    }
}
