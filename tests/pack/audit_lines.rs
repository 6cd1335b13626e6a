//! Holds as straight lines: exact at every tick, also at those that are not looked at one by one.

use crate::audit::{RIG, audited, plan};
use crate::load;
use crate::rows::pack_of;
use phasewright::plan::{LegKind, Plan};
use phasewright::setpoint::knots::write_json_knots;
use phasewright::setpoint::pack::Content;
use phasewright::setpoint::{Head, Output, table_id};

/// A hold of 1 718 000 ticks: one more thousand of 2⁻³² counts a tick is 400.006 counts at its end, a turn and nearly nothing.
const LONG_SHOW: &str = "\
rig \"x.rig\"
run-up 8 s
cue 1:-2 hold 28 min 38 s
cue 1:-2 hold 10 s morph 2 s
loop morph 2 s
";

const LONG_RIG: &str = "\
rotor a {
  top-speed     12000 rpm
  acceleration  6000 rpm/s
  counts        400
  draws         counter-clockwise
}
rotor b like a {
  draws         clockwise
}
controller {
  tick          1 ms
}
";

fn knots_of(plan: &Plan) -> String {
    let id = table_id(plan);
    let head = Head {
        id: &id,
        findings: &[],
    };
    let mut bytes = Vec::new();
    write_json_knots(plan, 1, &head, &mut bytes, &mut |_| {}).unwrap();
    String::from_utf8(bytes).unwrap()
}

/// The document with the numbers of the first entry of `list` that has so many ticks changed.
fn changed(text: &str, list: &str, ticks: u64, change: impl Fn(&mut Vec<i64>)) -> String {
    let (before, after) = text.split_once(&format!("\n\"{list}\":[\n")).unwrap();
    let mark = format!("[{ticks},");
    let at = after
        .find(&mark)
        .unwrap_or_else(|| panic!("{mark} in {after}"));
    let end = at + after[at..].find(']').unwrap();
    let mut numbers: Vec<i64> = after[at + 1..end]
        .split(',')
        .map(|number| number.parse().unwrap())
        .collect();
    change(&mut numbers);
    let numbers: Vec<String> = numbers.iter().map(i64::to_string).collect();
    let (head, rest) = (&after[..at], &after[end..]);
    format!("{before}\n\"{list}\":[\n{head}[{}{rest}", numbers.join(","))
}

#[test]
fn a_motor_that_gains_a_whole_turn_in_a_long_hold_is_seen() {
    let plan = load::plan_of_texts(LONG_SHOW, LONG_RIG);
    let text = knots_of(&plan);
    let output = Output::JsonKnots(1);
    let clean = audited(&plan, &output, text.as_bytes());
    assert!(clean.is_clean(), "{:?}", clean.problems);
    assert_eq!(clean.rows, plan.rows());
    let hold = plan.legs[1];
    let wrong = changed(&text, "a", hold.ticks.0, |numbers| numbers[2] += 1_000_000);
    let report = audited(&plan, &output, wrong.as_bytes());
    let inside = hold.start.0 + 1..hold.start.0 + hold.ticks.0;
    assert!(
        report.problems.iter().any(|problem| {
            problem.column == "a_counts" && problem.tick.is_some_and(|tick| inside.contains(&tick))
        }),
        "{:?}",
        report.problems
    );
}

