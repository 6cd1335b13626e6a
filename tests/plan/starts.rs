//! `--from K`: the same durations and numbers, another start.

use super::RIG;
use super::common::{brief, errors, plan_of, try_plan};
use phasewright::plan::LegKind;
use phasewright::rig::RotorId;

const SHOW: &str = "usual hold 2 s morph 4 s\ncue 1:-2\ncue 2:-3 morph 12 s\ncue 3:-4 morph fastest\ncue 1:-3 hold 1.5 s\n";

#[test]
fn a_loop_is_turned_and_closes_at_the_cue_it_starts_with() {
    let text = format!("{SHOW}loop morph 9 s\n");
    let (all, _) = plan_of(RIG, &text);
    let (plan, findings) = try_plan(RIG, &text, Some(3));
    let plan = plan.unwrap();
    let numbers: Vec<(LegKind, u32)> = plan.legs.iter().map(|leg| (leg.kind, leg.cue)).collect();
    use LegKind::{Hold, LoopMorph, Morph, RunUp};
    assert_eq!(
        numbers,
        [
            (RunUp, 0),
            (Hold, 3),
            (Morph, 4),
            (Hold, 4),
            (LoopMorph, 5),
            (Hold, 1),
            (Morph, 2),
            (Hold, 2),
            (Morph, 3)
        ]
    );
    for leg in &plan.legs[1..] {
        let same = all
            .legs
            .iter()
            .find(|other| (other.kind, other.cue) == (leg.kind, leg.cue))
            .unwrap();
        assert_eq!(leg.ticks, same.ticks);
    }
    for id in RotorId::BOTH {
        let gained = &plan.phase_after(plan.legs.len() - 1, id) - &plan.phase_before(1, id);
        assert!(gained.value().is_integer());
    }
    drop(findings);
}

#[test]
fn a_show_with_a_run_down_drops_what_is_before() {
    let text = format!("{SHOW}run-down fastest\n");
    let (plan, findings) = try_plan(RIG, &text, Some(3));
    let plan = plan.unwrap();
    assert!(errors(&findings).is_empty(), "{:#?}", brief(&findings));
    let numbers: Vec<(LegKind, u32)> = plan.legs.iter().map(|leg| (leg.kind, leg.cue)).collect();
    use LegKind::{Hold, Morph, RunDown, RunUp};
    assert_eq!(
        numbers,
        [(RunUp, 0), (Hold, 3), (Morph, 4), (Hold, 4), (RunDown, 5)]
    );
}
