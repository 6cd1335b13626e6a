//! A passage: one transition of both rotors as it is for *every* pose before it.
//!
//! Hints and `fastest` must give the same answer for every play of a cue, so they count with the worst landing that any
//! start phases could ask for, never with the one at hand. The share of an `scurve` counts with it too.

use super::landing::Shares;
use crate::exact::{Rational, Seconds, Speed, Ticks, Turns, ratio, whole};
use crate::motion::profile::{Limits, Profile};
use crate::motion::{Law, LawKind, Shape};
use crate::rig::{Pair, Rig, Rotor, RotorId, Turning};
use num_traits::{Signed, Zero};

/// Peak acceleration of the landing's bump for c = 1 turn and T = 1 s, 84√5/25 rounded up in the fourth place.
fn bump_acceleration() -> Rational {
    ratio(75_132, 10_000)
}

/// Peak jerk of the landing's bump for c = 1 turn and T = 1 s: 105/2.
fn bump_jerk() -> Rational {
    ratio(105, 2)
}

/// What a transition has to end on.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Aim {
    /// Anywhere: no correction but the rounding to the grid.
    Free,
    /// A pose of a figure.
    Pose(Shares),
    /// Each rotor that says so on a position of its own, modulo its gear: the loop's seam, or the mark.
    Close(Pair<bool>),
}

/// One transition of both rotors, without its start phases.
#[derive(Clone, Copy, Debug)]
pub struct Passage<'a> {
    /// The machine.
    pub rig: &'a Rig,
    /// How the speeds go over.
    pub law: &'a Law,
    /// Motor speeds before.
    pub from: &'a Pair<Speed>,
    /// Motor speeds after.
    pub to: &'a Pair<Speed>,
    /// What it has to end on.
    pub aim: &'a Aim,
}

/// No passage takes longer than the longest show, thirty days.
fn most_ticks(tick: &Seconds) -> u64 {
    let month = Seconds::new(whole(30 * 24 * 3600));
    month.rounded(tick).map_or(u64::MAX >> 8, |ticks| ticks.0)
}

/// A correction of each rotor, in motor turns.
pub type Corrections = Pair<Turns>;

