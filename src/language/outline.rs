//! The outline of a file: its statements and blocks, before any of them is read.
//!
//! A plain loop over the bytes does this, not the grammar: statements are cut and blocks are matched without recursion
//! and without a token per line, so that a file of eight million braces costs no more than its bytes. The grammar then
//! reads one statement at a time, whose size is bounded here, and a broken statement ends where its line ends.
//!
//! The layout is checked here as well: `{ statement }` on one line, else `{` ends its line and `}` stands alone.

use super::findings::Findings;
use super::span::Span;
use crate::finding::Code;

/// How deep blocks may stand in one another.
pub(super) const MOST_DEPTH: usize = 64;
/// How long one statement may be, continuation lines included.
pub(super) const MOST_STATEMENT_BYTES: usize = 1 << 20;

/// One step through a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Event {
    /// A statement without its brace and without blanks or comments around it.
    Statement {
        /// From its first to its last sign.
        span: Span,
        /// Whether a `{` follows.
        opens: Opens,
    },
    /// The end of the innermost block.
    Close,
}

/// Whether a statement is the head of a block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Opens {
    /// It is none.
    Nothing,
    /// It is, and the block is closed by the matching [`Event::Close`].
    Block,
    /// It is, but the block stands too deep to be read (reported).
    Unread,
}

/// What stood before on the same line.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Before {
    Nothing,
    Statement,
    Open,
    Close,
}

/// One block that is open.
struct Open {
    /// Its `{`.
    brace: usize,
    /// Which line it stands on, continuations counted with their first line.
    line: u32,
}

struct Outline<'t> {
    text: &'t str,
    at: usize,
    line: u32,
    before: Before,
    /// Whether nothing but blanks stands before `at` on its line of text.
    fresh: bool,
    /// The statement after a `{` on the same line, where that block is still open.
    inline: Option<Span>,
    open: Vec<Open>,
    events: Vec<Event>,
}

/// Cuts `text` into statements; `skip` is the length of a byte-order mark. Every block has its `Close`.
pub(super) fn outline(text: &str, skip: usize, findings: &mut Findings) -> Vec<Event> {
    let mut outline = Outline {
        text,
        at: skip,
        line: 0,
        before: Before::Nothing,
        fresh: true,
        inline: None,
        open: Vec::new(),
        events: Vec::new(),
    };
    while outline.at < text.len() && !findings.over() {
        outline.step(findings);
    }
    outline.end(findings);
    outline.events
}

