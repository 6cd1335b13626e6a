//! Whatever is changed in a table is found and named.

use crate::plans::{evening, evening_of, there_and_back_of};
use crate::{audited, audited_as, table};
use phasewright::audit::Report;
use phasewright::motion::LawKind::{Cubic, Cycloidal, Harmonic, ModifiedSine, Quintic, Septic};
use phasewright::plan::Plan;
use phasewright::setpoint::{COLUMNS, Form, table_id};

fn plan() -> Plan {
    evening([Quintic, ModifiedSine, Cycloidal, Septic])
}

fn names(report: &Report, tick: u64, column: &str) -> bool {
    report
        .problems
        .iter()
        .any(|problem| problem.tick == Some(tick) && problem.column.starts_with(column))
}

/// Rows to spoil: both ends, both sides of every boundary, and some inside.
fn ticks(plan: &Plan) -> Vec<u64> {
    let mut ticks: Vec<u64> = (0..plan.rows()).step_by(11).collect();
    for leg in &plan.legs {
        ticks.extend([leg.start.0, (leg.start.0 + leg.ticks.0) - 1]);
    }
    ticks.push(plan.rows() - 1);
    ticks.sort_unstable();
    ticks.dedup();
    ticks
}

/// The place in `table` of the field of a column in a row.
fn field(table: &[u8], form: Form, tick: u64, column: usize) -> std::ops::Range<usize> {
    let head = match form {
        Form::Csv => COLUMNS.join(",").len() + 1,
        Form::Json => {
            let mark = b"\"rows\":[\n";
            table
                .windows(mark.len())
                .position(|part| part == mark)
                .unwrap()
                + mark.len()
        }
    };
    let start: usize = head
        + table[head..]
            .split_inclusive(|byte| *byte == b'\n')
            .take(tick as usize)
            .map(<[u8]>::len)
            .sum::<usize>();
    let line = table[start..].split(|byte| *byte == b'\n').next().unwrap();
    let (before, line) = match form {
        Form::Csv => (0, line),
        Form::Json => (1, line[1..].split(|byte| *byte == b']').next().unwrap()),
    };
    let fields: Vec<&[u8]> = line.split(|byte| *byte == b',').collect();
    let from = start
        + before
        + fields[..column]
            .iter()
            .map(|field| field.len() + 1)
            .sum::<usize>();
    from..from + fields[column].len()
}

#[test]
fn one_wrong_digit_in_any_column() {
    // Short legs: every row is near a boundary.
    let looped = evening_of(
        [Quintic, ModifiedSine, Cycloidal, Septic],
        [9, 3, 8, 1, 11, 4, 10],
    );
    let ended = there_and_back_of(Harmonic, Cubic, [12, 5, 9]);
    for (plan, form) in [(looped, Form::Csv), (ended, Form::Json)] {
        let (id, good) = (table_id(&plan), table(&plan, form));
        for tick in ticks(&plan) {
            for (column, name) in COLUMNS.iter().enumerate() {
                for place in field(&good, form, tick, column) {
                    let mut bad = good.clone();
                    if !bad[place].is_ascii_digit() {
                        continue;
                    }
                    // One up, nine to eight: the smallest change that keeps the form but for a leading zero.
                    bad[place] = if bad[place] == b'9' {
                        b'8'
                    } else {
                        bad[place] + 1
                    };
                    let report = audited_as(&plan, form, &id, &bad);
                    assert!(
                        names(&report, tick, name),
                        "{name} of tick {tick}, byte {place}: {:#?}",
                        report.problems
                    );
                }
            }
        }
    }
}

#[test]
fn a_wrong_sign_a_missing_digit_or_another_form() {
    let plan = plan();
    let good = table(&plan, Form::Csv);
    let tick = 700;
    for (column, name) in COLUMNS.iter().enumerate() {
        let place = field(&good, Form::Csv, tick, column);
        let text = std::str::from_utf8(&good[place.clone()])
            .unwrap()
            .to_owned();
        let negated = text
            .strip_prefix('-')
            .map_or(format!("-{text}"), str::to_owned);
        let changes = [
            negated,
            text[..text.len() - 1].to_owned(),
            format!("{text}0"),
            format!("0{text}"),
            format!(" {text}"),
            format!("\"{text}\""),
            format!("{text}e0"),
            String::new(),
        ];
        for change in changes {
            let mut bad = good.clone();
            bad.splice(place.clone(), change.bytes());
            let report = audited(&plan, Form::Csv, &bad);
            assert!(
                names(&report, tick, name),
                "{name} {change:?}: {:#?}",
                report.problems
            );
        }
    }
}

