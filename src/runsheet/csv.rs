//! The run sheet as CSV (RFC 4180): one header line, one line a cue, LF; empty fields where JSON has null.

use super::words::{self, exact, moment, share};
use super::{Entry, Kind, Sheet, named};
use crate::check::Peak;
use crate::exact::Ticks;
use crate::rig::{Projection, RotorId};
use std::io::{self, Write};

const COLUMNS: [&str; 33] = [
    "cue",
    "name",
    "line",
    "figure",
    "p",
    "q",
    "lobes",
    "repeat_hz",
    "start_s",
    "show_s",
    "stands_s",
    "morph_s",
    "law",
    "dark",
    "hold_s",
    "a_rpm",
    "b_rpm",
    "pose_deg",
    "off_marks_deg",
    "beam",
    "a_speed",
    "a_speed_at_s",
    "a_acceleration",
    "a_acceleration_at_s",
    "a_jerk",
    "a_jerk_at_s",
    "b_speed",
    "b_speed_at_s",
    "b_acceleration",
    "b_acceleration_at_s",
    "b_jerk",
    "b_jerk_at_s",
    "cautions",
];

pub(super) fn write(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    writeln!(out, "{}", COLUMNS.join(","))?;
    for entry in sheet.entries().filter(|entry| entry.kind == Kind::Cue) {
        let fields: Vec<String> = fields(sheet, &entry)
            .iter()
            .map(|text| field(text))
            .collect();
        writeln!(out, "{}", fields.join(","))?;
    }
    Ok(())
}

/// A field as RFC 4180 writes it: in quotation marks where it needs them.
fn field(text: &str) -> String {
    if text.contains([',', '"', '\n', '\r']) {
        format!("\"{}\"", text.replace('"', "\"\""))
    } else {
        text.to_owned()
    }
}

fn fields(sheet: &Sheet<'_>, entry: &Entry<'_>) -> Vec<String> {
    let time = |ticks: Ticks| exact(sheet.table_time(ticks).value());
    let figure = entry.cue.map(|cue| &cue.figure);
    let circular = sheet.plan.rig.projection == Projection::Circular;
    let mut fields = vec![
        entry.number.to_string(),
        or_empty(entry.cue.and_then(|cue| cue.name.clone())),
        entry.line.to_string(),
        or_empty(figure.map(|figure| figure.written.clone())),
        or_empty(figure.map(|figure| figure.ratio.p().to_string())),
        or_empty(figure.map(|figure| figure.ratio.q().to_string())),
        or_empty(
            figure
                .filter(|_| circular)
                .map(|figure| figure.ratio.lobes().to_string()),
        ),
        or_empty(entry.speeds.map(|speeds| exact(speeds.repeat.value()))),
        time(entry.start),
        exact(sheet.show_time(entry.start).value()),
        time(entry.stands()),
        time(entry.morph.map_or(Ticks(0), |(_, ticks)| ticks)),
        or_empty(
            entry
                .morph
                .map(|(transition, _)| words::law(&transition.law)),
        ),
        entry
            .morph
            .is_some_and(|(transition, _)| transition.dark)
            .to_string(),
        or_empty(entry.hold.map(|(_, ticks)| time(ticks))),
        or_empty(entry.speeds.map(|speeds| exact(&speeds.motor.a.rpm()))),
        or_empty(entry.speeds.map(|speeds| exact(&speeds.motor.b.rpm()))),
        or_empty(entry.pose.as_ref().map(exact)),
        or_empty(entry.off_marks.as_ref().map(exact)),
        or_empty(entry.cue.map(|cue| exact(&cue.beam))),
    ];
    for id in RotorId::BOTH {
        for (_, peak) in named(entry.peaks.of(id)) {
            fields.extend(peak_fields(peak.as_ref()));
        }
    }
    fields.push(or_empty(
        entry.cue.map(|cue| sheet.remarks.of(cue.place).join("; ")),
    ));
    fields
}

fn peak_fields(peak: Option<&Peak>) -> [String; 2] {
    [
        or_empty(peak.map(|peak| share(peak.share))),
        or_empty(peak.map(|peak| moment(peak.at_s))),
    ]
}

fn or_empty(text: Option<String>) -> String {
    text.unwrap_or_default()
}
