use crate::builder::{RIG, Run, SHOW};
use crate::steady::steady;
use insta::assert_snapshot;

#[test]
fn the_sheet_goes_to_standard_output() {
    let ran = Run::new(&["runsheet", "harbour.show"]).with_harbour().run();
    ran.says(0, &["Harbour Hall", "deltoid"], &[]);
}

#[test]
fn findings_go_to_standard_error() {
    let ran = Run::new(&["runsheet", "harbour.show"])
        .with("harbour.show", SHOW.replace("5:-4 ", "7:-5 "))
        .with("north-wall.rig", RIG)
        .run();
    ran.says(0, &["Harbour Hall"], &["flicker/repeat"]);
}

#[test]
fn a_show_with_errors_has_no_sheet() {
    let ran = Run::new(&["runsheet", "harbour.show"])
        .with("harbour.show", SHOW.replace("deltoid", "deltiod"))
        .with("north-wall.rig", RIG)
        .run();
    ran.says(1, &[], &["text/unknown-figure"]);
}

#[test]
fn the_sheet_names_the_table_that_compile_makes() {
    let sheet = Run::new(&["runsheet", "harbour.show", "--form", "json"])
        .with_harbour()
        .run();
    let sheet: serde_json::Value = serde_json::from_str(&sheet.stdout).unwrap();
    let table = Run::new(&["compile", "harbour.show"]).with_harbour().run();
    assert!(
        table.stdout.contains(sheet["table_id"].as_str().unwrap()),
        "{}",
        table.stdout
    );
}

/// The run sheet of an example show, as its users get it.
fn example(show: &str, rig: &str, form: &str) -> String {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("shows");
    let read = |name: &str| std::fs::read(folder.join(name)).unwrap();
    let ran = Run::new(&["runsheet", show, "--form", form, "-q"])
        .with(show, read(show))
        .with(rig, read(rig))
        .run();
    assert_eq!(ran.code, 0, "{}", ran.stderr);
    ran.stdout
}

#[test]
fn a_looped_evening_as_text() {
    assert_snapshot!(steady(&example(
        "quillmere-evening.show",
        "mill-tower.rig",
        "text"
    )));
}

#[test]
fn a_crossed_rig_as_text() {
    assert_snapshot!(steady(&example(
        "velloe-lissajous.show",
        "school-hall.rig",
        "text"
    )));
}

#[test]
fn a_geared_pair_as_markdown() {
    assert_snapshot!(steady(&example(
        "ostrel-regatta.show",
        "boathouse.rig",
        "md"
    )));
}

#[test]
fn a_show_with_a_run_down_as_csv() {
    assert_snapshot!(steady(&example(
        "brackhead-opening.show",
        "mill-tower.rig",
        "csv"
    )));
}

#[test]
fn a_rig_without_marks_as_json() {
    let sheet = example("karrow-fair.show", "travelling-case.rig", "json");
    let parsed: serde_json::Value = serde_json::from_str(&sheet).unwrap();
    assert_eq!(parsed["cues"][0]["pose_deg"], serde_json::Value::Null);
    assert_eq!(
        parsed["cues"][0]["peaks"]["a_jerk"],
        serde_json::Value::Null
    );
    assert_snapshot!(steady(&sheet));
}

/// Knots are counted for every show; the forms of text only where that takes no time worth speaking of.
#[test]
fn a_long_show_says_what_it_takes_as_knots() {
    let show = SHOW.replace("hold 20 s", "hold 45 min");
    let rig = RIG.replace("2 ms", "1 ms");
    assert!(show != SHOW && rig != RIG);
    let ran = Run::new(&["runsheet", "harbour.show", "--form", "json", "-q"])
        .with("harbour.show", show)
        .with("north-wall.rig", rig)
        .run();
    let sheet: serde_json::Value = serde_json::from_str(&ran.stdout).unwrap();
    let bytes = &sheet["bytes"];
    assert!(bytes["csv"].is_null() && bytes["json"].is_null(), "{bytes}");
    assert!(bytes["pack_knots"].as_u64().unwrap() < 2_000, "{bytes}");
    assert!(bytes["pack"].as_u64().unwrap() > 2_000_000, "{bytes}");
}

#[test]
fn every_example_fits_on_paper() {
    for (show, rig) in [
        ("quillmere-evening.show", "mill-tower.rig"),
        ("brackhead-opening.show", "mill-tower.rig"),
        ("ostrel-regatta.show", "boathouse.rig"),
        ("karrow-fair.show", "travelling-case.rig"),
        ("velloe-lissajous.show", "school-hall.rig"),
    ] {
        for line in example(show, rig, "text").lines() {
            assert!(line.chars().count() <= 100, "{show}: {line}");
        }
    }
}
