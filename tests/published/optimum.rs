//! `fastest`, without a landing, against the closed forms of the handbooks and a second implementation.
//!
//! The planner counts in whole ticks and rounds up, so its T lies within one tick above the real optimum.

use crate::support::{Change, assert_close, fastest_change};
use rsruckig::prelude::{
    ControlInterface, DataArrayOrVec, InputParameter, Ruckig, RuckigResult, ThrowErrorHandler,
    Trajectory,
};

/// Spacing of set-points in these tests, in seconds.
const TICK: f64 = 1e-5;

/// T is the first whole tick at or after the optimum.
fn assert_first_tick_after(got: f64, optimum: f64, what: &str) {
    // The middle of the one tick that is right, give or take half a tick (and a few parts in 10⁹ of play where
    // the optimum is a whole tick itself, since limits pass at 1 + 10⁻⁹ of their value).
    assert_close(got, optimum + TICK / 2.0, TICK / 2.0 + optimum * 2e-9, what);
}

/// |Δv|/A + A/J if |Δv| ≥ A²/J, else 2√(|Δv|/J): Biagiotti & Melchiorri, *Trajectory Planning for Automatic Machines
/// and Robots*, Springer 2008, §3.4; Berscheid & Kröger, RSS 2021, doi 10.15607/RSS.2021.XVII.015.
fn closed_form(change: f64, acceleration: f64, jerk: f64) -> f64 {
    if change.abs() >= acceleration * acceleration / jerk {
        change.abs() / acceleration + acceleration / jerk
    } else {
        2.0 * (change.abs() / jerk).sqrt()
    }
}

/// v0, v1, A, J, T, position at the end and at T/2, computed with the implementation of Berscheid & Kröger's method
/// that its authors publish (C++, by its Python binding), starting at position 0.
const OPTIMA: &[[&str; 7]] = &[
    ["0", "100", "50", "200", "2.25", "112.5", "25.13020833"],
    [
        "0",
        "10",
        "50",
        "200",
        "0.4472135955",
        "2.2360679775",
        "0.3726779962",
    ],
    ["0", "12.5", "50", "200", "0.5", "3.125", "0.5208333333"],
    ["10", "60", "40", "400", "1.35", "47.25", "14.57916667"],
    ["60", "10", "40", "400", "1.35", "47.25", "32.67083333"],
    ["-30", "30", "25", "100", "2.65", "0", "-21.68489583"],
    [
        "5",
        "5.02",
        "3",
        "60",
        "0.036514837167",
        "0.182939334207",
        "0.09134795098",
    ],
    [
        "314.159265358979",
        "0",
        "500",
        "10000",
        "0.678318530718",
        "106.550025645",
        "81.82393131",
    ],
];

#[test]
fn fastest_scurve_is_the_published_time_optimum() {
    for [from, to, acceleration, jerk, time, end, middle] in OPTIMA {
        let change = Change {
            from,
            to,
            acceleration,
            jerk,
        };
        let got = fastest_change(&change, "scurve");
        let value = |text: &str| text.parse::<f64>().unwrap();
        let what = format!("{change:?}");
        assert_first_tick_after(got.duration, value(time), &what);
        let (from, to) = (value(from), value(to));
        assert_close(
            closed_form(to - from, value(acceleration), value(jerk)),
            value(time),
            value(time) * 1e-9,
            "the closed form, to the digits printed",
        );
        // Up to a tick later, a rotor has turned up to a tick's worth further.
        let late = TICK * from.abs().max(to.abs()) + 1e-8;
        assert_close(got.phase(1.0), value(end), late, &what);
        assert_close(got.phase(0.5), value(middle), late, &what);
    }
}

/// Repeatable numbers without a dependency: the mixing function of Steele, Lea & Flood, "Fast splittable
/// pseudorandom number generators", OOPSLA 2014.
struct Seeded(u64);

