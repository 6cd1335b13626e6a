//! The page that plays a show: its text, its mathematics under node, and the page itself in Chromium.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::print_stderr
)]

mod browser;
mod maths;
mod pages;
#[path = "../optics/show.rs"]
mod show;
mod text;

use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// The folder of this test, where the scripts and what they need are.
fn here() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/page")
}

/// Says that something is missing: passes on a desk, fails where `CI` is set.
fn missing(what: &str, so: &str) {
    assert!(
        std::env::var_os("CI").is_none(),
        "{what} is missing, and CI is set"
    );
    eprintln!("skipped: {what} is missing, so {so}");
}

fn runs(program: &str) -> bool {
    Command::new(program)
        .arg("--version")
        .stdout(Stdio::null())
        .stderr(Stdio::null())
        .status()
        .is_ok_and(|status| status.success())
}

/// Runs a script of this folder under node; fails with all that it said where it failed.
fn node(script: &str, arguments: &[&Path]) -> String {
    let output = Command::new("node")
        .arg(here().join(script))
        .args(arguments)
        .output()
        .unwrap();
    let said = format!(
        "{}{}",
        String::from_utf8_lossy(&output.stdout),
        String::from_utf8_lossy(&output.stderr)
    );
    assert!(output.status.success(), "{script}:\n{said}");
    said
}
