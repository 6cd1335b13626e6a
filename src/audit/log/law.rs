//! The auditor's laws, read off fast: a log asks for the phase millions of times, at moments between ticks.
//!
//! Values and slopes of the law's integral S at evenly spaced nodes (its slope is s), from the evaluator that tables are
//! audited with, and the cubic between them. With steps of h = 1/1024 the error is below h⁴/384·max|s‴|: 1.5·10⁻¹³ for the
//! quintic law, and far below what any log resolves for the most skewed one.

use crate::audit::laws::Curve;
use crate::motion::Shape;
use std::sync::Arc;

const STEPS: u32 = 1024;
/// Tables kept at most, 16 KiB each; a show with more different shapes has the rest evaluated on the spot.
const MOST_TABLES: usize = 2048;

/// A shape ready to be read at any u.
#[derive(Clone, Debug)]
pub(super) enum Law {
    /// The speed stays.
    Hold,
    /// S and s at u = 0, 1/[`STEPS`], …, 1.
    Table(Arc<[(f64, f64)]>),
    /// Without a table.
    Direct(Arc<Curve>),
}

/// The tables of a plan's shapes; each is made once.
#[derive(Default)]
pub(super) struct Laws {
    known: Vec<(Shape, Law)>,
}

impl Laws {
    /// The law behind a shape.
    pub(super) fn of(&mut self, shape: &Shape) -> Law {
        let Some(curve) = Curve::new(shape) else {
            return Law::Hold;
        };
        // Shapes come in runs, so the newest is likely the one.
        if let Some((_, law)) = self.known.iter().rev().find(|(known, _)| known == shape) {
            return law.clone();
        }
        if self.known.len() >= MOST_TABLES {
            return Law::Direct(Arc::new(curve));
        }
        let nodes: Arc<[(f64, f64)]> = (0..=STEPS)
            .map(|node| values(&curve, u64::from(node), u64::from(STEPS)))
            .collect();
        let law = Law::Table(nodes);
        self.known.push((shape.clone(), law.clone()));
        law
    }
}

/// S and s, n of ticks.
fn values(curve: &Curve, n: u64, ticks: u64) -> (f64, f64) {
    let value = curve.at(n, ticks);
    (value.gain.leading(), value.speed.leading())
}

impl Law {
    /// s(u) and S(u), u from 0 to 1.
    pub(super) fn at(&self, u: f64) -> (f64, f64) {
        match self {
            Self::Hold => (0.0, 0.0),
            Self::Direct(curve) => {
                const FINE: u64 = 1 << 50;
                #[expect(
                    clippy::cast_possible_truncation,
                    clippy::cast_sign_loss,
                    clippy::cast_precision_loss,
                    reason = "u is in [0, 1]"
                )]
                let n = (u.clamp(0.0, 1.0) * FINE as f64) as u64;
                let (gain, share) = values(curve, n, FINE);
                (share, gain)
            }
            Self::Table(nodes) => {
                let place = u.clamp(0.0, 1.0) * f64::from(STEPS);
                #[expect(
                    clippy::cast_possible_truncation,
                    clippy::cast_sign_loss,
                    reason = "between 0 and STEPS"
                )]
                let node = (place as usize).min(STEPS as usize - 1);
                let (Some((gain0, share0)), Some((gain1, share1))) =
                    (nodes.get(node), nodes.get(node + 1))
                else {
                    return (0.0, 0.0);
                };
                #[expect(clippy::cast_precision_loss, reason = "at most 1024")]
                let w = place - node as f64;
                cubic(w, (*gain0, *share0), (*gain1, *share1))
            }
        }
    }
}

/// Slope and value of the cubic with these values and slopes at both ends of a step, at the share w of it.
fn cubic(w: f64, (x0, v0): (f64, f64), (x1, v1): (f64, f64)) -> (f64, f64) {
    let h = 1.0 / f64::from(STEPS);
    let rise = x1 - x0;
    // x = x0 + w·(h·v0 + w·(second + w·third)).
    let second = 3.0 * rise - h * (2.0 * v0 + v1);
    let third = h * (v0 + v1) - 2.0 * rise;
    (
        v0 + w * (2.0 * second + 3.0 * w * third) / h,
        x0 + w * (h * v0 + w * (second + w * third)),
    )
}

#[cfg(test)]
mod tests {
    use super::Laws;
    use crate::exact::ratio;
    use crate::motion::{Law as Written, LawKind, Shape};

    /// Tolerance: h⁴/384·max|s‴| = 1.42·10⁻¹³ with the quintic's 60, and rounding. Closed forms are the source: quintic S = 2.5u⁴ − 3u⁵ + u⁶, cycloidal S = u²/2 − (1 − cos 2πu)/4π².
    #[test]
    fn between_the_nodes_the_closed_forms_hold() {
        let mut laws = Laws::default();
        let mut law = |kind| {
            laws.of(&Shape::Law(Written {
                kind,
                skew: ratio(1, 2),
            }))
        };
        let (quintic, cycloidal) = (law(LawKind::Quintic), law(LawKind::Cycloidal));
        for step in 0..=997_i32 {
            let u = f64::from(step) / 997.0;
            let (share, gain) = quintic.at(u);
            assert!((gain - u.powi(4) * (2.5 + u * (u - 3.0))).abs() < 2e-13);
            assert!((share - u.powi(3) * (10.0 + u * (6.0 * u - 15.0))).abs() < 1e-9);
            let turn = 2.0 * std::f64::consts::PI;
            let (_, gain) = cycloidal.at(u);
            let want = u * u / 2.0 - (1.0 - (turn * u).cos()) / (turn * turn);
            assert!((gain - want).abs() < 2e-13);
        }
    }
}
