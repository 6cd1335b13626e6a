//! A log file as it comes from a machine, read as a stream in bounded memory.
//!
//! Kept are at most [`MOST_KEPT`] samples: when they are full, every other run of [`RUN`] samples is dropped and from then
//! on every other run is skipped, so that neighbours stay neighbours and the whole log is covered however long it is.
//! Everything that counts samples (late, lost, doubled) sees every line.

use super::cadence::Cadence;
use super::line::{Separator, Stamp, number, stamp};
use crate::rig::{Pair, RotorId};
use std::io::{self, BufRead, Read};

/// Samples kept at most.
pub(super) const MOST_KEPT: usize = 1 << 20;
/// Neighbouring samples kept together.
const RUN: u64 = 64;
/// No line of a log is longer.
const LONGEST_LINE: u64 = 4096;

/// Which of the two forms a log has.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LogKind {
    /// `time_s,a_counts,b_counts`: positions of both rotors.
    Positions,
    /// `time_s,rotor`: one line for each index pulse.
    Pulses,
}

/// One line of a log.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Sample {
    /// Seconds since the whole second of the first sample.
    pub(super) time: f64,
    /// What it tells.
    pub(super) value: Value,
    /// Whether lines before it were skipped: it is no neighbour of the sample before.
    pub(super) apart: bool,
    /// Which stretch of steady time stamps it belongs to, from 0.
    pub(super) segment: u32,
}

/// What one line tells.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Value {
    /// Counts of a and b.
    Positions(f64, f64),
    /// This rotor passed its mark.
    Pulse(RotorId),
}

/// A log as read.
#[derive(Clone, Debug)]
pub(super) struct Log {
    pub(super) kind: LogKind,
    /// The kept samples, in the order of the file.
    pub(super) samples: Vec<Sample>,
    /// Whole seconds that were taken off every time.
    pub(super) origin: i64,
    /// Lines with a sample.
    pub(super) lines: u64,
    /// The smallest difference of times that the file writes, in seconds.
    pub(super) time_step: f64,
    /// Lines that do not read, and the number of the first of them.
    pub(super) unreadable: (u64, Option<u64>),
    /// What the times of the samples tell.
    pub(super) cadence: Cadence,
}

/// Why a file is no log at all.
#[derive(Debug)]
pub enum NoLog {
    /// It could not be read.
    Io(io::Error),
    /// There is not one sample in it.
    Empty,
    /// The first line is neither a header nor a sample: this is it.
    Columns(String),
    /// More lines do not read than do; the number of the first.
    Unreadable(u64),
}

impl From<io::Error> for NoLog {
    fn from(error: io::Error) -> Self {
        NoLog::Io(error)
    }
}

/// Where in a line the values stand.
#[derive(Clone, Copy, Debug)]
struct Layout {
    separator: Separator,
    time: usize,
    columns: Columns,
}

#[derive(Clone, Copy, Debug)]
enum Columns {
    Positions(usize, usize),
    Rotor(usize),
}

impl Layout {
    fn kind(self) -> LogKind {
        match self.columns {
            Columns::Positions(..) => LogKind::Positions,
            Columns::Rotor(_) => LogKind::Pulses,
        }
    }

    /// From a header line.
    fn named(line: &str) -> Option<Self> {
        Separator::ALL.into_iter().find_map(|separator| {
            let names: Vec<String> = separator
                .fields(line)
                .iter()
                .map(|field| field.to_lowercase())
                .collect();
            let find = |name: &str| names.iter().position(|have| have == name);
            let time = find("time_s")?;
            let columns = match (find("a_counts"), find("b_counts"), find("rotor")) {
                (Some(a), Some(b), _) => Columns::Positions(a, b),
                (_, _, Some(rotor)) => Columns::Rotor(rotor),
                _ => return None,
            };
            Some(Self {
                separator,
                time,
                columns,
            })
        })
    }

