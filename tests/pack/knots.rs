//! Knots: within the tolerance of the row table at every tick, exact where they must be, short.

use crate::rows::{pack_of, points_of};
use crate::{least, load};
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::RotorId;
use phasewright::setpoint::pack::{Content, Reader};
use phasewright::setpoint::{Rows, knots};

/// Compares the knots of a plan with its rows; the size of their pack.
fn compared(name: &str, plan: &Plan, tolerance: u32) -> usize {
    let bytes = pack_of(plan, Content::Knots(tolerance));
    let points = points_of(&bytes);
    let rows = Rows::new(plan).collect(0..u64::MAX);
    assert_eq!(points.len(), rows.len(), "{name}");
    let exact: Vec<u64> = plan.legs.iter().map(|leg| leg.start.0).collect();
    let holds = |tick: u64| {
        let leg = plan.legs.partition_point(|leg| leg.start.0 <= tick) - 1;
        plan.legs[leg].kind == LegKind::Hold
    };
    for (point, row) in points.iter().zip(&rows) {
        let tick = row.tick;
        assert_eq!(
            (point.tick, point.cue, point.beam),
            (tick, row.cue, row.beam),
            "{name}, tick {tick}"
        );
        for (index, id) in RotorId::BOTH.into_iter().enumerate() {
            let turn = i64::from(plan.rig.rotor(id).counts);
            let rotor = row.rotors.of(id);
            let off = (i64::from(point.counts[index]) - i64::from(rotor.counts) + turn / 2)
                .rem_euclid(turn)
                - turn / 2;
            let allowed = if exact.contains(&tick) || holds(tick) {
                0
            } else {
                i64::from(tolerance)
            };
            assert!(
                off.abs() <= allowed,
                "{name}, tick {tick}, rotor {}: {off} counts off",
                id.name()
            );
            let next = points
                .get(tick as usize + 1)
                .or(plan.loop_start().map(|start| &points[start.0 as usize]));
            if let Some(next) = next {
                let there = (i64::from(point.counts[index]) + point.steps[index]).rem_euclid(turn);
                assert_eq!(
                    there,
                    i64::from(next.counts[index]),
                    "{name}, tick {tick}: the step leads to the next position"
                );
                let difference = point.steps[index] - rotor.step;
                assert!(
                    difference.abs() <= 2 * i64::from(tolerance),
                    "{name}, tick {tick}: step {difference} off"
                );
            }
        }
    }
    bytes.len()
}

#[test]
fn knots_follow_the_rows_and_are_few() {
    let plan = load::plan_of(&load::examples().join("karrow-fair.show"));
    let mut before = usize::MAX;
    for tolerance in [1, 7] {
        let bytes = compared("karrow-fair", &plan, tolerance);
        // 36 061 rows as a pack take 37 KiB.
        assert!(
            bytes < 1200 && bytes < before,
            "within {tolerance}: {bytes} bytes"
        );
        before = bytes;
    }
    let (found, least) = (knots::count(&plan, 1), least::of_plan(&plan, 1));
    assert!(
        found as usize >= least,
        "{found} pieces, {least} at the least"
    );
    assert!(
        found as f64 <= 1.1 * least as f64,
        "{found} pieces, {least} at the least"
    );
}

#[test]
fn a_run_down_ends_exactly_where_its_last_row_is() {
    let plan = load::plan_of_texts(ENDING, RIG);
    compared("ending", &plan, 1);
}

#[test]
fn a_hold_of_thirty_days_is_one_piece() {
    let show = ENDING.replace("hold 700 ms", "hold 715 h");
    let plan = load::plan_of_texts(
        &show,
        &RIG.replace("tick          2 ms", "tick          1 ms"),
    );
    let bytes = pack_of(&plan, Content::Knots(1));
    assert!(bytes.len() < 1000, "{} bytes", bytes.len());
    // The leg after it starts exactly where its row is.
    let mut reader = Reader::new(bytes.as_slice()).unwrap();
    let (hold, morph) = (plan.legs[1], plan.legs[2]);
    assert_eq!(hold.ticks.0, 715 * 3_600_000);
    let rows = Rows::new(&plan);
    let mut skipped = 0;
    while let Some(point) = reader.next_point().unwrap() {
        let row = rows.collect(point.tick..point.tick + 1)[0];
        let there = [row.rotors.a, row.rotors.b].map(|rotor| rotor.counts);
        let turns = RotorId::BOTH.map(|id| i64::from(plan.rig.rotor(id).counts));
        for ((found, wanted), turn) in point.counts.into_iter().zip(there).zip(turns) {
            let off = (i64::from(found) - i64::from(wanted)).rem_euclid(turn);
            let allowed = i64::from(point.tick != morph.start.0);
            assert!(off.min(turn - off) <= allowed, "tick {}", point.tick);
        }
        // Every ten million ticks or so within the hold.
        let ahead = reader.straight().min(9_999_991);
        reader.skip(ahead);
        skipped += ahead;
        if point.tick > morph.start.0 {
            break;
        }
    }
    assert!(skipped > 2_000_000_000);
}

/// The counts of a hold for every kind of speed: whole, a short fraction, a long one, and next to nothing.
#[test]
fn a_hold_is_exact_wherever_a_speed_in_the_fixed_point_can_follow_it() {
    for rate in ["40 Hz", "1/3 Hz", "17.391 Hz", "0.0001 Hz", "33.333333 Hz"] {
        let show = format!(
            "rig \"x.rig\"\nrun-up 2 s\ncue deltoid rate {rate} hold 20 s\nloop morph 2 s\n"
        );
        let plan = load::plan_of_texts(&show, RIG);
        compared(rate, &plan, 1);
    }
}

const RIG: &str = "\
rotor a {
  top-speed     9000 rpm
  acceleration  9000 rpm/s
  counts        1000
  draws         counter-clockwise
  index         at 0 deg
}
rotor b like a {
  counts        4096
  draws         clockwise
  index         at 90 deg
}
controller {
  tick          2 ms
}
";

const ENDING: &str = "\
rig \"x.rig\"
run-up 2 s
cue trifolium hold 700 ms
cue 2:3 morph 1500 ms hold 900 ms beam 40 %
run-down 1 s septic
";
