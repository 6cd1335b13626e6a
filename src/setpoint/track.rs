//! One rotor in one leg: exact or fixed-point phase and speed at every tick, rounded to what a row holds.

use crate::exact::fixed::PHASE_BITS;
use crate::exact::line::{Line, Ring};
use crate::exact::{Rational, Seconds, ratio, round_half_up, whole};
use crate::motion::inside::Inside;
use crate::motion::{Move, Shape};
use num_integer::Integer;
use num_traits::{ToPrimitive, Zero};

/// Units of the turns columns in one turn.
const TURN_UNITS: u64 = 1_000_000_000_000;

/// Units of the rpm columns in one turn a second: 60 rpm of a million units each.
const RPM_UNITS: u64 = 60_000_000;

/// What is added to a fixed-point sum before it is rounded: 2⁻⁶³ turn (or turn/s).
///
/// The exact part is floored to 2⁻⁷² and the part inside the move is less than 2⁻⁶⁴ off, so the sum lies less than
/// 2⁻⁶³ under the true value. With this bias it never lies under it: an exact tie rounds up, as half-up demands.
/// It lies less than 2⁻⁶² over it, so a value that is short of a tie by 2⁻⁶² turn or more still rounds down. That is
/// a four-millionth of the last printed decimal of a turn, and far below 2⁻⁵⁰.
const BIAS: i128 = 1 << (PHASE_BITS - 63);

const FRACTION: u128 = (1 << PHASE_BITS) - 1;
const HALF: u128 = 1 << (PHASE_BITS - 1);

/// A rotor at one tick.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Sample {
    /// ⌊unwrapped motor phase · counts + ½⌋.
    pub(super) unwrapped: i128,
    /// The same modulo counts.
    pub(super) counts: u32,
    /// Motor phase in 10⁻¹² turns, rounded half up, modulo one turn.
    pub(super) turns: u64,
    /// Motor speed in 10⁻⁶ rpm, rounded half up.
    pub(super) rpm: i64,
}

/// One rotor on its way through one leg; starts at any tick of it and goes on tick by tick.
pub(super) struct Track {
    counts: u32,
    /// Counts of the whole turns that the leg starts at: the rest of the arithmetic stays small.
    base: i128,
    tick: u64,
    way: Way,
}

enum Way {
    /// A straight line: everything exact.
    Straight(Box<Straight>),
    /// The exact part at 2⁻⁷² turns, and what the law and the correction add.
    Curved(Box<Curved>),
}

struct Straight {
    counts: Line,
    turns: Ring,
    rpm: i64,
}

struct Curved {
    line: Line,
    from: i128,
    inside: Inside,
}

impl Track {
    /// The rotor's way through `motion` from its tick `first` on.
    pub(super) fn new(motion: &Move, tick: &Seconds, counts: u32, first: u64) -> Self {
        let whole_turns = motion.start.value().floor();
        let start = motion.start.value() - &whole_turns;
        let step = motion.from.value() * tick.value();
        let way = if motion.shape == Shape::Hold {
            Way::Straight(Box::new(Straight::new(
                motion, &start, &step, counts, first,
            )))
        } else {
            Way::Curved(Box::new(Curved::new(motion, &start, &step, tick, first)))
        };
        let base = whole_turns.to_integer().to_i128().unwrap_or(i128::MAX);
        Self {
            counts,
            base: base.saturating_mul(i128::from(counts)),
            tick: first,
            way,
        }
    }

    /// The rotor at the present tick.
    pub(super) fn sample(&self) -> Sample {
        match &self.way {
            Way::Straight(way) => {
                let local = way.counts.value();
                Sample {
                    unwrapped: self.base + local,
                    counts: modulo(local, self.counts),
                    turns: way.turns.value(),
                    rpm: way.rpm,
                }
            }
            Way::Curved(way) => {
                let (turned, change) = way.inside.at(self.tick);
                // Within the input limits nothing wraps; past them a wrong row must not become a panic.
                let phase = way.line.value().wrapping_add(turned).wrapping_add(BIAS);
                let speed = way.from.wrapping_add(change).wrapping_add(BIAS);
                self.rounded(phase, speed)
            }
        }
    }

    /// Goes on to the next tick.
    pub(super) fn advance(&mut self) {
        self.tick += 1;
        match &mut self.way {
            Way::Straight(way) => {
                way.counts.advance();
                way.turns.advance();
            }
            Way::Curved(way) => way.line.advance(),
        }
    }

