//! How checks name quantities: the unit a rig file uses, and no more digits than it takes to see the difference.

use crate::exact::{Rational, Seconds, Speed, decimal, exact_decimal, from_f64, to_f64, whole};
use crate::motion::{Law, LawKind};
use crate::plan::LegKind;
use num_traits::Signed;

/// Places tried before a difference is taken to be too small to show.
const MOST_PLACES: u32 = 9;

/// A limit as short as it can be written.
pub(super) fn limit(value: &Rational) -> String {
    exact_decimal(value, MOST_PLACES).unwrap_or_else(|| decimal(value, MOST_PLACES))
}

/// `value` with as many places as show that it is above `limit`.
pub(super) fn above(value: f64, limit: &Rational) -> String {
    let Some(exact) = from_f64(value) else {
        return "no finite".to_owned();
    };
    (0..=MOST_PLACES)
        .map(|places| decimal(&exact, places))
        .find(|text| text.parse::<f64>().is_ok_and(|shown| shown > to_f64(limit)))
        .unwrap_or_else(|| decimal(&exact, MOST_PLACES))
}

/// Turns per second (squared, cubed …) as revolutions per minute (per second …).
pub(super) fn rpm(value: &Rational) -> Rational {
    value * whole(60)
}

/// A duration in seconds, as a script writes it.
pub(super) fn seconds(time: &Seconds) -> String {
    format!("{} s", limit(time.value()))
}

/// A speed in revolutions per minute.
pub(super) fn speed(speed: &Speed) -> String {
    format!("{} rpm", limit(&speed.rpm().abs()))
}

/// A rate in Hz, cut (not rounded up) after three places, so that a value that passes still does.
pub(super) fn rate_down(rate: &Rational) -> String {
    limit(&((rate * whole(1000)).floor() / whole(1000)))
}

/// A rate in Hz, rounded up after three places.
pub(super) fn rate_up(rate: &Rational) -> String {
    limit(&((rate * whole(1000)).ceil() / whole(1000)))
}

/// A law as a script writes it.
pub(super) fn law(law: &Law) -> String {
    let word = law.kind.word();
    if law.skew == crate::exact::ratio(1, 2) || law.kind == LawKind::Scurve {
        return word.to_owned();
    }
    format!("{word} skew {} %", limit(&(&law.skew * whole(100))))
}

/// The words that begin a transition's statement or clause.
pub(super) fn transition(kind: LegKind) -> &'static str {
    match kind {
        LegKind::RunUp => "run-up",
        LegKind::RunDown => "run-down",
        LegKind::LoopMorph => "loop morph",
        LegKind::Morph => "morph",
        LegKind::Hold => "hold",
    }
}

/// A size in bytes, in the unit in which a rig states it where it is a whole number of them.
pub(super) fn bytes(size: u64) -> String {
    const KIB: u64 = 1024;
    const MIB: u64 = KIB * KIB;
    match size {
        0 => "0 B".to_owned(),
        whole if whole.is_multiple_of(MIB) => format!("{} MiB", whole / MIB),
        whole if whole.is_multiple_of(KIB) => format!("{} KiB", whole / KIB),
        size => format!("{size} B"),
    }
}
