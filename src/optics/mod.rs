//! From the two mirror phases to the spot on the wall.
//!
//! # Frame
//!
//! The wall as the audience sees it: x to the right, y up, the origin where the beam lands with both mirrors untilted.
//! Angles and senses are counter-clockwise as seen there. Lengths are metres where the rig gives them; without reaches
//! the picture has no scale and a figure's largest radius is 1.
//!
//! # Which picture
//!
//! | the rig gives | [`Model`] | the spot is |
//! | --- | --- | --- |
//! | tilts (or swings), throw, spacing, incidence | `Traced` | reflected ray by ray ([`trace`]) |
//! | tilts, throw, spacing | `Paraxial` | the sum of two turning vectors with their reaches |
//! | less | `EqualReach` | the same sum, both vectors alike |
//!
//! `f64` is right here: nothing in this module reaches a set-point. Sine and cosine are `libm`'s, so that pictures have the
//! same bytes on every machine.

pub mod colour;
pub mod path;
pub mod trace;

use crate::exact::{Length, Turns};
use crate::rig::{Pair, Projection, Rig, RotorId, Stated};
use kurbo::Point;
use std::f64::consts::TAU;
use trace::{Deflect, Geometry, Trace};

/// How a spot is computed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Model {
    /// Exact reflection at both mirrors.
    Traced,
    /// Sum of two turning vectors (crossed: of two vibrations) with the rig's reaches.
    Paraxial,
    /// The same sum with equal reaches, since the rig does not tell them.
    EqualReach,
}

impl Model {
    /// What a picture says about itself.
    #[must_use]
    pub fn words(self) -> &'static str {
        match self {
            Model::Traced => "traced ray by ray",
            Model::Paraxial => "first-order sum with the rig's reaches",
            Model::EqualReach => "first-order sum, equal reaches assumed",
        }
    }
}

/// The way from mirror phases to the wall, made ready for one rig.
#[derive(Clone, Debug)]
pub struct Optics {
    projection: Projection,
    reach: Pair<f64>,
    trace: Option<Trace>,
    model: Model,
    beam: Beam,
    extent: f64,
}

/// The light on the wall.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Beam {
    /// Width of the spot on the wall, in the units of the picture.
    pub width: f64,
    /// Whether the rig tells it; else it is 1/80 of the largest radius.
    pub known: bool,
    /// Wavelength in nanometres, 400 to 700, where the rig tells it.
    pub wavelength: Option<f64>,
}

impl Optics {
    /// The optics of a rig: exact where it tells all that is needed and the light can reach the wall, else first order.
    #[must_use]
    pub fn of(rig: &Rig) -> Self {
        let reaches = reaches(rig);
        let trace = geometry(rig).and_then(|geometry| Trace::new(&geometry).ok());
        let model = match (&trace, reaches) {
            (Some(_), _) => Model::Traced,
            (None, Some(_)) => Model::Paraxial,
            (None, None) => Model::EqualReach,
        };
        let equal = match rig.projection {
            Projection::Circular => 0.5,
            Projection::Crossed => 1.0,
        };
        let reach = reaches.unwrap_or(Pair { a: equal, b: equal });
        let mut optics = Self {
            projection: rig.projection,
            reach,
            trace,
            model,
            beam: Beam {
                width: 0.0,
                known: false,
                wavelength: None,
            },
            extent: 0.0,
        };
        optics.extent = optics.farthest();
        optics.beam = beam(rig, &optics);
        optics
    }

    /// Which computation it is.
    #[must_use]
    pub fn model(&self) -> Model {
        self.model
    }
    /// How the two mirrors make a figure.
    #[must_use]
    pub fn projection(&self) -> Projection {
        self.projection
    }
    /// First-order reach of each mirror: in metres, or ½ (crossed: 1) where it is not known.
    #[must_use]
    pub fn reach(&self) -> Pair<f64> {
        self.reach
    }
    /// The exact trace, where there is one.
    #[must_use]
    pub fn trace(&self) -> Option<&Trace> {
        self.trace.as_ref()
    }
    /// The beam on the wall.
    #[must_use]
    pub fn beam(&self) -> Beam {
        self.beam
    }
    /// Whether lengths are metres.
    #[must_use]
    pub fn in_metres(&self) -> bool {
        self.model != Model::EqualReach
    }

    /// The spot at these mirror phases, in turns.
    #[must_use]
    pub fn spot(&self, phases: Pair<f64>) -> Point {
        match &self.trace {
            Some(trace) => trace.spot(phases),
            None => self.first_order(phases),
        }
    }

