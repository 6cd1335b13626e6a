//! Clauses of a cue, of `usual` and of the statements that move the motors: pairs → nodes.

use super::diagnose::clip;
use super::grammar::Rule;
use super::law;
use super::number::written;
use super::reader::Reader;
use super::span::{Span, Spanned};
use super::tree::{Clause, Clauses, Morph};
use super::unit::Kind;
use crate::exact::{Rational, Seconds, Speed, Turns, ratio, whole};
use crate::finding::Code;
use crate::show::{Hold, Land, Length, Pace};
use num_traits::{One, Signed, Zero};
use pest::iterators::Pair;

/// Whose clauses they are.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Owner {
    Cue,
    Usual,
}

/// Where each clause was written first.
type Seen = Vec<(Rule, Span)>;

/// Reads the clauses among `pairs`.
pub(super) fn read<'p>(
    reader: &mut Reader<'_>,
    pairs: impl Iterator<Item = Pair<'p, Rule>>,
    owner: Owner,
) -> Clauses {
    let mut clauses = Clauses::none(false);
    let mut seen = Seen::new();
    for pair in pairs {
        let rule = pair.as_rule();
        let span = reader.span(&pair);
        if !fits(reader, &mut clauses, &mut seen, rule, span) {
            continue;
        }
        match rule {
            Rule::morph => clauses.morph = Clause::read(morph(reader, pair), span),
            Rule::hold => clauses.hold = Clause::read(hold(reader, pair, owner), span),
            Rule::rate => clauses.pace = Clause::read(pace(reader, pair).map(Pace::Rate), span),
            Rule::lead => clauses.pace = Clause::read(pace(reader, pair).map(Pace::Lead), span),
            Rule::land => clauses.land = Clause::read(land(reader, pair), span),
            Rule::spin => clauses.spin = Clause::read(spin(reader, pair), span),
            Rule::beam => clauses.beam = Clause::read(beam(reader, pair), span),
            Rule::label if owner == Owner::Usual => reader.findings.add_help(
                Code::TextSyntax,
                word_span(span, "name"),
                "`usual` takes no `name`: each cue has its own",
                "write it in the cue",
            ),
            Rule::label => {
                let text = last_of(pair, Rule::text).map(|text| reader.quoted(text).value);
                clauses.name = Clause::read(text, span);
            }
            _ => {}
        }
    }
    clauses
}

/// The word at the start of a clause.
fn word_span(span: Span, word: &str) -> Span {
    let start = span.start as usize;
    Span::new(start, start + word.len())
}

/// Whether a clause is the first of its kind; reported if not, and the kind does not read then.
fn fits(
    reader: &mut Reader<'_>,
    clauses: &mut Clauses,
    seen: &mut Seen,
    rule: Rule,
    span: Span,
) -> bool {
    let kind = if rule == Rule::lead { Rule::rate } else { rule };
    let word = match rule {
        Rule::morph => "morph",
        Rule::hold => "hold",
        Rule::rate => "rate",
        Rule::lead => "lead",
        Rule::land => "land",
        Rule::spin => "spin",
        Rule::beam => "beam",
        Rule::label => "name",
        _ => return false,
    };
    let Some((_, first)) = seen.iter().find(|(known, _)| *known == kind) else {
        seen.push((kind, span));
        return true;
    };
    let first_word = super::diagnose::first_word(first.of(reader.text)).to_owned();
    let at = word_span(span, word);
    if first_word == word {
        reader.findings.twice(at, *first, &format!("`{word}`"));
    } else {
        let finding = crate::finding::Finding::new(
            Code::TextDuplicate,
            reader.findings.place(at),
            format!("`{word}` and `{first_word}` both say how fast the figure is drawn"),
        )
        .also(reader.findings.place(*first), "first given here")
        .help("keep one of the two");
        reader.findings.push(finding);
    }
    match kind {
        Rule::morph => clauses.morph = Clause::Broken,
        Rule::hold => clauses.hold = Clause::Broken,
        Rule::rate => clauses.pace = Clause::Broken,
        Rule::land => clauses.land = Clause::Broken,
        Rule::spin => clauses.spin = Clause::Broken,
        Rule::beam => clauses.beam = Clause::Broken,
        _ => clauses.name = Clause::Broken,
    }
    false
}

