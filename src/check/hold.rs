//! A figure as it stands: top speed, stall speed, way of turning.

use super::Standing;
use super::words::{above, limit, rate_down, rate_up, speed};
use crate::exact::{Rational, Speed, whole};
use crate::finding::{Code, Finding};
use crate::rig::{RotorId, Turning};
use num_traits::{Signed, Zero};

pub(super) fn check(standing: &Standing) -> Vec<Finding> {
    let fast = worst(standing, |id| over_top(standing, id));
    let slow = worst(standing, |id| stalls(standing, id));
    let mut found: Vec<Finding> = fast.into_iter().chain(slow).collect();
    found.extend(
        RotorId::BOTH
            .into_iter()
            .find_map(|id| wrong_way(standing, id)),
    );
    found
}

/// The finding of the rotor that misses its limit by the larger share, where any does.
fn worst(
    standing: &Standing,
    mut judge: impl FnMut(RotorId) -> Option<(Rational, Finding)>,
) -> Option<Finding> {
    let _ = standing;
    let mut found: Vec<(Rational, Finding)> =
        RotorId::BOTH.into_iter().filter_map(&mut judge).collect();
    // Stable: rotor a first where both miss alike.
    found.sort_by(|one, two| two.0.cmp(&one.0));
    found.into_iter().next().map(|(_, finding)| finding)
}

fn over_top(standing: &Standing, id: RotorId) -> Option<(Rational, Finding)> {
    let rotor = standing.rig.rotor(id);
    let need = standing.speeds.motor.of(id).abs();
    let top = &rotor.top_speed.value;
    if need.value() <= &(top.value() * (whole(1) + crate::exact::ratio(1, 1_000_000_000))) {
        return None;
    }
    let message = format!(
        "rotor {} would need {} rpm, the limit is {}",
        id.name(),
        above(crate::exact::to_f64(&need.rpm()), &top.rpm()),
        speed(top)
    );
    let help = highest_rate(standing).map(|rate| {
        format!(
            "`rate {} Hz` is the highest repeat rate that fits",
            rate_down(&rate)
        )
    });
    let finding = Finding::new(Code::LimitSpeed, standing.pace_place(), message)
        .also_at(rotor.top_speed.place, "the limit")
        .help_if(help);
    Some((need.value() / top.value(), finding))
}

fn term(standing: &Standing, id: RotorId) -> Rational {
    let ratio = standing.cue.figure.ratio;
    whole(i128::from(match id {
        RotorId::A => ratio.p(),
        RotorId::B => ratio.q(),
    }))
}

/// What the spin adds to a mirror's speed, in turns/s.
fn spun(standing: &Standing, id: RotorId) -> Rational {
    standing.speeds.mirror.of(id).value() - standing.speeds.repeat.value() * term(standing, id)
}

/// The repeat rate at which the mirror of `id` turns at `size` in the figure's own sense; `None` where it only spins.
fn rate_at(standing: &Standing, id: RotorId, motor: &Speed) -> Option<Rational> {
    let term = term(standing, id);
    if term.is_zero() {
        return None;
    }
    let mirror = motor.value() / standing.rig.rotor(id).motor_per_mirror().abs();
    Some((mirror - spun(standing, id) * term.signum()) / term.abs())
}

/// The highest repeat rate at which both motors keep their top speeds; `None` where there is none above zero.
pub(super) fn highest_rate(standing: &Standing) -> Option<Rational> {
    for id in RotorId::BOTH {
        let only_spin = standing
            .rig
            .rotor(id)
            .motor_speed(&Speed::new(spun(standing, id)));
        if term(standing, id).is_zero() && only_spin.abs() > standing.rig.rotor(id).top_speed.value
        {
            return None;
        }
    }
    RotorId::BOTH
        .into_iter()
        .filter_map(|id| rate_at(standing, id, &standing.rig.rotor(id).top_speed.value))
        .min()
        .filter(|rate| rate.is_positive() && (rate * whole(1000)).floor().is_positive())
}

fn stalls(standing: &Standing, id: RotorId) -> Option<(Rational, Finding)> {
    let rotor = standing.rig.rotor(id);
    let runs = standing.speeds.motor.of(id).abs();
    let stall = &rotor.stall_speed.value;
    if runs.is_zero() || &runs >= stall {
        return None;
    }
    let message = format!(
        "rotor {} would hold {} rpm, it does not run evenly below {}",
        id.name(),
        limit(&runs.rpm()),
        speed(stall)
    );
    let rate = rate_at(standing, id, stall)
        .filter(|rate| highest_rate(standing).is_some_and(|highest| rate <= &highest));
    let help = rate.map(|rate| {
        format!(
            "`rate {} Hz` is the lowest repeat rate that fits",
            rate_up(&rate)
        )
    });
    let finding = Finding::new(Code::StallHold, standing.pace_place(), message)
        .also_at(rotor.stall_speed.place, "the stall speed")
        .help_if(help);
    Some((stall.value() / runs.value(), finding))
}

fn wrong_way(standing: &Standing, id: RotorId) -> Option<Finding> {
    let rotor = standing.rig.rotor(id);
    let sign = standing.speeds.motor.of(id).sign();
    let (allowed, turned) = match rotor.turns.value {
        Turning::Forward if sign < 0 => ("forward", "backward"),
        Turning::Backward if sign > 0 => ("backward", "forward"),
        _ => return None,
    };
    let ratio = standing.cue.figure.ratio;
    let other_way = match id {
        RotorId::A => format!("{}:{}", -ratio.p(), ratio.q()),
        RotorId::B => format!("{}:{}", ratio.p(), -ratio.q()),
    };
    let message = format!(
        "rotor {} would turn {turned}, it may only turn {allowed}",
        id.name()
    );
    let help = (!term(standing, id).is_zero()).then(|| format!("`{other_way}` turns it {allowed}"));
    Some(
        Finding::new(Code::TurnDirection, standing.cue.figure_place, message)
            .also_at(rotor.turns.place, "the allowed way")
            .help_if(help),
    )
}
