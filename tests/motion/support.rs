//! What every test here needs.

use num_bigint::BigInt;
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

/// A move from rest to `change` turns/s whose `ticks` ticks last `time` seconds together, with a correction.
pub(crate) fn inside(
    shape: &Shape,
    change: &Rational,
    time: &Rational,
    ticks: u64,
    correction: &Rational,
) -> Inside {
    let motion = Move {
        shape: shape.clone(),
        start: Turns::zero(),
        end: Turns::new(change * time * shape.integral() + correction),
        from: Speed::zero(),
        to: Speed::new(change.clone()),
        correction: Turns::new(correction.clone()),
        ticks: Ticks(ticks),
    };
    Inside::new(&motion, &Seconds::new(time / whole(i128::from(ticks))))
}

/// A move by one turn per second in one second: speed is s(u), phase is S(u).
pub(crate) fn unit_move(shape: &Shape, ticks: u64) -> Inside {
    inside(shape, &whole(1), &whole(1), ticks, &whole(0))
}

/// s(n/ticks), exactly as the move has it.
pub(crate) fn speed_at(shape: &Shape, n: u64, ticks: u64) -> Rational {
    phase_value(unit_move(shape, ticks).speed(n))
}

/// S(n/ticks), exactly as the move has it.
pub(crate) fn gain_at(shape: &Shape, n: u64, ticks: u64) -> Rational {
    phase_value(unit_move(shape, ticks).phase(n))
}

/// |a − b| as `f64`, the difference taken exactly.
pub(crate) fn distance(a: &Rational, b: &Rational) -> f64 {
    to_f64(&(a - b)).abs()
}

/// 2^exponent.
pub(crate) fn power(exponent: i32) -> f64 {
    2.0_f64.powi(exponent)
}

/// The exact value of a decimal such as −0.125.
pub(crate) fn decimal(text: &str) -> Rational {
    let (head, tail) = text.split_once('.').unwrap_or((text, ""));
    let digits: BigInt = format!("{head}{tail}").parse().unwrap();
    Rational::new(
        digits,
        BigInt::from(10).pow(u32::try_from(tail.len()).unwrap()),
    )
}

/// A Bézier law.
pub(crate) fn bezier(x1: Rational, y1: Rational, x2: Rational, y2: Rational) -> Shape {
    plain(LawKind::Bezier { x1, y1, x2, y2 })
}

/// Every kind of shape: laws plain and skewed, s-curves from no rise to nothing else, Béziers of all characters.
pub(crate) fn shapes() -> Vec<(String, Shape)> {
    let mut shapes = Vec::new();
    for (name, kind) in SYMMETRIC {
        shapes.push((name.to_owned(), plain(kind.clone())));
        if name != "linear" {
            for skew in [5, 30, 95] {
                let shape = skewed(kind.clone(), ratio(skew, 100));
                shapes.push((format!("{name} skew {skew} %"), shape));
            }
        }
    }
    for (n, d) in [
        (0, 1),
        (1, 1_000_000_000_000_000),
        (1, 1000),
        (1, 3),
        (499, 1000),
        (1, 2),
    ] {
        shapes.push((format!("scurve {n}/{d}"), Shape::Scurve(ratio(n, d))));
    }
    let points = [
        ("0.25", "0.1", "0.25", "1"),
        ("0.42", "0", "0.58", "1"),
        ("0.5", "-3", "0.4", "2.5"),
        ("0", "0", "0.58", "1"),
        ("0.42", "0", "1", "1"),
        ("1", "0", "0.001", "1"),
        ("0.3", "0.3", "0.6", "0.6"),
        ("0", "0", "1", "1"),
    ];
    for (x1, y1, x2, y2) in points {
        let shape = bezier(decimal(x1), decimal(y1), decimal(x2), decimal(y2));
        shapes.push((format!("bezier({x1} {y1} {x2} {y2})"), shape));
    }
    shapes
}
