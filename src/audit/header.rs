//! A C header as a stream of bytes: its text to the letter, the bytes of its table as a pack.

use super::pack::PackAuditor;
use super::{Problem, Report, shown};
use crate::plan::Plan;
use crate::setpoint::c_header::{header_end, header_start};
use crate::setpoint::pack::Content;

/// Which part of the header comes next.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Part {
    Start,
    Table,
    End,
    Lost,
}

/// Checks a header as its bytes come.
pub(super) struct HeaderAuditor<'p> {
    plan: &'p Plan,
    name: String,
    pack: PackAuditor<'p>,
    part: Part,
    /// What comes next, to the letter, and how much of it has come.
    text: Vec<u8>,
    at: usize,
    /// A line of the table that has no end yet.
    line: Vec<u8>,
    bytes: u64,
    /// Whole lines before `text`, and before the table's next line.
    lines: usize,
}

impl<'p> HeaderAuditor<'p> {
    pub(super) fn new(plan: &'p Plan, id: &str, content: Content, name: &str) -> Self {
        Self {
            plan,
            name: name.to_owned(),
            pack: PackAuditor::new(plan, id, content),
            part: Part::Start,
            text: header_start(plan, name).into_bytes(),
            at: 0,
            line: Vec::new(),
            bytes: 0,
            lines: 0,
        }
    }

    pub(super) fn rows(&self) -> u64 {
        self.pack.report.rows
    }

    pub(super) fn push(&mut self, bytes: &[u8]) {
        let mut bytes = bytes;
        while !bytes.is_empty() && self.part != Part::Lost {
            bytes = match self.part {
                Part::Table => self.table(bytes),
                _ => self.literal(bytes),
            };
        }
    }

    pub(super) fn finish(mut self) -> Report {
        if self.part != Part::Lost && (self.part != Part::End || self.at != self.text.len()) {
            self.lose(
                "header",
                "the rest of it".to_owned(),
                "the end of the file".to_owned(),
            );
        }
        if self.part == Part::Lost {
            // What is missing from the table then is no fault of the table's own.
            return self.pack.report;
        }
        self.pack.finish()
    }

    /// Text that is the same in every header of this table.
    fn literal<'b>(&mut self, bytes: &'b [u8]) -> &'b [u8] {
        let rest = self.text.get(self.at..).unwrap_or_default();
        let length = rest.len().min(bytes.len());
        let (now, later) = bytes.split_at(length);
        if length == 0 {
            self.lose("header", "nothing after its end".to_owned(), shown(bytes));
            return later;
        }
        if let Some(same) = now.iter().zip(rest).position(|(one, other)| one != other) {
            self.differs(self.at + same, bytes.get(same..).unwrap_or_default());
            return later;
        }
        self.at += length;
        if self.part == Part::Start && self.at == self.text.len() {
            self.part = Part::Table;
            self.lines = line_ends(&self.text);
        }
        later
    }

    /// Lines of the table, up to the one that ends it.
    fn table<'b>(&mut self, bytes: &'b [u8]) -> &'b [u8] {
        let Some(end) = bytes.iter().position(|byte| *byte == b'\n') else {
            self.line.extend_from_slice(bytes);
            if self.line.len() > 200 {
                let line = std::mem::take(&mut self.line);
                self.wrong_line(&line);
            }
            return &[];
        };
        let (now, later) = bytes.split_at(end + 1);
        self.line.extend_from_slice(now);
        let line = std::mem::take(&mut self.line);
        if line == b"};\n" {
            self.part = Part::End;
            self.text = header_end(self.plan, &self.name, self.bytes).into_bytes();
            self.at = line.len();
            return later;
        }
        match elements(&line) {
            Some(bytes) => {
                self.bytes += bytes.len() as u64;
                self.lines += 1;
                self.pack.push(&bytes);
            }
            None => self.wrong_line(&line),
        }
        later
    }

    /// The first byte that differs from the text, at `place` of it; `found` is what stands there and after it.
    fn differs(&mut self, place: usize, found: &[u8]) {
        let text = std::mem::take(&mut self.text);
        let before = text.get(..place).unwrap_or_default();
        let start = before
            .iter()
            .rposition(|byte| *byte == b'\n')
            .map_or(0, |end| end + 1);
        let same = before.get(start..).unwrap_or_default();
        let column = String::from_utf8_lossy(same).chars().count() + 1;
        let line = self.lines + line_ends(before) + 1;
        let wanted = first_line(text.get(start..).unwrap_or_default());
        let found = [same, first_line(found)].concat();
        // The place must be within what is shown of both.
        let cut = same.len().saturating_sub(SHOWN_BEFORE);
        let part = |line: &[u8]| shown(line.get(cut..).unwrap_or_default());
        self.lose(
            &format!("header, line {line} column {column}"),
            part(wanted),
            part(&found),
        );
    }

    fn wrong_line(&mut self, found: &[u8]) {
        let place = format!("header, line {}", self.lines + 1);
        let wanted = "bytes of the table, as `    0x50, 0x48,`".to_owned();
        self.lose(&place, wanted, shown(first_line(found)));
    }

    fn lose(&mut self, place: &str, wanted: String, found: String) {
        self.pack.report.add(Problem {
            tick: None,
            column: place.to_owned(),
            wanted,
            found,
        });
        self.part = Part::Lost;
    }
}

/// Bytes of a line that are shown before the one that differs.
const SHOWN_BEFORE: usize = 40;

fn line_ends(text: &[u8]) -> usize {
    text.iter().filter(|byte| **byte == b'\n').count()
}

fn first_line(text: &[u8]) -> &[u8] {
    text.split(|byte| *byte == b'\n').next().unwrap_or_default()
}

/// The bytes of a line `    0x50, 0x48,`.
fn elements(line: &[u8]) -> Option<Vec<u8>> {
    let text = std::str::from_utf8(line).ok()?;
    let inner = text.strip_prefix("    ")?.strip_suffix(",\n")?;
    let byte = |element: &str| {
        let digits = element
            .strip_prefix("0x")
            .filter(|digits| digits.len() == 2)?;
        u8::from_str_radix(digits, 16).ok()
    };
    inner.split(", ").map(byte).collect()
}
