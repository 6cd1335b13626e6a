//! Lobes, cusps, closing turns, winding, lengths and areas of the classic curves, found by following the spot of our
//! own planned motion around one repeat period, against published tables.

use crate::support::{assert_close, first_hold, planned};
use phasewright::rig::Pair;
use std::f64::consts::{PI, TAU};

/// The spot's path over one repeat period of the hold, for reaches chosen by the test.
///
/// Lengths and areas are integrals of a smooth periodic function over its period, for which the trapezoid rule
/// converges faster than any power of the step; only cusps, where the speed has a corner, leave an error of order step².
struct Path {
    spots: Vec<[f64; 2]>,
    velocities: Vec<[f64; 2]>,
    /// Turns of mirror a in one period.
    turns_a: f64,
}

const STEPS: usize = 40_000;

fn add(first: [f64; 2], second: [f64; 2]) -> [f64; 2] {
    [first[0] + second[0], first[1] + second[1]]
}

fn size(vector: [f64; 2]) -> f64 {
    vector[0].hypot(vector[1])
}

/// The path of `figure` as the plan of a show on a rig with equal motors holds it.
fn path(figure: &str, reach: Pair<f64>) -> Path {
    let plan = planned(RIG, &format!("cue {figure} hold 1 s\nloop morph fastest\n"));
    let hold = first_hold(&plan);
    let repeat = hold.repeat;
    let vector = |reach: f64, phase: f64, speed: f64, share: f64| {
        let angle = TAU * (phase + speed * share / repeat);
        let along = TAU * speed / repeat;
        let spot = [reach * angle.cos(), reach * angle.sin()];
        (spot, [-spot[1] * along, spot[0] * along])
    };
    let mut spots = Vec::new();
    let mut velocities = Vec::new();
    for step in 0..STEPS {
        let share = step as f64 / STEPS as f64;
        let (spot_a, velocity_a) = vector(reach.a, hold.phase.a, hold.speed.a, share);
        let (spot_b, velocity_b) = vector(reach.b, hold.phase.b, hold.speed.b, share);
        spots.push(add(spot_a, spot_b));
        velocities.push(add(velocity_a, velocity_b));
    }
    Path {
        spots,
        velocities,
        turns_a: hold.speed.a / repeat,
    }
}

impl Path {
    fn length(&self) -> f64 {
        self.velocities.iter().map(|each| size(*each)).sum::<f64>() / STEPS as f64
    }
    /// ½∮(x dy − y dx), counter-clockwise positive.
    fn area(&self) -> f64 {
        let twice: f64 = self
            .spots
            .iter()
            .zip(&self.velocities)
            .map(|(spot, velocity)| spot[0] * velocity[1] - spot[1] * velocity[0])
            .sum();
        twice / 2.0 / STEPS as f64
    }
    /// How often it goes round its centre; for paths that do not meet it.
    fn winding(&self) -> f64 {
        self.spots
            .iter()
            .zip(self.spots.iter().cycle().skip(1))
            .map(|(now, next)| {
                (now[0] * next[1] - now[1] * next[0]).atan2(now[0] * next[0] + now[1] * next[1])
            })
            .sum::<f64>()
            / TAU
    }
    /// Steps at which `values` is greater than before and not less than after, going round.
    fn peaks(values: &[f64]) -> Vec<usize> {
        let n = values.len();
        (0..n)
            .filter(|&i| values[i] > values[(i + n - 1) % n] && values[i] >= values[(i + 1) % n])
            .collect()
    }
    fn lobes(&self) -> usize {
        let radii: Vec<f64> = self.spots.iter().map(|spot| size(*spot)).collect();
        Self::peaks(&radii).len()
    }
    /// Points at which the spot comes to rest.
    fn cusps(&self) -> usize {
        let slowness: Vec<f64> = self.velocities.iter().map(|each| -size(*each)).collect();
        let fastest = slowness
            .iter()
            .copied()
            .fold(0.0_f64, |top, next| top.max(-next));
        // One step from a cusp the speed is at most |acceleration|·step, far below a thousandth of the peak.
        Self::peaks(&slowness)
            .into_iter()
            .filter(|&at| -slowness[at] < fastest / 1000.0)
            .count()
    }
    /// The smallest curvature where the spot is nearest to the centre, times that radius.
    fn flatness(&self) -> f64 {
        let nearness: Vec<f64> = self.spots.iter().map(|spot| -size(*spot)).collect();
        let at = Self::peaks(&nearness)[0];
        let (now, next) = (self.velocities[at], self.velocities[(at + 1) % STEPS]);
        let bend = (now[0] * next[1] - now[1] * next[0]) * STEPS as f64;
        bend / size(now).powi(3) * size(self.spots[at])
    }
}

