//! Texts at and past the limits of the input: a clear error, in a moment, in bounded memory.
//!
//! A debug build reads texts of a sixty-fourth of the size; the time is held to in a release build alone
//! (`cargo test --release --test language`). With `PRINT_TIMES` set each time and the peak of memory so far are printed.

use phasewright::finding::{Code, FileId, Finding};
use phasewright::language::{MOST_FILE_BYTES, parse_show, read_rig, resolve_show};
use phasewright::show::Show;
use std::fmt::Write as _;
use std::time::Duration;

/// How long the processor may work on any text in a release build: several times what it takes, far less than what a
/// time in the square of the size would.
const MOST_TIME: Duration = Duration::from_secs(10);

/// Bytes of the largest text.
fn full() -> usize {
    let bytes = usize::try_from(MOST_FILE_BYTES).unwrap();
    if cfg!(debug_assertions) {
        bytes / 16
    } else {
        bytes
    }
}

/// As many `line`s as fit behind `head`.
fn filled(head: &str, line: &str) -> String {
    let times = (full() - head.len()) / line.len();
    format!("{head}{}", line.repeat(times))
}

/// As many lines of `make` as fit.
fn numbered(make: impl Fn(usize) -> String) -> String {
    let mut text = String::new();
    for number in 0.. {
        let line = make(number);
        if text.len() + line.len() + 200 > full() {
            break;
        }
        text.push_str(&line);
    }
    text
}

fn peak_memory() -> String {
    let status = std::fs::read_to_string("/proc/self/status").unwrap_or_default();
    let line = status.lines().find(|line| line.starts_with("VmHWM"));
    line.unwrap_or("VmHWM unknown").to_owned()
}

/// How long the processor has worked on this thread, so that what else the machine does is no matter. Linux tells it; elsewhere
/// no time is held to.
fn processor_time() -> Duration {
    let told = std::fs::read_to_string("/proc/thread-self/schedstat").unwrap_or_default();
    let first = told.split_whitespace().next();
    Duration::from_nanos(first.and_then(|text| text.parse().ok()).unwrap_or(0))
}

fn timed<T>(what: &str, work: impl FnOnce() -> T) -> T {
    let start = processor_time();
    let result = work();
    let time = processor_time().saturating_sub(start);
    if std::env::var_os("PRINT_TIMES").is_some() {
        eprintln!("{what}: {time:.2?}, {}", peak_memory());
    }
    assert!(
        cfg!(debug_assertions) || time < MOST_TIME,
        "{what} took {time:?}"
    );
    result
}

fn read(what: &str, text: &str) -> (Show, Vec<Finding>) {
    timed(what, || {
        let (script, mut findings) = parse_show(FileId(0), text);
        let (show, more) = resolve_show(&script, String::new(), true);
        findings.extend(more);
        (show, findings)
    })
}

fn codes(findings: &[Finding]) -> Vec<Code> {
    let mut codes: Vec<Code> = findings.iter().map(|finding| finding.code).collect();
    codes.sort_unstable();
    codes.dedup();
    codes
}

/// Bytes without any order, as far as they are UTF-8: a linear congruential generator with Knuth's MMIX constants.
fn garbage() -> String {
    let mut state = 1_u64;
    let bytes: Vec<u8> = (0..full() / 3)
        .map(|_| {
            state = state
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1_442_695_040_888_963_407);
            (state >> 56) as u8
        })
        .collect();
    let mut text = String::from_utf8_lossy(&bytes).into_owned();
    while text.len() > full() {
        text.pop();
    }
    text
}

#[test]
fn texts_that_are_no_script_are_refused_in_a_moment() {
    for (what, text) in [
        ("garbage", garbage()),
        ("lines of one sign", filled("", "x\n")),
        ("opening braces", filled("", "{")),
        ("closing braces", filled("", "}")),
        ("empty blocks", filled("", "{}")),
        ("empty blocks of unknown statements", filled("", "a{}\n")),
        ("quotes", filled("", "\"")),
        ("backslashes in a text", filled("show \"", "\\")),
        ("one long word", filled("", "a")),
        ("one long number", filled("cue ", "1")),
        ("one long sum", filled("cue 1:2 hold ", "1 s ")),
        ("one long list of clauses", filled("usual ", "beam on, ")),
        (
            "one long list of options",
            filled("usual morph 4 s ", "lit "),
        ),
        ("one statement over all lines", filled("", "cue 1:2,\n")),
        ("wide signs", filled("", "𝔘\n")),
    ] {
        let (_, findings) = read(what, &text);
        assert!(!findings.is_empty(), "{what}");
        assert!(findings.len() <= 20_002, "{what}: {}", findings.len());
        let (_, found) = timed(&format!("{what}, as a rig"), || {
            read_rig(FileId(0), &text, String::new())
        });
        assert!(!found.is_empty(), "{what}");
    }
}

