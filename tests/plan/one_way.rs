use super::RIG;
use super::common::{brief, codes, errors, plan_of, try_plan};
use phasewright::motion::profile::Profile;
use phasewright::rig::{RotorId, Turning};

/// `draws` opposite senses: forward motors make a:b of opposite mirror senses.
fn one_way() -> String {
    RIG.replace("index at 0 deg", "index at 0 deg\n  turns forward")
        .replace("stall-speed 150 rpm", "")
}

#[test]
fn a_one_way_rotor_never_turns_back_not_even_for_a_correction() {
    let rig = one_way();
    for angle in [0, 13, 27, 45, 60, 88, 101, 119] {
        for law in ["quintic", "septic", "cubic"] {
            let text = format!(
                "usual hold 1 s\nrun-up 9 s {law}\ncue 1:-2 land {angle} deg\ncue 1:0 morph 7 s {law} land {angle} deg\ncue 2:-3 morph 7 s {law} land {angle} deg\nrun-down 9 s {law}\n"
            );
            let (plan, findings) = plan_of(&rig, &text);
            assert!(
                errors(&findings).is_empty(),
                "{text}\n{:#?}",
                brief(&findings)
            );
            for index in 0..plan.legs.len() {
                for id in RotorId::BOTH {
                    let one = plan.move_of(index, id).unwrap();
                    if plan.transition(&plan.legs[index]).is_some() {
                        let profile = Profile::of(&one, plan.tick());
                        assert!(
                            !profile.turns_back(Turning::Forward),
                            "leg {index} {id:?} {text}"
                        );
                    }
                }
            }
        }
    }
}

#[test]
fn a_figure_of_the_other_sense_is_refused() {
    let (_, findings) = try_plan(&one_way(), "cue 1:2 hold 3 s\nrun-down fastest\n", None);
    assert_eq!(
        codes(
            &findings
                .into_iter()
                .filter(|finding| finding.severity == phasewright::finding::Severity::Error)
                .collect::<Vec<_>>()
        ),
        ["turn/direction"]
    );
}
