//! The run sheet as text for paper: at most 100 columns, a box to tick for each step, one block a cue.

use super::words::{self, clock, duration, peak_clock, short};
use super::{Entry, Kind, Sheet, named};
use crate::check::Peak;
use crate::exact::{Rational, Ticks, whole};
use crate::finding::render::{counted, printable};
use crate::rig::{Projection, RotorId};
use std::io::{self, Write};
use textwrap::{Options, WordSplitter};

/// What fits on a sheet of paper in a small fixed-width type.
const WIDTH: usize = 100;
/// The column at which the words of a cue begin.
const INDENT: &str = "       ";

/// How to read what follows.
const TIMES: &str = "Times are hours:minutes:seconds. Table time counts from row 0, show time from the end of the run-up. \
     `peak` is the highest use of each limit of a motor, in the morph and the hold together, and the table time at \
     which it happens.";

pub(super) fn write(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    write_head(sheet, out)?;
    writeln!(out, "THE SHOW")?;
    paragraph(out, "", TIMES)?;
    writeln!(out)?;
    writeln!(out, "   no  table time    show time     what")?;
    writeln!(out, "{}", "-".repeat(WIDTH))?;
    for entry in sheet.entries() {
        match entry.kind {
            Kind::Cue => write_cue(sheet, &entry, out)?,
            _ => write_move(sheet, &entry, out)?,
        }
        writeln!(out)?;
    }
    write_end(sheet, out)
}

fn write_head(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    let plan = sheet.plan;
    let title = plan.show.title.as_deref().unwrap_or("Untitled show");
    let rig = plan.rig.title.as_deref().unwrap_or("untitled");
    paragraph(out, "", &printable(title))?;
    writeln!(out, "{}", "=".repeat(WIDTH))?;
    let run = duration(&sheet.table_time(plan.total()));
    let round = match (sheet.round(), plan.loop_start()) {
        (Some(round), Some(start)) => format!(
            "{}, from {} on, again and again",
            duration(&sheet.table_time(round)),
            clock(&sheet.table_time(start))
        ),
        _ => "none; it ends at rest".to_owned(),
    };
    let rows = format!(
        "{} ({} rows, one each {})",
        sheet.table_id,
        plan.rows(),
        tick(sheet)
    );
    for (label, value) in [
        ("rig", printable(rig).into_owned()),
        ("table", rows),
        ("run length", run),
        ("loop length", round),
    ] {
        paragraph(out, &format!("{label:<14}"), &value)?;
    }
    for size in words::sizes(sheet) {
        paragraph(out, &format!("{:<14}", "size"), &size)?;
    }
    for gear in words::gears(sheet) {
        paragraph(out, &format!("{:<14}", "gear"), &gear)?;
    }
    section(out, "BEFORE THE START")?;
    for step in words::before(sheet) {
        paragraph(out, "[ ] ", &step)?;
    }
    section(out, "AFTER A STOP OR A LOSS OF POWER")?;
    paragraph(out, "[ ] ", &words::after_stop(sheet))?;
    section(out, "CAUTIONS")?;
    for caution in words::CAUTIONS {
        paragraph(out, "  ! ", caution)?;
    }
    for remark in &sheet.remarks.general {
        paragraph(out, "  ! ", &printable(remark))?;
    }
    writeln!(out)
}

fn tick(sheet: &Sheet<'_>) -> String {
    let milliseconds = sheet.plan.tick().value() * whole(1000);
    format!("{} ms", short(&milliseconds, 9))
}

fn section(out: &mut dyn Write, title: &str) -> io::Result<()> {
    writeln!(out, "\n{title}")
}

/// Words wrapped at [`WIDTH`], the lines after the first under the first one's words.
fn paragraph(out: &mut dyn Write, lead: &str, words: &str) -> io::Result<()> {
    let hanging = " ".repeat(lead.chars().count());
    let options = Options::new(WIDTH)
        .initial_indent(lead)
        .subsequent_indent(&hanging)
        .word_splitter(WordSplitter::NoHyphenation);
    for line in textwrap::wrap(words, options) {
        writeln!(out, "{}", line.trim_end())?;
    }
    Ok(())
}

/// `    3  0:00:37.000   0:00:25.000   `
fn lead(sheet: &Sheet<'_>, number: &str, tick: Ticks) -> String {
    let table = clock(&sheet.table_time(tick));
    let show = clock(&sheet.show_time(tick));
    format!("{number:>5}  {table:<12}  {show:<12}  ")
}

fn write_move(sheet: &Sheet<'_>, entry: &Entry<'_>, out: &mut dyn Write) -> io::Result<()> {
    let what = match entry.kind {
        Kind::RunUp => "run-up from rest",
        Kind::Loop => "back to cue 1",
        Kind::RunDown => "run-down to rest",
        Kind::Cue => "",
    };
    let how = entry
        .morph
        .map(|(transition, ticks)| words::transition(transition, &sheet.table_time(ticks)));
    let number = entry.number.to_string();
    let words = format!("{what}, {}", how.unwrap_or_default());
    paragraph(out, &lead(sheet, &number, entry.start), &words)?;
    write_peaks(entry, out)
}

