//! The sketches of `docs/player.md`, as they are printed there: each compiles, and the one that streams is run.

use crate::host::{COMPILERS, program};
use crate::tables;
use crate::tools::{STRICT, player, run, there};
use phasewright::plan::Plan;
use phasewright::setpoint::pack::Content;
use std::fs;
use std::path::Path;
use tempfile::TempDir;

/// What stands in the page between fences of C.
fn sketches() -> Vec<String> {
    let page = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/player.md");
    let text = fs::read_to_string(page).unwrap();
    let mut parts = text.split("```c\n");
    parts.next();
    parts
        .map(|part| part.split("```").next().unwrap().to_owned())
        .collect()
}

/// Writes the sketches, and the header that they include, into a folder.
fn write_sketches(folder: &Path) {
    let all = sketches();
    let names = ["interrupt.c", "streaming.c", "avr.c"];
    assert_eq!(all.len(), names.len(), "sketches of the page");
    for (name, sketch) in names.iter().zip(&all) {
        fs::write(folder.join(name), sketch).unwrap();
    }
    let header = tables::header(&tables::looped(), Content::Knots(1), "evening");
    fs::write(folder.join("evening.h"), header).unwrap();
}

#[test]
fn the_sketches_of_the_page_compile_as_they_are_printed() {
    if !there(&["gcc", "clang", "g++", "clang++", "avr-gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    write_sketches(folder.path());
    let include = format!("-I{}", player().display());
    for name in ["interrupt.c", "streaming.c"] {
        for (compiler, language) in COMPILERS {
            let mut words = vec![compiler];
            words.extend(language);
            words.extend(STRICT);
            words.extend(["-O2", "-I.", &include, "-c", name, "-o", "sketch.o"]);
            run(folder.path(), &words);
        }
    }
    let mut words = vec!["avr-gcc", "-mmcu=atmega2560", "-Os", "-std=c99"];
    words.extend(STRICT);
    words.extend(["-I.", &include, "-c"]);
    for name in ["streaming.c", "avr.c"] {
        let mut words = words.clone();
        words.extend([name, "-o", "sketch.o"]);
        // Nothing of the last one is used: it stands for the head of a program.
        if name == "avr.c" {
            words.push("-Wno-unused");
        }
        run(folder.path(), &words);
    }
}

/// Streams a table with the sketch of the page, from a line that takes at most so many bytes a tick.
fn stream(folder: &Path, program: &Path, plan: &Plan, content: Content, most: usize) {
    let table = folder.join("table.pack");
    fs::write(&table, tables::pack(plan, content)).unwrap();
    let ticks = tables::loop_and_a_half(plan).to_string();
    let most = most.to_string();
    let (program, table) = (program.to_str().unwrap(), table.to_str().unwrap());
    run(folder, &[program, table, &ticks, &most]);
}

#[test]
fn the_streaming_sketch_plays_every_example_while_ticks_come_at_any_time() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    write_sketches(folder.path());
    let program = program(folder.path(), "stream.c", "gcc", &["-std=c99"]);
    let mut plans = vec![tables::looped(), tables::ending(), tables::short()];
    for name in [
        "brackhead-opening",
        "karrow-fair",
        "ostrel-regatta",
        "quillmere-evening",
        "velloe-lissajous",
    ] {
        plans.push(tables::example(name));
    }
    for plan in &plans {
        for content in [Content::Rows, Content::Knots(1)] {
            for most in [16, 200] {
                stream(folder.path(), &program, plan, content, most);
            }
        }
    }
}
