//! Stills of a transition: where to look, and what stands there.

use super::light::{self, Grain, Piece};
use crate::optics::Optics;
use crate::optics::path::LegPath;
use crate::plan::{LegKind, Plan};
use crate::rig::Pair;

/// Moments that are looked at to find where the picture changes.
const LOOKS: u32 = 400;
/// Share of the stills' spacing that goes with time alone, so that no long stretch stays unseen.
const EVEN: f64 = 0.25;

/// A leg made ready for its pictures.
#[derive(Clone, Debug)]
pub struct Scenery {
    /// The mirrors' way.
    pub path: LegPath,
    /// The period of the figure before, and of the one that is held or led to.
    periods: (f64, f64),
}

/// What the eye collects around a moment.
#[derive(Clone, Debug)]
pub struct Still {
    /// The moment, in seconds from the leg's start.
    pub at: f64,
    /// The light.
    pub pieces: Vec<Piece>,
}

impl Scenery {
    /// Leg number `index` of a plan; `None` past the last one.
    #[must_use]
    pub fn of(plan: &Plan, index: usize) -> Option<Self> {
        let leg = plan.legs.get(index)?;
        let path = LegPath::of(plan, index)?;
        let period = |leg: &crate::plan::Leg| {
            plan.speeds_of(leg).map(|speeds| {
                let faster = speeds
                    .mirror
                    .a
                    .to_f64()
                    .abs()
                    .max(speeds.mirror.b.to_f64().abs());
                light::period(speeds.repeat.to_f64(), faster)
            })
        };
        let here = period(leg).unwrap_or(light::SHORTEST);
        let before = index
            .checked_sub(1)
            .and_then(|before| plan.legs.get(before))
            .filter(|_| matches!(leg.kind, LegKind::Morph | LegKind::LoopMorph))
            .and_then(period)
            .unwrap_or(here);
        Some(Self {
            path,
            periods: (before, here),
        })
    }

    /// The figure as a hold begins: one repeat period from its first row on. What the eye collects in 1/50 s or more is the
    /// same line, drawn over.
    #[must_use]
    pub fn figure(&self, optics: &Optics, grain: Grain) -> Vec<Piece> {
        let period = self.periods.1;
        light::collect(&self.path, optics, (0.0, period), period, grain)
    }

    /// What the eye collects around a moment, in one repeat period and at least 1/50 s. In a transition nothing repeats: the
    /// period goes evenly, by ratio, from that of the figure before to that of the figure after.
    #[must_use]
    pub fn still(&self, optics: &Optics, at: f64, grain: Grain) -> Still {
        let (before, after) = self.periods;
        let u = (at / self.path.length).clamp(0.0, 1.0);
        let period = before * libm::pow(after / before, u);
        let half = period.max(light::SHORTEST) / 2.0;
        Still {
            at,
            pieces: light::collect(&self.path, optics, (at - half, at + half), period, grain),
        }
    }

    /// `count` moments from start to end, closer together where the picture changes faster.
    ///
    /// The shape of the picture is the ratio of the speeds, so its change is the turning of the direction (va, vb), a
    /// quarter turn from one mirror alone to the other alone; [`EVEN`] of the spacing goes with time.
    #[must_use]
    pub fn moments(&self, count: usize) -> Vec<f64> {
        let length = self.path.length;
        let direction = |step: u32| {
            let Pair { a, b } = self.path.at(length * f64::from(step) / f64::from(LOOKS));
            (a.speed, b.speed)
        };
        let mut sums = vec![0.0];
        let mut total = 0.0;
        let mut last = direction(0);
        for step in 1..=LOOKS {
            let next = direction(step);
            total += turned(last, next);
            sums.push(total);
            last = next;
        }
        let even = if total > 1e-6 { EVEN } else { 1.0 };
        let share = |index: usize| {
            #[expect(clippy::cast_precision_loss, reason = "a few hundred")]
            let time = index as f64 / f64::from(LOOKS);
            let turned = sums.get(index).copied().unwrap_or(total) / total.max(1e-6);
            even * time + (1.0 - even) * turned
        };
        let intervals = count.saturating_sub(1).max(1);
        (0..count)
            .map(|still| {
                #[expect(clippy::cast_precision_loss, reason = "a handful of stills")]
                let wanted = still as f64 / intervals as f64;
                length * place(wanted, &share)
            })
            .collect()
    }
}

/// The angle between two directions, in radians; 0 where one has none.
fn turned(one: (f64, f64), two: (f64, f64)) -> f64 {
    let cross = one.0 * two.1 - one.1 * two.0;
    let dot = one.0 * two.0 + one.1 * two.1;
    if cross == 0.0 && dot == 0.0 {
        0.0
    } else {
        libm::atan2(cross, dot).abs()
    }
}

/// Where a rising share reaches `wanted`, 0 to 1, straight between looks.
fn place(wanted: f64, share: &impl Fn(usize) -> f64) -> f64 {
    let looks = LOOKS as usize;
    let (mut low, mut high) = (0, looks);
    while high - low > 1 {
        let middle = usize::midpoint(low, high);
        if share(middle) < wanted {
            low = middle;
        } else {
            high = middle;
        }
    }
    let (before, after) = (share(low), share(high));
    let part = if after > before {
        ((wanted - before) / (after - before)).clamp(0.0, 1.0)
    } else {
        0.0
    };
    #[expect(clippy::cast_precision_loss, reason = "a few hundred")]
    let at = (low as f64 + part) / looks as f64;
    at
}
