//! Rows as a pack: what is read back is what the row table says, to the last count.

use crate::load;
use phasewright::plan::Plan;
use phasewright::rig::Pair;
use phasewright::setpoint::pack::{Content, PackHead, PackPoint, Reader, pack_size, write_pack};
use phasewright::setpoint::{RotorRow, Row, Rows, table_id};
use std::fs;
use std::path::Path;

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

/// First tick and ticks of each block of a pack, read as the page of the pack form says.
fn blocks_of(bytes: &[u8]) -> Vec<(u64, u64)> {
    let short = |at: usize| usize::from(u16::from_le_bytes([bytes[at], bytes[at + 1]]));
    let (mut at, mut size) = (short(8), short(10));
    let mut blocks = Vec::new();
    while size > 0 {
        let mut next = at + 9;
        let mut number = || {
            let mut value = 0;
            loop {
                let byte = bytes[next];
                next += 1;
                value = value << 7 | u64::from(byte & 0x7F);
                if byte < 0x80 {
                    return value;
                }
            }
        };
        blocks.push((number(), number() + 1));
        (at, size) = (at + size, short(at + 6));
    }
    assert_eq!(at, bytes.len());
    blocks
}

/// Two motors of so many counts a turn.
fn rig(counts: u32) -> String {
    format!(
        "rotor a {{\n  top-speed 9000 rpm\n  acceleration 9000 rpm/s\n  counts {counts}\n  index at 0 deg\n  \
         draws counter-clockwise\n}}\nrotor b like a {{\n  draws clockwise\n  index at 0 deg\n}}\ncontroller {{\n  tick 2 ms\n}}\n"
    )
}

#[test]
fn no_block_is_so_short_that_a_reader_could_not_fetch_the_next_meanwhile() {
    let mut packs = Vec::new();
    for name in [
        "brackhead-opening",
        "karrow-fair",
        "ostrel-regatta",
        "quillmere-evening",
        "velloe-lissajous",
    ] {
        let plan = load::plan_of(&load::examples().join(format!("{name}.show")));
        packs.push((name.to_owned(), pack_of(&plan, Content::Rows)));
    }
    // Run-ups of about as many ticks as a block of rows has, and rows of one byte and of many.
    for counts in [1000, 1 << 20] {
        for run_up in (1900..2100).step_by(10) {
            let show = format!(
                "rig \"x.rig\"\nrun-up {run_up} ms\ncue deltoid hold 300 ms\ncue trifolium morph 900 ms hold 200 ms\n\
                 loop morph 900 ms\n"
            );
            let plan = load::plan_of_texts(&show, &rig(counts));
            let bytes = pack_of(&plan, Content::Rows);
            let points = points_of(&bytes);
            let rows = Rows::new(&plan).collect(0..u64::MAX);
            assert!(points.iter().copied().eq(rows.iter().map(as_point)));
            packs.push((format!("{counts} counts, {run_up} ms"), bytes));
        }
    }
    for (what, bytes) in packs {
        let start = Reader::new(bytes.as_slice()).unwrap().head().loop_start;
        let blocks = blocks_of(&bytes);
        for pair in blocks.windows(2) {
            let [(_, before), (first, ticks)] = [pair[0], pair[1]];
            // What comes after a cut at the loop start has nothing to share with what is before it.
            assert!(
                start == Some(first) || 3 * ticks >= before,
                "{what}: {ticks} ticks after {before}"
            );
        }
    }
}

/// The smallest show that the page of the pack form takes apart.
fn example_of_the_page() -> Vec<u8> {
    let rig = rig(64)
        .replace("9000 rpm\n", "300 rpm\n")
        .replace("9000 rpm/s", "600 rpm/s")
        .replace("2 ms", "100 ms");
    let show =
        "rig \"x.rig\"\nshow \"Try\"\nrun-up 1 s\ncue circle hold 500 ms\nloop morph 500 ms\n";
    pack_of(&load::plan_of_texts(show, &rig), Content::Rows)
}

#[test]
fn the_bytes_that_the_page_takes_apart_are_those_of_a_table() {
    let page = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/pack.md");
    let text = fs::read_to_string(page).unwrap();
    let (_, example) = text.split_once("## A table byte by byte").unwrap();
    let listing = example.split("```").nth(1).unwrap();
    let mut bytes = Vec::new();
    // Each line: the offset, bytes, a bar, what they are.
    for line in listing.lines().filter(|line| line.contains('|')) {
        let (left, _) = line.split_once('|').unwrap();
        let mut words = left.split_whitespace();
        assert_eq!(words.next().unwrap().parse(), Ok(bytes.len()), "{line}");
        bytes.extend(words.map(|word| u8::from_str_radix(word, 16).unwrap()));
    }
    let table = example_of_the_page();
    let hex: Vec<String> = table.iter().map(|byte| format!("{byte:02X}")).collect();
    assert_eq!(bytes, table, "{}", hex.join(" "));
}
