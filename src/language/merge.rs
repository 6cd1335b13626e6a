//! What a cue leaves out: `usual`, else the defaults of the language.

use super::clauses::no_skew_message;
use super::findings::Findings;
use super::law::takes_skew;
use super::span::{Span, Spanned};
use super::tree::{Clause, Clauses, CueNode, Morph};
use crate::exact::{Rational, Seconds, Speed, ratio, whole};
use crate::figure::Figure;
use crate::finding::{Code, FileId, Finding, Place};
use crate::motion::{Law, LawKind};
use crate::show::{Cue, Hold, Land, Length, Pace, Transition};
use num_traits::One;

/// Where the steepest change of a law lies that is not skewed.
fn middle() -> Rational {
    ratio(1, 2)
}

/// The law where none is written anywhere.
fn quintic() -> Law {
    Law {
        kind: LawKind::Quintic,
        skew: middle(),
    }
}

/// The law that a morph of `usual`, or one without `usual`, has.
fn own_law(morph: &Morph) -> Law {
    Law {
        kind: morph.law.clone().unwrap_or(LawKind::Quintic),
        skew: morph
            .skew
            .as_ref()
            .map_or_else(middle, |skew| skew.value.clone()),
    }
}

/// The transition of a `run-up` or `run-down`: always dark, quintic where no law is written, `fastest` where nothing is.
pub(super) fn run_transition(morph: Option<&Morph>, place: Place) -> Transition {
    Transition {
        place,
        length: morph.map_or(Length::Fastest { at_least: None }, |morph| {
            morph.length.clone()
        }),
        law: morph.map_or_else(quintic, own_law),
        dark: true,
    }
}

/// The `usual` statement, or that there is none.
pub(super) struct Usual<'s> {
    file: FileId,
    written: Option<&'s Clauses>,
    none: Clauses,
}

impl<'s> Usual<'s> {
    pub(super) fn new(file: FileId, written: Option<&'s Spanned<Clauses>>) -> Self {
        Self {
            file,
            written: written.map(|usual| &usual.value),
            none: Clauses::none(false),
        }
    }
    fn clauses(&self) -> &Clauses {
        self.written.unwrap_or(&self.none)
    }

    /// The morph of a cue or of `loop`; `None` where it, or what it takes from `usual`, does not read (reported).
    ///
    /// `place` is the cue or the `loop` statement, for where nothing is written.
    pub(super) fn transition(
        &self,
        written: &Clause<Morph>,
        place: Place,
        findings: &mut Findings,
    ) -> Option<Transition> {
        let usual = &self.clauses().morph;
        let morph = match (written, usual) {
            (Clause::Broken, _) | (Clause::Absent, Clause::Broken) => return None,
            (Clause::Absent, Clause::Absent) => {
                return Some(Transition {
                    place,
                    length: Length::Given(Seconds::new(whole(4))),
                    law: quintic(),
                    dark: false,
                });
            }
            (Clause::Absent, Clause::Written(usual)) => {
                return Some(Transition {
                    place: usual.span.place(self.file),
                    length: usual.value.length.clone(),
                    law: own_law(&usual.value),
                    dark: usual.value.dark.unwrap_or(false),
                });
            }
            (Clause::Written(morph), _) => morph,
        };
        let law = self.law(&morph.value, findings)?;
        // Whether it is dark changes no limit: a `usual` that does not read need not keep the cue from being checked.
        let usual_dark = usual.written().and_then(|usual| usual.value.dark);
        Some(Transition {
            place: morph.span.place(self.file),
            length: morph.value.length.clone(),
            law,
            dark: morph.value.dark.or(usual_dark).unwrap_or(false),
        })
    }

