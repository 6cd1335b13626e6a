//! The columns against one another, and the table's two ends.

use crate::plans::{Maker, evening, law, rig, rotor, there_and_back};
use phasewright::exact::ratio;
use phasewright::motion::LawKind::{Cubic, Linear, Quintic, Septic};
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::{Pair, RotorId};
use phasewright::setpoint::{Row, Rows};

fn rows(plan: &Plan) -> Vec<Row> {
    Rows::new(plan).collect(0..plan.rows())
}

fn agree(plan: &Plan) {
    let rows = rows(plan);
    let mut sum = Pair::each(|id| i64::from(rows[0].rotors.of(id).counts));
    for row in &rows {
        for id in RotorId::BOTH {
            let counts = i64::from(plan.rig.rotor(id).counts);
            let here = row.rotors.of(id);
            assert_eq!(
                i64::from(here.counts),
                sum.of(id).rem_euclid(counts),
                "sum of steps, {row:?}"
            );
            // Turns and counts are two roundings of one phase: apart by at most half a count, half a unit.
            let turns = i128::from(here.turns) * i128::from(counts);
            let unit = 1_000_000_000_000_i128;
            let apart = (turns - i128::from(here.counts) * unit).rem_euclid(counts as i128 * unit);
            let apart = apart.min(counts as i128 * unit - apart);
            assert!(
                apart <= unit / 2 + i128::from(counts),
                "turns against counts, {row:?}"
            );
            *sum.of_mut(id) += here.step;
        }
    }
}

#[test]
fn steps_sum_to_counts_and_counts_agree_with_turns() {
    agree(&evening([Quintic, Septic, Cubic, Linear]));
    agree(&there_and_back(Quintic, Septic));
}

#[test]
fn row_n_of_a_loop_would_be_the_loop_start_again() {
    let plan = evening([Quintic, Septic, Cubic, Linear]);
    let rows = rows(&plan);
    let start = rows[plan.loop_start().unwrap().0 as usize];
    let last = rows.last().unwrap();
    for id in RotorId::BOTH {
        let counts = i64::from(plan.rig.rotor(id).counts);
        let reached = i64::from(last.rotors.of(id).counts) + last.rotors.of(id).step;
        assert_eq!(
            reached.rem_euclid(counts),
            i64::from(start.rotors.of(id).counts)
        );
        // The plan's own end, phase and speed: the same as at the loop start to the last digit, modulo turns.
        let end = plan.phase_after(plan.legs.len() - 1, id);
        let gap = &end - &plan.phase_before(1, id);
        let rounds = gap.value() / plan.rig.rotor(id).closing_turns();
        assert!(
            rounds.is_integer(),
            "both motor and mirror are back: {rounds}"
        );
        assert_eq!(
            plan.speed_before(plan.legs.len(), id),
            plan.speed_before(1, id)
        );
    }
}

#[test]
fn a_run_down_ends_at_rest_on_the_mark() {
    let plan = there_and_back(Quintic, Septic);
    let rows = rows(&plan);
    assert_eq!(rows.len() as u64, plan.total().0 + 1);
    let last = rows.last().unwrap();
    assert_eq!((last.tick, last.cue, last.beam), (plan.total().0, 2, 0));
    for id in RotorId::BOTH {
        let end = last.rotors.of(id);
        assert_eq!((end.turns, end.rpm, end.counts, end.step), (0, 0, 0, 0));
    }
}

#[test]
fn rows_do_not_depend_on_where_a_range_starts() {
    for plan in [
        evening([Quintic, Septic, Cubic, Linear]),
        there_and_back(Quintic, Septic),
    ] {
        let all = rows(&plan);
        let rows = Rows::new(&plan);
        for start in 0..plan.rows() {
            let some = rows.collect(start..start + 3);
            let until = all.len().min(start as usize + 3);
            assert_eq!(some, all[start as usize..until]);
        }
        assert!(rows.collect(plan.rows()..u64::MAX).is_empty());
    }
}

/// The beam of each tick in the words of docs/table.md: level at tick + latency, in a loop within the loop.
fn beam_by_definition(plan: &Plan, latency: u64) -> Vec<u8> {
    let levels: Vec<u8> = plan
        .legs
        .iter()
        .flat_map(|leg| std::iter::repeat_n(leg.beam, leg.ticks.0 as usize))
        .collect();
    let mut ahead = levels.clone();
    if let Some(start) = plan.loop_start() {
        let body = levels[start.0 as usize..].to_vec();
        while ahead.len() < levels.len() + latency as usize {
            ahead.extend_from_slice(&body);
        }
    } else {
        ahead.resize(levels.len() + latency as usize + 1, 0);
    }
    (0..plan.rows())
        .map(|tick| ahead[(tick + latency) as usize])
        .collect()
}

#[test]
fn the_beam_is_sent_early_by_the_latency_however_long() {
    for looped in [true, false] {
        // In half ticks, so that ties show: 1 → 1 tick (up), 2 → 1, 5 → 3 …
        for half_ticks in [0, 1, 2, 5, 300, 2000, 5001] {
            let a = rotor((1, 1), 1, 100);
            let rig = rig(ratio(1, 100), ratio(half_ticks, 200), a.clone(), a);
            let mut show = Maker::new(rig, law(Quintic));
            let one = show.cue(1, 2, ratio(1, 1), law(Quintic));
            show.leg(LegKind::RunUp, 0, one, 50, 0);
            show.leg(LegKind::Hold, 1, one, 40, 255);
            show.leg(LegKind::Morph, 2, one, 30, 0);
            show.leg(LegKind::Hold, 2, one, 45, 99);
            let plan = if looped {
                show.looped(3, 35, law(Quintic))
            } else {
                show.run_down(3, 35, law(Quintic))
            };
            let latency = (half_ticks as u64).div_ceil(2);
            let beams: Vec<u8> = rows(&plan).iter().map(|row| row.beam).collect();
            assert_eq!(
                beams,
                beam_by_definition(&plan, latency),
                "{half_ticks} half ticks"
            );
        }
    }
}
