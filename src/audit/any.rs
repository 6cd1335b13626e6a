//! One auditor for every form.

use super::header::HeaderAuditor;
use super::knots::KnotsAuditor;
use super::pack::PackAuditor;
use super::{Auditor, Report};
use crate::plan::Plan;
use crate::setpoint::Output;
use std::io::{self, Read};

/// Bytes read at a time.
const STRETCH: usize = 256 * 1024;

/// Checks a table of any form as its bytes come.
pub struct TableAuditor<'p>(Kind<'p>);

enum Kind<'p> {
    Rows(Box<Auditor<'p>>),
    Pack(Box<PackAuditor<'p>>),
    Header(Box<HeaderAuditor<'p>>),
    Knots(Box<KnotsAuditor<'p>>),
}

impl<'p> TableAuditor<'p> {
    /// An auditor of a table of `plan` in this form; `id` is the plan's table ID.
    #[must_use]
    pub fn new(plan: &'p Plan, output: &Output, id: &str) -> Self {
        Self(match output {
            Output::Rows(form) => Kind::Rows(Box::new(Auditor::new(plan, *form, id))),
            Output::JsonKnots(tolerance) => {
                Kind::Knots(Box::new(KnotsAuditor::new(plan, id, *tolerance)))
            }
            Output::Pack(content) => Kind::Pack(Box::new(PackAuditor::new(plan, id, *content))),
            Output::Header(content, name) => {
                Kind::Header(Box::new(HeaderAuditor::new(plan, id, *content, name)))
            }
        })
    }

    /// Rows, or ticks, checked so far.
    #[must_use]
    pub fn rows(&self) -> u64 {
        match &self.0 {
            Kind::Rows(auditor) => auditor.rows(),
            Kind::Pack(auditor) => auditor.report.rows,
            Kind::Header(auditor) => auditor.rows(),
            Kind::Knots(auditor) => auditor.report.rows,
        }
    }

    /// Takes the next bytes of the table.
    pub fn push(&mut self, bytes: &[u8]) {
        match &mut self.0 {
            Kind::Rows(auditor) => auditor.push(bytes),
            Kind::Pack(auditor) => auditor.push(bytes),
            Kind::Header(auditor) => auditor.push(bytes),
            Kind::Knots(auditor) => auditor.push(bytes),
        }
    }

    /// The end of the table: what is wrong with it.
    #[must_use]
    pub fn finish(self) -> Report {
        match self.0 {
            Kind::Rows(auditor) => auditor.finish(),
            Kind::Pack(auditor) => auditor.finish(),
            Kind::Header(auditor) => auditor.finish(),
            Kind::Knots(auditor) => auditor.finish(),
        }
    }
}

/// Reads a whole table of `plan`, of any form, and says what is wrong with it; `progress` hears the rows checked so far.
///
/// # Errors
/// Those of `table`.
pub fn audit_table(
    plan: &Plan,
    output: &Output,
    id: &str,
    table: &mut dyn Read,
    progress: &mut dyn FnMut(u64),
) -> io::Result<Report> {
    let mut auditor = TableAuditor::new(plan, output, id);
    let mut stretch = vec![0; STRETCH];
    loop {
        match table.read(&mut stretch) {
            Ok(0) => return Ok(auditor.finish()),
            Ok(length) => auditor.push(stretch.get(..length).unwrap_or_default()),
            Err(error) if error.kind() == io::ErrorKind::Interrupted => {}
            Err(error) => return Err(error),
        }
        progress(auditor.rows());
    }
}
