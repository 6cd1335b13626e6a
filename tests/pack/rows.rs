//! Rows as a pack: what is read back is what the row table says, to the last count.

use crate::load;
use phasewright::plan::Plan;
use phasewright::rig::Pair;
use phasewright::setpoint::pack::{Content, PackHead, PackPoint, Reader, pack_size, write_pack};
use phasewright::setpoint::{RotorRow, Row, Rows, table_id};

/// The pack of a plan.
pub(crate) fn pack_of(plan: &Plan, content: Content) -> Vec<u8> {
    let mut bytes = Vec::new();
    let written = write_pack(plan, content, &mut bytes, &mut |_| {}).unwrap();
    assert_eq!(written, bytes.len() as u64);
    bytes
}

/// Every set-point of a pack.
pub(crate) fn points_of(bytes: &[u8]) -> Vec<PackPoint> {
    let mut reader = Reader::new(bytes).unwrap();
    let mut points = Vec::new();
    while let Some(point) = reader.next_point().unwrap() {
        points.push(point);
    }
    points
}

fn as_point(row: &Row) -> PackPoint {
    let each = |of: fn(&RotorRow) -> i64| [of(&row.rotors.a), of(&row.rotors.b)];
    PackPoint {
        tick: row.tick,
        cue: row.cue,
        counts: [row.rotors.a.counts, row.rotors.b.counts],
        steps: each(|rotor| rotor.step),
        beam: row.beam,
    }
}

#[test]
fn a_pack_of_rows_says_what_the_rows_say() {
    for name in ["karrow-fair", "brackhead-opening", "ostrel-regatta"] {
        let plan = load::plan_of(&load::examples().join(format!("{name}.show")));
        let bytes = pack_of(&plan, Content::Rows);
        let points = points_of(&bytes);
        let rows = Rows::new(&plan).collect(0..u64::MAX);
        assert_eq!(points.len(), rows.len(), "{name}");
        for (point, row) in points.iter().zip(&rows) {
            assert_eq!(*point, as_point(row), "{name}, tick {}", row.tick);
        }
        assert_eq!(pack_size(&plan, Content::Rows), bytes.len() as u64);
        // A byte a row, a head for each thousand, and what a wide change or a new beam adds.
        let most = rows.len() * 104 / 100 + 300;
        assert!(
            bytes.len() < most,
            "{name}: {} bytes for {} rows",
            bytes.len(),
            rows.len()
        );
    }
}

#[test]
fn the_head_tells_what_the_plan_says() {
    let plan = load::plan_of(&load::examples().join("ostrel-regatta.show"));
    let bytes = pack_of(&plan, Content::Rows);
    let reader = Reader::new(bytes.as_slice()).unwrap();
    let head = reader.head();
    assert_eq!(*head, PackHead::of(&plan, Content::Rows));
    assert_eq!(format!("{:08x}", head.id), table_id(&plan));
    assert_eq!(head.ticks, plan.rows());
    assert_eq!(head.loop_start, plan.loop_start().map(|tick| tick.0));
    assert_eq!(head.tick, (1, 1000));
    assert_eq!(
        Pair {
            a: head.rotors.a.gear,
            b: head.rotors.b.gear
        },
        Pair {
            a: (2, 1),
            b: (3, 2)
        }
    );
    // 5400 rpm/s is 90 turns/s², 2000 counts a turn, a tick of 1 ms: 0.18 counts a tick².
    assert_eq!(head.rotors.a.deceleration, ((18_u64 << 32) / 100));
    assert_eq!(head.show, "Ostrel, night before the regatta");
}
