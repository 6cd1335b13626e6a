//! What a row must say, worked out once more: exact division in holds, double-double arithmetic in morphs.

use super::double::Double;
use super::laws::{Curve, Value, septic};
use crate::exact::{Rational, Seconds, to_f64, whole};
use crate::motion::{Move, Shape};
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::{Signed, ToPrimitive};

/// Decimals of turns as whole numbers.
pub(super) const TURN_UNITS: i128 = 1_000_000_000_000;
/// 10⁻⁶ rpm in a turn a second.
pub(super) const RPM_UNITS: i128 = 60_000_000;

/// A value that a column must show: the correct rounding, and where the true value lies within a hair of a tie its other
/// neighbour too; a leg so long that the hair is wider than the last decimal takes more of them.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Wanted {
    pub(super) value: i128,
    least: i128,
    most: i128,
    modulus: Option<i128>,
}

impl Wanted {
    pub(super) fn exactly(value: i128) -> Self {
        Self {
            value,
            least: value,
            most: value,
            modulus: None,
        }
    }
    pub(super) fn accepts(self, found: i128) -> bool {
        match self.modulus {
            None => (self.least..=self.most).contains(&found),
            Some(modulus) => (0..modulus).contains(&found) && self.near(found, 0, modulus),
        }
    }
    /// Whether `found` is within `allowed` of one of these values, modulo a whole number.
    pub(super) fn near(self, found: i128, allowed: i128, modulus: i128) -> bool {
        let above = (found - (self.least - allowed)).rem_euclid(modulus);
        above <= self.most - self.least + 2 * allowed
    }
    /// The same modulo a whole number.
    pub(super) fn modulo(self, modulus: i128) -> Self {
        Self {
            value: self.value.rem_euclid(modulus),
            modulus: Some(modulus),
            ..self
        }
    }
    /// Whether `step` leads from one of these values to within `allowed` of one of `next`, neither of them modulo anything.
    pub(super) fn leads_to(self, next: Self, step: i128, allowed: i128) -> bool {
        let (least, most) = (self.least + step, self.most + step);
        least <= next.most + allowed && most + allowed >= next.least
    }
    /// The first and the last value, where there is more than one.
    pub(super) fn ends(self) -> Option<(i128, i128)> {
        let end = |value: i128| {
            self.modulus
                .map_or(value, |modulus| value.rem_euclid(modulus))
        };
        (self.least < self.most).then(|| (end(self.least), end(self.most)))
    }
    fn plus(self, more: i128) -> Self {
        Self {
            value: self.value + more,
            least: self.least + more,
            most: self.most + more,
            ..self
        }
    }
}

/// One rotor at one tick.
#[derive(Clone, Copy, Debug)]
pub(super) struct RotorWanted {
    /// Unwrapped counts.
    pub(super) counts: Wanted,
    /// 10⁻¹² turns, modulo one turn.
    pub(super) turns: Wanted,
    /// 10⁻⁶ rpm.
    pub(super) rpm: Wanted,
}

impl RotorWanted {
    /// At an exact phase and speed.
    pub(super) fn exact(phase: &Rational, speed: &Rational, counts: u32) -> Self {
        let turns = nearest(&(phase * whole(TURN_UNITS)));
        Self {
            counts: Wanted::exactly(nearest(&(phase * whole(counts.into())))),
            turns: Wanted::exactly(turns.rem_euclid(TURN_UNITS)),
            rpm: Wanted::exactly(nearest(&(speed * whole(RPM_UNITS)))),
        }
    }
}

/// The whole number nearest to an exact one, ties up.
pub(super) fn nearest(value: &Rational) -> i128 {
    let twice: BigInt = value.numer() * 2 + value.denom();
    let double: BigInt = value.denom() * 2;
    twice.div_floor(&double).to_i128().unwrap_or(i128::MAX)
}

/// One rotor in one leg.
pub(super) enum Track {
    Hold(Box<Hold>),
    Morph(Box<Morph>),
}

/// A straight line, by division at each tick.
pub(super) struct Hold {
    counts: Division,
    turns: Division,
    base: i128,
    rpm: i128,
}

/// ⌊(first + n·step)/divisor⌋.
enum Division {
    Narrow {
        first: i128,
        step: i128,
        divisor: i128,
    },
    Wide {
        first: BigInt,
        step: BigInt,
        divisor: BigInt,
    },
}

pub(super) struct Morph {
    curve: Option<Curve>,
    shape: Shape,
    ticks: u64,
    counts: u32,
    /// Counts of the whole turns at the start.
    base: i128,
    start: Double,
    /// Turns gained in the whole leg at the starting speed, by the change of speed (times S) and by the correction.
    straight: Double,
    change: Double,
    bump: Double,
    /// Speed at the start, its change, and c/T, in turns/s.
    from: Double,
    rise: Double,
    kick: Double,
    /// How near to a tie both neighbours are accepted, in turns and turns/s.
    hair: f64,
}

