//! A stretch of rows against the plan, and its columns against one another.

use super::expected::{Expected, RowWanted};
use super::fields::decimal;
use super::wanted::{RPM_UNITS, TURN_UNITS, Wanted, nearest};
use super::{Problem, Report, shown};
use crate::exact::{Rational, ratio, scaled_decimal, whole};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};
use crate::setpoint::{COLUMNS, Form};
use num_bigint::BigInt;
use num_traits::ToPrimitive;

/// Places of the columns in a row, in the order of [`COLUMNS`].
const TICK: usize = 0;
const TIME: usize = 1;
const CUE: usize = 2;
const BEAM: usize = 11;

/// The four columns of a rotor.
struct Columns {
    turns: usize,
    rpm: usize,
    counts: usize,
    step: usize,
}

const fn columns(id: RotorId) -> Columns {
    let second = match id {
        RotorId::A => 0,
        RotorId::B => 1,
    };
    Columns {
        turns: 3 + second,
        rpm: 5 + second,
        counts: 7 + second,
        step: 9 + second,
    }
}

/// The numbers of a row, each in units of its column's last decimal.
type Row = [i128; COLUMNS.len()];

/// What all rows of a table are held against.
pub(super) struct Checker<'p> {
    plan: &'p Plan,
    form: Form,
    count: u64,
    /// Decimals of each column.
    places: [usize; COLUMNS.len()],
    /// The tick in units of the time column.
    tick_units: i128,
    latency: u64,
    /// The largest step and speed that the motors can do.
    most: Pair<(i128, i128)>,
}

/// What is left of a stretch once it has been checked: where it joins its neighbours.
#[derive(Default)]
pub(super) struct Stretch {
    pub(super) report: Report,
    /// Counts of the first row.
    pub(super) first: Option<Pair<i128>>,
    /// Counts of the last row and its step: where the next row must be, modulo counts.
    pub(super) reached: Option<Pair<i128>>,
    /// Counts at the loop start, where it lies in the stretch.
    pub(super) looped: Option<Pair<i128>>,
    /// Whether the document ends within it, before its last row.
    pub(super) ended: bool,
}

impl<'p> Checker<'p> {
    pub(super) fn new(plan: &'p Plan, form: Form) -> Self {
        let tick = plan.tick().value();
        // A tick is a decimal of few places; a denominator with another prime factor would stop at 18.
        let places = (0..18)
            .find(|places| (tick * whole(10_i128.pow(*places))).is_integer())
            .unwrap_or(18);
        let latency = plan.rig.latency.value() / tick;
        let slack = whole(1) + ratio(1, 1_000_000_000);
        Self {
            plan,
            form,
            count: plan.rows(),
            places: [0, places as usize, 0, 12, 12, 6, 6, 0, 0, 0, 0, 0],
            tick_units: nearest(&(tick * whole(10_i128.pow(places)))),
            latency: nearest(&latency).to_u64().unwrap_or(0),
            most: Pair::each(|id| {
                let rotor = plan.rig.rotor(id);
                let top = rotor.top_speed.value.value() * &slack;
                let step = &top * tick * whole(rotor.counts.into());
                let most = |value: Rational| value.floor().to_integer().to_i128();
                (
                    // Two roundings of half a count each may add one.
                    most(step).map_or(i128::MAX, |step| step.saturating_add(1)),
                    most(top * whole(RPM_UNITS)).map_or(i128::MAX, |rpm| rpm.saturating_add(1)),
                )
            }),
        }
    }

    /// Checks the rows from tick `first` on, one a line.
    pub(super) fn check(&self, first: u64, lines: &[u8]) -> Stretch {
        let mut stretch = Stretch::default();
        let mut expected = Expected::new(self.plan, self.latency, first);
        for (tick, line) in (first..).zip(lines.split_inclusive(|byte| *byte == b'\n')) {
            if self.form == Form::Json && line == b"]}\n" {
                stretch.ended = true;
                break;
            }
            stretch.report.rows += 1;
            let wanted = expected.next(tick, &mut stretch.report);
            let Some(row) = self.read(tick, line, &mut stretch.report) else {
                stretch.reached = None;
                continue;
            };
            self.compare(tick, &row, &wanted, &mut stretch.report);
            self.columns_agree(tick, &row, &mut stretch);
        }
        stretch
    }

    /// The numbers of a row, or a problem of form.
    fn read(&self, tick: u64, line: &[u8], report: &mut Report) -> Option<Row> {
        let mut bad = |column: &str, wanted: String, found: &[u8]| {
            report.add(Problem {
                tick: Some(tick),
                column: column.to_owned(),
                wanted,
                found: shown(found),
            });
            None
        };
        let inner = match self.form {
            Form::Csv => line.strip_suffix(b"\n"),
            Form::Json => {
                let end: &[u8] = if tick + 1 == self.count {
                    b"]\n"
                } else {
                    b"],\n"
                };
                line.strip_prefix(b"[")
                    .and_then(|line| line.strip_suffix(end))
            }
        };
        let Some(inner) = inner else {
            return bad("row", "a whole row on its line".to_owned(), line);
        };
        let mut row = [0; COLUMNS.len()];
        let mut fields = inner.split(|byte| *byte == b',');
        for ((slot, name), places) in row.iter_mut().zip(COLUMNS).zip(self.places) {
            let Some(field) = fields.next() else {
                return bad("row", format!("{} columns", COLUMNS.len()), inner);
            };
            let Some(value) = decimal(field, places) else {
                let wanted = match places {
                    0 => "a whole number".to_owned(),
                    places => format!("a number with {places} decimals"),
                };
                return bad(name, wanted, field);
            };
            *slot = value;
        }
        if fields.next().is_some() {
            return bad("row", format!("{} columns", COLUMNS.len()), inner);
        }
        Some(row)
    }

