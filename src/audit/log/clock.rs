//! The way from the log's time to the plan's, and small least squares for it.

/// plan time = start + (1 + rate)·(log time − from).
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Clock {
    /// A moment of the log, in its seconds.
    pub(super) from: f64,
    /// Seconds after row 0 at that moment.
    pub(super) start: f64,
    /// How much faster the controller's clock runs than the logger's, as a share.
    pub(super) rate: f64,
}

impl Clock {
    /// Seconds after row 0 at `time` of the log.
    pub(super) fn plan(&self, time: f64) -> f64 {
        self.start + (time - self.from) * (1.0 + self.rate)
    }

    /// The same clock after `start` and `rate` have been put right by so much.
    pub(super) fn moved(&self, by: [f64; 2]) -> Self {
        let [start, rate] = by;
        Self {
            start: self.start + start,
            rate: self.rate + rate,
            ..*self
        }
    }
}

/// Sums for weighted least squares of y = x·(c₀, c₁), with what is known beforehand of c.
#[derive(Clone, Copy, Debug)]
pub(super) struct Normal {
    matrix: [f64; 3],
    side: [f64; 2],
}

impl Normal {
    /// Starts from c = 0 with these standard deviations (in units in which y has 1).
    pub(super) fn with_prior(deviations: [f64; 2]) -> Self {
        let [first, second] = deviations.map(|deviation| 1.0 / (deviation * deviation));
        Self {
            matrix: [first, 0.0, second],
            side: [0.0; 2],
        }
    }

    /// Adds one measurement.
    pub(super) fn add(&mut self, weight: f64, x: [f64; 2], y: f64) {
        let [x0, x1] = x;
        let [m00, m01, m11] = self.matrix;
        let [s0, s1] = self.side;
        self.matrix = [
            m00 + weight * x0 * x0,
            m01 + weight * x0 * x1,
            m11 + weight * x1 * x1,
        ];
        self.side = [s0 + weight * x0 * y, s1 + weight * x1 * y];
    }

    /// c and its standard deviations (for y of deviation 1); `None` where nothing tells them.
    pub(super) fn solve(&self) -> Option<([f64; 2], [f64; 2])> {
        let [m00, m01, m11] = self.matrix;
        let [s0, s1] = self.side;
        let determinant = m00 * m11 - m01 * m01;
        (determinant > 0.0 && determinant.is_finite()).then(|| {
            (
                [
                    (s0 * m11 - s1 * m01) / determinant,
                    (s1 * m00 - s0 * m01) / determinant,
                ],
                [(m11 / determinant).sqrt(), (m00 / determinant).sqrt()],
            )
        })
    }
}

/// `value` brought to (−½, ½] of `modulus`.
pub(super) fn wrapped(value: f64, modulus: f64) -> f64 {
    value - modulus * (value / modulus - 0.5).ceil()
}