impl Track {
    pub(super) fn new(motion: &Move, tick: &Seconds, counts: u32) -> Self {
        if motion.shape == Shape::Hold {
            Track::Hold(Box::new(Hold::new(motion, tick, counts)))
        } else {
            Track::Morph(Box::new(Morph::new(motion, tick, counts)))
        }
    }

    /// The rotor n ticks into the leg. `known` keeps the law's value for a second rotor that moves by the same one.
    pub(super) fn at(&self, n: u64, known: &mut Option<Value>) -> RotorWanted {
        match self {
            Track::Hold(hold) => hold.at(n),
            Track::Morph(morph) => morph.at(n, known),
        }
    }

    /// How far, in turns, the law's own end lies from the exact end of the move, where that is more than rounding.
    pub(super) fn end_gap(&self, motion: &Move) -> Option<f64> {
        let Track::Morph(morph) = self else {
            return None;
        };
        let (phase, _) = morph.state(morph.ticks, &morph.law(morph.ticks));
        let gained = motion.end.value() - motion.start.value().floor();
        let gap = (phase - Double::from_rational(&gained)).leading().abs();
        (gap > END_GAP.max(END_HAIRS * morph.hair)).then_some(gap)
    }

    /// Whether both follow one law, so that its value can be shared.
    pub(super) fn same_law(&self, other: &Self) -> bool {
        match (self, other) {
            (Track::Morph(one), Track::Morph(two)) => {
                (&one.shape, one.ticks) == (&two.shape, two.ticks)
            }
            _ => false,
        }
    }
}

impl Hold {
    fn new(motion: &Move, tick: &Seconds, counts: u32) -> Self {
        let turns = motion.start.value().floor();
        let start = motion.start.value() - &turns;
        let step = motion.from.value() * tick.value();
        // Turns are printed modulo one, so whole turns a tick may be left out there.
        let part = &step - step.floor();
        let ticks = motion.ticks.0;
        Self {
            counts: Division::new(&start, &step, counts.into(), ticks),
            turns: Division::new(&start, &part, TURN_UNITS, ticks),
            base: turns.to_integer().to_i128().unwrap_or(i128::MAX) * i128::from(counts),
            rpm: nearest(&(motion.from.value() * whole(RPM_UNITS))),
        }
    }

    fn at(&self, n: u64) -> RotorWanted {
        RotorWanted {
            counts: Wanted::exactly(self.base + self.counts.at(n)),
            turns: Wanted::exactly(self.turns.at(n).rem_euclid(TURN_UNITS)),
            rpm: Wanted::exactly(self.rpm),
        }
    }
}

impl Division {
    /// ⌊(start + n·step)·scale + ½⌋ = ⌊(2·scale·(start + n·step)·D + D)/2D⌋ over the common denominator D.
    fn new(start: &Rational, step: &Rational, scale: i128, ticks: u64) -> Self {
        let denominator = start.denom().lcm(step.denom());
        let over = |value: &Rational| -> BigInt {
            value.numer() * (&denominator / value.denom()) * scale * 2
        };
        let first: BigInt = over(start) + &denominator;
        let step = over(step);
        let divisor: BigInt = &denominator * 2;
        let largest: BigInt = first.abs() + step.abs() * ticks + &divisor;
        let narrow = (largest.bits() < 126)
            .then(|| {
                Some(Division::Narrow {
                    first: first.to_i128()?,
                    step: step.to_i128()?,
                    divisor: divisor.to_i128()?,
                })
            })
            .flatten();
        narrow.unwrap_or(Division::Wide {
            first,
            step,
            divisor,
        })
    }

    #[inline]
    fn at(&self, n: u64) -> i128 {
        match self {
            Division::Narrow {
                first,
                step,
                divisor,
            } => {
                let total = first + step * i128::from(n);
                match (i64::try_from(total), i64::try_from(*divisor)) {
                    (Ok(total), Ok(divisor)) => total.div_euclid(divisor).into(),
                    _ => total.div_euclid(*divisor),
                }
            }
            Division::Wide {
                first,
                step,
                divisor,
            } => {
                let total: BigInt = first + step * n;
                total.div_floor(divisor).to_i128().unwrap_or(i128::MAX)
            }
        }
    }
}

