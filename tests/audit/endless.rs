//! What has no line feeds is refused in time that grows with its length, not with the square of it.

use crate::plans::evening;
use crate::{audited, table};
use phasewright::motion::LawKind::{Cycloidal, ModifiedSine, Quintic, Septic};
use phasewright::setpoint::Form;
use std::time::{Duration, Instant};

/// Sixty-four megabytes take the square of it past a day, and the length itself below a second or two.
const MANY: usize = 64 << 20;

#[test]
fn a_file_without_line_feeds_is_refused_at_once() {
    let plan = evening([Quintic, ModifiedSine, Cycloidal, Septic]);
    let endless = |start: &[u8]| [start, &vec![b'x'; MANY]].concat();
    let csv = table(&plan, Form::Csv);
    let first_row = csv.split_inclusive(|byte| *byte == b'\n').take(2);
    let first_row: usize = first_row.map(<[u8]>::len).sum();
    let json = table(&plan, Form::Json);
    for (form, bytes) in [
        (Form::Csv, endless(b"tick,")),
        (Form::Csv, endless(&csv[..first_row])),
        (Form::Csv, endless(&csv)),
        (Form::Json, endless(b"{\"a\":1,")),
        (Form::Json, endless(b"{\n\"format\":")),
        (Form::Json, endless(&json)),
    ] {
        let begun = Instant::now();
        let report = audited(&plan, form, &bytes);
        assert!(!report.is_clean());
        assert!(report.count < 10, "{}", report.count);
        let shown = report
            .problems
            .iter()
            .all(|problem| problem.found.len() < 100);
        assert!(shown, "{:?}", report.problems);
        assert!(begun.elapsed() < Duration::from_secs(60), "{form:?}");
    }
}
