//! What a finding of a motor that passes through its stall speed proposes.

use super::RIG;
use super::common::try_plan;
use phasewright::finding::Code;

fn help(dark: &str) -> String {
    let show = format!(
        "cue deltoid hold 20 s\ncue cardioid morph 4 s{dark} hold 20 s\nloop morph 4 s{dark}\n"
    );
    let (_, findings) = try_plan(RIG, &show, None);
    let crossing = findings
        .iter()
        .find(|finding| finding.code == Code::StallCrossing);
    crossing.unwrap().help.clone().unwrap()
}

#[test]
fn darkness_is_proposed_only_where_there_is_light() {
    assert!(help("").contains("dark"));
    let help = help(" dark");
    assert!(
        !help.contains("dark") && help.contains("same senses"),
        "{help}"
    );
}