impl Morph {
    fn new(motion: &Move, tick: &Seconds, counts: u32) -> Self {
        let time = motion.ticks.time(tick);
        let whole_turns = motion.start.value().floor();
        let from = motion.from.value();
        let rise = motion.to.value() - from;
        let straight = from * time.value();
        let change = &rise * time.value();
        let kick = motion.correction.value() / time.value();
        let size = to_f64(&straight).abs() + to_f64(&change).abs() + to_f64(from).abs();
        Self {
            curve: Curve::new(&motion.shape),
            shape: motion.shape.clone(),
            ticks: motion.ticks.0,
            counts,
            base: whole_turns.to_integer().to_i128().unwrap_or(i128::MAX) * i128::from(counts),
            start: Double::from_rational(&(motion.start.value() - &whole_turns)),
            straight: Double::from_rational(&straight),
            change: Double::from_rational(&change),
            bump: Double::from_rational(motion.correction.value()),
            from: Double::from_rational(from),
            rise: Double::from_rational(&rise),
            kick: Double::from_rational(&kick),
            hair: HAIR + RELATIVE_HAIR * size,
        }
    }

    fn at(&self, n: u64, known: &mut Option<Value>) -> RotorWanted {
        let value = known.get_or_insert_with(|| self.law(n));
        let (phase, speed) = self.state(n, value);
        let (turns, part) = phase.floor();
        let per_turn = i128::from(self.counts);
        RotorWanted {
            counts: self
                .rounded(part, per_turn)
                .plus(self.base + turns * per_turn),
            turns: self.rounded(part, TURN_UNITS).modulo(TURN_UNITS),
            rpm: self.rounded(speed, RPM_UNITS),
        }
    }

    /// s and S after n ticks.
    fn law(&self, n: u64) -> Value {
        let still = Value {
            speed: Double::ZERO,
            gain: Double::ZERO,
        };
        self.curve
            .as_ref()
            .map_or(still, |curve| curve.at(n, self.ticks))
    }

    /// Phase (less the whole turns at the start) and speed after n ticks, with the law's value there.
    fn state(&self, n: u64, value: &Value) -> (Double, Double) {
        let all = Double::from_whole(self.ticks);
        let u = Double::from_whole(n) / all;
        let rest = Double::from_whole(self.ticks.saturating_sub(n)) / all;
        let hump = u * rest;
        let phase = self.start
            + self.straight * u
            + self.change * value.gain
            + self.bump * septic(u, rest).speed;
        let speed =
            self.from + self.rise * value.speed + self.kick * (hump.squared() * hump * 140.0);
        (phase, speed)
    }

    /// `value`·scale rounded half up, and the other neighbours within the hair of it.
    fn rounded(&self, value: Double, scale: i128) -> Wanted {
        let size = scale as f64;
        let (nearest, over) = (value * size + Double::new(0.5)).floor();
        let hair = self.hair * size;
        let over = over.leading();
        Wanted {
            value: nearest,
            least: nearest + (over - hair).floor() as i128,
            most: nearest + (over + hair).floor() as i128,
            modulus: None,
        }
    }
}

/// 2⁻⁶⁰ turn (or turn/s), a millionth of the last decimal of a turn: both evaluators are better than that, see
/// [`Morph::hair`] for what a long leg adds.
const HAIR: f64 = 8.673_617_379_884_035e-19;

/// 2⁻⁵⁰ turn: how far a morph may end beside its exact end.
const END_GAP: f64 = 8.881_784_197_001_252e-16;

/// The same in hairs, for a leg so long that rounding reaches as far.
const END_HAIRS: f64 = 4.0;

/// 2⁻⁹⁰ of the turns that a leg makes: some thousand times the rounding of double-double arithmetic.
const RELATIVE_HAIR: f64 = 8.077_935_669_463_161e-28;

#[cfg(test)]
mod tests {
    use super::Wanted;

    #[test]
    fn neighbours_are_taken_around_the_turn() {
        let wanted = Wanted {
            value: 0,
            least: -1,
            most: 0,
            modulus: None,
        };
        assert!(wanted.accepts(-1) && wanted.accepts(0) && !wanted.accepts(1));
        let around = wanted.modulo(400);
        assert!(around.accepts(399) && around.accepts(0));
        assert!(
            !around.accepts(-1)
                && !around.accepts(1)
                && !around.accepts(398)
                && !around.accepts(400)
        );
        assert_eq!(around.ends(), Some((399, 0)));
        assert!(wanted.near(1, 1, 400) && wanted.near(398, 1, 400));
        assert!(!wanted.near(2, 1, 400) && !wanted.near(397, 1, 400));
        assert!(
            wanted.leads_to(Wanted::exactly(7), 8, 0) && wanted.leads_to(Wanted::exactly(7), 7, 0)
        );
        assert!(!wanted.leads_to(Wanted::exactly(7), 9, 0));
    }
}
