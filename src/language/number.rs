//! Written numbers → exact rationals, within the limits of the language.

use crate::exact::{Rational, ratio, whole};
use num_bigint::BigInt;
use num_traits::{Signed, Zero};

/// Most significant digits of a number (of each half of `N/D`).
const MOST_DIGITS: usize = 15;
/// The smallest size of a number that is not zero is 10 to the minus this; the largest 10 to the plus this.
const MOST_POWER: u32 = 9;

/// Why a written number cannot be taken.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Problem {
    TooManyDigits(usize),
    DividedByZero,
    TooLarge,
    TooSmall,
}

impl Problem {
    /// What is wrong, to follow "this number".
    pub(super) fn message(self) -> String {
        match self {
            Problem::TooManyDigits(digits) => {
                format!("has {digits} significant digits, {MOST_DIGITS} are the most")
            }
            Problem::DividedByZero => "divides by zero".to_owned(),
            Problem::TooLarge => format!("is larger than 1e{MOST_POWER} in size"),
            Problem::TooSmall => format!("is smaller than 1e-{MOST_POWER} in size and not zero"),
        }
    }
}

/// The exact value of a number as the grammar's rule `number` takes it: `-12`, `0.25`, `1/3`, `1.8e-6`.
///
/// # Errors
/// More than 15 significant digits, or a size other than zero that is not from 10⁻⁹ to 10⁹.
pub(super) fn read(text: &str) -> Result<Rational, Problem> {
    let (negative, body) = match text.strip_prefix('-') {
        Some(rest) => (true, rest),
        None => (false, text.strip_prefix('+').unwrap_or(text)),
    };
    // Most numbers are short and whole, and within every limit.
    if body.len() <= 9 && body.bytes().all(|sign| sign.is_ascii_digit()) {
        let units = integer(body)?;
        return Ok(whole(if negative { -units } else { units }));
    }
    let size = match body.split_once('/') {
        Some((upper, lower)) => {
            let (upper, lower) = (integer(upper)?, integer(lower)?);
            if lower == 0 {
                return Err(Problem::DividedByZero);
            }
            ratio(upper, lower)
        }
        None => decimal(body)?,
    };
    if !size.is_zero() {
        if size > power(MOST_POWER) {
            return Err(Problem::TooLarge);
        }
        if size < power(MOST_POWER).recip() {
            return Err(Problem::TooSmall);
        }
    }
    Ok(if negative { -size } else { size })
}

/// The value, where it is a whole number that an `i64` holds.
pub(super) fn as_whole(value: &Rational) -> Option<i64> {
    if value.is_integer() {
        i64::try_from(value.numer()).ok()
    } else {
        None
    }
}

/// Whether it is a whole number from `least` to `most`.
pub(super) fn whole_between(value: &Rational, least: i64, most: i64) -> Option<i64> {
    as_whole(value).filter(|number| (least..=most).contains(number))
}

fn power(exponent: u32) -> Rational {
    Rational::from_integer(BigInt::from(10).pow(exponent))
}

/// A run of digits, at most 15 of them significant.
fn integer(digits: &str) -> Result<i128, Problem> {
    let significant = digits.trim_start_matches('0');
    if significant.len() > MOST_DIGITS {
        return Err(Problem::TooManyDigits(significant.len()));
    }
    Ok(significant.bytes().fold(0, |value, digit| {
        value * 10 + i128::from(digit.saturating_sub(b'0'))
    }))
}

/// `12`, `0.25`, `1.8e-6`.
fn decimal(body: &str) -> Result<Rational, Problem> {
    let (mantissa, exponent) = match body.split_once(['e', 'E']) {
        Some((mantissa, exponent)) => (mantissa, exponent),
        None => (body, "0"),
    };
    let (head, tail) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits = format!("{head}{tail}");
    let units = integer(&digits)?;
    if units == 0 {
        return Ok(Rational::zero());
    }
    // An exponent of more digits than an i64 holds is far out of range with either sign.
    let far = if exponent.starts_with('-') {
        -1_000_000
    } else {
        1_000_000
    };
    let places = i64::try_from(tail.len()).unwrap_or(i64::MAX);
    let scale = exponent
        .parse::<i64>()
        .unwrap_or(far)
        .clamp(-1_000_000, 1_000_000)
        .saturating_sub(places);
    // At most 15 digits: past these powers of ten the size is out of range whatever they are.
    if scale > i64::from(MOST_POWER) {
        return Err(Problem::TooLarge);
    }
    if scale < -40 {
        return Err(Problem::TooSmall);
    }
    let factor = power(
        u32::try_from(scale.unsigned_abs())
            .unwrap_or(u32::MAX)
            .min(40),
    );
    let units = whole(units);
    Ok(if scale.is_negative() {
        units / factor
    } else {
        units * factor
    })
}

/// `value` as a user would write it: `12`, `0.25`, else `1/3`.
pub(super) fn written(value: &Rational) -> String {
    crate::exact::exact_decimal(value, 12).unwrap_or_else(|| {
        let sign = if value.is_negative() { "-" } else { "" };
        format!("{sign}{}/{}", value.numer().abs(), value.denom())
    })
}
