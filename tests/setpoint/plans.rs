//! Plans built by hand, leg by leg: what the tests of rows and of the audit run on.

use phasewright::exact::{
    Acceleration, GridPhase, Rational, Seconds, Speed, Ticks, Turns, ratio, whole,
};
use phasewright::figure::{Figure, Form, Ratio};
use phasewright::finding::Place;
use phasewright::motion::{Law, LawKind};
use phasewright::plan::landing::Shares;
use phasewright::plan::{CueSpeeds, Leg, LegKind, Plan};
use phasewright::rig::{Gear, Pair, Projection, Rig, Rotor, RotorId, Stated, TableKind, Turning};
use phasewright::show::{Cue, Ending, Hold, Land, Length, Pace, Show, Transition, WrittenCue};
use std::sync::Arc;

/// A plan in the making.
pub(crate) struct Maker {
    rig: Rig,
    show: Show,
    plan: Plan,
}

/// A law without skew.
pub(crate) fn law(kind: LawKind) -> Law {
    Law {
        kind,
        skew: ratio(1, 2),
    }
}

fn transition(law: Law) -> Transition {
    Transition {
        place: Place::default(),
        length: Length::Given(Seconds::new(whole(1))),
        law,
        dark: false,
    }
}

/// A rotor with the given gear, sense and counts, and generous limits.
pub(crate) fn rotor(gear: (u32, u32), sense: i32, counts: u32) -> Rotor {
    Rotor {
        place: Place::default(),
        mirror: None,
        tilt: None,
        swing: None,
        top_speed: Stated::implied(Speed::from_rpm(&whole(12_000))),
        stall_speed: Stated::implied(Speed::zero()),
        acceleration: Stated::implied(Acceleration::new(whole(1000))),
        deceleration: Stated::implied(Acceleration::new(whole(1000))),
        jerk: None,
        gear: Stated::implied(Gear {
            motor: gear.0,
            mirror: gear.1,
        }),
        turns: Stated::implied(Turning::Both),
        sense,
        counts,
        index: Some(Stated::implied(Turns::new(ratio(1, 12)))),
        torque: None,
        drag: None,
        inertia: None,
    }
}

/// A rig with this tick and latency, in seconds.
pub(crate) fn rig(tick: Rational, latency: Rational, a: Rotor, b: Rotor) -> Rig {
    Rig {
        title: Some("Bench of \"two\" rotors".to_owned()),
        sha256: "ab".repeat(32),
        rotors: Pair { a, b },
        projection: Projection::Circular,
        throw: None,
        spacing: None,
        incidence: Pair { a: None, b: None },
        working_speed: Stated::implied(Speed::from_rpm(&whole(9000))),
        laser: None,
        latency: Seconds::new(latency),
        tick: Seconds::new(tick),
        storage: None,
        table: TableKind::Rows,
        repeat: Stated::implied(Speed::new(whole(30))),
    }
}

impl Maker {
    /// A show on `rig` that starts with a run-up by `law`.
    pub(crate) fn new(rig: Rig, law: Law) -> Self {
        let show = Show {
            title: Some("Ünter the pier".to_owned()),
            sha256: "0c".repeat(32),
            run_up: transition(law),
            cues: Vec::new(),
            order: Vec::new(),
            ending: None,
        };
        let plan = Plan {
            rig: Arc::new(rig.clone()),
            show: Arc::new(show.clone()),
            speeds: Vec::new(),
            legs: Vec::new(),
            rest: Pair {
                a: Turns::zero(),
                b: Turns::zero(),
            },
            loop_leg: None,
        };
        Self { rig, show, plan }
    }

    /// A written cue p:q repeating `repeat` times a second, morphed to by `law`; its index.
    pub(crate) fn cue(&mut self, p: i64, q: i64, repeat: Rational, law: Law) -> u32 {
        let figure = Figure {
            written: format!("{p}:{q}"),
            form: Form::Ratio,
            ratio: Ratio::new(p, q).unwrap(),
        };
        let mirror = Pair {
            a: Speed::new(&repeat * whole(p.into())),
            b: Speed::new(&repeat * whole(q.into())),
        };
        self.plan.speeds.push(Some(CueSpeeds {
            repeat: Speed::new(repeat.clone()),
            motor: Pair::each(|id| self.rig.rotor(id).motor_speed(mirror.of(id))),
            mirror,
            pose: None,
            shares: Shares::new(figure.ratio, &self.rig),
        }));
        self.show.cues.push(WrittenCue::Good(Box::new(Cue {
            place: Place::default(),
            figure_place: Place::default(),
            hold_place: Place::default(),
            land_place: None,
            pace_place: None,
            name: None,
            figure,
            morph: transition(law),
            hold: Hold::For(Seconds::new(whole(1))),
            pace: Pace::Rate(Speed::new(repeat)),
            land: Land::Usual,
            spin: Speed::zero(),
            beam: whole(1),
        })));
        self.plan.show = Arc::new(self.show.clone());
        (self.show.cues.len() - 1) as u32
    }

