//! Knots as JSON: the head line by line, the lists of pieces run tick by tick against the plan.
//!
//! The lists are kept until both rotors' are there: never more than the file is long.

use super::head::Heads;
use super::points::PointChecker;
use super::{Problem, Report, shown};
use crate::plan::Plan;
use crate::rig::RotorId;
use crate::setpoint::pack::PackPoint;

/// A line of the head may be as long as an input file, in JSON six times as long.
const LONGEST_LINE: usize = 64 * 1024 * 1024;

/// Ticks of a straight stretch that are looked at on each side of those that are not, and how long such a stretch is.
const EDGE: u64 = 1 << 12;
const LONG: u64 = 1 << 20;

/// The lists, in the order of the document.
const LISTS: [&str; 3] = ["a", "b", "events"];

#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Part {
    Head,
    /// The line that opens a list, and its entries.
    Opening(usize),
    Entries(usize),
    Over,
    Lost,
}

/// Checks a document as its bytes come.
pub(super) struct KnotsAuditor<'p> {
    plan: &'p Plan,
    heads: Heads<'p>,
    points: PointChecker<'p>,
    part: Part,
    line: Vec<u8>,
    lists: [Vec<[i64; 4]>; 3],
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
            lists: [const { Vec::new() }; 3],
            report: Report::default(),
        }
    }

    pub(super) fn push(&mut self, bytes: &[u8]) {
        for part in bytes.split_inclusive(|byte| *byte == b'\n') {
            if self.part == Part::Lost {
                return;
            }
            self.line.extend_from_slice(part);
            if part.last() == Some(&b'\n') {
                let line = std::mem::take(&mut self.line);
                self.take(&line);
            } else if self.line.len() > LONGEST_LINE {
                self.lose("a line that ends", &[]);
            }
        }
    }

    pub(super) fn finish(mut self) -> Report {
        match self.part {
            Part::Over if self.line.is_empty() => self.run(),
            Part::Lost => {}
            _ => self.lose("the end of the document", &[]),
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
                    self.lose(&format!("`{wanted}`"), text);
                }
            }
            Part::Entries(list) => self.entry(list, text),
            Part::Over | Part::Lost => self.lose("nothing after the end of the document", text),
        }
    }

    fn entry(&mut self, list: usize, text: &[u8]) {
        let last = list + 1 == LISTS.len();
        if text
            == if last {
                b"]}".as_slice()
            } else {
                b"],".as_slice()
            }
        {
            self.part = if last {
                Part::Over
            } else {
                Part::Opening(list + 1)
            };
            return;
        }
        let numbers: Option<Vec<i64>> =
            serde_json::from_slice(text.strip_suffix(b",").unwrap_or(text)).ok();
        let entry = match (numbers.as_deref(), last) {
            // A piece that goes on is marked by a phase below zero, which no piece has.
            (Some([ticks, change]), false) => Some([*ticks, -1, 0, *change]),
            (Some([ticks, phase, speed, change]), false) if *phase >= 0 => {
                Some([*ticks, *phase, *speed, *change])
            }
            (Some([ticks, cue, beam @ 0..=255]), true) if *cue >= 0 => {
                Some([*ticks, *cue, *beam, 0])
            }
            _ => None,
        };
        match (
            entry.filter(|[ticks, ..]| (1..=1 << 32).contains(ticks)),
            self.lists.get_mut(list),
        ) {
            (Some(entry), Some(list)) => list.push(entry),
            _ => self.lose("an entry of the list", text),
        }
    }

    /// Runs the lists from the first tick to the last.
    fn run(&mut self) {
        let total = self.plan.rows();
        let lists = std::mem::take(&mut self.lists);
        for (name, list) in LISTS.into_iter().zip(&lists) {
            let ticks: u64 = list.iter().map(|[ticks, ..]| ticks.cast_unsigned()).sum();
            if ticks != total {
                self.lose(
                    &format!("{total} ticks in the list `{name}`"),
                    ticks.to_string().as_bytes(),
                );
                return;
            }
        }
        let [a, b, events] = &lists;
        let turn = |id| i64::from(self.plan.rig.rotor(id).counts) << 32;
        let start = self.plan.loop_start().map_or(u64::MAX, |tick| tick.0);
        let mut runners = [
            Runner::new(a, turn(RotorId::A), start),
            Runner::new(b, turn(RotorId::B), start),
        ];
        let (mut left, mut events) = (0, events.iter());
        let (mut cue, mut beam) = (0, 0);
        let mut tick = 0;
        while tick < total {
            if left == 0 {
                let Some([ticks, next_cue, next_beam, _]) = events.next() else {
                    return;
                };
                (left, cue, beam) = (ticks.cast_unsigned(), *next_cue, *next_beam);
            }
            let counts = runners.each_ref().map(Runner::counts);
            let steps = runners.each_mut().map(|runner| runner.advance());
            left -= 1;
            let point = PackPoint {
                tick,
                cue: u32::try_from(cue).unwrap_or(u32::MAX),
                counts,
                steps,
                beam: u8::try_from(beam).unwrap_or(u8::MAX),
            };
            self.points.check(&point, &mut self.report);
            tick += 1;
            let straight = runners
                .iter()
                .map(Runner::straight)
                .min()
                .unwrap_or(0)
                .min(left.saturating_sub(1));
            if straight > LONG + 2 * EDGE && point.tick.is_multiple_of(EDGE) {
                let skipped = straight - EDGE;
                runners.iter_mut().for_each(|runner| runner.skip(skipped));
                (tick, left) = (tick + skipped, left - skipped);
                self.points.skipped();
                self.report.rows += skipped;
            }
        }
        self.points.close(&mut self.report);
    }

    fn lose(&mut self, wanted: &str, found: &[u8]) {
        self.report.add(Problem {
            tick: None,
            column: "knots".to_owned(),
            wanted: wanted.to_owned(),
            found: shown(found),
        });
        self.part = Part::Lost;
    }
}

