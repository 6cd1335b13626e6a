use crate::{evening, sheet, there_and_back};
use phasewright::runsheet::Form;
use serde_json::{Value, json};

fn json_of(plan: &phasewright::plan::Plan) -> Value {
    serde_json::from_str(&sheet(plan, &[], Form::Json)).unwrap()
}

#[test]
fn json_has_the_keys_of_the_reference() {
    let sheet = json_of(&evening());
    for key in ["title", "tick_s", "run_s", "loop_s", "cues", "laser"] {
        assert!(sheet.get(key).is_some(), "{key}");
    }
    for key in [
        "cue",
        "name",
        "line",
        "figure",
        "ratio",
        "lobes",
        "repeat_hz",
        "start_s",
        "morph_s",
        "law",
        "hold_s",
        "a_rpm",
        "b_rpm",
        "pose_deg",
        "beam",
        "peaks",
    ] {
        assert!(sheet["cues"][0].get(key).is_some(), "{key}");
    }
    for rotor in ["a", "b"] {
        for limit in ["speed", "acceleration", "jerk", "torque"] {
            let key = format!("{rotor}_{limit}");
            assert!(sheet["cues"][0]["peaks"].get(&key).is_some(), "{key}");
        }
    }
    assert_eq!(sheet["laser"], json!({ "class": null, "nohd_m": null }));
}

/// The plan's legs are 400, 137, 211, 90, 177, 301 and 250 ticks of 2 ms; sums by hand.
#[test]
fn times_are_sums_of_ticks() {
    let sheet = json_of(&evening());
    assert_eq!(sheet["tick_s"], json!(0.002));
    assert_eq!(sheet["run_s"], json!(3.132));
    assert_eq!(sheet["loop_s"], json!(2.332));
    assert_eq!(sheet["loop_start_s"], json!(0.8));
    let of = |cue: usize, key: &str| sheet["cues"][cue][key].clone();
    let starts = ["start_s", "show_s", "morph_s", "stands_s", "hold_s"];
    assert_eq!(
        starts.map(|key| of(0, key)),
        [json!(0.8), json!(0), json!(0), json!(0.8), json!(0.274)]
    );
    assert_eq!(
        starts.map(|key| of(1, key)),
        [
            json!(1.074),
            json!(0.274),
            json!(0.422),
            json!(1.496),
            json!(0.18)
        ]
    );
    assert_eq!(
        starts.map(|key| of(2, key)),
        [
            json!(1.676),
            json!(0.876),
            json!(0.354),
            json!(2.03),
            json!(0.602)
        ]
    );
    assert_eq!(sheet["ending"]["start_s"], json!(2.632));
    assert_eq!(sheet["ending"]["cue"], json!(4));
}

#[test]
fn a_show_with_a_run_down_has_no_loop() {
    let sheet = json_of(&there_and_back());
    assert_eq!(sheet["loop_s"], Value::Null);
    assert_eq!(sheet["loop_start_s"], Value::Null);
    assert_eq!(sheet["ending"]["law"], "cubic");
}

/// 5:-4 repeating 50/7 times a second: mirror a at 250/7 turns/s, at 2:1 the motor at 500/7 turns/s = 30000/7 rpm; mirror
/// b at -200/7, at 3:2 and turned round the motor at 300/7 = 18000/7 rpm.
#[test]
fn speeds_are_the_motors() {
    let sheet = json_of(&evening());
    let cue = &sheet["cues"][2];
    assert_eq!(cue["ratio"], json!([5, -4]));
    assert_eq!(cue["lobes"], json!(9));
    assert_eq!(cue["repeat_hz"].to_string(), "7.142857142857");
    assert_eq!(cue["a_rpm"].as_f64(), "4285.714285714286".parse().ok());
    assert_eq!(cue["b_rpm"].as_f64(), "2571.428571428571".parse().ok());
}

#[test]
fn gears_are_told() {
    let gears = json_of(&evening())["before"]["gears"].clone();
    let told = [
        "Rotor a: 1 mirror turn = 2 motor turns",
        "Rotor b: 2 mirror turns = 3 motor turns",
    ];
    assert_eq!(gears, json!(told));
    assert_eq!(json_of(&there_and_back())["before"]["gears"], json!([]));
}

#[test]
fn csv_has_one_whole_record_a_cue() {
    let csv = sheet(&evening(), &[], Form::Csv);
    assert!(!csv.contains('\r') && csv.ends_with('\n'));
    // The reader refuses records of unequal length.
    let mut reader = csv::Reader::from_reader(csv.as_bytes());
    let records: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    assert_eq!(records.len(), 3);
    assert_eq!(&records[1][0], "2");
}

#[test]
fn every_row_of_a_markdown_table_has_its_columns() {
    let markdown = sheet(&evening(), &[], Form::Markdown);
    let bars = |line: &str| line.replace("\\|", "").matches('|').count();
    let rows: Vec<usize> = markdown
        .lines()
        .filter(|line| line.starts_with('|'))
        .map(bars)
        .collect();
    // Two heads, two rules, run-up, three cues and the loop's morph in each.
    assert_eq!(rows.len(), 14);
    assert_eq!(rows.iter().filter(|count| **count == 16).count(), 7);
    assert_eq!(rows.iter().filter(|count| **count == 8).count(), 7);
}
