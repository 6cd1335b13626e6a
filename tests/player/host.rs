//! The player on the host: clean under every warning, as C and as C++, under the address and undefined-behaviour
//! sanitizers; set-point by set-point what the table says.

use crate::tables;
use crate::tools::{STRICT, player, run, sources, there};
use phasewright::plan::Plan;
use phasewright::rig::RotorId;
use phasewright::setpoint::pack::Content;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;
use tempfile::TempDir;

/// Compilers and the language each is told to read.
pub(crate) const COMPILERS: [(&str, &[&str]); 4] = [
    ("gcc", &["-std=c99"]),
    ("clang", &["-std=c99"]),
    ("g++", &["-std=c++17", "-x", "c++"]),
    ("clang++", &["-std=c++17", "-x", "c++"]),
];

/// Builds the host program.
pub(crate) fn build(folder: &Path, compiler: &str, language: &[&str]) -> PathBuf {
    program(folder, "host.c", compiler, language)
}

/// Builds one of the programs of these tests for the host, under sanitizers; includes are looked for in `folder` too.
pub(crate) fn program(folder: &Path, source: &str, compiler: &str, language: &[&str]) -> PathBuf {
    let name = source.trim_end_matches(".c");
    let program = folder.join(format!("{name}-{compiler}"));
    let include = format!("-I{}", player().display());
    let source = sources().join(source);
    let mut words = vec![compiler];
    words.extend(language);
    words.extend(STRICT);
    words.extend([
        "-O1",
        "-g",
        "-fsanitize=address,undefined",
        "-fno-sanitize-recover=all",
        "-I.",
        &include,
    ]);
    words.extend([source.to_str().unwrap(), "-o", program.to_str().unwrap()]);
    run(folder, &words);
    program
}

/// One line of the host program.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Point {
    pub(crate) counts: [i64; 2],
    pub(crate) steps: [i64; 2],
    pub(crate) beam: i64,
    pub(crate) cue: i64,
}

/// What the host program prints: set-points, and the last line.
pub(crate) fn play(
    program: &Path,
    table: &Path,
    how: &str,
    ticks: usize,
    stop: Option<usize>,
) -> (Vec<Point>, String) {
    let mut command = Command::new(program);
    command.arg(table).arg(how).arg(ticks.to_string());
    if let Some(stop) = stop {
        command.arg(stop.to_string());
    }
    let output = command.output().unwrap();
    let errors = String::from_utf8_lossy(&output.stderr);
    assert!(errors.is_empty(), "{errors}");
    let text = String::from_utf8(output.stdout).unwrap();
    let mut lines: Vec<&str> = text.lines().collect();
    let last = lines.pop().unwrap_or_default().to_owned();
    let points = lines.iter().map(|line| {
        let numbers: Vec<i64> = line
            .split(',')
            .map(|number| number.parse().unwrap())
            .collect();
        Point {
            counts: [numbers[0], numbers[1]],
            steps: [numbers[2], numbers[3]],
            beam: numbers[4],
            cue: numbers[5],
        }
    });
    (points.collect(), last)
}

/// Compares what was played with the rows, within a tolerance, and with the library's reader, exactly.
fn compare(plan: &Plan, bytes: &[u8], played: &[Point], tolerance: i64, what: &str) {
    let rows = tables::rows(plan, played.len());
    let points = tables::points(bytes, played.len());
    assert_eq!(rows.len(), played.len(), "{what}");
    for (tick, ((point, row), read)) in played.iter().zip(&rows).zip(&points).enumerate() {
        assert_eq!(
            (point.cue, point.beam),
            (i64::from(row.cue), i64::from(row.beam)),
            "{what}, tick {tick}"
        );
        assert_eq!(
            point.counts,
            read.counts.map(i64::from),
            "{what}, tick {tick}"
        );
        assert_eq!(point.steps, read.steps, "{what}, tick {tick}");
        for (index, id) in RotorId::BOTH.into_iter().enumerate() {
            let turn = i64::from(plan.rig.rotor(id).counts);
            let off = (point.counts[index] - i64::from(row.rotors.of(id).counts)).rem_euclid(turn);
            assert!(
                off.min(turn - off) <= tolerance,
                "{what}, tick {tick}, rotor {}",
                id.name()
            );
            let step = point.steps[index] - row.rotors.of(id).step;
            assert!(
                step.abs() <= 2 * tolerance,
                "{what}, tick {tick}, rotor {}: step {step}",
                id.name()
            );
        }
    }
}

