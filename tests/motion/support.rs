//! What every test here needs.

use phasewright::exact::fixed::phase_value;
use phasewright::exact::{Rational, Seconds, Speed, Ticks, Turns, ratio, to_f64, whole};
use phasewright::motion::inside::Inside;
use phasewright::motion::{Law, LawKind, Move, Shape};

/// Two-sided: |got − want| ≤ tolerance, and both are numbers.
#[track_caller]
pub(crate) fn assert_close(got: f64, want: f64, tolerance: f64, why: &str) {
    let difference = (got - want).abs();
    assert!(
        difference <= tolerance,
        "{why}: got {got:e}, want {want:e}, off by {difference:e} > {tolerance:e}"
    );
}

/// The eight symmetric laws that take a skew or stand alone, by their names in a show file.
pub(crate) const SYMMETRIC: [(&str, LawKind); 8] = [
    ("linear", LawKind::Linear),
    ("cubic", LawKind::Cubic),
    ("quintic", LawKind::Quintic),
    ("septic", LawKind::Septic),
    ("harmonic", LawKind::Harmonic),
    ("cycloidal", LawKind::Cycloidal),
    ("modified-sine", LawKind::ModifiedSine),
    ("modified-trapezoid", LawKind::ModifiedTrapezoid),
];

/// The law of this name.
pub(crate) fn kind(name: &str) -> LawKind {
    let found = SYMMETRIC.iter().find(|(known, _)| *known == name);
    found.expect("a law of this name").1.clone()
}

/// The law without skew.
pub(crate) fn plain(kind: LawKind) -> Shape {
    skewed(kind, ratio(1, 2))
}

/// The law with its middle at `skew`.
pub(crate) fn skewed(kind: LawKind, skew: Rational) -> Shape {
    Shape::Law(Law { kind, skew })
}

/// A move by one turn per second within `ticks` ticks that last a second together: speed is s(u), phase is S(u).
pub(crate) fn unit_move(shape: &Shape, ticks: u64) -> Inside {
    let motion = Move {
        shape: shape.clone(),
        start: Turns::zero(),
        end: Turns::new(shape.integral()),
        from: Speed::zero(),
        to: Speed::new(whole(1)),
        correction: Turns::zero(),
        ticks: Ticks(ticks),
    };
    Inside::new(&motion, &Seconds::new(ratio(1, i128::from(ticks))))
}

/// s(n/ticks), exactly as the move has it.
pub(crate) fn speed_at(shape: &Shape, n: u64, ticks: u64) -> Rational {
    phase_value(unit_move(shape, ticks).speed(n))
}

/// S(n/ticks), exactly as the move has it.
pub(crate) fn gain_at(shape: &Shape, n: u64, ticks: u64) -> Rational {
    phase_value(unit_move(shape, ticks).phase(n))
}

/// |a − b| as `f64`.
pub(crate) fn distance(a: &Rational, b: &Rational) -> f64 {
    to_f64(&(a - b)).abs()
}
