//! Knots of rigs and shows of every kind: long and short ticks, few and many counts, long morphs and hard corners.
//!
//! What is written is audited as `compile` audits it, by the evaluator of `audit`.

use crate::common::try_plan;
use crate::load;
use crate::rows::pack_of;
use phasewright::audit::audit_table;
use phasewright::plan::Plan;
use phasewright::setpoint::pack::Content;
use phasewright::setpoint::{Output, table_id};
use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed, TestRunner};

fn rig(counts: u32, tick: &str, top: u32, acceleration: u32) -> String {
    format!(
        "rotor a {{\n top-speed {top} rpm\n acceleration {acceleration} rpm/s\n counts {counts}\n draws counter-clockwise\n}}\n\
         rotor b like a {{\n draws clockwise\n}}\ncontroller {{\n tick {tick}\n}}\nviewing {{\n repeat at least 0.01 Hz\n}}\n"
    )
}

/// Writes the knots of a plan and audits them.
fn sound(plan: &Plan, tolerance: u32) -> Result<(), String> {
    let content = Content::Knots(tolerance);
    let bytes = pack_of(plan, content);
    let report = audit_table(
        plan,
        &Output::Pack(content),
        &table_id(plan),
        &mut bytes.as_slice(),
        &mut |_| {},
    )
    .unwrap();
    if report.is_clean() {
        Ok(())
    } else {
        Err(report.problems[0].to_string())
    }
}

#[test]
fn morphs_longer_than_one_stretch() {
    for (counts, tolerance) in [(400, 1), (400, 9), (65_536, 1), (1 << 20, 2)] {
        let show = "rig \"x.rig\"\nrun-up 6 s\ncue 1:-2 hold 1 s\ncue 3:-2 hold 1 s morph 150 s\nloop morph 6 s\n";
        let plan = load::plan_of_texts(show, &rig(counts, "1 ms", 6000, 6000));
        let found = sound(&plan, tolerance);
        assert_eq!(found, Ok(()), "{counts} counts within {tolerance}");
    }
}

#[test]
fn corners_of_linear_moves() {
    for counts in [400, 16_384, 65_536, 1 << 20] {
        let show = "rig \"x.rig\"\nrun-up 4 s linear\ncue 1:-2 hold 1 s\ncue 3:-2 hold 1 s morph 2 s linear\nrun-down fastest linear\n";
        let plan = load::plan_of_texts(show, &rig(counts, "1 ms", 6000, 6000));
        assert_eq!(sound(&plan, 1), Ok(()), "{counts} counts");
    }
}

/// More than half a turn, and more than a whole one, of change from one tick to the next.
#[test]
fn ticks_in_which_a_speed_changes_by_turns() {
    for (tick, counts) in [
        ("100 ms", 2048),
        ("500 ms", 400),
        ("1 s", 4096),
        ("250 ms", 1 << 20),
    ] {
        let show = "rig \"x.rig\"\nrun-up 4 s\ncue 1:-2 hold 4 s\ncue 3:-2 hold 2 s morph 3 s cubic\ncue 2:1 hold 2 s morph 2 s septic\nrun-down 4 s\n";
        let plan = load::plan_of_texts(show, &rig(counts, tick, 60_000, 120_000));
        assert_eq!(sound(&plan, 1), Ok(()), "{tick}, {counts} counts");
    }
}

#[test]
fn knots_of_any_show_are_sound() {
    let law = prop::sample::select(vec![
        "",
        "linear",
        "cubic",
        "septic",
        "cycloidal",
        "scurve",
        "harmonic skew 20 %",
        "modified-trapezoid",
        "bezier(0.2 0.4 0.3 1)",
    ]);
    let ratio = || {
        prop::sample::select(vec![
            "1:-2", "3:-2", "1:1", "2:1", "5:-4", "1:0", "0:1", "-1:2", "7:5",
        ])
    };
    let cases = (
        prop::sample::select(vec![8, 200, 4096, 65_536, 1 << 24]),
        prop::sample::select(vec!["100 us", "1 ms", "2 ms", "10 ms", "40 ms", "300 ms"]),
        1..200_u32,
        (ratio(), ratio()),
        (law.clone(), law),
        (1..60_u32, 1..3000_u32),
        prop::sample::select(vec![1, 1, 2, 5, 300]),
        any::<bool>(),
    );
    let config = Config {
        cases: 60,
        rng_seed: RngSeed::Fixed(0x6b6e_6f74_7321),
        failure_persistence: None,
        ..Config::default()
    };
    TestRunner::new(config)
        .run(&cases, |(counts, tick, speed, (first, second), (law, back), (morph, hold), tolerance, looped)| {
            // Never more than about twenty thousand rows.
            let unit = match tick {
                "100 us" => 0.05,
                "1 ms" => 0.3,
                _ => 1.0,
            };
            let seconds = |value: f64| format!("{:.3} s", value * unit + 0.6);
            let (morph, hold) = (seconds(f64::from(morph) / 6.0), seconds(f64::from(hold) / 3000.0));
            let ending = if looped { format!("loop morph {morph} {back}") } else { format!("run-down {morph} {back}") };
            let show = format!(
                "rig \"x.rig\"\nrun-up {morph} {law}\ncue {first} hold {hold}\ncue {second} hold {hold} morph {morph} {law}\n{ending}\n"
            );
            let rig = rig(counts, tick, speed * 100, 2_000_000);
            let (plan, _) = try_plan(&rig, &show, None);
            let Some(plan) = plan else {
                return Err(TestCaseError::reject("no plan"));
            };
            prop_assert_eq!(sound(&plan, tolerance), Ok(()), "{}\n{}", rig, show);
            Ok(())
        })
        .unwrap();
}
