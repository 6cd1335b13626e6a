//! The text of a show file → its syntax tree.

use super::clauses::{self, Owner};
use super::diagnose::{clip, first_word};
use super::figures;
use super::grammar::Rule;
use super::number;
use super::outline::{Event, Opens, outline};
use super::reader::Reader;
use super::span::{Span, Spanned};
use super::tree::{
    BrokenNode, Clause, Clauses, CueNode, FigureDefinition, FigureNode, PartNode, RepeatNode,
    Statement,
};
use super::{MOST_CUES, byte_order_mark};
use crate::finding::{Code, FileId, Finding, Place};
use pest::iterators::Pair;
use std::slice::Iter;

/// The syntax tree of a show file, with the text it was read from.
#[derive(Clone, Debug)]
pub struct ShowScript {
    pub(super) file: FileId,
    pub(super) text: String,
    pub(super) statements: Vec<Statement>,
    /// Whether reading stopped before the end of the text; what is missing then is no finding.
    pub(super) stopped: bool,
}

impl ShowScript {
    /// The file that the first `rig` statement names, and the place of that name.
    #[must_use]
    pub fn rig_file(&self) -> Option<(&str, Place)> {
        self.statements
            .iter()
            .find_map(|statement| match statement {
                Statement::Rig(name) => Some((name.value.as_str(), name.span.place(self.file))),
                _ => None,
            })
    }
}

/// The statements of a show: first word, rule, whether it opens a block, whether it may stand in one.
const STATEMENTS: [(&str, Rule, bool, bool); 11] = [
    ("show", Rule::show_line, false, false),
    ("rig", Rule::rig_line, false, false),
    ("figure", Rule::figure_line, false, false),
    ("usual", Rule::usual_line, false, false),
    ("part", Rule::part_line, true, false),
    ("play", Rule::play_line, false, true),
    ("repeat", Rule::repeat_line, true, true),
    ("run-up", Rule::run_up_line, false, false),
    ("cue", Rule::cue_line, false, true),
    ("loop", Rule::loop_line, false, false),
    ("run-down", Rule::run_down_line, false, false),
];

/// What begins a statement of a rig, and none of a show.
const RIG_WORDS: [&str; 5] = ["rotor", "controller", "laser", "viewing", "projection"];

/// Reads the text of a show; every statement that does not read is reported and taken out.
#[must_use]
pub fn parse_show(file: FileId, text: &str) -> (ShowScript, Vec<Finding>) {
    let mut script = ShowScript {
        file,
        text: String::new(),
        statements: Vec::new(),
        stopped: false,
    };
    let mut parser = Parser {
        reader: Reader::new(file, text),
        stopped: false,
    };
    if super::too_large(text, &mut parser.reader.findings) {
        script.stopped = true;
        return (script, parser.reader.findings.finish());
    }
    let events = outline(text, byte_order_mark(text), &mut parser.reader.findings);
    if let Some(span) = one_too_many(text, &events) {
        parser.stopped = true;
        parser.reader.findings.add(
            Code::TextTooMuch,
            span,
            format!("this is more than {MOST_CUES} cues; the show is not read"),
        );
    } else {
        script.statements = parser.block(&mut events.iter(), false);
    }
    script.stopped = parser.stopped || parser.reader.findings.over();
    script.text = text.to_owned();
    (script, parser.reader.findings.finish())
}

/// The first `cue` past the most that a show has.
fn one_too_many(text: &str, events: &[Event]) -> Option<Span> {
    let mut cues = events.iter().filter_map(|event| match event {
        Event::Statement { span, .. } => {
            let start = span.start as usize;
            let word = Span::new(start, start + first_word(span.of(text)).len());
            (word.of(text) == "cue").then_some(word)
        }
        Event::Close => None,
    });
    cues.nth(MOST_CUES)
}

struct Parser<'t> {
    reader: Reader<'t>,
    stopped: bool,
}

/// The statement at hand.
#[derive(Clone, Copy)]
struct Head {
    span: Span,
    word: Span,
}

impl<'t> Parser<'t> {
    /// The statements up to the end of the block (or of the file); never deeper than the outline lets blocks be.
    fn block(&mut self, events: &mut Iter<'_, Event>, inner: bool) -> Vec<Statement> {
        let mut statements = Vec::new();
        while let Some(event) = events.next() {
            match event {
                Event::Close => break,
                Event::Statement { span, opens } => {
                    if self.stopped || self.reader.findings.over() {
                        self.stopped = true;
                        if *opens == Opens::Block {
                            self.block(events, true);
                        }
                        continue;
                    }
                    let body = |parser: &mut Self| match opens {
                        Opens::Nothing => None,
                        Opens::Block => Some(parser.block(events, true)),
                        Opens::Unread => Some(vec![broken(*span, None, Vec::new())]),
                    };
                    self.one(*span, inner, body, &mut statements);
                }
            }
        }
        statements
    }

