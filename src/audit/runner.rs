//! The lists of knots in JSON: their entries as text, and one rotor's list on its way.

use super::straight::Line;

/// The numbers of an entry `[a,b,…]` in the one form that it may have, and how many there are: 2 to 4.
pub(super) fn numbers(text: &[u8]) -> Option<([i64; 4], usize)> {
    let inner = text.strip_prefix(b"[")?.strip_suffix(b"]")?;
    let mut numbers = [0; 4];
    let mut count = 0;
    for field in inner.split(|byte| *byte == b',') {
        *numbers.get_mut(count)? = whole(field)?;
        count += 1;
    }
    (count >= 2).then_some((numbers, count))
}

/// A whole number without needless signs and zeros.
fn whole(text: &[u8]) -> Option<i64> {
    let digits = text.strip_prefix(b"-").unwrap_or(text);
    let plain = match digits {
        [b'0'] => digits.len() == text.len(),
        [first, rest @ ..] => (b'1'..=b'9').contains(first) && rest.iter().all(u8::is_ascii_digit),
        [] => false,
    };
    let text = std::str::from_utf8(text).ok().filter(|_| plain)?;
    text.parse().ok()
}

/// Entries that were found good, one a line.
#[derive(Clone, Copy)]
pub(super) struct Entries<'l>(pub(super) &'l [u8]);

impl Iterator for Entries<'_> {
    type Item = ([i64; 4], usize);

    fn next(&mut self) -> Option<Self::Item> {
        let end = self.0.iter().position(|byte| *byte == b'\n')?;
        let (line, rest) = self.0.split_at(end);
        self.0 = rest.get(1..).unwrap_or_default();
        numbers(line)
    }
}

/// One rotor's list on its way; after its last piece comes the phase at the loop start.
pub(super) struct Runner<'l> {
    pieces: Entries<'l>,
    turn: i64,
    line: Line,
    change: i64,
    left: u64,
    tick: u64,
    loop_start: u64,
    closing: Option<i64>,
}

impl<'l> Runner<'l> {
    /// Starts at rest on the mark: phase 2³¹, half a count.
    pub(super) fn new(pieces: Entries<'l>, turn: i64, loop_start: u64) -> Self {
        let mut runner = Self {
            pieces,
            turn,
            line: Line {
                phase: 1 << 31,
                speed: 0,
            },
            change: 0,
            left: 0,
            tick: 0,
            loop_start,
            closing: None,
        };
        runner.enter();
        runner
    }

    fn enter(&mut self) {
        match (self.pieces.next(), self.closing) {
            (Some(([ticks, phase, speed, change], 4)), _) => {
                self.left = ticks.cast_unsigned();
                self.line = Line { phase, speed };
                self.change = change;
            }
            (Some(([ticks, change, ..], _)), _) => {
                self.left = ticks.cast_unsigned();
                // The change of a piece that goes on counts from its first tick on.
                let more = change.wrapping_sub(self.change);
                self.line.speed = self.line.speed.wrapping_add(more);
                self.change = change;
            }
            (None, Some(phase)) => self.line.phase = phase,
            (None, None) => {}
        }
        if self.tick == self.loop_start {
            self.closing = Some(self.line.phase);
        }
    }

    pub(super) fn counts(&self) -> u32 {
        u32::try_from(self.line.phase >> 32).unwrap_or_default()
    }

    /// Where it stands, and how fast it moves.
    pub(super) fn line(&self) -> Line {
        self.line
    }

    /// Goes on by a tick; the counts that it moves.
    pub(super) fn advance(&mut self) -> i64 {
        let before = self.line.phase >> 32;
        let reached = self.line.phase.wrapping_add(self.line.speed);
        self.line.speed = self.line.speed.wrapping_add(self.change);
        let mut step = (reached >> 32) - before;
        self.line.phase = reached.rem_euclid(self.turn);
        self.tick += 1;
        self.left = self.left.saturating_sub(1);
        if self.left == 0 {
            let expected = self.line.phase >> 32;
            self.enter();
            let turn = self.turn >> 32;
            let gap = (self.line.phase >> 32) - expected;
            step += if gap > turn / 2 {
                gap - turn
            } else if gap < -((turn - 1) / 2) {
                gap + turn
            } else {
                gap
            };
        }
        step
    }

    /// Ticks that can be skipped.
    pub(super) fn straight(&self) -> u64 {
        if self.change == 0 {
            self.left.saturating_sub(1)
        } else {
            0
        }
    }

    pub(super) fn skip(&mut self, ticks: u64) {
        let moved = i128::from(self.line.phase) + i128::from(self.line.speed) * i128::from(ticks);
        let within = moved.rem_euclid(i128::from(self.turn));
        self.line.phase = i64::try_from(within).unwrap_or_default();
        self.left -= ticks;
        self.tick += ticks;
    }
}

#[cfg(test)]
mod tests {
    use super::numbers;

    #[test]
    fn only_the_one_form_reads() {
        assert_eq!(numbers(b"[12,-3]"), Some(([12, -3, 0, 0], 2)));
        let largest = i64::MAX;
        let text = format!("[0,{largest},{},1]", i64::MIN);
        assert_eq!(
            numbers(text.as_bytes()),
            Some(([0, largest, i64::MIN, 1], 4))
        );
        for text in [
            "",
            "[]",
            "[1]",
            "[1,]",
            "[,1]",
            "[1,2",
            "1,2]",
            "[1, 2]",
            "[01,2]",
            "[1,-0]",
            "[+1,2]",
            "[1,2]]",
            "[1,2,3,4,5]",
            "[1,9223372036854775808]",
            "[1e3,2]",
            "[1.0,2]",
        ] {
            assert_eq!(numbers(text.as_bytes()), None, "{text:?}");
        }
    }
}
