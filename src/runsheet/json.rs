//! The run sheet as one JSON object, an entry a line.
//!
//! Numbers are exact decimals where twelve places are enough, else rounded to them. What the rig does not tell, or the
//! program does not know yet, is null. Times end in `_s`: seconds from row 0, `show_s` from the end of the run-up.

use super::words::{self, exact, moment, share};
use super::{Entry, Kind, Sheet, named};
use crate::check::{Peak, Peaks};
use crate::exact::{Rational, Ticks};
use crate::rig::{Pair, Projection};
use crate::setpoint::Sizes;
use serde::Serialize;
use serde_json::value::RawValue;
use std::io::{self, Write};

/// A number in JSON with exactly the digits it is given.
#[derive(Serialize)]
#[serde(transparent)]
struct Number(Box<RawValue>);

impl Number {
    fn new(digits: String) -> Option<Self> {
        RawValue::from_string(digits).ok().map(Self)
    }
    fn of(value: &Rational) -> Option<Self> {
        Self::new(exact(value))
    }
}

#[derive(Serialize)]
struct CueEntry<'p> {
    cue: u32,
    name: Option<&'p str>,
    line: usize,
    figure: Option<&'p str>,
    ratio: Option<[i32; 2]>,
    lobes: Option<u32>,
    repeat_hz: Option<Number>,
    start_s: Option<Number>,
    show_s: Option<Number>,
    stands_s: Option<Number>,
    morph_s: Option<Number>,
    law: Option<String>,
    dark: bool,
    hold_s: Option<Number>,
    a_rpm: Option<Number>,
    b_rpm: Option<Number>,
    pose_deg: Option<Number>,
    off_marks_deg: Option<Number>,
    beam: Option<Number>,
    peaks: PeakValues,
    peaks_at_s: PeakValues,
    cautions: &'p [String],
}

#[derive(Serialize)]
struct MoveEntry {
    cue: u32,
    line: usize,
    start_s: Option<Number>,
    show_s: Option<Number>,
    morph_s: Option<Number>,
    law: Option<String>,
    dark: bool,
    peaks: PeakValues,
    peaks_at_s: PeakValues,
}

#[derive(Serialize)]
struct PeakValues {
    a_speed: Option<Number>,
    a_acceleration: Option<Number>,
    a_jerk: Option<Number>,
    a_torque: Option<Number>,
    b_speed: Option<Number>,
    b_acceleration: Option<Number>,
    b_jerk: Option<Number>,
    b_torque: Option<Number>,
}

/// What the table takes in each form; null where nobody would wait for it, or no such table is written.
#[derive(Serialize)]
struct Bytes {
    csv: Option<u64>,
    json: Option<u64>,
    c: Option<u64>,
    pack: Option<u64>,
    json_knots: Option<u64>,
    c_knots: u64,
    pack_knots: u64,
}

impl From<Sizes> for Bytes {
    fn from(sizes: Sizes) -> Self {
        Self {
            csv: sizes.csv,
            json: sizes.json,
            c: sizes.rows.map(|rows| rows.c),
            pack: sizes.rows.map(|rows| rows.pack),
            json_knots: sizes.json_knots,
            c_knots: sizes.knots.c,
            pack_knots: sizes.knots.pack,
        }
    }
}

#[derive(Serialize)]
struct Laser {
    class: Option<String>,
    nohd_m: Option<Number>,
}

#[derive(Serialize)]
struct Before<'s> {
    steps: &'s [String],
    after_a_stop: String,
    gears: &'s [String],
}

pub(super) fn write(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    let plan = sheet.plan;
    let time = |tick: Ticks| Number::of(sheet.table_time(tick).value());
    writeln!(out, "{{")?;
    line(out, "title", &plan.show.title)?;
    line(out, "rig", &plan.rig.title)?;
    line(out, "table_id", &sheet.table_id)?;
    line(out, "tick_s", &Number::of(plan.tick().value()))?;
    line(out, "run_s", &time(plan.total()))?;
    line(out, "loop_s", &sheet.round().and_then(time))?;
    line(out, "loop_start_s", &plan.loop_start().and_then(time))?;
    line(out, "bytes", &sheet.sizes.map(Bytes::from))?;
    let before = Before {
        steps: &words::before(sheet),
        after_a_stop: words::after_stop(sheet),
        gears: &words::gears(sheet),
    };
    line(out, "before", &before)?;
    line(out, "cautions", &words::CAUTIONS)?;
    line(out, "remarks", &sheet.remarks.general)?;
    let laser = Laser {
        class: None,
        nohd_m: None,
    };
    line(out, "laser", &laser)?;
    write_entries(sheet, out)?;
    writeln!(out, "}}")
}

