//! Players that nobody opened, tables that are not quite tables.

use crate::host::program;
use crate::tables;
use crate::tools::{run, there};
use phasewright::setpoint::pack::Content;
use std::fs;
use tempfile::TempDir;

#[test]
fn a_player_that_was_never_opened_and_one_that_never_moved_can_be_stopped() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let program = program(folder.path(), "edges.c", "gcc", &["-std=c99"]);
    let table = folder.path().join("table.pack");
    for content in [Content::Rows, Content::Knots(1)] {
        fs::write(&table, tables::pack(&tables::looped(), content)).unwrap();
        run(
            folder.path(),
            &[program.to_str().unwrap(), table.to_str().unwrap()],
        );
    }
}