    /// The sample at a phase (2⁻⁷² turns, less the leg's whole turns) and a speed (2⁻⁷² turns/s), both biased.
    fn rounded(&self, phase: i128, speed: i128) -> Sample {
        // Whole turns and fraction apart, so that no product passes 72 + 40 bits.
        let turns = phase >> PHASE_BITS;
        let fraction = phase.cast_unsigned() & FRACTION;
        let in_turn = scaled(fraction, u64::from(self.counts));
        let places = scaled(fraction, TURN_UNITS);
        let rpm = (speed >> PHASE_BITS) * i128::from(RPM_UNITS)
            + i128::from(scaled(speed.cast_unsigned() & FRACTION, RPM_UNITS));
        Sample {
            unwrapped: self.base + turns * i128::from(self.counts) + i128::from(in_turn),
            // Rounding may reach the full turn, which is the next turn's zero.
            counts: if in_turn == u64::from(self.counts) {
                0
            } else {
                u32::try_from(in_turn).unwrap_or_default()
            },
            turns: if places == TURN_UNITS { 0 } else { places },
            rpm: saturated(rpm),
        }
    }
}

impl Straight {
    fn new(motion: &Move, start: &Rational, step: &Rational, counts: u32, first: u64) -> Self {
        let half = ratio(1, 2);
        let unit = whole(i128::from(TURN_UNITS));
        let mut way = Self {
            counts: Line::new(start, step, &whole(i128::from(counts)), &half),
            turns: Ring::new(start, step, &unit, &half, TURN_UNITS),
            rpm: rpm_units(motion.from.value()),
        };
        if first > 0 {
            way.counts.jump(first);
            way.turns.jump(first);
        }
        way
    }
}

impl Curved {
    fn new(motion: &Move, start: &Rational, step: &Rational, tick: &Seconds, first: u64) -> Self {
        let unit = whole(1 << PHASE_BITS);
        let mut way = Self {
            line: Line::new(start, step, &unit, &Rational::zero()),
            from: (motion.from.value() * unit)
                .floor()
                .to_integer()
                .to_i128()
                .unwrap_or(i128::MAX),
            inside: Inside::new(motion, tick),
        };
        if first > 0 {
            way.line.jump(first);
        }
        way
    }
}

/// ⌊fraction·2⁻⁷²·scale + ½⌋ for a fraction below one and a scale of at most 40 bits; at most `scale`.
#[inline]
fn scaled(fraction: u128, scale: u64) -> u64 {
    ((fraction * u128::from(scale) + HALF) >> PHASE_BITS) as u64
}

/// Euclidean remainder; the usual size of a hold's counts is within the fast 64-bit division.
#[inline]
fn modulo(value: i128, counts: u32) -> u32 {
    let rest = match i64::try_from(value) {
        Ok(small) => small.rem_euclid(i64::from(counts)),
        Err(_) => value.rem_euclid(i128::from(counts)) as i64,
    };
    u32::try_from(rest).unwrap_or_default()
}

/// Rows hold 64-bit speeds: ten thousand times the fastest motor that a rig file can state.
fn saturated(rpm: i128) -> i64 {
    i64::try_from(rpm).unwrap_or(if rpm < 0 { i64::MIN } else { i64::MAX })
}

/// A speed in turns/s as 10⁻⁶ rpm, rounded half up.
pub(super) fn rpm_units(speed: &Rational) -> i64 {
    let units = round_half_up(&(speed * whole(i128::from(RPM_UNITS))));
    units.to_i128().map_or(i64::MAX, saturated)
}

/// The sample at an exact phase and speed, as at the very end of a show.
pub(super) fn exact_sample(phase: &Rational, speed: &Rational, counts: u32) -> Sample {
    let unwrapped = exact_counts(phase, counts);
    let units = round_half_up(&(phase * whole(i128::from(TURN_UNITS))));
    Sample {
        unwrapped,
        counts: modulo(unwrapped, counts),
        turns: units
            .mod_floor(&TURN_UNITS.into())
            .to_u64()
            .unwrap_or_default(),
        rpm: rpm_units(speed),
    }
}

/// ⌊phase · counts + ½⌋ of an exact unwrapped phase.
pub(super) fn exact_counts(phase: &Rational, counts: u32) -> i128 {
    round_half_up(&(phase * whole(i128::from(counts))))
        .to_i128()
        .unwrap_or(i128::MAX)
}