fn line(out: &mut dyn Write, key: &str, value: &impl Serialize) -> io::Result<()> {
    write!(out, "\"{key}\": ")?;
    serde_json::to_writer(&mut *out, value)?;
    writeln!(out, ",")
}

/// The run-up, the cues, and `ending`: the loop's morph or the run-down.
fn write_entries(sheet: &Sheet<'_>, out: &mut dyn Write) -> io::Result<()> {
    let mut first = true;
    for entry in sheet.entries() {
        match entry.kind {
            Kind::RunUp => {
                line(out, "run_up", &move_entry(sheet, &entry))?;
                write!(out, "\"cues\": [")?;
            }
            Kind::Cue => {
                writeln!(out, "{}", if first { "" } else { "," })?;
                first = false;
                serde_json::to_writer(&mut *out, &cue_entry(sheet, &entry))?;
            }
            Kind::Loop | Kind::RunDown => {
                write!(out, "\n],\n\"ending\": ")?;
                serde_json::to_writer(&mut *out, &move_entry(sheet, &entry))?;
                writeln!(out)?;
            }
        }
    }
    Ok(())
}

fn cue_entry<'p>(sheet: &'p Sheet<'p>, entry: &Entry<'p>) -> CueEntry<'p> {
    let figure = entry.cue.map(|cue| &cue.figure);
    let speeds = entry.speeds;
    let circular = sheet.plan.rig.projection == Projection::Circular;
    let time = |ticks: Ticks| Number::of(sheet.table_time(ticks).value());
    CueEntry {
        cue: entry.number,
        name: entry.cue.and_then(|cue| cue.name.as_deref()),
        line: entry.line,
        figure: figure.map(|figure| figure.written.as_str()),
        ratio: figure.map(|figure| [figure.ratio.p(), figure.ratio.q()]),
        lobes: figure
            .filter(|_| circular)
            .map(|figure| figure.ratio.lobes()),
        repeat_hz: speeds.and_then(|speeds| Number::of(speeds.repeat.value())),
        start_s: time(entry.start),
        show_s: Number::of(sheet.show_time(entry.start).value()),
        stands_s: time(entry.stands()),
        morph_s: time(entry.morph.map_or(Ticks(0), |(_, ticks)| ticks)),
        law: entry
            .morph
            .map(|(transition, _)| words::law(&transition.law)),
        dark: entry.morph.is_some_and(|(transition, _)| transition.dark),
        hold_s: entry.hold.and_then(|(_, ticks)| time(ticks)),
        a_rpm: speeds.and_then(|speeds| Number::of(&speeds.motor.a.rpm())),
        b_rpm: speeds.and_then(|speeds| Number::of(&speeds.motor.b.rpm())),
        pose_deg: entry.pose.as_ref().and_then(Number::of),
        off_marks_deg: entry.off_marks.as_ref().and_then(Number::of),
        beam: entry.cue.and_then(|cue| Number::of(&cue.beam)),
        peaks: peak_values(&entry.peaks, |peak| share(peak.share)),
        peaks_at_s: peak_values(&entry.peaks, |peak| moment(peak.at_s)),
        cautions: entry.cue.map_or(&[], |cue| sheet.remarks.of(cue.place)),
    }
}

fn move_entry(sheet: &Sheet<'_>, entry: &Entry<'_>) -> MoveEntry {
    let time = |ticks: Ticks| Number::of(sheet.table_time(ticks).value());
    MoveEntry {
        cue: entry.number,
        line: entry.line,
        start_s: time(entry.start),
        show_s: Number::of(sheet.show_time(entry.start).value()),
        morph_s: entry.morph.and_then(|(_, ticks)| time(ticks)),
        law: entry
            .morph
            .map(|(transition, _)| words::law(&transition.law)),
        dark: entry.morph.is_some_and(|(transition, _)| transition.dark),
        peaks: peak_values(&entry.peaks, |peak| share(peak.share)),
        peaks_at_s: peak_values(&entry.peaks, |peak| moment(peak.at_s)),
    }
}

fn peak_values(peaks: &Pair<Peaks>, written: impl Fn(&Peak) -> String) -> PeakValues {
    let value = |peak: Option<Peak>| peak.and_then(|peak| Number::new(written(&peak)));
    let [a_speed, a_acceleration, a_jerk] = named(&peaks.a).map(|(_, peak)| value(peak));
    let [b_speed, b_acceleration, b_jerk] = named(&peaks.b).map(|(_, peak)| value(peak));
    PeakValues {
        a_speed,
        a_acceleration,
        a_jerk,
        a_torque: None,
        b_speed,
        b_acceleration,
        b_jerk,
        b_torque: None,
    }
}