    fn problem(&self, tick: u64, column: usize, wanted: &str, found: i128) -> Problem {
        Problem {
            tick: Some(tick),
            column: COLUMNS.get(column).copied().unwrap_or("row").to_owned(),
            wanted: wanted.to_owned(),
            found: self.text(column, found),
        }
    }

    fn text(&self, column: usize, value: i128) -> String {
        let places = self.places.get(column).copied().unwrap_or(0);
        scaled_decimal(&BigInt::from(value), places as u32)
    }

    fn must_be(&self, tick: u64, row: &Row, column: usize, wanted: Wanted, report: &mut Report) {
        let found = row.get(column).copied().unwrap_or_default();
        if !wanted.accepts(found) {
            let mut text = self.text(column, wanted.value);
            if let Some((least, most)) = wanted.ends() {
                let (least, most) = (self.text(column, least), self.text(column, most));
                text = format!("{text} ({least} to {most} are near enough)");
            }
            report.add(self.problem(tick, column, &text, found));
        }
    }

    /// Every value against the plan.
    fn compare(&self, tick: u64, row: &Row, wanted: &RowWanted, report: &mut Report) {
        let mut must_be = |column, wanted| self.must_be(tick, row, column, wanted, report);
        must_be(TICK, Wanted::exactly(tick.into()));
        must_be(TIME, Wanted::exactly(i128::from(tick) * self.tick_units));
        must_be(CUE, Wanted::exactly(wanted.cue.into()));
        must_be(BEAM, Wanted::exactly(wanted.beam.into()));
        for id in RotorId::BOTH {
            let at = columns(id);
            let (now, next) = (wanted.now.of(id), wanted.next.of(id));
            let counts = i128::from(self.plan.rig.rotor(id).counts);
            must_be(at.turns, now.turns);
            must_be(at.rpm, now.rpm);
            must_be(at.counts, now.counts.modulo(counts));
            let step = row.get(at.step).copied().unwrap_or_default();
            if !now.counts.leads_to(*next, step, 0) {
                must_be(at.step, Wanted::exactly(next.value - now.counts.value));
            }
        }
    }

    /// The columns of a row against one another, its counts against where the row before led, and the motors' top speed.
    fn columns_agree(&self, tick: u64, row: &Row, stretch: &mut Stretch) {
        let column = |column: usize| row.get(column).copied().unwrap_or_default();
        for id in RotorId::BOTH {
            let at = columns(id);
            let counts = i128::from(self.plan.rig.rotor(id).counts);
            let (most_step, most_rpm) = *self.most.of(id);
            // One phase, rounded to counts and to the last decimal: apart by half of each at most.
            let around = counts * TURN_UNITS;
            let apart = (2 * (column(at.turns) * counts - column(at.counts) * TURN_UNITS))
                .rem_euclid(2 * around);
            if apart.min(2 * around - apart) > TURN_UNITS + counts {
                let wanted = format!(
                    "the place of {} turns",
                    self.text(at.turns, column(at.turns))
                );
                let found = column(at.counts);
                stretch
                    .report
                    .add(self.problem(tick, at.counts, &wanted, found));
            }
            for (place, most) in [(at.step, most_step), (at.rpm, most_rpm)] {
                if column(place).abs() > most {
                    let wanted = format!("at most {} for the motor", self.text(place, most));
                    stretch
                        .report
                        .add(self.problem(tick, place, &wanted, column(place)));
                }
            }
        }
        let here = Pair::each(|id| column(columns(id).counts));
        if let Some(problem) = stretch.reached.and_then(|led| self.joined(tick, led, here)) {
            stretch.report.add(problem);
        }
        if tick == stretch_start(self.plan) {
            stretch.looped = Some(here);
        }
        stretch.first.get_or_insert(here);
        stretch.reached = Some(Pair::each(|id| here.of(id) + column(columns(id).step)));
    }

    /// The problem, if there is one, of a row with counts `here` after a row that led to `led`.
    pub(super) fn joined(&self, tick: u64, led: Pair<i128>, here: Pair<i128>) -> Option<Problem> {
        RotorId::BOTH.into_iter().find_map(|id| {
            let counts = i128::from(self.plan.rig.rotor(id).counts);
            let wanted = led.of(id).rem_euclid(counts);
            (wanted != *here.of(id)).then(|| {
                let wanted = format!("{wanted}, where the step before leads");
                self.problem(tick, columns(id).counts, &wanted, *here.of(id))
            })
        })
    }
}

/// The tick whose counts a loop must come back to; none for a run-down.
fn stretch_start(plan: &Plan) -> u64 {
    plan.loop_start().map_or(u64::MAX, |tick| tick.0)
}
