//! Samples in the README and the reference. A block marked `show` or `rig` is complete and compiles; `show fragment` and
//! `rig fragment` are statements that read as they stand, in a file with all the rest.

use crate::{Block, blocks, root, run, said};
use std::path::Path;

const PAGES: [&str; 2] = ["README.md", "docs/language.md"];

fn samples(info: &str) -> Vec<Block> {
    PAGES
        .iter()
        .flat_map(|page| blocks(page))
        .filter(|block| block.info == info)
        .collect()
}

/// A folder with the sample in it beside all the example rigs.
fn folder_with(name: &str, text: &str) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    for rig in crate::examples("rig") {
        let from = root().join(&rig);
        std::fs::copy(&from, folder.path().join(from.file_name().unwrap())).unwrap();
    }
    std::fs::write(folder.path().join(name), text).unwrap();
    folder
}

fn assert_valid(folder: &Path, show: &str, sample: &Block) {
    let show = folder.join(show);
    let output = run(&["validate", show.to_str().unwrap()]);
    assert!(
        output.status.success(),
        "{}\n{}",
        sample.place,
        said(&output)
    );
}

#[test]
fn no_block_is_marked_in_a_way_that_no_test_knows() {
    let known = [
        "show",
        "show fragment",
        "rig",
        "rig fragment",
        "sh",
        "text",
        "csv",
        "json",
    ];
    for block in PAGES.iter().flat_map(|page| blocks(page)) {
        assert!(
            known.contains(&block.info.as_str()),
            "{}: {:?}",
            block.place,
            block.info
        );
    }
}

#[test]
fn complete_shows_compile() {
    let found = samples("show");
    assert!(!found.is_empty());
    for sample in found {
        let folder = folder_with("sample.show", &sample.text);
        assert_valid(folder.path(), "sample.show", &sample);
    }
}

#[test]
fn statements_of_shows_read_in_a_show_with_all_the_rest() {
    let found = samples("show fragment");
    assert!(!found.is_empty());
    for sample in found {
        let has = |word: &str| {
            sample
                .text
                .lines()
                .any(|line| line.trim_start().starts_with(word))
        };
        let mut text = String::from("rig \"mill-tower.rig\"\n");
        if !has("usual") {
            text.push_str("usual hold 10 s\n");
        }
        text.push_str(&sample.text);
        if !has("loop") && !has("run-down") {
            text.push_str("loop morph 10 s\n");
        }
        let folder = folder_with("sample.show", &text);
        assert_valid(folder.path(), "sample.show", &sample);
    }
}

#[test]
fn complete_rigs_play_a_show() {
    let found = samples("rig");
    assert!(!found.is_empty());
    for sample in found {
        let folder = folder_with("sample.rig", &sample.text);
        let show = "rig \"sample.rig\"\ncue deltoid hold 10 s\nloop morph 10 s septic\n";
        std::fs::write(folder.path().join("sample.show"), show).unwrap();
        assert_valid(folder.path(), "sample.show", &sample);
    }
}

/// A show that slows a motor down too hastily.
const HASTY: &str = "rig  \"mill-tower.rig\"
usual hold 10 s
cue deltoid
cue trifolium  morph 1500 ms
loop morph 6 s
";

#[test]
fn the_readmes_finding_is_what_the_program_says() {
    let folder = folder_with("hasty.show", HASTY);
    let output = std::process::Command::new(env!("CARGO_BIN_EXE_phasewright"))
        .current_dir(folder.path())
        .args(["validate", "--quiet", "--color", "never", "hasty.show"])
        .output()
        .unwrap();
    let printed = String::from_utf8_lossy(&output.stdout).into_owned();
    let shown = samples("text");
    assert_eq!(shown.len(), 1, "the README shows one finding");
    assert_eq!(shown[0].text.trim(), printed.trim());
}

#[test]
fn the_readmes_rows_are_those_of_the_table() {
    let folder = tempfile::tempdir().unwrap();
    let table = folder.path().join("evening.csv");
    let show = "shows/quillmere-evening.show";
    let output = run(&["compile", show, "-o", table.to_str().unwrap()]);
    assert!(output.status.success(), "{}", said(&output));
    let table = std::fs::read_to_string(&table).unwrap();
    let rows: std::collections::BTreeSet<&str> = table.lines().collect();
    let shown = samples("csv");
    assert!(!shown.is_empty());
    for line in shown.iter().flat_map(|block| block.text.lines()) {
        assert!(rows.contains(line), "not a row of the table: {line}");
    }
}
