//! Reads one statement at a time: the grammar's pairs → spans, numbers, quantities, texts.

use super::diagnose;
use super::findings::Findings;
use super::grammar::{Rule, parse};
use super::nearest::Nearest;
use super::number;
use super::outline::MOST_STATEMENT_BYTES;
use super::span::{Span, Spanned};
use super::unit::{self, Kind};
use crate::exact::Rational;
use crate::finding::{Code, FileId};
use num_traits::{Signed, Zero};
use pest::iterators::Pair;

/// One file being read.
pub(super) struct Reader<'t> {
    pub(super) text: &'t str,
    pub(super) findings: Findings,
    pub(super) nearest: Nearest,
    /// Where the statement begins that the pairs at hand belong to.
    base: usize,
}

impl<'t> Reader<'t> {
    pub(super) fn new(file: FileId, text: &'t str) -> Self {
        Self {
            text,
            findings: Findings::new(file),
            nearest: Nearest::default(),
            base: 0,
        }
    }
    /// Reads the statement at `span` by its rule; what is wrong with it is reported.
    pub(super) fn statement(&mut self, rule: Rule, span: Span) -> Option<Pair<'t, Rule>> {
        if self.too_long(span) {
            return None;
        }
        self.base = span.start as usize;
        match parse(rule, span.of(self.text)) {
            Ok(pair) => Some(pair),
            Err(error) => {
                let finding = diagnose::syntax(self, span, &error);
                self.findings.push(finding);
                None
            }
        }
    }
    /// Whether the statement is longer than any is; reported if so.
    pub(super) fn too_long(&mut self, span: Span) -> bool {
        let long = span.len() > MOST_STATEMENT_BYTES;
        if long {
            let kib = MOST_STATEMENT_BYTES / 1024;
            self.findings.add(
                Code::TextTooMuch,
                Span {
                    end: span.start,
                    ..span
                },
                format!("this statement is longer than {kib} KiB"),
            );
        }
        long
    }
    /// Where a pair stands in the file.
    pub(super) fn span(&self, pair: &Pair<'_, Rule>) -> Span {
        // A repetition that ends takes the blanks with it that its next item would have followed.
        let start = self.base + pair.as_span().start();
        Span::new(start, start + pair.as_str().trim_end().len())
    }
    /// The value of a pair `number`, `plain` or one term of a ratio that stands at `span`.
    pub(super) fn number_at(&mut self, span: Span) -> Option<Rational> {
        match number::read(span.of(self.text)) {
            Ok(value) => Some(value),
            Err(problem) => {
                let message = format!("this number {}", problem.message());
                self.findings.add(Code::TextNumber, span, message);
                None
            }
        }
    }
    /// The value of a pair `plain`.
    pub(super) fn plain(&mut self, pair: &Pair<'_, Rule>) -> Option<Spanned<Rational>> {
        let span = self.span(pair);
        self.number_at(span).map(|value| Spanned::new(value, span))
    }
    /// The two terms of a pair `ratio`.
    pub(super) fn terms(&mut self, pair: &Pair<'_, Rule>) -> Option<[Spanned<Rational>; 2]> {
        let span = self.span(pair);
        let colon = pair.as_str().find(':')?;
        let middle = span.start as usize + colon;
        let first = Span::new(span.start as usize, middle);
        let second = Span::new(middle + 1, span.end as usize);
        let first_value = self.number_at(first);
        let second_value = self.number_at(second);
        Some([
            Spanned::new(first_value?, first),
            Spanned::new(second_value?, second),
        ])
    }
    /// The value of a pair `quantity`, brought to the unit of the exact type of its kind.
    pub(super) fn quantity(
        &mut self,
        pair: Pair<'_, Rule>,
        kind: Kind,
    ) -> Option<Spanned<Rational>> {
        let span = self.span(&pair);
        let mut inner = pair.into_inner();
        let number = inner.next()?;
        let number_span = self.span(&number);
        let value = self.number_at(number_span);
        let worth = match inner.next() {
            None => {
                self.unit_missing(number_span, kind);
                None
            }
            Some(written) => {
                let unit_span = self.span(&written);
                self.unit(written.as_str(), unit_span, kind)
            }
        };
        Some(Spanned::new(value? * worth?, span))
    }
    fn unit_missing(&mut self, number: Span, kind: Kind) {
        let message = format!(
            "`{}` has no unit, {} needs one",
            diagnose::clip(number.of(self.text)),
            kind.noun()
        );
        let help = format!("{} is written in {}", kind.noun(), kind.units());
        self.findings
            .add_help(Code::TextUnit, number, message, help);
    }
    /// What one of the unit `written` at `span` is worth, where it is one of `kind`.
    fn unit(&mut self, written: &str, span: Span, kind: Kind) -> Option<Rational> {
        let fits = format!("{} is written in {}", kind.noun(), kind.units());
        let (message, help) = match unit::find(written) {
            Some(unit) if unit.kind == kind => return Some(unit.worth()),
            Some(unit) => (
                format!(
                    "`{}` is a unit of {}, and {} is needed here",
                    unit.text,
                    unit.kind.noun(),
                    kind.noun()
                ),
                fits,
            ),
            None => {
                let units = unit::UNITS.iter().filter(|unit| unit.kind == kind);
                let near = self.nearest.find(written, units.map(|unit| unit.text));
                (
                    format!("`{}` is no unit", diagnose::clip(written)),
                    match near {
                        Some(near) => format!("did you mean `{near}`? {fits}"),
                        None => fits,
                    },
                )
            }
        };
        self.findings.add_help(Code::TextUnit, span, message, help);
        None
    }
    /// The sum of a pair `duration`, never below zero; `kind` is another where the field takes no duration.
    pub(super) fn amount(&mut self, pair: Pair<'_, Rule>, kind: Kind) -> Option<Spanned<Rational>> {
        let span = self.span(&pair);
        let mut sum = Some(Rational::zero());
        let mut last: Option<Rational> = None;
        for (index, part) in pair.into_inner().enumerate() {
            let worth = unit_of(&part).map(|(unit, at)| (unit.worth(), at));
            let part_span = self.span(&part);
            if index > 0 && kind != Kind::Duration {
                let message = format!("{} is one number with one unit", kind.noun());
                self.findings.add(Code::TextSyntax, part_span, message);
                return None;
            }
            let value = self.quantity(part, kind);
            if let (Some(value), Kind::Duration) = (&value, kind)
                && (value.value.is_negative() || (index > 0 && self.signed(part_span)))
            {
                self.findings
                    .add(Code::TextNumber, part_span, "a duration has no sign");
                sum = None;
            }
            if let (Some((worth, (from, to))), true) = (&worth, value.is_some())
                && last
                    .replace(worth.clone())
                    .is_some_and(|last| last <= *worth)
            {
                let unit_span = Span::new(self.base + from, self.base + to);
                self.findings.add_help(
                    Code::TextUnit,
                    unit_span,
                    "in a sum of durations each unit is smaller than the one before",
                    "write it like `1 h 20 min 30 s`",
                );
                sum = None;
            }
            sum = sum.zip(value).map(|(sum, value)| sum + value.value);
        }
        sum.map(|value| Spanned::new(value, span))
    }
    fn signed(&self, span: Span) -> bool {
        span.of(self.text).starts_with(['+', '-'])
    }
    /// A pair `text` without its quotes and escapes.
    pub(super) fn quoted(&self, pair: Pair<'_, Rule>) -> Spanned<String> {
        let span = self.span(&pair);
        let inner = pair.into_inner().next();
        let written = inner.as_ref().map_or("", |inner| inner.as_str());
        let mut value = String::with_capacity(written.len());
        let mut signs = written.chars();
        while let Some(sign) = signs.next() {
            // The grammar lets only `\"` and `\\` through.
            match sign {
                '\\' => value.extend(signs.next()),
                other => value.push(other),
            }
        }
        Spanned::new(value, span)
    }
}

/// The unit of a pair `quantity` and where it stands in the statement, where it has a known one.
fn unit_of(quantity: &Pair<'_, Rule>) -> Option<(&'static unit::Unit, (usize, usize))> {
    let written = quantity.clone().into_inner().nth(1)?;
    let span = written.as_span();
    unit::find(written.as_str()).map(|unit| (unit, (span.start(), span.end())))
}