impl Passage<'_> {
    /// Corrections at the motor of a pair at the mirrors.
    fn at_motor(&self, mirror: &Pair<Turns>) -> Corrections {
        Pair::each(|id| mirror.of(id).times(&self.rig.rotor(id).motor_per_mirror()))
    }

    /// The move's shape for one rotor where the transition takes `ticks`.
    #[must_use]
    pub fn shape(&self, id: RotorId, ticks: Ticks) -> Shape {
        if self.law.kind != LawKind::Scurve {
            return Shape::Law(self.law.clone());
        }
        self.scurve(id, ticks, &self.largest(id, ticks))
    }

    /// The shapes for both rotors.
    #[must_use]
    pub fn shapes(&self, ticks: Ticks) -> Pair<Shape> {
        Pair::each(|id| self.shape(id, ticks))
    }

    /// The share of an `scurve` that leaves room for a landing of ĉ = `worst` motor turns.
    fn scurve(&self, id: RotorId, ticks: Ticks, worst: &Rational) -> Shape {
        let half = ratio(1, 2);
        let rotor = self.rig.rotor(id);
        let time = ticks.time(&self.rig.tick);
        let change = (self.to.of(id) - self.from.of(id)).abs();
        let left =
            self.acceleration(id) - bump_acceleration() * worst / (time.value() * time.value());
        if !left.is_positive() {
            return Shape::Scurve(half);
        }
        let share = Rational::from_integer(1.into()) - change.value() / (left * time.value());
        // A share of exactly 0 (no jerk limit: the speed rises in a straight line) is the time optimum itself.
        let straight = share.is_zero() && rotor.jerk.is_none();
        Shape::Scurve(if share.is_positive() || straight {
            share.min(half)
        } else {
            half
        })
    }

    /// The flat limit that applies throughout where one does, else the smaller, at the motor.
    fn acceleration(&self, id: RotorId) -> Rational {
        let rotor = self.rig.rotor(id);
        let (from, to) = (self.from.of(id), self.to.of(id));
        let (before, after) = (from.abs(), to.abs());
        let same_way = from.sign() * to.sign() >= 0;
        let limit = if same_way && after > before {
            &rotor.acceleration.value
        } else if same_way && after < before {
            &rotor.deceleration.value
        } else {
            rotor.smaller_acceleration()
        };
        limit.value().clone()
    }

    /// ĉ of one rotor: the size of the largest correction that some start phases can ask for, at the motor.
    fn largest(&self, id: RotorId, ticks: Ticks) -> Rational {
        let usual = self.usual_worst();
        let of = |all: &[Corrections]| {
            all.iter()
                .map(|pair| pair.of(id).abs().value().clone())
                .max()
                .unwrap_or_else(Rational::zero)
        };
        let largest = of(&usual);
        if !matches!(self.aim, Aim::Pose(_)) || !self.has_one_way() {
            return largest;
        }
        // Which candidates a one-way rotor leaves depends on the shape and the shape on the largest of them:
        // one round from the usual ones settles it, the same way on every machine.
        let first = Pair::each(|rotor| self.scurve(rotor, ticks, &of_rotor(&usual, rotor)));
        self.selectable(&first, ticks)
            .map_or(largest, |all| of(&all))
    }

    fn has_one_way(&self) -> bool {
        RotorId::BOTH
            .iter()
            .any(|id| self.rig.rotor(*id).turns.value != Turning::Both)
    }

    /// The worst corrections where no one-way rotor stands against them.
    fn usual_worst(&self) -> Vec<Corrections> {
        match self.aim {
            Aim::Free => vec![],
            Aim::Pose(shares) => [ratio(1, 2), ratio(-1, 2)]
                .iter()
                .map(|delta| self.at_motor(&shares.split_of(delta)))
                .collect(),
            Aim::Close(closes) => {
                let end = |id: RotorId, up: bool| {
                    let rotor = self.rig.rotor(id);
                    if !closes.of(id) {
                        return Turns::zero();
                    }
                    Turns::new(worst_closing(rotor, up))
                };
                vec![
                    Pair::each(|id| end(id, true)),
                    Pair::each(|id| end(id, false)),
                ]
            }
        }
    }

    /// Every worst correction that some start phases can select at this duration, zero among them;
    /// `None` where for some start phases no candidate keeps every one-way rotor on its way.
    fn selectable(&self, shapes: &Pair<Shape>, ticks: Ticks) -> Option<Vec<Corrections>> {
        let mut all = vec![Pair::each(|_| Turns::zero())];
        match self.aim {
            Aim::Pose(shares) if self.has_one_way() => {
                self.offender(shapes, ticks, &all.first()?.clone())
                    .is_none()
                    .then_some(())?;
                for sign in [1, -1] {
                    all.extend(self.selectable_one_way(shares, shapes, ticks, sign)?);
                }
            }
            _ => {
                all.extend(self.usual_worst());
                if all
                    .iter()
                    .any(|pair| self.offender(shapes, ticks, pair).is_some())
                {
                    return None;
                }
            }
        }
        Some(all)
    }

    /// The worst corrections for gaps δ of one sign, |δ| ≤ ½, on a rig with a one-way rotor.
    ///
    /// Up to some |δ| the split serves; past it the same rotor would turn back, and δ ∓ 1 is split instead, from
    /// 1 − |δ| on down; where that turns the other rotor back, the other one takes all of δ.
    fn selectable_one_way(
        &self,
        shares: &Shares,
        shapes: &Pair<Shape>,
        ticks: Ticks,
        sign: i128,
    ) -> Option<Vec<Corrections>> {
        let split = |size: &Rational| self.at_motor(&shares.split_of(&(size * whole(sign))));
        let serves = |pair: &Corrections| self.offender(shapes, ticks, pair).is_none();
        let half = ratio(1, 2);
        let full = split(&half);
        let Some(offender) = self.offender(shapes, ticks, &full) else {
            return Some(vec![full]);
        };
        let reach = largest_that(&Rational::zero(), &half, |size| serves(&split(size)));
        let far = whole(1) - &reach;
        let mut all = vec![split(&reach)];
        if serves(&split(&-far.clone())) {
            all.push(split(&-far));
            return Some(all);
        }
        let mut rest = half.clone();
        if serves(&split(&-half.clone())) {
            let near = largest_that(&half, &far, |size| serves(&split(&-size.clone())));
            all.push(split(&-near.clone()));
            rest = rest.min(whole(1) - near);
        }
        let alone = self.at_motor(&shares.all_on(other(offender), &(rest * whole(sign)))?);
        serves(&alone).then_some(())?;
        all.push(alone);
        Some(all)
    }

    /// The longest duration that is looked at.
    #[must_use]
    pub fn longest(&self) -> Ticks {
        Ticks(most_ticks(&self.rig.tick))
    }

    /// Every worst correction, at the motor, that some start phases can select at this duration, zero among them;
    /// `None` where for some start phases no candidate keeps every one-way rotor on its way.
    #[must_use]
    pub fn worst(&self, ticks: Ticks) -> Option<Vec<Corrections>> {
        self.selectable(&self.shapes(ticks), ticks)
    }

    /// The first one-way rotor that these corrections would turn back.
    fn offender(&self, shapes: &Pair<Shape>, ticks: Ticks, pair: &Corrections) -> Option<RotorId> {
        RotorId::BOTH.into_iter().find(|id| {
            let turning = self.rig.rotor(*id).turns.value;
            turning != Turning::Both && self.profile(*id, shapes, ticks, pair).turns_back(turning)
        })
    }

    fn profile(
        &self,
        id: RotorId,
        shapes: &Pair<Shape>,
        ticks: Ticks,
        pair: &Corrections,
    ) -> Profile {
        Profile::new(
            shapes.of(id),
            (self.from.of(id), self.to.of(id)),
            pair.of(id),
            &ticks.time(&self.rig.tick),
        )
    }

    /// The corrections, at the mirrors, for the gap δ = `delta` of this passage's pose: the first candidate in which
    /// no one-way rotor turns back; `None` where each of them turns one back (then δ is split all the same by the caller).
    #[must_use]
    pub fn correction(
        &self,
        shares: &Shares,
        ticks: Ticks,
        delta: &Rational,
    ) -> Option<Pair<Turns>> {
        let split = shares.split_of(delta);
        if !self.has_one_way() {
            return Some(split);
        }
        let shapes = self.shapes(ticks);
        let offends = |mirror: &Pair<Turns>| self.offender(&shapes, ticks, &self.at_motor(mirror));
        let Some(offender) = offends(&split) else {
            return Some(split);
        };
        let around = if delta.is_negative() {
            delta + whole(1)
        } else {
            delta - whole(1)
        };
        let second = shares.split_of(&around);
        if offends(&second).is_none() {
            return Some(second);
        }
        let third = shares.all_on(other(offender), delta)?;
        offends(&third).is_none().then_some(third)
    }

    /// Whether every limit of both rotors holds at this duration for every possible landing.
    #[must_use]
    pub fn fits(&self, ticks: Ticks) -> bool {
        // Cheap to see, and it fails for most of the durations that a search looks at.
        if !RotorId::BOTH.into_iter().all(|id| self.law_fits(id, ticks)) {
            return false;
        }
        let shapes = self.shapes(ticks);
        let Some(all) = self.selectable(&shapes, ticks) else {
            return false;
        };
        RotorId::BOTH.into_iter().all(|id| {
            if self.law.kind == LawKind::Scurve {
                self.scurve_fits(id, &shapes, ticks, &all)
            } else {
                let limits = Limits::of(self.rig.rotor(id));
                all.iter()
                    .all(|pair| self.profile(id, &shapes, ticks, pair).within(&limits))
            }
        })
    }

    /// Whether the law alone, without a landing, keeps the limits of one rotor (for `scurve`: can keep them).
    fn law_fits(&self, id: RotorId, ticks: Ticks) -> bool {
        let time = ticks.time(&self.rig.tick);
        if self.law.kind == LawKind::Scurve {
            let change = (self.to.of(id) - self.from.of(id)).abs();
            return change.value() <= &(self.acceleration(id) * time.value());
        }
        let shape = Shape::Law(self.law.clone());
        let ends = (self.from.of(id), self.to.of(id));
        Profile::new(&shape, ends, &Turns::zero(), &time).within(&Limits::of(self.rig.rotor(id)))
    }

    /// The closed form for `scurve`, at the motor: A′ = A − 7.5132·ĉ/T², J′ = J − 52.5·ĉ/T³,
    /// r = min(½, 1 − |Δv|/(A′T)); it fits where A′, J′ > 0, r ≥ 0 and |Δv|/(T²·r(1−r)) ≤ J′, and the top speed holds.
    fn scurve_fits(
        &self,
        id: RotorId,
        shapes: &Pair<Shape>,
        ticks: Ticks,
        all: &[Corrections],
    ) -> bool {
        let rotor = self.rig.rotor(id);
        let worst = self.largest(id, ticks);
        let time = ticks.time(&self.rig.tick).value().clone();
        let change = (self.to.of(id) - self.from.of(id)).abs().value().clone();
        let bump = bump_acceleration() * &worst / (&time * &time);
        let left = self.acceleration(id) - &bump;
        if !left.is_positive() {
            return false;
        }
        let share = (whole(1) - &change / (left * &time)).min(ratio(1, 2));
        if share.is_negative() {
            return false;
        }
        if let Some(jerk) = &rotor.jerk {
            let left = jerk.value.value() - bump_jerk() * &worst / (&time * &time * &time);
            let needed = &change / (&time * &time);
            if !left.is_positive() || needed > left * &share * (whole(1) - &share) {
                return false;
            }
        }
        let mut limits = Limits::of(rotor);
        // The closed form knows one limit of acceleration; a bump that alone is past the other one is looked at in full.
        if &bump <= rotor.smaller_acceleration().value() {
            limits = limits.only_speed();
        }
        all.iter()
            .all(|pair| self.profile(id, shapes, ticks, pair).within(&limits))
    }

    /// The smallest whole number of ticks at which every limit holds for every possible landing;
    /// `None` where no duration up to thirty days helps.
    #[must_use]
    pub fn shortest(&self) -> Option<Ticks> {
        let most = most_ticks(&self.rig.tick);
        let mut fits = 1;
        while !self.fits(Ticks(fits)) {
            if fits == most {
                return None;
            }
            fits = (fits * 2).min(most);
        }
        let mut fails = fits / 2;
        while fails + 1 < fits {
            let middle = fails + (fits - fails) / 2;
            if self.fits(Ticks(middle)) {
                fits = middle;
            } else {
                fails = middle;
            }
        }
        Some(Ticks(fits))
    }
}