/// Motors alike, both ways, no index: the pose is free, since none of the numbers here depends on it.
const RIG: &str = "
rotor a {
  top-speed 30000 rpm
  acceleration 100000 rpm/s
  counts 4096
  draws counter-clockwise
}
rotor b like a { draws clockwise }
working-speed 12000 rpm
controller { tick 1 ms }
";

struct Curve {
    figure: &'static str,
    reach: (f64, f64),
    lobes: usize,
    cusps: usize,
    closing_turns: f64,
    length: f64,
    area: f64,
}

const fn curve(
    figure: &'static str,
    reach: (f64, f64),
    (lobes, cusps, closing_turns): (usize, usize, f64),
    (length, area): (f64, f64),
) -> Curve {
    Curve {
        figure,
        reach,
        lobes,
        cusps,
        closing_turns,
        length,
        area,
    }
}

/// Cycloidal curves of a wheel of size 1 (2 or 3 where named).
///
/// Sources, all from memory: J. D. Lawrence, *A Catalog of Special Plane Curves*, Dover 1972, ch. 6 and 7 (lengths
/// 16R/3 of the deltoid, 6R of the astroid, 24 of the nephroid; areas 2πR²/9, 3πR²/8, 12π); the arch of a
/// hypocycloid 8r(R−r)/R, of an epicycloid 8r(R+r)/R. The cardioid of a wheel on an equal ring, 16 and 6π:
/// Encyclopedia of Mathematics, "Cardioid" (ρ = 2a(1 − cos φ): 16a, 6πa²). The Tusi couple, 8 there and back: MathWorld.
/// Cusps and closing turns, n and d of R/r = n/d: geogebra.org/m/MbsqIfFV.
const CYCLOIDS: &[Curve] = &[
    curve("line", (1.0, 1.0), (2, 2, 1.0), (8.0, 0.0)),
    curve("ring 2 wheel 1", (1.0, 1.0), (2, 2, 1.0), (8.0, 0.0)),
    curve("deltoid", (2.0, 1.0), (3, 3, 1.0), (16.0, 2.0 * PI)),
    curve("ring 3 wheel 1", (2.0, 1.0), (3, 3, 1.0), (16.0, 2.0 * PI)),
    curve("astroid", (3.0, 1.0), (4, 4, 1.0), (24.0, 6.0 * PI)),
    curve("ring 4 wheel 1", (3.0, 1.0), (4, 4, 1.0), (24.0, 6.0 * PI)),
    curve("cardioid", (2.0, 1.0), (1, 1, 1.0), (16.0, 6.0 * PI)),
    curve(
        "ring 1 outside wheel 1",
        (2.0, 1.0),
        (1, 1, 1.0),
        (16.0, 6.0 * PI),
    ),
    curve("nephroid", (3.0, 1.0), (2, 2, 1.0), (24.0, 12.0 * PI)),
    curve(
        "ring 2 outside wheel 1",
        (3.0, 1.0),
        (2, 2, 1.0),
        (24.0, 12.0 * PI),
    ),
    curve("ring 5 wheel 1", (4.0, 1.0), (5, 5, 1.0), (32.0, 12.0 * PI)),
    curve("ring 5 wheel 2", (3.0, 2.0), (5, 5, 2.0), (48.0, 6.0 * PI)),
    curve("star 5/2", (3.0, 2.0), (5, 5, 2.0), (48.0, 6.0 * PI)),
    curve("ring 7 wheel 2", (5.0, 2.0), (7, 7, 2.0), (80.0, 30.0 * PI)),
    curve("ring 7 wheel 3", (4.0, 3.0), (7, 7, 3.0), (96.0, 12.0 * PI)),
    curve("star 7/3", (4.0, 3.0), (7, 7, 3.0), (96.0, 12.0 * PI)),
];

#[test]
fn cycloids_have_the_published_lobes_cusps_turns_lengths_and_areas() {
    for want in CYCLOIDS {
        let (a, b) = want.reach;
        let got = path(want.figure, Pair { a, b });
        assert_eq!(got.lobes(), want.lobes, "lobes of {}", want.figure);
        assert_eq!(got.cusps(), want.cusps, "cusps of {}", want.figure);
        assert_close(got.turns_a, want.closing_turns, 1e-12, want.figure);
        assert_close(
            got.length(),
            want.length,
            1e-5,
            "the corner at each cusp costs order step²",
        );
        assert_close(got.area(), want.area, 1e-9, "a smooth periodic integrand");
    }
}

/// The ellipse that a pen at half the wheel's radius draws, semi-axes 3/2 and 1/2: length 6.68244661 (a complete
/// elliptic integral, which any table has), area 3π/4.
#[test]
fn a_pen_within_the_wheel_draws_an_ellipse() {
    let got = path("line", Pair { a: 1.0, b: 0.5 });
    assert_close(got.length(), 6.68244661, 1e-8, "published digits");
    assert_close(got.area(), 0.75 * PI, 1e-9, "a smooth periodic integrand");
    assert_eq!(got.cusps(), 0);
}