impl Outline<'_> {
    fn byte(&self, at: usize) -> Option<u8> {
        self.text.as_bytes().get(at).copied()
    }
    /// One blank, comment, line break, brace or statement.
    fn step(&mut self, findings: &mut Findings) {
        match self.byte(self.at) {
            Some(b' ' | b'\t' | b'\r') => self.at += 1,
            Some(b'\n') => {
                self.at += 1;
                self.end_line(findings);
            }
            Some(b'#') => self.at = end_of_line(self.text, self.at),
            Some(b'{') => self.open(findings),
            Some(b'}') => self.close(findings),
            _ => self.statement(findings),
        }
    }
    fn end_line(&mut self, findings: &mut Findings) {
        if let Some(span) = self.inline.take() {
            findings.add_help(
                Code::TextSyntax,
                span,
                "what follows `{` on its line must be closed by `}` on the same line",
                "write `{ statement }` on one line, or let `{` end its line and `}` stand on a line of its own",
            );
        }
        self.line = self.line.saturating_add(1);
        self.before = Before::Nothing;
        self.fresh = true;
    }
    fn statement(&mut self, findings: &mut Findings) {
        let (end, next) = end_of_statement(self.text, self.at);
        let span = Span::new(self.at, end);
        if self.before == Before::Close {
            findings.add_help(
                Code::TextSyntax,
                span,
                "a statement cannot follow `}` on the same line",
                "begin a new line after `}`",
            );
        }
        if self.before == Before::Open {
            self.inline = Some(span);
        }
        self.events.push(Event::Statement {
            span,
            opens: Opens::Nothing,
        });
        self.before = Before::Statement;
        // After a comma the statement may have run on to a line on which nothing else stands.
        self.fresh = self
            .text
            .get(end..next)
            .is_some_and(|gap| gap.contains('\n'));
        self.at = next;
    }
    fn open(&mut self, findings: &mut Findings) {
        let brace = Span::new(self.at, self.at + 1);
        let fresh = self.fresh;
        self.fresh = false;
        if self.open.len() >= MOST_DEPTH {
            findings.add_help(
                Code::TextTooMuch,
                brace,
                format!("blocks stand more than {MOST_DEPTH} deep in one another"),
                "move what is inside into a `part` and `play` it",
            );
            if let Some(Event::Statement { opens, .. }) = self.events.last_mut() {
                *opens = Opens::Unread;
            }
            return self.skip_block();
        }
        let head = match self.events.last_mut() {
            Some(Event::Statement { opens, .. })
                if *opens == Opens::Nothing && (self.before == Before::Statement || fresh) =>
            {
                *opens = Opens::Block;
                true
            }
            _ => false,
        };
        if !head {
            findings.add(
                Code::TextSyntax,
                brace,
                "`{` without the statement whose block it opens",
            );
            return self.skip_block();
        }
        if self.before != Before::Statement {
            findings.add_help(
                Code::TextSyntax,
                brace,
                "`{` belongs to the end of the line of its statement",
                "write it at the end of the line before",
            );
        }
        self.open.push(Open {
            brace: self.at,
            line: self.line,
        });
        self.at += 1;
        self.before = Before::Open;
    }
    /// Goes past a block that cannot be read, so that what follows it is.
    fn skip_block(&mut self) {
        let mut depth = 0_usize;
        while let Some(byte) = self.byte(self.at) {
            match byte {
                b'{' => depth += 1,
                b'}' => depth -= 1,
                b'#' => {
                    self.at = end_of_line(self.text, self.at);
                    continue;
                }
                b'"' => {
                    self.at = end_of_text(self.text, self.at);
                    continue;
                }
                b'\n' => self.line = self.line.saturating_add(1),
                _ => {}
            }
            self.at += 1;
            if depth == 0 {
                break;
            }
        }
        self.before = Before::Close;
    }
    fn close(&mut self, findings: &mut Findings) {
        let brace = Span::new(self.at, self.at + 1);
        let fresh = self.fresh;
        self.at += 1;
        self.fresh = false;
        self.inline = None;
        let Some(open) = self.open.pop() else {
            findings.add(
                Code::TextSyntax,
                brace,
                "`}` without a block that it closes",
            );
            self.before = Before::Close;
            return;
        };
        if open.line != self.line && !fresh {
            findings.add_help(
                Code::TextSyntax,
                brace,
                "`}` must stand on a line of its own here",
                "begin a new line before `}`",
            );
        }
        self.events.push(Event::Close);
        self.before = Before::Close;
    }
    fn end(&mut self, findings: &mut Findings) {
        self.end_line(findings);
        if let Some(open) = self.open.last() {
            let more = self.open.len() - 1;
            let others = match more {
                0 => String::new(),
                1 => ", nor is the one around it".to_owned(),
                _ => format!(", nor are the {more} around it"),
            };
            findings.add_help(
                Code::TextSyntax,
                Span::new(open.brace, open.brace + 1),
                format!("this block is never closed{others}"),
                "close it with `}` on a line of its own",
            );
        }
        for _ in self.open.drain(..) {
            self.events.push(Event::Close);
        }
    }
}

/// The line break that ends the line of `from`, or the end of the text.
fn end_of_line(text: &str, from: usize) -> usize {
    text.as_bytes()
        .get(from..)
        .and_then(|rest| rest.iter().position(|byte| *byte == b'\n'))
        .map_or(text.len(), |length| from + length)
}

/// Past the closing quote of the text that opens at `from`; the end of its line where it is not closed.
fn end_of_text(text: &str, from: usize) -> usize {
    let mut at = from + 1;
    while let Some(byte) = text.as_bytes().get(at) {
        match byte {
            b'"' => return at + 1,
            b'\n' => return at,
            // The escaped sign cannot end the text; a line break can.
            b'\\'
                if text
                    .as_bytes()
                    .get(at + 1)
                    .is_some_and(|next| *next != b'\n') =>
            {
                at += 2
            }
            _ => at += 1,
        }
    }
    at.min(text.len())
}

/// Where the statement that begins at `from` ends (past its last sign), and where to go on: at a brace, a line break, a comment or the end.
fn end_of_statement(text: &str, from: usize) -> (usize, usize) {
    let mut at = from;
    let mut end = from;
    let mut comma = false;
    while let Some(byte) = text.as_bytes().get(at) {
        match byte {
            b'{' | b'}' => break,
            b'\n' if !comma => break,
            b'#' => {
                at = end_of_line(text, at);
                if !comma {
                    break;
                }
                continue;
            }
            b'"' => {
                at = end_of_text(text, at);
                end = at;
                comma = false;
                continue;
            }
            b' ' | b'\t' | b'\r' | b'\n' => {}
            other => {
                end = at + 1;
                comma = *other == b',';
            }
        }
        at += 1;
    }
    (end, at)
}
