//! `repeat` and `play` → the order of play, counted before anything is made of it.

use super::MOST_CUES;
use super::findings::Findings;
use super::span::Span;
use crate::finding::{Code, Finding};
use std::collections::BTreeSet;

/// One step of a block.
pub(super) enum Step {
    /// The written cue of this index.
    Cue(u32, Span),
    /// `play`: the index of the part, and its name where it is played.
    Play(usize, Span),
    /// `repeat`: how often, the number as written, the block.
    Repeat(u64, Span, Vec<Step>),
}

/// A part: its name where it is defined, and its steps.
pub(super) struct Part {
    pub(super) name: Span,
    pub(super) steps: Vec<Step>,
}

/// The order of play of the block `top`, at most a million cues; `None` where it would be longer.
///
/// Parts that play themselves are reported, and the `play` that closes the ring is left out. Time and memory stay in
/// proportion to the text and to the order: a block or a part is unfolded once, and copied from then on.
pub(super) fn unfold(
    text: &str,
    top: &[Step],
    parts: &[Part],
    findings: &mut Findings,
) -> Option<Vec<u32>> {
    let (sorted, cut) = sort(text, parts, findings);
    let mut counts = Counts {
        of_part: vec![Some(0); parts.len()],
        cut: &cut,
    };
    for index in sorted {
        let count = parts
            .get(index)
            .and_then(|part| counts.block(&part.steps, findings));
        if let Some(slot) = counts.of_part.get_mut(index) {
            *slot = count;
        }
    }
    let total = counts.block(top, findings)?;
    let mut order = Vec::with_capacity(total);
    write_out(top, parts, &counts, &mut order);
    Some(order)
}

/// Every `play` in `steps`, those inside `repeat` too.
fn plays(steps: &[Step], into: &mut Vec<(usize, Span)>) {
    for step in steps {
        match step {
            Step::Cue(..) => {}
            Step::Play(part, span) => into.push((*part, *span)),
            // Never deeper than blocks may be nested.
            Step::Repeat(_, _, body) => plays(body, into),
        }
    }
}

/// The parts in an order in which each comes after those that it plays, and the plays that close a ring.
fn sort(text: &str, parts: &[Part], findings: &mut Findings) -> (Vec<usize>, BTreeSet<Span>) {
    #[derive(Clone, Copy, PartialEq, Eq)]
    enum State {
        New,
        OnPath,
        Done,
    }
    let mut states = vec![State::New; parts.len()];
    let mut sorted = Vec::with_capacity(parts.len());
    let mut cut = BTreeSet::new();
    let plays_of = |index: usize| {
        let mut list = Vec::new();
        if let Some(part) = parts.get(index) {
            plays(&part.steps, &mut list);
        }
        list.into_iter()
    };
    for first in 0..parts.len() {
        let mut path = Vec::new();
        if states.get(first) == Some(&State::New) {
            path.push((first, plays_of(first)));
        }
        while let Some((index, list)) = path.last_mut() {
            let index = *index;
            if let Some(state) = states.get_mut(index) {
                *state = State::OnPath;
            }
            match list.next() {
                None => {
                    if let Some(state) = states.get_mut(index) {
                        *state = State::Done;
                    }
                    sorted.push(index);
                    path.pop();
                }
                Some((next, span)) => match states.get(next) {
                    Some(State::New) => path.push((next, plays_of(next))),
                    Some(State::OnPath) => {
                        cut.insert(span);
                        let name = span.of(text);
                        let mut finding = Finding::new(
                            Code::TextCircular,
                            findings.place(span),
                            format!("part `{name}` plays itself, so the show would never end"),
                        )
                        .help("take this `play` away, or write `repeat N { … }` around the part's cues");
                        if let Some(part) = parts.get(next) {
                            finding = finding.also(findings.place(part.name), "defined here");
                        }
                        findings.push(finding);
                    }
                    _ => {}
                },
            }
        }
    }
    (sorted, cut)
}

/// How many cues each part plays; `None` past a million.
struct Counts<'c> {
    of_part: Vec<Option<usize>>,
    cut: &'c BTreeSet<Span>,
}

impl Counts<'_> {
    /// How many cues a step plays; `None` past a million (reported here, or where the part is counted).
    fn step(&self, step: &Step, findings: &mut Findings) -> Option<usize> {
        match step {
            Step::Cue(..) => Some(1),
            Step::Play(part, span) if !self.cut.contains(span) => {
                self.of_part.get(*part).copied().flatten()
            }
            Step::Play(..) => Some(0),
            Step::Repeat(times, span, body) => {
                let once = self.block(body, findings)?;
                let all = usize::try_from(*times)
                    .ok()
                    .and_then(|times| once.checked_mul(times));
                if all.is_none_or(|all| all > MOST_CUES) {
                    let most = MOST_CUES / once.max(1);
                    findings.add_help(
                        Code::TextTooMuch,
                        *span,
                        format!("{once} × {times} cues are more than the {MOST_CUES} that a show may have"),
                        format!("`repeat {most}` is the most here"),
                    );
                    return None;
                }
                all
            }
        }
    }
    /// How many cues a block plays.
    fn block(&self, steps: &[Step], findings: &mut Findings) -> Option<usize> {
        let mut sum = Some(0_usize);
        for step in steps {
            let count = self.step(step, findings);
            let Some(before) = sum else { continue };
            sum = count.map(|count| before.saturating_add(count));
            if sum.is_some_and(|sum| sum > MOST_CUES) {
                let span = match step {
                    Step::Cue(_, span) | Step::Play(_, span) | Step::Repeat(_, span, _) => *span,
                };
                findings.add(
                    Code::TextTooMuch,
                    span,
                    format!("with this the show has more than {MOST_CUES} cues"),
                );
                sum = None;
            }
        }
        sum
    }
}

/// One block that is being written out.
struct Frame<'s> {
    steps: std::slice::Iter<'s, Step>,
    from: usize,
    times: u64,
    part: Option<usize>,
}

/// Writes the order, whose length has been counted. A chain of parts of any length is no recursion.
fn write_out(top: &[Step], parts: &[Part], counts: &Counts<'_>, order: &mut Vec<u32>) {
    let mut written = vec![None; parts.len()];
    let mut stack = vec![Frame {
        steps: top.iter(),
        from: 0,
        times: 1,
        part: None,
    }];
    while let Some(frame) = stack.last_mut() {
        let Some(step) = frame.steps.next() else {
            let range = frame.from..order.len();
            if !range.is_empty() {
                for _ in 1..frame.times {
                    order.extend_from_within(range.clone());
                }
            }
            if let Some(slot) = frame.part.and_then(|part| written.get_mut(part)) {
                *slot = Some(range);
            }
            stack.pop();
            continue;
        };
        let from = order.len();
        match step {
            Step::Cue(index, _) => order.push(*index),
            Step::Play(_, span) if counts.cut.contains(span) => {}
            Step::Play(part, _) => match (written.get(*part), parts.get(*part)) {
                (Some(Some(range)), _) => order.extend_from_within(range.clone()),
                (_, Some(target)) => stack.push(Frame {
                    steps: target.steps.iter(),
                    from,
                    times: 1,
                    part: Some(*part),
                }),
                _ => {}
            },
            Step::Repeat(times, _, body) => stack.push(Frame {
                steps: body.iter(),
                from,
                times: *times,
                part: None,
            }),
        }
    }
}
