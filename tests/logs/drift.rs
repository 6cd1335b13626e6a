//! What really happened: driven, running free, slipping.

use super::common::{assert_close, codes};
use super::machine::{Dice, Logger, Machine, Turns, pulse_csv, wrapped_csv};
use super::{GEARED, RIG, SHOW};
use phasewright::audit::log::LogReport;

const LOGGER: Logger = Logger {
    row_0: 3.217,
    ppm: 85.0,
    jitter: 20e-6,
    noise: 0.0,
};

/// Every cue's drift lies within three of its stated errors of what the machine did, and no error is a mere excuse.
#[track_caller]
fn assert_drifts(
    machine: &Machine,
    report: &LogReport,
    actual: &dyn Fn(f64) -> Turns,
    largest_error: f64,
) {
    assert_eq!(report.cues.len(), machine.cues() as usize);
    for cue in &report.cues {
        let found = cue.drift_deg_per_min.expect("a drift");
        let want = machine.drift(cue.cue, actual);
        assert_close(
            found.value,
            want,
            3.0 * found.error,
            &format!("cue {}, error {}", cue.cue, found.error),
        );
        assert!(
            found.error < largest_error,
            "cue {}: error {}",
            cue.cue,
            found.error
        );
    }
}

#[test]
fn a_driven_machine_is_steady_and_its_clock_is_found() {
    for rig in [RIG, GEARED] {
        let machine = Machine::new(rig, SHOW);
        let actual = |time: f64| machine.motors(time);
        let samples = LOGGER.positions(&machine, (1.5, 62.0, 0.01), &actual, &mut Dice::new(1));
        let (report, findings) = machine.report(&wrapped_csv(&machine, &samples));
        assert_close(
            report.clock.row_0_s,
            LOGGER.row_0,
            20e-6,
            "6000 samples of 20 µs jitter",
        );
        let rate = report.clock.rate_ppm;
        assert_close(
            rate.value,
            LOGGER.ppm,
            4.0 * rate.error + 0.05,
            "the logger's ppm",
        );
        assert!(rate.error < 0.5, "{rate:?}");
        assert_drifts(&machine, &report, &actual, 0.2);
        for cue in &report.cues {
            let (p, q) = cue.planned;
            assert_eq!(
                cue.nearest,
                Some((i64::from(p), i64::from(q))),
                "cue {}",
                cue.cue
            );
            let ratio = cue.ratio.unwrap();
            assert_close(
                ratio.value,
                f64::from(p) / f64::from(q),
                4.0 * ratio.error,
                "p : q",
            );
            assert_close(cue.pose_off_deg.unwrap(), 0.0, 0.1, "on the plan");
        }
        let found = codes(&findings);
        assert!(
            !found.contains(&"drift/ratio") && !found.contains(&"drift/jump"),
            "{found:?}"
        );
        assert!(
            !found.contains(&"drift/rotors") && !found.contains(&"drift/offset"),
            "{found:?}"
        );
    }
}

/// Two motors on clocks of their own, 320 ppm apart: nobody follows positions.
#[test]
fn free_running_motors_turn_the_pose() {
    for rig in [RIG, GEARED] {
        let machine = Machine::new(rig, SHOW);
        let actual = |time: f64| {
            let [a, b] = machine.motors(time);
            [a * (1.0 + 180e-6), b * (1.0 - 140e-6)]
        };
        let samples = LOGGER.positions(&machine, (1.5, 62.0, 0.01), &actual, &mut Dice::new(2));
        let (report, findings) = machine.report(&wrapped_csv(&machine, &samples));
        assert_drifts(&machine, &report, &actual, 1.0);
        let found = codes(&findings);
        assert!(
            found.contains(&"drift/pose") && found.contains(&"drift/rotors"),
            "{found:?}"
        );
        // 5:-4 at 12000 · 0.9 rpm: far more than a hundred degrees a minute.
        assert!(report.cues[0].drift_deg_per_min.unwrap().value.abs() > 50.0);

        let pulses = LOGGER.pulses(&machine, (1.5, 62.0), &actual, &mut Dice::new(3));
        let (report, findings) = machine.report(&pulse_csv(&pulses));
        assert_drifts(&machine, &report, &actual, 2.0);
        assert!(codes(&findings).contains(&"drift/pose"));
    }
}

