//! Players that nobody opened, tables that are not quite tables.

use crate::host::{build, play, program};
use crate::tables;
use crate::tools::{player, run, there};
use phasewright::setpoint::c_header::identifier;
use phasewright::setpoint::pack::{Content, Reader, crc32};
use std::fs;
use std::process::Command;
use tempfile::TempDir;

#[test]
fn a_player_that_was_never_opened_and_one_that_never_moved_can_be_stopped() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let program = program(folder.path(), "edges.c", "gcc", &["-std=c99"]);
    let table = folder.path().join("table.pack");
    for content in [Content::Rows, Content::Knots(1)] {
        fs::write(&table, tables::pack(&tables::looped(), content)).unwrap();
        run(
            folder.path(),
            &[program.to_str().unwrap(), table.to_str().unwrap()],
        );
    }
}

/// A pack taken apart: its head, and its blocks.
struct Parts {
    head: Vec<u8>,
    blocks: Vec<Vec<u8>>,
}

impl Parts {
    fn of(bytes: &[u8]) -> Self {
        let short = |at: usize| usize::from(u16::from_le_bytes([bytes[at], bytes[at + 1]]));
        let (mut at, mut size) = (short(8), short(10));
        let head = bytes[..at].to_vec();
        let mut blocks = Vec::new();
        while size > 0 {
            blocks.push(bytes[at..at + size].to_vec());
            (at, size) = (at + size, short(at + 6));
        }
        assert_eq!(at, bytes.len());
        Self { head, blocks }
    }

    /// Put together again: sizes and checksums are right, whatever else is not.
    fn bytes(mut self) -> Vec<u8> {
        let size = |block: &Vec<u8>| (block.len() as u16).to_le_bytes();
        let sizes: Vec<[u8; 2]> = self.blocks.iter().map(size).collect();
        self.head[10..12].copy_from_slice(&sizes[0]);
        let end = self.head.len() - 4;
        let crc = crc32(0, &self.head[..end]);
        self.head[end..].copy_from_slice(&crc.to_le_bytes());
        let mut all = self.head;
        for (index, block) in self.blocks.iter_mut().enumerate() {
            block[4..6].copy_from_slice(&sizes[index]);
            block[6..8].copy_from_slice(sizes.get(index + 1).unwrap_or(&[0, 0]));
            let crc = crc32(0, &block[4..]);
            block[..4].copy_from_slice(&crc.to_le_bytes());
            all.extend_from_slice(block);
        }
        all
    }

    /// The block in which the loop starts.
    fn looped(&mut self) -> &mut Vec<u8> {
        self.blocks.iter_mut().find(|block| block[8] == 1).unwrap()
    }
}

/// What is wrong with a table, and how it comes to be so.
type Wrong = (&'static str, fn(&mut Parts));

/// What may be wrong with a table whose checksums are right.
fn wrongs(content: Content) -> Vec<Wrong> {
    let mut all: Vec<Wrong> = vec![
        ("a byte too many in the last block", |parts| {
            parts.blocks.last_mut().unwrap().push(0x77);
        }),
        ("a byte too many in the first block", |parts| {
            parts.blocks[0].push(0x77);
        }),
        ("blocks said to be above 4096 bytes", |parts| {
            parts.head[12..14].copy_from_slice(&4097_u16.to_le_bytes());
        }),
        ("no flag where the loop starts", |parts| {
            parts.looped()[8] = 0;
        }),
        ("a number of more than 64 bits", |parts| {
            // The first tick of the first block, 0, as 2⁶⁴.
            let wide = [0x82, 0x80, 0x80, 0x80, 0x80, 0x80, 0x80, 0x80, 0x80, 0];
            parts.blocks[0].splice(9..10, wide);
        }),
    ];
    if content == Content::Rows {
        all.push(("a run of more rows than the block has", |parts| {
            // First tick, ticks less 1, two positions, two steps, all 0 but the ticks: two bytes.
            let block = &mut parts.blocks[0];
            let run = 9 + 1 + 2 + 4;
            assert_eq!(block[9..10], [0]);
            assert_eq!(block[12..16], [0; 4]);
            // As long as the block can say in two bytes.
            block[run..run + 2].copy_from_slice(&[0xFF, 0x7F]);
        }));
    }
    all
}

#[test]
fn player_and_reader_refuse_the_same_tables() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let host = build(folder.path(), "gcc", &["-std=c99"]);
    let table = folder.path().join("table.pack");
    let plan = tables::looped();
    // Past the end of the loop, but not once round again.
    let ticks = plan.rows() as usize + 10;
    for content in [Content::Rows, Content::Knots(1)] {
        let bytes = tables::pack(&plan, content);
        assert_eq!(Parts::of(&bytes).bytes(), bytes);
        for (what, harm) in wrongs(content) {
            let mut parts = Parts::of(&bytes);
            harm(&mut parts);
            let harmed = parts.bytes();
            let mut fault = Reader::new(harmed.as_slice()).err();
            if let Ok(mut reader) = Reader::new(harmed.as_slice()) {
                fault = loop {
                    match reader.next_point() {
                        Ok(Some(_)) => {}
                        Ok(None) => break None,
                        Err(fault) => break Some(fault),
                    }
                };
            }
            assert!(fault.is_some(), "{content:?}, {what}: the reader");
            fs::write(&table, &harmed).unwrap();
            for how in ["memory", "stream"] {
                let (_, last) = play(&host, &table, how, ticks, None);
                assert!(
                    last == "closed damaged" || last == "state damaged",
                    "{content:?}, {what}, {how}: {last}"
                );
            }
        }
    }
}

#[test]
fn two_tables_of_one_name_do_not_go_into_one_program() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    // `a-b.h` and `a_b.h` stand for one identifier.
    for (file, plan) in [("a-b.h", tables::looped()), ("a_b.h", tables::ending())] {
        let name = identifier(file.trim_end_matches(".h"));
        fs::write(
            folder.path().join(file),
            tables::header(&plan, Content::Knots(1), &name),
        )
        .unwrap();
    }
    let both = "#include \"a-b.h\"\n#include \"a_b.h\"\nint main(void) { return 0; }\n";
    let one =
        "#include \"a-b.h\"\n#include \"a-b.h\"\nint main(void) { return (int)a_b_table[0]; }\n";
    for (source, passes) in [(both, false), (one, true)] {
        fs::write(folder.path().join("main.c"), source).unwrap();
        let built = Command::new("gcc")
            .args(["-std=c99", "-c", "main.c"])
            .current_dir(folder.path())
            .output()
            .unwrap();
        assert_eq!(built.status.success(), passes, "{built:?}");
    }
}

#[test]
fn players_of_different_versions_do_not_go_into_one_program() {
    if !there(&["gcc"]) {
        return;
    }
    let folder = TempDir::new().unwrap();
    let include = format!("-I{}", player().display());
    for (before, passes) in [("#define PHW_PLAYER 1\n", false), ("", true)] {
        let source = format!("{before}#include \"phw_player.h\"\n#include \"phw_player.h\"\n");
        fs::write(folder.path().join("main.c"), source).unwrap();
        let built = Command::new("gcc")
            .args(["-std=c99", &include, "-c", "main.c"])
            .current_dir(folder.path())
            .output()
            .unwrap();
        assert_eq!(built.status.success(), passes, "{built:?}");
    }
}
