//! Why a statement does not read: the grammar's failure → a sentence in plain English, at the exact place.

use super::grammar::Rule;
use super::reader::Reader;
use super::span::Span;
use super::unit::one_of;
use crate::finding::{Code, Finding};
use pest::error::{Error, ErrorVariant, InputLocation};

/// At most so many signs of the user's text stand in a message.
const MOST_SIGNS: usize = 40;
/// The clauses of a cue: where one of them may follow, all of them may.
const CLAUSES: [Rule; 8] = [
    Rule::morph,
    Rule::hold,
    Rule::rate,
    Rule::lead,
    Rule::land,
    Rule::spin,
    Rule::beam,
    Rule::label,
];

/// `text`, cut short where it is long.
pub(super) fn clip(text: &str) -> String {
    match text.char_indices().nth(MOST_SIGNS) {
        None => text.to_owned(),
        Some((at, _)) => format!("{}…", text.get(..at).unwrap_or_default()),
    }
}

/// Whether `sign` may stand inside a name, near enough for naming what was found.
fn in_word(sign: char) -> bool {
    sign.is_alphanumeric() || sign == '-' || sign == '_'
}

/// The word that `text` begins with; empty where it begins with none.
pub(super) fn first_word(text: &str) -> &str {
    if !text.starts_with(|sign: char| sign.is_alphabetic()) {
        return "";
    }
    let end = text.find(|sign: char| !in_word(sign)).unwrap_or(text.len());
    text.get(..end).unwrap_or_default()
}

/// The first sign, word or number of `text`, which begins where reading stopped.
fn token(text: &str) -> &str {
    let word = first_word(text);
    if !word.is_empty() {
        return word;
    }
    let end = if text.starts_with('"') {
        let line = text.find('\n').unwrap_or(text.len());
        text.get(..line).unwrap_or_default().trim_end().len()
    } else if text.starts_with(|sign: char| sign.is_ascii_digit() || sign == '-' || sign == '+') {
        text.char_indices()
            .skip(1)
            .find(|(_, sign)| !in_word(*sign) && !matches!(sign, '.' | '/' | ':' | '%'))
            .map_or(text.len(), |(at, _)| at)
    } else {
        text.chars().next().map_or(0, char::len_utf8)
    };
    text.get(..end).unwrap_or_default()
}

/// What a rule of the grammar stands for, and the word, where it is one.
fn describe(rule: Rule) -> String {
    let noun = match rule {
        Rule::EOI => "the end of the statement",
        Rule::text => "a text in quotes",
        Rule::name => "a name",
        Rule::figure | Rule::figure_name => "a figure",
        Rule::plain => "a number",
        Rule::opening => "`(`",
        Rule::closing => "`)`",
        Rule::equals => "`=`",
        Rule::ratio => "a ratio such as `5:-4`",
        Rule::quantity => "a number with its unit",
        Rule::duration => "a duration such as `4 s`",
        Rule::run => "a duration or `fastest`",
        Rule::law | Rule::law_name => "a law",
        Rule::torque_point => "a speed and its torque",
        Rule::rotor_angle => "a rotor and its angle",
        Rule::unit | Rule::odd_unit => "a unit",
        Rule::at_least => "`at least`",
        Rule::label => "`name`",
        _ => return format!("`{}`", word_of(rule)),
    };
    noun.to_owned()
}

/// The word of a rule that is named after one.
fn word_of(rule: Rule) -> String {
    let name = format!("{rule:?}");
    name.strip_prefix("w_").unwrap_or(&name).replace('_', "-")
}