/// A belt between motor and mirror b creeps by 0.02 % from the second cue on: the pulses of the mirror show it.
#[test]
fn a_creeping_belt_shows_in_the_pulses() {
    let machine = Machine::new(RIG, SHOW);
    let (from, _, _, _) = machine.hold(2);
    let from = from - 0.5;
    let actual = |time: f64| {
        let [a, b] = machine.motors(time);
        let since = machine.motors(from)[1];
        [
            a,
            if time > from {
                b - (b - since) * 2e-4
            } else {
                b
            },
        ]
    };
    let pulses = LOGGER.pulses(&machine, (1.5, 62.0), &actual, &mut Dice::new(4));
    let (report, findings) = machine.report(&pulse_csv(&pulses));
    assert_drifts(&machine, &report, &actual, 1.0);
    let turning: Vec<u32> = report
        .cues
        .iter()
        .filter(|cue| {
            let drift = cue.drift_deg_per_min.unwrap();
            drift.value.abs() > 3.0 * drift.error
        })
        .map(|cue| cue.cue)
        .collect();
    assert_eq!(turning, [2, 3]);
    assert!(codes(&findings).contains(&"drift/pose"));
    // Rotor a kept to the plan, so the clock is taken from it.
    assert_close(report.clock.rate_ppm.value, LOGGER.ppm, 5.0, "a's clock");
}

/// Motor b loses 40 degrees in the morph into cue 2.
#[test]
fn lost_steps_are_a_jump() {
    let machine = Machine::new(RIG, SHOW);
    let (start, _, _, _) = machine.hold(2);
    let lost = start - 2.5;
    let actual = |time: f64| {
        let [a, b] = machine.motors(time);
        [a, if time > lost { b - 40.0 / 360.0 } else { b }]
    };
    let samples = LOGGER.positions(&machine, (1.5, 62.0, 0.01), &actual, &mut Dice::new(5));
    let (report, findings) = machine.report(&wrapped_csv(&machine, &samples));
    assert_eq!(report.jumps.len(), 1, "{:?}", report.jumps);
    let jump = report.jumps[0];
    assert_eq!((jump.rotor, jump.cue), ("b", 2));
    // b draws clockwise: 40 degrees behind at the motor are 40 further counter-clockwise at the mirror.
    assert_close(jump.by_deg, 40.0, 0.5, "the loss");
    let found = codes(&findings);
    assert!(
        found.contains(&"drift/jump") && found.contains(&"drift/offset"),
        "{found:?}"
    );
    // α = (q·θa − p·θb)/(q − p) with 1:−2: −40/(−3).
    assert_close(
        report.cues[1].pose_off_deg.unwrap(),
        40.0 / 3.0,
        0.7,
        "turned pose",
    );
}

/// Rotor b lags 400 µs more than a: a pose turned by a fixed angle, and no drift.
#[test]
fn unequal_lag_turns_the_pose_but_does_not_drift() {
    let machine = Machine::new(RIG, SHOW);
    let actual = |time: f64| [machine.motors(time)[0], machine.motors(time - 400e-6)[1]];
    let samples = LOGGER.positions(&machine, (1.5, 62.0, 0.01), &actual, &mut Dice::new(6));
    let (report, findings) = machine.report(&wrapped_csv(&machine, &samples));
    // The hold's first 400 µs are not yet at speed; the ends of the simulated hold are 10 ms inside.
    assert_drifts(&machine, &report, &actual, 0.2);
    let (from, _, p, q) = machine.hold(1);
    let (is, should) = (
        machine.mirrors(actual(from + 1.0)),
        machine.mirrors(machine.motors(from + 1.0)),
    );
    let want = (q * (is[0] - should[0]) - p * (is[1] - should[1])) / (q - p) * 360.0;
    assert_close(
        report.cues[0].pose_off_deg.unwrap(),
        want,
        0.2,
        "the lag's angle",
    );
    assert!(codes(&findings).contains(&"drift/offset"));
}

/// A loop played four times: the drift of each cue rests on all passes.
#[test]
fn many_passes_of_a_loop() {
    let machine = Machine::new(RIG, SHOW);
    let actual = |time: f64| {
        let [a, b] = machine.motors(time);
        [a, b * (1.0 + 3e-6)]
    };
    let samples = LOGGER.positions(&machine, (20.0, 240.0, 0.02), &actual, &mut Dice::new(7));
    let (report, _) = machine.report(&wrapped_csv(&machine, &samples));
    assert!(
        report.cues.iter().all(|cue| cue.passes >= 4),
        "{:?}",
        report.cues.iter().map(|cue| cue.passes).collect::<Vec<_>>()
    );
    assert_drifts(&machine, &report, &actual, 0.2);
    let pulses = LOGGER.pulses(&machine, (20.0, 180.0), &actual, &mut Dice::new(8));
    let (report, _) = machine.report(&pulse_csv(&pulses));
    assert_drifts(&machine, &report, &actual, 0.5);
}
