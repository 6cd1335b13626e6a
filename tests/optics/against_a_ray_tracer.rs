//! Every spot of reference.csv, which an independent general-purpose ray tracer made (see reference.py beside it).

use crate::assert_close;
use phasewright::optics::trace::{Deflect, Geometry, Trace};
use phasewright::rig::Pair;

#[test]
fn spots_agree_with_an_independent_ray_tracer() {
    let mut compared = 0;
    for line in include_str!("reference.csv").lines().skip(1) {
        let (kind, numbers) = line.split_once(',').unwrap();
        let numbers: Vec<f64> = numbers
            .split(',')
            .map(|number| number.parse().unwrap())
            .collect();
        let pair = |at: usize| Pair {
            a: numbers[at],
            b: numbers[at + 1],
        };
        let radians = |at: usize| Pair {
            a: numbers[at].to_radians(),
            b: numbers[at + 1].to_radians(),
        };
        let geometry = Geometry {
            deflect: match kind {
                "spinning" => Deflect::Spinning,
                "swinging" => Deflect::Swinging,
                other => panic!("unknown kind {other}"),
            },
            angle: radians(0),
            incidence: radians(2),
            spacing: numbers[4],
            throw: numbers[5],
        };
        let spot = Trace::new(&geometry).unwrap().spot(pair(6));
        // The file has twelve decimals; metres.
        assert_close(spot.x, numbers[8], 1e-11, line);
        assert_close(spot.y, numbers[9], 1e-11, line);
        compared += 1;
    }
    assert_eq!(compared, 120, "lines of the reference");
}
