//! The syntax tree of a show → the show: every name looked up, every clause that a cue leaves out filled in.

use super::diagnose::{clip, first_word};
use super::findings::Findings;
use super::merge::{Usual, run_transition};
use super::names::Figures;
use super::nearest::Nearest;
use super::script::ShowScript;
use super::span::{Span, Spanned};
use super::tree::{Clause, CueNode, FigureDefinition, Morph, PartNode, Statement};
use super::unfold::{Part, Step, unfold};
use super::{length::too_long, merge};
use crate::figure::Figure;
use crate::finding::{Code, Finding};
use crate::show::{Ending, Show, WrittenCue};
use std::collections::BTreeMap;

/// Resolves a show; a cue with an error becomes [`WrittenCue::Broken`] and takes out only itself.
///
/// `rig_on_command_line` says that the `rig` statement is not required.
#[must_use]
pub fn resolve_show(
    script: &ShowScript,
    sha256: String,
    rig_on_command_line: bool,
) -> (Show, Vec<Finding>) {
    let mut resolver = Resolver::new(script);
    let show = resolver.show(sha256, rig_on_command_line);
    (show, resolver.findings.finish())
}

/// `loop` or `run-down`, as written.
enum EndingNode<'s> {
    Loop(&'s Spanned<Clause<Morph>>),
    RunDown(&'s Spanned<Option<Morph>>),
}

/// The statements that stand once, and the definitions.
#[derive(Default)]
struct Collected<'s> {
    title: Option<&'s Spanned<String>>,
    rig: Option<Span>,
    usual: Option<&'s Spanned<super::tree::Clauses>>,
    run_up: Option<&'s Spanned<Option<Morph>>>,
    ending: Option<(Span, EndingNode<'s>)>,
    figures: Vec<&'s FigureDefinition>,
    parts: Vec<&'s PartNode>,
    /// The last statement of the file.
    last: Option<Span>,
    /// Whether anything stands that is a cue, plays one or may be meant as one.
    cues: bool,
    /// Whether a statement does not read that may have been a cue or a block.
    broken: bool,
}

struct Resolver<'s> {
    script: &'s ShowScript,
    findings: Findings,
    nearest: Nearest,
    cues: Vec<WrittenCue>,
    /// The first part of a name, and the name there.
    parts_by_name: BTreeMap<&'s str, (usize, Span)>,
    parts: Vec<Part>,
    next_part: usize,
}

impl<'s> Resolver<'s> {
    fn new(script: &'s ShowScript) -> Self {
        Self {
            script,
            findings: Findings::new(script.file),
            nearest: Nearest::default(),
            cues: Vec::new(),
            parts_by_name: BTreeMap::new(),
            parts: Vec::new(),
            next_part: 0,
        }
    }

    fn show(&mut self, sha256: String, rig_on_command_line: bool) -> Show {
        let script = self.script;
        let mut show = Show {
            title: None,
            sha256,
            run_up: run_transition(None, Span::default().place(script.file)),
            cues: Vec::new(),
            order: Vec::new(),
            ending: None,
        };
        if script.stopped {
            return show;
        }
        let mut collected = Collected::default();
        self.collect(&script.statements, &mut collected);
        self.name_parts(&collected.parts);
        let figures = Figures::new(
            &script.text,
            std::mem::take(&mut collected.figures),
            &mut self.findings,
            &mut self.nearest,
        );
        let usual = Usual::new(script.file, collected.usual);
        let top = self.steps(&script.statements, true, &figures, &usual);
        let order = unfold(&script.text, &top, &self.parts, &mut self.findings);
        self.missing(&collected, order.as_deref(), rig_on_command_line);
        show.title = collected.title.map(|title| title.value.clone());
        show.ending = self.ending(collected.ending.as_ref(), &usual);
        show.cues = std::mem::take(&mut self.cues);
        show.order = order.unwrap_or_default();
        let start = match show
            .order
            .first()
            .and_then(|first| show.cues.get(*first as usize))
        {
            Some(WrittenCue::Good(cue)) => cue.place,
            Some(WrittenCue::Broken(place)) => *place,
            None => Span::default().place(script.file),
        };
        show.run_up = match collected.run_up {
            Some(Spanned { value, span }) => {
                run_transition(value.as_ref(), span.place(script.file))
            }
            None => run_transition(None, start),
        };
        if let Some(finding) = too_long(&show) {
            self.findings.push(finding);
        }
        show
    }

    /// The first word of the statement at `span`.
    fn word(&self, span: Span) -> Span {
        let start = span.start as usize;
        Span::new(start, start + first_word(span.of(&self.script.text)).len())
    }