    /// One statement and, where it has one, its block.
    fn one(
        &mut self,
        span: Span,
        inner: bool,
        body: impl FnOnce(&mut Self) -> Option<Vec<Statement>>,
        into: &mut Vec<Statement>,
    ) {
        let text = span.of(self.reader.text);
        let found = first_word(text);
        let start = span.start as usize;
        let word = Span::new(start, start + found.len());
        let head = Head { span, word };
        let Some((name, rule, opens, inside)) = STATEMENTS.iter().find(|(name, ..)| *name == found)
        else {
            let meant = self.unknown(head, found);
            let known = self.reader.findings.len();
            let body = body(self).unwrap_or_default();
            if RIG_WORDS.contains(&found) {
                self.reader.findings.truncate(known);
            }
            match meant {
                Some(name) => self.not_read(head, name, body, into),
                None => into.push(broken(span, None, body)),
            }
            return;
        };
        if inner && !inside {
            self.reader.findings.add_help(
                Code::TextSyntax,
                word,
                format!("`{name}` cannot stand inside a block"),
                "inside a block stand only `cue`, `repeat` and `play`",
            );
        }
        let pair = self.reader.statement(*rule, span);
        let failed = pair.is_none();
        // Before the block is read: pairs know their place in their own statement only.
        let read = pair.and_then(|pair| self.statement(*rule, pair, head));
        let block = body(self);
        self.check_block(head, name, (!failed, *opens), block.as_deref());
        let Some(mut statement) = read else {
            return self.not_read(head, name, block.unwrap_or_default(), into);
        };
        match (&mut statement, block) {
            (Statement::Part(part), Some(block)) => part.body = block,
            (Statement::Repeat(repeat), Some(block)) => repeat.body = block,
            // A block that does not belong there is reported; what stands in it is read all the same.
            (_, Some(block)) => {
                into.push(statement);
                into.push(broken(span, Some(name), block));
                return;
            }
            // What it would have repeated is not known.
            (Statement::Repeat(repeat), None) => repeat.body.push(broken(span, None, Vec::new())),
            (_, None) => {}
        }
        into.push(statement);
    }