fn write_cue(sheet: &Sheet<'_>, entry: &Entry<'_>, out: &mut dyn Write) -> io::Result<()> {
    let number = entry.number.to_string();
    let Some(cue) = entry.cue else { return Ok(()) };
    let name = cue
        .name
        .as_deref()
        .map(|name| format!("\"{}\"", printable(name)));
    if let Some((transition, ticks)) = entry.morph {
        let how = words::transition(transition, &sheet.table_time(ticks));
        paragraph(
            out,
            &lead(sheet, &number, entry.start),
            &format!("morph {how}"),
        )?;
    }
    let number = if entry.morph.is_some() {
        ""
    } else {
        number.as_str()
    };
    let standing = entry.hold.map_or_else(String::new, |(_, ticks)| {
        format!(" for {}", duration(&sheet.table_time(ticks)))
    });
    let written = printable(&cue.figure.written).into_owned();
    paragraph(
        out,
        &lead(sheet, number, entry.stands()),
        &format!("{written} stands{standing}"),
    )?;
    if let Some(name) = name {
        paragraph(out, INDENT, &name)?;
    }
    paragraph(out, INDENT, &figure(sheet, entry).join("; "))?;
    paragraph(out, INDENT, &light(sheet, entry).join("; "))?;
    write_peaks(entry, out)?;
    for remark in sheet.remarks.of(cue.place) {
        paragraph(out, &format!("{INDENT}! "), &printable(remark))?;
    }
    Ok(())
}

/// Ratio, lobes, repeat rate, motor speeds.
fn figure(sheet: &Sheet<'_>, entry: &Entry<'_>) -> Vec<String> {
    let mut parts = Vec::new();
    if let Some(cue) = entry.cue {
        let ratio = cue.figure.ratio;
        parts.push(format!("mirrors {ratio}"));
        if sheet.plan.rig.projection == Projection::Circular {
            let circle = ratio.lobes() == 0 || ratio.p() == 0 || ratio.q() == 0;
            parts.push(if circle {
                "a circle".to_owned()
            } else {
                counted(ratio.lobes() as usize, "lobe")
            });
        }
    }
    if let Some(speeds) = entry.speeds {
        parts.push(format!("{} Hz", short(speeds.repeat.value(), 3)));
        let rpm = |value: &Rational| short(value, 3);
        parts.push(format!(
            "motors a {} rpm, b {} rpm",
            rpm(&speeds.motor.a.rpm()),
            rpm(&speeds.motor.b.rpm())
        ));
    }
    parts
}

/// Pose, spin, beam, line of the show file.
fn light(sheet: &Sheet<'_>, entry: &Entry<'_>) -> Vec<String> {
    let mut parts = Vec::new();
    parts.push(match (&entry.pose, &entry.off_marks) {
        (Some(pose), Some(off)) => {
            let (pose, off) = (short(pose, 4), short(off, 4));
            format!("pose {pose} deg ({off} deg off the marks turns it by 1 deg)")
        }
        _ => "pose left free".to_owned(),
    });
    if let Some(cue) = entry.cue {
        if !cue.spin.is_zero() {
            let spin = cue.spin.value() * whole(360);
            parts.push(format!("spin {} deg/s", short(&spin, 4)));
        }
        let beam = &cue.beam * whole(100);
        parts.push(if cue.beam == whole(0) {
            "beam off".to_owned()
        } else {
            format!("beam {} %", short(&beam, 2))
        });
    }
    parts.push(format!("line {}", entry.line));
    // A crossed rig has no lobe to point anywhere: its pose is the phase between the two swings.
    if sheet.plan.rig.projection == Projection::Crossed {
        parts.iter_mut().for_each(|part| {
            if let Some(rest) = part.strip_prefix("pose ") {
                *part = format!("relative phase {rest}");
            }
        });
    }
    parts
}

/// One line a rotor: how much of each limit is used at most, and when.
fn write_peaks(entry: &Entry<'_>, out: &mut dyn Write) -> io::Result<()> {
    for id in RotorId::BOTH {
        let used: Vec<String> = named(entry.peaks.of(id))
            .iter()
            .filter_map(|(name, peak)| peak.as_ref().map(|peak| one_peak(name, peak)))
            .collect();
        let (name, used) = (id.name(), used.join("   "));
        writeln!(out, "{INDENT}peak {name}  {}", used.trim_end())?;
    }
    Ok(())
}

/// `speed  90.0 %  0:00:37.2`
fn one_peak(name: &str, peak: &Peak) -> String {
    let percent = peak.share * 100.0;
    if percent < 0.05 {
        return format!("{name}    none  {:9}", "");
    }
    format!("{name} {percent:>5.1} %  {:>9}", peak_clock(peak.at_s))
}

fn write_end(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    writeln!(out, "{}", "-".repeat(WIDTH))?;
    let end = Ticks(sheet.plan.total().0);
    let what = if sheet.round().is_some() {
        "again from cue 1"
    } else {
        "at rest"
    };
    writeln!(out, "{}{what}", lead(sheet, "", end))
}
