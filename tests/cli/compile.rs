use crate::builder::{RIG, Run, SHOW};
use serde_json::Value;

#[test]
fn the_table_is_written_and_named() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "tables/evening.csv"])
        .with_harbour()
        .with_folder("tables")
        .run();
    ran.says(0, &["tables/evening.csv", "table ", " rows"], &[]);
    let table = ran.file("tables/evening.csv").unwrap();
    assert!(table.starts_with("tick,time_s,cue,a_turns,b_turns,"));
}

#[test]
fn without_a_name_the_table_is_called_like_the_show() {
    let ran = Run::new(&["compile", "shows/harbour.show", "-q"])
        .with("shows/harbour.show", SHOW)
        .with("shows/north-wall.rig", RIG)
        .run();
    ran.is(0, "", "");
    assert_eq!(ran.files(), ["harbour.csv", "shows"]);
    let ran = Run::new(&["compile", "harbour.show", "--form", "json", "-q"])
        .with_harbour()
        .run();
    assert_eq!(
        ran.files(),
        ["harbour.json", "harbour.show", "north-wall.rig"]
    );
}

#[test]
fn a_dash_means_standard_output_and_the_words_move_over() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "-"])
        .with_harbour()
        .run();
    ran.says(0, &["tick,time_s,cue,"], &["table "]);
    let file = Run::new(&["compile", "harbour.show", "-o", "a.csv"])
        .with_harbour()
        .run();
    assert!(ran.stdout == file.file("a.csv").unwrap());
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
}

#[test]
fn a_show_from_standard_input_goes_to_standard_output() {
    let ran = Run::new(&["compile", "-", "-q"])
        .with("north-wall.rig", RIG)
        .stdin(SHOW)
        .run();
    ran.says(0, &["tick,time_s,cue,"], &[]);
    assert_eq!(ran.files(), ["north-wall.rig"]);
}

#[test]
fn every_form_has_the_same_id() {
    let id = |form: &str| {
        let ran = Run::new(&["compile", "harbour.show", "--form", form])
            .with_harbour()
            .run();
        let (_, rest) = ran.stdout.split_once("table ").unwrap();
        rest.chars().take(8).collect::<String>()
    };
    let csv = id("csv");
    assert!(csv.chars().all(|sign| sign.is_ascii_hexdigit()), "{csv}");
    assert_eq!(csv, id("json"));
}

#[test]
fn nothing_is_written_when_there_is_an_error() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "table.csv"])
        .with(
            "harbour.show",
            SHOW.replace("5:-4 morph 4 s", "trifolium morph 1 s"),
        )
        .with("north-wall.rig", RIG)
        .with("table.csv", "the old table\n")
        .run();
    ran.says(1, &[], &["limit/acceleration", "no table was written"]);
    assert_eq!(ran.file("table.csv").unwrap(), "the old table\n");
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig", "table.csv"]);
}

#[test]
fn strict_writes_nothing_when_there_is_a_warning() {
    let run = |arguments: &[&str]| {
        Run::new(arguments)
            .with("harbour.show", SHOW.replace("5:-4 ", "7:-5 "))
            .with("north-wall.rig", RIG)
            .run()
    };
    let ran = run(&["compile", "harbour.show", "--strict"]);
    ran.says(
        1,
        &[],
        &[
            "flicker/repeat",
            "1 warning: no table was written (--strict)",
        ],
    );
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
    let ran = run(&["compile", "harbour.show"]);
    ran.says(0, &["harbour.csv"], &["flicker/repeat"]);
}

#[test]
fn a_table_never_replaces_what_it_is_made_from() {
    for target in ["harbour.show", "north-wall.rig", "./harbour.show"] {
        let arguments = ["compile", "harbour.show", "--form", "csv", "-o", target];
        let ran = Run::new(&arguments).with_harbour().run();
        ran.says(2, &[], &["would overwrite"]);
        assert_eq!(ran.file("harbour.show").unwrap(), SHOW);
        assert_eq!(ran.file("north-wall.rig").unwrap(), RIG);
    }
}

#[test]
fn a_folder_as_target_is_an_error() {
    let ran = Run::new(&["compile", "harbour.show", "--form", "csv", "-o", "tables"])
        .with_harbour()
        .with_folder("tables")
        .run();
    ran.says(1, &[], &["tables"]);
}

#[test]
fn a_target_folder_that_is_not_there_is_an_error() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "none/table.csv"])
        .with_harbour()
        .run();
    ran.says(1, &[], &["none"]);
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
}

