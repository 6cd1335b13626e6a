//! How much of each limit a leg uses, and when.

use crate::motion::Shape;
use crate::motion::profile::{Limits, Profile};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};

/// The peak use of one limit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Peak {
    /// Share of the limit: 1 is at the limit.
    pub share: f64,
    /// The moment, in seconds of table time.
    pub at_s: f64,
}

/// The peak use of each limit of one motor over a leg.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Peaks {
    /// Of the top speed.
    pub speed: Peak,
    /// Of the acceleration or deceleration, whichever applies at the moment.
    pub acceleration: Peak,
    /// Of the jerk; `None` where the rig sets no limit.
    pub jerk: Option<Peak>,
}

/// The peak use of the limits over one leg of a plan; `None` past the last leg.
#[must_use]
pub fn peaks(plan: &Plan, leg: usize) -> Option<Pair<Peaks>> {
    Some(Pair {
        a: of_rotor(plan, leg, RotorId::A)?,
        b: of_rotor(plan, leg, RotorId::B)?,
    })
}

fn of_rotor(plan: &Plan, index: usize, id: RotorId) -> Option<Peaks> {
    let leg = plan.legs.get(index)?;
    let one = plan.move_of(index, id)?;
    let limits = Limits::of(plan.rig.rotor(id));
    let tick = plan.tick().to_f64();
    let start = leg.start.time(plan.tick()).to_f64();
    let length = leg.ticks.time(plan.tick()).to_f64();
    debug_assert!(tick > 0.0);
    let peak = |share: f64, u: f64| Peak {
        share,
        at_s: start + u * length,
    };
    let has_jerk = limits.jerk.is_finite();
    if one.shape == Shape::Hold {
        return Some(Peaks {
            speed: peak(one.from.to_f64().abs() / limits.speed, 0.0),
            acceleration: peak(0.0, 0.0),
            jerk: has_jerk.then(|| peak(0.0, 0.0)),
        });
    }
    let profile = Profile::of(&one, plan.tick());
    let speed = profile.speed_peak();
    let acceleration = profile.acceleration_peak(&limits);
    let jerk = profile.jerk_peak();
    Some(Peaks {
        speed: peak(speed.value / limits.speed, speed.u),
        acceleration: peak(acceleration.share, acceleration.u),
        jerk: has_jerk.then(|| peak(jerk.value / limits.jerk, jerk.u)),
    })
}
