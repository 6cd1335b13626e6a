//! A table as a stream of bytes: head, rows in parallel stretches, end.

use super::head::Heads;
use super::rows::{Checker, Stretch};
use super::{Problem, Report, shown};
use crate::finding::render::counted;
use crate::plan::Plan;
use crate::rig::Pair;
use crate::setpoint::{COLUMNS, Form};
use rayon::prelude::{IntoParallelIterator, ParallelIterator};
use std::io::{self, Read, Write};

/// Bytes of rows checked at a time by one thread.
const STRETCH: usize = 256 * 1024;

/// Stretches held at a time, however many threads there are.
const MOST_STRETCHES: usize = 32;

/// A row never comes near this; a longer line is no table, and is not kept.
const LONGEST_ROW: usize = 1024;

/// Titles and findings may be as long as an input file, 8 MiB, and JSON escapes may make them six times as long.
const LONGEST_HEAD_LINE: usize = 64 * 1024 * 1024;

/// Which part of the table comes next.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Part {
    Head,
    Rows,
    Tail,
    /// Something is so wrong that the rest is not looked at.
    Lost,
}

/// Checks a table as its bytes come; a [`Write`] that keeps nothing but a bounded buffer.
pub struct Auditor<'p> {
    checker: Checker<'p>,
    heads: Heads<'p>,
    form: Form,
    count: u64,
    loop_start: Option<u64>,
    part: Part,
    pending: Vec<u8>,
    batch: usize,
    /// Bytes at which those that are pending are looked at next.
    due: usize,
    row: u64,
    reached: Option<Pair<i128>>,
    looped: Option<Pair<i128>>,
    report: Report,
}

/// Reads a whole table of `plan` and says what is wrong with it; `progress` hears the rows checked so far.
///
/// `id` is the plan's table ID, which the JSON form must carry.
///
/// # Errors
/// Those of `table`.
pub fn audit(
    plan: &Plan,
    form: Form,
    id: &str,
    table: &mut dyn Read,
    progress: &mut dyn FnMut(u64),
) -> io::Result<Report> {
    let mut auditor = Auditor::new(plan, form, id);
    let mut buffer = vec![0; STRETCH];
    loop {
        let got = match table.read(&mut buffer) {
            Ok(0) => return Ok(auditor.finish()),
            Ok(got) => got,
            Err(error) if error.kind() == io::ErrorKind::Interrupted => continue,
            Err(error) => return Err(error),
        };
        auditor.push(buffer.get(..got).unwrap_or_default());
        progress(auditor.rows());
    }
}

impl<'p> Auditor<'p> {
    /// An auditor of a table of `plan` in this form; `id` is the plan's table ID.
    #[must_use]
    pub fn new(plan: &'p Plan, form: Form, id: &str) -> Self {
        let stretches = (rayon::current_num_threads() * 2).clamp(1, MOST_STRETCHES);
        Self {
            checker: Checker::new(plan, form),
            heads: Heads::new(plan, id),
            form,
            count: plan.rows(),
            loop_start: plan.loop_start().map(|tick| tick.0),
            part: Part::Head,
            pending: Vec::new(),
            batch: stretches * STRETCH,
            due: stretches * STRETCH,
            row: 0,
            reached: None,
            looped: None,
            report: Report::default(),
        }
    }

    /// Rows checked so far.
    #[must_use]
    pub fn rows(&self) -> u64 {
        self.row
    }

    /// Takes the next bytes of the table.
    pub fn push(&mut self, bytes: &[u8]) {
        let mut bytes = bytes;
        while !bytes.is_empty() && self.part != Part::Lost {
            // Never more than a batch is kept, unless a line of the head is longer: then twice as much is waited for, so that
            // however long it is, its bytes are looked at a few times each.
            let room = self.due.saturating_sub(self.pending.len()).max(1);
            let (now, later) = bytes.split_at(room.min(bytes.len()));
            self.pending.extend_from_slice(now);
            bytes = later;
            if self.pending.len() >= self.due {
                self.digest();
                self.due = self.batch.max(2 * self.pending.len());
            }
        }
    }

    /// The end of the table: what is wrong with it.
    #[must_use]
    pub fn finish(mut self) -> Report {
        self.digest();
        if self.part == Part::Lost {
            return self.report;
        }
        if !self.pending.is_empty() {
            let rest = std::mem::take(&mut self.pending);
            self.wrong("end of the table", "a line feed after the last line", &rest);
        }
        let complete = match self.form {
            Form::Csv => self.row == self.count && self.part != Part::Head,
            Form::Json => self.part == Part::Tail && self.heads.is_closed(),
        };
        if !complete {
            self.ends_at(self.row);
        }
        self.close_loop();
        self.report
    }

    fn ends_at(&mut self, row: u64) {
        self.report.add(Problem {
            tick: None,
            column: "end of the table".to_owned(),
            wanted: format!("{} rows and the end of the document", self.count),
            found: counted(usize::try_from(row).unwrap_or(usize::MAX), "row"),
        });
    }

