//! From the text of a rig and of a show to the numbers that the published ones are compared with.

use crate::common;
use phasewright::exact::{Rational, to_f64};
use phasewright::motion::Move;
use phasewright::motion::inside::Inside;
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::{Pair, RotorId};

pub(crate) use common::assert_close;

/// The plan of a show without errors.
#[track_caller]
pub(crate) fn planned(rig: &str, show: &str) -> Plan {
    let (plan, findings) = common::plan_of(rig, show);
    let errors = common::errors(&findings);
    assert!(errors.is_empty(), "{rig}\n{show}\n{errors:#?}");
    plan
}

/// The codes of all that is found in a show.
pub(crate) fn codes(rig: &str, show: &str) -> Vec<&'static str> {
    common::codes(&common::try_plan(rig, show, None).1)
}

/// The first figure as it holds: phases in turns at the first row of the hold, speeds in turns/s.
pub(crate) struct FirstHold {
    /// How often the figure repeats, in Hz.
    pub(crate) repeat: f64,
    /// Mirror phases.
    pub(crate) phase: Pair<f64>,
    /// Mirror speeds.
    pub(crate) speed: Pair<f64>,
    /// Motor speeds.
    pub(crate) motor: Pair<f64>,
}

/// The first figure of a plan as it holds.
pub(crate) fn first_hold(plan: &Plan) -> FirstHold {
    let leg = plan
        .legs
        .iter()
        .position(|leg| leg.kind == LegKind::Hold)
        .unwrap();
    let speeds = plan.speeds_of(&plan.legs[leg]).unwrap();
    FirstHold {
        repeat: speeds.repeat.to_f64(),
        phase: Pair::each(|rotor| {
            let motor = plan.phase_before(leg, rotor);
            plan.rig.rotor(rotor).mirror_phase(&motor).to_f64()
        }),
        speed: Pair::each(|rotor| speeds.mirror.of(rotor).to_f64()),
        motor: Pair::each(|rotor| speeds.motor.of(rotor).to_f64()),
    }
}

/// A change of speed of one motor and its limits, as written: turns/s, turns/s², turns/s³.
#[derive(Debug)]
pub(crate) struct Change<'t> {
    pub(crate) from: &'t str,
    pub(crate) to: &'t str,
    pub(crate) acceleration: &'t str,
    pub(crate) jerk: &'t str,
}

/// A planned change of speed of rotor a.
pub(crate) struct Changed {
    /// Seconds.
    pub(crate) duration: f64,
    motion: Move,
    inside: Inside,
}

impl Changed {
    /// The tick nearest to `share` of the time.
    fn at(&self, share: f64) -> u64 {
        (share * self.motion.ticks.0 as f64).round() as u64
    }
    /// The share of the time at which that tick stands.
    pub(crate) fn share_of_tick_near(&self, share: f64) -> f64 {
        self.at(share) as f64 / self.motion.ticks.0 as f64
    }
    /// Turns since the start of the change, at the tick nearest to `share` of its time.
    pub(crate) fn phase(&self, share: f64) -> f64 {
        let n = self.at(share);
        self.motion.from.to_f64() * self.duration * n as f64 / self.motion.ticks.0 as f64
            + fixed(self.inside.phase(n))
    }
    /// Turns/s at the tick nearest to `share` of its time.
    pub(crate) fn speed(&self, share: f64) -> f64 {
        self.motion.from.to_f64() + fixed(self.inside.speed(self.at(share)))
    }
}

/// A number of 2⁻⁷² steps.
fn fixed(steps: i128) -> f64 {
    let one = Rational::from_integer((1_i128 << 72).into());
    to_f64(&(Rational::from_integer(steps.into()) / one))
}

/// What a cue must say so that mirror a turns at `speed`, and b at its size, or at `other` where a stands: b then never
/// changes by more than a.
fn cue(speed: &str, other: &str) -> String {
    match speed.strip_prefix('-') {
        _ if speed == "0" => format!("0:1 rate {other} Hz"),
        Some(size) => format!("-1:1 rate {size} Hz"),
        None => format!("1:1 rate {speed} Hz"),
    }
}

/// The change of speed as the planner makes it with `morph fastest LAW`, on a rig without index marks (so
/// that no landing takes part) and with a tick of 10 µs.
pub(crate) fn fastest_change(change: &Change, law: &str) -> Changed {
    let Change {
        from,
        to,
        acceleration,
        jerk,
    } = change;
    let rig = format!(
        "
rotor a {{
  top-speed 400 Hz
  acceleration {acceleration} Hz/s
  jerk {jerk} Hz/s^2
  counts 4096
  draws counter-clockwise
}}
rotor b like a {{ draws counter-clockwise }}
controller {{ tick 10 us }}
"
    );
    let (start, end) = (cue(from, to), cue(to, from));
    let show = format!(
        "run-up fastest\ncue {start} hold 10 ms\ncue {end} morph fastest {law} hold 10 ms\nrun-down fastest\n"
    );
    let plan = planned(&rig, &show);
    let leg = plan
        .legs
        .iter()
        .position(|leg| leg.kind == LegKind::Morph)
        .unwrap();
    let motion = plan.move_of(leg, RotorId::A).unwrap();
    Changed {
        duration: motion.ticks.time(plan.tick()).to_f64(),
        inside: Inside::new(&motion, plan.tick()),
        motion,
    }
}