    /// Adds a leg; its landing is the grid point nearest to where half the change of speed leads, a bit further on.
    pub(crate) fn leg(&mut self, kind: LegKind, cue: u32, written: u32, ticks: u64, beam: u8) {
        let index = self.plan.legs.len();
        let start = self.plan.total();
        // A hold keeps the landing of the transition before it.
        let landed = self
            .plan
            .legs
            .last()
            .map_or_else(Pair::default, |leg| leg.landing);
        self.plan.legs.push(Leg {
            kind,
            cue,
            written,
            start,
            ticks: Ticks(ticks),
            beam,
            landing: landed,
        });
        if matches!(kind, LegKind::Hold | LegKind::RunDown) {
            return;
        }
        let landing = Pair::each(|id| {
            let further = if id == RotorId::A {
                ratio(1, 7)
            } else {
                ratio(-1, 3)
            };
            let there = &self.plan.phase_before(index, id) + &self.natural(index, id);
            let mirror = self.rig.rotor(id).mirror_phase(&there);
            GridPhase::nearest(&Turns::new(mirror.value() + further)).unwrap()
        });
        self.plan.legs[index].landing = landing;
    }

    /// Motor turns gained in a leg where the mean speed is half way.
    fn natural(&self, index: usize, id: RotorId) -> Turns {
        let leg = self.plan.legs[index];
        let to = self.plan.speeds[leg.written as usize].clone().unwrap();
        let to = to.motor.of(id).clone();
        let mean = (&self.plan.speed_before(index, id) + &to).times(&ratio(1, 2));
        mean.over(&leg.ticks.time(self.plan.tick()))
    }

    /// The looped plan, closed by a morph of this length into the hold at leg 1.
    pub(crate) fn looped(mut self, cue: u32, ticks: u64, law: Law) -> Plan {
        let first = self.plan.legs[1];
        let (first, at_start) = (first.written, self.plan.legs[0].landing);
        self.leg(LegKind::LoopMorph, cue, first, ticks, 0);
        let index = self.plan.legs.len() - 1;
        let near = self.plan.legs[index].landing;
        // The same place modulo the turns after which motor and mirror are both back: D turns of the mirror.
        self.plan.legs[index].landing = Pair::each(|id| {
            let mirror = self.rig.rotor(id).gear.value.mirror;
            let round = i128::from(mirror) * phasewright::exact::GRID_PER_TURN;
            let gap = near.of(id).0 - at_start.of(id).0;
            GridPhase(at_start.of(id).0 + gap.div_euclid(round) * round)
        });
        self.plan.loop_leg = Some(1);
        self.show.ending = Some(Ending::Loop {
            place: Place::default(),
            morph: transition(law),
        });
        self.plan.show = Arc::new(self.show);
        self.plan
    }

    /// The plan with a run-down of this length to the marks.
    pub(crate) fn run_down(mut self, cue: u32, ticks: u64, law: Law) -> Plan {
        let last = self.plan.legs.last().unwrap().written;
        let index = self.plan.legs.len();
        self.leg(LegKind::RunDown, cue, last, ticks, 0);
        self.plan.rest = Pair::each(|id| {
            let from = self.plan.speed_before(index, id).times(&ratio(1, 2));
            let there = &self.plan.phase_before(index, id)
                + &from.over(&Ticks(ticks).time(self.plan.tick()));
            let round = self.rig.rotor(id).closing_turns();
            Turns::new((there.value() / &round).floor() * round)
        });
        self.show.ending = Some(Ending::RunDown(transition(law)));
        self.plan.show = Arc::new(self.show);
        self.plan
    }
}

/// A looped show of three cues on a geared pair, 2 ms tick, one tick of latency; laws as given.
pub(crate) fn evening(laws: [LawKind; 4]) -> Plan {
    evening_of(laws, [400, 137, 211, 90, 177, 301, 250])
}

/// The same with legs of these lengths in ticks.
pub(crate) fn evening_of(laws: [LawKind; 4], ticks: [u64; 7]) -> Plan {
    let [up, second, third, back] = laws.map(law);
    let a = rotor((2, 1), 1, 4096);
    let b = rotor((3, 2), -1, 1000);
    let mut show = Maker::new(rig(ratio(2, 1000), ratio(2, 1000), a, b), up);
    let eight = show.cue(8, -5, ratio(61, 10), second.clone());
    let deltoid = show.cue(1, -2, ratio(100, 3), second);
    let weave = show.cue(5, -4, ratio(50, 7), third);
    show.leg(LegKind::RunUp, 0, eight, ticks[0], 0);
    show.leg(LegKind::Hold, 1, eight, ticks[1], 255);
    show.leg(LegKind::Morph, 2, deltoid, ticks[2], 0);
    show.leg(LegKind::Hold, 2, deltoid, ticks[3], 128);
    show.leg(LegKind::Morph, 3, weave, ticks[4], 64);
    show.leg(LegKind::Hold, 3, weave, ticks[5], 64);
    show.looped(4, ticks[6], back)
}

/// A show of one cue that ends at rest, 1/1024 s tick, equal motors, no gear.
pub(crate) fn there_and_back(up: LawKind, down: LawKind) -> Plan {
    there_and_back_of(up, down, [300, 200, 280])
}

/// The same with legs of these lengths in ticks.
pub(crate) fn there_and_back_of(up: LawKind, down: LawKind, ticks: [u64; 3]) -> Plan {
    let a = rotor((1, 1), 1, 4096);
    let b = rotor((1, 1), -1, 16_777_216);
    let mut show = Maker::new(rig(ratio(1, 1024), ratio(3, 1000), a, b), law(up));
    let star = show.cue(2, -3, ratio(70, 3), law(LawKind::Quintic));
    show.leg(LegKind::RunUp, 0, star, ticks[0], 0);
    show.leg(LegKind::Hold, 1, star, ticks[1], 200);
    show.run_down(2, ticks[2], law(down))
}
