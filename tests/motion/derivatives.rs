//! Slopes and curvatures in closed form: published peaks, joints, finite differences, and agreement with the rows.

use crate::support::{assert_close, bezier, decimal, kind, plain, shapes, unit_move};
use phasewright::exact::fixed::phase_value;
use phasewright::exact::{ratio, to_f64, whole};
use phasewright::motion::derivatives::{Piece, pieces, slope_is_finite, steps};
use phasewright::motion::{LawKind, Shape};
use std::f64::consts::PI;

/// x at `part` of the piece's own range.
fn at(piece: &Piece, part: f64) -> f64 {
    piece.from + (piece.to - piece.from) * part
}

/// The largest |value| over 4001 points of every piece, ends included.
fn peak(shape: &Shape, value: impl Fn(&Piece, f64) -> f64) -> f64 {
    let pieces = pieces(shape);
    let points = pieces
        .iter()
        .flat_map(|piece| (0..=4000).map(move |k| (piece, at(piece, f64::from(k) / 4000.0))));
    points
        .map(|(piece, x)| value(piece, x).abs())
        .fold(0.0, f64::max)
}

/// Cv, Ca, Cj: Rothbart, *Cam Design Handbook*, 2004, App. B (factors seen in extracts); Norton, *Design of Machinery*,
/// ch. 8 (from memory), where the printed Ca of the harmonic (4.945), quintic (5.777) and septic (7.526) differ from the
/// exact forms used here.
#[test]
fn peaks_are_the_published_factors() {
    let five = 5.0_f64.sqrt();
    let laws = [
        ("harmonic", PI / 2.0, PI * PI / 2.0, PI.powi(3) / 2.0),
        ("cubic", 1.5, 6.0, 12.0),
        (
            "modified-sine",
            4.0 * PI / (4.0 + PI),
            4.0 * PI * PI / (4.0 + PI),
            16.0 * PI.powi(3) / (4.0 + PI),
        ),
        ("quintic", 1.875, 10.0 / 3.0_f64.sqrt(), 60.0),
        (
            "modified-trapezoid",
            2.0,
            8.0 * PI / (2.0 + PI),
            32.0 * PI * PI / (2.0 + PI),
        ),
        ("cycloidal", 2.0, 2.0 * PI, 4.0 * PI * PI),
        ("septic", 2.1875, 84.0 * five / 25.0, 52.5),
    ];
    for (name, cv, ca, cj) in laws {
        let shape = plain(kind(name));
        assert_close(
            peak(&shape, |piece, x| piece.ds(x)),
            cv,
            1e-12 * cv,
            &format!("{name} Cv"),
        );
        // 4000 points in half a morph miss a smooth peak of fourth-order size 10³ by at most 10³/2·(1/16000)².
        assert_close(
            peak(&shape, |piece, x| piece.dds(x)),
            ca,
            2e-6 * ca,
            &format!("{name} Ca"),
        );
        // The third derivative as a central difference inside each piece; h²/6·s⁗′ and the sampling stay below 10⁻³.
        let third = peak(&shape, |piece, x| {
            let h = 1e-5;
            let x = x.clamp(piece.from + h, piece.to - h);
            (piece.dds(x + h) - piece.dds(x - h)) / (piece.u(x + h) - piece.u(x - h))
        });
        assert_close(third, cj, 1e-3 * cj, &format!("{name} Cj"));
    }
}

/// The published slope at a quarter, ten digits; same sources.
#[test]
fn slopes_at_a_quarter_are_the_published_ones() {
    let laws = [
        ("harmonic", 1.110720735),
        ("cubic", 1.125),
        ("modified-sine", 1.099752116),
        ("quintic", 1.0546875),
        ("modified-trapezoid", 1.0),
        ("cycloidal", 1.0),
        ("septic", 0.9228515625),
    ];
    for (name, want) in laws {
        let pieces = pieces(&plain(kind(name)));
        let piece = pieces.iter().find(|piece| piece.to >= 0.25).unwrap();
        assert_close(piece.ds(0.25), want, 0.6e-9, &format!("{name} s'(1/4)"));
    }
}

