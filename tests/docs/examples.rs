//! Every example show compiles; the README's first gives nobody anything to worry about.

use crate::{blocks, examples, run, said};

/// The show that the README compiles.
fn first() -> String {
    blocks("README.md")
        .iter()
        .flat_map(|block| block.text.lines())
        .find_map(|line| line.split_whitespace().find(|word| word.ends_with(".show")))
        .expect("the README compiles a show")
        .to_owned()
}

#[test]
fn there_are_at_least_three_rigs_and_five_shows() {
    assert!(examples("rig").len() >= 3, "{:?}", examples("rig"));
    assert!(examples("show").len() >= 5, "{:?}", examples("show"));
}

#[test]
fn every_example_show_validates_without_errors() {
    for show in examples("show") {
        let output = run(&["validate", &show]);
        assert!(output.status.success(), "{show}\n{}", said(&output));
    }
}

#[test]
fn every_example_show_compiles() {
    let folder = tempfile::tempdir().unwrap();
    for show in examples("show") {
        let table = folder.path().join("table.csv");
        let output = run(&["compile", &show, "-o", table.to_str().unwrap()]);
        assert!(output.status.success(), "{show}\n{}", said(&output));
        let size = table.metadata().unwrap().len();
        assert!(size > 1000, "{show} gives a table");
    }
}

#[test]
fn the_readmes_first_show_is_free_of_warnings() {
    let output = run(&["validate", "--strict", &first()]);
    assert!(output.status.success(), "{}", said(&output));
}

#[test]
fn every_example_show_has_a_run_sheet() {
    for show in examples("show") {
        let output = run(&["runsheet", &show]);
        assert!(output.status.success(), "{show}\n{}", said(&output));
    }
}
