//! Files that are no logs, logs of other shows, and anything else: never a panic, always a reason.

use super::machine::{Dice, Logger, Machine, pulse_csv};
use super::{RIG, SHOW};
use phasewright::audit::log::{NoLog, audit, refusal};
use phasewright::finding::Place;

fn reason(machine: &Machine, text: &[u8]) -> NoLog {
    audit(&mut &text[..], &machine.plan, Place::default()).expect_err("no log")
}

#[test]
fn what_is_no_log_is_refused_by_name() {
    let machine = Machine::new(RIG, SHOW);
    for text in ["", "\n\n", "time_s,a_counts,b_counts\n", "# nothing\n"] {
        assert!(
            matches!(reason(&machine, text.as_bytes()), NoLog::Empty),
            "{text:?}"
        );
    }
    let columns = reason(&machine, b"seconds,left,right\n0,1,2\n");
    assert!(matches!(&columns, NoLog::Columns(line) if line == "seconds,left,right"));
    let finding = refusal(&columns, Place::default());
    assert_eq!(finding.code.text(), "audit/log");
    assert!(finding.help.unwrap().contains("time_s,a_counts,b_counts"));
    let mostly = "time_s,rotor\n1,a\nx\ny\nz\n";
    assert!(matches!(
        reason(&machine, mostly.as_bytes()),
        NoLog::Unreadable(3)
    ));
    let mut noise = Vec::new();
    let mut dice = Dice::new(21);
    for _ in 0..200_000 {
        noise.push((dice.even() * 256.0) as u8);
    }
    let _ = reason(&machine, &noise);
    let _ = reason(&machine, &vec![b'7'; 3_000_000]);
}

#[test]
fn a_log_of_something_else_matches_nowhere() {
    let machine = Machine::new(RIG, SHOW);
    let mut dice = Dice::new(22);
    let chance: Vec<(f64, char)> = (0..3000)
        .scan(0.0, |time, number| {
            *time += 0.001 + 0.02 * dice.even();
            Some((*time, if number % 3 == 0 { 'a' } else { 'b' }))
        })
        .collect();
    let (report, findings) = machine.audit(&pulse_csv(&chance));
    assert!(report.is_none());
    assert_eq!(findings[0].code.text(), "audit/no-match");
    let logger = Logger {
        row_0: 0.0,
        ppm: 0.0,
        jitter: 0.0,
        noise: 0.0,
    };
    // The right machine with its times in milliseconds.
    let actual = |time: f64| machine.motors(time);
    let right = logger.pulses(&machine, (0.0, 30.0), &actual, &mut dice);
    let wrong: Vec<(f64, char)> = right
        .iter()
        .map(|(time, rotor)| (time * 1e3, *rotor))
        .collect();
    assert!(machine.audit(&pulse_csv(&wrong)).0.is_none());
}

/// Times and counts at their ends, in every order: no panic, and an answer.
#[test]
fn hostile_numbers_are_borne() {
    let machine = Machine::new(RIG, SHOW);
    let times = [
        "0",
        "-9e15",
        "9e15",
        "1e-300",
        "99999999999999999999",
        "0.5",
        "0.5",
        "-0.0",
    ];
    let counts = ["0", "-1", "1e300", "4095", "-1e300", "16777216"];
    let mut dice = Dice::new(23);
    for _ in 0..20 {
        let mut text = String::from("time_s,a_counts,b_counts\n");
        for _ in 0..300 {
            let mut pick = |from: &[&'static str]| from[(dice.even() * from.len() as f64) as usize];
            let (t, a, b) = (pick(&times), pick(&counts), pick(&counts));
            text.push_str(&format!("{t},{a},{b}\n"));
        }
        drop(audit(&mut text.as_bytes(), &machine.plan, Place::default()));
    }
}
