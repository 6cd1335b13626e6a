//! Laws of motion, and the move: one rotor from one exact state to another.

mod bezier;
pub mod derivatives;
pub mod inside;
mod laws;
pub mod profile;
pub mod real;
mod search;

use crate::exact::{Rational, Seconds, Speed, Ticks, Turns, ratio};

/// How a speed goes over from 0 to 1, as written.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum LawKind {
    /// s = u.
    Linear,
    /// s = 3u² − 2u³.
    Cubic,
    /// s = 10u³ − 15u⁴ + 6u⁵.
    Quintic,
    /// s = 35u⁴ − 84u⁵ + 70u⁶ − 20u⁷.
    Septic,
    /// s = (1 − cos πu)/2.
    Harmonic,
    /// s = u − sin(2πu)/2π.
    Cycloidal,
    /// Modified sine.
    ModifiedSine,
    /// Modified trapezoid.
    ModifiedTrapezoid,
    /// Acceleration rises linearly, stays, falls.
    Scurve,
    /// The cubic Bézier timing function of CSS Easing Functions Level 1, with x1, x2 in [0, 1].
    Bezier {
        /// First control point, across.
        x1: Rational,
        /// First control point, up.
        y1: Rational,
        /// Second control point, across.
        x2: Rational,
        /// Second control point, up.
        y2: Rational,
    },
}

impl LawKind {
    /// The word a script uses.
    #[must_use]
    pub fn word(&self) -> &'static str {
        match self {
            LawKind::Linear => "linear",
            LawKind::Cubic => "cubic",
            LawKind::Quintic => "quintic",
            LawKind::Septic => "septic",
            LawKind::Harmonic => "harmonic",
            LawKind::Cycloidal => "cycloidal",
            LawKind::ModifiedSine => "modified-sine",
            LawKind::ModifiedTrapezoid => "modified-trapezoid",
            LawKind::Scurve => "scurve",
            LawKind::Bezier { .. } => "bezier",
        }
    }
}

/// A law with its skew.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Law {
    /// Which law.
    pub kind: LawKind,
    /// Where the point of steepest change lies, as a share of the morph; ½ where no `skew` is written.
    /// Always ½ for `linear`, `scurve` and `bezier`.
    pub skew: Rational,
}

/// A law made ready for one rotor: `scurve` knows its share.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Shape {
    /// The speed does not change.
    Hold,
    /// A law other than `scurve`.
    Law(Law),
    /// `scurve` with this share of the time for each rise and fall of acceleration, in [0, ½].
    Scurve(Rational),
}

/// One rotor from one exact state to another, at the motor shaft.
///
/// Inside, with u = t/T from 0 to 1:
/// speed = from + (to − from)·s(u) + (correction/T)·140u³(1−u)³ and
/// phase = start + from·t + (to − from)·T·S(u) + correction·(35u⁴ − 84u⁵ + 70u⁶ − 20u⁷), S = ∫s.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Move {
    /// How the speed goes over.
    pub shape: Shape,
    /// Unwrapped motor phase at the start.
    pub start: Turns,
    /// Unwrapped motor phase at the end, where the next move starts.
    pub end: Turns,
    /// Motor speed at the start.
    pub from: Speed,
    /// Motor speed at the end.
    pub to: Speed,
    /// The landing's correction c, in motor turns, rounding to the grid included; 0 in a hold.
    pub correction: Turns,
    /// How long it takes, at least one tick.
    pub ticks: Ticks,
}

impl Move {
    /// The move between two exact states (unwrapped motor phase and motor speed).
    ///
    /// The correction is what the law's own integral leaves to the wanted end, so that the move ends there exactly.
    #[must_use]
    pub fn between(
        shape: Shape,
        (start, from): (Turns, Speed),
        (end, to): (Turns, Speed),
        ticks: Ticks,
        tick: &Seconds,
    ) -> Self {
        let time = ticks.time(tick);
        let change = (&to - &from).over(&time).times(&shape.integral());
        let correction = &(&end - &start) - &(&from.over(&time) + &change);
        Self {
            shape,
            start,
            end,
            from,
            to,
            correction,
            ticks,
        }
    }
}

impl Shape {
    /// S(1) = ∫₀¹ s: ½ for every symmetric law; 1 − λ − 4H(1−2λ) with H = ∫₀^½ s₀ for one with a skew λ; its exact integral
    /// for a Bézier.
    ///
    /// Where H is irrational (`harmonic`, `cycloidal`, `modified-sine`, `modified-trapezoid`) it is the multiple of 2⁻¹⁶⁰
    /// nearest to it, from the constant for π; [`inside::Inside`] counts with the same number.
    #[must_use]
    pub fn integral(&self) -> Rational {
        if let Self::Law(law) = self
            && let Some(curve) = bezier::Bezier::of(&law.kind)
        {
            return curve.gain();
        }
        laws::Symmetric::of(self).map_or_else(|| ratio(1, 2), |law| law.gain())
    }
}
