//! Landing: the corrections that bring a figure to its wanted pose, and the grid that every morph ends on.
//!
//! Starting later moves the mirror phases along (p, q); the one combination that no time shift changes is
//! Φ = q·θa − p·θb (mod 1). A landing closes the gap δ between the Φ wanted and the Φ that the speeds alone would give.

use crate::exact::{GRID_PER_TURN, GridPhase, Rational, Turns, ratio, whole, wrap_half, wrap_unit};
use crate::figure::Ratio;
use crate::rig::{Gear, Pair, Rig, Rotor, RotorId, Turning};
use num_integer::Integer;
use num_traits::{Signed, ToPrimitive, Zero};

/// What a landing of a figure asks of each mirror for one turn of Φ.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Shares {
    /// The figure.
    pub ratio: Ratio,
    /// Mirror turns of each rotor for δ = 1, split by what each can bear:
    /// ca = sgn(q)·Wa/(|q|Wa+|p|Wb), cb = −sgn(p)·Wb/(|q|Wa+|p|Wb), W the smaller of a rotor's flat
    /// acceleration and deceleration, at the mirror.
    pub split: Pair<Rational>,
    /// Mirror turns of each rotor for δ = 1 where it carries all of it alone: 1/q and −1/p; `None` where it cannot.
    pub alone: Pair<Option<Rational>>,
}

impl Shares {
    /// The shares for a figure on a rig.
    #[must_use]
    pub fn new(figure: Ratio, rig: &Rig) -> Self {
        let (p, q) = (i128::from(figure.p()), i128::from(figure.q()));
        let bears = Pair::each(|id| {
            let rotor = rig.rotor(id);
            rotor.smaller_acceleration().value() / rotor.motor_per_mirror().abs()
        });
        let whole_share = whole(q.abs()) * &bears.a + whole(p.abs()) * &bears.b;
        let alone = |term: i128| (term != 0).then(|| ratio(1, term));
        Self {
            ratio: figure,
            split: Pair {
                a: whole(q.signum()) * &bears.a / &whole_share,
                b: whole(-p.signum()) * &bears.b / &whole_share,
            },
            alone: Pair {
                a: alone(q),
                b: alone(-p),
            },
        }
    }

    /// Corrections in mirror turns for the gap `delta`, split between both rotors.
    #[must_use]
    pub fn split_of(&self, delta: &Rational) -> Pair<Turns> {
        Pair::each(|id| Turns::new(self.split.of(id) * delta))
    }

    /// Corrections in mirror turns where `carrier` takes all of `delta`; `None` where it cannot.
    #[must_use]
    pub fn all_on(&self, carrier: RotorId, delta: &Rational) -> Option<Pair<Turns>> {
        let share = self.alone.of(carrier).as_ref()?;
        let mut pair = Pair::each(|_| Turns::zero());
        *pair.of_mut(carrier) = Turns::new(share * delta);
        Some(pair)
    }
}

/// δ = wrap(Φ* − Φ) in (−½, ½]: how far the natural end phases miss the wanted pose.
#[must_use]
pub fn gap(figure: Ratio, wanted: &Turns, natural: &Pair<Turns>) -> Rational {
    let reached = whole(i128::from(figure.q())) * natural.a.value()
        - whole(i128::from(figure.p())) * natural.b.value();
    wrap_half(&(wanted.value() - reached))
}

/// The wanted pose Φ* rounded to the grid, in [0, 1).
#[must_use]
pub fn pose_on_grid(wanted: &Turns) -> Turns {
    let steps = GridPhase::nearest(wanted).map_or(0, |grid| grid.0);
    Turns::new(ratio(steps.rem_euclid(GRID_PER_TURN), GRID_PER_TURN))
}

