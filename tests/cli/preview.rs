//! `preview`: what it leaves on the disk, and what it leaves alone.

use crate::builder::{Ran, Run, SHOW};
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

/// Every file of a folder with its bytes, hidden ones too.
fn files(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap())
        .map(|entry| {
            let name = entry.file_name().into_string().unwrap();
            (name, fs::read(entry.path()).unwrap_or_default())
        })
        .collect()
}

fn names(ran: &Ran) -> Vec<String> {
    files(&ran.folder().join("out")).into_keys().collect()
}

fn preview(more: &[&str]) -> Run {
    let mut arguments = vec!["preview", "harbour.show", "-o", "out"];
    arguments.extend(more);
    Run::new(&arguments).with_harbour()
}

const ALL: [&str; 7] = [
    "cue-001.svg",
    "cue-002.svg",
    "index.html",
    "loop.svg",
    "run-up.svg",
    "sheet.png",
    "sheet.svg",
];

#[test]
fn a_show_becomes_a_folder_of_pictures() {
    let ran = preview(&[]).run();
    ran.says(0, &[], &["6 pictures and a page in out"]);
    assert_eq!(names(&ran), ALL);
    let sheet = fs::read_to_string(ran.folder().join("out/sheet.svg")).unwrap();
    assert!(sheet.contains("Harbour Hall") && sheet.contains("deltoid"));
    let again = preview(&[]).env("RAYON_NUM_THREADS", "1").run();
    assert!(
        files(&ran.folder().join("out")) == files(&again.folder().join("out")),
        "the same bytes with one thread"
    );
}

#[test]
fn own_files_of_an_earlier_run_go_and_foreign_ones_stay() {
    let own = "<svg>\n<!-- drawn by phasewright preview -->\n</svg>";
    let ran = preview(&[])
        .with("out/cue-017.svg", own)
        .with("out/run-down.svg", own)
        .with(
            "out/index.html",
            "<!doctype html>\n<!-- drawn by phasewright preview -->\n",
        )
        .with("out/cue-001.svg", own)
        .with("out/cue-018.svg", "<svg>a drawing of somebody else</svg>")
        .with("out/notes.txt", "foreign")
        .run();
    ran.says(0, &[], &["pictures and a page in out"]);
    let mut wanted: Vec<&str> = ALL.to_vec();
    wanted.extend(["cue-018.svg", "notes.txt"]);
    wanted.sort_unstable();
    assert_eq!(names(&ran), wanted);
    assert_ne!(
        fs::read_to_string(ran.folder().join("out/cue-001.svg")).unwrap(),
        own,
        "replaced"
    );
    assert_eq!(
        fs::read_to_string(ran.folder().join("out/notes.txt")).unwrap(),
        "foreign"
    );
}

#[test]
fn a_foreign_file_in_the_way_stops_everything() {
    let ran = preview(&[]).with("out/sheet.png", "foreign").run();
    ran.says(
        1,
        &[],
        &["sheet.png was not made by `preview`", "nothing was written"],
    );
    assert_eq!(names(&ran), ["sheet.png"]);
    assert_eq!(
        fs::read_to_string(ran.folder().join("out/sheet.png")).unwrap(),
        "foreign"
    );
}

#[test]
fn a_folder_that_cannot_be_written_is_a_clear_error() {
    let ran = preview(&[]).with("out", "a file").run();
    ran.says(1, &[], &["cannot write to out: it is not a folder"]);
    let ran = Run::new(&["preview", "harbour.show", "-o", "north-wall.rig/out"])
        .with_harbour()
        .run();
    ran.says(1, &[], &["cannot write to north-wall.rig/out"]);
}

#[test]
fn a_show_that_breaks_limits_is_drawn_and_one_with_text_errors_is_not() {
    let quick = SHOW.replace("cue 5:-4 morph 4 s", "cue 5:-4 morph 100 ms");
    let ran = preview(&[]).with("harbour.show", quick).run();
    ran.says(
        1,
        &[],
        &["limit/acceleration", "6 pictures and a page in out"],
    );
    assert_eq!(names(&ran), ALL);
    let ran = preview(&[])
        .with("harbour.show", SHOW.replace("deltoid", "deltiod"))
        .run();
    ran.says(1, &[], &["text/unknown-figure", "nothing was drawn"]);
    assert!(!ran.folder().join("out").exists());
}

#[test]
fn only_some_cues_leave_the_rest_as_it_is() {
    let own = "<svg>\n<!-- drawn by phasewright preview -->\n</svg>";
    let ran = preview(&["--only", "2,0", "--size", "640"])
        .with("out/cue-017.svg", own)
        .run();
    ran.says(0, &[], &["2 pictures in out"]);
    assert_eq!(names(&ran), ["cue-002.svg", "cue-017.svg", "run-up.svg"]);
    let text = fs::read_to_string(ran.folder().join("out/cue-002.svg")).unwrap();
    assert!(text.contains("width=\"640\""));
    preview(&["--only", "9"]).run().says(2, &[], &["--only 9"]);
}

#[test]
fn the_terminal_shows_braille() {
    let ran = Run::new(&["preview", "harbour.show", "--terminal"])
        .with_harbour()
        .run();
    ran.says(0, &["deltoid", "1:-2, 3 lobes", "\u{28c0}"], &[]);
    assert!(!ran.stdout.contains('\u{1b}'), "no colour in a pipe");
    let ran = Run::new(&["preview", "harbour.show", "--terminal", "--color", "always"])
        .with_harbour()
        .run();
    assert!(ran.stdout.contains("\u{1b}[38;2;"));
    Run::new(&["preview", "harbour.show"])
        .with_harbour()
        .run()
        .says(2, &[], &["--output"]);
}

#[test]
fn an_atlas_is_a_picture_of_a_rig() {
    let atlas = |file: &str| {
        Run::new(&["atlas", "north-wall.rig", "-o", file, "--up-to", "3"])
            .with_harbour()
            .run()
    };
    let ran = atlas("atlas.svg");
    ran.says(0, &[], &[]);
    let text = fs::read_to_string(ran.folder().join("atlas.svg")).unwrap();
    assert!(text.contains("North wall") && text.contains("3:-2") && !text.contains("4:-1"));
    let ran = atlas("atlas.png");
    assert!(
        fs::read(ran.folder().join("atlas.png"))
            .unwrap()
            .starts_with(b"\x89PNG")
    );
    atlas("-").says(0, &["<svg", "North wall"], &[]);
    atlas("atlas.jpg").says(2, &[], &["does not end in .svg or .png"]);
    Run::new(&["atlas", "nowhere.rig", "-o", "a.svg"])
        .run()
        .says(1, &[], &["nowhere.rig"]);
}
