//! The hint, typed in, passes: over random rigs and shows.

use super::common::{brief, errors, try_plan};
use phasewright::finding::Finding;
use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed, TestCaseError, TestRunner};
use std::cell::Cell;

fn config(cases: u32) -> Config {
    Config {
        cases,
        rng_seed: RngSeed::Fixed(0x7068_6173_6577_7269),
        failure_persistence: None,
        ..Config::default()
    }
}

fn law() -> impl Strategy<Value = String> {
    prop_oneof![
        Just("quintic".to_owned()),
        Just("septic skew 30 %".to_owned()),
        Just("cycloidal".to_owned()),
        Just("cubic skew 80 %".to_owned()),
        Just("harmonic".to_owned()),
        Just("modified-sine skew 25 %".to_owned()),
        Just("modified-trapezoid".to_owned()),
        Just("scurve".to_owned()),
        Just("bezier(0.42 0 0.58 1)".to_owned()),
    ]
}

fn rotor() -> impl Strategy<Value = String> {
    (1000..8000u32, 1000..8000u32, prop::option::of(10_000..90_000u32), 0..3u8, 1..4u8, 1..4u8, any::<bool>()).prop_map(
        |(up, down, jerk, turns, n, d, sense)| {
            let jerk = jerk.map_or("jerk none".to_owned(), |jerk| format!("jerk {jerk} rpm/s^2"));
            let turns = ["both", "both", "forward"][usize::from(turns)];
            let draws = if sense { "counter-clockwise" } else { "clockwise" };
            format!("top-speed 12000 rpm\nacceleration {up} rpm/s\ndeceleration {down} rpm/s\n{jerk}\nturns {turns}\ngear {n}:{d}\ndraws {draws}\ncounts 4096\nindex at 10 deg\n")
        },
    )
}

fn rig() -> impl Strategy<Value = String> {
    (rotor(), rotor()).prop_map(|(a, b)| {
        format!("rotor a {{\n{a}}}\nrotor b {{\n{b}}}\ncontroller {{ tick 1 ms }}\n")
    })
}

fn cue() -> impl Strategy<Value = (String, String)> {
    (
        -6..7i32,
        -6..7i32,
        2000..9000u32,
        law(),
        1..3000u32,
        -90..90i32,
    )
        .prop_filter_map("0:0 is no figure", |(p, q, lead, law, morph, land)| {
            (p != 0 || q != 0).then(|| {
                (
                    format!("cue {p}:{q} lead {lead} rpm hold 777 ms land {land} deg"),
                    format!("{morph} ms {law}"),
                )
            })
        })
}

/// The duration between the word and the closing backtick of a hint.
fn hinted(finding: &Finding, word: &str) -> Option<String> {
    let help = finding.help.as_deref()?;
    let rest = help.strip_prefix(&format!("`{word} "))?;
    rest.split_once('`')
        .map(|(duration, _)| duration.to_owned())
}

/// Runs `check` on random rigs and pairs of cues; at least `least` of them must have drawn a hint, or nothing was tested.
fn over_random_shows(
    cases: u32,
    least: u32,
    check: impl Fn(&str, &(String, String), &(String, String)) -> Result<bool, TestCaseError>,
) {
    let hinted = Cell::new(0);
    TestRunner::new(config(cases))
        .run(&(rig(), cue(), cue()), |(rig, one, two)| {
            hinted.set(hinted.get() + u32::from(check(&rig, &one, &two)?));
            Ok(())
        })
        .unwrap();
    assert!(
        hinted.get() >= least,
        "only {} of {cases} drew a hint",
        hinted.get()
    );
}

/// Whether `text` drew a hint after `word`; where it did, the mended text must draw none.
fn mended(
    rig: &str,
    word: &str,
    first: &str,
    text: impl Fn(&str) -> String,
    law: &str,
) -> Result<bool, TestCaseError> {
    let (_, findings) = try_plan(rig, &text(first), None);
    let hint = errors(&findings)
        .into_iter()
        .find_map(|finding| hinted(finding, word));
    let Some(duration) = hint else {
        return Ok(false);
    };
    let mended = text(&format!("{duration} {law}"));
    let (plan, after) = try_plan(rig, &mended, None);
    prop_assert!(plan.is_some(), "{}\n{}", rig, mended);
    let left: Vec<Finding> = errors(&after)
        .into_iter()
        .filter(|finding| hinted(finding, word).is_some())
        .cloned()
        .collect();
    prop_assert!(left.is_empty(), "{}\n{}\n{:#?}", rig, mended, brief(&left));
    Ok(true)
}

/// Two cues and a morph between them that may be too short.
#[test]
fn the_hinted_morph_passes() {
    over_random_shows(250, 60, |rig, one, two| {
        let (_, law) = two.1.split_once(" ms ").unwrap();
        let text = |morph: &str| {
            format!(
                "run-up fastest\n{}\n{} morph {morph}\nrun-down fastest\n",
                one.0, two.0
            )
        };
        mended(rig, "morph", &two.1, text, law)
    });
}

/// The same for a loop's seam.
#[test]
fn the_hinted_loop_passes() {
    over_random_shows(150, 40, |rig, one, two| {
        let (_, law) = two.1.split_once(" ms ").unwrap();
        let text = |morph: &str| {
            format!(
                "run-up fastest\n{}\n{} morph fastest\nloop morph {morph}\n",
                one.0, two.0
            )
        };
        mended(rig, "loop morph", &two.1, text, law)
    });
}

/// And for a run-up and a run-down.
#[test]
fn the_hinted_run_up_and_run_down_pass() {
    for word in ["run-up", "run-down"] {
        over_random_shows(100, 30, |rig, one, two| {
            let law = two.1.split_once(" ms ").unwrap().1;
            let law = law.split_once(" skew").map_or(law, |(law, _)| law);
            let first = format!(
                "{} {law}",
                two.1.split_once(" ms ").unwrap().0.to_owned() + " ms"
            );
            let text = |ramp: &str| match word {
                "run-up" => format!("run-up {ramp}\n{}\nrun-down fastest\n", one.0),
                _ => format!("run-up fastest\n{}\nrun-down {ramp}\n", one.0),
            };
            mended(rig, word, &first, text, law)
        });
    }
}
