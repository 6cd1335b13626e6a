//! Figures as they are written: pairs → forms with their ratios.

use super::grammar::Rule;
use super::number;
use super::reader::Reader;
use super::span::{Span, Spanned};
use super::tree::FigureNode;
use crate::exact::Rational;
use crate::figure::forms::{self, Impossible};
use crate::figure::{Form, MOST_TERM, NamedCurve, Ratio};
use crate::finding::Code;
use num_traits::Signed;
use pest::iterators::Pair;

/// Reads a pair `figure`; what is wrong with it is reported.
pub(super) fn read(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Spanned<FigureNode> {
    let span = reader.span(&pair);
    let Some(inner) = pair.into_inner().next() else {
        return Spanned::new(FigureNode::Broken, span);
    };
    let form = match inner.as_rule() {
        Rule::figure_name => return Spanned::new(FigureNode::Name, span),
        Rule::rose => rose(reader, inner),
        Rule::ring => ring(reader, inner, span),
        Rule::star => star(reader, inner),
        Rule::ratio_form => inner
            .into_inner()
            .find(|inner| inner.as_rule() == Rule::ratio)
            .and_then(|terms| bare(reader, &terms)),
        _ => bare(reader, &inner),
    };
    let node = form.map_or(FigureNode::Broken, |(form, ratio)| {
        FigureNode::Form(form, ratio)
    });
    Spanned::new(node, span)
}

/// The built-in curve of a name.
pub(super) fn named(name: &str) -> Option<NamedCurve> {
    NamedCurve::ALL
        .into_iter()
        .find(|curve| curve.word() == name)
}

/// Every name that a figure has without a definition.
pub(super) fn names() -> impl Iterator<Item = &'static str> {
    NamedCurve::ALL.into_iter().map(NamedCurve::word)
}

/// A whole number; reported if it is none.
fn whole(reader: &mut Reader<'_>, value: &Spanned<Rational>, what: &str) -> Option<i64> {
    let number = number::as_whole(&value.value);
    if number.is_none() {
        reader.findings.add(
            Code::TextNumber,
            value.span,
            format!("{what} must be whole numbers"),
        );
    }
    number
}

fn bare(reader: &mut Reader<'_>, pair: &Pair<'_, Rule>) -> Option<(Form, Ratio)> {
    let span = reader.span(pair);
    let [p, q] = reader.terms(pair)?;
    let first = whole(reader, &p, "the terms of a ratio");
    let second = whole(reader, &q, "the terms of a ratio");
    match forms::written(first?, second?) {
        Ok(ratio) => Some((Form::Ratio, ratio)),
        Err(Impossible::NotPositive) => {
            reader.findings.add_help(
                Code::TextNumber,
                span,
                "in `0:0` both mirrors stand, so nothing is drawn",
                "let one of them turn, e.g. `1:0` for a circle",
            );
            None
        }
        Err(_) => {
            let large = if first?.unsigned_abs() > MOST_TERM.unsigned_abs() {
                p.span
            } else {
                q.span
            };
            reader.findings.add(
                Code::TextTooMuch,
                large,
                format!("the terms of a ratio go up to {MOST_TERM}"),
            );
            None
        }
    }
}

