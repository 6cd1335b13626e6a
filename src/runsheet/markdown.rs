//! The run sheet as Markdown: headings, lists to tick, and one table with a row a cue.

use super::words::{self, clock, duration, short};
use super::{Entry, Kind, Sheet, named};
use crate::check::{Peak, Peaks};
use crate::exact::whole;
use crate::finding::render::printable;
use crate::rig::Projection;
use std::io::{self, Write};

const COLUMNS: [&str; 15] = [
    "no",
    "table time",
    "show time",
    "morph",
    "stands from",
    "hold",
    "figure",
    "mirrors",
    "lobes",
    "repeat, Hz",
    "motor a, rpm",
    "motor b, rpm",
    "pose, deg",
    "beam, %",
    "remarks",
];

pub(super) fn write(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    write_head(sheet, out)?;
    writeln!(out, "## The show\n")?;
    writeln!(
        out,
        "Times are hours, minutes, seconds: table time counts from row 0, show time from the end of the run-up.\n"
    )?;
    row(out, &COLUMNS.map(str::to_owned))?;
    row(out, &COLUMNS.map(|_| "---".to_owned()))?;
    for entry in sheet.entries() {
        row(out, &cells(sheet, &entry))?;
    }
    writeln!(out, "\n## Peak use of the limits\n")?;
    writeln!(
        out,
        "In % of the limit, and the table time in seconds at which it happens.\n"
    )?;
    let head = [
        "no",
        "a speed",
        "a acceleration",
        "a jerk",
        "b speed",
        "b acceleration",
        "b jerk",
    ];
    row(out, &head.map(str::to_owned))?;
    row(out, &head.map(|_| "---".to_owned()))?;
    for entry in sheet.entries() {
        let (a, b) = (peaks(&entry.peaks.a), peaks(&entry.peaks.b));
        let cells: Vec<String> = std::iter::once(number(&entry)).chain(a).chain(b).collect();
        row(out, &cells)?;
    }
    Ok(())
}

fn write_head(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    let plan = sheet.plan;
    let title = plan.show.title.as_deref().unwrap_or("Untitled show");
    let rig = plan.rig.title.as_deref().unwrap_or("untitled");
    writeln!(out, "# {}\n", escaped(title))?;
    writeln!(out, "- Rig: {}", escaped(rig))?;
    let tick = short(&(plan.tick().value() * whole(1000)), 9);
    writeln!(
        out,
        "- Table: `{}`, {} rows, one each {tick} ms",
        sheet.table_id,
        plan.rows()
    )?;
    writeln!(
        out,
        "- Run length: {}",
        duration(&sheet.table_time(plan.total()))
    )?;
    match (sheet.round(), plan.loop_start()) {
        (Some(round), Some(start)) => writeln!(
            out,
            "- Loop length: {}, from {} on",
            duration(&sheet.table_time(round)),
            clock(&sheet.table_time(start))
        )?,
        _ => writeln!(out, "- Loop length: none; it ends at rest")?,
    }
    for size in words::sizes(sheet) {
        writeln!(out, "- Size {size}")?;
    }
    for gear in words::gears(sheet) {
        writeln!(out, "- {gear}")?;
    }
    writeln!(out, "\n## Before the start\n")?;
    for step in words::before(sheet) {
        writeln!(out, "- [ ] {step}")?;
    }
    writeln!(out, "\n## After a stop or a loss of power\n")?;
    writeln!(out, "- [ ] {}", words::after_stop(sheet))?;
    writeln!(out, "\n## Cautions\n")?;
    for caution in words::CAUTIONS {
        writeln!(out, "- {caution}")?;
    }
    for remark in &sheet.remarks.general {
        writeln!(out, "- {}", escaped(remark))?;
    }
    writeln!(out)
}

fn row(out: &mut dyn Write, cells: &[String]) -> io::Result<()> {
    writeln!(out, "| {} |", cells.join(" | "))
}

fn number(entry: &Entry<'_>) -> String {
    match entry.kind {
        Kind::Cue => entry.number.to_string(),
        other => other.word().to_owned(),
    }
}

fn cells(sheet: &Sheet<'_>, entry: &Entry<'_>) -> Vec<String> {
    let figure = entry.cue.map(|cue| &cue.figure);
    let circular = sheet.plan.rig.projection == Projection::Circular;
    let how = entry
        .morph
        .map(|(transition, ticks)| words::transition(transition, &sheet.table_time(ticks)));
    let stands = entry.hold.map(|(start, _)| clock(&sheet.table_time(start)));
    let hold = entry
        .hold
        .map(|(_, ticks)| duration(&sheet.table_time(ticks)));
    let lobes = figure
        .filter(|_| circular)
        .map(|figure| figure.ratio.lobes().to_string());
    let cells = [
        Some(number(entry)),
        Some(clock(&sheet.table_time(entry.start))),
        Some(clock(&sheet.show_time(entry.start))),
        how,
        stands,
        hold,
        figure.map(|figure| escaped(&figure.written)),
        figure.map(|figure| figure.ratio.to_string()),
        lobes,
        entry.speeds.map(|speeds| short(speeds.repeat.value(), 3)),
        entry.speeds.map(|speeds| short(&speeds.motor.a.rpm(), 3)),
        entry.speeds.map(|speeds| short(&speeds.motor.b.rpm(), 3)),
        entry.pose.as_ref().map(|pose| short(pose, 4)),
        entry.cue.map(|cue| short(&(&cue.beam * whole(100)), 2)),
        entry.cue.map(|_| remarks(sheet, entry)),
    ];
    cells.into_iter().map(Option::unwrap_or_default).collect()
}

/// Name, spin, source line and warnings of a cue.
fn remarks(sheet: &Sheet<'_>, entry: &Entry<'_>) -> String {
    let mut parts = Vec::new();
    if let Some(cue) = entry.cue {
        parts.extend(cue.name.as_deref().map(escaped));
        if !cue.spin.is_zero() {
            let spin = cue.spin.value() * whole(360);
            parts.push(format!("spin {} deg/s", short(&spin, 4)));
        }
        parts.push(format!("line {}", entry.line));
        parts.extend(
            sheet
                .remarks
                .of(cue.place)
                .iter()
                .map(|remark| escaped(remark)),
        );
    }
    parts.join("; ")
}

fn peaks(peaks: &Peaks) -> [String; 3] {
    named(peaks).map(|(_, peak)| {
        let written = |peak: Peak| format!("{:.1} at {:.3}", peak.share * 100.0, peak.at_s);
        peak.map(written).unwrap_or_default()
    })
}

/// Text in which nothing is taken for Markdown or HTML.
fn escaped(text: &str) -> String {
    let mut out = String::new();
    for sign in printable(text).chars() {
        if matches!(
            sign,
            '\\' | '`' | '*' | '_' | '[' | ']' | '<' | '>' | '|' | '#' | '&' | '~'
        ) {
            out.push('\\');
        }
        out.push(sign);
    }
    out
}
