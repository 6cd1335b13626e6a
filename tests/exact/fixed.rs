//! Fixed-point arithmetic against exact rationals.

use crate::{assert_close, power};
use phasewright::exact::fixed::{PHASE_BITS, UNIT_BITS, Unit, phase_steps, phase_value};
use phasewright::exact::{Rational, from_f64, ratio, to_f64, whole};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

/// Half a step of 2⁻¹²⁰: rounding to nearest may not be off by more.
fn half_step() -> f64 {
    power(-121)
}

fn config() -> ProptestConfig {
    ProptestConfig {
        cases: 2000,
        rng_seed: RngSeed::Fixed(1),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn products_are_within_half_a_step(a in any::<i128>(), b in -(1_i128 << 121)..=(1_i128 << 121), small in 0_u32..128) {
        // |a| ≤ 128 and |b| ≤ 2 would leave the range, so a is brought below 64.
        let (a, b) = (Unit::from_raw(a >> (1 + small % 127)), Unit::from_raw(b));
        let want = a.to_rational() * b.to_rational();
        assert_close(&a.times(b).to_rational(), &want, half_step(), "a·b");
        assert_close(&b.times(a).to_rational(), &want, half_step(), "b·a");
    }

    #[test]
    fn shares_of_a_phase_are_within_half_a_step(phase in any::<i128>(), share in 0..=(1_i128 << 120)) {
        let (phase, share) = (phase >> 1, Unit::from_raw(share));
        let want = phase_value(phase) * share.to_rational();
        assert_close(&phase_value(share.of(phase)), &want, power(-73), "share of phase");
    }

    #[test]
    fn quotients_are_within_half_a_step(part in any::<u64>(), of in 1..=u64::MAX, shift in 0_u32..64) {
        let of = (of >> shift).max(1);
        let part = part % of;
        let want = ratio(i128::from(part), i128::from(of));
        assert_close(&Unit::share(part, of).to_rational(), &want, half_step(), "part/of");
    }

    #[test]
    fn the_nearest_step_to_a_rational_is_within_half_a_step(n in -1_000_000_000_000_i128..1_000_000_000_000, d in 1_i128..1_000_000_000_000) {
        let value = ratio(n, d);
        prop_assume!(to_f64(&value).abs() < 127.0);
        assert_close(&Unit::nearest(&value).to_rational(), &value, half_step(), "nearest unit");
        assert_close(&phase_value(phase_steps(&value)), &value, power(-73), "nearest phase");
    }

    #[test]
    fn the_nearest_float_is_the_nearest(raw in any::<i128>(), shift in 0_u32..127) {
        let unit = Unit::from_raw(raw >> shift);
        // num's own conversion of a ratio of big integers.
        let want = to_f64(&unit.to_rational());
        prop_assert_eq!(unit.to_f64().to_bits(), want.to_bits());
    }
}

#[test]
fn products_of_the_largest_numbers_are_exact() {
    let least = Unit::from_raw(i128::MIN);
    let most = Unit::from_raw(i128::MAX);
    assert_eq!(least.times(-Unit::ONE), least, "128 wraps to −128");
    assert_eq!(least.times(Unit::ONE), least);
    assert_eq!(most.times(Unit::ONE), most);
    assert_eq!(most.times(-Unit::ONE).raw(), -i128::MAX);
    assert_eq!(least.times(Unit::HALF).to_rational(), whole(-64));
    assert_eq!(Unit::ONE.of(i128::MAX), i128::MAX);
    assert_eq!(Unit::ZERO.of(i128::MIN), 0);
}

#[test]
fn ties_round_away_from_zero_on_both_sides() {
    let (step, half) = (Unit::from_raw(1), Unit::HALF);
    assert_eq!(step.times(half).raw(), 1);
    assert_eq!((-step).times(half).raw(), -1);
    assert_eq!(Unit::from_raw(3).times(half).raw(), 2);
}

#[test]
fn shares_stay_between_nothing_and_all() {
    assert_eq!(Unit::share(0, 5), Unit::ZERO);
    assert_eq!(Unit::share(5, 5), Unit::ONE);
    assert_eq!(Unit::share(6, 5), Unit::ONE);
    assert_eq!(Unit::share(0, 0), Unit::ONE);
    assert_eq!(Unit::share(1, 2), Unit::HALF);
    let last = Unit::share(u64::MAX - 1, u64::MAX);
    let want = ratio(i128::from(u64::MAX) - 1, i128::from(u64::MAX));
    assert_close(&last.to_rational(), &want, half_step(), "next to all");
}

#[test]
fn numbers_past_the_range_do_not_panic() {
    let huge: Rational = whole(i128::MAX) * whole(i128::MAX);
    assert_eq!(phase_steps(&huge), i128::MAX);
    assert_eq!(phase_steps(&-&huge), i128::MIN);
    assert_eq!(Unit::nearest(&huge).raw(), i128::MAX);
    assert_eq!(
        (Unit::from_raw(i128::MAX) + Unit::from_raw(1)).raw(),
        i128::MIN
    );
}

#[test]
fn the_scales_are_as_documented() {
    assert_eq!((UNIT_BITS, PHASE_BITS), (120, 72));
    assert_eq!(Unit::ONE.to_rational(), whole(1));
    assert_eq!(phase_value(1), from_f64(power(-72)).unwrap());
}
