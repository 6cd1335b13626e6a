use super::common::{brief, errors, plan_of};
use super::{GEARED, RIG};
use num_traits::Zero;
use phasewright::exact::{GRID_PER_TURN, Rational, whole};
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::RotorId;

const LOOPED: &str = r#"
figure anemone = rose 5/3
figure eight = ring 8 wheel 3
usual morph 4 s quintic, hold 20 s
run-up 8 s
cue anemone
cue eight morph 6 s cycloidal hold 15 s
cue 5:-4 morph fastest scurve hold 30 s spin 4 deg/s
repeat 3 {
  cue deltoid morph 7 s dark hold 5 s
  cue 2:-3 morph 7 s skew 30 % hold 5 s land 18 deg
}
cue 1:1 rate 60 Hz morph 7 s
cue 1:0 hold 1.2345 s morph 9 s
loop morph 9 s septic
"#;

fn mirror(plan: &Plan, leg: usize, id: RotorId, after: bool) -> Rational {
    let motor = if after {
        plan.phase_after(leg, id)
    } else {
        plan.phase_before(leg, id)
    };
    plan.rig.rotor(id).mirror_phase(&motor).value().clone()
}

fn looped(rig: &str) -> Plan {
    let (plan, findings) = plan_of(rig, LOOPED);
    assert!(errors(&findings).is_empty(), "{:#?}", brief(&findings));
    plan
}

#[test]
fn every_hold_starts_on_the_grid_in_its_exact_pose() {
    for rig in [RIG, GEARED] {
        let plan = looped(rig);
        for (index, leg) in plan.legs.iter().enumerate() {
            if leg.kind != LegKind::Hold {
                continue;
            }
            let speeds = plan.speeds_of(leg).unwrap();
            let (a, b) = (
                mirror(&plan, index, RotorId::A, false),
                mirror(&plan, index, RotorId::B, false),
            );
            for phase in [&a, &b] {
                assert!((phase * whole(GRID_PER_TURN)).is_integer());
            }
            let ratio = speeds.shares.ratio;
            let phi = a * whole(i128::from(ratio.q())) - b * whole(i128::from(ratio.p()));
            let missed = phi - speeds.pose.clone().unwrap().value();
            assert!(missed.is_integer(), "cue {}: {missed}", leg.cue);
        }
    }
}

#[test]
fn moves_join_without_a_gap_and_holds_keep_the_exact_ratio() {
    for rig in [RIG, GEARED] {
        let plan = looped(rig);
        for id in RotorId::BOTH {
            let mut last = plan.move_of(0, id).unwrap();
            assert!(
                last.start.is_zero() && last.from.is_zero(),
                "row 0 is at rest on the mark"
            );
            for index in 1..plan.legs.len() {
                let next = plan.move_of(index, id).unwrap();
                assert_eq!(next.start, last.end);
                assert_eq!(next.from, last.to);
                last = next;
            }
        }
        for (index, leg) in plan
            .legs
            .iter()
            .enumerate()
            .filter(|(_, leg)| leg.kind == LegKind::Hold)
        {
            let speeds = plan.speeds_of(leg).unwrap();
            let time = leg.ticks.time(plan.tick());
            for id in RotorId::BOTH {
                let turned = mirror(&plan, index, id, true) - mirror(&plan, index, id, false);
                assert_eq!(turned, *speeds.mirror.of(id).over(&time).value());
            }
        }
    }
}

/// The seam: both motors are back modulo the gear's closing turns, so that any number of loops adds nothing at all.
#[test]
fn a_loop_closes_on_both_rotors_and_ten_thousand_hours_add_no_count() {
    for rig in [RIG, GEARED] {
        let plan = looped(rig);
        let start = plan.loop_leg.unwrap();
        let last = plan.legs.len() - 1;
        for id in RotorId::BOTH {
            let rotor = plan.rig.rotor(id);
            let gained = &plan.phase_after(last, id) - &plan.phase_before(start, id);
            let closings = gained.value() / rotor.closing_turns();
            assert!(closings.is_integer(), "{closings}");
            let loop_s = whole(i128::from(plan.total().0 - plan.loop_start().unwrap().0))
                * plan.tick().value();
            let loops = (whole(10_000 * 3600) / loop_s).floor();
            let counts = gained.value() * loops * whole(i128::from(rotor.counts));
            let left = &counts / whole(i128::from(rotor.counts));
            assert!(left.is_integer(), "after 10 000 h {left} turns");
        }
    }
}

#[test]
fn a_run_down_ends_at_rest_on_the_marks() {
    let show = "cue rose 5/3 hold 3 s\ncue 3:-4 hold 2 s morph 5 s\nrun-down 7 s cycloidal\n";
    for rig in [RIG, GEARED] {
        let (plan, findings) = plan_of(rig, show);
        assert!(errors(&findings).is_empty(), "{:#?}", brief(&findings));
        let last = plan.legs.len() - 1;
        for id in RotorId::BOTH {
            let end = plan.move_of(last, id).unwrap();
            assert!(end.to.is_zero());
            let turns = end.end.value() / plan.rig.rotor(id).closing_turns();
            assert!(turns.is_integer());
        }
    }
}

#[test]
fn correction_of_a_landing_stays_within_its_split() {
    let plan = looped(RIG);
    for (index, leg) in plan
        .legs
        .iter()
        .enumerate()
        .filter(|(_, leg)| leg.kind == LegKind::Morph)
    {
        let speeds = plan.speeds_of(leg).unwrap();
        for id in RotorId::BOTH {
            let correction = plan.move_of(index, id).unwrap().correction.abs();
            let most = num_traits::Signed::abs(speeds.shares.split.of(id)) / whole(2);
            let grid = whole(20_000) / whole(GRID_PER_TURN);
            assert!(*correction.value() <= most + grid);
        }
    }
}

/// Eight thousand cues (a million in the benchmark): phases at the end have denominators no larger than those at the start.
#[test]
fn denominators_do_not_grow_with_the_number_of_cues() {
    let show = "usual morph 500 ms harmonic hold 333 ms\nrepeat 4000 {\n cue 7:-5 rate 8.7654321 Hz spin 1.234567 deg/s\n cue 5:-7 lead 3333.333 rpm land 7.7 deg\n}\nloop morph 20 s\n";
    let rig = RIG
        .replace("stall-speed 150 rpm", "")
        .replace("6000 rpm/s", "60000 rpm/s")
        .replace("4800 rpm/s", "60000 rpm/s")
        .replace("jerk 40000 rpm/s^2", "");
    let (plan, findings) = plan_of(&rig, show);
    assert!(plan.legs.len() > 16_000, "{:#?}", findings);
    let bits =
        |leg: usize| RotorId::BOTH.map(|id| plan.phase_after(leg, id).value().denom().bits());
    let early: u64 = (0..40).flat_map(bits).max().unwrap();
    let late: u64 = (plan.legs.len() - 40..plan.legs.len())
        .flat_map(bits)
        .max()
        .unwrap();
    assert!(late <= early, "{late} bits after {early}");
    assert!(
        !plan
            .phase_after(plan.legs.len() - 1, RotorId::A)
            .value()
            .is_zero()
    );
}
