//! The text of a rig file → its blocks and their fields.

use super::super::diagnose::{clip, first_word};
use super::super::grammar::Rule;
use super::super::outline::{Event, Opens, outline};
use super::super::reader::Reader;
use super::super::span::{Span, Spanned};
use super::super::{byte_order_mark, unit::one_of};
use super::field::{self, Entry, FIELDS, Fields, Scope};
use crate::finding::{Code, Finding};
use crate::rig::RotorId;
use std::slice::Iter;

/// A `rotor` block.
pub(super) struct RotorBlock {
    /// Its head.
    pub(super) span: Span,
    /// `None` where the name is none of a rotor (reported).
    pub(super) id: Option<RotorId>,
    /// The name behind `like`.
    pub(super) like: Option<Span>,
    pub(super) fields: Fields,
}

/// Everything that a rig file says.
#[derive(Default)]
pub(super) struct Blocks {
    pub(super) title: Option<Spanned<String>>,
    pub(super) top: Fields,
    /// In the order of the text; a second block of one name is left out (reported).
    pub(super) rotors: Vec<RotorBlock>,
    pub(super) laser: Option<Spanned<Fields>>,
    pub(super) controller: Option<Spanned<Fields>>,
    pub(super) viewing: Option<Spanned<Fields>>,
    /// Whether the head of a rotor does not read: then no rotor is reported as missing.
    pub(super) broken_rotor: bool,
    /// The same of the controller.
    pub(super) broken_controller: bool,
}

impl Blocks {
    /// Where something is reported that the whole file lacks.
    pub(super) fn head(&self, text: &str) -> Span {
        let start = byte_order_mark(text);
        self.title
            .as_ref()
            .map_or(Span::new(start, start), |title| title.span)
    }
}

/// Reads all of `reader.text`.
pub(super) fn read_blocks(reader: &mut Reader<'_>) -> Blocks {
    let mark = byte_order_mark(reader.text);
    let events = outline(reader.text, mark, &mut reader.findings);
    let mut blocks = Blocks::default();
    let mut events = events.iter();
    while let Some(event) = events.next() {
        if reader.findings.over() {
            break;
        }
        if let Event::Statement { span, opens } = event {
            statement(reader, &mut blocks, *span, *opens, &mut events);
        }
    }
    blocks
}

/// A statement of the file's top level, with its block.
fn statement(
    reader: &mut Reader<'_>,
    blocks: &mut Blocks,
    span: Span,
    opens: Opens,
    events: &mut Iter<'_, Event>,
) {
    let word = word_of(reader, span);
    let scope = match word.of(reader.text) {
        "rig" => {
            title(reader, blocks, span);
            return no_block(reader, word, opens, events);
        }
        "rotor" => return rotor(reader, blocks, span, opens, events),
        "laser" => Scope::Laser,
        "controller" => Scope::Controller,
        "viewing" => Scope::Viewing,
        _ => {
            if field(reader, Scope::Top, span, &mut blocks.top) {
                return no_block(reader, word, opens, events);
            }
            // Most probably a misspelt block: which one tells what need not be reported as missing.
            let words = ["rotor", "controller"].into_iter();
            let found = word.of(reader.text);
            match reader.nearest.find(found, words) {
                Some("rotor") => blocks.broken_rotor = true,
                Some(_) => blocks.broken_controller = true,
                None => {}
            }
            return skip(opens, events);
        }
    };
    let reads = reader.statement(Rule::block_line, span).is_some();
    if reads && opens == Opens::Nothing {
        brace_missing(reader, word, span);
    }
    if scope == Scope::Controller && opens != Opens::Block {
        blocks.broken_controller = true;
    }
    let fields = block(reader, scope, opens, events);
    let slot = match scope {
        Scope::Laser => &mut blocks.laser,
        Scope::Controller => &mut blocks.controller,
        _ => &mut blocks.viewing,
    };
    match slot {
        Some(first) => {
            let what = format!("`{}`", word.of(reader.text));
            reader.findings.twice(word, first.span, &what);
        }
        None => *slot = Some(Spanned::new(fields, word)),
    }
}

fn word_of(reader: &Reader<'_>, span: Span) -> Span {
    let start = span.start as usize;
    Span::new(start, start + first_word(span.of(reader.text)).len())
}

fn title(reader: &mut Reader<'_>, blocks: &mut Blocks, span: Span) {
    let pair = reader.statement(Rule::rig_line, span);
    let text = pair.and_then(|pair| pair.into_inner().nth(1));
    let Some(text) = text.map(|text| reader.quoted(text)) else {
        return;
    };
    match &blocks.title {
        Some(first) => reader.findings.twice(text.span, first.span, "the title"),
        None => blocks.title = Some(text),
    }
}

fn rotor(
    reader: &mut Reader<'_>,
    blocks: &mut Blocks,
    span: Span,
    opens: Opens,
    events: &mut Iter<'_, Event>,
) {
    let word = word_of(reader, span);
    let pair = reader.statement(Rule::rotor_line, span);
    let names: Option<Vec<Span>> = pair.map(|pair| {
        pair.into_inner()
            .filter(|inner| inner.as_rule() == Rule::name)
            .map(|name| reader.span(&name))
            .collect()
    });
    if names.is_some() && opens == Opens::Nothing {
        brace_missing(reader, word, span);
    }
    let fields = block(reader, Scope::Rotor, opens, events);
    let names = names.unwrap_or_default();
    let Some(name) = names.first().copied() else {
        blocks.broken_rotor = true;
        return;
    };
    let text = name.of(reader.text);
    let id = super::rotor_named(reader, text, name);
    if id.is_none() || opens != Opens::Block {
        blocks.broken_rotor = true;
    }
    let same = |rotor: &&RotorBlock| rotor.id.is_some() && rotor.id == id;
    if let Some(first) = blocks.rotors.iter().find(same) {
        let what = format!("rotor `{text}`");
        return reader.findings.twice(name, first.span, &what);
    }
    blocks.rotors.push(RotorBlock {
        span,
        id,
        like: names.get(1).copied(),
        fields,
    });
}

