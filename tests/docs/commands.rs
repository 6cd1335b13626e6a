//! Every command stands in docs/commands.md with an example that runs, and no command stands there that does not exist.

use crate::{blocks, root, run, said};
use std::collections::BTreeSet;
use std::process::Command;

/// The commands that `--help` lists.
fn listed() -> BTreeSet<String> {
    let output = run(&["--help"]);
    let help = String::from_utf8_lossy(&output.stdout).into_owned();
    help.lines()
        .skip_while(|line| !line.starts_with("Commands:"))
        .skip(1)
        .take_while(|line| !line.trim().is_empty())
        // Wrapped descriptions are indented further than names.
        .filter(|line| line.starts_with("  ") && !line.starts_with("   "))
        .filter_map(|line| line.split_whitespace().next())
        .filter(|name| *name != "help")
        .map(str::to_owned)
        .collect()
}

/// Lines of the page's `sh` blocks that start the program.
fn examples() -> Vec<(String, String)> {
    blocks("docs/commands.md")
        .into_iter()
        .filter(|block| block.info == "sh")
        .flat_map(|block| {
            let place = block.place.clone();
            block
                .text
                .lines()
                .filter(|line| line.starts_with("phasewright "))
                .map(|line| (place.clone(), line.to_owned()))
                .collect::<Vec<_>>()
        })
        .collect()
}

#[test]
fn every_command_has_an_example_and_every_example_a_command() {
    let shown: BTreeSet<String> = examples()
        .iter()
        .filter_map(|(_, line)| line.split_whitespace().nth(1).map(str::to_owned))
        .filter(|word| !word.starts_with('-'))
        .collect();
    assert!(listed().contains("compile"), "{:?}", listed());
    assert_eq!(shown, listed());
}

/// Each example is run as it stands, by the shell, in a folder with the example shows.
#[cfg(unix)]
#[test]
fn every_example_runs() {
    let folder = tempfile::tempdir().unwrap();
    let shows = folder.path().join("shows");
    std::fs::create_dir(&shows).unwrap();
    for entry in std::fs::read_dir(root().join("shows")).unwrap() {
        let from = entry.unwrap().path();
        std::fs::copy(&from, shows.join(from.file_name().unwrap())).unwrap();
    }
    let program = std::path::PathBuf::from(env!("CARGO_BIN_EXE_phasewright"));
    let mut path = program.parent().unwrap().as_os_str().to_owned();
    path.push(":");
    path.push(std::env::var_os("PATH").unwrap_or_default());
    for (place, line) in examples() {
        let output = Command::new("sh")
            .args(["-c", &line])
            .current_dir(folder.path())
            .env("PATH", &path)
            .output()
            .unwrap();
        assert!(
            output.status.success(),
            "{place}: {line}\n{}",
            said(&output)
        );
    }
}