    /// The first-order spot: Ra·e^{2πiθa} + Rb·e^{2πiθb}, or (Ra·sin 2πθa, Rb·sin 2πθb) where crossed.
    #[must_use]
    pub fn first_order(&self, phases: Pair<f64>) -> Point {
        let (sin_a, cos_a) = sin_cos_turns(phases.a);
        let (sin_b, cos_b) = sin_cos_turns(phases.b);
        let Pair { a, b } = self.reach;
        match self.projection {
            Projection::Circular => Point::new(a * cos_a + b * cos_b, a * sin_a + b * sin_b),
            Projection::Crossed => Point::new(a * sin_a, b * sin_b),
        }
    }

    /// The largest distance from the origin that a spot can have, to half a percent: pictures of one rig share this scale.
    #[must_use]
    pub fn extent(&self) -> f64 {
        self.extent
    }

    /// From a grid of both phases, with a margin for what lies between.
    fn farthest(&self) -> f64 {
        let steps = 48;
        let mut largest: f64 = 0.0;
        for a in 0..steps {
            for b in 0..steps {
                let phases = Pair {
                    a: f64::from(a) / f64::from(steps),
                    b: f64::from(b) / f64::from(steps),
                };
                largest = largest.max(self.spot(phases).to_vec2().hypot());
            }
        }
        // Both phases at most 1/96 turn off the grid: 1 − cos(2π/96) = 0.2 %.
        largest * 1.003
    }
}

/// Sine and cosine of an angle in turns, brought to one turn first.
#[must_use]
pub fn sin_cos_turns(turns: f64) -> (f64, f64) {
    libm::sincos(TAU * (turns - libm::floor(turns)))
}

/// Ra and Rb in metres: (throw + spacing)·tan 2·tilt_a and throw·tan 2·tilt_b; `None` where the rig does not tell all four.
#[must_use]
pub fn reaches(rig: &Rig) -> Option<Pair<f64>> {
    let throw = metres(rig.throw.as_ref())?;
    let spacing = metres(rig.spacing.as_ref())?;
    let reach = |id: RotorId, distance: f64| {
        let angle = radians(deflector(rig, id))?;
        (angle < TAU / 8.0).then(|| distance * libm::tan(2.0 * angle))
    };
    let reaches = Pair {
        a: reach(RotorId::A, throw + spacing)?,
        b: reach(RotorId::B, throw)?,
    };
    (reaches.a > 0.0 && reaches.b > 0.0).then_some(reaches)
}

/// The angle of a mirror that moves the light: its tilt, or its swing on a crossed rig.
#[must_use]
pub fn deflector(rig: &Rig, id: RotorId) -> Option<&Stated<Turns>> {
    let rotor = rig.rotor(id);
    match rig.projection {
        Projection::Circular => rotor.tilt.as_ref(),
        Projection::Crossed => rotor.swing.as_ref(),
    }
}

/// The geometry for the exact trace, where the rig tells all of it.
#[must_use]
pub fn geometry(rig: &Rig) -> Option<Geometry> {
    let angle = |id| radians(deflector(rig, id));
    let incidence = |id| radians(rig.incidence.of(id).as_ref());
    Some(Geometry {
        deflect: match rig.projection {
            Projection::Circular => Deflect::Spinning,
            Projection::Crossed => Deflect::Swinging,
        },
        angle: Pair {
            a: angle(RotorId::A)?,
            b: angle(RotorId::B)?,
        },
        incidence: Pair {
            a: incidence(RotorId::A)?,
            b: incidence(RotorId::B)?,
        },
        spacing: metres(rig.spacing.as_ref())?,
        throw: metres(rig.throw.as_ref())?,
    })
}

/// A stated angle in radians.
#[must_use]
pub fn radians(angle: Option<&Stated<Turns>>) -> Option<f64> {
    angle.map(|angle| angle.value.to_f64() * TAU)
}

/// A stated length in metres.
#[must_use]
pub fn metres(length: Option<&Stated<Length>>) -> Option<f64> {
    length.map(|length| length.value.to_f64())
}

/// Width of the lit spot at the wall in metres, width + divergence·throw; `None` where the rig does not tell it.
#[must_use]
pub fn spot_width(rig: &Rig) -> Option<f64> {
    let laser = rig.laser.as_ref()?;
    let width = metres(laser.width.as_ref())?;
    let divergence = crate::exact::to_f64(&laser.divergence.as_ref()?.value);
    Some(width + divergence * metres(rig.throw.as_ref())?)
}

fn beam(rig: &Rig, optics: &Optics) -> Beam {
    let wavelength = rig
        .laser
        .as_ref()
        .and_then(|laser| metres(laser.wavelength.as_ref()))
        .map(|metres| metres * 1e9);
    let width = spot_width(rig).filter(|width| optics.in_metres() && *width > 0.0);
    Beam {
        width: width.unwrap_or_else(|| optics.extent() / 80.0),
        known: width.is_some(),
        wavelength,
    }
}
