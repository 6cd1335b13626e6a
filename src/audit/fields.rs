//! The fields of a row back into numbers, in the one form that a table may have.

/// A decimal with exactly `places` digits after the point, as a whole number of 10^−places: no sign but a minus before a
/// number other than zero, no leading zeros, nothing else. `None` for any other text.
pub(super) fn decimal(text: &[u8], places: usize) -> Option<i128> {
    let (negative, digits) = match text {
        [b'-', digits @ ..] => (true, digits),
        _ => (false, text),
    };
    let fraction = if places == 0 { 0 } else { places + 1 };
    let (head, tail) = digits.split_at_checked(digits.len().checked_sub(fraction)?)?;
    let leading_zero = head.len() > 1 && head.first() == Some(&b'0');
    // 18 + 18 digits stay far below 2¹²⁷; tables need fewer.
    if head.is_empty() || leading_zero || head.len() > 18 || places > 18 {
        return None;
    }
    let whole = number(head)?;
    let units = match tail {
        [] => i128::from(whole),
        [b'.', tail @ ..] => {
            i128::from(whole) * 10_i128.pow(u32::try_from(places).ok()?) + i128::from(number(tail)?)
        }
        _ => return None,
    };
    match (negative, units) {
        (true, 0) => None,
        (true, units) => Some(-units),
        (false, units) => Some(units),
    }
}

/// At most 18 digits and nothing else.
#[inline]
fn number(digits: &[u8]) -> Option<u64> {
    let mut value = 0_u64;
    for byte in digits {
        let digit = byte.wrapping_sub(b'0');
        if digit > 9 {
            return None;
        }
        value = value * 10 + u64::from(digit);
    }
    Some(value)
}

#[cfg(test)]
mod tests {
    use super::decimal;

    #[test]
    fn only_the_one_form_reads() {
        assert_eq!(decimal(b"0.25", 2), Some(25));
        assert_eq!(decimal(b"-12.050", 3), Some(-12_050));
        assert_eq!(decimal(b"7", 0), Some(7));
        assert_eq!(decimal(b"-3", 0), Some(-3));
        for (text, places) in [
            ("", 0),
            ("-", 0),
            ("-0", 0),
            ("-0.00", 2),
            ("00", 0),
            ("01.5", 1),
            ("1.5", 2),
            (".5", 1),
            ("1,5", 1),
            ("+1", 0),
            ("1 ", 0),
            ("1e3", 0),
            ("1.", 0),
            ("1.", 1),
            ("1234567890123456789", 0),
        ] {
            assert_eq!(decimal(text.as_bytes(), places), None, "{text:?}");
        }
    }
}