    /// From a first line that is a sample already: the columns in the usual order.
    fn bare(line: &str) -> Option<Self> {
        Separator::ALL.into_iter().find_map(|separator| {
            let columns = match separator.fields(line).len() {
                2 => Columns::Rotor(1),
                3 => Columns::Positions(1, 2),
                _ => return None,
            };
            let layout = Self {
                separator,
                time: 0,
                columns,
            };
            layout.read(line).map(|_| layout)
        })
    }

    fn read(self, line: &str) -> Option<(Stamp, Value)> {
        let comma = self.separator != Separator::Comma;
        let fields = self.separator.fields(line);
        let time = stamp(fields.get(self.time)?, comma)?;
        let value = match self.columns {
            Columns::Positions(a, b) => Value::Positions(
                number(fields.get(a)?, comma)?,
                number(fields.get(b)?, comma)?,
            ),
            Columns::Rotor(at) => Value::Pulse(match fields.get(at)?.as_str() {
                "a" | "A" => RotorId::A,
                "b" | "B" => RotorId::B,
                _ => return None,
            }),
        };
        Some((time, value))
    }
}

/// Reads a log to its end.
///
/// # Errors
/// [`NoLog`] where the file is none.
pub(super) fn read(file: &mut dyn BufRead) -> Result<Log, NoLog> {
    let mut lines = Lines::new(file);
    let Some((_, first)) = lines.next_line()? else {
        return Err(NoLog::Empty);
    };
    let (layout, mut held) = match (Layout::named(&first), Layout::bare(&first)) {
        (Some(layout), _) => (layout, None),
        (None, Some(layout)) => (layout, Some(first)),
        (None, None) => return Err(NoLog::Columns(first.chars().take(80).collect())),
    };
    let mut store = Store::new(layout.kind());
    let mut unreadable = (0_u64, None);
    loop {
        let (number, line) = match held.take() {
            Some(line) => (lines.number, line),
            None => match lines.next_line()? {
                Some(found) => found,
                None => break,
            },
        };
        match layout.read(&line) {
            Some((time, value)) => store.add(time, value),
            None => {
                unreadable.0 += 1;
                unreadable.1 = unreadable.1.or(Some(number));
            }
        }
    }
    let log = store.finish(unreadable);
    match (log.lines, unreadable) {
        (0, (0, _)) => Err(NoLog::Empty),
        (good, (bad, Some(first))) if bad > good => Err(NoLog::Unreadable(first)),
        _ => Ok(log),
    }
}

/// The lines that say something: neither blank nor a comment.
struct Lines<'f> {
    file: &'f mut dyn BufRead,
    number: u64,
    bytes: Vec<u8>,
}

impl<'f> Lines<'f> {
    fn new(file: &'f mut dyn BufRead) -> Self {
        Self {
            file,
            number: 0,
            bytes: Vec::new(),
        }
    }

    fn next_line(&mut self) -> io::Result<Option<(u64, String)>> {
        loop {
            self.bytes.clear();
            let mut limited = (&mut *self.file).take(LONGEST_LINE);
            if limited.read_until(b'\n', &mut self.bytes)? == 0 {
                return Ok(None);
            }
            self.number += 1;
            if self.bytes.last() != Some(&b'\n') {
                self.skip_rest()?;
            }
            let text = String::from_utf8_lossy(&self.bytes);
            let line = text
                .trim_start_matches('\u{feff}')
                .trim_end_matches(['\n', '\r']);
            let said = line.trim();
            if !said.is_empty() && !said.starts_with('#') {
                return Ok(Some((self.number, line.to_owned())));
            }
        }
    }

    /// Goes to the end of a line that is too long to be one of a log.
    fn skip_rest(&mut self) -> io::Result<()> {
        loop {
            let buffer = self.file.fill_buf()?;
            if buffer.is_empty() {
                return Ok(());
            }
            if let Some(end) = buffer.iter().position(|byte| *byte == b'\n') {
                self.file.consume(end + 1);
                return Ok(());
            }
            let all = buffer.len();
            self.file.consume(all);
        }
    }
}