    /// Gathers what stands once and what is defined, in blocks too (reported there), so that its uses are not reported as well.
    fn collect(&mut self, statements: &'s [Statement], into: &mut Collected<'s>) {
        for statement in statements {
            match statement {
                Statement::Title(title) => match into.title {
                    Some(first) => self.findings.twice(title.span, first.span, "the title"),
                    None => into.title = Some(title),
                },
                Statement::Rig(rig) => match into.rig {
                    Some(first) => self.findings.twice(rig.span, first, "the rig"),
                    None => into.rig = Some(rig.span),
                },
                Statement::Usual(usual) => match into.usual {
                    Some(first) => self.twice_statement(usual.span, first.span, "usual"),
                    None => into.usual = Some(usual),
                },
                Statement::RunUp(run_up) => match into.run_up {
                    Some(first) => self.twice_statement(run_up.span, first.span, "run-up"),
                    None => into.run_up = Some(run_up),
                },
                Statement::Loop(node) => {
                    self.collect_ending(node.span, EndingNode::Loop(node), into);
                }
                Statement::RunDown(node) => {
                    self.collect_ending(node.span, EndingNode::RunDown(node), into);
                }
                Statement::Figure(figure) => into.figures.push(figure),
                Statement::Part(part) => {
                    into.parts.push(part);
                    into.last = Some(part.span);
                    self.collect(&part.body, into);
                }
                Statement::Repeat(repeat) => {
                    into.last = Some(repeat.span);
                    self.collect(&repeat.body, into);
                }
                Statement::Cue(cue) => {
                    into.cues = true;
                    into.last = Some(cue.span);
                }
                Statement::Play(play) => {
                    into.cues = true;
                    into.last = Some(play.span);
                }
                Statement::Broken(broken) => {
                    into.broken |= may_play(broken.word);
                    into.last = Some(broken.span);
                    if broken.word == Some("rig") {
                        into.rig = into.rig.or(Some(broken.span));
                    }
                    self.collect(&broken.body, into);
                }
            }
        }
    }

    fn twice_statement(&mut self, span: Span, first: Span, word: &str) {
        let (span, first) = (self.word(span), self.word(first));
        self.findings.twice(span, first, &format!("`{word}`"));
    }

    fn collect_ending(&mut self, span: Span, node: EndingNode<'s>, into: &mut Collected<'s>) {
        if let Some((first, _)) = &into.ending {
            let finding = Finding::new(
                Code::TextDuplicate,
                self.findings.place(self.word(span)),
                "a show has one ending, this is the second",
            )
            .also(self.findings.place(self.word(*first)), "the first ending")
            .help("keep one of `loop` and `run-down`");
            self.findings.push(finding);
        } else {
            into.ending = Some((span, node));
        }
    }

    fn name_parts(&mut self, parts: &[&'s PartNode]) {
        let text = &self.script.text;
        for (index, part) in parts.iter().enumerate() {
            let Some(span) = part.name else { continue };
            let name = span.of(text);
            match self.parts_by_name.get(name) {
                Some((_, first)) => {
                    self.findings
                        .twice(span, *first, &format!("part `{}`", clip(name)));
                }
                None => {
                    self.parts_by_name.insert(name, (index, span));
                }
            }
        }
        self.parts = parts
            .iter()
            .map(|part| Part {
                name: part.name.unwrap_or_default(),
                steps: Vec::new(),
            })
            .collect();
    }

    /// The steps of a block; cues and parts are met in the order of the text.
    fn steps(
        &mut self,
        statements: &'s [Statement],
        top: bool,
        figures: &Figures<'s>,
        usual: &Usual<'s>,
    ) -> Vec<Step> {
        let mut steps = Vec::new();
        let mut ended = false;
        for statement in statements {
            let mut step = None;
            match statement {
                Statement::Cue(node) => {
                    let cue = self.cue(node, figures, usual);
                    step = Some((self.push_cue(cue, node.span), node.span));
                }
                Statement::Play(node) => step = Some((self.play(node), node.span)),
                Statement::Repeat(node) => {
                    let body = self.steps(&node.body, false, figures, usual);
                    let repeat = Step::Repeat(node.times.value, node.times.span, body);
                    step = Some((repeat, node.span));
                }
                Statement::Part(node) => {
                    // The numbering of `collect`: a part before the parts inside it.
                    let index = self.next_part;
                    self.next_part += 1;
                    let body = self.steps(&node.body, false, figures, usual);
                    if let Some(part) = self.parts.get_mut(index) {
                        part.steps = body;
                    }
                }
                Statement::Broken(node) => {
                    let mut body = self.steps(&node.body, false, figures, usual);
                    if body.is_empty() && may_play(node.word) {
                        let place = node.span.place(self.script.file);
                        body.push(self.push_cue(WrittenCue::Broken(place), node.span));
                    }
                    steps.push(Step::Repeat(1, node.span, body));
                }
                Statement::Loop(_) | Statement::RunDown(_) => ended = true,
                _ => {}
            }
            let Some((step, span)) = step else { continue };
            if ended && top {
                self.after_ending(span);
            } else {
                steps.push(step);
            }
        }
        steps
    }

    fn after_ending(&mut self, span: Span) {
        let word = self.word(span);
        self.findings.add_help(
            Code::TextSyntax,
            word,
            format!(
                "this `{}` stands after the ending",
                word.of(&self.script.text)
            ),
            "move it before the ending; only definitions may come after it",
        );
    }

    fn push_cue(&mut self, cue: WrittenCue, span: Span) -> Step {
        // A file holds far fewer statements than u32 counts.
        let index = u32::try_from(self.cues.len()).unwrap_or(u32::MAX);
        self.cues.push(cue);
        Step::Cue(index, span)
    }

    fn play(&mut self, node: &Spanned<Span>) -> Step {
        let text = &self.script.text;
        let name = node.value.of(text);
        if let Some((part, _)) = self.parts_by_name.get(name) {
            return Step::Play(*part, node.value);
        }
        let known = self.parts.iter().map(|part| part.name.of(text));
        let help = match self.nearest.find(name, known) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("define it: `part {} {{ … }}`", clip(name)),
        };
        self.findings.add_help(
            Code::TextUnknownPart,
            node.value,
            format!("there is no part `{}`", clip(name)),
            help,
        );
        let place = node.span.place(self.script.file);
        self.push_cue(WrittenCue::Broken(place), node.span)
    }

