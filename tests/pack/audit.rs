//! One wrong number in a table for controllers, its checksums made right again, is found and named.

use crate::hostile::repaired;
use crate::load;
use crate::rows::pack_of;
use phasewright::audit::{Report, audit_table};
use phasewright::plan::Plan;
use phasewright::setpoint::c_header::write_header;
use phasewright::setpoint::knots::write_json_knots;
use phasewright::setpoint::pack::Content;
use phasewright::setpoint::{Head, Output, table_id};

pub(crate) const RIG: &str = "\
rotor a {
  top-speed     6000 rpm
  acceleration  60000 rpm/s
  counts        400
  draws         counter-clockwise
  index         at 0 deg
}
rotor b like a {
  draws         clockwise
  index         at 0 deg
}
controller {
  tick          5 ms
}
";

const SHOW: &str = "\
rig \"x.rig\"
run-up 400 ms
cue deltoid hold 300 ms
cue trifolium morph 500 ms hold 200 ms
loop morph 400 ms
";

pub(crate) fn plan() -> Plan {
    load::plan_of_texts(SHOW, RIG)
}

pub(crate) fn audited(plan: &Plan, output: &Output, mut bytes: &[u8]) -> Report {
    audit_table(plan, output, &table_id(plan), &mut bytes, &mut |_| {}).unwrap()
}

/// Flips one bit at a time; the places where the damage was not found out, and the number of all.
fn missed(plan: &Plan, content: Content) -> (Vec<usize>, usize) {
    let bytes = pack_of(plan, content);
    let output = Output::Pack(content);
    assert!(audited(plan, &output, &bytes).is_clean());
    let (mut missed, mut all) = (Vec::new(), 0);
    for at in 0..bytes.len() {
        let mut wrong = bytes.clone();
        wrong[at] ^= 1;
        repaired(&mut wrong);
        if wrong == bytes {
            continue;
        }
        all += 1;
        if audited(plan, &output, &wrong).is_clean() {
            missed.push(at);
        }
    }
    (missed, all)
}

#[test]
fn one_wrong_bit_in_a_pack_of_rows_is_found_anywhere() {
    let plan = plan();
    let (missed, all) = missed(&plan, Content::Rows);
    assert!(missed.is_empty() && all > 300, "{missed:?} of {all}");
}

#[test]
fn a_wrong_row_is_named_by_tick_and_column() {
    let plan = plan();
    let mut bytes = pack_of(&plan, Content::Rows);
    // The last row's own byte: rotor b's step becomes one more than it is, and the loop does not close.
    let last = bytes.len() - 1;
    bytes[last] += 1;
    repaired(&mut bytes);
    let report = audited(&plan, &Output::Pack(Content::Rows), &bytes);
    let first = &report.problems[0];
    assert_eq!(
        (first.tick, first.column.as_str()),
        (Some(plan.rows() - 1), "b_step"),
        "{first}"
    );
    let step: i64 = first.wanted.parse().unwrap();
    assert_eq!(first.found, (step + 1).to_string());
}

#[test]
fn knots_past_their_tolerance_are_found() {
    let plan = plan();
    let (missed, all) = missed(&plan, Content::Knots(1));
    // A last bit of a phase or a speed may leave every count within the tolerance; most bits matter, and all of the head.
    assert!(missed.len() * 10 < all * 3, "{missed:?} of {all}");
    assert!(missed.iter().all(|at| *at >= 106), "{missed:?}");
}

#[test]
fn a_header_is_compared_to_the_letter() {
    let plan = plan();
    let output = Output::Header(Content::Knots(1), "fair".to_owned());
    let mut bytes = Vec::new();
    write_header(&plan, Content::Knots(1), "fair", &mut bytes, &mut |_| {}).unwrap();
    assert!(audited(&plan, &output, &bytes).is_clean());
    for at in (0..bytes.len())
        .step_by(97)
        .chain(bytes.len() - 400..bytes.len())
    {
        let mut wrong = bytes.clone();
        wrong[at] = if wrong[at] == b'7' { b'8' } else { b'7' };
        assert!(!audited(&plan, &output, &wrong).is_clean(), "byte {at}");
    }
    for length in [0, 10, bytes.len() / 2, bytes.len() - 1] {
        assert!(
            !audited(&plan, &output, &bytes[..length]).is_clean(),
            "{length} bytes"
        );
    }
}

#[test]
fn knots_as_json_are_run_through() {
    let plan = plan();
    let id = table_id(&plan);
    let head = Head {
        id: &id,
        findings: &[],
    };
    let mut bytes = Vec::new();
    write_json_knots(&plan, 1, &head, &mut bytes, &mut |_| {}).unwrap();
    let output = Output::JsonKnots(1);
    let clean = audited(&plan, &output, &bytes);
    assert!(clean.is_clean(), "{:?}", clean.problems);
    assert_eq!(clean.rows, plan.rows());
    let text = String::from_utf8(bytes).unwrap();
    let lists = text.find("\n\"a\":[").unwrap();
    let mut missed = Vec::new();
    // Every first digit of every number of the lists, in turn.
    let mut before = b' ';
    for (at, sign) in text.bytes().enumerate().skip(lists) {
        if sign.is_ascii_digit() && !before.is_ascii_digit() {
            let mut wrong = text.clone().into_bytes();
            wrong[at] = if sign == b'9' { b'8' } else { sign + 1 };
            if audited(&plan, &output, &wrong).is_clean() {
                missed.push(text[at..].lines().next().unwrap().to_owned());
            }
        }
        before = sign;
    }
    // Where a small change of a small number stays within the tolerance, the checksum tells.
    assert!(missed.is_empty(), "{missed:?}");
    for length in [0, 10, text.len() / 2, text.len() - 1] {
        assert!(
            !audited(&plan, &output, &text.as_bytes()[..length]).is_clean(),
            "{length} bytes"
        );
    }
}