fn rose(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<(Form, Ratio)> {
    let number = pair
        .into_inner()
        .find(|inner| inner.as_rule() == Rule::plain)?;
    let k = reader.plain(&number)?;
    if number.as_str().contains(['.', 'e', 'E']) {
        reader.findings.add_help(
            Code::TextNumber,
            k.span,
            "a rose is written with whole numbers, `rose N` or `rose N/D`",
            format!("write `rose {}`", fraction(&k.value)),
        );
        return None;
    }
    match forms::rose(&k.value) {
        Ok(ratio) => Some((Form::Rose, ratio)),
        Err(Impossible::TooLarge { terms }) => too_large(reader, k.span, &terms),
        Err(_) => {
            reader.findings.add_help(
                Code::TextNumber,
                k.span,
                "a rose's number is not below zero",
                format!("write `rose {}`", fraction(&k.value.abs())),
            );
            None
        }
    }
}

/// `5/3`, or `5`.
fn fraction(value: &Rational) -> String {
    if value.is_integer() {
        value.numer().to_string()
    } else {
        format!("{}/{}", value.numer(), value.denom())
    }
}

fn too_large<T>(reader: &mut Reader<'_>, span: Span, terms: &(String, String)) -> Option<T> {
    reader.findings.add(
        Code::TextTooMuch,
        span,
        format!(
            "this figure is {}:{}, and the terms of a ratio go up to {MOST_TERM}",
            terms.0, terms.1
        ),
    );
    None
}

fn ring(reader: &mut Reader<'_>, pair: Pair<'_, Rule>, span: Span) -> Option<(Form, Ratio)> {
    let mut outside = false;
    let mut sizes = Vec::with_capacity(2);
    for inner in pair.into_inner() {
        match inner.as_rule() {
            Rule::w_outside => outside = true,
            Rule::plain => sizes.push(reader.plain(&inner)),
            _ => {}
        }
    }
    let sizes: Vec<_> = sizes.into_iter().collect::<Option<_>>()?;
    let Ok([ring, wheel]) = <[_; 2]>::try_from(sizes) else {
        return None;
    };
    let ratio = if outside {
        forms::ring_outside(&ring.value, &wheel.value)
    } else {
        forms::ring(&ring.value, &wheel.value)
    };
    match ratio {
        Ok(ratio) => {
            let sizes = ring.value / wheel.value;
            let form = if outside {
                Form::RingOutside(sizes)
            } else {
                Form::Ring(sizes)
            };
            Some((form, ratio))
        }
        Err(Impossible::TooLarge { terms }) => too_large(reader, span, &terms),
        Err(Impossible::WheelTooLarge) => {
            reader.findings.add_help(
                Code::TextNumber,
                wheel.span,
                "a wheel that rolls inside a ring is smaller than the ring",
                format!(
                    "a wheel below {} rolls inside; `outside` lets any wheel roll around the ring",
                    number::written(&ring.value)
                ),
            );
            None
        }
        Err(_) => {
            let wrong = if ring.value.is_positive() {
                wheel
            } else {
                ring
            };
            reader.findings.add(
                Code::TextNumber,
                wrong.span,
                "the sizes of a ring and its wheel are above zero",
            );
            None
        }
    }
}

fn star(reader: &mut Reader<'_>, pair: Pair<'_, Rule>) -> Option<(Form, Ratio)> {
    let written = pair
        .into_inner()
        .find(|inner| inner.as_rule() == Rule::plain)?;
    let span = reader.span(&written);
    reader.plain(&written)?;
    let terms = written
        .as_str()
        .split_once('/')
        .and_then(|(points, step)| points.parse::<i64>().ok().zip(step.parse::<i64>().ok()));
    let Some((points, step)) = terms else {
        reader.findings.add_help(
            Code::TextNumber,
            span,
            "a star is written with its points and its step, both whole numbers",
            "e.g. `star 5/2`",
        );
        return None;
    };
    match forms::star(points, step) {
        Ok(ratio) => Some((Form::Star, ratio)),
        Err(Impossible::CommonFactor { points, step }) => {
            reader.findings.add_help(
                Code::TextNumber,
                span,
                "the points and the step of this star have a common factor: it would close before it has touched every point",
                format!("the reduced star is `star {points}/{step}`"),
            );
            None
        }
        Err(Impossible::TooLarge { terms }) => too_large(reader, span, &terms),
        Err(_) => {
            reader.findings.add_help(
                Code::TextNumber,
                span,
                "a star steps by at least one point and by fewer than it has",
                match points {
                    ..2 => "a star has at least two points, e.g. `star 5/2`".to_owned(),
                    _ => format!("M of `star {points}/M` lies from 1 to {}", points - 1),
                },
            );
            None
        }
    }
}