impl Seeded {
    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut mixed = self.0;
        mixed = (mixed ^ (mixed >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        mixed = (mixed ^ (mixed >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        mixed ^ (mixed >> 31)
    }
    /// A whole number from `least` to `most`.
    fn between(&mut self, least: u64, most: u64) -> u64 {
        least + self.next() % (most - least + 1)
    }
}

/// Speeds before and after, acceleration and jerk, in whole milli-units.
fn random_case(random: &mut Seeded, number: usize) -> [i64; 4] {
    let acceleration = random.between(2_000, 120_000);
    // Every fifth case sits on the edge between the two branches, |Δv| = A²/J, with numbers that divide.
    if number.is_multiple_of(5) {
        let steps = random.between(1, 40);
        let acceleration = 10_000 * random.between(1, 9);
        let jerk = acceleration * steps / 4 * 4;
        let edge = acceleration * acceleration / jerk;
        let from = random.between(1_000, 100_000);
        return [
            from as i64,
            (from + edge) as i64,
            acceleration as i64,
            jerk as i64,
        ];
    }
    let jerk = random.between(acceleration, acceleration * 30);
    let from = random.between(500, 150_000) as i64;
    let to = random.between(500, 150_000) as i64;
    let sense = if random.between(0, 3) == 0 { -1 } else { 1 };
    [from, to * sense, acceleration as i64, jerk as i64]
}

fn milli(value: i64) -> String {
    format!(
        "{}{}.{:03}",
        if value < 0 { "-" } else { "" },
        value.abs() / 1000,
        value.abs() % 1000
    )
}

/// The second implementation: its velocity interface, from rest of acceleration to rest of acceleration.
fn second_opinion(case: [f64; 4]) -> Trajectory<1> {
    let [from, to, acceleration, jerk] = case;
    let mut input = InputParameter::<1>::new(None);
    input.control_interface = ControlInterface::Velocity;
    input.current_velocity[0] = from;
    input.target_velocity[0] = to;
    input.max_acceleration[0] = acceleration;
    input.max_jerk[0] = jerk;
    let mut trajectory = Trajectory::new(None);
    let result = Ruckig::<1, ThrowErrorHandler>::new(None, TICK).calculate(&input, &mut trajectory);
    assert!(
        matches!(result, Ok(RuckigResult::Working)),
        "no second opinion on {case:?}: {result:?}"
    );
    trajectory
}

fn state(trajectory: &Trajectory<1>, time: f64) -> (f64, f64) {
    let mut phase = DataArrayOrVec::<f64, 1>::new(None, 0.0);
    let mut speed = DataArrayOrVec::<f64, 1>::new(None, 0.0);
    trajectory.at_time(
        time,
        &mut Some(&mut phase),
        &mut Some(&mut speed),
        &mut None,
        &mut None,
        &mut None,
    );
    (phase[0], speed[0])
}

/// The crate `rsruckig`, an independent implementation of Berscheid & Kröger 2021: duration, and phase and speed all along.
#[test]
fn fastest_scurve_agrees_with_a_second_implementation() {
    let mut random = Seeded(20_260_117);
    for number in 0..150 {
        let case = random_case(&mut random, number);
        let [from, to, acceleration, jerk] = case.map(milli);
        let change = Change {
            from: &from,
            to: &to,
            acceleration: &acceleration,
            jerk: &jerk,
        };
        let numbers = case.map(|each| each as f64 / 1000.0);
        let what = format!("case {number}: {change:?}");
        if case[0] == case[1] {
            continue;
        }
        let got = fastest_change(&change, "scurve");
        let want = second_opinion(numbers);
        assert_first_tick_after(got.duration, want.get_duration(), &what);
        let [from, to, acceleration, _] = numbers;
        // Our motion is stretched by less than a tick: at the same share of the time, phase and speed differ by less
        // than what a tick brings at the peak speed and at twice the peak acceleration.
        let (late, slow) = (
            TICK * from.abs().max(to.abs()) + 1e-9,
            2.0 * TICK * acceleration + 1e-9,
        );
        for tenth in 0..=10 {
            let share = got.share_of_tick_near(f64::from(tenth) / 10.0);
            let (phase, speed) = state(&want, share * want.get_duration());
            assert_close(got.phase(share), phase, late, &what);
            assert_close(got.speed(share), speed, slow, &what);
        }
    }
}

/// T = max(Cv·|Δω|/A, √(Ca·|Δω|/J)) with the peak factors Cv and Ca of Rothbart (ed.), *Cam Design Handbook*, McGraw-Hill
/// 2004, App. B, and Norton, *Cam Design and Manufacturing Handbook*, 2009, ch. 3 (from memory), one derivative
/// higher, since a law here carries speed. Δω, A, J = 100, 50, 200: acceleration binds; 10, 50, 200: jerk does.
#[allow(
    clippy::approx_constant,
    reason = "a published rounding that happens to be π"
)]
const SHORTEST: &[(&str, f64, f64)] = &[
    ("harmonic", 3.14159265, 0.49672941),
    ("cubic", 3.0, 0.54772256),
    ("modified-sine", 3.51920677, 0.52573554),
    ("quintic", 3.75, 0.53728497),
    ("modified-trapezoid", 4.0, 0.49437454),
    ("cycloidal", 4.0, 0.56049912),
    ("septic", 4.375, 0.61291061),
    // The optimum of the first table.
    ("scurve", 2.25, 0.44721360),
];

#[test]
fn the_shortest_legal_time_of_each_law_follows_from_its_published_peaks() {
    for (law, far, near) in SHORTEST {
        for (to, want) in [("110", far), ("20", near)] {
            let change = Change {
                from: "10",
                to,
                acceleration: "50",
                jerk: "200",
            };
            let got = fastest_change(&change, law);
            assert_close(
                got.duration,
                want + TICK / 2.0,
                TICK / 2.0 + want * 1e-8,
                law,
            );
            let optimum = closed_form(if to == "110" { 100.0 } else { 10.0 }, 50.0, 200.0);
            assert!(got.duration >= optimum, "{law} beats the optimum");
        }
    }
}

/// Skew leaves the peak slope and sharpens the peak curvature to Ca/2λ: derived from the definition, no printed source.
/// For quintic at 30 %, Δω 10, J 200: √(5.77350269·10/(0.6·200)).
#[test]
fn skew_costs_jerk_and_no_acceleration() {
    let jerky = Change {
        from: "10",
        to: "20",
        acceleration: "50",
        jerk: "200",
    };
    let got = fastest_change(&jerky, "quintic skew 30 %");
    assert_first_tick_after(
        got.duration,
        (5.773_502_691_896_258_f64 * 10.0 / 0.6 / 200.0).sqrt(),
        "skew 30 %",
    );
    let strong = Change {
        from: "10",
        to: "110",
        acceleration: "50",
        jerk: "10000",
    };
    let got = fastest_change(&strong, "quintic skew 30 %");
    assert_first_tick_after(got.duration, 3.75, "skew 30 %");
}
