//! Exact quantities with their units in the type, and every conversion between number worlds.
//!
//! Three number worlds meet here and nowhere else:
//!
//! * exact rationals ([`Rational`]) at the boundaries of every move,
//! * integer fixed point ([`fixed`]) inside a move,
//! * `f64`, for checks and pictures only: [`to_f64`] is the one place where a rational becomes one.

pub mod fixed;
pub mod line;
pub mod root;
pub mod sine;

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{Signed, ToPrimitive, Zero};
use std::ops::{Add, Neg, Sub};

/// An exact rational number of any size.
pub type Rational = BigRational;

/// The rational `numerator / denominator`.
///
/// `denominator` must not be zero; callers pass literals or values already checked.
#[must_use]
pub fn ratio(numerator: i128, denominator: i128) -> Rational {
    Rational::new(BigInt::from(numerator), BigInt::from(denominator))
}

/// The whole number `value` as a rational.
#[must_use]
pub fn whole(value: i128) -> Rational {
    Rational::from_integer(BigInt::from(value))
}

/// The nearest `f64`, for checks and pictures; never on the way to an output.
#[must_use]
pub fn to_f64(value: &Rational) -> f64 {
    // `to_f64` of a ratio of big integers always answers; the fallback keeps the sign all the same.
    value.to_f64().unwrap_or(if value.is_negative() {
        f64::NEG_INFINITY
    } else {
        f64::INFINITY
    })
}

/// The exact rational that a finite `f64` stands for; `None` for infinities and NaN.
#[must_use]
pub fn from_f64(value: f64) -> Option<Rational> {
    Rational::from_float(value)
}

/// `value` rounded to the nearest whole number, ties up: ⌊value + ½⌋.
#[must_use]
pub fn round_half_up(value: &Rational) -> BigInt {
    let doubled: BigInt = value.numer() * 2 + value.denom();
    doubled.div_floor(&(value.denom() * 2))
}

/// `value` brought to (−½, ½] by taking whole numbers away.
#[must_use]
pub fn wrap_half(value: &Rational) -> Rational {
    let half = ratio(1, 2);
    value - (value - half).ceil()
}

/// `value` brought to [0, 1) by taking whole numbers away.
#[must_use]
pub fn wrap_unit(value: &Rational) -> Rational {
    value - value.floor()
}

/// The decimal text of `value` with `places` digits after the point, rounded half up; never `-0.00`.
#[must_use]
pub fn decimal(value: &Rational, places: u32) -> String {
    let scale = BigInt::from(10).pow(places);
    scaled_decimal(
        &round_half_up(&(value * Rational::from_integer(scale))),
        places,
    )
}

/// The decimal text of `units · 10^-places`.
#[must_use]
pub fn scaled_decimal(units: &BigInt, places: u32) -> String {
    let sign = if units.is_negative() { "-" } else { "" };
    let digits = units.abs().to_string();
    let width = places as usize + 1;
    let padded = format!("{digits:0>width$}");
    let (head, tail) = padded.split_at(padded.len() - places as usize);
    if places == 0 {
        format!("{sign}{head}")
    } else {
        format!("{sign}{head}.{tail}")
    }
}

/// The shortest exact decimal text of `value`, or `None` where it has no finite decimal form of at most `most` places.
#[must_use]
pub fn exact_decimal(value: &Rational, most: u32) -> Option<String> {
    (0..=most)
        .find(|places| (value * Rational::from_integer(BigInt::from(10).pow(*places))).is_integer())
        .map(|places| decimal(value, places))
}

