//! Straight lines through measured points, with outliers set aside and an error that means what it says.
//!
//! The estimate is an M-estimate with Tukey's biweight (tuning 4.685, 95 % efficient at a normal law: Holland & Welsch,
//! *Communications in Statistics* A6, 1977), found by iteratively reweighted least squares. It starts from Theil's
//! incomplete method (H. Theil, 1950: the median of the slopes between points half a series apart), scaled by the median
//! absolute deviation.
//!
//! Its error is the sandwich form for M-estimates (Huber 1967), with a middle that bears residuals which hang together
//! in time: a Bartlett sum with Andrews' automatic width (Newey & West, *Econometrica* 55, 1987; Andrews, *Econometrica*
//! 59, 1991) after prewhitening (Andrews & Monahan, *Econometrica* 60, 1992). It is then widened so that three times it
//! covers 99.73 % with the few degrees of freedom there are (JCGM 100:2008, *Guide to the expression of uncertainty in
//! measurement*, table G.2). All from memory but the last.

use super::student::student;

/// Points (x, y) in the order of time; each group has an intercept of its own.
pub(super) type Groups = [Vec<(f64, f64)>];

/// A fitted line.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Line {
    /// Change of y for one of x.
    pub(super) slope: f64,
    /// One standard error of the slope; three of them cover 99.73 %.
    pub(super) error: f64,
    /// y of each group at its own middle, and that x.
    pub(super) centres: Vec<(f64, f64)>,
    /// Points with a weight.
    pub(super) used: usize,
    /// Points set aside.
    pub(super) removed: usize,
    /// Spread of y about the line.
    pub(super) scale: f64,
}

const TUNING: f64 = 4.685;
/// From median absolute deviation to standard deviation under a normal law: 1/Φ⁻¹(¾).
const FROM_MEDIAN: f64 = 1.482_602_218_505_602;
const MOST_ROUNDS: usize = 50;

/// The robust line through all groups, one slope in common.
///
/// `resolution` is the smallest difference of y that the measurement knows: residuals within it are never outliers, and
/// where they are all smaller, so that rounding may hide a slope, the error says so. `None` with fewer than four points
/// or no spread in x.
pub(super) fn line(groups: &Groups, resolution: f64) -> Option<Line> {
    let total: usize = groups.iter().map(Vec::len).sum();
    let parameters = groups.iter().filter(|group| group.len() > 1).count() + 1;
    if total < parameters + 2 {
        return None;
    }
    let mut slope = theil(groups)?;
    let mut residuals = about_medians(groups, slope);
    // With few points the line runs close to them, so their median deviation is too small and would make outliers of
    // good ones; the second factor is our own, chosen by simulation (see the tests below).
    let free = as_float(total - parameters);
    let crowded = (as_float(total) / free).sqrt() * (1.0 + 3.0 / free);
    let mut scale = spread(&residuals, resolution) * crowded;
    let mut centres = Vec::new();
    for round in 0..MOST_ROUNDS {
        let step = reweighted(groups, &residuals, scale)?;
        let moved = (step.slope - slope).abs();
        slope = step.slope;
        residuals = about_centres(groups, &step.centres, slope);
        centres = step.centres;
        // The scale settles with the first rounds; after that it stays, so that the rounds converge.
        if round < 3 {
            scale = spread(&residuals, resolution) * crowded;
        } else if moved <= 1e-12 * slope.abs() + 1e-18 {
            break;
        }
    }
    let error = slope_error(groups, &centres, &residuals, scale, parameters)?;
    let kept: Vec<f64> = residuals
        .iter()
        .flatten()
        .copied()
        .filter(|residual| residual.abs() < TUNING * scale)
        .collect();
    let width = root_mean_square(&kept);
    let hidden = hidden_by_rounding(groups, width, resolution);
    Some(Line {
        slope,
        error: error.hypot(hidden),
        centres,
        used: kept.len(),
        removed: total - kept.len(),
        scale: width,
    })
}

struct Step {
    slope: f64,
    centres: Vec<(f64, f64)>,
}

