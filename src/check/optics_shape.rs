//! Whether a named curve, a ring, a rose or a star has its true shape on the rig.
//!
//! The shapes need a proportion of the reaches Ra : Rb: cusps where Ra·|p| = Rb·|q|, flat sides where Ra·p² = Rb·q², roses and
//! lines where both are equal; see `docs/mathematics.md`.

use super::gather::Gather;
use super::optics::short;
use crate::exact::to_f64;
use crate::figure::{Figure, Form, NamedCurve};
use crate::finding::{Code, Finding};
use crate::optics::{deflector, metres, reaches};
use crate::rig::{Projection, Rig, RotorId};
use crate::show::Cue;
use std::f64::consts::{FRAC_PI_4, TAU};

/// What counts as drawn true.
const NEAR: f64 = 0.02;

/// Judges the figure of a cue that is played `count` times.
pub(super) fn check(cue: &Cue, count: u64, rig: &Rig, gather: &mut Gather) {
    let found = match rig.projection {
        Projection::Crossed => crossed(cue),
        Projection::Circular => circular(cue, rig),
    };
    if let Some(mut finding) = found {
        finding.count = count;
        gather.add(finding);
    }
}

fn crossed(cue: &Cue) -> Option<Finding> {
    if cue.figure.form == Form::Ratio {
        return None;
    }
    let ratio = cue.figure.ratio;
    let message = format!(
        "{} is a curve of two spinning mirrors; this crossed rig draws the Lissajous figure {ratio}",
        cue.figure.written
    );
    Some(
        Finding::new(Code::OpticsShape, cue.figure_place, message)
            .help(format!("`{ratio}` says what is drawn")),
    )
}

fn circular(cue: &Cue, rig: &Rig) -> Option<Finding> {
    let wanted = wanted(&cue.figure)?;
    let reach = reaches(rig)?;
    let stands = reach.a / reach.b;
    if (stands / wanted - 1.0).abs() <= NEAR {
        return None;
    }
    let what = shape(&cue.figure);
    let message = format!(
        "the reaches of a and b stand {} : 1; {what} needs {} : 1",
        short(stands),
        short(wanted)
    );
    let throw = metres(rig.throw.as_ref())?;
    let tilt = libm::atan(reach.a / (wanted * throw)) / 2.0;
    let help = (tilt < FRAC_PI_4).then(|| {
        let degrees = format!("{:.3}", tilt / TAU * 360.0);
        let degrees = degrees.trim_end_matches('0').trim_end_matches('.');
        format!("`tilt {degrees} deg` on rotor b would draw it")
    });
    let place = deflector(rig, RotorId::B).and_then(|tilt| tilt.place);
    Some(
        Finding::new(Code::OpticsShape, cue.figure_place, message)
            .also_at(place, "the tilt of rotor b")
            .help_if(help),
    )
}

/// Ra / Rb of the true shape; `None` where any will do.
fn wanted(figure: &Figure) -> Option<f64> {
    let square = |term: i32| f64::from(term) * f64::from(term);
    match &figure.form {
        Form::Ratio | Form::Named(NamedCurve::Circle) => None,
        Form::Rose => Some(1.0),
        Form::Ring(of) => Some(to_f64(of) - 1.0),
        Form::RingOutside(of) => Some(to_f64(of) + 1.0),
        Form::Star => Some(square(figure.ratio.q()) / square(figure.ratio.p())),
        Form::Named(curve) => Some(match curve {
            NamedCurve::Deltoid | NamedCurve::Cardioid => 2.0,
            NamedCurve::Astroid | NamedCurve::Nephroid => 3.0,
            _ => 1.0,
        }),
    }
}

fn shape(figure: &Figure) -> String {
    match &figure.form {
        Form::Named(curve) => format!("a true {}", curve.word()),
        Form::Rose => "a rose".to_owned(),
        Form::Star => "a star with straight sides".to_owned(),
        _ => "the curve of a point on the wheel's rim".to_owned(),
    }
}
