//! Numbers to text, straight into a byte buffer.
//!
//! A long table is nearly all formatting: twelve numbers a row, millions of rows. The standard formatter is several
//! times slower here (dynamic dispatch and padding for each field), so this module writes digits two at a time.

use super::{RPM_PLACES, Row, TURN_PLACES};
use crate::exact::{Rational, round_half_up, whole};
use num_traits::ToPrimitive;

/// The hundred pairs `00` … `99`.
const PAIRS: [[u8; 2]; 100] = pairs();

#[expect(
    clippy::indexing_slicing,
    reason = "evaluated at compile time, where a wrong index fails the build"
)]
#[expect(clippy::cast_possible_truncation, reason = "digits are below ten")]
const fn pairs() -> [[u8; 2]; 100] {
    let mut all = [[b'0'; 2]; 100];
    let mut value = 0;
    while value < 100 {
        all[value] = [b'0' + (value / 10) as u8, b'0' + (value % 10) as u8];
        value += 1;
    }
    all
}

/// Digits of the largest `u64`.
const MOST: usize = 20;

/// Appends `value`, with zeros before it up to `width` digits (at most 20).
#[inline]
#[expect(
    clippy::indexing_slicing,
    reason = "hot loop: a u64 has at most 20 digits and width is at most 20, so `at` never passes the front of the buffer; pairs are below 100"
)]
fn padded(out: &mut Vec<u8>, mut value: u64, width: usize) {
    let mut text = [b'0'; MOST];
    let mut at = MOST;
    while value >= 100 {
        at -= 2;
        let pair = PAIRS[(value % 100) as usize];
        text[at] = pair[0];
        text[at + 1] = pair[1];
        value /= 100;
    }
    if value >= 10 {
        at -= 2;
        let pair = PAIRS[value as usize];
        text[at] = pair[0];
        text[at + 1] = pair[1];
    } else if value > 0 {
        at -= 1;
        text[at] = b'0' + value as u8;
    }
    out.extend_from_slice(&text[at.min(MOST - width.min(MOST))..]);
}

/// Appends a whole number.
#[inline]
pub(super) fn unsigned(out: &mut Vec<u8>, value: u64) {
    padded(out, value, 1);
}

/// Appends a whole number with its sign if it is below zero.
#[inline]
pub(super) fn signed(out: &mut Vec<u8>, value: i64) {
    if value < 0 {
        out.push(b'-');
    }
    padded(out, value.unsigned_abs(), 1);
}

/// Appends `units`·10^−places. A whole number of units has no negative zero, so neither has the text.
#[inline]
fn decimal(out: &mut Vec<u8>, units: u64, places: u32) {
    let one = 10_u64.pow(places);
    padded(out, units / one, 1);
    if places > 0 {
        out.push(b'.');
        padded(out, units % one, places as usize);
    }
}

/// The exact time of a row as text: a count of whole seconds and one of the tick's last decimal.
#[derive(Clone, Debug)]
pub(super) struct Clock {
    /// The tick in units of its last decimal.
    tick: u64,
    /// Decimals of the tick, at most 18.
    places: u32,
}

impl Clock {
    /// The clock of a tick of `seconds`; a tick that is no decimal of at most 18 places is shown to 18.
    pub(super) fn new(seconds: &Rational) -> Self {
        const MOST_PLACES: u32 = 18;
        let places = (0..MOST_PLACES)
            .find(|places| (seconds * whole(10_i128.pow(*places))).is_integer())
            .unwrap_or(MOST_PLACES);
        let units = round_half_up(&(seconds * whole(10_i128.pow(places))));
        Self {
            tick: units.to_u64().unwrap_or(u64::MAX),
            places,
        }
    }

    /// Appends `tick` times the tick.
    #[inline]
    fn write(&self, out: &mut Vec<u8>, tick: u64) {
        match tick.checked_mul(self.tick) {
            Some(units) => decimal(out, units, self.places),
            None => self.write_long(out, tick),
        }
    }

    /// For times of more than 2⁶⁴ units of the last decimal.
    #[cold]
    fn write_long(&self, out: &mut Vec<u8>, tick: u64) {
        let units = u128::from(tick) * u128::from(self.tick);
        let one = 10_u128.pow(self.places);
        padded(out, u64::try_from(units / one).unwrap_or(u64::MAX), 1);
        if self.places > 0 {
            out.push(b'.');
            padded(
                out,
                u64::try_from(units % one).unwrap_or_default(),
                self.places as usize,
            );
        }
    }
}

/// Appends the fields of a row, comma between two, nothing at the end.
pub(super) fn fields(out: &mut Vec<u8>, clock: &Clock, row: &Row) {
    let (a, b) = (&row.rotors.a, &row.rotors.b);
    unsigned(out, row.tick);
    out.push(b',');
    clock.write(out, row.tick);
    out.push(b',');
    unsigned(out, u64::from(row.cue));
    for turns in [a.turns, b.turns] {
        out.push(b',');
        decimal(out, turns, TURN_PLACES);
    }
    for rpm in [a.rpm, b.rpm] {
        out.push(b',');
        if rpm < 0 {
            out.push(b'-');
        }
        decimal(out, rpm.unsigned_abs(), RPM_PLACES);
    }
    for counts in [a.counts, b.counts] {
        out.push(b',');
        unsigned(out, u64::from(counts));
    }
    for step in [a.step, b.step] {
        out.push(b',');
        signed(out, step);
    }
    out.push(b',');
    unsigned(out, u64::from(row.beam));
}

#[cfg(test)]
mod tests {
    use super::{Clock, decimal, padded, signed};
    use crate::exact::ratio;

    fn text(write: impl Fn(&mut Vec<u8>)) -> String {
        let mut out = Vec::new();
        write(&mut out);
        String::from_utf8(out).unwrap_or_default()
    }

    #[test]
    fn digits_agree_with_the_standard_formatter() {
        let mut value = 1_u64;
        for _ in 0..2000 {
            value = value
                .wrapping_mul(6_364_136_223_846_793_005)
                .wrapping_add(1);
            for shift in [0, 7, 20, 33, 44, 57, 60, 63] {
                let number = value >> shift;
                assert_eq!(text(|out| padded(out, number, 1)), number.to_string());
                assert_eq!(text(|out| padded(out, number, 20)), format!("{number:020}"));
                let signed_number = number.cast_signed();
                assert_eq!(
                    text(|out| signed(out, signed_number)),
                    signed_number.to_string()
                );
            }
        }
        assert_eq!(text(|out| signed(out, i64::MIN)), i64::MIN.to_string());
        assert_eq!(text(|out| padded(out, 0, 1)), "0");
    }

    #[test]
    fn decimals_keep_their_zeros() {
        assert_eq!(text(|out| decimal(out, 5, 12)), "0.000000000005");
        assert_eq!(text(|out| decimal(out, 1_000_000, 6)), "1.000000");
        assert_eq!(text(|out| decimal(out, 7, 0)), "7");
    }

    #[test]
    fn time_has_the_places_of_the_tick() {
        let at = |seconds, tick| text(|out| Clock::new(&seconds).write(out, tick));
        assert_eq!(at(ratio(1, 1024), 3), "0.0029296875");
        assert_eq!(at(ratio(2, 1000), 500), "1.000");
        assert_eq!(at(ratio(1, 1), 12), "12");
        // 10⁸ ticks of just under a second with twelve places: past 64 bits.
        let long = ratio(999_999_999_999, 1_000_000_000_000);
        assert_eq!(at(long, 100_000_000), "99999999.999900000000");
    }
}