#[test]
fn one_long_comment_is_no_error() {
    let text = format!(
        "{}\ncue circle hold 5 s\nloop\n",
        filled("# ", "{ \" }").get(..full() - 40).unwrap()
    );
    let (show, findings) = read("one long comment", &text);
    assert_eq!(findings, []);
    assert_eq!(show.order, [0]);
}

#[test]
fn a_file_past_eight_mebibytes_is_too_much() {
    let text = " ".repeat(usize::try_from(MOST_FILE_BYTES).unwrap() + 1);
    let (_, findings) = read("too large", &text);
    assert_eq!(codes(&findings), [Code::TextTooMuch]);
    let (rig, findings) = read_rig(FileId(0), &text, String::new());
    assert!(rig.is_none());
    assert_eq!(codes(&findings), [Code::TextTooMuch]);
}

#[test]
fn cues_past_a_million_are_too_much() {
    if cfg!(debug_assertions) {
        return eprintln!("only in a release build: it takes too long in this one");
    }
    let (show, findings) = read("a million cues and more", &filled("", "cue 1:2\n"));
    assert_eq!(codes(&findings), [Code::TextTooMuch]);
    assert!(show.order.is_empty());
}

#[test]
fn as_many_written_cues_as_are_allowed_are_read() {
    let cues = if cfg!(debug_assertions) {
        10_000
    } else {
        1_000_000
    };
    let text = format!(
        "usual morph 5 ms hold 5 ms\n{}loop\n",
        "cue 1:2\n".repeat(cues)
    );
    let (show, findings) = read("a million cues", &text);
    assert_eq!(findings, []);
    assert_eq!(show.order.len(), cues);
}

#[test]
fn repeats_and_parts_are_counted_before_they_are_unfolded() {
    // 1000 times a thousand parts that play each other ten times over.
    let mut text = String::new();
    for part in 0..1000 {
        let _ = writeln!(
            text,
            "part p{part} {{\nrepeat 10 {{ play p{} }}\n}}",
            part + 1
        );
    }
    text.push_str("part p1000 {\ncue 1:2 hold 1 ms\n}\nrepeat 1000000000 { play p0 }\nloop\n");
    let (show, findings) = read("parts to the power of ten", &text);
    assert_eq!(codes(&findings), [Code::TextTooMuch]);
    assert!(show.order.is_empty());

    // Exactly a million.
    let text = "usual morph 1 ms\nrepeat 1000 {\nrepeat 1000 { cue 1:2 hold 1 ms }\n}\nloop\n";
    let (show, findings) = read("a million by repeating", text);
    assert_eq!(findings, []);
    assert_eq!(show.order.len(), 1_000_000);
}

#[test]
fn chains_of_any_length_are_no_recursion() {
    let parts = numbered(|number| format!("part p{number} {{\nplay p{}\n}}\n", number + 1));
    let last = parts.matches("part").count();
    let tail =
        format!("part p{last} {{\ncue 1:2 hold 1 ms\n}}\nrepeat 1000000 {{ play p0 }}\nloop\n");
    let (show, findings) = read(
        "a chain of parts",
        &format!("usual morph 1 ms\n{}{tail}", parts),
    );
    assert_eq!(findings, []);
    assert_eq!(show.order.len(), 1_000_000);

    let figures = numbered(|number| format!("figure f{number} = f{}\n", number + 1));
    let (_, findings) = read("a chain of figures", &figures);
    assert!(codes(&findings).contains(&Code::TextUnknownFigure));
    assert_eq!(
        findings
            .iter()
            .filter(|finding| finding.code == Code::TextUnknownFigure)
            .count(),
        1
    );

    let ring = figures.replacen("figure f0 = f1", "figure f0 = f0", 1);
    let (_, findings) = read("a ring of one figure", &ring);
    assert!(codes(&findings).contains(&Code::TextCircular));
}

#[test]
fn help_does_not_cost_more_than_reading() {
    let text =
        numbered(|number| format!("figure wave{number} = rose 5/3\ncue wvae{number} hold 1 s\n"));
    let (_, findings) = read("many unknown names", &text);
    assert!(codes(&findings).contains(&Code::TextUnknownFigure));
    let long = format!("cue {}\n", "n".repeat(100_000));
    let text = filled("figure wave = rose 5/3\n", &long);
    let (_, findings) = read("long unknown names", &text);
    assert!(findings.iter().all(|finding| finding.message.len() < 500));
}

#[test]
fn blocks_stand_at_most_sixty_four_deep() {
    let nested = |deep: usize| {
        format!(
            "{}cue 1:2 hold 1 ms\n{}loop\n",
            "repeat 1 {\n".repeat(deep),
            "}\n".repeat(deep)
        )
    };
    let (show, findings) = read("64 deep", &nested(64));
    assert_eq!(findings, []);
    assert_eq!(show.order, [0]);
    let (_, findings) = read("65 deep", &nested(65));
    assert_eq!(codes(&findings), [Code::TextTooMuch]);
    assert_eq!(findings.len(), 1);
    let (_, findings) = read("far too deep", &filled("", "repeat 1 {\n"));
    assert!(codes(&findings).contains(&Code::TextTooMuch));
}
