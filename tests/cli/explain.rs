use crate::builder::Run;
use phasewright::finding::Code;

#[test]
fn every_code_is_explained_by_its_page() {
    for code in Code::ALL {
        Run::new(&["explain", code.text()])
            .run()
            .is(0, code.page(), "");
    }
}

#[test]
fn without_a_code_all_of_them_are_listed() {
    let ran = Run::new(&["explain"]).run();
    assert_eq!((ran.code, ran.stderr.as_str()), (0, ""));
    assert_eq!(ran.stdout.lines().count(), Code::ALL.len());
    for (line, code) in ran.stdout.lines().zip(Code::ALL) {
        assert!(
            line.starts_with(code.text()) && line.ends_with(code.summary()),
            "{line}"
        );
    }
}

#[test]
fn a_misspelt_code_gets_the_nearest_one() {
    for (written, meant) in [
        ("limit/sped", "limit/speed"),
        ("LIMIT/JERKS", "limit/jerk"),
        ("acceleration", "limit/acceleration"),
        ("text/unknown_figure", "text/unknown-figure"),
    ] {
        let hint = format!("did you mean `{meant}`?");
        Run::new(&["explain", written]).run().says(2, &[], &[&hint]);
    }
}

#[test]
fn a_code_of_another_world_gets_no_guess() {
    let hint = "`phasewright explain` lists all codes";
    Run::new(&["explain", "zzzzzzzz"])
        .run()
        .says(2, &[], &[hint]);
}
