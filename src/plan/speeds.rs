//! The speeds and the wanted pose of a cue on a rig.

use super::landing::{self, Shares};
use crate::exact::{Speed, Turns, ratio, whole, wrap_unit};
use crate::rig::{Pair, Projection, Rig};
use crate::show::{Cue, Land, Pace};
use num_traits::Signed;

/// The speeds of a written cue and what its pose asks for.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CueSpeeds {
    /// f: how often the whole figure repeats, before spin, always above zero.
    pub repeat: Speed,
    /// Mirror speeds with spin, counter-clockwise positive.
    pub mirror: Pair<Speed>,
    /// Motor speeds with spin.
    pub motor: Pair<Speed>,
    /// The wanted Φ* in [0, 1) at the first row of the hold, on the grid; `None` where the pose is free.
    pub pose: Option<Turns>,
    /// What a landing of the figure asks of each rotor.
    pub shares: Shares,
}

impl CueSpeeds {
    /// The speeds of `cue` on `rig`.
    #[must_use]
    pub fn new(cue: &Cue, rig: &Rig) -> Self {
        let figure = cue.figure.ratio;
        let terms = Pair {
            a: whole(i128::from(figure.p())),
            b: whole(i128::from(figure.q())),
        };
        let [a, b] = [&rig.rotors.a, &rig.rotors.b].map(|rotor| rotor.motor_per_mirror().abs());
        let faster = (terms.a.abs() * a).max(terms.b.abs() * b);
        let led = |lead: &Speed| lead.times(&faster.recip());
        let repeat = match &cue.pace {
            Pace::Working => led(&rig.working_speed.value),
            Pace::Lead(lead) => led(lead),
            Pace::Rate(rate) => rate.clone(),
        };
        let mut mirror = Pair::each(|id| repeat.times(terms.of(id)));
        match rig.projection {
            Projection::Circular => mirror = Pair::each(|id| mirror.of(id) + &cue.spin),
            // Φ = q·φa − p·φb moves at the spin's rate: by rotor b, or by a where b leaves Φ alone.
            Projection::Crossed if figure.p() != 0 => {
                mirror.b = &mirror.b - &cue.spin.times(&terms.a.recip());
            }
            Projection::Crossed => mirror.a = &mirror.a + &cue.spin.times(&terms.b.recip()),
        }
        Self {
            motor: Pair::each(|id| rig.rotor(id).motor_speed(mirror.of(id))),
            repeat,
            mirror,
            pose: pose(cue, rig),
            shares: Shares::new(figure, rig),
        }
    }
}

/// The wanted Φ* on the grid; `None` where the pose is free.
fn pose(cue: &Cue, rig: &Rig) -> Option<Turns> {
    if !rig.knows_pose() {
        return None;
    }
    let figure = cue.figure.ratio;
    let crossed = rig.projection == Projection::Crossed;
    let quarter = Turns::new(ratio(1, 4));
    let both_odd = figure.p() % 2 != 0 && figure.q() % 2 != 0;
    let wanted = match &cue.land {
        Land::Free => return None,
        Land::Angle(angle) if crossed => Turns::new(wrap_unit(angle.value())),
        Land::Angle(angle) => figure.phase_of_pose(angle),
        // The open figure: a quarter turn apart where both terms are odd, else in step.
        Land::Usual if crossed && both_odd => quarter,
        Land::Usual if crossed || figure.p() == figure.q() => Turns::zero(),
        Land::Usual => figure.phase_of_pose(&quarter),
    };
    Some(landing::pose_on_grid(&wanted))
}
