use crate::builder::Run;

#[test]
fn without_a_command_the_help_is_shown() {
    Run::new(&[])
        .run()
        .says(2, &[], &["Usage: phasewright", "compile"]);
}

#[test]
fn help_and_version_are_results() {
    Run::new(&["--help"])
        .run()
        .says(0, &["Usage: phasewright"], &[]);
    Run::new(&["compile", "--help"])
        .run()
        .says(0, &["--from <K>"], &[]);
    let version = format!("phasewright {}\n", env!("CARGO_PKG_VERSION"));
    Run::new(&["--version"]).run().is(0, &version, "");
}

#[test]
fn wrong_usage_exits_with_2() {
    for arguments in [
        &["paint"][..],
        &["validate"],
        &["validate", "--colour", "a.show"],
        &["validate", "--color", "sometimes", "a.show"],
        &["validate", "--findings", "xml", "a.show"],
        &["compile"],
        &["compile", "a.show", "b.show"],
        &["compile", "a.show", "--from", "two"],
        &["runsheet", "a.show", "--form", "pdf"],
    ] {
        Run::new(arguments)
            .run()
            .says(2, &[], &["error:", "--help"]);
    }
}

#[test]
fn standard_input_is_read_only_once() {
    for arguments in [
        &["validate", "-", "-"][..],
        &["validate", "-", "--rig", "-"],
    ] {
        let once = "standard input `-` can be read only once";
        Run::new(arguments).run().says(2, &[], &[once]);
    }
}

#[test]
fn a_table_of_unknown_ending_needs_a_form() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "table.dat"])
        .with_harbour()
        .run();
    ran.says(
        2,
        &[],
        &["table.dat does not end in .csv, .json, .h or .pack"],
    );
    assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
}

#[test]
fn a_start_past_the_last_cue_is_wrong_usage() {
    for from in ["0", "3", "4000000000"] {
        let ran = Run::new(&["compile", "harbour.show", "--from", from])
            .with_harbour()
            .run();
        ran.says(2, &[], &["the show has cues 1 to 2"]);
        assert_eq!(ran.files(), ["harbour.show", "north-wall.rig"]);
    }
}
