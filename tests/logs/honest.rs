//! Does three times the stated error cover the truth as often as it says?

use super::RIG;
use super::machine::{Dice, Logger, Machine, pulse_csv, wrapped_csv};

const SHORT: &str = r#"
usual morph 3 s quintic, hold 4 s
run-up 5 s
cue 5:-4
cue 4:-3
run-down 6 s
"#;

/// Over 24 machines, each with a drift, a clock, a beginning and noise of its own. The law of a normal error is the source:
/// 68.27 % lie within one error and 99.73 % within three. Of 48 drifts, chance alone leaves 1 or none beyond three in 99 of
/// 100 sets, and 24 to 42 within one (binomial, three deviations).
#[test]
fn stated_errors_cover_the_truth() {
    for pulses in [false, true] {
        let (ones, threes, all) = covered(1..=24, pulses);
        assert_eq!(all, 48);
        assert!(threes >= 47, "{threes} of {all} within three errors");
        assert!(
            (24..=42).contains(&ones),
            "{ones} of {all} within one error"
        );
    }
}

/// The same over 300 machines: 600 drifts, at most 6 beyond three errors (three deviations), 375 to 444 within one.
#[test]
#[ignore = "some minutes; cargo test --release --test logs -- --ignored"]
fn stated_errors_cover_the_truth_of_many() {
    for pulses in [false, true] {
        let (ones, threes, all) = covered(1001..=1300, pulses);
        assert!(
            threes >= all - 6,
            "pulses {pulses}: {threes} of {all} within three errors"
        );
        assert!(
            (375..=444).contains(&ones),
            "pulses {pulses}: {ones} of {all} within one error"
        );
    }
}

/// How many drifts were within one and within three errors, and how many there were.
fn covered(seeds: std::ops::RangeInclusive<u64>, pulses: bool) -> (u32, u32, u32) {
    let machine = Machine::new(RIG, SHORT);
    let (mut ones, mut threes, mut all) = (0, 0, 0);
    for seed in seeds {
        let mut dice = Dice::new(seed);
        let faults = [dice.normal() * 40e-6, dice.normal() * 40e-6];
        let actual = |time: f64| {
            let [a, b] = machine.motors(time);
            [a * (1.0 + faults[0]), b * (1.0 + faults[1])]
        };
        let logger = Logger {
            row_0: 5.0 * dice.even(),
            ppm: 60.0 * dice.normal(),
            jitter: 30e-6,
            noise: 1.0,
        };
        let (from, until) = (logger.row_0 + 2.0, logger.row_0 + 17.0);
        let log = if pulses {
            pulse_csv(&logger.pulses(&machine, (from, until), &actual, &mut dice))
        } else {
            let span = (from, until, 0.0087);
            wrapped_csv(
                &machine,
                &logger.positions(&machine, span, &actual, &mut dice),
            )
        };
        let (report, _) = machine.report(&log);
        for cue in &report.cues {
            let found = cue.drift_deg_per_min.unwrap();
            let off = (found.value - machine.drift(cue.cue, &actual)).abs() / found.error;
            ones += u32::from(off <= 1.0);
            threes += u32::from(off <= 3.0);
            all += 1;
        }
    }
    (ones, threes, all)
}
