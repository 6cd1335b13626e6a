//! Knots as JSON: one document and no other stands for a table.

use crate::audit::{audited, plan};
use phasewright::plan::Plan;
use phasewright::setpoint::knots::write_json_knots;
use phasewright::setpoint::{Head, Output, table_id};

fn text_of(plan: &Plan) -> String {
    let id = table_id(plan);
    let found = |code: &str| {
        serde_json::json!({"code": code, "severity": "note", "message": "moved", "count": 1,
            "place": {"file": "x.show", "line": 1}, "also": null, "help": null})
    };
    let findings = [found("time/rounded"), found("time/rounded")];
    let head = Head {
        id: &id,
        findings: &findings,
    };
    let mut bytes = Vec::new();
    write_json_knots(plan, 1, &head, &mut bytes, &mut |_| {}).unwrap();
    String::from_utf8(bytes).unwrap()
}

/// The document with the `index`-th line after `list` opens replaced.
fn with_line(text: &str, list: &str, index: usize, change: impl Fn(&str) -> String) -> String {
    let mark = format!("\"{list}\":[");
    let mut lines: Vec<String> = text.lines().map(str::to_owned).collect();
    let at = lines.iter().position(|line| *line == mark).unwrap() + 1 + index;
    lines[at] = change(&lines[at]);
    lines.join("\n") + "\n"
}

fn refused(plan: &Plan, text: &str, column: &str, why: &str) {
    let report = audited(plan, &Output::JsonKnots(1), text.as_bytes());
    // Not by the checksum alone, which anyone can make right.
    let first = report.problems.first();
    assert!(
        first.is_some_and(
            |problem| problem.column.starts_with(column) && !problem.wanted.contains("crc32")
        ),
        "{why}: {:?}",
        report.problems
    );
}

#[test]
fn commas_stand_where_another_entry_follows_and_nowhere_else() {
    let plan = plan();
    let good = text_of(&plan);
    assert!(audited(&plan, &Output::JsonKnots(1), good.as_bytes()).is_clean());
    for list in ["a", "b", "events"] {
        let missing = with_line(&good, list, 0, |line| line.replace("],", "]"));
        refused(&plan, &missing, "knots", "a missing comma");
        let end = good.split(&format!("\n\"{list}\":[\n")).nth(1).unwrap();
        let last = end.lines().position(|line| line.starts_with(']')).unwrap() - 1;
        let trailing = with_line(&good, list, last, |line| format!("{line},"));
        refused(&plan, &trailing, "knots", "a trailing comma");
        let blank = with_line(&good, list, 0, |line| line.replace(',', ", "));
        refused(&plan, &blank, "knots", "a blank");
        for zero in ["[0", "[+", "[-"] {
            let wrong = with_line(&good, list, 1, |line| line.replacen('[', zero, 1));
            refused(&plan, &wrong, "knots", zero);
        }
    }
}

#[test]
fn a_phase_lies_within_its_turn() {
    let plan = plan();
    let turn = 400_i64 << 32;
    let text = text_of(&plan);
    let (before, after) = text.split_once("\n\"a\":[\n").unwrap();
    let line = after
        .lines()
        .find(|line| line.split(',').count() > 3)
        .unwrap();
    let numbers: Vec<&str> = line.split(',').collect();
    let phase: i64 = numbers[1].parse().unwrap();
    let more = line.replacen(numbers[1], &(phase + turn).to_string(), 1);
    let wrong = format!("{before}\n\"a\":[\n{}", after.replacen(line, &more, 1));
    refused(&plan, &wrong, "knots", "a phase past its turn");
}

#[test]
fn findings_are_objects_of_the_known_keys() {
    let plan = plan();
    let good = text_of(&plan);
    let other = |_: &str| "{\"code\":\"bogus\"},".to_owned();
    for (line, change) in [
        (
            0,
            &(|line: &str| line.trim_end_matches(',').to_owned()) as &dyn Fn(&str) -> String,
        ),
        (1, &|line: &str| format!("{line},")),
        (0, &|_: &str| "[1,2,3],".to_owned()),
        (0, &other),
        (0, &|line: &str| {
            line.replace("\"code\"", "\"beam\":1,\"code\"")
        }),
        (0, &|line: &str| {
            line.replace("\"code\"", "\"message\":\"x\",\"code\"")
        }),
        (0, &|line: &str| line.replace(":", ": ")),
    ] {
        let wrong = with_line(&good, "findings", line, change);
        assert_ne!(wrong, good);
        refused(&plan, &wrong, "head, findings", &wrong);
    }
}

#[test]
fn a_list_of_more_ticks_than_the_table_has_is_not_kept() {
    let plan = plan();
    let text = text_of(&plan);
    let (before, _) = text.split_once("\n\"a\":[\n").unwrap();
    let mut endless = format!("{before}\n\"a\":[\n");
    endless.push_str(&"[1,0],\n".repeat(1 << 20));
    let output = Output::JsonKnots(1);
    let report = audited(&plan, &output, endless.as_bytes());
    let problem = &report.problems[0];
    assert!(
        problem.wanted.contains(&plan.rows().to_string()),
        "{problem}"
    );
    assert!(problem.found.contains("more"), "{problem}");
    assert_eq!(report.count, 1);
}

#[test]
fn a_document_that_is_cut_short_says_so() {
    let plan = plan();
    let text = text_of(&plan);
    let report = audited(
        &plan,
        &Output::JsonKnots(1),
        &text.as_bytes()[..text.len() - 40],
    );
    let last = report.problems.last().unwrap();
    assert_eq!(last.found, "the end of the file", "{last}");
}
