//! The PEG grammars of `grammar/`, made into a parser.
#![allow(
    unreachable_pub,
    reason = "pest's derive makes the rules public; this module is private"
)]

use pest::Parser;
use pest::error::Error;
use pest::iterators::Pair;
use pest_derive::Parser as Derive;

#[derive(Derive)]
#[grammar = "../grammar/common.pest"]
#[grammar = "../grammar/show.pest"]
#[grammar = "../grammar/rig.pest"]
struct Grammar;

/// The one pair that `rule` makes of a whole statement.
///
/// # Errors
/// Where the statement does not read: how far it did, and which rules would have gone on.
pub(super) fn parse(rule: Rule, statement: &str) -> Result<Pair<'_, Rule>, Box<Error<Rule>>> {
    let mut pairs = Grammar::parse(rule, statement).map_err(Box::new)?;
    pairs.next().ok_or_else(|| {
        // A rule that matches makes exactly one pair, so that this is never reached; it is an error all the same.
        Box::new(Error::new_from_pos(
            pest::error::ErrorVariant::ParsingError {
                positives: vec![rule],
                negatives: Vec::new(),
            },
            pest::Position::from_start(statement),
        ))
    })
}
