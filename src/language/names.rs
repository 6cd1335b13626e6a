//! The names of a show: figures and parts, who defines them, and figures that are other names for figures.

use super::diagnose::clip;
use super::figures::{named, names as built_in_names};
use super::findings::Findings;
use super::nearest::Nearest;
use super::span::{Span, Spanned};
use super::tree::{FigureDefinition, FigureNode};
use crate::figure::{Form, Ratio};
use crate::finding::{Code, Finding};
use std::collections::BTreeMap;

/// What a figure's name stands for; `None` where its definition does not read (reported).
type Meaning = Option<(Form, Ratio)>;

/// The figures that a show defines.
pub(super) struct Figures<'s> {
    text: &'s str,
    definitions: Vec<&'s FigureDefinition>,
    /// The first definition of a name, and the name there.
    by_name: BTreeMap<&'s str, (usize, Span)>,
    meanings: Vec<Meaning>,
}

impl<'s> Figures<'s> {
    /// Looks every definition up; names that are taken, given twice, unknown or lead back to themselves are reported.
    pub(super) fn new(
        text: &'s str,
        definitions: Vec<&'s FigureDefinition>,
        findings: &mut Findings,
        nearest: &mut Nearest,
    ) -> Self {
        let mut by_name = BTreeMap::new();
        for (index, definition) in definitions.iter().enumerate() {
            let Some(span) = definition.name else {
                continue;
            };
            let name = span.of(text);
            if named(name).is_some() {
                findings.add_help(
                    Code::TextNameTaken,
                    span,
                    format!("`{name}` is a built-in figure"),
                    format!("e.g. `figure {name}-1 = …`"),
                );
                continue;
            }
            match by_name.get(name) {
                Some((_, first)) => {
                    findings.twice(span, *first, &format!("figure `{}`", clip(name)));
                }
                None => {
                    by_name.insert(name, (index, span));
                }
            }
        }
        let mut figures = Self {
            text,
            meanings: vec![None; definitions.len()],
            definitions,
            by_name,
        };
        figures.look_up_all(findings, nearest);
        figures
    }

    /// Follows each definition to the form behind it; a chain of names of any length is no recursion.
    fn look_up_all(&mut self, findings: &mut Findings, nearest: &mut Nearest) {
        #[derive(Clone, Copy, PartialEq, Eq)]
        enum State {
            New,
            OnPath,
            Done,
        }
        let mut states = vec![State::New; self.definitions.len()];
        for first in 0..self.definitions.len() {
            let mut path = Vec::new();
            let mut at = first;
            let meaning = loop {
                let (Some(definition), Some(state)) =
                    (self.definitions.get(at).copied(), states.get_mut(at))
                else {
                    break None;
                };
                match *state {
                    State::Done => break self.meanings.get(at).cloned().flatten(),
                    State::OnPath => {
                        self.report_ring(definition, &path, findings);
                        break None;
                    }
                    State::New => *state = State::OnPath,
                }
                path.push(at);
                match &definition.figure.value {
                    FigureNode::Broken => break None,
                    FigureNode::Form(form, ratio) => break Some((form.clone(), *ratio)),
                    FigureNode::Name => {}
                }
                let name = definition.figure.span.of(self.text);
                if let Some(curve) = named(name) {
                    break Some((Form::Named(curve), curve.ratio()));
                }
                match self.by_name.get(name) {
                    Some((next, _)) => at = *next,
                    None => {
                        self.report_unknown(definition.figure.span, findings, nearest);
                        break None;
                    }
                }
            };
            for index in path {
                if let (Some(state), Some(slot)) =
                    (states.get_mut(index), self.meanings.get_mut(index))
                {
                    *state = State::Done;
                    *slot = meaning.clone();
                }
            }
        }
    }

    fn report_ring(&self, first: &FigureDefinition, path: &[usize], findings: &mut Findings) {
        // Whatever lies on a ring is reached by its name, so it has one.
        let name_of =
            |figure: &FigureDefinition| clip(figure.name.unwrap_or_default().of(self.text));
        let name = name_of(first);
        let last = path.last().and_then(|index| self.definitions.get(*index));
        let mut finding = Finding::new(
            Code::TextCircular,
            findings.place(first.figure.span),
            format!("figure `{name}` leads back to itself, so it has no ratio"),
        )
        .help("give one of them a form, e.g. `rose 5/3`");
        if let Some(last) = last.filter(|last| last.name != first.name) {
            finding = finding.also(
                findings.place(last.figure.span),
                format!("by way of `{}`", name_of(last)),
            );
        }
        findings.push(finding);
    }

    fn report_unknown(&self, span: Span, findings: &mut Findings, nearest: &mut Nearest) {
        if findings.over() {
            return;
        }
        let name = span.of(self.text);
        let forms = match name {
            "rose" => Some("a rose has its number behind it: `rose 5/3`"),
            "ring" => Some("a ring has its numbers behind it: `ring 8 wheel 3`"),
            "star" => Some("a star has its numbers behind it: `star 5/2`"),
            "ratio" => Some("a ratio has its numbers behind it: `ratio 5:-4`"),
            _ => None,
        };
        let help = match forms {
            Some(help) => help.to_owned(),
            None => {
                let defined = self
                    .definitions
                    .iter()
                    .filter_map(|known| known.name.map(|name| name.of(self.text)));
                let built_in: [&'s str; 4] = ["rose", "ring", "star", "ratio"];
                let known = defined
                    .chain(built_in)
                    .chain(built_in_names().map(|name| -> &'s str { name }));
                match nearest.find(name, known) {
                    Some(near) => format!("did you mean `{near}`?"),
                    None => format!("define it: `figure {} = …`", clip(name)),
                }
            }
        };
        findings.add_help(
            Code::TextUnknownFigure,
            span,
            format!("there is no figure `{}`", clip(name)),
            help,
        );
    }

    /// The form and the ratio of a figure as a cue writes it; an unknown one is reported.
    pub(super) fn meaning(
        &self,
        figure: &Spanned<FigureNode>,
        findings: &mut Findings,
        nearest: &mut Nearest,
    ) -> Meaning {
        match &figure.value {
            FigureNode::Broken => None,
            FigureNode::Form(form, ratio) => Some((form.clone(), *ratio)),
            FigureNode::Name => {
                let name = figure.span.of(self.text);
                if let Some(curve) = named(name) {
                    return Some((Form::Named(curve), curve.ratio()));
                }
                match self.by_name.get(name) {
                    Some((index, _)) => self.meanings.get(*index).cloned().flatten(),
                    None => {
                        self.report_unknown(figure.span, findings, nearest);
                        None
                    }
                }
            }
        }
    }
}
