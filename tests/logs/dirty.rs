//! Logs as they come from the field.

use super::common::{assert_close, codes};
use super::machine::{Dice, Logger, Machine, pulse_csv, wrapped_csv};
use super::{RIG, SHOW};
use std::fmt::Write;

const LOGGER: Logger = Logger {
    row_0: -4.75,
    ppm: -130.0,
    jitter: 5e-6,
    noise: 0.0,
};

fn machine() -> Machine {
    Machine::new(RIG, SHOW)
}

#[test]
fn missing_and_doubled_pulses_are_counted_and_bear_no_weight() {
    let machine = machine();
    let actual = |time: f64| machine.motors(time);
    let mut dice = Dice::new(11);
    let all = LOGGER.pulses(&machine, (2.0, 50.0), &actual, &mut dice);
    // Faults only inside the hold of cue 2, each apart from the next.
    let (from, until, _, _) = machine.hold(2);
    let (from, until) = (LOGGER.at(from) + 0.5, LOGGER.at(until) - 0.5);
    let (mut gone, mut twice) = (0, 0);
    let mut pulses = Vec::new();
    for (number, (time, rotor)) in all.into_iter().enumerate() {
        let inside = time > from && time < until;
        if inside && number % 97 == 0 {
            gone += 1;
            continue;
        }
        pulses.push((time, rotor));
        if inside && number % 89 == 0 {
            twice += 1;
            pulses.push((time + 0.0004, rotor));
        }
    }
    assert!(gone > 10 && twice > 10);
    pulses.sort_by(|one, other| one.0.total_cmp(&other.0));
    let (report, findings) = machine.report(&pulse_csv(&pulses));
    assert_eq!((report.lost, report.doubled), (gone, twice));
    let cue = &report.cues[1];
    assert_eq!((cue.lost, cue.doubled), (gone, twice));
    let drift = cue.drift_deg_per_min.unwrap();
    assert_close(drift.value, 0.0, 3.0 * drift.error, "driven");
    assert!(codes(&findings).contains(&"audit/samples"));
}

#[test]
fn lost_late_and_doubled_samples_are_counted() {
    let machine = machine();
    let actual = |time: f64| machine.motors(time);
    let mut samples = LOGGER.positions(&machine, (-6.0, 50.0, 0.01), &actual, &mut Dice::new(12));
    samples.drain(3000..3003);
    samples.remove(4000);
    let twin = samples[2000];
    samples.insert(2000, twin);
    // One sample 6 ms late, as it was taken.
    let late = samples[1000].0 + 0.006;
    let [a, b] = actual(LOGGER.plan(late));
    samples[1000] = (
        late,
        (a * 4096.0).round() as i64,
        (b * 4096.0).round() as i64,
    );
    let (report, findings) = machine.report(&wrapped_csv(&machine, &samples));
    assert_eq!((report.lost, report.late, report.doubled), (4, 1, 1));
    assert_close(report.clock.row_0_s, LOGGER.row_0, 20e-6, "the logger's");
    assert!(codes(&findings).contains(&"audit/samples"));
    assert!(report.jumps.is_empty() && !codes(&findings).contains(&"drift/offset"));
}

#[test]
fn other_separators_quotes_and_line_ends_say_the_same() {
    let machine = machine();
    let actual = |time: f64| machine.motors(time);
    let samples = LOGGER.positions(&machine, (-6.0, 40.0, 0.02), &actual, &mut Dice::new(13));
    let plain = wrapped_csv(&machine, &samples);
    let (first, _) = machine.report(&plain);
    let comma = |text: &str| text.replace('.', ",");
    let dressed = [
        plain.replace(',', "\t"),
        comma(&plain.replace(',', ";")),
        plain.replace(',', " | "),
        comma(&plain.replace(',', "  ")),
        format!("\u{feff}{}", plain.replace('\n', "\r\n")),
        plain.split_once('\n').unwrap().1.to_owned(),
        quoted(&plain),
        swapped(&plain),
        format!("# written by a logger\n\n{plain}").replace("\n12", "\n\n12"),
    ];
    for text in dressed {
        let (other, _) = machine.report(&text);
        let start: String = text.chars().take(60).collect();
        assert_eq!(other.json(), first.json(), "{start}");
    }
}

fn quoted(text: &str) -> String {
    text.lines().fold(String::new(), |mut out, line| {
        writeln!(out, "\"{}\"", line.replace(',', "\",\"")).unwrap();
        out
    })
}