#[test]
fn a_table_of_too_many_rows_is_an_error_at_the_cue() {
    let ran = Run::new(&["compile", "harbour.show"])
        .with(
            "harbour.show",
            SHOW.replace("4 s hold 20 s\nloop", "4 s hold 60 h\nloop"),
        )
        .with("north-wall.rig", RIG)
        .run();
    let limit = "the limit is 100000000";
    ran.says(1, &[], &["harbour.show:5:1: error text/too-much", limit]);
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
}

#[test]
fn the_json_form_carries_the_findings() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "table.json", "-q"])
        .with("harbour.show", SHOW.replace("5:-4 ", "7:-5 "))
        .with("north-wall.rig", RIG)
        .run();
    assert_eq!(ran.code, 0);
    let table: Value = serde_json::from_str(&ran.file("table.json").unwrap()).unwrap();
    assert_eq!(table["findings"][0]["code"], "flicker/repeat");
}

#[test]
fn a_later_start_keeps_the_numbers_of_the_whole_show() {
    let ran = Run::new(&["compile", "harbour.show", "--from", "2", "-o", "-", "-q"])
        .with_harbour()
        .run();
    assert_eq!(ran.code, 0, "{}", ran.stderr);
    let cues: Vec<&str> = ran
        .stdout
        .lines()
        .skip(1)
        .map(|row| row.split(',').nth(2).unwrap())
        .collect();
    let mut order = cues.clone();
    order.dedup();
    assert_eq!(order[..2], ["0", "2"]);
}

#[cfg(unix)]
#[test]
fn a_device_is_written_straight_through() {
    let ran = Run::new(&[
        "compile",
        "harbour.show",
        "--form",
        "csv",
        "-o",
        "/dev/null",
    ])
    .with_harbour()
    .run();
    ran.says(0, &[], &["/dev/null: table "]);
    let ran = Run::new(&[
        "compile",
        "harbour.show",
        "--form",
        "csv",
        "-o",
        "/dev/stdout",
        "-q",
    ])
    .with_harbour()
    .run();
    ran.says(0, &["tick,time_s,cue,"], &[]);
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_an_error_that_names_the_target() {
    let ran = Run::new(&[
        "compile",
        "harbour.show",
        "--form",
        "csv",
        "-o",
        "/dev/full",
    ])
    .with_harbour()
    .run();
    ran.says(1, &[], &["phasewright: cannot write /dev/full: "]);
}

#[cfg(unix)]
#[test]
fn a_replaced_table_keeps_its_link_and_its_permissions() {
    use std::os::unix::fs::{PermissionsExt, symlink};
    let ran = Run::new(&["compile", "harbour.show", "-o", "link.csv", "-q"])
        .with_harbour()
        .with("real.csv", "the old table\n")
        .prepared(|folder| {
            let real = folder.join("real.csv");
            std::fs::set_permissions(&real, std::fs::Permissions::from_mode(0o640)).unwrap();
            symlink("real.csv", folder.join("link.csv")).unwrap();
        })
        .run();
    ran.is(0, "", "");
    assert!(ran.file("real.csv").unwrap().starts_with("tick,"));
    assert_eq!(
        ran.files(),
        ["harbour.show", "link.csv", "north-wall.rig", "real.csv"]
    );
    let mode = std::fs::metadata(ran.folder().join("real.csv"))
        .unwrap()
        .permissions()
        .mode();
    assert_eq!(mode & 0o777, 0o640);
    assert!(ran.folder().join("link.csv").is_symlink());
}

#[cfg(unix)]
#[test]
fn a_new_table_can_be_read_by_others_as_any_new_file() {
    use std::os::unix::fs::PermissionsExt;
    let ran = Run::new(&["compile", "harbour.show", "-q"])
        .with_harbour()
        .run();
    let mode = |name: &str| {
        std::fs::metadata(ran.folder().join(name))
            .unwrap()
            .permissions()
            .mode()
    };
    assert_eq!(mode("harbour.csv"), mode("harbour.show"));
}

#[test]
fn the_same_show_gives_the_same_bytes_whatever_the_threads() {
    let table = |threads: &str| {
        let run = Run::new(&["compile", "harbour.show", "-o", "-", "-q"]).with_harbour();
        run.env("RAYON_NUM_THREADS", threads).run().stdout
    };
    assert!(table("1") == table("7"));
}
