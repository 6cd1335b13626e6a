//! The table of Student's law for three standard deviations.

/// How many standard deviations hold 99.73 % with `freedom` degrees of freedom: JCGM 100:2008, table G.2, straight in
/// 1/freedom between its entries.
pub(super) fn student(freedom: f64) -> f64 {
    const TABLE: [(f64, f64); 24] = [
        (1.0, 235.80),
        (2.0, 19.21),
        (3.0, 9.22),
        (4.0, 6.62),
        (5.0, 5.51),
        (6.0, 4.90),
        (7.0, 4.53),
        (8.0, 4.28),
        (9.0, 4.09),
        (10.0, 3.96),
        (11.0, 3.85),
        (12.0, 3.76),
        (13.0, 3.69),
        (14.0, 3.64),
        (15.0, 3.59),
        (16.0, 3.54),
        (18.0, 3.48),
        (20.0, 3.42),
        (25.0, 3.33),
        (30.0, 3.27),
        (40.0, 3.20),
        (50.0, 3.16),
        (100.0, 3.077),
        (f64::INFINITY, 3.0),
    ];
    let mut before = (1.0, 235.80);
    for entry in TABLE {
        if freedom <= entry.0 {
            let (low, high) = (1.0 / entry.0, 1.0 / before.0);
            let share = if high > low {
                (1.0 / freedom - low) / (high - low)
            } else {
                0.0
            };
            return entry.1 + share.clamp(0.0, 1.0) * (before.1 - entry.1);
        }
        before = entry;
    }
    3.0
}

#[cfg(test)]
mod tests {
    use super::student;

    /// JCGM 100:2008, table G.2.
    #[test]
    fn few_degrees_of_freedom_widen() {
        assert!((student(10.0) - 3.96).abs() < 1e-9);
        assert!((student(4.0) - 6.62).abs() < 1e-9);
        assert!((student(1e12) - 3.0).abs() < 1e-3);
    }
}
