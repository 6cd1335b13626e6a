//! The machine: two rotors with their limits, the projection, the laser and the controller.
//!
//! All speeds, accelerations, jerks, torques, counts and inertias of a [`Rotor`] are at the motor shaft;
//! gears, senses and index angles lead from there to the mirror.

use crate::exact::{
    Acceleration, Inertia, Jerk, Length, Power, Rational, Seconds, Speed, Torque, Turns, ratio,
    whole,
};
use crate::finding::Place;

/// Which of the two rotors: the beam meets `A` first.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum RotorId {
    /// The first mirror in the beam.
    A,
    /// The second mirror in the beam.
    B,
}

impl RotorId {
    /// Both, in the order of the beam.
    pub const BOTH: [RotorId; 2] = [RotorId::A, RotorId::B];

    /// The rotor's name in rig files, tables and messages.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            RotorId::A => "a",
            RotorId::B => "b",
        }
    }
}

/// A pair of values, one for each rotor.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Pair<T> {
    /// Rotor a's.
    pub a: T,
    /// Rotor b's.
    pub b: T,
}

impl<T> Pair<T> {
    /// The pair of `make` of each rotor.
    pub fn each(mut make: impl FnMut(RotorId) -> T) -> Self {
        let a = make(RotorId::A);
        let b = make(RotorId::B);
        Self { a, b }
    }
    /// The value of one rotor.
    pub fn of(&self, id: RotorId) -> &T {
        match id {
            RotorId::A => &self.a,
            RotorId::B => &self.b,
        }
    }
    /// The value of one rotor, to be changed.
    pub fn of_mut(&mut self, id: RotorId) -> &mut T {
        match id {
            RotorId::A => &mut self.a,
            RotorId::B => &mut self.b,
        }
    }
}

/// A value of the rig and where the rig file states it; `place` is `None` for a value that was left out.
#[derive(Clone, Debug, PartialEq)]
pub struct Stated<T> {
    /// The value, or its default.
    pub value: T,
    /// The statement that gave it (of the earlier rotor, where it came by `like`).
    pub place: Option<Place>,
}

impl<T> Stated<T> {
    /// A value that no line of the rig file states.
    pub fn implied(value: T) -> Self {
        Self { value, place: None }
    }
}

/// Which ways a motor may turn.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Turning {
    /// Either way.
    Both,
    /// Never below zero speed.
    Forward,
    /// Never above zero speed.
    Backward,
}

/// A gear in lowest terms: `motor` turns of the motor make `mirror` turns of the mirror.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Gear {
    /// N of N:D, at least 1.
    pub motor: u32,
    /// D of N:D, at least 1.
    pub mirror: u32,
}

/// One motor and its tilted (or swinging) mirror.
#[derive(Clone, Debug)]
pub struct Rotor {
    /// The `rotor` statement.
    pub place: Place,
    /// Diameter of the mirror.
    pub mirror: Option<Stated<Length>>,
    /// Angle of the mirror's normal against the shaft (circular projection).
    pub tilt: Option<Stated<Turns>>,
    /// The mirror's own angle each way (crossed projection).
    pub swing: Option<Stated<Turns>>,
    /// Largest speed, either way.
    pub top_speed: Stated<Speed>,
    /// Below this, and above zero, the motor does not run evenly.
    pub stall_speed: Stated<Speed>,
    /// Limit while the speed grows in size.
    pub acceleration: Stated<Acceleration>,
    /// Limit while the speed shrinks in size.
    pub deceleration: Stated<Acceleration>,
    /// Limit of the change of acceleration, if there is one.
    pub jerk: Option<Stated<Jerk>>,
    /// Motor turns to mirror turns.
    pub gear: Stated<Gear>,
    /// Allowed ways of turning.
    pub turns: Stated<Turning>,
    /// +1 where the spot goes round counter-clockwise when the motor turns forward, else −1; +1 in a crossed rig.
    pub sense: i32,
    /// Position counts in a motor turn.
    pub counts: u32,
    /// Where the mirror throws the spot when it stands on its mark; `None`: the start position is not known.
    pub index: Option<Stated<Turns>>,
    /// Torque over speed, at least one point, speeds ascending; `None`: no limit.
    pub torque: Option<Stated<Vec<(Speed, Torque)>>>,
    /// Torque that friction and air take.
    pub drag: Option<Stated<Torque>>,
    /// Inertia of motor and mirror together, at the motor shaft.
    pub inertia: Option<Stated<Inertia>>,
}