    /// The law of a written morph: its own, else that of `usual` together with its skew; its own skew counts before both.
    fn law(&self, morph: &Morph, findings: &mut Findings) -> Option<Law> {
        if morph.law.is_some() {
            return Some(own_law(morph));
        }
        let mut law = match &self.clauses().morph {
            Clause::Broken => return None,
            Clause::Absent => quintic(),
            Clause::Written(usual) => own_law(&usual.value),
        };
        if let Some(skew) = &morph.skew {
            if !takes_skew(&law.kind) {
                let mut finding = Finding::new(
                    Code::TextSyntax,
                    findings.place(skew.span),
                    no_skew_message(&law.kind),
                )
                .help("take `skew` away, or write a law such as `quintic` with it");
                if let Some(usual) = self.clauses().morph.written() {
                    finding = finding.also(findings.place(usual.span), "the law comes from here");
                }
                findings.push(finding);
                return None;
            }
            law.skew = skew.value.clone();
        }
        Some(law)
    }

    /// A clause of a cue or, where it leaves it out, of `usual`: `Err` where that one does not read, `Ok(None)` where neither writes it.
    fn clause<'c, T>(
        &'c self,
        own: &'c Clause<T>,
        of_usual: impl Fn(&'c Clauses) -> &'c Clause<T>,
    ) -> Result<Option<&'c Spanned<T>>, ()> {
        match own {
            Clause::Broken => Err(()),
            Clause::Written(own) => Ok(Some(own)),
            Clause::Absent => match of_usual(self.clauses()) {
                Clause::Broken => Err(()),
                Clause::Written(usual) => Ok(Some(usual)),
                Clause::Absent => Ok(None),
            },
        }
    }
}

/// A cue but for its figure.
pub(super) struct Merged {
    place: Place,
    figure_place: Place,
    hold: (Hold, Place),
    land: (Land, Option<Place>),
    pace: (Pace, Option<Place>),
    name: Option<String>,
    morph: Transition,
    spin: Speed,
    beam: Rational,
}

impl Merged {
    /// The cue with its figure.
    pub(super) fn with(self, figure: Figure) -> Cue {
        Cue {
            place: self.place,
            figure_place: self.figure_place,
            hold_place: self.hold.1,
            land_place: self.land.1,
            pace_place: self.pace.1,
            name: self.name,
            figure,
            morph: self.morph,
            hold: self.hold.0,
            pace: self.pace.0,
            land: self.land.0,
            spin: self.spin,
            beam: self.beam,
        }
    }
}

/// A cue with every clause that it leaves out filled in; `None` where one that applies does not read (reported) or is missing.
pub(super) fn cue(
    node: &CueNode,
    word: Span,
    usual: &Usual<'_>,
    findings: &mut Findings,
) -> Option<Merged> {
    let place = node.span.place(usual.file);
    let own = &node.clauses;
    let hold = usual.clause(&own.hold, |clauses| &clauses.hold);
    if hold == Ok(None) {
        findings.add_help(
            Code::TextMissing,
            word,
            "this cue does not say how long its figure stands, and neither does `usual`",
            "write e.g. `hold 20 s` in the cue, or `usual hold 20 s` once for all",
        );
    }
    let morph = usual.transition(&own.morph, place, findings);
    if own.any_broken() {
        return None;
    }
    let hold = hold.ok()??;
    let land = usual.clause(&own.land, |clauses| &clauses.land).ok()?;
    let pace = usual.clause(&own.pace, |clauses| &clauses.pace).ok()?;
    let spin = usual.clause(&own.spin, |clauses| &clauses.spin).ok()?;
    let beam = usual.clause(&own.beam, |clauses| &clauses.beam).ok()?;
    Some(Merged {
        place,
        figure_place: node.figure.span.place(usual.file),
        hold: (hold.value.clone(), hold.span.place(usual.file)),
        land: (
            land.map_or(Land::Usual, |land| land.value.clone()),
            land.map(|land| land.span.place(usual.file)),
        ),
        pace: (
            pace.map_or(Pace::Working, |pace| pace.value.clone()),
            pace.map(|pace| pace.span.place(usual.file)),
        ),
        name: own.name.written().map(|name| name.value.clone()),
        morph: morph?,
        spin: spin.map_or_else(Speed::zero, |spin| spin.value.clone()),
        beam: beam.map_or_else(Rational::one, |beam| beam.value.clone()),
    })
}
