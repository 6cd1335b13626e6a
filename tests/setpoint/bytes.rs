//! The written forms: the same bytes always, read by another program.

use crate::plans::{Maker, evening, law, rig, rotor, there_and_back};
use phasewright::exact::ratio;
use phasewright::motion::LawKind::{Cubic, Linear, Quintic, Septic};
use phasewright::plan::{LegKind, Plan};
use phasewright::setpoint::{BLOCK_ROWS, COLUMNS, Form, Head, Rows, table_id, write_table};
use std::io::Write;
use std::process::{Command, Stdio};

fn bytes(plan: &Plan, form: Form) -> Vec<u8> {
    let mut out = Vec::new();
    let mut told = Vec::new();
    let findings = [serde_json::json!({"code": "time/rounded"})];
    let id = table_id(plan);
    let head = Head {
        id: &id,
        findings: &findings,
    };
    write_table(plan, form, &head, &mut out, &mut |rows| told.push(rows)).unwrap();
    assert_eq!(
        told.last(),
        Some(&plan.rows()),
        "progress ends with the number of rows"
    );
    out
}

/// Long enough for many blocks, with boundaries of legs that fall on none of theirs.
fn long() -> Plan {
    let a = rotor((1, 1), 1, 4096);
    let mut show = Maker::new(rig(ratio(1, 1000), ratio(0, 1), a.clone(), a), law(Quintic));
    let one = show.cue(3, -2, ratio(47, 3), law(Cubic));
    let two = show.cue(5, 7, ratio(9, 1), law(Septic));
    show.leg(LegKind::RunUp, 0, one, 5000, 0);
    show.leg(LegKind::Hold, 1, one, BLOCK_ROWS * 3 + 17, 255);
    show.leg(LegKind::Morph, 2, two, 3011, 255);
    show.leg(LegKind::Hold, 2, two, BLOCK_ROWS * 2, 10);
    show.looped(3, 4000, law(Quintic))
}

#[test]
fn the_same_bytes_with_any_number_of_threads() {
    let plan = long();
    for form in [Form::Csv, Form::Json] {
        let usual = bytes(&plan, form);
        for threads in [1, 3, 7] {
            let pool = rayon::ThreadPoolBuilder::new()
                .num_threads(threads)
                .build()
                .unwrap();
            assert!(
                pool.install(|| bytes(&plan, form)) == usual,
                "{threads} threads"
            );
        }
    }
}

#[test]
fn csv_is_one_header_and_one_line_a_row() {
    let plan = there_and_back(Quintic, Septic);
    let text = String::from_utf8(bytes(&plan, Form::Csv)).unwrap();
    assert!(text.ends_with('\n') && !text.contains('\r') && !text.contains("-0.000000,"));
    let mut lines = text.lines();
    assert_eq!(lines.next(), Some(COLUMNS.join(",").as_str()));
    let first = lines.next().unwrap();
    assert_eq!(
        first,
        "0,0.0000000000,0,0.000000000000,0.000000000000,0.000000,0.000000,0,0,0,0,0"
    );
    assert_eq!(lines.count() as u64 + 1, plan.rows());
}

#[test]
fn json_is_one_document_with_the_same_rows() {
    for plan in [
        there_and_back(Quintic, Septic),
        evening([Quintic, Septic, Cubic, Linear]),
    ] {
        let json = String::from_utf8(bytes(&plan, Form::Json)).unwrap();
        let document: serde_json::Value = serde_json::from_str(&json).unwrap();
        assert_eq!(document["format"], 1);
        assert_eq!(document["table"], table_id(&plan));
        assert_eq!(document["show"]["title"], "Ünter the pier");
        assert_eq!(document["row_count"], plan.rows());
        assert_eq!(document["columns"].as_array().unwrap().len(), COLUMNS.len());
        assert_eq!(document["findings"][0]["code"], "time/rounded");
        let rows = document["rows"].as_array().unwrap();
        assert_eq!(rows.len() as u64, plan.rows());
        let csv = String::from_utf8(bytes(&plan, Form::Csv)).unwrap();
        let in_json = json.split("\"rows\":[\n").nth(1).unwrap();
        for (csv, json) in csv.lines().skip(1).zip(in_json.lines()) {
            assert_eq!(json.trim_end_matches(',').trim_matches(['[', ']']), csv);
        }
        let cues = document["cues"].as_array().unwrap();
        assert_eq!(
            cues.len(),
            plan.legs.iter().map(|leg| leg.cue).max().unwrap() as usize + 1
        );
        assert_eq!(
            cues[1]["start"], cues[1]["hold"],
            "the first cue has no morph"
        );
    }
}