/// The columns in another order, and one that is nobody's business.
fn swapped(text: &str) -> String {
    text.lines().fold(String::new(), |mut out, line| {
        let fields: Vec<&str> = line.split(',').collect();
        writeln!(out, "{},x,{},{}", fields[2], fields[0], fields[1]).unwrap();
        out
    })
}

/// Counters that never roll over, and of 16 bits with a turn that does not divide them.
#[test]
fn wider_counters_are_followed() {
    let rig = RIG.replace("counts 4096", "counts 4000");
    let machine = Machine::new(&rig, SHOW);
    let actual = |time: f64| machine.motors(time);
    let samples = LOGGER.positions(&machine, (-6.0, 40.0, 0.01), &actual, &mut Dice::new(14));
    let text = |of: &dyn Fn(i64) -> i64| {
        let mut text = String::from("time_s,a_counts,b_counts\n");
        for (time, a, b) in &samples {
            writeln!(text, "{time:.6},{},{}", of(*a), of(*b)).unwrap();
        }
        text
    };
    let (within, _) = machine.report(&text(&|count| count.rem_euclid(4000)));
    let (never, _) = machine.report(&text(&|count| count));
    let (short, _) = machine.report(&text(&|count| count.rem_euclid(65_536)));
    let (both_signs, _) =
        machine.report(&text(&|count| (count + 32_768).rem_euclid(65_536) - 32_768));
    for other in [&never, &short, &both_signs] {
        for (one, two) in within.cues.iter().zip(&other.cues) {
            let (one, two) = (
                one.drift_deg_per_min.unwrap(),
                two.drift_deg_per_min.unwrap(),
            );
            assert_close(one.value, two.value, 1e-9, "the same positions");
        }
    }
}

#[test]
fn time_stamps_that_step_are_found() {
    let machine = machine();
    let actual = |time: f64| machine.motors(time);
    let samples = LOGGER.positions(&machine, (-6.0, 50.0, 0.01), &actual, &mut Dice::new(15));
    for by in [-7.3, 2.6] {
        let stepped: Vec<(f64, i64, i64)> = samples
            .iter()
            .enumerate()
            .map(|(number, (time, a, b))| (if number >= 2500 { time + by } else { *time }, *a, *b))
            .collect();
        let (report, findings) = machine.report(&wrapped_csv(&machine, &stepped));
        assert_eq!(report.steps.len(), 1);
        assert_close(report.steps[0].by_s.unwrap(), by, 1e-3, "the step");
        assert_eq!(report.lost, 0);
        assert!(codes(&findings).contains(&"audit/time-step"));
        for cue in &report.cues {
            let drift = cue.drift_deg_per_min.unwrap();
            assert_close(drift.value, 0.0, 3.0 * drift.error, "driven");
        }
    }
    // A true gap of four seconds is none.
    let gap: Vec<(f64, i64, i64)> = [&samples[..2500], &samples[2900..]].concat();
    let (report, _) = machine.report(&wrapped_csv(&machine, &gap));
    assert!(report.steps.is_empty());
    assert_eq!(report.lost, 400);
}

/// Seconds since 1970, to the microsecond.
#[test]
fn large_times_keep_their_fineness() {
    let machine = machine();
    let actual = |time: f64| machine.motors(time);
    let samples = LOGGER.positions(&machine, (-6.0, 40.0, 0.01), &actual, &mut Dice::new(16));
    let mut text = String::from("time_s,a_counts,b_counts\n");
    for (time, a, b) in &samples {
        let micros = (time * 1e6).round() as i64 + 1_764_592_081_000_000;
        writeln!(
            text,
            "{}.{:06},{},{}",
            micros / 1_000_000,
            micros % 1_000_000,
            a.rem_euclid(4096),
            b.rem_euclid(4096)
        )
        .unwrap();
    }
    let (report, _) = machine.report(&text);
    assert_close(
        report.clock.row_0_s - 1_764_592_081.0,
        LOGGER.row_0,
        20e-6,
        "the logger's",
    );
}

/// Ten samples a second: eighteen turns from one to the next.
#[test]
fn sparse_samples_are_enough() {
    let machine = machine();
    let actual = |time: f64| machine.motors(time);
    let samples = LOGGER.positions(&machine, (-6.0, 50.0, 0.1), &actual, &mut Dice::new(17));
    let (report, _) = machine.report(&wrapped_csv(&machine, &samples));
    assert_close(report.clock.row_0_s, LOGGER.row_0, 50e-6, "the logger's");
    for cue in &report.cues {
        let drift = cue.drift_deg_per_min.unwrap();
        assert_close(drift.value, 0.0, 3.0 * drift.error, "driven");
    }
}
