//! The syntax tree of a show file. Every node knows its stretch of the text, so that written numbers, comments and layout
//! can be had from there; names are not copied out of the text at all.

use super::span::{Span, Spanned};
use crate::exact::{Rational, Speed};
use crate::figure::{Form, Ratio};
use crate::motion::LawKind;
use crate::show::{Hold, Land, Length, Pace};

/// What a clause says, if it is there and reads.
#[derive(Clone, Debug)]
pub(super) enum Clause<T> {
    /// Not written.
    Absent,
    /// Written, but not readable (reported).
    Broken,
    /// Written.
    Written(Box<Spanned<T>>),
}

impl<T> Clause<T> {
    /// A clause that was written at `span` and read as `value`.
    pub(super) fn read(value: Option<T>, span: Span) -> Self {
        match value {
            Some(value) => Clause::Written(Box::new(Spanned::new(value, span))),
            None => Clause::Broken,
        }
    }
    pub(super) fn written(&self) -> Option<&Spanned<T>> {
        match self {
            Clause::Written(spanned) => Some(spanned),
            _ => None,
        }
    }
    pub(super) fn is_broken(&self) -> bool {
        matches!(self, Clause::Broken)
    }
}

/// `morph …`, or what a run-up and a run-down share with it.
#[derive(Clone, Debug)]
pub(super) struct Morph {
    pub(super) length: Length,
    pub(super) law: Option<LawKind>,
    pub(super) skew: Option<Spanned<Rational>>,
    /// `dark` is true, `lit` is false.
    pub(super) dark: Option<bool>,
}

/// The clauses of a cue or of `usual`.
#[derive(Clone, Debug)]
pub(super) struct Clauses {
    pub(super) morph: Clause<Morph>,
    pub(super) hold: Clause<Hold>,
    pub(super) pace: Clause<Pace>,
    pub(super) land: Clause<Land>,
    pub(super) spin: Clause<Speed>,
    pub(super) beam: Clause<Rational>,
    pub(super) name: Clause<String>,
}

impl Clauses {
    /// All of them alike: absent, or (where the whole statement does not read) broken.
    pub(super) fn none(broken: bool) -> Self {
        fn of<T>(broken: bool) -> Clause<T> {
            if broken {
                Clause::Broken
            } else {
                Clause::Absent
            }
        }
        Self {
            morph: of(broken),
            hold: of(broken),
            pace: of(broken),
            land: of(broken),
            spin: of(broken),
            beam: of(broken),
            name: of(broken),
        }
    }
    /// Whether one of them does not read.
    pub(super) fn any_broken(&self) -> bool {
        self.morph.is_broken()
            || self.hold.is_broken()
            || self.pace.is_broken()
            || self.land.is_broken()
            || self.spin.is_broken()
            || self.beam.is_broken()
            || self.name.is_broken()
    }
}

/// A figure as it is written.
#[derive(Clone, Debug)]
pub(super) enum FigureNode {
    /// A built-in name or one of the show's.
    Name,
    /// A form with its ratio.
    Form(Form, Ratio),
    /// Not readable (reported).
    Broken,
}

/// One statement of a show file.
#[derive(Clone, Debug)]
pub(super) enum Statement {
    /// `show "…"`
    Title(Spanned<String>),
    /// `rig "…"`
    Rig(Spanned<String>),
    /// `figure NAME = …`
    Figure(Box<FigureDefinition>),
    /// `usual …`
    Usual(Box<Spanned<Clauses>>),
    /// `run-up …`
    RunUp(Box<Spanned<Option<Morph>>>),
    /// `loop …`
    Loop(Box<Spanned<Clause<Morph>>>),
    /// `run-down …`
    RunDown(Box<Spanned<Option<Morph>>>),
    /// `cue …`
    Cue(Box<CueNode>),
    /// `play NAME`: the name
    Play(Spanned<Span>),
    /// `part NAME { … }`
    Part(Box<PartNode>),
    /// `repeat N { … }`
    Repeat(Box<RepeatNode>),
    /// What does not read (reported).
    Broken(Box<BrokenNode>),
}

/// `figure NAME = …`
#[derive(Clone, Debug)]
pub(super) struct FigureDefinition {
    /// `None` where it is a word that cannot be a name (reported).
    pub(super) name: Option<Span>,
    pub(super) figure: Spanned<FigureNode>,
}

/// `cue …`
#[derive(Clone, Debug)]
pub(super) struct CueNode {
    pub(super) span: Span,
    pub(super) figure: Spanned<FigureNode>,
    pub(super) clauses: Clauses,
}

/// `part NAME { … }`
#[derive(Clone, Debug)]
pub(super) struct PartNode {
    pub(super) span: Span,
    /// `None` where it is a word that cannot be a name (reported).
    pub(super) name: Option<Span>,
    pub(super) body: Vec<Statement>,
}

/// `repeat N { … }`
#[derive(Clone, Debug)]
pub(super) struct RepeatNode {
    pub(super) span: Span,
    /// N; 1 where it does not read (reported).
    pub(super) times: Spanned<u64>,
    pub(super) body: Vec<Statement>,
}

/// What does not read.
#[derive(Clone, Debug)]
pub(super) struct BrokenNode {
    pub(super) span: Span,
    /// The word of the statement that it is, or is probably meant to be.
    pub(super) word: Option<&'static str>,
    /// What stands in its block, if it has one.
    pub(super) body: Vec<Statement>,
}
