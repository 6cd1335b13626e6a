//! The tolerance that `storage/over` proposes is the smallest that fits, found here by trying each.

use crate::common::try_plan;
use crate::rows::pack_of;
use phasewright::check::storage;
use phasewright::setpoint::pack::Content;

const SHOW: &str = "\
rig \"x.rig\"
run-up 2 s
cue trifolium hold 700 ms
cue 2:3 morph 1500 ms hold 900 ms
run-down 1 s septic
";

fn rig(room: usize) -> String {
    format!(
        "rotor a {{\n top-speed 9000 rpm\n acceleration 90000 rpm/s\n counts 4096\n draws counter-clockwise\n}}\n\
         rotor b like a {{\n counts 1000\n draws clockwise\n}}\ncontroller {{\n tick 2 ms\n storage {room} B\n}}\n"
    )
}

#[test]
fn the_proposed_tolerance_is_the_smallest_that_fits() {
    let (plan, _) = try_plan(&rig(1_000_000), SHOW, None);
    let plan = plan.unwrap();
    let sizes: Vec<(u32, usize)> = (2..=64)
        .map(|within| (within, pack_of(&plan, Content::Knots(within)).len()))
        .collect();
    let most = pack_of(&plan, Content::Knots(1)).len();
    // Rooms in which just one of the tolerances, or a few, fit; sizes do not fall at each step.
    for index in [1, 3, 10, 17, 30, 50] {
        let room = sizes[index].1;
        assert!(room < most);
        let (within, size) = sizes.iter().find(|(_, size)| *size <= room).unwrap();
        let (plan, _) = try_plan(&rig(room), SHOW, None);
        let finding = storage::check(&plan.unwrap(), Some(Content::Knots(1))).unwrap();
        let help = finding.help.unwrap();
        assert!(
            help.starts_with(&format!(
                "`--knots within {within} counts` is the closest that fits: "
            )),
            "room {room}: {help}, but {within} takes {size}"
        );
    }
}