/// Ring 150 with wheel 60 is a five-pointed star, with wheel 56 it closes only after 75 points; a wheel of half the
/// ring draws a line and one of a third a deltoid: common practice, no source.
#[test]
fn everyday_rings_close_as_everybody_knows() {
    for (figure, lobes, turns) in [
        ("ring 150 wheel 60", 5, 2.0),
        ("ring 150 wheel 56", 75, 28.0),
        ("ring 150 wheel 75", 2, 1.0),
        ("ring 150 wheel 50", 3, 1.0),
    ] {
        let got = path(figure, Pair { a: 1.0, b: 0.4 });
        assert_eq!(got.lobes(), lobes, "lobes of {figure}");
        assert_close(got.turns_a, turns, 1e-12, figure);
    }
}

/// Winding about the centre is the frequency of the larger of two turning vectors (a theorem of Rouché's kind);
/// {5/2} winds twice, {7/3} three times: Lawrence 1972, from memory.
#[test]
fn stars_wind_as_often_as_their_step() {
    for (figure, a, b, winding) in [
        ("star 5/2", 3.0, 2.0, 2.0),
        ("star 7/2", 5.0, 2.0, 2.0),
        ("star 7/3", 4.0, 3.0, 3.0),
        ("deltoid", 2.0, 1.0, 1.0),
        ("deltoid", 1.0, 2.0, -2.0),
    ] {
        let got = path(figure, Pair { a, b });
        assert_close(got.winding(), winding, 1e-9, figure);
    }
}

/// Flat sides at reaches 4:1 (triangle), 9:1 (square) and 9:4 (pentagram): derived from the curvature of two turning
/// vectors, which vanishes nearest to the centre for Ra·p² = Rb·q²; no printed source known.
#[test]
fn star_sides_are_flat_at_the_reaches_that_the_reference_gives() {
    for (figure, a, b) in [
        ("star 3/1", 4.0, 1.0),
        ("star 4/1", 9.0, 1.0),
        ("star 5/2", 9.0, 4.0),
    ] {
        let flat = path(figure, Pair { a, b }).flatness();
        assert_close(
            flat,
            0.0,
            1e-3,
            "the nearest step lies within one step of the flattest point",
        );
        let round = path(figure, Pair { a, b: b * 0.8 }).flatness();
        assert!(
            round > 0.05,
            "{figure} with a shorter second reach bulges: {round}"
        );
    }
}

/// Roses r = cos kφ: petals, and lengths for a radius of 1.
///
/// Petals (n for n and d odd, else 2n): xahlee.info "Rose Curve", jasondavies.com "Rhodonea". Lengths are complete elliptic
/// integrals, petals·(2/k)·E(1 − k²) for whole k: from memory, digits computed.
#[test]
fn roses_have_the_published_petals_and_lengths() {
    for (figure, petals, length) in [
        ("rose 2", 4, 9.68844822),
        ("rose 3", 3, 6.68244661),
        ("rose 4", 8, 17.1568436),
        ("rose 5", 5, 10.5050223),
        ("rose 1/3", 1, 6.68244661),
        ("rose 1/2", 2, 9.68844822),
        ("rose 2/3", 4, 15.8654396),
        ("rose 5/2", 10, 23.0131126),
        ("trifolium", 3, 6.68244661),
        ("quadrifolium", 4, 9.68844822),
    ] {
        let got = path(figure, Pair { a: 0.5, b: 0.5 });
        assert_eq!(got.lobes(), petals, "petals of {figure}");
        assert_close(got.length(), length, 1e-7, "published to nine digits");
    }
}

/// Area swept by a whole rose, petals·π/(4k) in size: MathWorld "Rose", from memory. One period of p:q sweeps
/// π(p + q)/4 by the signed sum for two turning vectors.
#[test]
fn roses_sweep_the_published_area() {
    for (figure, area) in [
        ("rose 2", PI / 2.0),
        ("rose 3", PI / 4.0),
        ("rose 4", PI / 2.0),
        ("rose 5", PI / 4.0),
    ] {
        let got = path(figure, Pair { a: 0.5, b: 0.5 });
        assert_close(got.area(), area, 1e-9, "a smooth periodic integrand");
    }
}

/// Two mirrors at one speed draw a circle, and so does one mirror while the other stands: common practice, no source.
#[test]
fn equal_speeds_and_a_standing_mirror_draw_circles() {
    for (figure, a, b) in [("circle", 1.0, 0.7), ("0:1", 1.0, 0.7), ("1:1", 1.0, 0.7)] {
        let got = path(figure, Pair { a, b });
        let bend: Vec<f64> = got.velocities.iter().map(|each| size(*each)).collect();
        let (least, most) = bend
            .iter()
            .fold((f64::MAX, 0.0_f64), |(least, most), each| {
                (least.min(*each), most.max(*each))
            });
        assert_close(most, least, 1e-9, "the spot runs evenly along a circle");
    }
}