    /// Reports a statement that begins with no known word; which one was probably meant.
    fn unknown(&mut self, head: Head, found: &str) -> Option<&'static str> {
        if self.reader.too_long(head.span) {
            return None;
        }
        let text = head.span.of(self.reader.text);
        if found.is_empty() {
            let sign = text.chars().next().map_or(0, char::len_utf8);
            let start = head.span.start as usize;
            let sign = Span::new(start, start + sign);
            self.reader.findings.add_help(
                Code::TextSyntax,
                sign,
                format!(
                    "a statement does not begin with `{}`",
                    sign.of(self.reader.text)
                ),
                "a statement begins with a word such as `cue`",
            );
            return None;
        }
        let names = STATEMENTS.iter().map(|(name, ..)| *name);
        let near = self.reader.nearest.find(found, names);
        let help = match (near, found) {
            (_, "morph" | "hold" | "rate" | "lead" | "land" | "spin" | "beam" | "name") => {
                "clauses stand in the line of their cue; after a comma a line goes on in the next one".to_owned()
            }
            (_, rig) if RIG_WORDS.contains(&rig) => {
                "this belongs in a rig file (`*.rig`)".to_owned()
            }
            (Some(near), _) => format!("did you mean `{near}`?"),
            (None, _) => format!(
                "a statement begins with one of {}",
                STATEMENTS.map(|(name, ..)| format!("`{name}`")).join(" ")
            ),
        };
        self.reader.findings.add_help(
            Code::TextSyntax,
            head.word,
            format!("`{}` is no statement of a show", clip(found)),
            help,
        );
        near
    }

    /// Reports a block that is missing, empty or does not belong to a statement; `(reads, opens)` says whether the statement reads and has one.
    fn check_block(
        &mut self,
        head: Head,
        name: &str,
        (reads, opens): (bool, bool),
        block: Option<&[Statement]>,
    ) {
        if opens && block.is_some_and(<[_]>::is_empty) && !self.stopped {
            self.reader.findings.add_help(
                Code::TextMissing,
                head.word,
                format!("the block of this `{name}` is empty"),
                "put a `cue` into it, or take it away",
            );
        }
        if !reads || opens == block.is_some() {
            return;
        }
        if opens {
            let end = head.span.end as usize;
            self.reader.findings.add_help(
                Code::TextSyntax,
                Span::new(end, end),
                format!("the `{{` of this `{name}` is missing"),
                "end the line with `{`, and the block with `}` on a line of its own",
            );
        } else {
            self.reader.findings.add(
                Code::TextSyntax,
                head.word,
                format!("`{name}` has no block"),
            );
        }
    }

    /// What is left of a statement that does not read: the name that it defines, so that its uses are not reported too.
    fn not_read(
        &mut self,
        head: Head,
        name: &'static str,
        body: Vec<Statement>,
        into: &mut Vec<Statement>,
    ) {
        let span = head.span;
        let rest = Span::new(head.word.end as usize, span.end as usize).of(self.reader.text);
        let start = head.word.end as usize + (rest.len() - rest.trim_start().len());
        let defined = Span::new(start, start + first_word(rest.trim_start()).len());
        let statement = match name {
            "figure" if defined.len() > 0 => Statement::Figure(Box::new(FigureDefinition {
                name: Some(defined),
                figure: Spanned::new(FigureNode::Broken, span),
            })),
            "part" if defined.len() > 0 => Statement::Part(Box::new(PartNode {
                span,
                name: Some(defined),
                body,
            })),
            "usual" => Statement::Usual(Box::new(Spanned::new(Clauses::none(true), span))),
            "run-up" => Statement::RunUp(Box::new(Spanned::new(None, span))),
            "run-down" => Statement::RunDown(Box::new(Spanned::new(None, span))),
            "loop" => Statement::Loop(Box::new(Spanned::new(Clause::Broken, span))),
            _ => broken(span, Some(name), body),
        };
        into.push(statement);
    }

    /// The node of a statement that the grammar takes; `None` where a value in it keeps the whole from being read.
    fn statement(&mut self, rule: Rule, pair: Pair<'t, Rule>, head: Head) -> Option<Statement> {
        let span = head.span;
        let reader = &mut self.reader;
        let mut inner = pair.into_inner();
        inner.next();
        Some(match rule {
            Rule::show_line => Statement::Title(reader.quoted(inner.next()?)),
            Rule::rig_line => Statement::Rig(reader.quoted(inner.next()?)),
            Rule::figure_line => {
                let name = defined_name(reader, &inner.next()?, "figure");
                let figure = inner.find(|inner| inner.as_rule() == Rule::figure)?;
                let figure = figures::read(reader, figure);
                Statement::Figure(Box::new(FigureDefinition { name, figure }))
            }
            Rule::usual_line => {
                let clauses = clauses::read(reader, inner, Owner::Usual);
                Statement::Usual(Box::new(Spanned::new(clauses, span)))
            }
            Rule::run_up_line => {
                let run = clauses::run(reader, inner.next()?);
                Statement::RunUp(Box::new(Spanned::new(run, span)))
            }
            Rule::run_down_line => {
                let run = clauses::run(reader, inner.next()?);
                Statement::RunDown(Box::new(Spanned::new(run, span)))
            }
            Rule::loop_line => {
                let morph = inner.find(|inner| inner.as_rule() == Rule::morph);
                let clause = morph.map_or(Clause::Absent, |morph| {
                    let at = reader.span(&morph);
                    Clause::read(clauses::morph(reader, morph), at)
                });
                Statement::Loop(Box::new(Spanned::new(clause, span)))
            }
            Rule::cue_line => {
                let figure = figures::read(reader, inner.next()?);
                let clauses = clauses::read(reader, inner, Owner::Cue);
                Statement::Cue(Box::new(CueNode {
                    span,
                    figure,
                    clauses,
                }))
            }
            Rule::play_line => {
                let name = reader.span(&inner.next()?);
                Statement::Play(Spanned::new(name, span))
            }
            Rule::part_line => Statement::Part(Box::new(PartNode {
                span,
                name: defined_name(reader, &inner.next()?, "part"),
                body: Vec::new(),
            })),
            Rule::repeat_line => {
                let times = times(reader, &inner.next()?)?;
                Statement::Repeat(Box::new(RepeatNode {
                    span,
                    times,
                    body: Vec::new(),
                }))
            }
            _ => return None,
        })
    }
}

fn broken(span: Span, word: Option<&'static str>, body: Vec<Statement>) -> Statement {
    Statement::Broken(Box::new(BrokenNode { span, word, body }))
}

/// N of `repeat N`.
fn times(reader: &mut Reader<'_>, pair: &Pair<'_, Rule>) -> Option<Spanned<u64>> {
    let times = reader.plain(pair)?;
    let whole = number::whole_between(&times.value, 1, i64::MAX);
    if whole.is_none() {
        reader.findings.add_help(
            Code::TextNumber,
            times.span,
            "a block is repeated a whole number of times, at least once",
            "e.g. `repeat 3 {`",
        );
    }
    let whole = u64::try_from(whole?).ok()?;
    Some(Spanned::new(whole, times.span))
}

/// The name that a statement defines; a word that cannot be one is reported.
fn defined_name(reader: &mut Reader<'_>, pair: &Pair<'_, Rule>, what: &str) -> Option<Span> {
    let span = reader.span(pair);
    if pair.as_rule() != Rule::reserved {
        return Some(span);
    }
    let name = pair.as_str();
    reader.findings.add_help(
        Code::TextNameTaken,
        span,
        format!("`{name}` is a word of the language and cannot name a {what}"),
        format!("e.g. `{name}-1`"),
    );
    None
}
