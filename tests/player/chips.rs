//! The player on an emulated Cortex-M: whole shows tick by tick, instructions, stack.

use crate::tables;
use crate::tools::{STRICT, player, run, sources, there};
use phasewright::plan::Plan;
use phasewright::setpoint::pack::Content;
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;
use tempfile::TempDir;

/// Bytes of one set-point that the firmware hands out.
const POINT: usize = 24;

/// Builds the firmware for a table in `table.h`.
fn firmware(folder: &Path, ticks: usize, count: bool) {
    let (source, script) = (sources().join("firmware.c"), sources().join("firmware.ld"));
    let (script, ticks) = (
        format!("-T{}", script.display()),
        format!("-DTICKS={ticks}u"),
    );
    let mut words = vec![
        "arm-none-eabi-gcc",
        "-std=c99",
        "-mcpu=cortex-m0",
        "-mthumb",
        "-Os",
        "-ffreestanding",
        "-nostdlib",
    ];
    words.extend([
        "-I.",
        "-DHEADER=\"table.h\"",
        "-DTABLE=table",
        &ticks,
        &script,
        source.to_str().unwrap(),
        "-lgcc",
        "-o",
        "firmware.elf",
    ]);
    if count {
        words.push("-DCOUNT");
    }
    run(folder, &words);
}

/// Runs the firmware; with `trace` every instruction is written to `trace.log`.
fn emulate(folder: &Path, trace: bool) {
    let mut words = vec![
        "qemu-system-arm",
        "-M",
        "microbit",
        "-nographic",
        "-monitor",
        "none",
        "-serial",
        "none",
    ];
    words.extend([
        "-semihosting-config",
        "enable=on,target=native",
        "-kernel",
        "firmware.elf",
    ]);
    if trace {
        words.extend(["-singlestep", "-d", "exec,nochain", "-D", "trace.log"]);
    }
    run(folder, &words);
}

#[test]
fn an_emulated_cortex_plays_two_shows_for_a_loop_and_a_half() {
    if !there(&["arm-none-eabi-gcc", "qemu-system-arm"]) {
        return;
    }
    for name in ["karrow-fair", "velloe-lissajous"] {
        let plan = tables::example(name);
        for content in [Content::Rows, Content::Knots(1)] {
            let folder = TempDir::new().unwrap();
            fs::write(
                folder.path().join("table.h"),
                tables::header(&plan, content, "table"),
            )
            .unwrap();
            let ticks = tables::loop_and_a_half(&plan);
            firmware(folder.path(), ticks, false);
            emulate(folder.path(), false);
            let found = fs::read(folder.path().join("points.bin")).unwrap();
            assert_eq!(found.len(), ticks * POINT, "{name}");
            compare(name, &plan, content, &found);
        }
    }
}

fn compare(name: &str, plan: &Plan, content: Content, found: &[u8]) {
    let rows = tables::rows(plan, found.len() / POINT);
    let tolerance = i64::from(content != Content::Rows);
    for (row, bytes) in rows.iter().zip(found.chunks_exact(POINT)) {
        let word = |index: usize| u32::from_le_bytes(bytes[4 * index..][..4].try_into().unwrap());
        let tick = row.tick;
        assert_eq!(
            (word(4), word(5)),
            (row.cue, u32::from(row.beam)),
            "{name}, tick {tick}"
        );
        for (index, rotor) in [(0, &row.rotors.a), (1, &row.rotors.b)] {
            let turn = i64::from(if index == 0 {
                plan.rig.rotors.a.counts
            } else {
                plan.rig.rotors.b.counts
            });
            let off = (i64::from(word(index)) - i64::from(rotor.counts)).rem_euclid(turn);
            assert!(
                off.min(turn - off) <= tolerance,
                "{name}, tick {tick}, rotor {index}"
            );
            let step = i64::from(word(index + 2).cast_signed()) - rotor.step;
            assert!(
                step.abs() <= 2 * tolerance,
                "{name}, tick {tick}, rotor {index}: step {step}"
            );
        }
    }
}

