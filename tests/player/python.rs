//! A second reader, in Python, written from `docs/pack.md` alone.

use crate::tables;
use crate::tools::{run, there};
use phasewright::setpoint::pack::Content;
use std::fs;
use std::path::Path;
use tempfile::TempDir;

#[test]
fn the_reader_in_python_reads_the_same() {
    if !there(&["python3"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let reader = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/player/reader.py");
    for plan in [tables::looped(), tables::ending()] {
        for content in [Content::Rows, Content::Knots(1)] {
            let bytes = tables::pack(&plan, content);
            fs::write(folder.path().join("table.pack"), &bytes).unwrap();
            let said = run(
                folder.path(),
                &["python3", reader.to_str().unwrap(), "table.pack"],
            )
            .stdout;
            let said = String::from_utf8(said).unwrap();
            let points = tables::points(&bytes, plan.rows() as usize);
            assert_eq!(said.lines().count(), points.len());
            for (line, point) in said.lines().zip(&points) {
                let [a, b] = point.counts;
                let [a_step, b_step] = point.steps;
                let wanted = format!(
                    "{},{a},{b},{a_step},{b_step},{},{}",
                    point.tick, point.beam, point.cue
                );
                assert_eq!(line, wanted, "{content:?}");
            }
        }
    }
}
