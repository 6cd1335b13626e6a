//! What a move does between its ends: true suprema of speed, acceleration and jerk.
//!
//! Found by branch and bound over the smooth pieces of a law: interval slopes bound each box by its middle value, the
//! box with the greatest bound is halved, and the search ends when that bound is no more than a hair above the best
//! value seen (or settles the question asked). So a peak between samples is never missed. `f64` serves here, since it
//! only checks; where a check decides an output the law's sine comes from the fixed-point routine, so the answer is the
//! same on every machine.

use super::derivatives::{IntervalDual, Piece, Real, pieces, steps};
use super::search::{Look, NARROWEST, Outcome, search};
use super::{LawKind, Move, Shape};
use crate::exact::{Seconds, Speed, Turns};
use crate::rig::{Rotor, Turning};

/// Every check passes at ≤ limit · (1 + this).
pub const TOLERANCE: f64 = 1e-9;

/// The flat limits of a motor, in turns and seconds; infinite where there is none.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limits {
    /// Largest |v|.
    pub speed: f64,
    /// Largest |a| while |v| grows.
    pub acceleration: f64,
    /// Largest |a| while |v| shrinks.
    pub deceleration: f64,
    /// Largest |jerk|.
    pub jerk: f64,
}

impl Limits {
    /// The limits of a rotor's motor.
    #[must_use]
    pub fn of(rotor: &Rotor) -> Self {
        Self {
            speed: rotor.top_speed.value.to_f64(),
            acceleration: rotor.acceleration.value.to_f64(),
            deceleration: rotor.deceleration.value.to_f64(),
            jerk: rotor
                .jerk
                .as_ref()
                .map_or(f64::INFINITY, |jerk| jerk.value.to_f64()),
        }
    }
    /// The limit of speed alone.
    #[must_use]
    pub fn only_speed(self) -> Self {
        Self {
            acceleration: f64::INFINITY,
            deceleration: f64::INFINITY,
            jerk: f64::INFINITY,
            ..self
        }
    }
}

/// The largest value of something over a move, and when.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extreme {
    /// The value.
    pub value: f64,
    /// The moment, as a share of the move.
    pub u: f64,
}

/// The largest share of an acceleration limit over a move.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct AccelerationPeak {
    /// |a| over the limit that applies there.
    pub share: f64,
    /// |a| there, in turns/s².
    pub value: f64,
    /// Whether |v| shrinks there.
    pub slowing: bool,
    /// The moment, as a share of the move.
    pub u: f64,
}

/// One rotor's motion through a move, as functions of u = t/T.
#[derive(Clone, Debug)]
pub struct Profile {
    pieces: Vec<Piece>,
    steps: bool,
    monotone: bool,
    from: f64,
    change: f64,
    correction: f64,
    time: f64,
}

/// What is looked at.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Quantity {
    Speed,
    Acceleration,
    Jerk,
}

/// Which values count as large.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Side {
    Either,
    Above,
    Below,
}

impl Side {
    fn of(self, value: f64) -> f64 {
        match self {
            Side::Either => value.abs(),
            Side::Above => value,
            Side::Below => -value,
        }
    }
}

/// The bump of a landing and its derivatives: 140u³(1−u)³, then per u, then per u².
fn bump<R: Real>(u: R) -> R {
    let w = u * (R::constant(1.0) - u);
    R::constant(140.0) * w * w * w
}

fn bump_slope<R: Real>(u: R) -> R {
    let w = u * (R::constant(1.0) - u);
    R::constant(420.0) * w * w * (R::constant(1.0) - R::constant(2.0) * u)
}

fn bump_curvature<R: Real>(u: R) -> R {
    let w = u * (R::constant(1.0) - u);
    R::constant(840.0) * w * (R::constant(1.0) - R::constant(5.0) * w)
}

impl Profile {
    /// The motion of a transition: motor speeds before and after, the landing's correction, the time it takes.
    #[must_use]
    pub fn new(
        shape: &Shape,
        (from, to): (&Speed, &Speed),
        correction: &Turns,
        time: &Seconds,
    ) -> Self {
        Self {
            pieces: pieces(shape),
            steps: steps(shape) && from != to,
            monotone: !matches!(shape, Shape::Law(law) if matches!(law.kind, LawKind::Bezier { .. })),
            from: from.to_f64(),
            change: (to - from).to_f64(),
            correction: correction.to_f64(),
            time: time.to_f64(),
        }
    }

    /// The motion of a move.
    #[must_use]
    pub fn of(one: &Move, tick: &Seconds) -> Self {
        Self::new(
            &one.shape,
            (&one.from, &one.to),
            &one.correction,
            &one.ticks.time(tick),
        )
    }

