//! The exact way of the light: reflection at two mirrors, then the wall.
//!
//! # Layout
//!
//! The light comes in along −z, meets mirror a, goes to mirror b and on to the wall. The plane of incidence is horizontal.
//! With untilted mirrors and equal incidences the two mirrors are parallel and face each other, so that the light leaves
//! as it came (a Z fold). The wall always stands square to the untilted light. In the frame of the wall
//! (x right, y up, z towards the audience), with incidences βa and βb and directions in the x-z plane counted from +z
//! towards +x:
//!
//! * the light leaves b along −z, so b faces the direction 180° + βb;
//! * the light from a to b goes along 2βb;
//! * a faces 2βb − βa.
//!
//! A normal n is its shaft's direction leaned by the tilt towards
//! cos(2πθ)·across + sin(2πθ)·up, where `up` is y and `across` is the horizontal direction that throws the light right. So
//! at θ = 0, ¼, ½, ¾ a mirror alone throws right, up, left, down. Swinging mirrors (crossed) lean by swing·sin(2πθ), a
//! towards across and b towards up.
//!
//! The shafts pass through the points where the untilted light meets the mirrors.
//!
//! Reflection is r = d − 2(d·n)n (Hecht, *Optics*, from memory).

use super::sin_cos_turns;
use crate::rig::{Pair, RotorId};
use kurbo::Point;
use std::ops::{Add, Mul, Neg, Sub};

/// A direction or place in space.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Vec3 {
    /// To the right.
    pub x: f64,
    /// Up.
    pub y: f64,
    /// Towards the audience.
    pub z: f64,
}

impl Vec3 {
    /// From its three parts.
    #[must_use]
    pub fn new(x: f64, y: f64, z: f64) -> Self {
        Self { x, y, z }
    }
    /// The scalar product.
    #[must_use]
    pub fn dot(self, other: Self) -> f64 {
        self.x * other.x + self.y * other.y + self.z * other.z
    }
}

impl Add for Vec3 {
    type Output = Self;
    fn add(self, other: Self) -> Self {
        Self::new(self.x + other.x, self.y + other.y, self.z + other.z)
    }
}
impl Sub for Vec3 {
    type Output = Self;
    fn sub(self, other: Self) -> Self {
        Self::new(self.x - other.x, self.y - other.y, self.z - other.z)
    }
}
impl Neg for Vec3 {
    type Output = Self;
    fn neg(self) -> Self {
        Self::new(-self.x, -self.y, -self.z)
    }
}
impl Mul<f64> for Vec3 {
    type Output = Self;
    fn mul(self, factor: f64) -> Self {
        Self::new(self.x * factor, self.y * factor, self.z * factor)
    }
}

/// The direction of light along `d` after a mirror with unit normal `n` (of either side).
#[must_use]
pub fn reflect(d: Vec3, n: Vec3) -> Vec3 {
    d - n * (2.0 * d.dot(n))
}

/// How the mirrors move the light.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Deflect {
    /// Tilted mirrors on spinning shafts.
    Spinning,
    /// Mirrors swung as pure sines, a across and b up.
    Swinging,
}

/// All that the trace needs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Geometry {
    /// How the mirrors move the light.
    pub deflect: Deflect,
    /// Tilt, or swing each way, in radians.
    pub angle: Pair<f64>,
    /// Angle of incidence of the untilted light, in radians.
    pub incidence: Pair<f64>,
    /// First mirror to second mirror, in metres.
    pub spacing: f64,
    /// Second mirror to wall, in metres.
    pub throw: f64,
}

/// Why a geometry has no picture.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Impossible {
    /// The light would meet this mirror on edge or from behind.
    Grazes(RotorId),
    /// The light would leave alongside the wall or away from it.
    MissesWall,
    /// A length or an angle is negative, zero where it must not be, or no number.
    NoNumber,
}

/// The exact trace of one geometry.
#[derive(Clone, Copy, Debug)]
pub struct Trace {
    geometry: Geometry,
    mirror: Pair<Mirror>,
    /// Place of mirror b, seen from mirror a.
    to_b: Vec3,
}

/// A mirror at rest: where its shaft points, and the two ways in which its normal can lean.
#[derive(Clone, Copy, Debug)]
struct Mirror {
    shaft: Vec3,
    across: Vec3,
}

const UP: Vec3 = Vec3 {
    x: 0.0,
    y: 1.0,
    z: 0.0,
};
const INTO_WALL: Vec3 = Vec3 {
    x: 0.0,
    y: 0.0,
    z: -1.0,
};
/// How close to 90° an angle of incidence or of arrival may come, in radians: one degree.
const GRAZING: f64 = std::f64::consts::FRAC_PI_2 - std::f64::consts::PI / 180.0;

