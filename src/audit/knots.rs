//! Knots as JSON: the head line by line, the lists of pieces run tick by tick against the plan.
//!
//! The lists are kept as text until both rotors' are there: never more than the file is long, and no more ticks than the
//! table has.

use super::head::Heads;
use super::points::PointChecker;
use super::runner::{Entries, Runner, numbers};
use super::{Problem, Report, shown};
use crate::plan::Plan;
use crate::rig::RotorId;
use crate::setpoint::pack::{PackPoint, crc32};

/// A line of the head may be as long as an input file, in JSON six times as long.
const LONGEST_LINE: usize = 64 * 1024 * 1024;

/// An entry of a list never comes near this.
const LONGEST_ENTRY: usize = 200;

/// Ticks of a piece, or of a stretch of one beam and cue, at most.
const MOST_TICKS: u64 = 1 << 32;

/// What a document that stops too soon goes on with.
const END: &str = "the end of the file";

/// The lists, in the order of the document.
const LISTS: [&str; 3] = ["a", "b", "events"];

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Part {
    Head,
    /// The line that opens a list, and its entries.
    Opening(usize),
    Entries(usize),
    /// The line with the checksum of all before it.
    Checksum,
    Over,
    Lost,
}

/// A list as far as it has come.
#[derive(Default)]
struct List {
    /// Its entries that are good, one a line.
    text: Vec<u8>,
    /// Their ticks.
    ticks: u64,
    /// The last entry as it stood, whose comma depends on what comes next.
    last: Vec<u8>,
}

/// Checks a document as its bytes come.
pub(super) struct KnotsAuditor<'p> {
    plan: &'p Plan,
    heads: Heads<'p>,
    points: PointChecker<'p>,
    part: Part,
    line: Vec<u8>,
    /// CRC-32 of the lines so far.
    crc: u32,
    /// A checksum that is not that of the lines; what is wrong in them is said before.
    checksum: Option<Problem>,
    lists: [List; 3],
    pub(super) report: Report,
}

impl<'p> KnotsAuditor<'p> {
    pub(super) fn new(plan: &'p Plan, id: &str, tolerance: u32) -> Self {
        Self {
            plan,
            heads: Heads::of_knots(plan, id, tolerance),
            points: PointChecker::new(plan, tolerance),
            part: Part::Head,
            line: Vec::new(),
            crc: 0,
            checksum: None,
            lists: Default::default(),
            report: Report::default(),
        }
    }

    pub(super) fn push(&mut self, bytes: &[u8]) {
        for part in bytes.split_inclusive(|byte| *byte == b'\n') {
            if self.part == Part::Lost {
                return;
            }
            self.line.extend_from_slice(part);
            let longest = if self.part == Part::Head {
                LONGEST_LINE
            } else {
                LONGEST_ENTRY
            };
            if self.line.len() > longest {
                let line = std::mem::take(&mut self.line);
                self.lose("a line that ends", shown(&line));
            } else if part.last() == Some(&b'\n') {
                let line = std::mem::take(&mut self.line);
                self.take(&line);
                self.line = line;
                self.line.clear();
            }
        }
    }

    pub(super) fn finish(mut self) -> Report {
        match self.part {
            Part::Over if self.line.is_empty() => {
                self.run();
                if let Some(problem) = self.checksum.take() {
                    self.report.add(problem);
                }
            }
            Part::Lost => {}
            Part::Over => {
                let rest = std::mem::take(&mut self.line);
                self.lose("nothing after the end of the document", shown(&rest));
            }
            _ => self.lose("the rest of the document", END.to_owned()),
        }
        self.report
    }

    fn take(&mut self, line: &[u8]) {
        let text = line.strip_suffix(b"\n").unwrap_or(line);
        match self.part {
            Part::Head => {
                if self.heads.line(line, &mut self.report) {
                    self.part = Part::Entries(0);
                }
            }
            Part::Opening(list) => {
                let name = LISTS.get(list).copied().unwrap_or_default();
                let wanted = format!("\"{name}\":[");
                if text == wanted.as_bytes() {
                    self.part = Part::Entries(list);
                } else {
                    self.lose(&format!("`{wanted}`"), shown(text));
                }
            }
            Part::Entries(list) => self.entry(list, text),
            Part::Checksum => self.checksum(text),
            Part::Over | Part::Lost => {
                self.lose("nothing after the end of the document", shown(text));
            }
        }
        self.crc = crc32(self.crc, line);
    }

    fn checksum(&mut self, text: &[u8]) {
        let wanted = format!("\"crc32\":\"{:08x}\"}}", self.crc);
        if text != wanted.as_bytes() {
            let wanted = format!("`{wanted}`, the checksum of what stands before it");
            self.checksum = Some(problem(&wanted, shown(text)));
        }
        self.part = Part::Over;
    }