    fn cue(&mut self, node: &CueNode, figures: &Figures<'s>, usual: &Usual<'s>) -> WrittenCue {
        let text = &self.script.text;
        let broken = WrittenCue::Broken(node.span.place(self.script.file));
        let meaning = figures.meaning(&node.figure, &mut self.findings, &mut self.nearest);
        let word = self.word(node.span);
        let merged = merge::cue(node, word, usual, &mut self.findings);
        let (Some((form, ratio)), Some(merged)) = (meaning, merged) else {
            return broken;
        };
        let written = node.figure.span.of(text);
        let figure = Figure {
            written: one_blank(written),
            form,
            ratio,
        };
        WrittenCue::Good(Box::new(merged.with(figure)))
    }

    fn ending(
        &mut self,
        node: Option<&(Span, EndingNode<'s>)>,
        usual: &Usual<'s>,
    ) -> Option<Ending> {
        let (span, node) = node?;
        let place = span.place(self.script.file);
        match node {
            EndingNode::Loop(morph) => {
                let morph = usual.transition(&morph.value, place, &mut self.findings)?;
                Some(Ending::Loop { place, morph })
            }
            EndingNode::RunDown(morph) => {
                let morph = morph.value.as_ref()?;
                Some(Ending::RunDown(run_transition(Some(morph), place)))
            }
        }
    }

    /// What a show must have and this one has not.
    fn missing(
        &mut self,
        collected: &Collected<'s>,
        order: Option<&[u32]>,
        rig_on_command_line: bool,
    ) {
        let start = super::byte_order_mark(&self.script.text);
        let head = collected
            .title
            .map_or(Span::new(start, start), |title| title.span);
        if collected.rig.is_none() && !rig_on_command_line {
            self.findings.add_help(
                Code::TextMissing,
                head,
                "the show names no rig",
                "write `rig \"FILE.rig\"`, or give `--rig FILE` on the command line",
            );
        }
        let silent = collected.broken || order.is_none_or(|order| !order.is_empty());
        if !collected.cues && !collected.broken {
            self.findings.add_help(
                Code::TextMissing,
                head,
                "the show has no cue",
                "e.g. `cue deltoid hold 5 s`",
            );
        } else if !silent {
            self.findings.add_help(
                Code::TextMissing,
                head,
                "no cue of the show is ever played",
                "play the parts that hold the cues, e.g. `play finale`",
            );
        }
        if collected.ending.is_none() {
            self.findings.add_help(
                Code::TextMissing,
                collected.last.map_or(head, |last| self.word(last)),
                "the show has no ending",
                "write `loop` or `run-down fastest` as its last statement",
            );
        }
    }
}

/// Whether a broken statement may have been one that plays a cue.
fn may_play(word: Option<&str>) -> bool {
    matches!(word, None | Some("cue" | "play" | "repeat"))
}

/// `text` with one blank for every run of them.
fn one_blank(text: &str) -> String {
    if text.contains(char::is_whitespace) {
        text.split_whitespace().collect::<Vec<_>>().join(" ")
    } else {
        text.to_owned()
    }
}