impl Trace {
    /// Makes a geometry ready.
    ///
    /// # Errors
    ///
    /// Where light could miss a mirror's front or the wall, judged by the sums of the angles, which is on the safe side.
    pub fn new(geometry: &Geometry) -> Result<Self, Impossible> {
        let Geometry {
            angle,
            incidence,
            spacing,
            throw,
            ..
        } = *geometry;
        let counts = |value: f64| value.is_finite() && value >= 0.0;
        let all = [angle.a, angle.b, incidence.a, incidence.b, spacing, throw];
        if !all.into_iter().all(counts) || throw <= 0.0 {
            return Err(Impossible::NoNumber);
        }
        if incidence.a + angle.a > GRAZING {
            return Err(Impossible::Grazes(RotorId::A));
        }
        if incidence.b + 2.0 * angle.a + angle.b > GRAZING {
            return Err(Impossible::Grazes(RotorId::B));
        }
        if 2.0 * (angle.a + angle.b) > GRAZING {
            return Err(Impossible::MissesWall);
        }
        let level = |from_z: f64| {
            let (sin, cos) = libm::sincos(from_z);
            Vec3::new(sin, 0.0, cos)
        };
        let quarter = std::f64::consts::FRAC_PI_2;
        let half = std::f64::consts::PI;
        let a = 2.0 * incidence.b - incidence.a;
        let b = half + incidence.b;
        Ok(Self {
            geometry: *geometry,
            mirror: Pair {
                // Turning a's normal towards +x turns the light after b towards +x; turning b's turns it to −x.
                a: Mirror {
                    shaft: level(a),
                    across: level(a + quarter),
                },
                b: Mirror {
                    shaft: level(b),
                    across: level(b - quarter),
                },
            },
            to_b: level(2.0 * incidence.b) * spacing,
        })
    }

    /// The geometry it was made from.
    #[must_use]
    pub fn geometry(&self) -> &Geometry {
        &self.geometry
    }

    /// A mirror's untilted normal, and the horizontal direction that throws the light right when the normal leans to it.
    #[must_use]
    pub fn mirror(&self, id: RotorId) -> (Vec3, Vec3) {
        let mirror = self.mirror.of(id);
        (mirror.shaft, mirror.across)
    }

    /// Direction of the light before mirror a.
    #[must_use]
    pub fn incoming(&self) -> Vec3 {
        reflect(reflect(INTO_WALL, self.mirror.b.shaft), self.mirror.a.shaft)
    }

    /// From mirror a's centre to mirror b's.
    #[must_use]
    pub fn a_to_b(&self) -> Vec3 {
        self.to_b
    }

    /// The unit normals of both mirrors at these phases, in turns.
    #[must_use]
    pub fn normals(&self, phases: Pair<f64>) -> Pair<Vec3> {
        let angle = self.geometry.angle;
        match self.geometry.deflect {
            Deflect::Spinning => Pair {
                a: self.mirror.a.leaned(angle.a, phases.a),
                b: self.mirror.b.leaned(angle.b, phases.b),
            },
            Deflect::Swinging => {
                let swung = |swing: f64, phase| swing * sin_cos_turns(phase).0;
                Pair {
                    a: self.mirror.a.leaned(swung(angle.a, phases.a), 0.0),
                    b: self.mirror.b.leaned(swung(angle.b, phases.b), 0.25),
                }
            }
        }
    }

    /// Where the light meets mirror b (from b's centre) and its direction after it.
    #[must_use]
    pub fn after_b(&self, phases: Pair<f64>) -> (Vec3, Vec3) {
        let normal = self.normals(phases);
        let between = reflect(self.incoming(), normal.a);
        // From a at −to_b along `between` to the plane of b through the origin.
        let way = self.to_b.dot(normal.b) / between.dot(normal.b);
        let hit = between * way - self.to_b;
        (hit, reflect(between, normal.b))
    }

    /// The spot on the wall in metres, at these phases in turns.
    #[must_use]
    pub fn spot(&self, phases: Pair<f64>) -> Point {
        let (hit, direction) = self.after_b(phases);
        let way = (-self.geometry.throw - hit.z) / direction.z;
        Point::new(hit.x + direction.x * way, hit.y + direction.y * way)
    }
}

impl Mirror {
    fn leaned(&self, angle: f64, phase: f64) -> Vec3 {
        let (sin, cos) = libm::sincos(angle);
        let (up, across) = sin_cos_turns(phase);
        self.shaft * cos + (self.across * across + UP * up) * sin
    }
}
