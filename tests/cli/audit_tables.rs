//! What the audit of a table says, and how much of it.

use crate::builder::{RIG, Ran, Run, SHOW};
use serde_json::{Value, json};

/// The harbour show's table.
fn table(arguments: &[&str], name: &str) -> Vec<u8> {
    let all = [&["compile", "harbour.show", "-o", name], arguments].concat();
    Run::new(&all).with_harbour().run().bytes(name)
}

fn text(arguments: &[&str], name: &str) -> String {
    String::from_utf8(table(arguments, name)).unwrap()
}

fn audited(arguments: &[&str], name: &str, content: impl AsRef<[u8]>) -> Ran {
    let all = [&["audit", name, "--show", "harbour.show"], arguments].concat();
    Run::new(&all).with_harbour().with(name, content).run()
}

fn json_of(ran: &Ran) -> Value {
    serde_json::from_str(&ran.stdout).unwrap()
}

#[test]
fn knots_say_within_how_many_counts_they_are() {
    let one = text(&["--knots"], "t.json");
    audited(&[], "t.json", &one).says(
        0,
        &["ticks in knots, each within 1 count, as planned\n"],
        &[],
    );
    // A table that says it is less exact than it is, is not the one that was written.
    let claimed = one.replace("\"knots\":{\"tolerance\":1,", "\"knots\":{\"tolerance\":9,");
    audited(&[], "t.json", &claimed).says(1, &["crc32"], &[]);
    let wider = text(&["--knots", "within", "9", "counts"], "t.json");
    audited(&[], "t.json", &wider).says(0, &["each within 9 counts, as planned\n"], &[]);
    let value = json_of(&audited(&["--form", "json"], "t.json", &wider));
    assert_eq!(value["tolerance"], 9);
    let value = json_of(&audited(&["--form", "json"], "t.csv", table(&[], "t.csv")));
    assert_eq!(value["tolerance"], Value::Null);
    audited(&[], "t.pack", table(&["--knots"], "t.pack")).says(0, &["each within 1 count,"], &[]);
}

#[test]
fn a_tolerance_that_no_table_has_is_refused() {
    let one = text(&["--knots"], "t.json");
    for stated in ["0", "65536", "4294967297", "-1", "many"] {
        let wrong = one.replace(
            "\"knots\":{\"tolerance\":1,",
            &format!("\"knots\":{{\"tolerance\":{stated},"),
        );
        let why = format!("within `{stated}` counts");
        audited(&[], "t.json", &wrong).says(1, &[], &[&why, "1 to 65535"]);
        let ran = audited(&["--form", "json"], "t.json", &wrong);
        let value = json_of(&ran);
        assert_eq!((ran.code, &value["differences"]), (1, &json!(1)));
        assert!(
            value["problems"][0]["found"]
                .as_str()
                .unwrap()
                .contains(&why)
        );
    }
}

#[test]
fn one_difference_is_one() {
    let one = text(&[], "t.json");
    let wrong = one.replace("\"counts\":4096", "\"counts\":4097");
    assert_ne!(one, wrong);
    let wrong = wrong.replacen("\"counts\":4097", "\"counts\":4096", 1);
    audited(&[], "t.json", &wrong).says(
        1,
        &[
            "head, rotor_b.counts: wanted 4096, found 4097\n",
            " 1 difference from table ",
        ],
        &[],
    );
}

#[test]
fn a_table_of_another_show_is_called_so_first() {
    let other = SHOW.replace("hold 20 s", "hold 10 s");
    let ids = |show: &str| {
        let ran = Run::new(&["compile", "harbour.show"])
            .with("north-wall.rig", RIG)
            .with("harbour.show", show)
            .run();
        ran.stdout.split_once("table ").unwrap().1[..8].to_owned()
    };
    let line = format!(
        "this is table {}, harbour.show makes {}: another show or rig, or compiled with `--from K`\n",
        ids(&other),
        ids(SHOW)
    );
    for (name, knots) in [
        ("t.json", false),
        ("t.json", true),
        ("t.pack", true),
        ("t.h", true),
    ] {
        let mut arguments = vec!["compile", "harbour.show", "-o", name];
        if knots {
            arguments.push("--knots");
        }
        let made = Run::new(&arguments)
            .with("north-wall.rig", RIG)
            .with("harbour.show", &other)
            .run();
        let ran = audited(&[], name, made.bytes(name));
        let first = ran.stdout.lines().next().unwrap().to_owned() + "\n";
        assert!(first.ends_with(&line), "{first}{line}");
        assert_eq!(ran.code, 1);
        let value = json_of(&audited(&["--form", "json"], name, made.bytes(name)));
        assert_eq!(value["carries"], json!(ids(&other)));
        assert_eq!(value["table"], json!(ids(SHOW)));
    }
    let made = Run::new(&["compile", "harbour.show", "--from", "2", "-o", "t.csv"])
        .with_harbour()
        .run();
    audited(&[], "t.csv", made.bytes("t.csv")).says(1, &["compiled with `--from K`?"], &[]);
}