/// The fields of a block, up to its end.
fn block(
    reader: &mut Reader<'_>,
    scope: Scope,
    opens: Opens,
    events: &mut Iter<'_, Event>,
) -> Fields {
    let mut fields = Fields::new();
    if opens != Opens::Block {
        return fields;
    }
    while let Some(event) = events.next() {
        match event {
            Event::Close => break,
            Event::Statement { span, opens } => {
                if !reader.findings.over() {
                    field(reader, scope, *span, &mut fields);
                }
                let word = word_of(reader, *span);
                no_block(reader, word, *opens, events);
            }
        }
    }
    fields
}

/// Goes past a block whose head is no head of one.
fn skip(opens: Opens, events: &mut Iter<'_, Event>) {
    let mut depth = usize::from(opens == Opens::Block);
    while depth > 0 {
        match events.next() {
            None => break,
            Some(Event::Close) => depth -= 1,
            Some(Event::Statement { opens, .. }) => depth += usize::from(*opens == Opens::Block),
        }
    }
}

fn no_block(reader: &mut Reader<'_>, word: Span, opens: Opens, events: &mut Iter<'_, Event>) {
    if opens != Opens::Nothing {
        let known = FIELDS
            .iter()
            .any(|field| field.word == word.of(reader.text));
        if known || word.of(reader.text) == "rig" {
            let message = format!("`{}` has no block", word.of(reader.text));
            reader.findings.add(Code::TextSyntax, word, message);
        }
        skip(opens, events);
    }
}

fn brace_missing(reader: &mut Reader<'_>, word: Span, span: Span) {
    let end = span.end as usize;
    let message = format!("the `{{` of this `{}` is missing", word.of(reader.text));
    reader.findings.add_help(
        Code::TextSyntax,
        Span::new(end, end),
        message,
        "end the line with `{`, and the block with `}` on a line of its own",
    );
}

/// Reads one field into `fields`; whether its word is one of a field of this scope. What is wrong is reported.
fn field(reader: &mut Reader<'_>, scope: Scope, span: Span, fields: &mut Fields) -> bool {
    let word = word_of(reader, span);
    let text = word.of(reader.text);
    let known = FIELDS
        .iter()
        .find(|field| field.scope == scope && field.word == text);
    let Some(field) = known else {
        unknown(reader, scope, span, word);
        return false;
    };
    let value = reader
        .statement(field.rule, span)
        .and_then(|pair| field::read(reader, field, pair));
    if let Some(first) = fields.get(field.key) {
        let first_word = word_of(reader, first.span);
        let (this, other) = (word.of(reader.text), first_word.of(reader.text));
        if this == other {
            reader
                .findings
                .twice(word, first_word, &format!("`{this}`"));
        } else {
            let finding = Finding::new(
                Code::TextDuplicate,
                reader.findings.place(word),
                format!("`{this}` and `{other}` both give the gear"),
            )
            .also(reader.findings.place(first_word), "first given here")
            .help("keep one of the two");
            reader.findings.push(finding);
        }
        return true;
    }
    let rest = Span::new(word.end as usize, span.end as usize).of(reader.text);
    let start = word.end as usize + (rest.len() - rest.trim_start().len());
    let value_span = Span::new(start, span.end as usize);
    fields.insert(
        field.key,
        Entry {
            span,
            value_span,
            value,
        },
    );
    true
}

fn unknown(reader: &mut Reader<'_>, scope: Scope, span: Span, word: Span) {
    if reader.too_long(span) {
        return;
    }
    let found = word.of(reader.text);
    if found.is_empty() {
        let sign = span
            .of(reader.text)
            .chars()
            .next()
            .map_or(0, char::len_utf8);
        let start = span.start as usize;
        let sign = Span::new(start, start + sign);
        let message = format!("a statement does not begin with `{}`", sign.of(reader.text));
        return reader.findings.add_help(
            Code::TextSyntax,
            sign,
            message,
            "a statement begins with a word such as `rotor`",
        );
    }
    let blocks: &[&str] = match scope {
        Scope::Top => &["rig", "rotor", "laser", "controller", "viewing"],
        _ => &[],
    };
    let words: Vec<&str> = FIELDS
        .iter()
        .filter(|field| field.scope == scope)
        .map(|field| field.word)
        .chain(blocks.iter().copied())
        .collect();
    let elsewhere = FIELDS.iter().find(|field| field.word == found);
    let help = match (elsewhere, reader.nearest.find(found, words.iter().copied())) {
        (Some(field), _) => format!("`{found}` belongs {}", field.scope.block()),
        (None, Some(near)) => format!("did you mean `{near}`?"),
        (None, None) if matches!(found, "cue" | "show" | "usual" | "figure" | "part") => {
            "this belongs in a show file (`*.show`)".to_owned()
        }
        (None, None) => {
            let words: Vec<String> = words.iter().map(|word| format!("`{word}`")).collect();
            format!("what may stand here: {}", one_of(&words))
        }
    };
    reader.findings.add_help(
        Code::TextSyntax,
        word,
        format!("`{}` is no {}", clip(found), scope.text()),
        help,
    );
}