    /// The last step of a loop leads to where the loop starts.
    fn close_loop(&mut self) {
        let (Some(start), Some(led), Some(here)) = (self.loop_start, self.reached, self.looped)
        else {
            return;
        };
        if self.row != self.count {
            return;
        }
        if let Some(problem) = self.checker.joined(start, led, here) {
            self.report.add(Problem {
                column: format!("{} at the loop start", problem.column),
                ..problem
            });
        }
    }

    /// Looks at every whole line that has come.
    fn digest(&mut self) {
        loop {
            let before = (self.part, self.pending.len());
            match self.part {
                Part::Head | Part::Tail => self.digest_lines(),
                Part::Rows => self.digest_rows(),
                Part::Lost => self.pending.clear(),
            }
            if before == (self.part, self.pending.len()) {
                return;
            }
        }
    }

    /// Head and tail, line by line.
    fn digest_lines(&mut self) {
        let pending = std::mem::take(&mut self.pending);
        let part = self.part;
        let mut used = 0;
        for line in pending.split_inclusive(|byte| *byte == b'\n') {
            if self.part != part || line.last() != Some(&b'\n') {
                break;
            }
            used += line.len();
            self.line(line);
        }
        self.pending = pending.get(used..).unwrap_or_default().to_vec();
        let longest = match (part, self.form) {
            (Part::Head, Form::Json) => LONGEST_HEAD_LINE,
            _ => LONGEST_ROW,
        };
        if self.part == part && self.pending.len() > longest {
            self.lose(if part == Part::Head {
                "a line of the head"
            } else {
                "end of the table"
            });
        }
    }

    fn line(&mut self, line: &[u8]) {
        match (self.part, self.form) {
            (Part::Head, Form::Csv) => {
                let wanted = format!("{}\n", COLUMNS.join(","));
                if line != wanted.as_bytes() {
                    self.wrong("header", wanted.trim_end(), line);
                }
                self.part = Part::Rows;
            }
            (Part::Head, Form::Json) => {
                if self.heads.line(line, &mut self.report) {
                    self.part = Part::Rows;
                }
            }
            (Part::Tail, Form::Json) if self.heads.close(line) => {}
            _ => {
                self.wrong("end of the table", "nothing after the last row", line);
                self.part = Part::Lost;
            }
        }
    }

    /// The whole rows that have come, cut into stretches.
    fn digest_rows(&mut self) {
        if self.row >= self.count {
            self.part = Part::Tail;
            return;
        }
        let pending = std::mem::take(&mut self.pending);
        let (stretches, used) = self.stretches(&pending);
        let checker = &self.checker;
        let checked: Vec<Stretch> = stretches
            .into_par_iter()
            .map(|(first, lines)| checker.check(first, lines))
            .collect();
        for stretch in checked {
            let ended = stretch.ended;
            self.join(stretch);
            if ended {
                self.ends_at(self.row);
                self.part = Part::Lost;
                return;
            }
        }
        self.pending = pending.get(used..).unwrap_or_default().to_vec();
        if self.row < self.count && self.pending.len() > LONGEST_ROW {
            self.lose("a row");
        }
    }

    /// The first tick and the lines of each stretch of whole rows in `bytes`, and how many bytes they are.
    fn stretches<'b>(&self, bytes: &'b [u8]) -> (Vec<(u64, &'b [u8])>, usize) {
        let mut stretches = Vec::new();
        let mut used = 0;
        let mut row = self.row;
        while row < self.count {
            let rest = bytes.get(used..).unwrap_or_default();
            let part = rest.get(..STRETCH.min(rest.len())).unwrap_or_default();
            let Some(last) = part.iter().rposition(|byte| *byte == b'\n') else {
                break;
            };
            let mut lines = part.get(..=last).unwrap_or_default();
            let mut rows = lines.iter().filter(|byte| **byte == b'\n').count() as u64;
            if rows > self.count - row {
                rows = self.count - row;
                lines = first_lines(lines, rows);
            }
            stretches.push((row, lines));
            row += rows;
            used += lines.len();
        }
        (stretches, used)
    }

    fn join(&mut self, stretch: Stretch) {
        let row = self.row;
        self.row += stretch.report.rows;
        if let (Some(led), Some(here)) = (self.reached, stretch.first)
            && let Some(problem) = self.checker.joined(row, led, here)
        {
            self.report.add(problem);
        }
        self.reached = stretch.reached;
        self.looped = self.looped.or(stretch.looped);
        self.report.absorb(stretch.report);
    }

    fn wrong(&mut self, part: &str, wanted: &str, found: &[u8]) {
        self.report.add(Problem {
            tick: None,
            column: part.to_owned(),
            wanted: wanted.to_owned(),
            found: shown(found),
        });
    }

    fn lose(&mut self, what: &str) {
        let start = std::mem::take(&mut self.pending);
        self.wrong(what, "a line that ends", &start);
        self.part = Part::Lost;
    }
}

/// The first `count` lines of some that are more.
fn first_lines(lines: &[u8], count: u64) -> &[u8] {
    let length = lines
        .split_inclusive(|byte| *byte == b'\n')
        .zip(0..count)
        .map(|(line, _)| line.len())
        .sum();
    lines.get(..length).unwrap_or_default()
}

impl Write for Auditor<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.push(bytes);
        Ok(bytes.len())
    }
    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}