    fn value<R: Real>(&self, quantity: Quantity, piece: &Piece, x: R) -> R {
        let u = piece.u(x);
        let time = self.time;
        match quantity {
            Quantity::Speed => {
                R::constant(self.from)
                    + R::constant(self.change) * piece.s(x)
                    + R::constant(self.correction / time) * bump(u)
            }
            Quantity::Acceleration => {
                R::constant(self.change / time) * piece.ds(x)
                    + R::constant(self.correction / (time * time)) * bump_slope(u)
            }
            Quantity::Jerk => {
                R::constant(self.change / (time * time)) * piece.dds(x)
                    + R::constant(self.correction / (time * time * time)) * bump_curvature(u)
            }
        }
    }

    /// The range over a stretch.
    fn range(&self, quantity: Quantity, piece: &Piece, low: f64, high: f64) -> (f64, f64) {
        let centre = self.value(quantity, piece, low + (high - low) / 2.0);
        self.value(quantity, piece, IntervalDual::variable(low, high))
            .range(centre, high - low)
    }

    fn extreme(&self, quantity: Quantity, side: Side, enough: Option<f64>) -> (Extreme, f64) {
        let outcome = search(&self.pieces, enough, |index, low, high| {
            let Some(piece) = self.pieces.get(index) else {
                return Look {
                    bound: 0.0,
                    best: 0.0,
                    at: low,
                };
            };
            let (least, most) = self.range(quantity, piece, low, high);
            let (at, best) = [low, low + (high - low) / 2.0, high]
                .into_iter()
                .map(|x| (x, side.of(self.value(quantity, piece, x))))
                .filter(|(_, value)| value.is_finite())
                .fold((low, f64::NEG_INFINITY), |one, two| {
                    if two.1 > one.1 { two } else { one }
                });
            Look {
                bound: side.of(least).max(side.of(most)),
                best,
                at,
            }
        });
        let u = self
            .pieces
            .get(outcome.piece)
            .map_or(0.0, |piece| piece.u(outcome.at));
        (
            Extreme {
                value: outcome.best,
                u,
            },
            outcome.bound,
        )
    }

    /// The largest |v| in turns/s.
    #[must_use]
    pub fn speed_peak(&self) -> Extreme {
        self.extreme(Quantity::Speed, Side::Either, None).0
    }

    /// The largest |jerk| in turns/s³; infinite where the acceleration steps.
    #[must_use]
    pub fn jerk_peak(&self) -> Extreme {
        if self.steps {
            return Extreme {
                value: f64::INFINITY,
                u: 0.0,
            };
        }
        self.extreme(Quantity::Jerk, Side::Either, None).0
    }

    /// The largest share of the acceleration limit that applies: the one limit while |v| grows, the other while it
    /// shrinks, both where v passes through zero.
    #[must_use]
    pub fn acceleration_peak(&self, limits: &Limits) -> AccelerationPeak {
        let outcome = self.acceleration_search(limits, None);
        let Some(piece) = self.pieces.get(outcome.piece) else {
            return AccelerationPeak {
                share: 0.0,
                value: 0.0,
                slowing: false,
                u: 0.0,
            };
        };
        let value = self.value(Quantity::Acceleration, piece, outcome.at);
        let slowing = (value.abs() / limits.deceleration - outcome.best).abs()
            < (value.abs() / limits.acceleration - outcome.best).abs();
        AccelerationPeak {
            share: outcome.best,
            value: value.abs(),
            slowing,
            u: piece.u(outcome.at),
        }
    }

    /// |a| as a share of the limit at a point; where v is exactly zero, of the limit that applies next to it inside.
    fn acceleration_share(&self, piece: &Piece, x: f64, inward: f64, limits: &Limits) -> f64 {
        let a = self.value(Quantity::Acceleration, piece, x);
        let v = self.value(Quantity::Speed, piece, x);
        let v = if v == 0.0 {
            self.value(Quantity::Speed, piece, inward)
        } else {
            v
        };
        let limit = if v * a < 0.0 {
            limits.deceleration
        } else {
            limits.acceleration
        };
        a.abs() / limit
    }