/// The s-curve: Cv = 1/(1−r), Ca = 1/(r(1−r)): the trapezoid of acceleration, common practice.
#[test]
fn s_curves_have_their_peaks() {
    for (n, d) in [(1, 2), (1, 3), (1, 10), (1, 1000)] {
        let (shape, r) = (Shape::Scurve(ratio(n, d)), to_f64(&ratio(n, d)));
        assert_close(
            peak(&shape, |piece, x| piece.ds(x)),
            1.0 / (1.0 - r),
            1e-12,
            "Cv",
        );
        let ca = 1.0 / (r * (1.0 - r));
        assert_close(peak(&shape, |piece, x| piece.dds(x)), ca, 1e-12 * ca, "Ca");
    }
}

#[test]
fn pieces_cover_the_morph_and_join() {
    for (name, shape) in shapes() {
        let pieces = pieces(&shape);
        let (first, last) = (pieces.first().unwrap(), pieces.last().unwrap());
        assert_close(
            first.u(first.from),
            0.0,
            0.0,
            &format!("{name} starts at 0"),
        );
        assert_close(last.u(last.to), 1.0, 1e-15, &format!("{name} ends at 1"));
        assert_close(first.s(first.from), 0.0, 1e-15, &format!("{name} s(0)"));
        assert_close(last.s(last.to), 1.0, 1e-14, &format!("{name} s(1)"));
        for pair in pieces.windows(2) {
            let (one, two) = (&pair[0], &pair[1]);
            assert_close(
                one.u(one.to),
                two.u(two.from),
                1e-15,
                &format!("{name} has a gap"),
            );
            assert_close(
                one.s(one.to),
                two.s(two.from),
                1e-14,
                &format!("{name} jumps at {}", one.to),
            );
            assert_close(
                one.ds(one.to),
                two.ds(two.from),
                1e-12,
                &format!("{name} bends at {}", one.to),
            );
        }
    }
}

#[test]
fn derivatives_agree_with_finite_differences() {
    for (name, shape) in shapes() {
        for piece in pieces(&shape) {
            // Differences of u near 1 need more than f64 has on a stretch shorter than that.
            if piece.u(piece.to) - piece.u(piece.from) < 1e-6 {
                continue;
            }
            for part in [0.13, 0.5, 0.77, 0.9] {
                let h = 1e-5 * (piece.to - piece.from);
                let (low, high) = (at(&piece, part) - h, at(&piece, part) + h);
                let run = piece.u(high) - piece.u(low);
                let middle = at(&piece, part);
                // A quotient lies between the derivatives around it: off by their second difference, and by rounding.
                let slope = (piece.s(high) - piece.s(low)) / run;
                let noise = 1e-14 * (1.0 + piece.s(high).abs()) / run;
                let bend = (piece.ds(low) - 2.0 * piece.ds(middle) + piece.ds(high)).abs();
                let tolerance = noise + bend + 1e-9 * (1.0 + piece.ds(middle).abs());
                assert_close(
                    piece.ds(middle),
                    slope,
                    tolerance,
                    &format!("{name} s' at {middle}"),
                );
                let curvature = (piece.ds(high) - piece.ds(low)) / run;
                let noise = 1e-14 * (1.0 + piece.ds(high).abs()) / run;
                let bend = (piece.dds(low) - 2.0 * piece.dds(middle) + piece.dds(high)).abs();
                let tolerance = noise + bend + 1e-8 * (1.0 + piece.dds(middle).abs());
                assert_close(
                    piece.dds(middle),
                    curvature,
                    tolerance,
                    &format!("{name} s\" at {middle}"),
                );
            }
        }
    }
}

#[test]
fn checks_and_rows_see_the_same_law() {
    for (name, shape) in shapes() {
        if matches!(&shape, Shape::Law(law) if matches!(law.kind, LawKind::Bezier { .. })) {
            continue;
        }
        let rows = unit_move(&shape, 1000);
        let pieces = pieces(&shape);
        for n in 0..=1000_u32 {
            let u = f64::from(n) / 1000.0;
            let piece = pieces.iter().find(|piece| u <= piece.u(piece.to)).unwrap();
            // x grows in proportion to u within a piece.
            let (low, high) = (piece.u(piece.from), piece.u(piece.to));
            let x = at(piece, (u - low) / (high - low));
            let want = to_f64(&phase_value(rows.speed(n.into())));
            assert_close(piece.s(x), want, 1e-14, &format!("{name} s({u})"));
        }
    }
}

