//! What the light does on its way: whether it can reach the wall, whether it stays on the second mirror, what is not
//! checked.

use super::gather::Gather;
use crate::finding::{Code, Finding, Place, Severity};
use crate::optics::trace::{Impossible, Trace};
use crate::optics::{deflector, geometry, metres, radians, reaches, spot_width};
use crate::rig::{Pair, Projection, Rig, RotorId};

pub(super) fn check(rig: &Rig, gather: &mut Gather) {
    if let Some(finding) = impossible(rig) {
        gather.add(finding);
    }
    if let Some(finding) = walk_off(rig) {
        gather.add(finding);
    }
    if let Some(finding) = skipped(rig) {
        gather.add(finding);
    }
}

/// Angles of which the light would miss a mirror's front or the wall.
fn impossible(rig: &Rig) -> Option<Finding> {
    let fault = Trace::new(&geometry(rig)?).err()?;
    let incidence = |id: RotorId| rig.incidence.of(id).as_ref().and_then(|angle| angle.place);
    let tilt = |id: RotorId| deflector(rig, id).and_then(|angle| angle.place);
    let (place, message) = match fault {
        Impossible::Grazes(id) => (
            incidence(id),
            format!(
                "the light would meet mirror {} on edge or from behind: incidence and tilts together pass 89 deg",
                id.name()
            ),
        ),
        Impossible::MissesWall => (
            tilt(RotorId::A).or(tilt(RotorId::B)),
            "the light would miss the wall: twice both tilts together passes 89 deg".to_owned(),
        ),
        Impossible::NoNumber => return None,
    };
    let place = place.unwrap_or(rig.rotors.a.place);
    Some(Finding::new(Code::TextNumber, place, message))
}

/// On the second mirror the spot wanders by spacing·tan 2τ, and half the beam's width more; the mirror is met at its
/// incidence β, which stretches both by 1/cos β.
fn walk_off(rig: &Rig) -> Option<Finding> {
    let mirror = rig.rotors.b.mirror.as_ref()?;
    let size = mirror.value.to_f64();
    let spacing = metres(rig.spacing.as_ref())?;
    let tilt = radians(deflector(rig, RotorId::A))?;
    let incidence = radians(rig.incidence.b.as_ref())?;
    let width = metres(rig.laser.as_ref()?.width.as_ref())?;
    let wander = spacing * libm::tan(2.0 * tilt) + width / 2.0;
    let needed = 2.0 * wander / libm::cos(incidence);
    if !needed.is_finite() || needed <= size * (1.0 + 1e-9) {
        return None;
    }
    let message = format!(
        "the beam leaves the mirror of rotor b: it wanders over {} mm, the mirror is {} mm",
        up(needed * 1000.0),
        short(size * 1000.0)
    );
    let place = mirror.place.unwrap_or(rig.rotors.b.place);
    let spacing_place = rig.spacing.as_ref().and_then(|spacing| spacing.place);
    Some(
        Finding::new(Code::OpticsWalkOff, place, message)
            .also_at(spacing_place, "the way from mirror a to mirror b")
            .help(format!(
                "a mirror of {} mm holds it, or a shorter `spacing`",
                up(needed * 1000.0)
            )),
    )
}

/// One note that says which checks lack what.
fn skipped(rig: &Rig) -> Option<Finding> {
    let angle = match rig.projection {
        Projection::Circular => "tilt",
        Projection::Crossed => "swing",
    };
    let tilts = Pair::each(|id| deflector(rig, id).is_some());
    let laser = rig.laser.as_ref();
    let width = laser.is_some_and(|laser| laser.width.is_some());
    let reach = reaches(rig).is_some();
    let mut lacking: Vec<String> = Vec::new();
    let mut say = |check: &str, needs: &[(bool, &str)]| {
        let missing: Vec<&str> = needs
            .iter()
            .filter(|(there, _)| !there)
            .map(|(_, what)| *what)
            .collect();
        if !missing.is_empty() {
            lacking.push(format!("{check} ({})", missing.join(", ")));
        }
    };
    let geometry = [
        (tilts.a && tilts.b, angle),
        (rig.throw.is_some(), "throw"),
        (rig.spacing.is_some(), "spacing"),
    ];
    let mut still = geometry.to_vec();
    still.push((width, "laser width"));
    let divergence = laser.is_some_and(|laser| laser.divergence.is_some());
    still.push((divergence, "laser divergence"));
    if !reach || spot_width(rig).is_none() {
        say("still/spot", &still);
    }
    say(
        "optics/walk-off",
        &[
            (rig.rotors.b.mirror.is_some(), "mirror of b"),
            (tilts.a, angle),
            (rig.spacing.is_some(), "spacing"),
            (rig.incidence.b.is_some(), "incidence"),
            (width, "laser width"),
        ],
    );
    if rig.projection == Projection::Circular {
        say("optics/shape", &geometry);
    }
    if lacking.is_empty() {
        return None;
    }
    let message = format!(
        "not checked, since the rig does not tell enough: {}",
        lacking.join("; ")
    );
    let place: Place = rig.rotors.a.place;
    Some(Finding::new(Code::OpticsSkipped, place, message).severity(Severity::Note))
}

/// Two decimals at most, none needlessly.
pub(super) fn short(value: f64) -> String {
    let text = format!("{value:.2}");
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// Rounded up to a tenth.
fn up(value: f64) -> String {
    short(libm::ceil(value * 10.0 - 1e-6) / 10.0)
}