#[test]
fn a_pack_whose_hold_gains_a_whole_turn_is_seen() {
    let plan = load::plan_of_texts(LONG_SHOW, LONG_RIG);
    let content = Content::Knots(1);
    assert!(audited(&plan, &Output::Pack(content), &pack_of(&plan, content)).is_clean());
    // The plan whose first cue runs a turn in 1 718 000 ticks faster: near the ends of the hold nothing tells it.
    let mut faster = plan.clone();
    let gain = phasewright::exact::ratio(1, 1718);
    let speed = &faster.speeds[0].as_ref().unwrap().motor.a;
    let speed = phasewright::exact::Speed::new(speed.value() + gain);
    faster.speeds[0].as_mut().unwrap().motor.a = speed;
    // A tolerance that hides the run-up's differences; a hold is exact whatever it is.
    let wide = Output::Pack(Content::Knots(9));
    let report = audited(&plan, &wide, &pack_of(&faster, content));
    // The morph after it differs by the whole turn: what is asked is that the hold itself is told.
    let first = report.problems.iter().find_map(|problem| problem.tick);
    assert!(
        first.is_some_and(|tick| tick < plan.legs[2].start.0),
        "{:?}",
        report.problems
    );
}

#[test]
fn a_beam_that_stays_lit_in_the_midst_of_a_long_hold_is_seen() {
    let show = LONG_SHOW.replace("28 min 38 s", "30 min");
    let show = show.replace("10 s morph 2 s", "40 min morph 2 s dark");
    let rig = format!("{LONG_RIG}laser {{\n  latency 10 s\n}}\n");
    let plan = load::plan_of_texts(&show, &rig);
    let text = knots_of(&plan);
    // The dark morph, sent 10 s early, lies whole within the hold before it; the dip is merged away.
    let dip = "[1790000,1,255],\n[2000,1,0],\n[8000,1,255],\n";
    assert!(text.contains(dip));
    let wrong = text.replace(dip, "[1800000,1,255],\n");
    let report = audited(&plan, &Output::JsonKnots(1), wrong.as_bytes());
    assert_eq!(report.problems[0].column, "beam", "{:?}", report.problems);
    // Each tick of the dip, and the checksum.
    assert_eq!(report.count, 2001);
}

#[test]
fn a_hold_one_count_off_within_is_seen() {
    let plan = plan();
    let hold = plan.legs[1];
    let text = knots_of(&plan);
    for list in ["a", "b"] {
        // Nothing at the first tick, a count at the last.
        let more = (1 << 32) / (hold.ticks.0.cast_signed() - 2);
        let wrong = changed(&text, list, hold.ticks.0, |numbers| numbers[2] += more);
        let report = audited(&plan, &Output::JsonKnots(1), wrong.as_bytes());
        let inside = hold.start.0 + 1..hold.start.0 + hold.ticks.0;
        let seen = report.problems.iter().any(|problem| {
            problem.column == format!("{list}_counts")
                && problem.tick.is_some_and(|tick| inside.contains(&tick))
        });
        assert!(seen, "{list}: {:?}", report.problems);
    }
}

#[test]
fn a_hold_that_no_speed_can_follow_may_be_one_count_off() {
    // 14.2469134 counts a tick: the fractions are multiples of 1/5 000 000, the nearest speed in 2⁻³² counts strays
    // further than that within 40 000 ticks, and less than a count within 2³².
    let show =
        "rig \"x.rig\"\nrun-up 400 ms\ncue 1:-1 rate 7.1234567 Hz hold 200 s\nloop morph 400 ms\n";
    let plan = load::plan_of_texts(show, RIG);
    let hold = plan.legs[1];
    assert_eq!((hold.kind, hold.ticks.0), (LegKind::Hold, 40_000));
    let text = knots_of(&plan);
    let report = audited(&plan, &Output::JsonKnots(1), text.as_bytes());
    assert!(report.is_clean(), "{:?}", report.problems);
    // Two counts at the end are too many all the same.
    let wrong = changed(&text, "a", hold.ticks.0, |numbers| {
        numbers[2] += (2 << 32) / 40_000;
    });
    let report = audited(&plan, &Output::JsonKnots(1), wrong.as_bytes());
    let inside = hold.start.0..hold.start.0 + hold.ticks.0;
    let seen = report
        .problems
        .iter()
        .any(|problem| problem.tick.is_some_and(|tick| inside.contains(&tick)));
    assert!(seen, "{:?}", report.problems);
}
