//! Tables for controllers: pack, C header, knots, storage.

use crate::builder::{RIG, Run, SHOW};

/// The ID that `audit` prints of a table that was just compiled, and what the audit against its show says.
fn compiled(arguments: &[&str], rig: &str) -> (String, String) {
    let file = arguments
        .iter()
        .position(|word| *word == "-o")
        .map(|at| arguments[at + 1])
        .unwrap();
    let mut words = vec!["compile", "harbour.show", "-q"];
    words.extend(arguments);
    let ran = Run::new(&words)
        .with("harbour.show", SHOW)
        .with("north-wall.rig", rig)
        .run();
    ran.is(0, "", "");
    let table = ran.bytes(file);
    let identified = Run::new(&["audit", file]).with(file, &table).run();
    let audited = Run::new(&["audit", file, "--show", "harbour.show"])
        .with(file, &table)
        .with("harbour.show", SHOW)
        .with("north-wall.rig", rig)
        .run();
    assert_eq!(audited.code, 0, "{}{}", audited.stdout, audited.stderr);
    (identified.stdout, audited.stdout)
}

#[test]
fn every_form_for_controllers_carries_the_id_and_is_as_planned() {
    let (id, _) = compiled(&["-o", "table.json"], RIG);
    assert_eq!(id.trim_end().len(), 8);
    for arguments in [
        ["-o", "table.pack"].as_slice(),
        &["-o", "table.h"],
        &["--knots", "-o", "table.pack"],
        &["-o", "table.h", "--knots", "within", "3", "counts"],
        &["--form", "json", "--knots", "-o", "table"],
    ] {
        let (found, audited) = compiled(arguments, RIG);
        assert_eq!(found, id, "{arguments:?}");
        assert!(audited.contains("as planned"), "{arguments:?}: {audited}");
    }
}

#[test]
fn the_rig_says_knots_and_the_command_line_may_undo_it() {
    let rig = RIG.replace("controller {", "controller {\n  table knots");
    let size = |arguments: &[&str], rig: &str| {
        let mut words = vec!["compile", "harbour.show", "-q", "-o", "table.pack"];
        words.extend(arguments);
        let ran = Run::new(&words)
            .with("harbour.show", SHOW)
            .with("north-wall.rig", rig)
            .run();
        ran.is(0, "", "");
        ran.bytes("table.pack")
    };
    let (rows, knots) = (size(&[], RIG), size(&["--knots"], RIG));
    assert!(knots.len() * 10 < rows.len());
    assert!(size(&[], &rig) == knots);
    assert!(size(&["--rows"], &rig) == rows);
    assert!(size(&["--rows", "--knots"], &rig) == knots);
    // Without being asked, CSV stays what it is.
    let ran = Run::new(&["compile", "harbour.show", "-o", "a.csv"])
        .with("harbour.show", SHOW)
        .with("north-wall.rig", &rig)
        .run();
    assert!(ran.file("a.csv").unwrap().starts_with("tick,"));
}

#[test]
fn what_cannot_be_knots_is_wrong_usage() {
    for arguments in [
        ["--knots", "-o", "a.csv"].as_slice(),
        &["-o", "a.pack", "--knots", "within", "0", "counts"],
        &["-o", "a.pack", "--knots", "within", "some", "counts"],
        &["-o", "a.pack", "--knots", "within", "70000", "counts"],
        &["-o", "a.pack", "--knots", "within"],
        &["-o", "a.table"],
    ] {
        let mut words = vec!["compile", "harbour.show"];
        words.extend(arguments);
        let ran = Run::new(&words).with_harbour().run();
        assert_eq!(ran.code, 2, "{arguments:?}: {}", ran.stderr);
        assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
    }
    // The show may follow.
    let ran = Run::new(&["compile", "-o", "a.pack", "--knots", "harbour.show"])
        .with_harbour()
        .run();
    assert_eq!(ran.code, 0, "{}", ran.stderr);
}

#[test]
fn a_table_that_does_not_fit_is_an_error_with_the_tolerance_that_would() {
    let rig = |storage: &str| {
        RIG.replace(
            "controller {",
            &format!("controller {{\n  storage {storage}"),
        )
    };
    let run = |words: &[&str], storage: &str| {
        Run::new(words)
            .with("harbour.show", SHOW)
            .with("north-wall.rig", rig(storage))
            .run()
    };
    // Rows do not fit, knots do: a note where no rows are written, an error where they are.
    let ran = run(&["validate", "harbour.show"], "4 KiB");
    ran.says(0, &["note storage/over", "--knots"], &[]);
    let ran = run(&["compile", "harbour.show", "-o", "a.pack"], "4 KiB");
    ran.says(1, &[], &["error storage/over", "--knots"]);
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
    run(
        &["compile", "harbour.show", "-o", "a.pack", "--knots", "-q"],
        "4 KiB",
    )
    .is(0, "", "");
    // Not even knots within one count do.
    let ran = run(&["validate", "harbour.show"], "560 B");
    ran.says(1, &["error storage/over", "`--knots within "], &[]);
    let (_, rest) = ran.stdout.split_once("`--knots within ").unwrap();
    let within: u32 = rest.split(' ').next().unwrap().parse().unwrap();
    for (tolerance, code) in [(within, 0), (within - 1, 1)] {
        let number = tolerance.to_string();
        let words = [
            "compile",
            "harbour.show",
            "-q",
            "-o",
            "a.pack",
            "--knots",
            "within",
            &number,
            "counts",
        ];
        assert_eq!(run(&words, "560 B").code, code, "within {tolerance}");
    }
}