    /// A line of a list: its end, or an entry.
    fn entry(&mut self, index: usize, text: &[u8]) {
        let events = index + 1 == LISTS.len();
        let end: &[u8] = b"],";
        let total = self.plan.rows();
        let name = LISTS.get(index).copied().unwrap_or_default();
        let turn = match index {
            0 => self.turn(RotorId::A),
            _ => self.turn(RotorId::B),
        };
        let Some(list) = self.lists.get_mut(index) else {
            return;
        };
        let comma = list.last.last() == Some(&b',');
        if !list.last.is_empty() && comma == (text == end) {
            let entry = list.last.strip_suffix(b",").unwrap_or(&list.last).to_vec();
            let wanted = if comma {
                format!("{} and no comma, as the last of `{name}`", shown(&entry))
            } else {
                format!(
                    "{} and a comma, as another follows in `{name}`",
                    shown(&entry)
                )
            };
            let found = shown(&list.last);
            self.report.add(problem(&wanted, found));
        }
        let ticks = list.ticks;
        if text == end {
            if ticks != total {
                return self.lose(&in_all(total, name), format!("{ticks}"));
            }
            self.part = if events {
                Part::Checksum
            } else {
                Part::Opening(index + 1)
            };
            return;
        }
        list.last = text.to_vec();
        let entry = text.strip_suffix(b",").unwrap_or(text);
        let good = numbers(entry).filter(|(numbers, count)| fits(events, numbers, *count, turn));
        match good {
            Some(([more, ..], _)) if ticks + more.cast_unsigned() <= total => {
                list.ticks += more.cast_unsigned();
                list.text.extend_from_slice(entry);
                list.text.push(b'\n');
            }
            Some(_) => self.lose(&in_all(total, name), "more".to_owned()),
            None => {
                let what = if events {
                    "`[ticks,cue,beam]`"
                } else {
                    "`[ticks,change]` or `[ticks,phase,speed,change]`, the phase within a turn,"
                };
                self.lose(&format!("{what} in `{name}`"), shown(text));
            }
        }
    }

    /// A turn of a rotor in 2⁻³² counts.
    fn turn(&self, id: RotorId) -> i64 {
        i64::from(self.plan.rig.rotor(id).counts) << 32
    }

    /// Runs the lists from the first tick to the last.
    fn run(&mut self) {
        let total = self.plan.rows();
        let lists = std::mem::take(&mut self.lists);
        let [a, b, mut events] = lists.each_ref().map(|list| Entries(&list.text));
        let start = self.plan.loop_start().map_or(u64::MAX, |tick| tick.0);
        let mut runners = [
            Runner::new(a, self.turn(RotorId::A), start),
            Runner::new(b, self.turn(RotorId::B), start),
        ];
        let (mut left, mut cue, mut beam) = (0, 0, 0);
        let mut tick = 0;
        while tick < total {
            if left == 0 {
                let Some(([ticks, next_cue, next_beam, _], _)) = events.next() else {
                    return;
                };
                (left, cue, beam) = (ticks.cast_unsigned(), next_cue, next_beam);
            }
            let counts = runners.each_ref().map(Runner::counts);
            let steps = runners.each_mut().map(Runner::advance);
            left -= 1;
            let point = PackPoint {
                tick,
                cue: u32::try_from(cue).unwrap_or(u32::MAX),
                counts,
                steps,
                beam: u8::try_from(beam).unwrap_or(u8::MAX),
            };
            self.points.check(&point, &mut self.report);
            let straight = runners.iter().map(Runner::straight).min().unwrap_or(0);
            let skipped = self.points.skip(
                tick,
                straight.min(left.saturating_sub(1)),
                runners.each_ref().map(Runner::line),
                &mut self.report,
            );
            if skipped > 0 {
                runners.iter_mut().for_each(|runner| runner.skip(skipped));
            }
            left -= skipped;
            tick += 1 + skipped;
        }
        self.points.close(&mut self.report);
    }

    fn lose(&mut self, wanted: &str, found: String) {
        self.report.add(problem(wanted, found));
        self.part = Part::Lost;
    }
}

/// Whether the numbers of an entry can stand in its list.
fn fits(events: bool, numbers: &[i64; 4], count: usize, turn: i64) -> bool {
    let [ticks, second, third, _] = *numbers;
    let ticks = (1..=MOST_TICKS.cast_signed()).contains(&ticks);
    let rest = match (events, count) {
        (false, 2) => true,
        (false, 4) => (0..turn).contains(&second),
        (true, 3) => (0..=i64::from(u32::MAX)).contains(&second) && (0..=255).contains(&third),
        _ => false,
    };
    ticks && rest
}

fn in_all(total: u64, name: &str) -> String {
    format!("{total} ticks in the list `{name}`")
}

fn problem(wanted: &str, found: String) -> Problem {
    Problem {
        tick: None,
        column: "knots".to_owned(),
        wanted: wanted.to_owned(),
        found,
    }
}