/// The last inner pair of a rule.
fn last_of(pair: Pair<'_, Rule>, rule: Rule) -> Option<Pair<'_, Rule>> {
    pair.into_inner()
        .filter(|inner| inner.as_rule() == rule)
        .last()
}

/// What follows `run-up` or `run-down`; alone they are `fastest`. `None` where it does not read (reported).
pub(super) fn run(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Morph> {
    if pair.as_rule() == Rule::EOI {
        return Some(Morph {
            length: Length::Fastest { at_least: None },
            law: None,
            skew: None,
            dark: None,
        });
    }
    morph(reader, pair)
}

/// A pair `morph` or `run`; each option at most once.
pub(super) fn morph(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Morph> {
    let mut length = None;
    let mut options = Options::default();
    for inner in pair.into_inner() {
        match inner.as_rule() {
            Rule::w_fastest => length = Some(Length::Fastest { at_least: None }),
            Rule::duration => {
                let given = reader.amount(inner, Kind::Duration);
                match given {
                    Some(given) => length = Some(Length::Given(Seconds::new(given.value))),
                    None => options.broken = true,
                }
            }
            _ => options.read(reader, inner),
        }
    }
    options.into_morph(reader, length)
}

/// What stands behind the duration of a morph.
#[derive(Default)]
struct Options {
    law: Option<Spanned<Option<crate::motion::LawKind>>>,
    at_least: Option<Spanned<Option<Seconds>>>,
    skew: Option<Spanned<Option<Rational>>>,
    dark: Option<Spanned<bool>>,
    broken: bool,
}

impl Options {
    fn read(&mut self, reader: &mut Reader<'_>, pair: Pair<'_, Rule>) {
        let span = reader.span(&pair);
        match pair.as_rule() {
            Rule::law => {
                if let Some(first) = &self.law {
                    reader
                        .findings
                        .twice(span, first.span, "the law of this morph");
                    self.broken = true;
                    return;
                }
                let law = law::read(reader, pair);
                self.law = Some(Spanned::new(law, span));
            }
            Rule::at_least => {
                if let Some(first) = &self.at_least {
                    reader.findings.twice(span, first.span, "`at least`");
                    self.broken = true;
                    return;
                }
                let value = last_of(pair, Rule::duration)
                    .and_then(|duration| reader.amount(duration, Kind::Duration))
                    .map(|amount| Seconds::new(amount.value));
                self.at_least = Some(Spanned::new(value, span));
            }
            Rule::skew => {
                if let Some(first) = &self.skew {
                    reader.findings.twice(span, first.span, "`skew`");
                    self.broken = true;
                    return;
                }
                let value = skew(reader, pair);
                self.skew = Some(Spanned::new(value, span));
            }
            Rule::w_dark | Rule::w_lit => {
                if let Some(first) = &self.dark {
                    reader
                        .findings
                        .twice(span, first.span, "`dark` or `lit` of this morph");
                    self.broken = true;
                    return;
                }
                self.dark = Some(Spanned::new(pair.as_rule() == Rule::w_dark, span));
            }
            _ => {}
        }
    }

    fn into_morph(self, reader: &mut Reader<'_>, length: Option<Length>) -> Option<Morph> {
        let mut broken = self.broken;
        let length = match (length, &self.at_least) {
            (Some(Length::Given(_)), Some(at_least)) => {
                reader.findings.add_help(
                    Code::TextSyntax,
                    at_least.span,
                    "`at least` goes with `fastest`: a morph with a duration has no other",
                    "write `morph fastest … at least …`, or take `at least` away",
                );
                None
            }
            (Some(Length::Fastest { .. }), Some(at_least)) => {
                at_least.value.clone().map(|bound| Length::Fastest {
                    at_least: Some(bound),
                })
            }
            (length, _) => length,
        };
        let law = match self.law {
            None => None,
            Some(law) => {
                broken |= law.value.is_none();
                law.value
            }
        };
        let skew = match self.skew {
            None => None,
            Some(skew) => {
                broken |= skew.value.is_none();
                if let Some(kind) = law.as_ref().filter(|kind| !law::takes_skew(kind)) {
                    no_skew(reader, skew.span, kind);
                    broken = true;
                }
                let span = skew.span;
                skew.value.map(|value| Spanned::new(value, span))
            }
        };
        let length = length?;
        if broken {
            return None;
        }
        Some(Morph {
            length,
            law,
            skew,
            dark: self.dark.map(|dark| dark.value),
        })
    }
}

fn no_skew(reader: &mut Reader<'_>, span: Span, kind: &crate::motion::LawKind) {
    reader.findings.add_help(
        Code::TextSyntax,
        span,
        no_skew_message(kind),
        "take `skew` away, or take a law such as `quintic`",
    );
}

/// Why a `skew` does not go with a law.
pub(super) fn no_skew_message(kind: &crate::motion::LawKind) -> String {
    format!(
        "`skew` does not go with `{}`: it has no single point of steepest change to move",
        law::word(kind)
    )
}

/// A pair `skew`: 5 % to 95 %.
fn skew(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Rational> {
    let share =
        last_of(pair, Rule::quantity).and_then(|share| reader.quantity(share, Kind::Share))?;
    let (least, most) = (ratio(1, 20), ratio(19, 20));
    if share.value < least || share.value > most {
        let nearest = if share.value < least { 5 } else { 95 };
        reader.findings.add_help(
            Code::TextNumber,
            share.span,
            "`skew` lies from 5 % to 95 %",
            format!("nearest is `skew {nearest} %`"),
        );
        return None;
    }
    Some(share.value)
}

fn hold(reader: &mut Reader<'_>, pair: Pair<'_, Rule>, owner: Owner) -> Option<Hold> {
    let mut until = None;
    let mut time = None;
    for inner in pair.into_inner() {
        match inner.as_rule() {
            Rule::w_until => until = Some(reader.span(&inner)),
            Rule::duration => time = reader.amount(inner, Kind::Duration),
            _ => {}
        }
    }
    if let (Some(until), Owner::Usual) = (until, owner) {
        reader.findings.add_help(
            Code::TextSyntax,
            until,
            "`usual` takes no `hold until`: only one cue can end at that time",
            "write `hold until` in the cue, or `hold` with a duration here",
        );
        return None;
    }
    let time = Seconds::new(time?.value);
    Some(if until.is_some() {
        Hold::Until(time)
    } else {
        Hold::For(time)
    })
}

fn pace(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Speed> {
    let word = pair.as_str().get(..4).unwrap_or_default().to_owned();
    let speed =
        last_of(pair, Rule::quantity).and_then(|speed| reader.quantity(speed, Kind::Speed))?;
    if !speed.value.is_positive() {
        reader.findings.add_help(
            Code::TextNumber,
            speed.span,
            format!("`{word}` must be above zero"),
            "the signs of the ratio say which way the mirrors turn, e.g. `-1:2`",
        );
        return None;
    }
    Some(Speed::new(speed.value))
}

fn land(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Land> {
    let what = pair.into_inner().last()?;
    if what.as_rule() == Rule::w_free {
        return Some(Land::Free);
    }
    let angle = reader.quantity(what, Kind::Angle)?;
    Some(Land::Angle(Turns::new(angle.value)))
}

fn spin(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Speed> {
    last_of(pair, Rule::quantity)
        .and_then(|speed| reader.quantity(speed, Kind::Speed))
        .map(|speed| Speed::new(speed.value))
}

fn beam(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<Rational> {
    let what = pair.into_inner().last()?;
    match what.as_rule() {
        Rule::w_on => return Some(Rational::one()),
        Rule::w_off => return Some(Rational::zero()),
        _ => {}
    }
    let share = reader.quantity(what, Kind::Share)?;
    if share.value.is_negative() || share.value > Rational::one() {
        let percent = written(&(&share.value * whole(100)));
        let nearest = if share.value.is_negative() {
            "off"
        } else {
            "on"
        };
        reader.findings.add_help(
            Code::TextNumber,
            share.span,
            format!(
                "a beam of {} % cannot be: it lies from 0 % to 100 %",
                clip(&percent)
            ),
            format!("nearest is `beam {nearest}`"),
        );
        return None;
    }
    Some(share.value)
}
