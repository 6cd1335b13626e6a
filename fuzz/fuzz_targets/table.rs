//! The audit of a table in any form, against a small show: the first byte of an input chooses the form.
#![no_main]

#[path = "common.rs"]
mod common;

use libfuzzer_sys::fuzz_target;
use phasewright::audit::audit_table;
use phasewright::plan::Plan;
use phasewright::setpoint::pack::Content;
use phasewright::setpoint::{Form, Output, table_id};
use std::sync::LazyLock;

static PLAN: LazyLock<(Plan, String)> = LazyLock::new(|| {
    let plan = common::plan();
    let id = table_id(&plan);
    (plan, id)
});

fuzz_target!(|bytes: &[u8]| {
    let Some((which, mut table)) = bytes.split_first() else {
        return;
    };
    let output = match which % 6 {
        0 => Output::Rows(Form::Csv),
        1 => Output::Rows(Form::Json),
        2 => Output::JsonKnots(1),
        3 => Output::Pack(Content::Rows),
        4 => Output::Pack(Content::Knots(1)),
        _ => Output::Header(Content::Knots(1), "x".to_owned()),
    };
    let (plan, id) = &*PLAN;
    let report = audit_table(plan, &output, id, &mut table, &mut |_| {});
    drop(report);
});