impl Rotor {
    /// σ·N/D: motor turns for one turn of the mirror counted counter-clockwise.
    #[must_use]
    pub fn motor_per_mirror(&self) -> Rational {
        let gear = self.gear.value;
        ratio(
            i128::from(self.sense) * i128::from(gear.motor),
            i128::from(gear.mirror),
        )
    }
    /// The motor's speed where the mirror turns at `mirror`.
    #[must_use]
    pub fn motor_speed(&self, mirror: &Speed) -> Speed {
        mirror.times(&self.motor_per_mirror())
    }
    /// The mirror's index angle, zero where it has none.
    #[must_use]
    pub fn index_angle(&self) -> Turns {
        self.index
            .as_ref()
            .map_or_else(Turns::zero, |index| index.value.clone())
    }
    /// The unwrapped motor phase at the unwrapped mirror phase `mirror`: (θ − index)·σ·N/D.
    #[must_use]
    pub fn motor_phase(&self, mirror: &Turns) -> Turns {
        (mirror - &self.index_angle()).times(&self.motor_per_mirror())
    }
    /// The unwrapped mirror phase at the unwrapped motor phase `motor`: σ·motor·D/N + index.
    #[must_use]
    pub fn mirror_phase(&self, motor: &Turns) -> Turns {
        &motor.times(&self.motor_per_mirror().recip()) + &self.index_angle()
    }
    /// Motor turns after which motor and mirror are both where they were: N of the gear N:D.
    #[must_use]
    pub fn closing_turns(&self) -> Rational {
        whole(i128::from(self.gear.value.motor))
    }
    /// The smaller of the flat acceleration and deceleration, at the motor.
    #[must_use]
    pub fn smaller_acceleration(&self) -> &Acceleration {
        (&self.acceleration.value).min(&self.deceleration.value)
    }
}

/// How the two mirrors make a figure.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Projection {
    /// Two spinning tilted mirrors: the spot is the sum of two turning vectors.
    Circular,
    /// Two mirrors swung across (a) and up (b): Lissajous figures.
    Crossed,
}

/// The laser.
#[derive(Clone, Debug)]
pub struct Laser {
    /// The `laser` statement.
    pub place: Place,
    /// Emitted power.
    pub power: Option<Stated<Power>>,
    /// Wavelength.
    pub wavelength: Option<Stated<Length>>,
    /// Width of the beam as it leaves.
    pub width: Option<Stated<Length>>,
    /// Full divergence in radians (no exact part of a turn, so kept as it is).
    pub divergence: Option<Stated<Rational>>,
}

/// Which table `compile` writes for the controller forms.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum TableKind {
    /// One row a tick.
    Rows,
    /// Pieces of constant change of speed.
    Knots,
}

/// A whole machine, every left-out value filled in.
#[derive(Clone, Debug)]
pub struct Rig {
    /// Title of the `rig` statement, if it has one.
    pub title: Option<String>,
    /// SHA-256 of the rig file's bytes, lower-case hexadecimal.
    pub sha256: String,
    /// Both rotors.
    pub rotors: Pair<Rotor>,
    /// How the figure is made.
    pub projection: Projection,
    /// Second mirror to wall.
    pub throw: Option<Stated<Length>>,
    /// First mirror to second mirror.
    pub spacing: Option<Stated<Length>>,
    /// Angle of incidence at each mirror.
    pub incidence: Pair<Option<Stated<Turns>>>,
    /// Where the faster motor runs unless a cue says otherwise.
    pub working_speed: Stated<Speed>,
    /// The laser, if the rig tells of it.
    pub laser: Option<Laser>,
    /// From command to light; 0 where left out.
    pub latency: Seconds,
    /// Spacing of set-points.
    pub tick: Seconds,
    /// Room for the table in its pack form, in bytes.
    pub storage: Option<Stated<u64>>,
    /// Rows or knots.
    pub table: TableKind,
    /// The repeat rate below which a figure visibly flickers.
    pub repeat: Stated<Speed>,
}

impl Rig {
    /// One rotor.
    #[must_use]
    pub fn rotor(&self, id: RotorId) -> &Rotor {
        self.rotors.of(id)
    }
    /// Whether both rotors have an index, so that the pose of a figure is known.
    #[must_use]
    pub fn knows_pose(&self) -> bool {
        self.rotors.a.index.is_some() && self.rotors.b.index.is_some()
    }
}