/// The words that would have gone on.
fn words(expected: &[Rule]) -> Vec<String> {
    let mut words = Vec::new();
    for rule in expected {
        match rule {
            Rule::law | Rule::law_name => words.extend(LAWS.map(str::to_owned)),
            Rule::figure | Rule::figure_name => {
                words.extend(["rose", "ring", "star", "ratio"].map(str::to_owned))
            }
            Rule::at_least | Rule::w_at => words.push("at".to_owned()),
            Rule::label => words.push("name".to_owned()),
            Rule::run => words.push("fastest".to_owned()),
            Rule::EOI
            | Rule::text
            | Rule::name
            | Rule::number
            | Rule::plain
            | Rule::ratio
            | Rule::quantity
            | Rule::duration
            | Rule::unit
            | Rule::odd_unit
            | Rule::torque_point
            | Rule::rotor_angle => {}
            other => words.push(word_of(*other)),
        }
    }
    words
}

/// Every law's word.
pub(super) const LAWS: [&str; 10] = [
    "linear",
    "cubic",
    "quintic",
    "septic",
    "harmonic",
    "cycloidal",
    "modified-sine",
    "modified-trapezoid",
    "scurve",
    "bezier",
];

/// A rule that only begins another → that other one, so that each thing is named once.
fn whole_rule(rule: Rule) -> Rule {
    match rule {
        Rule::w_morph => Rule::morph,
        Rule::w_hold => Rule::hold,
        Rule::w_rate => Rule::rate,
        Rule::w_lead => Rule::lead,
        Rule::w_land => Rule::land,
        Rule::w_spin => Rule::spin,
        Rule::w_beam => Rule::beam,
        Rule::w_name => Rule::label,
        Rule::w_skew => Rule::skew,
        Rule::law_name | Rule::bezier | Rule::w_bezier => Rule::law,
        Rule::w_rose
        | Rule::w_ring
        | Rule::w_star
        | Rule::w_ratio
        | Rule::rose
        | Rule::ring
        | Rule::star
        | Rule::ratio_form
        | Rule::figure_name => Rule::figure,
        Rule::number => Rule::quantity,
        Rule::reserved => Rule::name,
        other => other,
    }
}

/// What the grammar would have gone on with: each thing once, and nothing that is part of another.
fn expected_rules(error: &Error<Rule>) -> Vec<Rule> {
    let ErrorVariant::ParsingError { positives, .. } = &error.variant else {
        return Vec::new();
    };
    let mut rules: Vec<Rule> = Vec::new();
    for rule in positives.iter().copied().map(whole_rule) {
        if !rules.contains(&rule) {
            rules.push(rule);
        }
    }
    let clause = rules.contains(&Rule::hold);
    let figure = rules.contains(&Rule::figure);
    rules.retain(|rule| match rule {
        // A duration may go on with another number, and a figure may be a ratio: no news to anyone.
        Rule::quantity | Rule::duration => !clause && !positives.contains(&Rule::EOI),
        Rule::ratio => !figure,
        _ => true,
    });
    if clause && !rules.contains(&Rule::EOI) && !rules.contains(&Rule::figure) {
        rules.push(Rule::EOI);
    }
    rules
}

/// What would have gone on, in words: "a clause such as `hold 5 s` or the end of the statement".
fn expectation(expected: &[Rule]) -> String {
    let options = [
        Rule::law,
        Rule::w_at,
        Rule::at_least,
        Rule::skew,
        Rule::w_dark,
        Rule::w_lit,
    ];
    let clause = expected.contains(&Rule::hold);
    let mut said: Vec<String> = Vec::new();
    for rule in expected {
        let text = if CLAUSES.contains(rule) {
            "a clause such as `hold 5 s`".to_owned()
        } else if (clause || expected.contains(&Rule::skew)) && options.contains(rule) {
            "a law or another option of `morph`".to_owned()
        } else {
            describe(*rule)
        };
        if !said.contains(&text) {
            said.push(text);
        }
    }
    said.sort_by_key(|text| text == "the end of the statement");
    one_of(&said)
}