    fn acceleration_search(&self, limits: &Limits, enough: Option<f64>) -> Outcome {
        let smaller = limits.acceleration.min(limits.deceleration);
        search(&self.pieces, enough, |index, low, high| {
            let Some(piece) = self.pieces.get(index) else {
                return Look {
                    bound: 0.0,
                    best: 0.0,
                    at: low,
                };
            };
            let middle = low + (high - low) / 2.0;
            let (a_least, a_most) = self.range(Quantity::Acceleration, piece, low, high);
            let (v_least, v_most) = self.range(Quantity::Speed, piece, low, high);
            let largest = a_least.abs().max(a_most.abs());
            let grows = (v_least >= 0.0 && a_least >= 0.0) || (v_most <= 0.0 && a_most <= 0.0);
            let shrinks = (v_least >= 0.0 && a_most <= 0.0) || (v_most <= 0.0 && a_least >= 0.0);
            let limit = match (grows, shrinks) {
                (true, false) => limits.acceleration,
                (false, true) => limits.deceleration,
                _ => smaller,
            };
            let crosses = self.value(Quantity::Speed, piece, low)
                * self.value(Quantity::Speed, piece, high)
                < 0.0;
            let share = |x: f64| {
                if crosses && high - low < NARROWEST * 4.0 {
                    // Next to v = 0 both one-sided limits apply.
                    self.value(Quantity::Acceleration, piece, x).abs() / smaller
                } else {
                    self.acceleration_share(piece, x, middle, limits)
                }
            };
            let (at, best) = [low, middle, high]
                .into_iter()
                .map(|x| (x, share(x)))
                .filter(|(_, value)| value.is_finite())
                .fold((low, f64::NEG_INFINITY), |one, two| {
                    if two.1 > one.1 { two } else { one }
                });
            Look {
                bound: largest / limit,
                best,
                at,
            }
        })
    }

    /// The larger of the end speeds, and the most that a bump can add to it.
    fn speed_bound(&self) -> f64 {
        if !self.monotone {
            return f64::INFINITY;
        }
        let ends = self.from.abs().max((self.from + self.change).abs());
        ends + 35.0 / 16.0 * (self.correction / self.time).abs()
    }

    /// Whether the top speed holds, to within [`TOLERANCE`].
    #[must_use]
    pub fn within_speed(&self, limits: &Limits) -> bool {
        let allowed = limits.speed * (1.0 + TOLERANCE);
        self.speed_bound() <= allowed
            || self.extreme(Quantity::Speed, Side::Either, Some(allowed)).1 <= allowed
    }

    /// Whether acceleration and deceleration hold, to within [`TOLERANCE`].
    #[must_use]
    pub fn within_acceleration(&self, limits: &Limits) -> bool {
        let allowed = 1.0 + TOLERANCE;
        if limits.acceleration.is_infinite() && limits.deceleration.is_infinite() {
            return true;
        }
        let outcome = self.acceleration_search(limits, Some(allowed));
        outcome.bound <= allowed
    }

    /// Whether the jerk limit holds, to within [`TOLERANCE`].
    #[must_use]
    pub fn within_jerk(&self, limits: &Limits) -> bool {
        if limits.jerk.is_infinite() {
            return true;
        }
        let allowed = limits.jerk * (1.0 + TOLERANCE);
        !self.steps && self.extreme(Quantity::Jerk, Side::Either, Some(allowed)).1 <= allowed
    }

    /// Whether every limit holds.
    #[must_use]
    pub fn within(&self, limits: &Limits) -> bool {
        self.within_speed(limits) && self.within_acceleration(limits) && self.within_jerk(limits)
    }

    /// Whether the motor turns the way it must not, be it ever so little: below the rounding of `f64` it is still.
    #[must_use]
    pub fn turns_back(&self, turning: Turning) -> bool {
        let side = match turning {
            Turning::Both => return false,
            Turning::Forward => Side::Below,
            Turning::Backward => Side::Above,
        };
        let size = self.from.abs() + self.change.abs() + (self.correction / self.time).abs();
        let still = 1e-13 * size;
        self.extreme(Quantity::Speed, side, Some(still)).0.value > still
    }

    /// Seconds that the motor spends at 0 < |v| < `speed` turns/s, to a millionth of the move.
    #[must_use]
    pub fn time_below(&self, speed: f64) -> f64 {
        let mut open: Vec<(&Piece, f64, f64)> = self
            .pieces
            .iter()
            .map(|piece| (piece, piece.from, piece.to))
            .collect();
        let mut share = 0.0;
        while let Some((piece, low, high)) = open.pop() {
            let (least, most) = self.range(Quantity::Speed, piece, low, high);
            let inside = most < speed && least > -speed && (least > 0.0 || most < 0.0);
            let outside = least >= speed || most <= -speed;
            let middle = low + (high - low) / 2.0;
            if inside || (!outside && high - low < 1e-6) {
                let at = self.value(Quantity::Speed, piece, middle).abs();
                if inside || (at > 0.0 && at < speed) {
                    share += piece.u(high) - piece.u(low);
                }
            } else if !outside {
                open.push((piece, low, middle));
                open.push((piece, middle, high));
            }
        }
        share * self.time
    }
}
