use crate::builder::{Ran, Run};
use std::fmt::Write;

/// The harbour show's table.
fn table(name: &str) -> String {
    let ran = Run::new(&["compile", "harbour.show", "-o", name])
        .with_harbour()
        .run();
    ran.file(name).unwrap()
}

fn id() -> String {
    let ran = Run::new(&["compile", "harbour.show"]).with_harbour().run();
    let (_, after) = ran.stdout.split_once("table ").unwrap();
    after[..8].to_owned()
}

fn audited(arguments: &[&str], name: &str, content: &str) -> Ran {
    let all = [&["audit", name], arguments].concat();
    Run::new(&all).with_harbour().with(name, content).run()
}

#[test]
fn a_table_tells_its_id() {
    let ran = audited(&[], "t.json", &table("t.json"));
    ran.is(0, &format!("{}\n", id()), "");
}

#[test]
fn a_csv_has_no_id_to_tell() {
    let ran = audited(&[], "t.csv", &table("t.csv"));
    ran.says(1, &[], &["carries no ID", "--show SHOW"]);
}

#[test]
fn a_sound_table_is_as_planned_in_both_forms() {
    for name in ["t.csv", "t.json"] {
        let ran = audited(&["--show", "harbour.show"], name, &table(name));
        ran.says(0, &["as planned", &id()], &[]);
    }
}

#[test]
fn one_wrong_digit_is_named_by_tick_and_column() {
    let good = table("t.csv");
    let mut lines: Vec<String> = good.lines().map(str::to_owned).collect();
    let mut fields: Vec<String> = lines[5001].split(',').map(str::to_owned).collect();
    let counts: u32 = fields[7].parse().unwrap();
    let wrong = if counts % 10 == 9 {
        counts - 1
    } else {
        counts + 1
    };
    fields[7] = wrong.to_string();
    lines[5001] = fields.join(",");
    let bad = lines.join("\n") + "\n";
    let ran = audited(&["--show", "harbour.show"], "t.csv", &bad);
    let named = format!("tick 5000, a_counts: wanted {counts}, found {wrong}\n");
    ran.says(1, &[&named, "must not be played"], &[]);
    let ran = audited(&["--show", "harbour.show", "--form", "json"], "t.csv", &bad);
    let value: serde_json::Value = serde_json::from_str(&ran.stdout).unwrap();
    assert_eq!(value["problems"][0]["tick"], 5000);
    assert_eq!(ran.code, 1);
}

/// A machine that does exactly what the table says, logged every 10 ms, 1.25 s after row 0 by a clock of its own.
fn perfect_log() -> String {
    let table = table("t.csv");
    let mut log = String::from("time_s,a_counts,b_counts\n");
    for row in table.lines().skip(1).step_by(5) {
        let fields: Vec<&str> = row.split(',').collect();
        let time: f64 = fields[1].parse().unwrap();
        writeln!(log, "{:.6},{},{}", time + 1.25, fields[7], fields[8]).unwrap();
    }
    log
}

#[test]
fn a_log_is_judged_cue_by_cue() {
    let log = perfect_log();
    let ran = audited(&["--show", "harbour.show"], "log.csv", &log);
    ran.says(0, &["Cue 1: deltoid (1:-2)", "nearest 5:-4", "steady"], &[]);
    let ran = audited(
        &[
            "--show",
            "harbour.show",
            "--form",
            "json",
            "-o",
            "poses.svg",
        ],
        "log.csv",
        &log,
    );
    let value: serde_json::Value = serde_json::from_str(&ran.stdout).unwrap();
    assert!((value["row_0_s"].as_f64().unwrap() - 1.25).abs() < 1e-4);
    let cues = value["cues"].as_array().unwrap();
    assert_eq!(cues.len(), 2);
    for key in [
        "cue",
        "ratio",
        "ratio_error",
        "nearest",
        "drift_deg_per_min",
        "drift_error",
    ] {
        assert!(!cues[0][key].is_null(), "{key}");
    }
    assert_eq!(cues[1]["nearest"], serde_json::json!([5, -4]));
    let picture = ran.file("poses.svg").unwrap();
    assert!(
        picture.starts_with("<svg ") && picture.contains("<title") && picture.ends_with("</svg>\n")
    );
    let ran = audited(&["--show", "harbour.show", "-o", "-"], "log.csv", &log);
    ran.is(0, &picture, "");
}

#[test]
fn a_log_from_standard_input() {
    let ran = Run::new(&["audit", "-", "--show", "harbour.show"])
        .with_harbour()
        .stdin(perfect_log())
        .run();
    ran.says(0, &["Cue 2: 5:-4"], &[]);
}

#[test]
fn what_cannot_be_audited_says_why() {
    audited(&["--show", "harbour.show"], "log.csv", "").says(
        1,
        &[],
        &["audit/log", "not one sample"],
    );
    audited(&["--show", "harbour.show"], "log.csv", "left,right\n1,2\n").says(
        1,
        &[],
        &["audit/log", "left,right"],
    );
    audited(&[], "log.csv", "time_s,rotor\n").says(2, &[], &["--show"]);
    audited(&["-o", "x.svg"], "log.csv", "").says(2, &[], &["--show"]);
    Run::new(&["audit", "nothing.csv", "--show", "harbour.show"])
        .with_harbour()
        .run()
        .says(1, &[], &["nothing.csv"]);
}
