//! Rows against the laws' closed forms, evaluated here with exact rationals and nothing of the program's own.

use crate::plans::{evening, there_and_back};
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::ToPrimitive;
use phasewright::exact::{Rational, ratio, whole};
use phasewright::motion::{LawKind, Move, Shape};
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::RotorId;
use phasewright::setpoint::Rows;

/// Coefficients of s in ascending powers, as the laws are defined (cam handbooks: 2-3, 3-4-5 and 4-5-6-7 polynomial).
fn coefficients(kind: &LawKind) -> Vec<i128> {
    match kind {
        LawKind::Linear => vec![0, 1],
        LawKind::Cubic => vec![0, 0, 3, -2],
        LawKind::Quintic => vec![0, 0, 0, 10, -15, 6],
        LawKind::Septic => vec![0, 0, 0, 0, 35, -84, 70, -20],
        _ => panic!("not a polynomial law"),
    }
}

fn horner(coefficients: &[Rational], u: &Rational) -> Rational {
    coefficients
        .iter()
        .rev()
        .fold(whole(0), |sum, coefficient| sum * u + coefficient)
}

/// Exact motor phase and speed n ticks into a move.
fn exact(motion: &Move, tick: &Rational, n: u64) -> (Rational, Rational) {
    let time = tick * whole(motion.ticks.0.into());
    let t = tick * whole(n.into());
    let u = &t / &time;
    let (from, to) = (motion.from.value(), motion.to.value());
    let start = motion.start.value();
    let Shape::Law(law) = &motion.shape else {
        return (start + from * t, from.clone());
    };
    let s: Vec<Rational> = coefficients(&law.kind).into_iter().map(whole).collect();
    let integral: Vec<Rational> = std::iter::once(whole(0))
        .chain(
            s.iter()
                .enumerate()
                .map(|(power, c)| c / whole(power as i128 + 1)),
        )
        .collect();
    let bump: Vec<Rational> = coefficients(&LawKind::Septic)
        .into_iter()
        .map(whole)
        .collect();
    let rate = &u * (whole(1) - &u);
    let phase = start
        + from * t
        + (to - from) * &time * horner(&integral, &u)
        + motion.correction.value() * horner(&bump, &u);
    let speed = from
        + (to - from) * horner(&s, &u)
        + motion.correction.value() / time * whole(140) * &rate * &rate * &rate;
    (phase, speed)
}

fn half_up(value: &Rational) -> BigInt {
    (value + ratio(1, 2)).floor().to_integer()
}

fn check(plan: &Plan) {
    let rows = Rows::new(plan).collect(0..plan.rows());
    assert_eq!(rows.len() as u64, plan.rows());
    let mut at = 0;
    for (index, leg) in plan.legs.iter().enumerate() {
        let moves = plan.moves(index).unwrap();
        for n in 0..leg.ticks.0 {
            let row = &rows[at];
            assert_eq!((row.tick, row.cue), (at as u64, leg.cue));
            for id in RotorId::BOTH {
                let counts = i128::from(plan.rig.rotor(id).counts);
                let tick = plan.tick().value();
                let (phase, speed) = exact(moves.of(id), tick, n);
                let next = if n + 1 == leg.ticks.0 {
                    moves.of(id).end.value().clone()
                } else {
                    exact(moves.of(id), tick, n + 1).0
                };
                let found = row.rotors.of(id);
                let place = format!("rotor {} tick {at} ({:?} + {n})", id.name(), leg.kind);
                let turns = half_up(&(&phase * whole(1_000_000_000_000)))
                    .mod_floor(&BigInt::from(1_000_000_000_000_u64));
                assert_eq!(BigInt::from(found.turns), turns, "turns, {place}");
                let rpm = half_up(&(speed * whole(60_000_000)));
                assert_eq!(BigInt::from(found.rpm), rpm, "rpm, {place}");
                let unwrapped = half_up(&(phase * whole(counts)));
                let wrapped = unwrapped.mod_floor(&BigInt::from(counts));
                assert_eq!(BigInt::from(found.counts), wrapped, "counts, {place}");
                let step = half_up(&(next * whole(counts))) - unwrapped;
                assert_eq!(BigInt::from(found.step), step, "step, {place}");
            }
            at += 1;
        }
    }
}

#[test]
fn polynomial_laws_row_by_row() {
    use LawKind::{Cubic, Linear, Quintic, Septic};
    check(&evening([Quintic, Septic, Cubic, Linear]));
    check(&evening([Linear, Cubic, Septic, Quintic]));
    check(&there_and_back(Septic, Cubic));
}

#[test]
fn an_exact_tie_inside_a_morph_rounds_up() {
    // A linear run-up from 0 with 16 ticks and no correction gains turns·n²/32: with 4096 counts and a gain of 1/256
    // turn, the counts are n²/2·… exact halves at odd n.
    let mut plan = there_and_back(LawKind::Linear, LawKind::Linear);
    plan.legs.truncate(1);
    plan.legs[0].ticks.0 = 16;
    let moves = plan.moves(0).unwrap();
    assert_eq!(plan.legs[0].kind, LegKind::RunUp);
    // Speed that makes Δv·T·S(u)·counts = n²/2: Δv·T/512·4096 = 1/2.
    let time = plan.tick().value() * whole(16);
    let wanted = ratio(1, 16) / &time;
    let speeds = plan.speeds[0].as_mut().unwrap();
    speeds.motor.a = phasewright::exact::Speed::new(wanted.clone());
    // The landing without a correction: half of Δv·T = 1/32 turn of motor and mirror, and the index angle.
    let landing = ratio(1, 32) + ratio(1, 12);
    plan.legs[0].landing.a =
        phasewright::exact::GridPhase::nearest(&phasewright::exact::Turns::new(landing)).unwrap();
    drop(moves);
    let moves = plan.moves(0).unwrap();
    assert!(moves.a.correction.is_zero(), "{:?}", moves.a.correction);
    let rows = Rows::new(&plan).collect(0..16);
    for (n, row) in rows.iter().enumerate() {
        let halves = (n * n) as u32;
        assert_eq!(
            row.rotors.a.counts,
            halves.div_ceil(2),
            "n²/2 rounded half up, n = {n}"
        );
    }
}

#[test]
fn the_grid_and_the_gear_keep_denominators_small() {
    let plan = evening([
        LawKind::Quintic,
        LawKind::Septic,
        LawKind::Cubic,
        LawKind::Linear,
    ]);
    for index in 0..plan.legs.len() {
        let moves = plan.moves(index).unwrap();
        for id in RotorId::BOTH {
            assert!(moves.of(id).start.value().denom().to_u64().is_some());
        }
    }
}