fn reweighted(groups: &Groups, residuals: &[Vec<f64>], scale: f64) -> Option<Step> {
    let mut across = 0.0;
    let mut along = 0.0;
    let mut centres = Vec::with_capacity(groups.len());
    for (group, own) in groups.iter().zip(residuals) {
        let (mut weight, mut x_sum, mut y_sum) = (0.0, 0.0, 0.0);
        for ((x, y), residual) in group.iter().zip(own) {
            let w = biweight(residual / scale);
            weight += w;
            x_sum += w * x;
            y_sum += w * y;
        }
        if weight <= 0.0 {
            let (x, y) = group.first().copied().unwrap_or((0.0, 0.0));
            centres.push((x, y));
            continue;
        }
        let (x_mean, y_mean) = (x_sum / weight, y_sum / weight);
        for ((x, y), residual) in group.iter().zip(own) {
            let w = biweight(residual / scale);
            across += w * (x - x_mean) * (x - x_mean);
            along += w * (x - x_mean) * (y - y_mean);
        }
        centres.push((x_mean, y_mean));
    }
    (across > 0.0).then(|| Step {
        slope: along / across,
        centres,
    })
}

pub(super) fn biweight(u: f64) -> f64 {
    let share = u / TUNING;
    if share.abs() >= 1.0 {
        0.0
    } else {
        (1.0 - share * share).powi(2)
    }
}

/// ψ′ of the biweight, ψ(u) = u·(1 − (u/c)²)².
fn biweight_slope(u: f64) -> f64 {
    let square = (u / TUNING).powi(2);
    if square >= 1.0 {
        0.0
    } else {
        (1.0 - square) * (1.0 - 5.0 * square)
    }
}

fn theil(groups: &Groups) -> Option<f64> {
    let mut slopes = Vec::new();
    for group in groups {
        let apart = group.len().div_ceil(2);
        for ((x0, y0), (x1, y1)) in group.iter().zip(group.iter().skip(apart)) {
            if x1 > x0 {
                slopes.push((y1 - y0) / (x1 - x0));
            }
        }
    }
    median(&mut slopes)
}

fn about_medians(groups: &Groups, slope: f64) -> Vec<Vec<f64>> {
    groups
        .iter()
        .map(|group| {
            let mut own: Vec<f64> = group.iter().map(|(x, y)| y - slope * x).collect();
            let middle = median(&mut own.clone()).unwrap_or(0.0);
            for residual in &mut own {
                *residual -= middle;
            }
            own
        })
        .collect()
}

fn about_centres(groups: &Groups, centres: &[(f64, f64)], slope: f64) -> Vec<Vec<f64>> {
    groups
        .iter()
        .zip(centres)
        .map(|(group, (x_mean, y_mean))| {
            group
                .iter()
                .map(|(x, y)| (y - y_mean) - slope * (x - x_mean))
                .collect()
        })
        .collect()
}

fn spread(residuals: &[Vec<f64>], resolution: f64) -> f64 {
    let mut sizes: Vec<f64> = residuals.iter().flatten().map(|r| r.abs()).collect();
    let deviation = median(&mut sizes).unwrap_or(0.0) * FROM_MEDIAN;
    // Half a step of the measurement keeps a value that toggles by one step among the good ones.
    deviation
        .max(resolution / 2.0)
        .max(f64::MIN_POSITIVE * 1e20)
}

/// The error of the slope: an M-estimate's asymptotic variance, times what residuals that hang together add.
fn slope_error(
    groups: &Groups,
    centres: &[(f64, f64)],
    residuals: &[Vec<f64>],
    scale: f64,
    parameters: usize,
) -> Option<f64> {
    let (mut slopes, mut squares, mut across) = (0.0, 0.0, 0.0);
    let mut scores = Scores::default();
    let (mut kept, mut total) = (0_usize, 0_usize);
    for ((group, own), (x_mean, _)) in groups.iter().zip(residuals).zip(centres) {
        let mut influences = Vec::with_capacity(group.len());
        let mut weighted = Vec::with_capacity(group.len());
        for ((x, _), residual) in group.iter().zip(own) {
            let u = residual / scale;
            let influence = residual * biweight(u);
            influences.push(influence);
            weighted.push((x - x_mean) * influence);
            slopes += biweight_slope(u);
            squares += influence * influence;
            across += (x - x_mean).powi(2);
            kept += usize::from(biweight(u) > 0.0);
            total += 1;
        }
        scores.plain.push(influences);
        scores.weighted.push(weighted);
    }
    if slopes <= 0.0 || across <= 0.0 || kept <= parameters {
        return None;
    }
    let (count, fitted) = (as_float(kept), as_float(parameters));
    let mean_slope = slopes / as_float(total);
    let variance =
        squares / (count - fitted) * (count / as_float(total)) / (mean_slope.powi(2) * across);
    let (growth, correlation) = scores.growth();
    // As many independent points as a series with this correlation is worth, and fewer because the correlation itself
    // is only estimated (the share is our own, chosen by simulation).
    let sure = if correlation > 0.0 { 0.6 } else { 1.0 };
    let worth = sure * count * (1.0 - correlation) / (1.0 + correlation) - fitted;
    let widened = student(worth.max(1.0)) / 3.0;
    Some((variance * growth).sqrt() * widened)
}