macro_rules! quantity {
    ($(#[$doc:meta])* $name:ident) => {
        $(#[$doc])*
        #[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub struct $name(Rational);

        impl $name {
            /// The quantity of this size, in the unit of the type.
            #[must_use]
            pub fn new(value: Rational) -> Self {
                Self(value)
            }
            /// Nothing of it.
            #[must_use]
            pub fn zero() -> Self {
                Self(Rational::zero())
            }
            /// The size in the unit of the type.
            #[must_use]
            pub fn value(&self) -> &Rational {
                &self.0
            }
            /// Whether it is exactly zero.
            #[must_use]
            pub fn is_zero(&self) -> bool {
                self.0.is_zero()
            }
            /// Whether it is below zero.
            #[must_use]
            pub fn is_negative(&self) -> bool {
                self.0.is_negative()
            }
            /// Its size without its sign.
            #[must_use]
            pub fn abs(&self) -> Self {
                Self(self.0.abs())
            }
            /// This many times as much.
            #[must_use]
            pub fn times(&self, factor: &Rational) -> Self {
                Self(&self.0 * factor)
            }
            /// −1, 0 or 1; the sign of zero is 0.
            #[must_use]
            pub fn sign(&self) -> i32 {
                if self.0.is_zero() { 0 } else if self.0.is_negative() { -1 } else { 1 }
            }
            /// For checks and pictures only, see [`to_f64`].
            #[must_use]
            pub fn to_f64(&self) -> f64 {
                to_f64(&self.0)
            }
        }
        impl Add for &$name {
            type Output = $name;
            fn add(self, other: Self) -> $name {
                $name(&self.0 + &other.0)
            }
        }
        impl Sub for &$name {
            type Output = $name;
            fn sub(self, other: Self) -> $name {
                $name(&self.0 - &other.0)
            }
        }
        impl Neg for &$name {
            type Output = $name;
            fn neg(self) -> $name {
                $name(-&self.0)
            }
        }
    };
}

quantity!(
    /// An angle in turns.
    Turns
);
quantity!(
    /// A speed of turning, or a rate of repeating, in turns per second (Hz).
    Speed
);
quantity!(
    /// A change of speed in turns per second squared.
    Acceleration
);
quantity!(
    /// A change of acceleration in turns per second cubed.
    Jerk
);
quantity!(
    /// A length of time in seconds.
    Seconds
);
quantity!(
    /// A length in metres.
    Length
);
quantity!(
    /// A power in watts.
    Power
);
quantity!(
    /// A torque in newton metres.
    Torque
);
quantity!(
    /// A moment of inertia in kilogram square metres.
    Inertia
);

impl Speed {
    /// The angle turned in `time` at this speed.
    #[must_use]
    pub fn over(&self, time: &Seconds) -> Turns {
        Turns(&self.0 * &time.0)
    }
    /// The speed of `value` revolutions per minute.
    #[must_use]
    pub fn from_rpm(value: &Rational) -> Self {
        Self(value / whole(60))
    }
    /// This speed in revolutions per minute.
    #[must_use]
    pub fn rpm(&self) -> Rational {
        &self.0 * whole(60)
    }
}

impl Turns {
    /// The angle of `value` degrees.
    #[must_use]
    pub fn from_degrees(value: &Rational) -> Self {
        Self(value / whole(360))
    }
    /// This angle in degrees.
    #[must_use]
    pub fn degrees(&self) -> Rational {
        &self.0 * whole(360)
    }
}

/// A whole number of controller ticks: the compiler's only measure of planned time.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Ticks(pub u64);

impl Ticks {
    /// The exact time of this many ticks of length `tick`.
    #[must_use]
    pub fn time(self, tick: &Seconds) -> Seconds {
        Seconds(&tick.0 * whole(i128::from(self.0)))
    }
}

impl Seconds {
    /// The nearest whole number of ticks, ties up; `None` below zero or past 2⁶⁴ ticks.
    #[must_use]
    pub fn rounded(&self, tick: &Seconds) -> Option<Ticks> {
        round_half_up(&(&self.0 / &tick.0)).to_u64().map(Ticks)
    }
}

/// Steps of the phase grid in one turn of a mirror: every morph ends on a multiple of 1/360 000 000 000 turn.
pub const GRID_PER_TURN: i128 = 360_000_000_000;

/// An unwrapped mirror phase on the grid: a whole number of 1/[`GRID_PER_TURN`] turns.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct GridPhase(pub i128);

impl GridPhase {
    /// The grid point nearest to `phase`, ties up; `None` past 10²⁶ turns, far beyond what a show can reach.
    #[must_use]
    pub fn nearest(phase: &Turns) -> Option<Self> {
        round_half_up(&(&phase.0 * whole(GRID_PER_TURN)))
            .to_i128()
            .map(Self)
    }
    /// The exact angle.
    #[must_use]
    pub fn turns(self) -> Turns {
        Turns(ratio(self.0, GRID_PER_TURN))
    }
}