struct Store {
    kind: LogKind,
    samples: Vec<Sample>,
    origin: Option<i64>,
    lines: u64,
    places: u32,
    /// Every so many runs one is kept.
    stride: u64,
    skipped: bool,
    cadence: Cadence,
}

impl Store {
    fn new(kind: LogKind) -> Self {
        Self {
            kind,
            samples: Vec::new(),
            origin: None,
            lines: 0,
            places: 0,
            stride: 1,
            skipped: false,
            cadence: Cadence::new(kind),
        }
    }

    fn add(&mut self, time: Stamp, value: Value) {
        let origin = *self.origin.get_or_insert(time.whole);
        let seconds = time.since(origin);
        self.places = self.places.max(time.places.min(12));
        let step = 10.0_f64.powi(-i32::try_from(time.places).unwrap_or(12));
        let doubled = self.cadence.see(seconds, step, value);
        let run = self.lines / RUN;
        self.lines += 1;
        if doubled || self.cadence.is_torn() {
            return;
        }
        if !run.is_multiple_of(self.stride) {
            self.skipped = true;
            return;
        }
        self.samples.push(Sample {
            time: seconds,
            value,
            apart: std::mem::take(&mut self.skipped),
            segment: self.cadence.segment(),
        });
        if self.samples.len() >= MOST_KEPT {
            self.thin();
        }
    }

    /// Drops every other run of what is kept.
    fn thin(&mut self) {
        let length = usize::try_from(RUN).unwrap_or(64);
        let kept: Vec<Sample> = self
            .samples
            .chunks(length)
            .step_by(2)
            .flat_map(|run| {
                run.iter().enumerate().map(|(at, sample)| Sample {
                    apart: sample.apart || at == 0,
                    ..*sample
                })
            })
            .collect();
        self.samples = kept;
        self.stride *= 2;
        self.skipped = true;
    }

    fn finish(mut self, unreadable: (u64, Option<u64>)) -> Log {
        self.cadence.finish();
        Log {
            kind: self.kind,
            samples: self.samples,
            origin: self.origin.unwrap_or(0),
            lines: self.lines,
            time_step: 10.0_f64.powi(-i32::try_from(self.places).unwrap_or(12)),
            unreadable,
            cadence: self.cadence,
        }
    }
}

/// Takes the roll-over out of counters that are wider than a turn and do not hold a whole number of turns.
///
/// A counter that runs within one turn, or never rolls over, stays as it is.
pub(super) fn unroll(samples: &mut [Sample], counts: &Pair<f64>) {
    for rotor in RotorId::BOTH {
        let Some(width) = counter_width(samples, rotor, *counts.of(rotor)) else {
            continue;
        };
        let mut turned = 0.0;
        let mut last: Option<f64> = None;
        for sample in samples.iter_mut() {
            let Value::Positions(a, b) = &mut sample.value else {
                continue;
            };
            let value = match rotor {
                RotorId::A => a,
                RotorId::B => b,
            };
            if let Some(before) = last.replace(*value) {
                turned -= width * ((*value - before) / width).round();
            }
            *value += turned;
        }
    }
}

/// 2¹⁶, 2²⁴ or 2³², where the values leave one turn, keep within such a width, and jump by more than half of it.
fn counter_width(samples: &[Sample], rotor: RotorId, turn: f64) -> Option<f64> {
    let values = || {
        samples.iter().filter_map(|sample| match sample.value {
            Value::Positions(a, b) => Some(*Pair { a, b }.of(rotor)),
            Value::Pulse(_) => None,
        })
    };
    let low = values().fold(f64::INFINITY, f64::min);
    let high = values().fold(f64::NEG_INFINITY, f64::max);
    if low >= 0.0 && high < turn {
        return None;
    }
    let jump = values()
        .zip(values().skip(1))
        .map(|(one, next)| (next - one).abs())
        .fold(0.0, f64::max);
    [16, 24, 32]
        .into_iter()
        .map(|bits| 2.0_f64.powi(bits))
        .find(|width| high - low < *width)
        .filter(|width| jump > width / 2.0)
}