/// One rotor's list on its way; after its last piece comes the phase at the loop start.
struct Runner<'l> {
    pieces: std::slice::Iter<'l, [i64; 4]>,
    turn: i64,
    phase: i64,
    speed: i64,
    change: i64,
    left: u64,
    tick: u64,
    loop_start: u64,
    closing: i64,
}

impl<'l> Runner<'l> {
    fn new(list: &'l [[i64; 4]], turn: i64, loop_start: u64) -> Self {
        let mut runner = Self {
            pieces: list.iter(),
            turn,
            phase: 1 << 31,
            speed: 0,
            change: 0,
            left: 0,
            tick: 0,
            loop_start,
            closing: -1,
        };
        runner.enter();
        runner
    }

    fn enter(&mut self) {
        match self.pieces.next() {
            Some([ticks, phase, speed, change]) => {
                self.left = ticks.cast_unsigned();
                if *phase >= 0 {
                    (self.phase, self.speed) = (*phase % self.turn, *speed);
                } else {
                    // The change of a piece that goes on counts from its first tick on.
                    let more = change.wrapping_sub(self.change);
                    self.speed = self.speed.wrapping_add(more);
                }
                self.change = *change;
            }
            None if self.closing >= 0 => self.phase = self.closing,
            None => {}
        }
        if self.tick == self.loop_start {
            self.closing = self.phase;
        }
    }

    fn counts(&self) -> u32 {
        u32::try_from(self.phase >> 32).unwrap_or_default()
    }

    fn advance(&mut self) -> i64 {
        let before = self.phase >> 32;
        self.phase = self.phase.wrapping_add(self.speed);
        self.speed = self.speed.wrapping_add(self.change);
        let mut step = (self.phase >> 32) - before;
        self.phase = self.phase.rem_euclid(self.turn);
        self.tick += 1;
        self.left -= 1;
        if self.left == 0 {
            let expected = self.phase >> 32;
            self.enter();
            let turn = self.turn >> 32;
            let gap = (self.phase >> 32) - expected;
            step += if gap > turn / 2 {
                gap - turn
            } else if gap < -((turn - 1) / 2) {
                gap + turn
            } else {
                gap
            };
        }
        step
    }

    /// Ticks that can be skipped.
    fn straight(&self) -> u64 {
        if self.change == 0 {
            self.left.saturating_sub(1)
        } else {
            0
        }
    }

    fn skip(&mut self, ticks: u64) {
        let moved = i128::from(self.phase) + i128::from(self.speed) * i128::from(ticks);
        self.phase = i64::try_from(moved.rem_euclid(i128::from(self.turn))).unwrap_or_default();
        self.left -= ticks;
        self.tick += ticks;
    }
}