#[test]
fn a_bezier_read_by_its_parameter_is_the_law_of_the_rows() {
    for (name, shape) in shapes() {
        if !matches!(&shape, Shape::Law(law) if matches!(law.kind, LawKind::Bezier { .. })) {
            continue;
        }
        // The rows' s at the two ticks around u(x) must hold s(x), up to the slope over a tick.
        let rows = unit_move(&shape, 1 << 30);
        for piece in pieces(&shape) {
            for k in 1..40 {
                let x = at(&piece, f64::from(k) / 40.0);
                #[expect(
                    clippy::cast_possible_truncation,
                    clippy::cast_sign_loss,
                    reason = "u is in [0, 1]"
                )]
                let tick = (piece.u(x) * 2.0_f64.powi(30)) as u64;
                let want = to_f64(&phase_value(rows.speed(tick)));
                let tolerance = (1.0 + piece.ds(x).abs()) * 2.0_f64.powi(-29);
                assert_close(piece.s(x), want, tolerance, &format!("{name} at {x}"));
            }
        }
    }
}

#[test]
fn laws_that_no_jerk_limit_can_hold_are_known() {
    let cases = [
        (Shape::Hold, false),
        (plain(LawKind::Linear), true),
        (plain(LawKind::Cubic), false),
        (plain(LawKind::Harmonic), false),
        (Shape::Scurve(ratio(0, 1)), true),
        (Shape::Scurve(ratio(1, 1_000_000)), false),
        (Shape::Scurve(ratio(1, 2)), false),
    ];
    for (shape, want) in cases {
        assert_eq!(steps(&shape), want, "{shape:?}");
    }
}

/// x1, y1, x2, y2, whether the slope is finite, whether a jerk limit is hopeless.
#[test]
fn beziers_are_sorted_by_their_ends() {
    let cases = [
        // ease-in-out leaves and arrives level; ease arrives level only.
        ("0.42", "0", "0.58", "1", true, false),
        ("0.25", "0.1", "0.25", "1", true, true),
        ("0.25", "0", "0.25", "0.9", true, true),
        // A first arm that stands upright, one that vanishes, one that vanishes under an upright second.
        ("0", "0.1", "0.5", "1", false, true),
        ("0", "0", "0.58", "1", true, true),
        ("0", "0", "0.58", "0", true, true),
        ("0", "0", "0", "1", false, true),
        ("0.3", "0", "1", "0.5", false, true),
        ("0.42", "0", "1", "1", true, true),
        ("1", "0", "1", "1", false, true),
        // Upright in the middle.
        ("1", "0", "0", "1", false, true),
        ("1", "0.5", "0", "-0.5", false, true),
        ("1", "0", "0.000000001", "1", true, false),
        // Straight lines in disguise.
        ("0.3", "0.3", "0.6", "0.6", true, true),
        ("0", "0", "1", "1", true, true),
        ("1", "1", "0", "0", true, true),
        ("0", "0", "0", "0", true, true),
    ];
    for (x1, y1, x2, y2, finite, hopeless) in cases {
        let shape = bezier(decimal(x1), decimal(y1), decimal(x2), decimal(y2));
        assert_eq!(
            slope_is_finite(&shape),
            finite,
            "slope of {x1} {y1} {x2} {y2}"
        );
        assert_eq!(steps(&shape), hopeless, "steps of {x1} {y1} {x2} {y2}");
        // The slope at both ends and in the middle says the same; rounding may leave a vertical one at 10¹⁶.
        let piece = &pieces(&shape)[0];
        let slopes = [0.0, 1e-9, 0.5, 1.0 - 1e-9, 1.0].map(|x| piece.ds(x));
        assert_eq!(
            slopes.iter().all(|slope| slope.abs() < 1e12),
            finite,
            "{slopes:?} of {x1} {y1} {x2} {y2}"
        );
    }
}

#[test]
fn a_vanishing_arm_has_the_slope_of_the_next_point() {
    // cubic-bezier(0, 0, x2, y2) starts towards (x2, y2): CSS Easing Functions Level 1, 2.3 (from memory).
    let shape = bezier(whole(0), whole(0), ratio(58, 100), whole(1));
    let piece = &pieces(&shape)[0];
    assert_close(piece.ds(0.0), 1.0 / 0.58, 1e-15, "slope at the start");
    let shape = bezier(ratio(42, 100), whole(0), whole(1), whole(1));
    let piece = &pieces(&shape)[0];
    assert_close(piece.ds(1.0), 1.0 / 0.58, 1e-14, "slope at the end");
}