/// The finding for a statement at `span` that does not read.
pub(super) fn syntax(reader: &mut Reader<'_>, span: Span, error: &Error<Rule>) -> Finding {
    let statement = span.of(reader.text);
    let at = match error.location {
        InputLocation::Pos(at) | InputLocation::Span((at, _)) => at,
    };
    let expected = expected_rules(error);
    let expected = expected.as_slice();
    let rest = statement.get(at..).unwrap_or_default();
    let found = token(rest);
    let start = span.start as usize + at;
    let place = reader.findings.place(Span::new(start, start + found.len()));
    let before = statement.get(..at).unwrap_or_default();
    let said = if found.is_empty() {
        "the end of the statement".to_owned()
    } else {
        format!("`{}`", clip(found))
    };
    let message = match expectation(expected) {
        nothing if nothing.is_empty() => format!("this does not read: found {said}"),
        expectation => format!("expected {expectation}, found {said}"),
    };
    let help = hint(before, found, expected).or_else(|| {
        let words = words(expected);
        reader
            .nearest
            .find(first_word(found), words.iter().map(String::as_str))
            .filter(|_| !first_word(found).is_empty())
            .map(|near| format!("did you mean `{near}`?"))
    });
    Finding::new(Code::TextSyntax, place, message).help_if(help)
}

/// Whether the last sign of `text` is a comma, comments and blank lines after it aside.
fn ends_in_comma(text: &str) -> bool {
    text.lines()
        .rev()
        .map(|line| {
            line.split_once('#')
                .map_or(line, |(line, _)| line)
                .trim_end()
        })
        .find(|line| !line.is_empty())
        .is_some_and(|line| line.ends_with(','))
}

/// Advice for slips that are easy to make.
fn hint(before: &str, found: &str, expected: &[Rule]) -> Option<String> {
    let clause = expected.contains(&Rule::hold);
    let figure = expected.contains(&Rule::figure);
    let after_comma = ends_in_comma(before);
    let help = match found {
        "" if after_comma => {
            "a statement goes on in the next line after a comma: take the comma away"
        }
        "-" | "+" => "no blank between a sign and its number",
        "−" | "–" | "—" => "a minus sign is written `-`",
        "“" | "”" | "'" | "‘" | "’" | "„" => {
            "a text stands in straight double quotes: \"…\""
        }
        ":" if clause => "a ratio is written without blanks: `5:-4`; a duration like `1 min 30 s`",
        "/" => "a fraction is written without blanks: `5/3`",
        "," => "a comma may stand once between clauses, nowhere else",
        ";" => "one statement a line; clauses may be parted by commas",
        "\u{a0}" => "this is a no-break space: write a plain one",
        _ if found.starts_with('"') && expected.contains(&Rule::text) => {
            "a text ends with `\"` on its line; inside it only `\\\"` and `\\\\` take a backslash"
        }
        "dark" | "lit" | "skew" | "at" if clause => {
            return Some(format!("`{found}` belongs to `morph`, behind its duration"));
        }
        "dark" | "lit" if expected.contains(&Rule::EOI) => {
            "run-up and run-down are always dark, no need to say so"
        }
        "skew" if expected.contains(&Rule::EOI) => "run-up and run-down take a law without `skew`",
        number
            if clause && after_comma && number.starts_with(|sign: char| sign.is_ascii_digit()) =>
        {
            "a sum of durations has no comma inside: `1 min 30 s`"
        }
        number
            if figure && number.starts_with(|sign: char| sign.is_ascii_digit() || sign == '-') =>
        {
            "a ratio is two whole numbers without blanks, with `:` and a plain `-`: `5:-4`"
        }
        law if clause && LAWS.contains(&law) => {
            return Some(format!(
                "`{law}` belongs to `morph`, behind its duration, and only once"
            ));
        }
        "morph" | "hold" | "rate" | "lead" | "land" | "spin" | "beam" | "name" if figure => {
            "a cue names its figure first: `cue deltoid hold 5 s`"
        }
        "cue" | "repeat" | "play" | "part" | "figure" | "loop" | "run-down" | "usual"
        | "run-up"
            if after_comma =>
        {
            "the line before ends in a comma, so this line belongs to its statement: take the comma away"
        }
        _ => return None,
    };
    Some(help.to_owned())
}
