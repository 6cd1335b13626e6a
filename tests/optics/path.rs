//! Phases over a leg in `f64` against the exact evaluator, tick by tick.

use crate::assert_close;
use crate::show::planned;
use phasewright::exact::fixed::phase_value;
use phasewright::exact::{Ticks, to_f64};
use phasewright::motion::inside::Inside;
use phasewright::optics::path::LegPath;
use phasewright::plan::LegKind;
use phasewright::rig::{Pair, RotorId};

/// Every law that a show can write, so also its skew, and `scurve`.
const LAWS: [&str; 10] = [
    "linear",
    "cubic skew 20 %",
    "quintic",
    "septic skew 80 %",
    "harmonic",
    "cycloidal",
    "modified-sine",
    "modified-trapezoid skew 35 %",
    "scurve",
    "bezier(0.42 0 0.58 1)",
];

#[test]
fn phases_and_speeds_are_the_exact_ones() {
    let rig = include_str!("../../shows/boathouse.rig").replace("jerk          30000 rpm/s^2", "");
    let cues: String = LAWS
        .iter()
        .map(|law| {
            format!("cue 3:-2 morph 4 s {law}\ncue deltoid morph 2500 ms {law} land 20 deg\n")
        })
        .collect();
    let show =
        format!("show \"x\"\nrig \"x.rig\"\nusual hold 1 s\ncue circle\n{cues}loop morph 9 s\n");
    let (plan, _) = planned(&show, &rig);
    let mut legs = 0;
    for (index, leg) in plan.legs.iter().enumerate() {
        let path = LegPath::of(&plan, index).unwrap();
        let moves = plan.moves(index).unwrap();
        let insides = Pair::each(|id| Inside::new(moves.of(id), plan.tick()));
        for step in 0..=40 {
            let tick = leg.ticks.0 * step / 40;
            let time = Ticks(tick).time(plan.tick());
            let state = path.at(time.to_f64());
            for id in RotorId::BOTH {
                let rotor = plan.rig.rotor(id);
                let (one, inside) = (moves.of(id), insides.of(id));
                let (added, faster) = inside.at(tick);
                let gained = (&one.from.over(&time).value().clone() + phase_value(added))
                    / rotor.motor_per_mirror();
                let speed = (one.from.value() + phase_value(faster)) / rotor.motor_per_mirror();
                let got = if id == RotorId::A { state.a } else { state.b };
                let start = match id {
                    RotorId::A => path.rotors.a.start,
                    RotorId::B => path.rotors.b.start,
                };
                let why = format!("leg {index}, rotor {}, tick {tick}", id.name());
                assert_close(got.phase - start, to_f64(&gained), 2e-5, &why);
                assert_close(got.speed, to_f64(&speed), 2e-3, &why);
                let exact = rotor.mirror_phase(&one.start);
                let off = to_f64(exact.value()) - start;
                assert_close(off, off.round(), 1e-9, "start phase, but for whole turns");
            }
        }
        legs += usize::from(leg.kind == LegKind::Morph);
    }
    assert_eq!(legs, 2 * LAWS.len(), "morphs looked at");
}

/// The acceleration is the slope of the speed.
#[test]
fn accelerations_are_slopes() {
    let show = "show \"x\"\nrig \"x.rig\"\nusual hold 1 s\ncue circle\ncue deltoid morph 4 s quintic land 20 deg\ncue 3:-2 morph 4 s scurve\nloop\n";
    let (plan, _) = planned(show, include_str!("../../shows/boathouse.rig"));
    for index in 0..plan.legs.len() {
        let path = LegPath::of(&plan, index).unwrap();
        for step in 1..40 {
            let t = path.length * f64::from(step) / 40.0 + 0.001;
            let h = 1e-4;
            let slope = (path.at(t + h).a.speed - path.at(t - h).a.speed) / (2.0 * h);
            let got = path.at(t).a.acceleration;
            assert_close(got, slope, 0.15 + 0.01 * slope.abs(), "slope");
        }
    }
}

/// Before its start and after its end a leg goes on like the holds beside it.
#[test]
fn a_leg_goes_on_at_both_ends() {
    let show = "show \"x\"\nrig \"x.rig\"\nusual hold 1 s\ncue circle\ncue deltoid morph 4 s quintic land 20 deg\nloop\n";
    let (plan, _) = planned(show, include_str!("../../shows/boathouse.rig"));
    let index = plan
        .legs
        .iter()
        .position(|leg| leg.kind == LegKind::Morph)
        .unwrap();
    let [before, morph, after] =
        [index - 1, index, index + 1].map(|leg| LegPath::of(&plan, leg).unwrap());
    let turn = |one: f64, two: f64, why: &str| {
        let off = one - two;
        assert_close(off, off.round(), 1e-6, why);
    };
    for t in [-0.5, -0.01] {
        let (here, there) = (morph.at(t), before.at(before.length + t));
        turn(here.a.phase, there.a.phase, "a before");
        turn(here.b.phase, there.b.phase, "b before");
    }
    for t in [0.01, 0.5] {
        let (here, there) = (morph.at(morph.length + t), after.at(t));
        turn(here.a.phase, there.a.phase, "a after");
        turn(here.b.phase, there.b.phase, "b after");
    }
}
