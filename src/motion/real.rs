//! Numbers that a formula can be generic over: plain `f64`, and an interval that carries the range of its derivative.
//!
//! For checks only. Interval ends are rounded to nearest, not outwards: bounds are good to a few units in the last place
//! of the numbers that went in, far inside the 10⁻⁹ that every check allows.

use crate::exact::sine::{cosine_f64, sine_and_cosine_f64, sine_f64};
use std::f64::consts::TAU;
use std::ops::{Add, Div, Mul, Neg, Sub};

/// What a formula needs of its numbers.
pub trait Real:
    Copy
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
{
    /// A number that does not depend on the variable.
    fn constant(value: f64) -> Self;
    /// The sine of an angle in turns, the same on every machine.
    fn sin_turns(self) -> Self;
    /// The cosine of an angle in turns, the same on every machine.
    fn cos_turns(self) -> Self;
}

impl Real for f64 {
    fn constant(value: f64) -> Self {
        value
    }
    fn sin_turns(self) -> Self {
        sine_f64(self)
    }
    fn cos_turns(self) -> Self {
        cosine_f64(self)
    }
}

/// An interval as (low, high).
pub type Interval = (f64, f64);

/// The range of a quantity over a range of the variable x, and the range of its derivative with respect to x there.
///
/// The mean value theorem makes a bound of the two that tightens with the square of the width, see [`IntervalDual::range`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct IntervalDual {
    /// Every value taken lies in here.
    pub value: Interval,
    /// Every derivative taken lies in here.
    pub slope: Interval,
}

impl IntervalDual {
    /// The variable itself, from `low` to `high`.
    #[must_use]
    pub fn variable(low: f64, high: f64) -> Self {
        Self {
            value: (low, high),
            slope: (1.0, 1.0),
        }
    }

    /// The range of the quantity, given its value `centre` in the middle of the variable's range and that range's `width`:
    /// the interval value, cut with centre ± width/2·slope.
    #[must_use]
    pub fn range(&self, centre: f64, width: f64) -> Interval {
        let reach = width / 2.0 * self.slope.0.abs().max(self.slope.1.abs());
        let (low, high) = self.value;
        if centre.is_finite() && reach.is_finite() {
            (low.max(centre - reach), high.min(centre + reach))
        } else {
            (low, high)
        }
    }
}

const EVERYTHING: Interval = (f64::NEG_INFINITY, f64::INFINITY);

/// ∞ − ∞ at a lower end means that nothing is known below, at an upper end above.
fn known((low, high): Interval) -> Interval {
    (
        if low.is_nan() { EVERYTHING.0 } else { low },
        if high.is_nan() { EVERYTHING.1 } else { high },
    )
}

fn sum(a: Interval, b: Interval) -> Interval {
    known((a.0 + b.0, a.1 + b.1))
}

fn negative((low, high): Interval) -> Interval {
    (-high, -low)
}

fn product(a: Interval, b: Interval) -> Interval {
    // 0·∞ is 0 here: the infinite end is a bound, not a value.
    let corner = |x: f64, y: f64| {
        let corner = x * y;
        if corner.is_nan() { 0.0 } else { corner }
    };
    let [p, q, r, s] = [
        corner(a.0, b.0),
        corner(a.0, b.1),
        corner(a.1, b.0),
        corner(a.1, b.1),
    ];
    (p.min(q).min(r.min(s)), p.max(q).max(r.max(s)))
}

fn reciprocal((low, high): Interval) -> Interval {
    if low > 0.0 || high < 0.0 {
        (1.0 / high, 1.0 / low)
    } else {
        EVERYTHING
    }
}

/// The range of a wave with peaks at `peak` + k and troughs half a turn later, given its values at the ends.
fn wave((low, high): Interval, ends: (f64, f64), peak: f64) -> Interval {
    let holds = |phase: f64| (high - phase).floor() >= (low - phase).ceil();
    let least = if holds(peak + 0.5) {
        -1.0
    } else {
        ends.0.min(ends.1)
    };
    let most = if holds(peak) { 1.0 } else { ends.0.max(ends.1) };
    (least, most)
}

impl IntervalDual {
    /// The ranges of sine and cosine.
    fn waves(self) -> (Interval, Interval) {
        let (low, high) = self.value;
        if !(low.is_finite() && high.is_finite()) {
            return ((-1.0, 1.0), (-1.0, 1.0));
        }
        let (low_sine, low_cosine) = sine_and_cosine_f64(low);
        let (high_sine, high_cosine) = sine_and_cosine_f64(high);
        (
            wave(self.value, (low_sine, high_sine), 0.25),
            wave(self.value, (low_cosine, high_cosine), 0.0),
        )
    }
}

impl Real for IntervalDual {
    fn constant(value: f64) -> Self {
        Self {
            value: (value, value),
            slope: (0.0, 0.0),
        }
    }
    fn sin_turns(self) -> Self {
        let (sine, cosine) = self.waves();
        Self {
            value: sine,
            slope: product(product(cosine, (TAU, TAU)), self.slope),
        }
    }
    fn cos_turns(self) -> Self {
        let (sine, cosine) = self.waves();
        Self {
            value: cosine,
            slope: product(product(sine, (-TAU, -TAU)), self.slope),
        }
    }
}

impl Add for IntervalDual {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self {
            value: sum(self.value, other.value),
            slope: sum(self.slope, other.slope),
        }
    }
}

impl Neg for IntervalDual {
    type Output = Self;
    fn neg(self) -> Self {
        Self {
            value: negative(self.value),
            slope: negative(self.slope),
        }
    }
}

impl Sub for IntervalDual {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Mul for IntervalDual {
    type Output = Self;
    fn mul(self, other: Self) -> Self {
        Self {
            value: product(self.value, other.value),
            slope: sum(
                product(self.slope, other.value),
                product(self.value, other.slope),
            ),
        }
    }
}

/// Division by a range that holds 0 gives everything.
impl Div for IntervalDual {
    type Output = Self;
    fn div(self, other: Self) -> Self {
        let inverse = reciprocal(other.value);
        let slope = negative(product(other.slope, product(inverse, inverse)));
        let bounded = inverse.0.is_finite() && inverse.1.is_finite();
        self * Self {
            value: inverse,
            slope: if bounded { slope } else { EVERYTHING },
        }
    }
}
