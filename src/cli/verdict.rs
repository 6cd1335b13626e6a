//! What the audit of a table comes to, for people and for programs.

use crate::audit::{Problem, Report};
use crate::finding::render::counted;
use crate::setpoint::pack::Content;
use crate::setpoint::{Form, Output};
use serde_json::{Value, json};

/// A table as its first bytes tell.
pub(super) struct Table {
    /// Its form.
    pub(super) output: Output,
    /// The ID that it carries.
    pub(super) carries: Option<String>,
}

impl Table {
    /// Counts by which its ticks may differ from its rows; `None` where it has rows.
    fn tolerance(&self) -> Option<u32> {
        match self.output {
            Output::JsonKnots(tolerance)
            | Output::Pack(Content::Knots(tolerance))
            | Output::Header(Content::Knots(tolerance), _) => Some(tolerance),
            Output::Rows(_) | Output::Pack(Content::Rows) | Output::Header(Content::Rows, _) => {
                None
            }
        }
    }
}

/// A table, the show that it is held against, and what was found.
pub(super) struct Verdict<'v> {
    /// The file.
    pub(super) name: String,
    /// The show's file.
    pub(super) show: Option<String>,
    /// The ID of the show's table.
    pub(super) id: &'v str,
    /// What the file is.
    pub(super) table: &'v Table,
    /// What is wrong with it.
    pub(super) found: &'v Report,
}

impl Verdict<'_> {
    /// The ID that the table carries where it is not the show's.
    fn foreign(&self) -> Option<&str> {
        self.table
            .carries
            .as_deref()
            .filter(|carried| *carried != self.id)
    }

    /// One line each.
    pub(super) fn text(&self) -> String {
        let (name, id, found) = (&self.name, self.id, self.found);
        let extent = match self.table.tolerance() {
            None => counted(number(found.rows), "row"),
            Some(tolerance) => format!(
                "{} in knots, each within {}",
                counted(number(found.rows), "tick"),
                counted(tolerance as usize, "count")
            ),
        };
        if found.is_clean() {
            return format!("{name}: table {id}, {extent}, as planned\n");
        }
        let mut text = String::new();
        if let Some(other) = self.foreign() {
            let show = self.show.as_deref().unwrap_or("the show");
            text.push_str(&format!(
                "{name}: this is table {other}, {show} makes {id}: another show or rig, or compiled with `--from K`\n"
            ));
        }
        for problem in &found.problems {
            text.push_str(&format!("{name}: {problem}\n"));
        }
        let more = found.count.saturating_sub(found.problems.len() as u64);
        if more > 0 {
            text.push_str(&format!("{name}: and {more} more\n"));
        }
        let differences = counted(number(found.count), "difference");
        text.push_str(&if found.told == found.count && self.foreign().is_none() {
            format!(
                "{name}: table {id}, {extent}, is played as planned; {differences} in what it tells: the text of show or rig has changed since it was compiled, or another version made it\n"
            )
        } else {
            format!(
                "{name}: {differences} from table {id}, read {extent}: it must not be played{}\n",
                self.guess()
            )
        });
        text
    }

    /// A CSV cannot say which table it is: where most rows differ it is another one.
    fn guess(&self) -> &'static str {
        let csv = self.table.output == Output::Rows(Form::Csv);
        if csv && self.found.count > self.found.rows / 2 && self.found.rows > 1 {
            "; is it of another show or rig, or compiled with `--from K`?"
        } else {
            ""
        }
    }

    /// One object.
    pub(super) fn json(&self) -> String {
        let problems: Vec<Value> = self.found.problems.iter().map(problem_json).collect();
        let value = json!({
            "table": self.id,
            "carries": self.table.carries,
            "rows": self.found.rows,
            "tolerance": self.table.tolerance(),
            "differences": self.found.count,
            "told": self.found.told,
            "problems": problems,
        });
        format!("{value:#}\n")
    }
}

/// The object for a file that starts like a table and cannot be one.
pub(super) fn broken_json(id: &str, problem: &Problem) -> String {
    let value = json!({
        "table": id,
        "carries": null,
        "rows": 0,
        "tolerance": null,
        "differences": 1,
        "told": 0,
        "problems": [problem_json(problem)],
    });
    format!("{value:#}\n")
}

fn problem_json(problem: &Problem) -> Value {
    json!({
        "tick": problem.tick,
        "column": problem.column,
        "wanted": problem.wanted,
        "found": problem.found,
    })
}

fn number(count: u64) -> usize {
    usize::try_from(count).unwrap_or(usize::MAX)
}
