//! The least possible number of pieces: the longest piece that fits, one after the other, by an exact test.
//!
//! For a change c the rows leave a corridor for a straight line; Helly's theorem names three ticks that leave none where
//! there is none, and these give a bound that c must pass. Going from bound to bound ends, since there are finitely many.

use phasewright::motion::Shape;
use phasewright::plan::Plan;
use phasewright::rig::RotorId;
use phasewright::setpoint::Rows;

/// The least number of pieces of a whole plan, both rotors together: one for each straight leg, the longest that fit in
/// the others, one for each rotor at rest after a run-down.
pub(crate) fn of_plan(plan: &Plan, tolerance: i64) -> usize {
    let rows = Rows::new(plan);
    let mut total = if plan.loop_leg.is_none() { 2 } else { 0 };
    for (index, leg) in plan.legs.iter().enumerate() {
        let moves = plan.moves(index).unwrap();
        let found = rows.collect(leg.start.0..leg.start.0 + leg.ticks.0);
        for id in RotorId::BOTH {
            let motion = moves.of(id);
            let straight = motion.shape == Shape::Hold
                || (motion.from == motion.to && motion.correction.is_zero());
            let unwrapped = found.iter().scan(0, |sum, row| {
                let now = *sum;
                *sum += row.rotors.of(id).step;
                Some(now)
            });
            total += if straight {
                1
            } else {
                pieces(&unwrapped.collect::<Vec<i64>>(), tolerance)
            };
        }
    }
    total
}

/// A fraction with a positive denominator.
#[derive(Clone, Copy, Debug)]
struct Fraction {
    over: i128,
    under: i128,
}

impl Fraction {
    fn less(self, other: Self) -> bool {
        self.over * other.under < other.over * self.under
    }
}

/// What a corridor says of a change.
enum Verdict {
    Fits,
    /// The change must be at least this.
    Raise(Fraction),
    /// The change must be at most this.
    Lower(Fraction),
    Never,
}

/// How many pieces of any phase, speed and change keep within `tolerance` counts of `rows`, at the least.
pub(crate) fn pieces(rows: &[i64], tolerance: i64) -> usize {
    let mut first = 0;
    let mut pieces = 0;
    while first < rows.len() {
        first += longest(&rows[first..], tolerance);
        pieces += 1;
    }
    pieces
}

fn longest(rows: &[i64], tolerance: i64) -> usize {
    // Grow by doubling, then halve: that a part of a piece that fits also fits makes it monotone.
    let mut fits = 3.min(rows.len());
    let mut step = 16;
    while fits < rows.len() {
        let tried = (fits + step).min(rows.len());
        if feasible(&rows[..tried], tolerance) {
            fits = tried;
            step *= 2;
        } else {
            break;
        }
    }
    let mut fails = (fits + step).min(rows.len() + 1);
    while fits + 1 < fails {
        let mid = (fits + fails) / 2;
        if mid <= rows.len() && feasible(&rows[..mid], tolerance) {
            fits = mid;
        } else {
            fails = mid;
        }
    }
    fits
}

/// Whether one piece keeps r − N ≤ p + k·s + k(k−1)/2·c < r + N + 1 at every k, in real numbers (the open end closed:
/// a count's 2⁻³² is nothing beside it, and it can only make the least number smaller).
fn feasible(rows: &[i64], tolerance: i64) -> bool {
    if rows.len() <= 3 {
        return true;
    }
    let mean = (rows[rows.len() - 1] - rows[0]) / (rows.len() as i64 - 1);
    let low: Vec<i128> = rows
        .iter()
        .enumerate()
        .map(|(k, row)| i128::from(row - mean * k as i64 - tolerance))
        .collect();
    let width = i128::from(2 * tolerance + 1);
    let (mut least, mut most): (Option<Fraction>, Option<Fraction>) = (None, None);
    let mut change = Fraction { over: 0, under: 1 };
    for _ in 0..200 {
        match verdict(&low, width, change) {
            Verdict::Fits => return true,
            Verdict::Never => return false,
            Verdict::Raise(bound) => {
                least = Some(bound);
                change = bound;
            }
            Verdict::Lower(bound) => {
                most = Some(bound);
                change = bound;
            }
        }
        if let (Some(least), Some(most)) = (least, most)
            && most.less(least)
        {
            return false;
        }
    }
    panic!("no end of bounds");
}