#[test]
fn rows_of_a_shorter_show_are_counted_without_the_end_of_the_document() {
    let other = SHOW.replace("hold 20 s", "hold 10 s");
    let made = Run::new(&["compile", "harbour.show", "-o", "t.json"])
        .with("north-wall.rig", RIG)
        .with("harbour.show", &other)
        .run();
    let content = made.file("t.json").unwrap();
    let (_, rows) = content.split_once("\"rows\":[\n").unwrap();
    let rows = rows.lines().count() - 1;
    let value = json_of(&audited(&["--form", "json"], "t.json", &content));
    assert_eq!(value["rows"], json!(rows));
}

#[test]
fn a_comment_more_in_the_show_changes_no_set_point() {
    for knots in [&[][..], &["--knots"]] {
        let made = text(knots, "t.json");
        let ran = Run::new(&["audit", "t.json", "--show", "harbour.show"])
            .with("north-wall.rig", RIG)
            .with("harbour.show", format!("# later\n{SHOW}"))
            .with("t.json", made)
            .run();
        ran.says(
            1,
            &[
                "head, show.sha256: wanted `",
                "is played as planned; 1 difference in what it tells",
            ],
            &[],
        );
        assert!(!ran.stdout.contains("must not"), "{}", ran.stdout);
    }
}

#[test]
fn a_wrong_number_in_the_head_of_a_pack_is_named_in_plain_words() {
    let made = table(&["--knots"], "t.pack");
    let other = SHOW.replace("morph 4 s hold", "morph 5 s hold");
    let longer = Run::new(&["compile", "harbour.show", "--knots", "-o", "t.pack"])
        .with("north-wall.rig", RIG)
        .with("harbour.show", other)
        .run()
        .bytes("t.pack");
    assert_ne!(made, longer);
    let ran = audited(&[], "t.pack", longer);
    assert!(ran.stdout.contains("head, rows: wanted "), "{}", ran.stdout);
    assert!(
        !ran.stdout.contains("Some(") && !ran.stdout.contains("PackRotor"),
        "{}",
        ran.stdout
    );
}

#[test]
fn one_wrong_byte_of_a_header_is_located() {
    let made = text(&["--knots"], "t.h");
    let player = made
        .lines()
        .position(|line| line.contains("phw_tick("))
        .unwrap();
    let lines: Vec<&str> = made.lines().collect();
    let column = lines[player].find("phw_tick").unwrap() + 5;
    let wrong_line = lines[player].replacen("phw_tick", "phw_pick", 1);
    let wrong = made.replacen(lines[player], &wrong_line, 1);
    let place = format!("header, line {} column {column}: wanted `", player + 1);
    let ran = audited(&[], "t.h", &wrong);
    ran.says(
        1,
        &[&place, "phw_tick", "phw_pick", " 1 difference from"],
        &[],
    );
    assert!(!ran.stdout.contains("ends early"), "{}", ran.stdout);
    let wrong = made.replacen("_table_size ", "_table_sise ", 1);
    let at = wrong
        .lines()
        .position(|line| line.contains("_table_sise"))
        .unwrap();
    let place = format!("header, line {} column ", at + 1);
    audited(&[], "t.h", &wrong).says(1, &[&place], &[]);
    let at = made
        .lines()
        .position(|line| line.starts_with("    0x"))
        .unwrap()
        + 10;
    let mut lines: Vec<String> = made.lines().map(str::to_owned).collect();
    lines[at - 1] = lines[at - 1].replacen("0x", "0y", 1);
    let place = format!("header, line {at}: wanted bytes of the table");
    audited(&[], "t.h", lines.join("\n") + "\n").says(1, &[&place], &[]);
}

#[test]
fn a_folder_that_is_not_there_is_named_and_no_file_beside_the_target() {
    let ran = Run::new(&["compile", "harbour.show", "-o", "nowhere/t.csv"])
        .with_harbour()
        .run();
    assert_eq!(ran.code, 1);
    assert!(ran.stderr.contains("nowhere/t.csv"), "{}", ran.stderr);
    assert!(!ran.stderr.contains(".part"), "{}", ran.stderr);
}

#[test]
fn a_head_that_is_no_json_is_not_called_as_planned() {
    // Rows: no checksum tells it there.
    let made = text(&[], "t.json");
    let program = made.lines().nth(2).unwrap();
    assert!(program.starts_with("\"program\":"));
    for wrong in [
        made.replacen(program, program.trim_end_matches(','), 1),
        made.replacen("\"sha256\":", "\"sha\":", 1),
        made.replacen(
            "\"findings\":[\n",
            "\"findings\":[\n{\"code\":\"bogus\"}\n",
            1,
        ),
    ] {
        assert_ne!(wrong, made);
        audited(&[], "t.json", &wrong).says(1, &["it must not be played"], &[]);
    }
}
