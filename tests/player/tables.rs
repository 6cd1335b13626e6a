//! The tables that are played.

use crate::load;
use phasewright::plan::Plan;
use phasewright::setpoint::c_header::write_header;
use phasewright::setpoint::pack::{Content, PackPoint, Reader, write_pack};
use phasewright::setpoint::{Row, Rows};

const RIG: &str = "\
rotor a {
  top-speed     9000 rpm
  acceleration  9000 rpm/s
  deceleration  7000 rpm/s
  counts        1000
  draws         counter-clockwise
  index         at 0 deg
}
rotor b like a {
  counts        4096
  draws         clockwise
  index         at 90 deg
}
laser { latency 3 ms }
controller {
  tick          2 ms
}
";

const LOOPED: &str = "\
rig \"x.rig\"
run-up 2 s
cue deltoid hold 700 ms
cue 5:-2 morph 1500 ms cycloidal hold 900 ms beam 40 %
cue circle morph 1200 ms hold 500 ms
loop morph 1500 ms septic
";

const ENDING: &str = "\
rig \"x.rig\"
run-up 2 s
cue trifolium hold 700 ms
cue 2:3 morph 3500 ms hold 900 ms beam 40 %
run-down 3 s septic
";

/// A short show that loops.
pub(crate) fn looped() -> Plan {
    load::plan_of_texts(LOOPED, RIG)
}

/// A short show that ends at rest.
pub(crate) fn ending() -> Plan {
    load::plan_of_texts(ENDING, RIG)
}

/// A show so short that as knots it is one block, which loops to itself.
pub(crate) fn short() -> Plan {
    let text = "rig \"x.rig\"\nrun-up 2 s\ncue deltoid hold 700 ms\nloop morph 1500 ms\n";
    load::plan_of_texts(text, RIG)
}

/// An example show.
pub(crate) fn example(name: &str) -> Plan {
    load::plan_of(&load::examples().join(format!("{name}.show")))
}

/// The pack of a plan.
pub(crate) fn pack(plan: &Plan, content: Content) -> Vec<u8> {
    let mut bytes = Vec::new();
    write_pack(plan, content, &mut bytes, &mut |_| {}).unwrap();
    bytes
}

/// The C header of a plan.
pub(crate) fn header(plan: &Plan, content: Content, name: &str) -> Vec<u8> {
    let mut bytes = Vec::new();
    write_header(plan, content, name, &mut bytes, &mut |_| {}).unwrap();
    bytes
}

/// Every row of a plan, and then those of the loop once more, up to `ticks` of them.
pub(crate) fn rows(plan: &Plan, ticks: usize) -> Vec<Row> {
    let table = Rows::new(plan).collect(0..u64::MAX);
    let start = plan
        .loop_start()
        .map_or(table.len(), |tick| tick.0 as usize);
    let again = table[start..].iter().cycle();
    table.iter().chain(again).take(ticks).copied().collect()
}

/// Ticks of a loop and a half, or of a whole table that ends.
pub(crate) fn loop_and_a_half(plan: &Plan) -> usize {
    let all = plan.rows();
    let start = plan.loop_start().map_or(all, |tick| tick.0);
    (all + (all - start) / 2) as usize
}

/// What a pack says by the library's own reader, the loop once more, up to `ticks` of them.
pub(crate) fn points(bytes: &[u8], ticks: usize) -> Vec<PackPoint> {
    let mut reader = Reader::new(bytes).unwrap();
    let mut all = Vec::new();
    while let Some(point) = reader.next_point().unwrap() {
        all.push(point);
    }
    let start = reader
        .head()
        .loop_start
        .map_or(all.len(), |tick| tick as usize);
    let again: Vec<PackPoint> = all[start..].to_vec();
    all.into_iter()
        .chain(std::iter::repeat_n(again, 4).flatten())
        .take(ticks)
        .collect()
}
