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
}

impl<'p> HeaderAuditor<'p> {
    pub(super) fn new(plan: &'p Plan, content: Content, name: &str) -> Self {
        Self {
            plan,
            name: name.to_owned(),
            pack: PackAuditor::new(plan, content),
            part: Part::Start,
            text: header_start(plan, name).into_bytes(),
            at: 0,
            line: Vec::new(),
            bytes: 0,
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
            self.lose("the end of the header", b"");
        }
        self.pack.finish()
    }

    /// Text that is the same in every header of this table.
    fn literal<'b>(&mut self, bytes: &'b [u8]) -> &'b [u8] {
        let rest = self.text.get(self.at..).unwrap_or_default();
        let length = rest.len().min(bytes.len());
        let (now, later) = bytes.split_at(length);
        if length == 0 || Some(now) != rest.get(..length) {
            let wanted = String::from_utf8_lossy(rest)
                .lines()
                .next()
                .unwrap_or_default()
                .to_owned();
            self.lose(&format!("`{wanted}`"), now);
            return later;
        }
        self.at += length;
        if self.part == Part::Start && self.at == self.text.len() {
            self.part = Part::Table;
        }
        later
    }

    /// Lines of the table, up to the one that ends it.
    fn table<'b>(&mut self, bytes: &'b [u8]) -> &'b [u8] {
        let Some(end) = bytes.iter().position(|byte| *byte == b'\n') else {
            self.line.extend_from_slice(bytes);
            if self.line.len() > 200 {
                let line = std::mem::take(&mut self.line);
                self.lose("a line of the table", &line);
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
                self.pack.push(&bytes);
            }
            None => self.lose("bytes of the table", &line),
        }
        later
    }

    fn lose(&mut self, wanted: &str, found: &[u8]) {
        self.pack.report.add(Problem {
            tick: None,
            column: "header".to_owned(),
            wanted: wanted.to_owned(),
            found: shown(found),
        });
        self.part = Part::Lost;
    }
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
