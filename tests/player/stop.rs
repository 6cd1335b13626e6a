//! `phw_stop` at any tick: dark at once, and both rotors come to rest together, in their ratio, within the rig's
//! deceleration. Expected values are worked out here, from the rule, not by the player.

use crate::host::{build, play};
use crate::tables;
use crate::tools::there;
use phasewright::exact::{to_f64, whole};
use phasewright::rig::RotorId;
use phasewright::setpoint::pack::Content;
use std::fs;
use tempfile::TempDir;

#[test]
fn a_stop_at_two_hundred_random_ticks_brings_both_to_rest_together() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let program = build(folder.path(), "gcc", &["-std=c99"]);
    let plan = tables::looped();
    let tick = plan.tick().value();
    // Counts a tick² that each may lose.
    let exact = RotorId::BOTH.map(|id| {
        let rotor = plan.rig.rotor(id);
        rotor.deceleration.value.value() * tick * tick * whole(i128::from(rotor.counts))
    });
    let most = exact.each_ref().map(to_f64);
    let table = folder.path().join("table.pack");
    let mut chance = 12345_u64;
    for run in 0..200 {
        let content = if run % 2 == 0 {
            Content::Rows
        } else {
            Content::Knots(1)
        };
        if run < 2 {
            fs::write(
                folder.path().join(format!("{run}.pack")),
                tables::pack(&plan, content),
            )
            .unwrap();
        }
        let source = folder.path().join(format!("{}.pack", run % 2));
        fs::copy(&source, &table).unwrap();
        chance = chance
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        let stop = 1 + (chance >> 33) as usize % (tables::loop_and_a_half(&plan) - 1);
        let (played, last) = play(&program, &table, "memory", 1_000_000, Some(stop));
        assert_eq!(last, "state stopped", "stopped at {stop}");
        let before = played[stop - 1];
        let braking = &played[stop..];
        // Exactly n of them; then the one that says it is over.
        let needed = (0..2).map(|index| {
            let step = whole(i128::from(before.steps[index].abs()));
            (step / &exact[index]).ceil().to_integer()
        });
        let ticks = needed.max().unwrap();
        assert_eq!(ticks, (braking.len() - 1).into(), "stopped at {stop}: n");
        let n = (braking.len() - 1).max(1) as f64;
        let mut gone = [0_i64; 2];
        for (index, most) in most.iter().enumerate() {
            let turn = i64::from(plan.rig.rotor(RotorId::BOTH[index]).counts);
            let mut step = before.steps[index];
            let mut at = (before.counts[index] + step).rem_euclid(turn);
            for (j, point) in braking.iter().enumerate() {
                assert_eq!(point.beam, 0, "stopped at {stop}");
                assert_eq!(point.counts[index], at, "stopped at {stop}, {j} later");
                let change = (point.steps[index] - step).abs() as f64;
                assert!(
                    change <= most.ceil() + 1.0,
                    "stopped at {stop}, {j} later: {change} of {most}"
                );
                let wanted = before.steps[index] as f64 * (1.0 - (j + 1) as f64 / n).max(0.0);
                let off = (point.steps[index] as f64 - wanted).abs();
                assert!(off <= 1.0 + 1e-6, "stopped at {stop}, {j} later: {off}");
                step = point.steps[index];
                gone[index] += step;
                at = (at + step).rem_euclid(turn);
            }
            assert_eq!(step, 0, "stopped at {stop}: at rest");
        }
        // In their ratio: the ways that both have gone, to a count of each.
        let [a, b] = before.steps.map(|step| step as f64);
        if a != 0.0 && b != 0.0 {
            let apart = (gone[0] as f64 * b - gone[1] as f64 * a).abs();
            assert!(
                apart <= 1.01 * (a.abs() + b.abs()),
                "stopped at {stop}: {gone:?} of {a}:{b}"
            );
        }
    }
}
