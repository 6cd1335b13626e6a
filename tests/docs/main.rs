//! The papers keep their word: every example compiles, every sample reads, every command and every finding has its page.

#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    reason = "a test may stop at the first thing that is not so"
)]

mod commands;
mod examples;
mod findings;
mod house;
mod samples;

use std::path::{Path, PathBuf};
use std::process::{Command, Output};

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn read(path: impl AsRef<Path>) -> String {
    let path = root().join(path);
    std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// The built program, run in the project's folder.
fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_phasewright"))
        .current_dir(root())
        .args(arguments)
        .output()
        .unwrap()
}

/// What a run said, for a failing test.
fn said(output: &Output) -> String {
    let (out, err) = (&output.stdout, &output.stderr);
    format!(
        "{}{}",
        String::from_utf8_lossy(out),
        String::from_utf8_lossy(err)
    )
}

/// Files of `shows/` that end in `.ending`, relative to the project.
fn examples(ending: &str) -> Vec<String> {
    let mut found: Vec<String> = std::fs::read_dir(root().join("shows"))
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|own| own == ending))
        .map(|path| format!("shows/{}", path.file_name().unwrap().to_str().unwrap()))
        .collect();
    found.sort();
    found
}

/// A fenced block of a Markdown page.
struct Block {
    /// What stands behind the fence: `show`, `show fragment`, `rig`, `sh` …
    info: String,
    /// Its text.
    text: String,
    /// `PAGE:LINE` of the fence.
    place: String,
}

fn blocks(page: &str) -> Vec<Block> {
    let text = read(page);
    let mut found = Vec::new();
    let mut open: Option<Block> = None;
    for (number, line) in text.lines().enumerate() {
        match (line.strip_prefix("```"), open.as_mut()) {
            (Some(info), None) => {
                open = Some(Block {
                    info: info.trim().to_owned(),
                    text: String::new(),
                    place: format!("{page}:{}", number + 1),
                });
            }
            (Some(_), Some(_)) => found.extend(open.take()),
            (None, Some(block)) => {
                block.text.push_str(line);
                block.text.push('\n');
            }
            (None, None) => {}
        }
    }
    assert!(open.is_none(), "{page} ends inside a block");
    found
}
