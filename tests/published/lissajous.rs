//! Crossings of Lissajous figures, counted along our own planned motion of a crossed rig.

use crate::support::{first_hold, planned};
use std::f64::consts::TAU;

const RIG: &str = "
projection crossed
rotor a {
  swing 4 deg
  top-speed 12000 rpm
  acceleration 6000 rpm/s
  counts 4096
  index at 0 deg
}
rotor b like a { index at 0 deg }
controller { tick 1 ms }
";

/// The closed polyline of one repeat period; the odd number of steps keeps its corners off the crossings.
fn polyline(figure: &str, steps: usize) -> Vec<[f64; 2]> {
    let plan = planned(
        RIG,
        &format!("cue {figure} land 35 deg hold 1 s\nloop morph 4 s\n"),
    );
    let hold = first_hold(&plan);
    (0..steps)
        .map(|step| {
            let time = step as f64 / steps as f64 / hold.repeat;
            let wave = |phase: f64, speed: f64| (TAU * (phase + speed * time)).sin();
            [
                wave(hold.phase.a, hold.speed.a),
                wave(hold.phase.b, hold.speed.b),
            ]
        })
        .collect()
}

fn side(from: [f64; 2], to: [f64; 2], point: [f64; 2]) -> bool {
    (to[0] - from[0]) * (point[1] - from[1]) - (to[1] - from[1]) * (point[0] - from[0]) > 0.0
}

fn crossings(line: &[[f64; 2]]) -> usize {
    let n = line.len();
    let edge = |i: usize| (line[i], line[(i + 1) % n]);
    let mut count = 0;
    for first in 0..n {
        let (a, b) = edge(first);
        for second in first + 2..n {
            if first == 0 && second == n - 1 {
                continue; // Neighbours, going round.
            }
            let (c, d) = edge(second);
            if side(a, b, c) != side(a, b, d) && side(c, d, a) != side(c, d, b) {
                count += 1;
            }
        }
    }
    count
}

/// 2ab − a − b crossings for coprime a, b in a pose without special symmetry: Bogle, Hearst, Jones & Stoilov, "Lissajous
/// knots", 1994, from memory.
#[test]
fn crossings_are_those_of_lissajous_knots() {
    for (figure, want) in [
        ("1:2", 1),
        ("2:3", 7),
        ("3:4", 17),
        ("3:5", 22),
        ("4:5", 31),
        ("2:-3", 7),
    ] {
        assert_eq!(
            crossings(&polyline(figure, 1501)),
            want,
            "crossings of {figure}"
        );
    }
}
