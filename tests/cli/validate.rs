use crate::builder::{RIG, Run, SHOW};
use insta::assert_snapshot;
use serde_json::Value;

/// A show with an error, a warning and a note.
const MIXED: &str = "\
show \"Harbour Hall\"
rig \"north-wall.rig\"

cue deltoid hold 20 s land free
cue 7:-5 morph 6 s hold 20 s
cue trifolium morph 500 ms hold 20 s
loop morph fastest
";

/// A show whose worst finding is a warning.
const WARNED: &str = "\
show \"Harbour Hall\"
rig \"north-wall.rig\"
cue 7:-5 hold 20 s
loop morph 4 s
";

#[test]
fn a_clean_show_exits_with_0_and_one_line() {
    let ran = Run::new(&["validate", "harbour.show"]).with_harbour().run();
    ran.is(0, "1 show checked: no findings\n", "");
}

#[test]
fn several_shows_are_counted_together() {
    let ran = Run::new(&["validate", "harbour.show", "warned.show"])
        .with_harbour()
        .with("warned.show", WARNED)
        .run();
    ran.says(0, &["warned.show:3:", "2 shows checked: 1 warning\n"], &[]);
}

#[test]
fn findings_are_the_result_and_go_to_standard_output() {
    let ran = Run::new(&["validate", "mixed.show"])
        .with("mixed.show", MIXED)
        .with("north-wall.rig", RIG)
        .run();
    ran.says(1, &["error", "warning", "note"], &[]);
    assert_snapshot!(ran.stdout);
}

#[test]
fn strict_makes_warnings_count() {
    let run = |arguments: &[&str]| {
        let run = Run::new(arguments).with("warned.show", WARNED);
        run.with("north-wall.rig", RIG).run()
    };
    run(&["validate", "warned.show"]).says(
        0,
        &["flicker/repeat", "1 show checked: 1 warning"],
        &[],
    );
    run(&["validate", "--strict", "warned.show"]).says(1, &["flicker/repeat"], &[]);
}

#[test]
fn quiet_leaves_out_notes_and_summary() {
    let ran = Run::new(&["validate", "-q", "mixed.show"])
        .with("mixed.show", MIXED)
        .with("north-wall.rig", RIG)
        .run();
    assert_eq!(ran.code, 1);
    assert!(!ran.stdout.contains(": note "), "{}", ran.stdout);
    assert!(!ran.stdout.contains("checked"), "{}", ran.stdout);
    Run::new(&["validate", "--quiet", "harbour.show"])
        .with_harbour()
        .run()
        .is(0, "", "");
}

#[test]
fn json_and_sarif_are_one_document_each() {
    for form in ["json", "sarif"] {
        let ran = Run::new(&["validate", "--findings", form, "mixed.show"])
            .with("mixed.show", MIXED)
            .with("north-wall.rig", RIG)
            .run();
        assert_eq!((ran.code, ran.stderr.as_str()), (1, ""));
        let document: Value = serde_json::from_str(&ran.stdout).unwrap();
        assert!(document.is_object());
    }
}

#[test]
fn all_findings_of_a_file_come_in_one_run() {
    let show = "show \"x\"\nrig \"north-wall.rig\"\ncue deltiod hold 5 s\ncue deltoid hold 5\nfigure a = ring 3 wheel 8\ncue 5:-4 hold 5 s morf 3 s\n";
    let ran = Run::new(&["validate", "--findings", "json", "wrong.show"])
        .with("wrong.show", show)
        .with("north-wall.rig", RIG)
        .run();
    let document: Value = serde_json::from_str(&ran.stdout).unwrap();
    let findings = document["findings"].as_array().unwrap();
    let found: Vec<(&str, u64)> = findings
        .iter()
        .map(|finding| {
            (
                finding["code"].as_str().unwrap(),
                finding["place"]["line"].as_u64().unwrap(),
            )
        })
        .collect();
    for wanted in [
        ("text/unknown-figure", 3),
        ("text/unit", 4),
        ("text/number", 5),
        ("text/syntax", 6),
    ] {
        assert!(found.contains(&wanted), "no {wanted:?} in {found:?}");
    }
    assert!(
        found.iter().any(|(code, _)| *code == "text/missing"),
        "{found:?}"
    );
}

#[test]
fn a_carriage_return_at_each_line_end_changes_nothing() {
    let ran = Run::new(&["validate", "harbour.show"])
        .with("harbour.show", SHOW.replace('\n', "\r\n"))
        .with("north-wall.rig", RIG.replace('\n', "\r\n"))
        .run();
    ran.is(0, "1 show checked: no findings\n", "");
}
