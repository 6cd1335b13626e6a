//! One line of a log: its separator, its fields, its numbers, as real loggers write them.

/// How the fields of a line are kept apart.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Separator {
    Tab,
    Semicolon,
    Bar,
    Comma,
    /// Any run of spaces.
    Spaces,
}

impl Separator {
    /// In the order in which they are tried: what cannot be part of a number first.
    pub(super) const ALL: [Separator; 5] = [
        Separator::Tab,
        Separator::Semicolon,
        Separator::Bar,
        Separator::Comma,
        Separator::Spaces,
    ];

    fn sign(self) -> Option<char> {
        match self {
            Separator::Tab => Some('\t'),
            Separator::Semicolon => Some(';'),
            Separator::Bar => Some('|'),
            Separator::Comma => Some(','),
            Separator::Spaces => None,
        }
    }

    /// The fields of `line`, quotes and the spaces around taken off.
    pub(super) fn fields(self, line: &str) -> Vec<String> {
        let mut fields = Vec::new();
        let mut field = String::new();
        let mut quoted = false;
        for sign in line.chars() {
            let parts = match self.sign() {
                Some(separator) => sign == separator,
                None => sign.is_whitespace(),
            };
            if sign == '"' {
                quoted = !quoted;
            } else if parts && !quoted {
                fields.push(std::mem::take(&mut field));
            } else {
                field.push(sign);
            }
        }
        fields.push(field);
        let trimmed = fields.into_iter().map(|field| field.trim().to_owned());
        if self == Separator::Spaces {
            trimmed.filter(|field| !field.is_empty()).collect()
        } else {
            trimmed.collect()
        }
    }
}

/// A moment as written: whole seconds and the rest, so that seconds since 1970 keep their microseconds.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Stamp {
    pub(super) whole: i64,
    /// In [0, 1).
    pub(super) rest: f64,
    /// Digits after the decimal sign.
    pub(super) places: u32,
}

impl Stamp {
    /// Seconds since `origin` (whole seconds).
    pub(super) fn since(self, origin: i64) -> f64 {
        #[expect(
            clippy::cast_precision_loss,
            reason = "whole seconds within a log are far below 2⁵³"
        )]
        let whole = self.whole.saturating_sub(origin) as f64;
        whole + self.rest
    }
}

/// A decimal number; a comma stands for the point where `comma` says so. `None` for anything else, infinities included.
pub(super) fn number(field: &str, comma: bool) -> Option<f64> {
    let text = plain(field, comma)?;
    let value: f64 = text.parse().ok()?;
    value.is_finite().then_some(value)
}

/// A time stamp in seconds.
pub(super) fn stamp(field: &str, comma: bool) -> Option<Stamp> {
    let text = plain(field, comma)?;
    if text.contains(['e', 'E']) {
        let value: f64 = text.parse().ok()?;
        if !value.is_finite() || value.abs() > 9e15 {
            return None;
        }
        let whole = value.floor();
        #[expect(clippy::cast_possible_truncation, reason = "below 9·10¹⁵")]
        return Some(Stamp {
            whole: whole as i64,
            rest: value - whole,
            places: 9,
        });
    }
    let (sign, digits) = match text.strip_prefix('-') {
        Some(rest) => (-1, rest),
        None => (1, text.strip_prefix('+').unwrap_or(&text)),
    };
    let (head, tail) = digits.split_once('.').unwrap_or((digits, ""));
    let whole: i64 = if head.is_empty() && !tail.is_empty() {
        0
    } else {
        head.parse().ok()?
    };
    let rest: f64 = if tail.is_empty() {
        0.0
    } else {
        format!("0.{tail}").parse().ok()?
    };
    let places = u32::try_from(tail.len()).ok()?;
    let (whole, rest) = if sign < 0 && rest > 0.0 {
        (-whole - 1, 1.0 - rest)
    } else {
        (sign * whole, rest)
    };
    Some(Stamp {
        whole,
        rest,
        places,
    })
}

/// The field with `.` as its decimal sign; `None` where a sign stands that no number has.
fn plain(field: &str, comma: bool) -> Option<String> {
    let text = if comma {
        field.replace(',', ".")
    } else {
        field.to_owned()
    };
    let known = |sign: char| sign.is_ascii_digit() || matches!(sign, '.' | '-' | '+' | 'e' | 'E');
    (!text.is_empty() && text.len() <= 64 && text.chars().all(known)).then_some(text)
}

#[cfg(test)]
#[allow(clippy::expect_used, reason = "a test that fails may panic")]
mod tests {
    use super::{Separator, number, stamp};

    #[test]
    fn quotes_and_spaces_come_off() {
        assert_eq!(
            Separator::Comma.fields("\"0.5\", 12 ,\"a,b\""),
            ["0.5", "12", "a,b"]
        );
        assert_eq!(
            Separator::Spaces.fields("  0.5   12\t7 "),
            ["0.5", "12", "7"]
        );
    }

    #[test]
    fn stamps_keep_their_microseconds() {
        let late = stamp("1764592081.123456", false).expect("a stamp");
        assert_eq!(late.whole, 1_764_592_081);
        assert!((late.rest - 0.123_456).abs() < 1e-15);
        assert_eq!(late.places, 6);
        let before = stamp("-0,25", true).expect("a stamp");
        assert!((before.since(0) + 0.25).abs() < 1e-15);
        assert!(stamp("1.2.3", false).is_none());
        assert!(stamp("nan", false).is_none());
        assert!(number("inf", false).is_none());
        assert!(number("1e400", false).is_none());
    }
}
