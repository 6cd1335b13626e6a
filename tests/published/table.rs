//! A real compiled table read by a program that is not ours: python's `csv` module, which follows RFC 4180.

use std::path::Path;
use std::process::Command;

const SCRIPT: &str = r#"
import csv, sys
from fractions import Fraction
with open(sys.argv[1], newline="", encoding="ascii") as file:
    text = file.read()
assert "\r" not in text and text.endswith("\n") and not text.endswith("\n\n"), "one LF a line, one at the end"
rows = list(csv.reader(text.splitlines(keepends=True), strict=True))
head, rows = rows[0], rows[1:]
assert head == ["tick", "time_s", "cue", "a_turns", "b_turns", "a_rpm", "b_rpm", "a_counts", "b_counts", "a_step", "b_step", "beam"], head
assert all(len(row) == len(head) for row in rows), "RFC 4180 section 2.4: the same number of fields in each line"
column = {name: [row[i] for row in rows] for i, name in enumerate(head)}
tick, counts = Fraction(sys.argv[2]), int(sys.argv[3])
loop_start = column["cue"].index("1")
for k, row in enumerate(rows):
    assert int(row[0]) == k, f"row {k} has tick {row[0]}"
    assert Fraction(row[1]) == k * tick, f"row {k} is at {row[1]} s"
for rotor in "ab":
    total = 0
    for k, (turns, own, step) in enumerate(zip(column[rotor + "_turns"], column[rotor + "_counts"], column[rotor + "_step"])):
        assert 0 <= Fraction(turns) < 1 and len(turns) == 14, f"row {k}: {turns}"
        assert int(own) == total % counts, f"row {k}: counts {own} where the steps sum up to {total}"
        # Half a count from rounding, and half a unit of the twelfth decimal.
        off = (Fraction(turns) * counts - int(own) + counts / 2) % counts - Fraction(counts, 2)
        assert abs(off) <= Fraction(1, 2) + Fraction(counts, 10**12), f"row {k}: {turns} turns are not {own} counts"
        total += int(step)
    assert total % counts == int(column[rotor + "_counts"][loop_start]), "the loop closes"
assert all(0 <= int(beam) <= 255 for beam in column["beam"])
print(len(rows))
"#;

/// RFC 4180, read by python's `csv` in strict mode, with python's own exact fractions to set the columns against one another.
#[test]
fn python_reads_a_compiled_table_and_its_columns_agree() {
    if Command::new("python3").arg("--version").output().is_err() {
        assert!(
            std::env::var_os("CI").is_none(),
            "python3 is missing, and CI is set"
        );
        eprintln!("skipped: python3 is missing, so no other program has read the table");
        return;
    }
    let folder = tempfile::tempdir().unwrap();
    let table = folder.path().join("open-day.csv");
    let show = Path::new(env!("CARGO_MANIFEST_DIR")).join("shows/velloe-lissajous.show");
    let compiled = Command::new(env!("CARGO_BIN_EXE_phasewright"))
        .arg("compile")
        .arg(&show)
        .arg("-o")
        .arg(&table)
        .output()
        .unwrap();
    assert!(
        compiled.status.success(),
        "{}",
        String::from_utf8_lossy(&compiled.stderr)
    );
    // Of the example: a tick of 5 ms and 4000 counts; the loop starts with the first row of the first cue.
    let read = Command::new("python3")
        .args(["-c", SCRIPT])
        .arg(&table)
        .args(["5/1000", "4000"])
        .output()
        .unwrap();
    assert!(
        read.status.success(),
        "{}",
        String::from_utf8_lossy(&read.stderr)
    );
    let rows: usize = String::from_utf8_lossy(&read.stdout)
        .trim()
        .parse()
        .unwrap();
    assert!(
        rows > 30_000,
        "the whole show was read, not only its head: {rows} rows"
    );
}