/// ψ of each point, and the same times its distance from the middle: what each adds to the slope.
#[derive(Default)]
struct Scores {
    plain: Vec<Vec<f64>>,
    weighted: Vec<Vec<f64>>,
}

impl Scores {
    /// How many times the variance of independent points the slope's is, and the correlation of neighbours.
    fn growth(&self) -> (f64, f64) {
        let plain = lagged(&self.plain, 0);
        let weighted = lagged(&self.weighted, 0);
        let count = as_float(self.plain.iter().map(Vec::len).sum());
        if plain <= 0.0 || weighted <= 0.0 || count < 8.0 {
            return (1.0, 0.0);
        }
        let found = lagged(&self.plain, 1) / plain;
        // Removing a line makes neighbours look less alike than they are, by about (2 + 4ρ)/n (Kendall 1954, from memory).
        let correlation = (found + (2.0 + 4.0 * found) / count).min(1.0 - 2.0 / count);
        if correlation < 2.0 / count.sqrt() {
            return (1.0, 0.0);
        }
        (
            long_run(&self.weighted, correlation, count) / weighted,
            correlation,
        )
    }
}

/// Σ of the covariances over all lags of a series whose neighbours have this correlation.
fn long_run(series: &[Vec<f64>], correlation: f64, count: f64) -> f64 {
    let whitened: Vec<Vec<f64>> = series
        .iter()
        .map(|own| {
            own.iter()
                .zip(own.iter().skip(1))
                .map(|(before, here)| here - correlation * before)
                .collect()
        })
        .collect();
    let white = lagged(&whitened, 0);
    let left = if white > 0.0 {
        (lagged(&whitened, 1) / white).clamp(-0.9, 0.9)
    } else {
        0.0
    };
    let alpha = 4.0 * left * left / ((1.0 - left).powi(2) * (1.0 + left).powi(2));
    let width = (1.1447 * (alpha * count).cbrt()).min(count / 4.0);
    let mut sum = white;
    let mut lag = 1_usize;
    while as_float(lag) < width + 1.0 {
        sum += 2.0 * (1.0 - as_float(lag) / (width + 1.0)) * lagged(&whitened, lag);
        lag += 1;
    }
    let coloured = sum.max(white * 0.25) / (1.0 - correlation).powi(2);
    coloured.max(lagged(series, 0))
}

fn lagged(series: &[Vec<f64>], lag: usize) -> f64 {
    series
        .iter()
        .map(|own| {
            own.iter()
                .zip(own.iter().skip(lag))
                .map(|(a, b)| a * b)
                .sum::<f64>()
        })
        .sum()
}

/// The error of a slope that rounding can hide: where residuals are much narrower than rounding makes them when it
/// falls evenly (1/√12 of a step), a drift of up to one step over a group may go unseen; evenly likely, so 1/√3 of it.
fn hidden_by_rounding(groups: &Groups, width: f64, resolution: f64) -> f64 {
    if resolution <= 0.0 || width > 0.5 * resolution / 12.0_f64.sqrt() {
        return 0.0;
    }
    let longest = groups
        .iter()
        .filter_map(|group| Some(group.last()?.0 - group.first()?.0))
        .fold(0.0, f64::max);
    if longest > 0.0 {
        resolution / longest / 3.0_f64.sqrt()
    } else {
        0.0
    }
}

/// The median; reorders its input. `None` of nothing.
pub(super) fn median(values: &mut [f64]) -> Option<f64> {
    let middle = values.len() / 2;
    if values.is_empty() {
        return None;
    }
    let even = values.len().is_multiple_of(2);
    let (below, upper, _) = values.select_nth_unstable_by(middle, f64::total_cmp);
    let upper = *upper;
    if !even {
        return Some(upper);
    }
    let lower = below.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    Some(f64::midpoint(lower, upper))
}

fn root_mean_square(values: &[f64]) -> f64 {
    if values.is_empty() {
        return 0.0;
    }
    (values.iter().map(|v| v * v).sum::<f64>() / as_float(values.len())).sqrt()
}

