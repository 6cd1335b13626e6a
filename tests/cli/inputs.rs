//! Files that cannot be read, and how their errors name them.

use crate::builder::{RIG, Run, SHOW};

#[test]
fn a_show_that_is_not_there_is_named() {
    let ran = Run::new(&["validate", "none.show"]).run();
    ran.says(
        1,
        &[
            "none.show:1:1: error text/file",
            "the show `none.show` does not exist",
        ],
        &[],
    );
}

#[test]
fn a_show_that_is_a_folder_is_named() {
    let ran = Run::new(&["validate", "shows"]).with_folder("shows").run();
    ran.says(
        1,
        &[
            "shows:1:1: error text/file",
            "the show `shows` is a folder, not a file",
        ],
        &[],
    );
}

#[test]
fn a_show_that_is_not_utf8_is_named_with_the_byte() {
    let ran = Run::new(&["validate", "old.show"])
        .with("old.show", b"show \"H\xfcgel\"\n")
        .run();
    ran.says(
        1,
        &["old.show:1:8: error text/file", "byte 7, counted from 0"],
        &[],
    );
}

#[test]
fn a_rig_that_is_not_there_is_shown_where_it_is_named() {
    let ran = Run::new(&["validate", "shows/harbour.show"])
        .with("shows/harbour.show", SHOW)
        .run();
    let named = "the rig `shows/north-wall.rig` does not exist";
    ran.says(1, &["shows/harbour.show:2:", "error text/file", named], &[]);
}

#[test]
fn a_rig_that_is_a_folder_is_named() {
    let ran = Run::new(&["validate", "harbour.show"])
        .with("harbour.show", SHOW)
        .with_folder("north-wall.rig")
        .run();
    ran.says(
        1,
        &[
            "harbour.show:2:",
            "the rig `north-wall.rig` is a folder, not a file",
        ],
        &[],
    );
}

#[test]
fn a_rig_that_is_not_utf8_is_shown_at_both_places() {
    let ran = Run::new(&["validate", "harbour.show"])
        .with("harbour.show", SHOW)
        .with("north-wall.rig", b"rig \"North\xff\"\n")
        .run();
    ran.says(
        1,
        &[
            "harbour.show:2:",
            "north-wall.rig:1:11",
            "byte 10, counted from 0",
        ],
        &[],
    );
}

#[test]
fn a_file_past_eight_mebibytes_is_refused() {
    let large = vec![b'\n'; 8 * 1024 * 1024 + 1];
    let ran = Run::new(&["validate", "large.show"])
        .with("large.show", &large)
        .run();
    ran.says(1, &["error text/too-much", "is larger than 8 MiB"], &[]);
    let ran = Run::new(&["validate", "-"]).stdin(&large).run();
    ran.says(
        1,
        &["-:1:1: error text/too-much", "is larger than 8 MiB"],
        &[],
    );
}

#[cfg(unix)]
#[test]
fn an_endless_device_is_refused_in_bounded_memory() {
    let ran = Run::new(&["validate", "/dev/zero"]).run();
    ran.says(1, &["/dev/zero:1:1: error text/too-much"], &[]);
}

#[test]
fn a_rig_lies_beside_the_show_that_names_it() {
    let ran = Run::new(&["validate", "shows/harbour.show", "-q"])
        .with("shows/harbour.show", SHOW)
        .with("shows/north-wall.rig", RIG)
        .run();
    ran.is(0, "", "");
}

#[test]
fn for_a_show_on_standard_input_the_rig_lies_in_the_current_folder() {
    let ran = Run::new(&["validate", "-", "-q"])
        .with("north-wall.rig", RIG)
        .stdin(SHOW)
        .run();
    ran.is(0, "", "");
}

#[test]
fn the_command_line_s_rig_goes_before_the_show_s() {
    let ran = Run::new(&["validate", "harbour.show", "--rig", "other.rig", "-q"])
        .with("harbour.show", SHOW)
        .with("other.rig", RIG)
        .run();
    ran.is(0, "", "");
    let ran = Run::new(&["validate", "harbour.show", "--rig", "-", "-q"])
        .with("harbour.show", SHOW)
        .stdin(RIG)
        .run();
    ran.is(0, "", "");
}

#[test]
fn a_missing_rig_of_the_command_line_is_reported_once() {
    let ran = Run::new(&[
        "validate",
        "harbour.show",
        "harbour.show",
        "--rig",
        "none.rig",
    ])
    .with_harbour()
    .run();
    ran.says(
        1,
        &["none.rig:1:1: error text/file", "2 shows checked: 1 error"],
        &[],
    );
}

#[test]
fn a_faulty_rig_of_two_shows_is_reported_once() {
    let ran = Run::new(&["validate", "a.show", "b.show"])
        .with("a.show", SHOW)
        .with("b.show", SHOW)
        .with(
            "north-wall.rig",
            RIG.replace("counts        4096", "counts 4096 rpm"),
        )
        .run();
    assert_eq!(
        ran.stdout.matches("north-wall.rig:").count(),
        1,
        "{}",
        ran.stdout
    );
}
