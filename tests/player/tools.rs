//! Programs that tests start.

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

/// Whether all of these programs are there; says so where one is not, and fails where `CI` is set.
pub(crate) fn there(programs: &[&str]) -> bool {
    let missing: Vec<&str> = programs
        .iter()
        .copied()
        .filter(|program| Command::new(program).arg("--version").output().is_err())
        .collect();
    if missing.is_empty() {
        return true;
    }
    assert!(
        std::env::var_os("CI").is_none(),
        "not installed: {missing:?}"
    );
    eprintln!("skipped, since not installed: {missing:?}");
    false
}

/// Runs a program that must succeed.
pub(crate) fn run(folder: &Path, words: &[&str]) -> Output {
    let output = Command::new(words[0])
        .args(&words[1..])
        .current_dir(folder)
        .output()
        .unwrap();
    assert!(
        output.status.success(),
        "{words:?}\n{}\n{}",
        String::from_utf8_lossy(&output.stdout),
        String::from_utf8_lossy(&output.stderr)
    );
    output
}

/// The folder of the C sources of these tests.
pub(crate) fn sources() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/player/c")
}

/// The folder of the player.
pub(crate) fn player() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("player")
}

/// The warnings that are errors in everything that includes the player.
pub(crate) const STRICT: [&str; 5] = ["-Wall", "-Wextra", "-Wconversion", "-pedantic", "-Werror"];