/// The largest correction of one rotor among `all`.
fn of_rotor(all: &[Corrections], id: RotorId) -> Rational {
    all.iter()
        .map(|pair| pair.of(id).abs().value().clone())
        .max()
        .unwrap_or_else(Rational::zero)
}

fn other(id: RotorId) -> RotorId {
    match id {
        RotorId::A => RotorId::B,
        RotorId::B => RotorId::A,
    }
}

/// The end of the range of a closing correction: ±N/2, or N and 0 by the rotor's own way.
fn worst_closing(rotor: &Rotor, up: bool) -> Rational {
    let turns = rotor.closing_turns();
    match (rotor.turns.value, up) {
        (Turning::Both, true) => turns / whole(2),
        (Turning::Both, false) => -turns / whole(2),
        (Turning::Forward, true) => turns,
        (Turning::Backward, false) => -turns,
        _ => Rational::zero(),
    }
}

/// The largest of forty halvings between `low`, which serves, and `high`, which does not.
fn largest_that(low: &Rational, high: &Rational, serves: impl Fn(&Rational) -> bool) -> Rational {
    let (mut low, mut high) = (low.clone(), high.clone());
    for _ in 0..40 {
        let middle = (&low + &high) / whole(2);
        if serves(&middle) {
            low = middle;
        } else {
            high = middle;
        }
    }
    low
}
