//! How fast rows are written and audited, as a ratio to writing constant rows in the same run.
//!
//! `cargo bench --bench rows`. Absolute rates differ between machines and from moment to moment; the ratio says how much
//! of the time is the work on the numbers.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::print_stdout,
    missing_docs
)]

#[path = "../tests/setpoint/plans.rs"]
#[allow(dead_code)]
mod plans;

use phasewright::audit::Auditor;
use phasewright::exact::{ratio, whole};
use phasewright::motion::LawKind;
use phasewright::plan::{LegKind, Plan};
use phasewright::setpoint::{COLUMNS, Form, Head, Row, Rows, table_id, write_table};
use plans::{Maker, law, rig, rotor};
use std::io::{self, Write};
use std::time::Instant;

/// Counts bytes and keeps none.
struct Nowhere(u64);

impl Write for Nowhere {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.0 += bytes.len() as u64;
        Ok(bytes.len())
    }
    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}

/// A loop at 1 ms that is nearly all hold, or nearly all morph by `kind`.
fn plan(kind: LawKind, holds: u64, morphs: u64) -> Plan {
    let a = rotor((1, 1), 1, 4096);
    let b = rotor((1, 1), -1, 4096);
    let mut show = Maker::new(rig(ratio(1, 1000), whole(0), a, b), law(kind.clone()));
    let one = show.cue(3, -2, ratio(47, 3), law(kind.clone()));
    let two = show.cue(5, 7, ratio(15, 1), law(kind.clone()));
    show.leg(LegKind::RunUp, 0, one, morphs, 0);
    show.leg(LegKind::Hold, 1, one, holds, 255);
    show.leg(LegKind::Morph, 2, two, morphs, 255);
    show.leg(LegKind::Hold, 2, two, holds, 255);
    show.looped(3, morphs, law(kind))
}

/// Rows a second of `work`.
fn rate(rows: u64, work: impl FnOnce()) -> f64 {
    let start = Instant::now();
    work();
    rows as f64 / start.elapsed().as_secs_f64()
}

/// The same row again and again by the standard formatter's `write!`, on one thread: what nothing at all would cost.
fn constant(row: &Row, rows: u64) -> f64 {
    rate(rows, || {
        let mut out = io::BufWriter::new(Nowhere(0));
        let (a, b) = (row.rotors.a, row.rotors.b);
        writeln!(out, "{}", COLUMNS.join(",")).unwrap();
        for tick in 0..rows {
            writeln!(
                out,
                "{tick},{tick}.000,{},0.{:012},0.{:012},{}.000000,{}.000000,{},{},{},{},{}",
                row.cue,
                a.turns,
                b.turns,
                a.rpm,
                b.rpm,
                a.counts,
                b.counts,
                a.step,
                b.step,
                row.beam
            )
            .unwrap();
        }
        out.flush().unwrap();
    })
}

fn main() {
    let laws = [
        ("holds", LawKind::Quintic, 1_000_000, 2000),
        ("quintic morphs", LawKind::Quintic, 1000, 300_000),
        ("modified-sine morphs", LawKind::ModifiedSine, 1000, 300_000),
    ];
    println!("threads: {}", rayon::current_num_threads());
    for (name, kind, holds, morphs) in laws {
        let plan = plan(kind, holds, morphs);
        let (rows, id) = (plan.rows(), table_id(&plan));
        let head = Head {
            id: &id,
            findings: &[],
        };
        let baseline = constant(&Rows::new(&plan).collect(5..6)[0], rows);
        let written = rate(rows, || {
            write_table(&plan, Form::Csv, &head, &mut Nowhere(0), &mut |_| ()).unwrap();
        });
        let mut table = Vec::new();
        write_table(&plan, Form::Csv, &head, &mut table, &mut |_| ()).unwrap();
        let audited = rate(rows, || {
            let mut auditor = Auditor::new(&plan, Form::Csv, &id);
            for piece in table.chunks(256 * 1024) {
                auditor.push(piece);
            }
            assert!(auditor.finish().is_clean());
        });
        println!(
            "{name}: {rows} rows; constant rows {baseline:.0}/s; written {written:.0}/s = {:.2} of it; audited {audited:.0}/s = {:.2} of it",
            written / baseline,
            audited / baseline
        );
    }
}
