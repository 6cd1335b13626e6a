//! The exact line against plain division, on both of its paths.

use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::ToPrimitive;
use phasewright::exact::line::{Line, Ring};
use phasewright::exact::{Rational, ratio, whole};
use proptest::prelude::{ProptestConfig, any, proptest};
use proptest::test_runner::RngSeed;

/// ⌊(start + n·step)·scale + offset⌋ by one exact division: the definition itself.
fn defined(
    start: &Rational,
    step: &Rational,
    scale: &Rational,
    offset: &Rational,
    n: u64,
) -> BigInt {
    let value = (start + step * whole(n.into())) * scale + offset;
    value.numer().div_floor(value.denom())
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 300,
        rng_seed: RngSeed::Fixed(11),
        failure_persistence: None,
        ..ProptestConfig::default()
    })]

    #[test]
    fn every_tick_is_the_floor_of_the_exact_value(
        start in any::<(i64, u32)>(),
        step in any::<(i64, u64)>(),
        scale in 1_u64..1 << 40,
        jump in 0_u64..1 << 40,
    ) {
        let start = ratio(start.0.into(), i128::from(start.1) + 1);
        let step = ratio(step.0.into(), i128::from(step.1) + 1);
        let (scale, offset) = (whole(scale.into()), ratio(1, 2));
        let mut narrow = Line::new(&start, &step, &scale, &offset);
        let mut wide = Line::wide(&start, &step, &scale, &offset);
        let modulus = 1_000_000_000_000;
        let mut ring = Ring::new(&start, &step, &scale, &offset, modulus);
        let mut wide_ring = Ring::of(wide.clone(), modulus);
        for n in (0..40).chain(jump..jump + 40) {
            if n == jump {
                narrow.jump(jump);
                wide.jump(jump);
                ring.jump(jump);
                wide_ring.jump(jump);
            }
            let wanted = defined(&start, &step, &scale, &offset, n);
            let on_ring = wanted.mod_floor(&BigInt::from(modulus)).to_u64().unwrap();
            // i64 · 2⁴⁰ · 2⁴¹ ticks may pass 128 bits, where a line wraps round.
            if let Some(wanted) = wanted.to_i128() {
                assert_eq!(narrow.value(), wanted, "narrow at {n}");
                assert_eq!(wide.value(), wanted, "wide at {n}");
            }
            assert_eq!(ring.value(), on_ring, "ring at {n}");
            assert_eq!(wide_ring.value(), on_ring, "wide ring at {n}");
            narrow.advance();
            wide.advance();
            ring.advance();
            wide_ring.advance();
        }
    }
}

#[test]
fn a_denominator_past_127_bits_takes_the_wide_path_and_stays_exact() {
    // Coprime denominators whose product has about 190 bits.
    let start = ratio(1, (1 << 94) - 3);
    let step = ratio(-5, (1 << 96) + 7) + ratio(1, 3);
    let (scale, offset) = (whole(4096), ratio(1, 2));
    let mut line = Line::new(&start, &step, &scale, &offset);
    for n in 0..100 {
        assert_eq!(
            BigInt::from(line.value()),
            defined(&start, &step, &scale, &offset, n)
        );
        line.advance();
    }
    line.jump(36_000_000_000);
    assert_eq!(
        BigInt::from(line.value()),
        defined(&start, &step, &scale, &offset, 36_000_000_000)
    );
}

#[test]
fn ten_thousand_hours_do_not_drift() {
    // 10 000 h at 1 ms and 9000 rpm in the ratio 7:−3: tick by tick for a while, then at the end.
    let step = ratio(-3 * 150, 7 * 1000);
    let (scale, offset) = (whole(4096), ratio(1, 2));
    let mut line = Line::new(&ratio(1, 12), &step, &scale, &offset);
    for n in 0..100_000 {
        if n % 997 == 0 {
            assert_eq!(
                BigInt::from(line.value()),
                defined(&ratio(1, 12), &step, &scale, &offset, n)
            );
        }
        line.advance();
    }
    let last = 36_000_000_000;
    line.jump(last);
    assert_eq!(
        BigInt::from(line.value()),
        defined(&ratio(1, 12), &step, &scale, &offset, last)
    );
}