/// The grid pair nearest to `ends` on which q·θa − p·θb is `wanted` (mod 1) exactly.
///
/// Both ends are rounded to the grid; what that leaves of the pose, a few steps, is taken up by the shortest step
/// (x, y) with q·x − p·y = what is left, found by the extended Euclidean algorithm. `None` past the range of the grid.
#[must_use]
pub fn on_grid(figure: Ratio, wanted: &Turns, ends: &Pair<Turns>) -> Option<Pair<GridPhase>> {
    let rounded = Pair {
        a: GridPhase::nearest(&ends.a)?,
        b: GridPhase::nearest(&ends.b)?,
    };
    let (p, q) = (i128::from(figure.p()), i128::from(figure.q()));
    let wanted_steps = GridPhase::nearest(wanted)?.0;
    // Phases stay far below 2^100 steps and terms below 2^14, so the products fit.
    let missed = wanted_steps - (q * rounded.a.0 - p * rounded.b.0);
    let left = wrap_steps(missed);
    // q·x − p·y = 1 has a solution since p and q have no common factor.
    let bezout = q.extended_gcd(&-p);
    let unit = bezout.gcd.signum();
    let (x, y) = (bezout.x * unit * left, bezout.y * unit * left);
    // All solutions are (x + p·k, y + q·k); the shortest has k next to −(p·x + q·y)/(p² + q²).
    let k = round_div(-(p * x + q * y), p * p + q * q);
    Some(Pair {
        a: GridPhase(rounded.a.0 + x + p * k),
        b: GridPhase(rounded.b.0 + y + q * k),
    })
}

/// `steps` of the grid brought to (−half a turn, half a turn].
fn wrap_steps(steps: i128) -> i128 {
    let half = GRID_PER_TURN / 2;
    (steps + half - 1).rem_euclid(GRID_PER_TURN) - half + 1
}

/// `numerator / denominator` to the nearest whole number, ties up; the denominator is above zero.
fn round_div(numerator: i128, denominator: i128) -> i128 {
    (2 * numerator + denominator).div_euclid(2 * denominator)
}

/// The grid points nearest to both ends: a landing that leaves the pose free.
#[must_use]
pub fn free(ends: &Pair<Turns>) -> Option<Pair<GridPhase>> {
    Some(Pair {
        a: GridPhase::nearest(&ends.a)?,
        b: GridPhase::nearest(&ends.b)?,
    })
}

/// The correction, in motor turns, that closes `gap` motor turns modulo the gear's closing turns N:
/// in (−N/2, N/2], or [0, N) forward, or (−N, 0] backward.
#[must_use]
pub fn closing(gap: &Turns, rotor: &Rotor) -> Turns {
    let turns = rotor.closing_turns();
    let share = gap.value() / &turns;
    let kept = match rotor.turns.value {
        Turning::Both => wrap_half(&share),
        Turning::Forward => wrap_unit(&share),
        Turning::Backward => -wrap_unit(&-share),
    };
    Turns::new(kept * turns)
}

/// The unwrapped mirror phase, on the grid, at which a rotor closes the loop: `first` plus whole turns of the gear's
/// mirror side, nearest to where the speeds alone lead by the rotor's own way of turning.
#[must_use]
pub fn closed(rotor: &Rotor, first: GridPhase, natural: &Turns) -> Option<GridPhase> {
    let natural_motor = rotor.motor_phase(natural);
    let gap = &rotor.motor_phase(&first.turns()) - &natural_motor;
    let end_motor = &natural_motor + &closing(&gap, rotor);
    let end = rotor.mirror_phase(&end_motor);
    let Gear { mirror, .. } = rotor.gear.value;
    let period = whole(i128::from(mirror));
    // Exact by the definition of `closing`: the end differs from `first` by whole periods.
    let periods = ((end.value() - first.turns().value()) / period).round();
    let shift = periods.to_integer().to_i128()? * i128::from(mirror) * GRID_PER_TURN;
    Some(GridPhase(first.0 + shift))
}

/// Motor phase at the end of a run-down: a whole number of closing turns where the rotor has an index (its mark),
/// else the motor phase of the nearest grid point of its mirror.
#[must_use]
pub fn at_rest(rotor: &Rotor, natural: &Turns) -> Option<Turns> {
    let natural_motor = rotor.motor_phase(natural);
    if rotor.index.is_none() {
        return Some(rotor.motor_phase(&GridPhase::nearest(natural)?.turns()));
    }
    let end = &natural_motor + &closing(&-&natural_motor, rotor);
    debug_assert!((end.value() / rotor.closing_turns()).fract().is_zero());
    Some(end)
}