#[test]
fn what_the_host_plays_is_what_the_table_says() {
    if !there(&["gcc", "clang", "g++", "clang++"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    for (name, plan) in [("looped", tables::looped()), ("ending", tables::ending())] {
        for (content, tolerance) in [
            (Content::Rows, 0),
            (Content::Knots(1), 1),
            (Content::Knots(3), 3),
        ] {
            let bytes = tables::pack(&plan, content);
            let table = folder.path().join("table.pack");
            fs::write(&table, &bytes).unwrap();
            for (compiler, language) in COMPILERS {
                let program = folder.path().join(format!("host-{compiler}"));
                if !program.exists() {
                    build(folder.path(), compiler, language);
                }
                for how in ["memory", "stream"] {
                    let what = format!("{name}, {content:?}, {compiler}, {how}");
                    let ticks = tables::loop_and_a_half(&plan);
                    let (mut played, last) = play(&program, &table, how, ticks + 1, None);
                    let ends = plan.loop_start().is_none();
                    assert_eq!(
                        last,
                        if ends { "state ended" } else { "state running" },
                        "{what}"
                    );
                    assert_eq!(played.len(), ticks + 1, "{what}");
                    let after = played.pop().unwrap();
                    if ends {
                        // Past the end both stand, dark, where the last row left them.
                        assert_eq!((after.steps, after.beam), ([0, 0], 0), "{what}");
                        assert_eq!(after.counts, played.last().unwrap().counts, "{what}");
                    }
                    compare(&plan, &bytes, &played, tolerance, &what);
                }
            }
        }
    }
}

#[test]
fn two_headers_go_into_one_program() {
    if !there(&["gcc", "clang", "g++", "clang++"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    fs::write(
        folder.path().join("one.h"),
        tables::header(&tables::looped(), Content::Knots(1), "one"),
    )
    .unwrap();
    fs::write(
        folder.path().join("other.h"),
        tables::header(&tables::ending(), Content::Rows, "other"),
    )
    .unwrap();
    let source = sources().join("two.c");
    for (compiler, language) in COMPILERS {
        let mut words = vec![compiler];
        words.extend(language);
        words.extend(STRICT);
        words.extend([
            "-O2",
            "-fsanitize=address,undefined",
            "-I.",
            source.to_str().unwrap(),
            "-o",
            "two",
        ]);
        run(folder.path(), &words);
        let said = run(folder.path(), &["./two"]).stdout;
        let said = String::from_utf8(said).unwrap();
        let id = phasewright::setpoint::table_id;
        let wanted = format!("{} {}", id(&tables::looped()), id(&tables::ending()));
        assert!(said.starts_with(&wanted), "{said} {wanted}");
    }
}

#[test]
fn damaged_tables_are_not_opened_and_damaged_blocks_brake() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let program = build(folder.path(), "gcc", &["-std=c99"]);
    let plan = tables::looped();
    let table = folder.path().join("table.pack");
    for content in [Content::Rows, Content::Knots(1)] {
        let bytes = tables::pack(&plan, content);
        for at in (0..bytes.len()).step_by(bytes.len() / 37 + 1) {
            let mut flipped = bytes.clone();
            flipped[at] ^= 0x10;
            for damaged in [&bytes[..at], &flipped[..]] {
                fs::write(&table, damaged).unwrap();
                let (_, last) = play(&program, &table, "memory", 10, None);
                // A flag that a reader may skip is part of the checksum all the same.
                assert_eq!(last, "closed damaged", "byte {at}");
            }
        }
    }
    // The last block of a stream is damaged: what comes before is played, then both rotors slow down, dark.
    let mut bytes = tables::pack(&plan, Content::Rows);
    let last = bytes.len() - 3;
    bytes[last] ^= 1;
    fs::write(&table, &bytes).unwrap();
    let (played, said) = play(&program, &table, "stream", 1_000_000, None);
    assert_eq!(said, "state damaged");
    let rows = tables::rows(&plan, plan.rows() as usize);
    let whole = played.iter().zip(&rows).take_while(|(point, row)| {
        point.counts
            == [
                i64::from(row.rotors.a.counts),
                i64::from(row.rotors.b.counts),
            ]
            && point.beam == i64::from(row.beam)
    });
    let whole = whole.count();
    assert!(whole > 2000 && whole < rows.len(), "{whole}");
    let braking = &played[whole..];
    assert!(braking.iter().all(|point| point.beam == 0));
    assert!(braking.len() > 10);
    assert_eq!(braking.last().unwrap().steps, [0, 0]);
}

/// Executions of the fuzzer in a test; hours of it are for people (DEVELOPERS.md).
const FUZZED: &str = "20000";

#[test]
fn the_fuzzer_finds_nothing_at_first_sight() {
    if !there(&["clang"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let include = format!("-I{}", player().display());
    let source = sources().join("fuzz.c");
    let mut words = vec!["clang", "-std=c99"];
    words.extend(STRICT);
    words.extend([
        "-O1",
        "-g",
        "-fsanitize=fuzzer,address,undefined",
        "-fno-sanitize-recover=all",
        &include,
        source.to_str().unwrap(),
        "-o",
        "fuzz",
    ]);
    run(folder.path(), &words);
    let corpus = folder.path().join("corpus");
    fs::create_dir(&corpus).unwrap();
    for (index, plan) in [tables::looped(), tables::ending()].iter().enumerate() {
        for content in [Content::Rows, Content::Knots(1)] {
            let name = format!("{index}-{content:?}");
            fs::write(corpus.join(name), tables::pack(plan, content)).unwrap();
        }
    }
    let runs = format!("-runs={FUZZED}");
    let words = ["./fuzz", "corpus", "-seed=1", "-max_len=4096", &runs];
    let said = run(folder.path(), &words).stderr;
    let said = String::from_utf8_lossy(&said).into_owned();
    assert!(said.contains(&format!("Done {FUZZED} runs")), "{said}");
}