#[expect(
    clippy::cast_precision_loss,
    reason = "a store holds far fewer points than 2⁵³"
)]
pub(super) fn as_float(count: usize) -> f64 {
    count as f64
}

#[cfg(test)]
#[allow(clippy::expect_used, reason = "a test that fails may panic")]
mod tests {
    use super::line;

    /// Seeded numbers from 0 to 1 (the generator of Marsaglia's xorshift family, 2003).
    struct Dice(u64);
    impl Dice {
        fn even(&mut self) -> f64 {
            self.0 ^= self.0 << 13;
            self.0 ^= self.0 >> 7;
            self.0 ^= self.0 << 17;
            #[expect(clippy::cast_precision_loss, reason = "53 bits")]
            let share = (self.0 >> 11) as f64 / (1_u64 << 53) as f64;
            share
        }
        fn normal(&mut self) -> f64 {
            let (a, b) = (self.even().max(1e-300), self.even());
            (-2.0 * a.ln()).sqrt() * (2.0 * std::f64::consts::PI * b).cos()
        }
    }

    /// How often one and three errors cover a slope of 0.7, over 400 seeds.
    fn coverage(points: u32, noise: &mut dyn FnMut(&mut Dice) -> f64) -> (f64, f64) {
        let (mut one, mut three) = (0.0, 0.0);
        for seed in 1..=400_u64 {
            let mut dice = Dice(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15));
            for _ in 0..20 {
                dice.even();
            }
            let points: Vec<(f64, f64)> = (0..points)
                .map(|i| (f64::from(i) * 0.1, 0.07 * f64::from(i) + noise(&mut dice)))
                .collect();
            let fit = line(&[points], 0.0).expect("enough points");
            let off = (fit.slope - 0.7).abs() / fit.error;
            one += f64::from(u8::from(off <= 1.0)) / 400.0;
            three += f64::from(u8::from(off <= 3.0)) / 400.0;
        }
        (one, three)
    }

    fn assert_covers((one, three): (f64, f64), ones: (f64, f64), least: f64, what: &str) {
        assert!(
            one >= ones.0 && one <= ones.1,
            "{what}: one error covers {one}"
        );
        assert!(three >= least, "{what}: three errors cover {three}");
    }

    /// The normal law is the source: 68.27 % within one error, 99.73 % within three; 400 seeds tell them to ±5 % and
    /// ±0.6 % (two standard deviations of a binomial count).
    #[test]
    fn the_error_covers_as_often_as_it_says() {
        assert_covers(
            coverage(40, &mut Dice::normal),
            (0.63, 0.78),
            0.985,
            "forty",
        );
        assert_covers(coverage(400, &mut Dice::normal), (0.63, 0.74), 0.99, "many");
        let mut outliers = |dice: &mut Dice| {
            let wild = dice.even() < 0.1;
            dice.normal() * if wild { 50.0 } else { 1.0 }
        };
        assert_covers(
            coverage(400, &mut outliers),
            (0.62, 0.76),
            0.985,
            "one in ten wild",
        );
    }

    /// Few points, and points that hang together: the error may be too wide, never far too narrow.
    #[test]
    fn the_error_stays_honest_where_it_is_hard() {
        assert_covers(coverage(6, &mut Dice::normal), (0.65, 1.0), 0.965, "six");
        assert_covers(coverage(12, &mut Dice::normal), (0.65, 0.9), 0.98, "twelve");
        let mut last = 0.0;
        let mut swaying = |dice: &mut Dice| {
            last = 0.9 * last + dice.normal();
            last
        };
        assert_covers(coverage(400, &mut swaying), (0.65, 0.9), 0.98, "swaying");
        let mut place = 0.0;
        let mut wandering = |dice: &mut Dice| {
            place += dice.normal();
            place
        };
        assert_covers(
            coverage(400, &mut wandering),
            (0.65, 0.97),
            0.94,
            "wandering",
        );
    }

    /// All values equal because a count is coarse: a drift of up to one count may hide, and the error says so.
    #[test]
    fn rounding_hides_a_drift() {
        let flat: Vec<(f64, f64)> = (0..100).map(|i| (f64::from(i), 3.0)).collect();
        let fit = line(&[flat], 1.0).expect("enough points");
        assert!(fit.slope.abs() < 1e-12);
        // One count in 99 s, evenly likely: 1/99/√3.
        assert!(
            (fit.error - 1.0 / 99.0 / 3.0_f64.sqrt()).abs() < 1e-9,
            "{}",
            fit.error
        );
    }
}
