//! What the compiler has to say about a show: one neutral [`Finding`] between the checks and the renderers.
//!
//! Every stage returns its value *and* its findings; only `main` prints them.

mod code;
pub mod lines;
pub mod render;

pub use code::Code;
pub use lines::{Locator, Position};

/// How much a finding matters.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// Nothing is written.
    Error,
    /// The table is written; someone should look.
    Warning,
    /// Good to know.
    Note,
}

impl Severity {
    /// The word in every rendering.
    #[must_use]
    pub fn word(self) -> &'static str {
        match self {
            Severity::Error => "error",
            Severity::Warning => "warning",
            Severity::Note => "note",
        }
    }
}

/// Which input file: an index into [`Sources`].
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct FileId(pub u16);

/// A stretch of an input file, in bytes from its start; ordered by file, then by place.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Place {
    /// The file.
    pub file: FileId,
    /// First byte.
    pub start: usize,
    /// One past the last byte.
    pub end: usize,
}

/// One input file: the name the user knows it by, and its text (empty where it could not be read).
#[derive(Clone, Debug)]
pub struct Source {
    /// As given on the command line, or as the show's `rig` statement leads to it.
    pub name: String,
    /// The whole text.
    pub text: String,
}

/// Every input file of a run, so that a [`Place`] can be shown.
#[derive(Clone, Debug, Default)]
pub struct Sources {
    files: Vec<Source>,
}

impl Sources {
    /// Adds a file and says how places name it; one run never has more than a handful.
    pub fn add(&mut self, name: impl Into<String>, text: impl Into<String>) -> FileId {
        let id = FileId(u16::try_from(self.files.len()).unwrap_or(u16::MAX));
        self.files.push(Source {
            name: name.into(),
            text: text.into(),
        });
        id
    }
    /// The names of all files.
    pub fn names(&self) -> impl Iterator<Item = &str> {
        self.files.iter().map(|file| file.name.as_str())
    }
    /// The file of a place.
    #[must_use]
    pub fn get(&self, id: FileId) -> Option<&Source> {
        self.files.get(usize::from(id.0))
    }
}

/// One thing found.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Finding {
    /// What it is.
    pub code: Code,
    /// How much it matters.
    pub severity: Severity,
    /// One sentence: what is, and what the limit is.
    pub message: String,
    /// Where.
    pub place: Place,
    /// A second place and what it is: the rig line that set the limit, the cue before.
    pub also: Option<(Place, String)>,
    /// The value that would pass, never wrapped.
    pub help: Option<String>,
    /// How many times it was found at this place: merged where a cue is played more than once.
    pub count: u64,
}

impl Finding {
    /// A finding with nothing but its sentence, of the severity usual for its code.
    #[must_use]
    pub fn new(code: Code, place: Place, message: impl Into<String>) -> Self {
        Self {
            code,
            severity: code.severity(),
            message: message.into(),
            place,
            also: None,
            help: None,
            count: 1,
        }
    }
    /// Takes up another finding of the same code at the same place.
    fn absorb(&mut self, other: Self) {
        if self.count < MOST_MESSAGES && !self.message.contains(&other.message) {
            self.message.push_str("; ");
            self.message.push_str(&other.message);
            match (&mut self.help, other.help) {
                (Some(help), Some(more)) if !help.contains(&more) => {
                    help.push_str("; ");
                    help.push_str(&more);
                }
                (help @ None, more) => *help = more,
                _ => {}
            }
        }
        self.count += other.count;
    }
    /// Whether it keeps the table from being written.
    #[must_use]
    pub fn is_error(&self) -> bool {
        self.severity == Severity::Error
    }
    /// With another severity than the usual one of its code.
    #[must_use]
    pub fn severity(mut self, severity: Severity) -> Self {
        self.severity = severity;
        self
    }
    /// With a second place.
    #[must_use]
    pub fn also(mut self, place: Place, label: impl Into<String>) -> Self {
        self.also = Some((place, label.into()));
        self
    }
    /// With a second place, where there is one.
    #[must_use]
    pub fn also_at(self, place: Option<Place>, label: impl Into<String>) -> Self {
        match place {
            Some(place) => self.also(place, label),
            None => self,
        }
    }
    /// With a help line.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
    /// With a help line, where there is one.
    #[must_use]
    pub fn help_if(mut self, help: Option<String>) -> Self {
        self.help = help;
        self
    }
}

/// Messages that a merged finding keeps at most; of a cue inside `repeat` each may name a value of its own.
const MOST_MESSAGES: u64 = 4;

/// Findings in the order of the reference: errors, warnings, notes, each by place; those of one code
/// at one place merged into the first of them, with a count and with what the others say differently.
#[must_use]
pub fn ordered(findings: Vec<Finding>) -> Vec<Finding> {
    let mut sorted = findings;
    // A stable sort keeps the first found first among those of one code at one place.
    sorted.sort_by_key(|finding| (finding.severity, finding.place, finding.code));
    let mut merged: Vec<Finding> = Vec::new();
    for finding in sorted {
        match merged.last_mut() {
            Some(last)
                if (last.severity, last.place, last.code)
                    == (finding.severity, finding.place, finding.code) =>
            {
                last.absorb(finding);
            }
            _ => merged.push(finding),
        }
    }
    merged
}