/// For one change: the corridor of a straight line, low(k) − T(k)·c … low(k) + width − T(k)·c.
fn verdict(low: &[i128], width: i128, change: Fraction) -> Verdict {
    let triangle = |k: usize| (k as i128) * (k as i128 - 1) / 2;
    // Times the denominator, so that all stays whole.
    let at = |k: usize| low[k] * change.under - triangle(k) * change.over;
    let wide = width * change.under;
    // The upper hull of the lower bounds must lie below the lower hull of the upper bounds.
    let upper = hull(low.len(), &|k| at(k));
    let lower = hull(low.len(), &|k| -(at(k) + wide));
    // Three ticks that leave no line: a lower bound above the chord of two upper ones, or an upper one below two lower.
    if let Some([i, j, k]) = crossing(&upper, &lower, &|k| at(k), &|k| at(k) + wide) {
        // low(j) > the chord of low + width over i and k: low_j(k−i) − (low_i + w)(k−j) − (low_k + w)(j−i) ≤ c·(T_j(k−i) − T_i(k−j) − T_k(j−i)).
        return bound(low, width, [i, j, k], 1);
    }
    let negated_upper = hull(low.len(), &|k| -(at(k) + wide));
    let negated_lower = hull(low.len(), &|k| at(k));
    if let Some([i, j, k]) = crossing(&negated_upper, &negated_lower, &|k| -(at(k) + wide), &|k| {
        -at(k)
    }) {
        return bound(low, width, [i, j, k], -1);
    }
    Verdict::Fits
}

/// What ticks i < j < k ask of the change: for `side` 1 the lower bound at j under the chord of the upper bounds at i and k.
fn bound(low: &[i128], width: i128, [i, j, k]: [usize; 3], side: i128) -> Verdict {
    let triangle = |k: usize| (k as i128) * (k as i128 - 1) / 2;
    let (ki, kj, ji) = ((k - i) as i128, (k - j) as i128, (j - i) as i128);
    let bend = low[j] * ki - low[i] * kj - low[k] * ji;
    let weight = triangle(j) * ki - triangle(i) * kj - triangle(k) * ji;
    // side 1: bend − width·ki ≤ c·weight; side −1: bend + width·ki ≥ c·weight. The weight is below zero.
    let over = -(bend - side * width * ki);
    let under = -weight;
    if under <= 0 {
        return Verdict::Never;
    }
    if side > 0 {
        Verdict::Lower(Fraction { over, under })
    } else {
        Verdict::Raise(Fraction { over, under })
    }
}

/// Ticks of the upper hull of points (k, value(k)).
fn hull(length: usize, value: &dyn Fn(usize) -> i128) -> Vec<usize> {
    let mut hull: Vec<usize> = Vec::new();
    for k in 0..length {
        while hull.len() >= 2 {
            let (i, j) = (hull[hull.len() - 2], hull[hull.len() - 1]);
            let turn = (value(j) - value(i)) * ((k - i) as i128)
                - (value(k) - value(i)) * ((j - i) as i128);
            if turn <= 0 {
                hull.pop();
            } else {
                break;
            }
        }
        hull.push(k);
    }
    hull
}

/// The three ticks at which the upper hull of the lower bounds stands highest above the chord of the upper bounds.
fn crossing(
    upper: &[usize],
    lower: &[usize],
    low: &dyn Fn(usize) -> i128,
    high: &dyn Fn(usize) -> i128,
) -> Option<[usize; 3]> {
    // `lower` holds the ticks of the lower hull of the upper bounds.
    let mut worst: Option<(i128, i128, [usize; 3])> = None;
    let mut edge = 0;
    for &j in upper {
        while edge + 2 < lower.len() && lower[edge + 1] <= j {
            edge += 1;
        }
        let (i, k) = (lower[edge], lower[(edge + 1).min(lower.len() - 1)]);
        if !(i < j && j < k) {
            continue;
        }
        let span = (k - i) as i128;
        let over = low(j) * span - high(i) * ((k - j) as i128) - high(k) * ((j - i) as i128);
        if over > 0 && worst.is_none_or(|(best, under, _)| over * under > best * span) {
            worst = Some((over, span, [i, j, k]));
        }
    }
    worst.map(|(_, _, ticks)| ticks)
}