#[test]
fn a_line_that_is_missing_doubled_swapped_or_cut() {
    let plan = plan();
    let good = String::from_utf8(table(&plan, Form::Csv)).unwrap();
    let lines: Vec<&str> = good.lines().collect();
    let spoilt = |change: &dyn Fn(&mut Vec<&str>)| {
        let mut lines = lines.clone();
        change(&mut lines);
        audited(
            &plan,
            Form::Csv,
            format!("{}\n", lines.join("\n")).as_bytes(),
        )
    };
    let missing = spoilt(&|lines| {
        lines.remove(301);
    });
    assert!(names(&missing, 300, "tick"), "{:#?}", missing.problems);
    let doubled = spoilt(&|lines| lines.insert(301, lines[301]));
    assert!(names(&doubled, 301, "tick"), "{:#?}", doubled.problems);
    let swapped = spoilt(&|lines| lines.swap(301, 302));
    assert!(names(&swapped, 300, "tick") && names(&swapped, 301, "tick"));
    let short = spoilt(&|lines| lines.truncate(lines.len() - 1));
    assert_eq!(
        (short.count, short.problems[0].column.as_str()),
        (1, "end of the table")
    );
    let long = spoilt(&|lines| lines.push("more"));
    assert_eq!(
        (long.count, long.problems[0].column.as_str()),
        (1, "end of the table")
    );
    let header = spoilt(&|lines| lines[0] = "tick,time_s");
    assert_eq!(
        (header.count, header.problems[0].column.as_str()),
        (1, "header")
    );
    for cut in [good.len() - 1, good.len() - 20, 200, 10, 0] {
        let report = audited(&plan, Form::Csv, &good.as_bytes()[..cut]);
        assert!(!report.is_clean(), "cut to {cut} bytes");
    }
    let carriage = audited(&plan, Form::Csv, good.replace('\n', "\r\n").as_bytes());
    assert!(carriage.count >= plan.rows());
}

#[test]
fn no_table_at_all_is_said_without_keeping_it() {
    let plan = plan();
    for form in [Form::Csv, Form::Json] {
        for bytes in [
            vec![0_u8; 1 << 20],
            vec![b'\n'; 1 << 16],
            b"\xff\xfe,,,\n".repeat(5000),
        ] {
            let report = audited(&plan, form, &bytes);
            assert!(!report.is_clean());
            assert!(
                report
                    .problems
                    .iter()
                    .all(|problem| problem.found.len() < 1000)
            );
        }
    }
    let csv_as_json = audited(&plan, Form::Json, &table(&plan, Form::Csv));
    assert!(!csv_as_json.is_clean());
}

#[test]
fn every_key_of_the_json_head() {
    let plan = evening_of(
        [Quintic, ModifiedSine, Cycloidal, Septic],
        [9, 3, 8, 1, 11, 4, 10],
    );
    let (id, good) = (table_id(&plan), table(&plan, Form::Json));
    let rows = field(&good, Form::Json, 0, 0).start;
    let text = String::from_utf8(good[..rows].to_vec()).unwrap();
    let findings = text.find("\"findings\"").unwrap()..text.find("\"columns\"").unwrap();
    for (place, byte) in text.bytes().enumerate() {
        // What findings say is the program's to write; here only their form is looked at.
        if findings.contains(&place) || !byte.is_ascii_alphanumeric() {
            continue;
        }
        let mut bad = good.clone();
        bad[place] = if byte == b'7' { b'3' } else { b'7' };
        let report = audited_as(&plan, Form::Json, &id, &bad);
        assert!(
            !report.is_clean(),
            "byte {place} of the head: {}",
            &text[place..]
        );
        assert_eq!(
            report.rows,
            plan.rows(),
            "the rows are looked at all the same"
        );
    }
    let unclosed = audited(&plan, Form::Json, &good[..good.len() - 3]);
    assert!(!unclosed.is_clean());
    let more = audited(&plan, Form::Json, &[&good[..], b"\n"].concat());
    assert!(!more.is_clean());
}

#[test]
fn a_table_of_another_plan() {
    // One grid step, 10⁻⁹ degree of one mirror, in one landing: far below a count, but not below the last decimal.
    let plan = plan();
    let mut other = plan.clone();
    other.legs[2].landing.a.0 += 1;
    let report = audited(&plan, Form::Csv, &table(&other, Form::Csv));
    assert!(
        report
            .problems
            .iter()
            .all(|problem| problem.column == "a_turns"),
        "{:#?}",
        report.problems
    );
    assert!(report.count > 50);
    // Faster than the motor can go.
    let mut slow = plan.clone();
    let mut rig = (*slow.rig).clone();
    rig.rotors.a.top_speed = phasewright::rig::Stated::implied(phasewright::exact::Speed::new(
        phasewright::exact::whole(10),
    ));
    slow.rig = rig.into();
    let report = audited(&slow, Form::Csv, &table(&slow, Form::Csv));
    assert!(
        report
            .problems
            .iter()
            .any(|problem| problem.wanted.contains("at most"))
    );
    assert!(
        report
            .problems
            .iter()
            .all(|problem| problem.column.starts_with("a_"))
    );
}

#[test]
fn problems_read_well() {
    let plan = plan();
    let mut bad = table(&plan, Form::Csv);
    let place = field(&bad, Form::Csv, 512, 5);
    bad[place.start] = b'9';
    let report = audited(&plan, Form::Csv, &bad);
    let text = report.problems[0].to_string();
    assert!(text.starts_with("tick 512, a_rpm: wanted "), "{text}");
}