#[test]
fn json_head() {
    let plan = evening([Quintic, Septic, Cubic, Linear]);
    let json = String::from_utf8(bytes(&plan, Form::Json)).unwrap();
    let head = json.split("\"rows\":[\n").next().unwrap();
    insta::with_settings!({filters => vec![(r"phasewright \d+\.\d+\.\d+", "phasewright VERSION")]}, {
        insta::assert_snapshot!(head);
    });
}

#[test]
fn the_id_is_that_of_the_motion_and_of_nothing_else() {
    let plan = evening([Quintic, Septic, Cubic, Linear]);
    let id = table_id(&plan);
    assert!(id.len() == 8 && id.bytes().all(|digit| b"0123456789abcdef".contains(&digit)));
    let mut renamed = plan.clone();
    let mut show = (*plan.show).clone();
    show.title = None;
    show.sha256 = String::new();
    renamed.show = show.into();
    assert_eq!(table_id(&renamed), id, "titles and files do not enter");
    let mut brighter = plan.clone();
    brighter.legs[3].beam += 1;
    assert_ne!(table_id(&brighter), id);
    let mut elsewhere = plan.clone();
    elsewhere.legs[2].landing.b.0 += 1;
    assert_ne!(table_id(&elsewhere), id);
    assert_ne!(table_id(&evening([Quintic, Septic, Cubic, Quintic])), id);
}

#[test]
fn python_reads_the_csv_as_rfc_4180() {
    let plan = there_and_back(Quintic, Septic);
    let script = "
import csv, sys
rows = list(csv.reader(sys.stdin, strict=True))
assert all(len(row) == 12 for row in rows)
sys.stdout.write('|'.join(rows[0]) + '\\n')
for row in rows[1:]:
    assert '%.12f' % float(row[3]) == row[3]
    sys.stdout.write(' '.join([row[0], row[2], row[7], row[8], row[9], row[10], row[11]]) + '\\n')
";
    let child = Command::new("python3")
        .args(["-c", script])
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn();
    let mut child = match child {
        Ok(child) => child,
        Err(error) => {
            assert!(
                std::env::var_os("CI").is_none(),
                "python3 is needed here: {error}"
            );
            eprintln!(
                "skipped: python3 is missing, so its csv module did not read the table ({error})"
            );
            return;
        }
    };
    let table = bytes(&plan, Form::Csv);
    let mut input = child.stdin.take().unwrap();
    let writer = std::thread::spawn(move || input.write_all(&table).unwrap());
    let output = child.wait_with_output().unwrap();
    writer.join().unwrap();
    assert!(output.status.success());
    let text = String::from_utf8(output.stdout).unwrap();
    let mut lines = text.lines();
    assert_eq!(lines.next(), Some(COLUMNS.join("|").as_str()));
    for row in Rows::new(&plan).collect(0..plan.rows()) {
        let (a, b) = (row.rotors.a, row.rotors.b);
        let wanted = format!(
            "{} {} {} {} {} {} {}",
            row.tick, row.cue, a.counts, b.counts, a.step, b.step, row.beam
        );
        assert_eq!(lines.next(), Some(wanted.as_str()));
    }
    assert_eq!(lines.next(), None);
}
