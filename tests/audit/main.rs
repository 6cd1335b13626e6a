//! The auditor: clean tables pass, and nothing that is changed in one goes unseen.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    missing_docs
)]

mod clean;
mod corrupt;
mod endless;
#[path = "../setpoint/plans.rs"]
mod plans;

use phasewright::audit::{Report, audit};
use phasewright::plan::Plan;
use phasewright::setpoint::{Form, Head, table_id, write_table};

/// The table of `plan` as bytes.
fn table(plan: &Plan, form: Form) -> Vec<u8> {
    let id = table_id(plan);
    let findings = [serde_json::json!({"code": "time/rounded", "message": "moved by 0.4 ms"})];
    let head = Head {
        id: &id,
        findings: &findings,
    };
    let mut out = Vec::new();
    write_table(plan, form, &head, &mut out, &mut |_| ()).unwrap();
    out
}

fn audited(plan: &Plan, form: Form, table: &[u8]) -> Report {
    audited_as(plan, form, &table_id(plan), table)
}

/// The same with an ID that is already known: a sweep looks at thousands of tables of one plan.
fn audited_as(plan: &Plan, form: Form, id: &str, table: &[u8]) -> Report {
    audit(plan, form, id, &mut &*table, &mut |_| ()).unwrap()
}
