//! What the eye collects: the light of a stretch of time as curves with a brightness.
//!
//! # Curves
//!
//! The spot's way is cut into cubic Bézier pieces, each with the true places and velocities at its ends (cubic Hermite
//! interpolation). The error of a piece of length h is at most h⁴/384·|z⁗|, which gives the first cut; each piece is then
//! compared with the true spot at its quarters and halved where it is off by more than the tolerance. Cusps, where the
//! velocity vanishes, come out right, since the pieces are even in time, not in length.
//!
//! # Brightness
//!
//! The light that lands on a length of the curve goes with the time that the spot spends there: the density is
//! 1/(speed · repeat period). The eye's impression follows Stevens' power law, brightness ∝ light^(1/3) (S. S.
//! Stevens, "To Honor Fechner and Repeal His Law", *Science* 133, 1961, from memory; the exponent for an extended target in the
//! dark). Full brightness is that of a circle of the largest radius drawn once; so long figures are dimmer than short
//! ones, as on the wall, and turning points shine.

use crate::optics::Optics;
use crate::optics::path::LegPath;
use kurbo::{CubicBez, ParamCurve, ParamCurveArclen, Point, Vec2};
use std::f64::consts::TAU;

/// Steps of brightness; above the last there is [`HOT`].
pub const LEVELS: u8 = 6;
/// The level of a place much brighter than full: a turning point.
pub const HOT: u8 = LEVELS + 1;
/// Turns of the faster mirror that one picture shows at most.
pub const MOST_TURNS: f64 = 1500.0;
/// Times that a piece may be halved.
const MOST_HALVINGS: u32 = 12;

/// A stretch of the spot's way.
#[derive(Clone, Copy, Debug)]
pub struct Piece {
    /// The way, in the units of the optics, y up.
    pub curve: CubicBez,
    /// Brightness, 1 to [`LEVELS`], or [`HOT`].
    pub level: u8,
    /// Start and end in seconds from the leg's start.
    pub time: (f64, f64),
}

/// How finely to look.
#[derive(Clone, Copy, Debug)]
pub struct Grain {
    /// Largest distance of a drawn curve from the true one.
    pub tolerance: f64,
    /// Width of the line: brightness does not change within less.
    pub width: f64,
}

/// The light from `from` to `to`, seconds from the start of a leg; `period` is the time in which a figure is drawn once, by
/// which brightness is measured.
#[must_use]
pub fn collect(
    path: &LegPath,
    optics: &Optics,
    (from, to): (f64, f64),
    period: f64,
    grain: Grain,
) -> Vec<Piece> {
    let window = to - from;
    if !window.is_finite() || window <= 0.0 {
        return Vec::new();
    }
    let way = Way {
        path,
        optics,
        grain,
        period,
        full: TAU * optics.extent(),
    };
    let count = way.first_cut(from, to);
    let mut pieces = Vec::new();
    let mut left = way.knot(from, window / f64::from(count));
    for index in 0..count {
        let end = from + window * f64::from(index + 1) / f64::from(count);
        let right = way.knot(end, window / f64::from(count));
        way.add(left, right, 0, &mut pieces);
        left = right;
    }
    pieces
}

/// Everything that the cutting needs.
struct Way<'a> {
    path: &'a LegPath,
    optics: &'a Optics,
    grain: Grain,
    /// The time in which light is counted.
    period: f64,
    /// The length that has full brightness.
    full: f64,
}

/// A moment with its spot and velocity.
#[derive(Clone, Copy)]
struct Knot {
    t: f64,
    spot: Point,
    velocity: Vec2,
}

impl Way<'_> {
    fn spot(&self, t: f64) -> Point {
        self.optics.spot(self.path.phases(t))
    }

    fn knot(&self, t: f64, step: f64) -> Knot {
        let nudge = step / 64.0;
        let velocity = (self.spot(t + nudge) - self.spot(t - nudge)) / (2.0 * nudge);
        Knot {
            t,
            spot: self.spot(t),
            velocity,
        }
    }

    /// How many even pieces the error bound asks for.
    fn first_cut(&self, from: f64, to: f64) -> u32 {
        let (mut a, mut b): (f64, f64) = (0.0, 0.0);
        for step in 0..=8 {
            let state = self.path.at(from + (to - from) * f64::from(step) / 8.0);
            a = a.max(state.a.speed.abs());
            b = b.max(state.b.speed.abs());
        }
        let reach = self.optics.reach();
        let fourth = |speed: f64| (TAU * speed) * (TAU * speed) * (TAU * speed) * (TAU * speed);
        let bound = (reach.a * fourth(a) + reach.b * fourth(b)) * 1.3 + f64::MIN_POSITIVE;
        let step = libm::sqrt(libm::sqrt(384.0 * self.grain.tolerance / bound));
        let count = libm::ceil((to - from) / step).clamp(1.0, 60_000.0);
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "between 1 and 60 000"
        )]
        let count = count as u32;
        count
    }

    fn add(&self, left: Knot, right: Knot, depth: u32, pieces: &mut Vec<Piece>) {
        let span = right.t - left.t;
        let curve = CubicBez::new(
            left.spot,
            left.spot + left.velocity * (span / 3.0),
            right.spot - right.velocity * (span / 3.0),
            right.spot,
        );
        let length = curve.arclen(self.grain.tolerance.min(self.grain.width) / 4.0);
        if depth < MOST_HALVINGS
            && (self.off(&curve, left.t, span) || self.uneven(&left, &right, length))
        {
            let middle = self.knot(left.t + span / 2.0, span / 2.0);
            self.add(left, middle, depth + 1, pieces);
            self.add(middle, right, depth + 1, pieces);
            return;
        }
        pieces.push(Piece {
            curve,
            level: self.level(length / span),
            time: (left.t, right.t),
        });
    }

    fn off(&self, curve: &CubicBez, from: f64, span: f64) -> bool {
        [0.25, 0.5, 0.75].into_iter().any(|share| {
            let true_spot = self.spot(from + span * share);
            (curve.eval(share) - true_spot).hypot() > self.grain.tolerance
        })
    }

    /// Whether brightness changes by more than a step along a piece that is long enough to show it.
    fn uneven(&self, left: &Knot, right: &Knot, length: f64) -> bool {
        length > 2.0 * self.grain.width
            && self
                .level(left.velocity.hypot())
                .abs_diff(self.level(right.velocity.hypot()))
                > 1
    }

    /// The brightness of a place where the spot has this speed.
    fn level(&self, speed: f64) -> u8 {
        let density = self.full / (speed * self.period).max(f64::MIN_POSITIVE);
        let steps = libm::cbrt(density) * f64::from(LEVELS);
        if steps >= f64::from(LEVELS) * 1.35 {
            return HOT;
        }
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "between 1 and the number of levels"
        )]
        let level = libm::round(steps).clamp(1.0, f64::from(LEVELS)) as u8;
        level
    }
}

/// The time in which a figure is drawn once, in seconds, but not more turns of the faster mirror than [`MOST_TURNS`].
#[must_use]
pub fn period(repeat: f64, faster_mirror: f64) -> f64 {
    let most = MOST_TURNS / faster_mirror.abs().max(1e-9);
    if repeat > 0.0 {
        (1.0 / repeat).min(most)
    } else {
        SHORTEST.min(most)
    }
}

/// The least time that the eye collects, in seconds.
pub const SHORTEST: f64 = 1.0 / 50.0;