/// Instructions of a run of so many ticks.
fn instructions(folder: &Path, ticks: usize) -> usize {
    firmware(folder, ticks, true);
    emulate(folder, true);
    let trace = fs::read(folder.join("trace.log")).unwrap();
    trace
        .split(|byte| *byte == b'\n')
        .filter(|line| line.starts_with(b"Trace "))
        .count()
}

#[test]
fn a_tick_of_knots_takes_at_most_a_hundred_instructions_a_rotor() {
    if !there(&["arm-none-eabi-gcc", "qemu-system-arm"]) {
        return;
    }
    let plan = tables::looped();
    for content in [Content::Knots(1), Content::Rows] {
        let folder = TempDir::new().unwrap();
        fs::write(
            folder.path().join("table.h"),
            tables::header(&plan, content, "table"),
        )
        .unwrap();
        // What opening takes, and the loop around the tick, are the same in both runs; the loop's own are counted in.
        let (few, more) = (500, 3500);
        let a_tick = (instructions(folder.path(), more) - instructions(folder.path(), few)) as f64
            / (more - few) as f64;
        eprintln!(
            "{content:?}: {a_tick:.1} instructions a tick on a Cortex-M0, {:.1} a rotor",
            a_tick / 2.0
        );
        let most = if content == Content::Rows {
            400.0
        } else {
            200.0
        };
        assert!(a_tick > 20.0 && a_tick <= most, "{content:?}: {a_tick}");
    }
}

/// The most stack of any chain of calls, from what the compiler says of functions and calls (`-fcallgraph-info=su`).
fn deepest(graph: &str) -> BTreeMap<String, u32> {
    let quoted = |line: &str, key: &str| {
        let (_, rest) = line.split_once(&format!("{key}: \""))?;
        Some(rest.split_once('"')?.0.to_owned())
    };
    let mut own: BTreeMap<String, u32> = BTreeMap::new();
    let mut calls: Vec<(String, String)> = Vec::new();
    for line in graph.lines() {
        if line.starts_with("node:") {
            let name = quoted(line, "title").unwrap();
            let label = quoted(line, "label").unwrap_or_default();
            let bytes = label.split("\\n").find_map(|part| {
                part.split_once(" bytes")
                    .map(|(bytes, _)| bytes.trim().parse().ok())
            });
            own.insert(name, bytes.flatten().unwrap_or(0));
        } else if line.starts_with("edge:") {
            calls.push((
                quoted(line, "sourcename").unwrap(),
                quoted(line, "targetname").unwrap(),
            ));
        }
    }
    fn depth(
        name: &str,
        own: &BTreeMap<String, u32>,
        calls: &[(String, String)],
        level: usize,
    ) -> u32 {
        assert!(
            level < 30,
            "no function calls itself, not even by way of others"
        );
        let below = calls
            .iter()
            .filter(|(from, _)| from == name)
            .map(|(_, to)| depth(to, own, calls, level + 1));
        own.get(name).copied().unwrap_or(0) + below.max().unwrap_or(0)
    }
    let names = own.keys().filter(|name| !name.contains("phw_"));
    names
        .map(|name| (name.clone(), depth(name, &own, &calls, 0)))
        .collect()
}

#[test]
fn the_stack_stays_under_128_bytes_along_every_chain_of_calls() {
    if !there(&["arm-none-eabi-gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let (source, include) = (
        sources().join("stack.c"),
        format!("-I{}", player().display()),
    );
    for core in ["-mcpu=cortex-m0", "-mcpu=cortex-m3"] {
        let mut words = vec![
            "arm-none-eabi-gcc",
            core,
            "-mthumb",
            "-Os",
            "-std=c99",
            "-fstack-usage",
            "-fcallgraph-info=su",
        ];
        words.extend(STRICT);
        words.extend([&include, "-c", source.to_str().unwrap(), "-o", "stack.o"]);
        run(folder.path(), &words);
        let found = deepest(&fs::read_to_string(folder.path().join("stack.ci")).unwrap());
        eprintln!("{core}: stack {found:?}");
        for function in ["open_memory", "open_stream", "tick", "stop"] {
            let bytes = found[function];
            assert!(
                bytes > 8 && bytes < 128,
                "{core}, {function}: {bytes} bytes"
            );
        }
    }
}
