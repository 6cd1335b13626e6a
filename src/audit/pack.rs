//! A pack as a stream of bytes: head and checksums by its reader, every set-point against the plan.

use super::points::PointChecker;
use super::straight::Line;
use super::{Problem, Report, pack_head};
use crate::plan::Plan;
use crate::setpoint::pack::{Content, MOST_BLOCK_BYTES, PackFault, PackHead, Reader};
use std::collections::VecDeque;
use std::io::{self, Read};

/// Bytes that have come and are not yet read.
#[derive(Default)]
pub(super) struct Fed(VecDeque<u8>);

impl Read for Fed {
    fn read(&mut self, into: &mut [u8]) -> io::Result<usize> {
        self.0.read(into)
    }
}

enum Part {
    /// The head is not there yet.
    Head(Vec<u8>),
    Points(Box<Reader<Fed>>),
    /// All was read, or something is so wrong that the rest is not looked at.
    Over,
}

/// Checks a pack as its bytes come.
pub(super) struct PackAuditor<'p> {
    plan: &'p Plan,
    id: String,
    content: Content,
    points: PointChecker<'p>,
    part: Part,
    whole: bool,
    pub(super) report: Report,
}

impl<'p> PackAuditor<'p> {
    pub(super) fn new(plan: &'p Plan, id: &str, content: Content) -> Self {
        let tolerance = match content {
            Content::Rows => 0,
            Content::Knots(tolerance) => tolerance,
        };
        Self {
            plan,
            id: id.to_owned(),
            content,
            points: PointChecker::new(plan, tolerance),
            part: Part::Head(Vec::new()),
            whole: false,
            report: Report::default(),
        }
    }

    pub(super) fn push(&mut self, bytes: &[u8]) {
        match &mut self.part {
            Part::Head(start) => start.extend_from_slice(bytes),
            Part::Points(reader) => reader.source().0.extend(bytes),
            Part::Over if self.whole && !bytes.is_empty() => {
                self.whole = false;
                self.lose(&PackFault::Trailing);
            }
            Part::Over => {}
        }
        self.digest(false);
    }

    pub(super) fn finish(mut self) -> Report {
        self.digest(true);
        if self.whole {
            self.points.close(&mut self.report);
        }
        self.report
    }

    /// Reads as far as the bytes that have come allow; to the end where `all` are there.
    fn digest(&mut self, all: bool) {
        if let Part::Head(start) = &mut self.part {
            let size = start.first_chunk::<10>().map(PackHead::size);
            let there = match size {
                Some(Ok(size)) => start.len() >= size,
                Some(Err(_)) => true,
                None => false,
            };
            if !there && !all {
                return;
            }
            let fed = Fed(std::mem::take(start).into());
            match Reader::new(fed) {
                Ok(reader) => {
                    pack_head::check(
                        self.plan,
                        &self.id,
                        self.content,
                        reader.head(),
                        &mut self.report,
                    );
                    self.part = Part::Points(Box::new(reader));
                }
                Err(fault) => return self.lose(&fault),
            }
        }
        // One set-point may read two blocks.
        while let Part::Points(reader) = &mut self.part {
            if !all && reader.source().0.len() < 2 * MOST_BLOCK_BYTES {
                return;
            }
            match reader.next_point() {
                Ok(Some(point)) => {
                    self.points.check(&point, &mut self.report);
                    let straight = reader.straight();
                    let next = reader.lines().map(|[phase, speed]| Line { phase, speed });
                    let skipped = self
                        .points
                        .skip(point.tick, straight, next, &mut self.report);
                    reader.skip(skipped);
                }
                Ok(None) => {
                    self.whole = true;
                    self.part = Part::Over;
                }
                Err(fault) => self.lose(&fault),
            }
        }
    }

    fn lose(&mut self, fault: &PackFault) {
        let tick = match &self.part {
            Part::Points(reader) => Some(reader.tick()),
            _ => None,
        };
        self.report.add(Problem {
            tick,
            column: "pack".to_owned(),
            wanted: "a pack that is whole".to_owned(),
            found: fault.to_string(),
        });
        self.part = Part::Over;
    }
}
