//! Tables as they are written are clean: two evaluators that share nothing come to the same digits.

use crate::plans::{Maker, evening, law, rig, rotor, there_and_back};
use crate::{audited, table};
use phasewright::audit::Auditor;
use phasewright::exact::{Rational, ratio, whole};
use phasewright::motion::{Law, LawKind};
use phasewright::plan::{LegKind, Plan};
use phasewright::setpoint::{Form, table_id};

fn bezier(x1: Rational, y1: Rational, x2: Rational, y2: Rational) -> LawKind {
    LawKind::Bezier { x1, y1, x2, y2 }
}

fn clean(plan: &Plan) {
    for form in [Form::Csv, Form::Json] {
        let report = audited(plan, form, &table(plan, form));
        assert!(report.is_clean(), "{form:?}: {:#?}", report.problems);
        assert_eq!(report.rows, plan.rows());
    }
}

#[test]
fn every_law() {
    use LawKind::{
        Cubic, Cycloidal, Harmonic, Linear, ModifiedSine, ModifiedTrapezoid, Quintic, Scurve,
        Septic,
    };
    clean(&evening([Quintic, Septic, Cubic, Linear]));
    clean(&evening([
        Harmonic,
        Cycloidal,
        ModifiedSine,
        ModifiedTrapezoid,
    ]));
    clean(&there_and_back(ModifiedSine, ModifiedTrapezoid));
    clean(&there_and_back(Cycloidal, Harmonic));
    clean(&evening([Scurve, Scurve, Scurve, Scurve]));
    clean(&there_and_back(Scurve, Scurve));
    // The four keywords of CSS Easing Functions Level 1, and the straight line with a point where x′ and y′ vanish.
    let ease = bezier(ratio(1, 4), ratio(1, 10), ratio(1, 4), whole(1));
    let ease_in = bezier(ratio(42, 100), whole(0), whole(1), whole(1));
    let ease_out = bezier(whole(0), whole(0), ratio(58, 100), whole(1));
    let ease_in_out = bezier(ratio(42, 100), whole(0), ratio(58, 100), whole(1));
    clean(&evening([ease, ease_in, ease_out, ease_in_out]));
    let identity = bezier(whole(1), whole(1), whole(0), whole(0));
    let over = bezier(ratio(3, 10), ratio(-1, 2), ratio(7, 10), ratio(3, 2));
    clean(&evening([identity.clone(), identity, over, Quintic]));
}

#[test]
fn every_skewed_law() {
    use LawKind::{Cubic, Cycloidal, Harmonic, ModifiedSine, ModifiedTrapezoid, Quintic, Septic};
    let kinds = [
        Cubic,
        Quintic,
        Septic,
        Harmonic,
        Cycloidal,
        ModifiedSine,
        ModifiedTrapezoid,
    ];
    for (kind, percent) in kinds.into_iter().zip([5, 30, 95, 41, 50, 72, 10]) {
        let skewed = Law {
            kind,
            skew: ratio(percent, 100),
        };
        let a = rotor((1, 1), 1, 4096);
        let b = rotor((5, 3), 1, 777);
        let mut show = Maker::new(rig(ratio(1, 1000), whole(0), a, b), law(Quintic));
        let one = show.cue(3, -2, ratio(47, 3), skewed.clone());
        let two = show.cue(1, 4, ratio(25, 2), skewed.clone());
        show.leg(LegKind::RunUp, 0, one, 900, 0);
        show.leg(LegKind::Hold, 1, one, 50, 255);
        show.leg(LegKind::Morph, 2, two, 1234, 7);
        show.leg(LegKind::Hold, 2, two, 50, 255);
        clean(&show.looped(3, 800, skewed));
    }
}

#[test]
fn long_holds_and_awkward_denominators() {
    // 30 h away from the start, and a speed whose denominator passes 64 bits: 1/(10⁹+7) Hz steps at a 1/1024 s tick.
    let a = rotor((7, 3), 1, 16_777_216);
    let b = rotor((1, 9), -1, 3);
    let mut show = Maker::new(rig(ratio(1, 1024), whole(0), a, b), law(LawKind::Quintic));
    let fine = ratio(123_456_789_012_345, 1_000_000_007_000_003) + ratio(1, 999_999_999_989);
    let one = show.cue(17, -9, fine, law(LawKind::Cubic));
    show.leg(LegKind::RunUp, 0, one, 3000, 0);
    show.leg(LegKind::Hold, 1, one, 20_000, 255);
    clean(&show.looped(2, 1000, law(LawKind::Septic)));
}

#[test]
fn bytes_may_come_in_any_pieces() {
    let plan = evening([
        LawKind::Quintic,
        LawKind::Septic,
        LawKind::Cubic,
        LawKind::Linear,
    ]);
    for form in [Form::Csv, Form::Json] {
        let table = table(&plan, form);
        for size in [1, 7, 4096] {
            let mut auditor = Auditor::new(&plan, form, &table_id(&plan));
            for piece in table.chunks(size) {
                auditor.push(piece);
            }
            let report = auditor.finish();
            assert!(report.is_clean(), "{size}: {:#?}", report.problems);
        }
    }
}

#[test]
fn stretches_join() {
    // More than a batch of bytes for two threads, so that rows are checked in several rounds.
    let a = rotor((1, 1), 1, 4096);
    let mut show = Maker::new(
        rig(ratio(1, 1000), whole(0), a.clone(), a),
        law(LawKind::Quintic),
    );
    let one = show.cue(3, -2, ratio(47, 3), law(LawKind::Cubic));
    show.leg(LegKind::RunUp, 0, one, 1000, 0);
    show.leg(LegKind::Hold, 1, one, 30_000, 255);
    let plan = show.looped(2, 1000, law(LawKind::Quintic));
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(1)
        .build()
        .unwrap();
    pool.install(|| clean(&plan));
}
