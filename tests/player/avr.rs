//! The player on an 8-bit chip with its table in program memory: its size, and what an emulator says of its stack and clock.

use crate::tables;
use crate::tools::{STRICT, run, sources, there};
use phasewright::setpoint::pack::Content;
use std::fs;
use std::path::Path;
use tempfile::TempDir;

/// Builds a firmware with the looped show's table in `one.h`.
fn build(folder: &Path, source: &str, content: Content, more: &[&str]) {
    let table = tables::header(&tables::looped(), content, "one");
    fs::write(folder.join("one.h"), table).unwrap();
    let source = sources().join(source);
    let mut words = vec!["avr-gcc", "-mmcu=atmega328p", "-Os", "-std=c99"];
    words.extend(STRICT);
    words.extend(more);
    words.extend(["-I.", source.to_str().unwrap(), "-o", "avr.elf"]);
    run(folder, &words);
}

#[test]
fn an_8_bit_chip_keeps_the_table_in_program_memory() {
    if !there(&["avr-gcc", "avr-size"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    build(folder.path(), "avr.c", Content::Knots(1), &[]);
    let table = tables::pack(&tables::looped(), Content::Knots(1)).len();
    let said = String::from_utf8(run(folder.path(), &["avr-size", "avr.elf"]).stdout).unwrap();
    let numbers: Vec<usize> = said
        .lines()
        .nth(1)
        .unwrap()
        .split_whitespace()
        .take(3)
        .map(|word| word.parse().unwrap())
        .collect();
    let (flash, ram) = (numbers[0] + numbers[1], numbers[1] + numbers[2]);
    eprintln!("atmega328p: {flash} bytes of flash, {table} of them the table; {ram} bytes of RAM");
    // 32 KiB and 2 KiB are what the chip has; the table must not have been copied to RAM.
    assert!(flash < 16 * 1024 && ram < 300, "{flash} {ram}");
}

/// FNV-1a, 32 bits, from its authors' description (offset basis 2166136261, prime 16777619).
fn mix(hash: u32, value: u32) -> u32 {
    value.to_le_bytes().iter().fold(hash, |hash, byte| {
        (hash ^ u32::from(*byte)).wrapping_mul(16_777_619)
    })
}

#[test]
fn an_emulated_8_bit_chip_plays_a_loop_and_a_half() {
    if !there(&["avr-gcc", "simavr"]) {
        return;
    }
    let plan = tables::looped();
    let ticks = tables::loop_and_a_half(&plan);
    for content in [Content::Rows, Content::Knots(1)] {
        let folder = TempDir::new().unwrap();
        let count = format!("-DTICKS={ticks}ul");
        build(folder.path(), "avr_run.c", content, &[&count]);
        let words = ["simavr", "-m", "atmega328p", "-f", "16000000", "avr.elf"];
        let ran = run(folder.path(), &words);
        let said = [ran.stdout, ran.stderr].concat();
        let said = String::from_utf8_lossy(&said).into_owned();
        let numbers = said
            .lines()
            .find_map(hexadecimal)
            .unwrap_or_else(|| panic!("{said}"));
        let [played, hash, opening, stack, stopping, most, mean] = numbers;
        let wanted = tables::points(&tables::pack(&plan, content), ticks)
            .iter()
            .fold(2_166_136_261, |hash, point| {
                let steps = point.steps.map(|step| step as u32);
                let beam = u32::from(point.beam);
                let [a, b] = point.counts;
                [a, b, steps[0], steps[1], point.cue, beam]
                    .into_iter()
                    .fold(hash, mix)
            });
        assert_eq!(
            (played as usize, hash),
            (ticks, wanted),
            "{content:?}: {said}"
        );
        eprintln!(
            "atmega328p, {content:?}: stack {opening} bytes to open, {stack} to play, {stopping} to stop; cycles a tick {mean}, at most {most}"
        );
        // What docs/player.md states.
        for bytes in [opening, stack, stopping] {
            assert!(bytes > 20 && bytes < 128, "{content:?}: {bytes}");
        }
        assert!(mean > 100 && most < 32_000, "{content:?}: {mean} {most}");
    }
}

/// The seven numbers that the firmware says, between whatever the emulator puts around them.
fn hexadecimal(line: &str) -> Option<[u32; 7]> {
    let numbers: Vec<u32> = line
        .split(|sign: char| !sign.is_ascii_hexdigit())
        .filter(|word| word.len() == 8)
        .filter_map(|word| u32::from_str_radix(word, 16).ok())
        .collect();
    numbers.try_into().ok()
}
