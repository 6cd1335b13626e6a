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

/// Over 60 machines, each with a drift, a clock, a beginning and jitter of its own, for both kinds of log. The law of a
/// normal error is the source: 68.27 % lie within one error and 99.73 % within three. Of 120 drifts of a kind, chance
/// alone leaves 2 or fewer beyond three in 99 of 100 sets, and between 55 % and 81 % within one (binomial, 3 deviations).
#[test]
fn stated_errors_cover_the_truth() {
    let machine = Machine::new(RIG, SHORT);
    for pulses in [false, true] {
        let (mut ones, mut threes, mut all) = (0, 0, 0);
        for seed in 1..=60 {
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
            let log = if pulses {
                let seen = logger.pulses(
                    &machine,
                    (logger.row_0 + 2.0, logger.row_0 + 17.0),
                    &actual,
                    &mut dice,
                );
                pulse_csv(&seen)
            } else {
                let span = (logger.row_0, logger.row_0 + 17.0, 0.0087);
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
        assert_eq!(all, 120);
        assert!(threes >= all - 2, "{threes} of {all} within three errors");
        assert!(
            (66..=98).contains(&ones),
            "{ones} of {all} within one error"
        );
    }
}
