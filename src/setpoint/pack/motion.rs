//! One rotor of a pack on its way, as its reader runs it.

/// One rotor as the table runs it, in 2⁻³² counts; arithmetic wraps, as that of a player does.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Motion {
    pub(super) phase: i64,
    pub(super) speed: i64,
    pub(super) change: i64,
    pub(super) scale: u8,
    pub(super) grain: u8,
    pub(super) pace: u8,
    pub(super) left: u64,
    pub(super) turn: i64,
}

impl Motion {
    pub(super) fn counts(&self) -> u32 {
        u32::try_from(self.phase >> 32).unwrap_or_default()
    }

    pub(super) fn advance(&mut self) -> i64 {
        let before = self.phase >> 32;
        self.phase = self.phase.wrapping_add(self.speed);
        self.speed = self.speed.wrapping_add(self.change);
        let step = (self.phase >> 32) - before;
        self.phase = self.phase.rem_euclid(self.turn);
        step
    }

    /// Goes on by so many ticks of a straight piece at once.
    pub(super) fn skip(&mut self, ticks: u64) {
        let moved = i128::from(self.phase) + i128::from(self.speed) * i128::from(ticks);
        self.phase = i64::try_from(moved.rem_euclid(i128::from(self.turn))).unwrap_or_default();
        self.left -= ticks;
    }

    /// The shortest way round that leads as far as `gap` counts.
    pub(super) fn nearest(&self, gap: i64) -> i64 {
        let turn = self.turn >> 32;
        if gap > turn / 2 {
            gap - turn
        } else if gap < -((turn - 1) / 2) {
            gap + turn
        } else {
            gap
        }
    }
}
