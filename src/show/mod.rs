//! The resolved show: every name looked up, every left-out clause filled in, nothing planned yet.

use crate::exact::{Rational, Seconds, Speed, Turns};
use crate::figure::Figure;
use crate::finding::Place;
use crate::motion::Law;

/// How long a transition takes, as written.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Length {
    /// A written duration.
    Given(Seconds),
    /// The shortest duration that fits the motors, but not below `at_least`.
    Fastest {
        /// The written lower bound, if there is one.
        at_least: Option<Seconds>,
    },
}

/// One transition of the speeds.
#[derive(Clone, Debug)]
pub struct Transition {
    /// The clause or statement that gives it (of `usual`, where a cue leaves it out; of the cue, where nothing is written).
    pub place: Place,
    /// Its duration.
    pub length: Length,
    /// How the speed goes over.
    pub law: Law,
    /// Whether the laser is dark meanwhile.
    pub dark: bool,
}

/// How long a figure stands.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Hold {
    /// This long.
    For(Seconds),
    /// Until this long after the end of the run-up.
    Until(Seconds),
}

/// How fast a figure is drawn.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Pace {
    /// The faster motor at the rig's working speed.
    Working,
    /// The repeat rate of the whole figure.
    Rate(Speed),
    /// The speed of the faster motor.
    Lead(Speed),
}

/// The pose wanted at the first row of the hold.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Land {
    /// Nothing written: the default pose where both rotors have an index, else free.
    Usual,
    /// A written angle.
    Angle(Turns),
    /// `land free`.
    Free,
}

/// One written `cue`, resolved.
#[derive(Clone, Debug)]
pub struct Cue {
    /// The whole statement.
    pub place: Place,
    /// The figure within it.
    pub figure_place: Place,
    /// The `hold` clause that applies (of `usual`, where the cue leaves it out).
    pub hold_place: Place,
    /// The `land` clause, if one applies.
    pub land_place: Option<Place>,
    /// The `rate` or `lead` clause, if one applies.
    pub pace_place: Option<Place>,
    /// Its label for run sheets.
    pub name: Option<String>,
    /// What it shows.
    pub figure: Figure,
    /// How the speeds come to it; unused where it is played first.
    pub morph: Transition,
    /// How long it stands.
    pub hold: Hold,
    /// How fast it is drawn.
    pub pace: Pace,
    /// The pose it lands in.
    pub land: Land,
    /// How fast the whole figure turns while it holds.
    pub spin: Speed,
    /// Laser level, 0 to 1.
    pub beam: Rational,
}

/// A written cue, or the place of one that could not be read.
#[derive(Clone, Debug)]
pub enum WrittenCue {
    /// Resolved in full.
    Good(Box<Cue>),
    /// Has an error of its own, already reported; it takes itself and the moves that touch it out of the checks.
    Broken(Place),
}

/// How the show ends.
#[derive(Clone, Debug)]
pub enum Ending {
    /// Back into the first cue, for ever.
    Loop {
        /// The `loop` statement.
        place: Place,
        /// The morph that closes it.
        morph: Transition,
    },
    /// To rest; the transition is always dark.
    RunDown(Transition),
}

/// A whole show.
#[derive(Clone, Debug)]
pub struct Show {
    /// Title of the `show` statement, if there is one.
    pub title: Option<String>,
    /// SHA-256 of the show file's bytes, lower-case hexadecimal.
    pub sha256: String,
    /// From rest to the first cue; always dark.
    pub run_up: Transition,
    /// The written cues.
    pub cues: Vec<WrittenCue>,
    /// The order of play: indices into `cues`, `repeat` and `play` unfolded; at most a million.
    pub order: Vec<u32>,
    /// How it ends; `None` where the ending could not be read (already reported).
    pub ending: Option<Ending>,
}
