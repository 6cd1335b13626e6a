use super::RIG;
use super::common::{assert_close, brief, errors, plan_of};
use phasewright::exact::Ticks;
use phasewright::plan::{LegKind, Plan};
use phasewright::rig::RotorId;

fn morph_ticks(plan: &Plan) -> Vec<u64> {
    plan.legs
        .iter()
        .filter(|leg| leg.kind == LegKind::Morph)
        .map(|leg| leg.ticks.0)
        .collect()
}

fn show(law: &str) -> String {
    format!(
        "usual hold 5 s\ncue 1:-2 lead 9000 rpm\ncue 2:-3 lead 9000 rpm morph fastest {law}\ncue 1:-2 lead 6000 rpm morph fastest {law} skew 30 %\nrun-down fastest\n"
    )
}

/// The answer does not depend on where the rotors happen to be: the same passage takes the same time at every play.
#[test]
fn fastest_is_the_same_for_every_play_of_a_cue() {
    let text = "usual hold 1.234 s morph fastest\ncue 1:-2\nrepeat 5 {\n cue 3:-4 spin 5 deg/s\n cue 4:-3\n}\nrun-down fastest\n";
    let (plan, findings) = plan_of(RIG, text);
    assert!(errors(&findings).is_empty(), "{:#?}", brief(&findings));
    let ticks = morph_ticks(&plan);
    for pair in ticks[1..].chunks_exact(2) {
        assert_eq!(pair, &ticks[1..3]);
    }
}

/// One tick less breaks a limit for some landing; checked by dense samples of the closed forms, not by the planner.
#[test]
fn one_tick_less_than_fastest_breaks_a_limit() {
    for law in ["quintic", "septic", "cubic"] {
        let (plan, findings) = plan_of(RIG, &show(law));
        assert!(errors(&findings).is_empty(), "{:#?}", brief(&findings));
        let rig = RIG.replace("jerk 40000 rpm/s^2", "jerk 39999 rpm/s^2");
        drop(rig);
        for (index, leg) in plan
            .legs
            .iter()
            .enumerate()
            .filter(|(_, leg)| leg.kind == LegKind::Morph)
        {
            let worst = |ticks: Ticks| {
                RotorId::BOTH
                    .into_iter()
                    .map(|id| needed(&plan, index, id, ticks))
                    .fold(0.0, f64::max)
            };
            assert!(
                worst(leg.ticks) <= 1.0 + 1e-7,
                "{law} cue {}: {}",
                leg.cue,
                worst(leg.ticks)
            );
            let less = worst(Ticks(leg.ticks.0 - 1));
            assert!(less > 1.0, "{law} cue {}: {less}", leg.cue);
        }
    }
}

/// The largest share of any limit with the worst landing of either sign, from samples.
fn needed(plan: &Plan, index: usize, id: RotorId, ticks: Ticks) -> f64 {
    let one = plan.move_of(index, id).unwrap();
    let rotor = plan.rig.rotor(id);
    let speeds = plan.speeds_of(&plan.legs[index]).unwrap();
    let worst = speeds.shares.split.of(id) * rotor.motor_per_mirror();
    let worst = phasewright::exact::to_f64(&worst).abs() / 2.0;
    let time = ticks.time(plan.tick()).to_f64();
    let (from, change) = (one.from.to_f64(), (&one.to - &one.from).to_f64());
    let transition = plan.transition(&plan.legs[index]).unwrap();
    let skew = phasewright::exact::to_f64(&transition.law.skew);
    let steps = 20_000;
    let mut share: f64 = 0.0;
    for sign in [1.0, -1.0] {
        let c = sign * worst;
        for step in 0..=steps {
            let u = f64::from(step) / f64::from(steps);
            let [s, ds, dds] = skewed(transition.law.kind.word(), skew, u);
            let w = u * (1.0 - u);
            let v = from + change * s + c / time * 140.0 * w * w * w;
            let a = change / time * ds + c / (time * time) * 420.0 * w * w * (1.0 - 2.0 * u);
            let j = change / time.powi(2) * dds + c / time.powi(3) * 840.0 * w * (1.0 - 5.0 * w);
            let limit = if v * a < 0.0 {
                &rotor.deceleration
            } else {
                &rotor.acceleration
            };
            share = share
                .max(v.abs() / rotor.top_speed.value.to_f64())
                .max(a.abs() / limit.value.to_f64())
                .max(j.abs() / rotor.jerk.as_ref().unwrap().value.to_f64());
        }
    }
    share
}

/// s, s′, s″ as the reference writes them, with the skew's own formula.
fn skewed(law: &str, skew: f64, u: f64) -> [f64; 3] {
    let base = |u: f64| match law {
        "quintic" => [
            u.powi(3) * (10.0 - 15.0 * u + 6.0 * u * u),
            30.0 * u * u * (1.0 - u).powi(2),
            60.0 * u * (1.0 - u) * (1.0 - 2.0 * u),
        ],
        "septic" => [
            u.powi(4) * (35.0 - 84.0 * u + 70.0 * u * u - 20.0 * u.powi(3)),
            140.0 * u.powi(3) * (1.0 - u).powi(3),
            420.0 * u * u * (1.0 - u).powi(2) * (1.0 - 2.0 * u),
        ],
        "cubic" => [u * u * (3.0 - 2.0 * u), 6.0 * u * (1.0 - u), 6.0 - 12.0 * u],
        other => panic!("no formula here for {other}"),
    };
    if u <= skew {
        let [s, ds, dds] = base(u / (2.0 * skew));
        [2.0 * skew * s, ds, dds / (2.0 * skew)]
    } else {
        let rest = 1.0 - skew;
        let [s, ds, dds] = base((1.0 - u) / (2.0 * rest));
        [1.0 - 2.0 * rest * s, ds, -dds / (2.0 * rest)]
    }
}

/// Without a landing and with symmetric limits the shortest quintic is max(Cv|Δv|/A, √(Ca|Δv|/J)),
/// Cv = 15/8, Ca = 10/√3 (3-4-5 polynomial; peak factors from memory of cam design handbooks, recomputed from the polynomial).
#[test]
fn fastest_without_a_landing_is_the_closed_form() {
    let rig = RIG
        .replace("  index at 0 deg\n", "")
        .replace("deceleration 4800 rpm/s", "");
    let text = "usual hold 1 s\ncue 1:-1 lead 3000 rpm\ncue 1:-1 lead 9000 rpm morph fastest\ncue 1:-1 lead 9010 rpm morph fastest\nrun-down fastest\n";
    let (plan, findings) = plan_of(&rig, text);
    assert!(errors(&findings).is_empty(), "{:#?}", brief(&findings));
    let closed = |change: f64| {
        (1.875 * change / 6000.0).max((10.0 / 3f64.sqrt() * change / 40_000.0).sqrt())
    };
    for (ticks, change) in morph_ticks(&plan).into_iter().zip([6000.0, 10.0]) {
        let want = (closed(change) / 0.002).ceil();
        assert_close(
            f64::from(u32::try_from(ticks).unwrap()),
            want,
            0.0,
            "whole ticks",
        );
    }
}

#[test]
fn at_least_holds_fastest_back() {
    let text = "usual hold 1 s\ncue 1:-1 lead 3000 rpm\ncue 1:-1 lead 3010 rpm morph fastest at least 2.0005 s\nrun-down fastest\n";
    let (plan, _) = plan_of(RIG, text);
    assert_eq!(morph_ticks(&plan), [1001]);
}
