//! Colour, and readers that leave early.

use crate::builder::{RIG, Run, SHOW};
use std::process::{Command, Stdio};

fn with_error(arguments: &[&str]) -> Run {
    Run::new(arguments)
        .with("harbour.show", SHOW.replace("deltoid", "deltiod"))
        .with("north-wall.rig", RIG)
}

#[test]
fn colour_needs_a_terminal_or_always() {
    let colored = |ran: crate::builder::Ran| ran.stdout.contains('\u{1b}');
    assert!(!colored(with_error(&["validate", "harbour.show"]).run()));
    assert!(!colored(
        with_error(&["validate", "harbour.show", "--color", "never"]).run()
    ));
    assert!(colored(
        with_error(&["validate", "harbour.show", "--color", "always"]).run()
    ));
    let asked = with_error(&["validate", "harbour.show", "--color", "always"]).env("NO_COLOR", "1");
    assert!(colored(asked.run()));
}

#[test]
fn json_is_never_coloured() {
    let arguments = [
        "validate",
        "harbour.show",
        "--color",
        "always",
        "--findings",
        "json",
    ];
    assert!(!with_error(&arguments).run().stdout.contains('\u{1b}'));
}

/// Runs a shell line in which `$P` is the program, and gives what it printed on standard error.
#[cfg(unix)]
fn shell(line: &str) -> String {
    let folder = tempfile::TempDir::new().unwrap();
    std::fs::write(folder.path().join("harbour.show"), SHOW).unwrap();
    std::fs::write(folder.path().join("north-wall.rig"), RIG).unwrap();
    let output = Command::new("sh")
        .args(["-c", line])
        .env("P", env!("CARGO_BIN_EXE_phasewright"))
        .current_dir(folder.path())
        .stdin(Stdio::null())
        .output()
        .unwrap();
    String::from_utf8(output.stderr).unwrap()
}

#[cfg(unix)]
#[test]
fn a_reader_that_leaves_early_is_no_reason_for_noise() {
    for line in [
        "\"$P\" compile harbour.show -q -o - | head -c 100 >/dev/null",
        "\"$P\" runsheet harbour.show | head -c 1 >/dev/null",
        "\"$P\" explain | true",
        "\"$P\" validate none.show | true",
        "\"$P\" --help | true",
    ] {
        assert_eq!(shell(line), "", "{line}");
    }
}
