//! What the eye collects: how close the curves are to the true way, how long they are, how bright.

use crate::show::planned;
use kurbo::{ParamCurve, ParamCurveArclen};
use phasewright::optics::Optics;
use phasewright::plan::LegKind;
use phasewright::preview::light::Piece;
use phasewright::preview::still::Scenery;
use phasewright::preview::tile::Style;

const RIG: &str = include_str!("../../shows/mill-tower.rig");

/// First order, with tilts that give the reaches Ra : Rb = `proportion` : 1.
fn paraxial(proportion: f64) -> String {
    let b = ((8_f64.to_radians().tan() * 4.03 / (4.0 * proportion)).atan() / 2.0).to_degrees();
    RIG.replace("incidence     a 10 deg, b 10 deg", "").replace(
        "  draws clockwise ",
        &format!("  tilt {b:.9} deg\n  draws clockwise "),
    )
}

fn figure(cue: &str, rig: &str) -> (Vec<Piece>, Optics) {
    let show = format!("show \"x\"\nrig \"x.rig\"\ncue {cue} hold 5 s\nloop 20 s\n")
        .replace("loop 20 s", "loop morph 20 s");
    let (plan, _) = planned(&show, rig);
    let optics = Optics::of(&plan.rig);
    let hold = plan
        .legs
        .iter()
        .position(|leg| leg.kind == LegKind::Hold)
        .unwrap();
    let style = Style::new(&optics, 400.0);
    let pieces = Scenery::of(&plan, hold)
        .unwrap()
        .figure(&optics, style.grain());
    (pieces, optics)
}

/// Lengths of the cycloids in units of the rolling circle: deltoid 16, astroid 24, cardioid 16, nephroid 24, the five-pointed
/// hypocycloid 48 (checked numerically; the Encyclopedia of Mathematics gives 16a for the cardioid). Roses with a = 1: 9.68844822 for
/// k = 2 and so on (closed form with the elliptic integral).
#[test]
fn lengths_are_the_published_ones() {
    let cases = [
        ("deltoid", 2.0, 16.0),
        ("astroid", 3.0, 24.0),
        ("cardioid", 2.0, 16.0),
        ("nephroid", 3.0, 24.0),
        ("ring 5 wheel 2", 1.5, 24.0),
        // ρ = cos kφ with a = 1 is Ra = Rb = ½: in units of Rb twice as long.
        ("1:-3", 1.0, 2.0 * 9.688_448_22),
        ("1:-2", 1.0, 2.0 * 6.682_446_61),
        ("2:-3", 1.0, 2.0 * 10.505_022_3),
    ];
    for (cue, proportion, length) in cases {
        let (pieces, optics) = figure(cue, &paraxial(proportion));
        let reach = optics.reach();
        assert!((reach.a / reach.b - proportion).abs() < 1e-6);
        let sum: f64 = pieces.iter().map(|piece| piece.curve.arclen(1e-9)).sum();
        let got = sum / reach.b;
        // The curves may be a quarter of a line beside the way, back and forth, but not longer or shorter than by a little.
        assert!(
            (got / length - 1.0).abs() < 4e-3,
            "{cue}: {got}, published {length}"
        );
    }
}

/// Nowhere is a drawn curve further from the true way than a quarter of the line's width, figure or transition.
#[test]
fn curves_follow_the_way() {
    let show = include_str!("../../shows/quillmere-evening.show");
    let (plan, _) = planned(show, RIG);
    let optics = Optics::of(&plan.rig);
    let style = Style::new(&optics, 120.0);
    let quarter = style.width / style.scale / 4.0;
    let (mut count, mut worst) = (0_usize, 0.0_f64);
    for index in 0..plan.legs.len() {
        let scenery = Scenery::of(&plan, index).unwrap();
        for at in scenery.moments(5) {
            for piece in scenery.still(&optics, at, style.grain()).pieces {
                let (from, to) = piece.time;
                for step in 0..=10 {
                    let share = f64::from(step) / 10.0;
                    let spot = optics.spot(scenery.path.phases(from + (to - from) * share));
                    worst = worst.max((piece.curve.eval(share) - spot).hypot());
                }
                count += 1;
            }
        }
    }
    assert!(worst <= quarter, "{worst} of {quarter}");
    assert!(worst > 0.0 && count > 1000, "{count} pieces");
}

/// A rose of nine lobes in few pieces: no thousands of line segments.
#[test]
fn curves_are_few() {
    let (pieces, _) = figure("5:-4", RIG);
    assert!(pieces.len() < 220, "{}", pieces.len());
    let (pieces, _) = figure("circle", RIG);
    assert!(pieces.len() < 10, "{}", pieces.len());
}

/// A figure closes, and a third of it turned by a third of a turn is the next third (deltoid); what is collected in a
/// transition does not close.
#[test]
fn holds_close_and_transitions_do_not() {
    let (pieces, optics) = figure("deltoid", &paraxial(2.0));
    let gap = pieces.last().unwrap().curve.p3 - pieces[0].curve.p0;
    assert!(gap.hypot() < 1e-6 * optics.extent());
    let spot = |share: f64| {
        let last = pieces.last().unwrap().time.1;
        let t = (share % 1.0) * last;
        let piece = pieces
            .iter()
            .find(|piece| t >= piece.time.0 && t <= piece.time.1)
            .unwrap();
        let (from, to) = piece.time;
        piece.curve.eval((t - from) / (to - from))
    };
    for step in 0..60 {
        let share = f64::from(step) / 60.0 * 0.999;
        let (one, two) = (spot(share), spot(share + 1.0 / 3.0));
        // One third of the time turns mirror a by a third, and the figure with it.
        let (sin, cos) = (std::f64::consts::TAU / 3.0).sin_cos();
        let turned = kurbo::Point::new(one.x * cos - one.y * sin, one.x * sin + one.y * cos);
        assert!((turned - two).hypot() < 0.005 * optics.extent(), "{share}");
    }
    let show = "show \"x\"\nrig \"x.rig\"\nusual hold 5 s\ncue deltoid\ncue 5:-4 morph 6 s\nloop morph 9 s\n";
    let (plan, _) = planned(show, RIG);
    let optics = Optics::of(&plan.rig);
    let morph = plan
        .legs
        .iter()
        .position(|leg| leg.kind == LegKind::Morph)
        .unwrap();
    let scenery = Scenery::of(&plan, morph).unwrap();
    let style = Style::new(&optics, 120.0);
    let open = scenery.moments(9)[1..8]
        .iter()
        .filter(|at| {
            let pieces = scenery.still(&optics, **at, style.grain()).pieces;
            (pieces.last().unwrap().curve.p3 - pieces[0].curve.p0).hypot() > 0.05 * optics.extent()
        })
        .count();
    assert!(open >= 5, "{open} of 7 are open");
}

/// A circle is equally bright all round; a line is brightest at its ends, where the spot turns.
#[test]
fn turning_points_shine() {
    let (pieces, _) = figure("circle", &paraxial(1.0));
    assert!(pieces.iter().all(|piece| piece.level == pieces[0].level));
    let (pieces, optics) = figure("line", &paraxial(1.0));
    let level = |far: bool| {
        pieces
            .iter()
            .filter(|piece| {
                let middle = piece.curve.eval(0.5).to_vec2().hypot() / optics.extent();
                if far { middle > 0.9 } else { middle < 0.7 }
            })
            .map(|piece| piece.level)
            .max()
            .unwrap()
    };
    assert!(
        level(true) > level(false),
        "{} {}",
        level(true),
        level(false)
    );
}
