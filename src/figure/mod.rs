//! Ratio algebra: p : q, lobes, the named curves and their forms, the pose.

pub mod forms;

use crate::exact::{Rational, Turns, ratio, whole, wrap_unit};
use num_integer::Integer;

/// The largest term of a ratio.
pub const MOST_TERM: i64 = 10_000;

/// A figure's p : q, the mirrors' signed speeds in lowest terms; never 0 : 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Ratio {
    p: i32,
    q: i32,
}

impl Ratio {
    /// p : q in lowest terms; `None` for 0 : 0 and for terms past ±[`MOST_TERM`] after reduction.
    #[must_use]
    pub fn new(p: i64, q: i64) -> Option<Self> {
        let divisor = p.gcd(&q);
        if divisor == 0 {
            return None;
        }
        let (p, q) = (p / divisor, q / divisor);
        if p.abs() > MOST_TERM || q.abs() > MOST_TERM {
            return None;
        }
        Some(Self {
            p: i32::try_from(p).ok()?,
            q: i32::try_from(q).ok()?,
        })
    }
    /// The first mirror's term.
    #[must_use]
    pub fn p(self) -> i32 {
        self.p
    }
    /// The second mirror's term.
    #[must_use]
    pub fn q(self) -> i32 {
        self.q
    }
    /// |p − q|: the order of rotational symmetry, which is the number of outer lobes.
    #[must_use]
    pub fn lobes(self) -> u32 {
        self.p.abs_diff(self.q)
    }
    /// Φ = q·θa − p·θb, brought to [0, 1): the one combination of phases that a time shift leaves alone.
    #[must_use]
    pub fn pose_phase(self, a: &Turns, b: &Turns) -> Turns {
        let phi = a.value() * whole(i128::from(self.q)) - b.value() * whole(i128::from(self.p));
        Turns::new(wrap_unit(&phi))
    }
    /// The Φ (in [0, 1)) that points a lobe to `angle`, circular projection: (q − p)·angle;
    /// for p = q the angle itself.
    #[must_use]
    pub fn phase_of_pose(self, angle: &Turns) -> Turns {
        let factor = if self.p == self.q { 1 } else { self.q - self.p };
        Turns::new(wrap_unit(&(angle.value() * whole(i128::from(factor)))))
    }
    /// The angle α in [0, 1/|p−q|) to which a lobe points at Φ = `phase`, circular projection; for p = q Φ itself.
    #[must_use]
    pub fn pose_of_phase(self, phase: &Turns) -> Turns {
        if self.p == self.q {
            return Turns::new(wrap_unit(phase.value()));
        }
        let lobes = i128::from(self.lobes());
        let alpha = phase.value() / whole(i128::from(self.q - self.p));
        let reduced = wrap_unit(&(alpha * whole(lobes)));
        Turns::new(reduced * ratio(1, lobes))
    }
}

impl std::fmt::Display for Ratio {
    fn fmt(&self, out: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(out, "{}:{}", self.p, self.q)
    }
}

/// How a figure was written: what it is called, and which true shape it asks for.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Form {
    /// `ratio P:Q` or bare `P:Q`.
    Ratio,
    /// `rose N/D`.
    Rose,
    /// `ring R wheel W`, R/W as an exact rational.
    Ring(Rational),
    /// `ring R outside wheel W`, R/W as an exact rational.
    RingOutside(Rational),
    /// `star N/M`.
    Star,
    /// A built-in name such as `deltoid`.
    Named(NamedCurve),
}

/// The curves that have a name of their own.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum NamedCurve {
    /// 1:0
    Circle,
    /// 1:−1
    Line,
    /// 1:−2
    Deltoid,
    /// 1:−3
    Astroid,
    /// 1:2
    Cardioid,
    /// 1:3
    Nephroid,
    /// 2:−1
    Trifolium,
    /// 3:−1
    Quadrifolium,
}

impl NamedCurve {
    /// Every named curve, in the order of the reference.
    pub const ALL: [NamedCurve; 8] = [
        NamedCurve::Circle,
        NamedCurve::Line,
        NamedCurve::Deltoid,
        NamedCurve::Astroid,
        NamedCurve::Cardioid,
        NamedCurve::Nephroid,
        NamedCurve::Trifolium,
        NamedCurve::Quadrifolium,
    ];
    /// The word a show file uses.
    #[must_use]
    pub fn word(self) -> &'static str {
        match self {
            NamedCurve::Circle => "circle",
            NamedCurve::Line => "line",
            NamedCurve::Deltoid => "deltoid",
            NamedCurve::Astroid => "astroid",
            NamedCurve::Cardioid => "cardioid",
            NamedCurve::Nephroid => "nephroid",
            NamedCurve::Trifolium => "trifolium",
            NamedCurve::Quadrifolium => "quadrifolium",
        }
    }
    /// Its p : q.
    #[must_use]
    pub fn ratio(self) -> Ratio {
        let (p, q) = match self {
            NamedCurve::Circle => (1, 0),
            NamedCurve::Line => (1, -1),
            NamedCurve::Deltoid => (1, -2),
            NamedCurve::Astroid => (1, -3),
            NamedCurve::Cardioid => (1, 2),
            NamedCurve::Nephroid => (1, 3),
            NamedCurve::Trifolium => (2, -1),
            NamedCurve::Quadrifolium => (3, -1),
        };
        Ratio { p, q }
    }
}

/// A figure as a cue shows it.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Figure {
    /// As the cue writes it: `anemone`, `rose 5/3`, `2:-3`.
    pub written: String,
    /// The form behind the name.
    pub form: Form,
    /// p : q in lowest terms.
    pub ratio: Ratio,
}
