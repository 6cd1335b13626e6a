//! The stable codes of findings; each has a page of its own in `pages/`.

use super::Severity;

macro_rules! codes {
    ($($(#[$doc:meta])* $name:ident, $text:literal, $severity:ident;)*) => {
        /// The stable code of a finding, written `area/what`.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Code {
            $($(#[$doc])* $name,)*
        }

        impl Code {
            /// Every code there is.
            pub const ALL: &'static [Code] = &[$(Code::$name),*];

            /// `area/what`.
            #[must_use]
            pub fn text(self) -> &'static str {
                match self { $(Code::$name => $text,)* }
            }
            /// The severity it usually has.
            #[must_use]
            pub fn severity(self) -> Severity {
                match self { $(Code::$name => Severity::$severity,)* }
            }
            /// The page that explains it, in Markdown.
            #[must_use]
            pub fn page(self) -> &'static str {
                match self { $(Code::$name => include_str!(concat!("pages/", $text, ".md")),)* }
            }
            /// What it means, in one sentence: the first line of its page after the heading.
            #[must_use]
            pub fn summary(self) -> &'static str {
                let mut lines = self.page().lines().filter(|line| !line.is_empty());
                lines.find(|line| !line.starts_with('#')).unwrap_or_default()
            }
            /// The code written `text`.
            #[must_use]
            pub fn named(text: &str) -> Option<Code> {
                Code::ALL.iter().copied().find(|code| code.text() == text)
            }
        }
    };
}

codes! {
    /// A statement that does not read.
    TextSyntax, "text/syntax", Error;
    /// A missing unit, or one of the wrong kind.
    TextUnit, "text/unit", Error;
    /// A number that is out of range or cannot be.
    TextNumber, "text/number", Error;
    /// Something given twice.
    TextDuplicate, "text/duplicate", Error;
    /// Something required that is not there.
    TextMissing, "text/missing", Error;
    /// A name that is already something else.
    TextNameTaken, "text/name-taken", Error;
    /// Parts or figures that lead back to themselves.
    TextCircular, "text/circular", Error;
    /// An input past the limits of the program.
    TextTooMuch, "text/too-much", Error;
    /// A file that cannot be read.
    TextFile, "text/file", Error;
    /// A figure nobody defined.
    TextUnknownFigure, "text/unknown-figure", Error;
    /// A part nobody defined.
    TextUnknownPart, "text/unknown-part", Error;
    /// A rotor that is not there.
    TextUnknownRotor, "text/unknown-rotor", Error;
    /// A motor would have to turn too fast.
    LimitSpeed, "limit/speed", Error;
    /// A motor would have to change its speed too fast.
    LimitAcceleration, "limit/acceleration", Error;
    /// A motor's acceleration would have to change too fast.
    LimitJerk, "limit/jerk", Error;
    /// A motor holds a speed at which it does not run evenly.
    StallHold, "stall/hold", Error;
    /// A motor passes through speeds at which it does not run evenly.
    StallCrossing, "stall/crossing", Warning;
    /// A one-way motor would turn the other way.
    TurnDirection, "turn/direction", Error;
    /// The figure repeats so slowly that it flickers.
    FlickerRepeat, "flicker/repeat", Warning;
    /// The pose of a figure is not known.
    PoseOpen, "pose/open", Note;
    /// The loop's morph is too short to close the loop.
    LoopSeam, "loop/seam", Error;
    /// The table does not fit the controller.
    StorageOver, "storage/over", Error;
    /// A boundary was moved to the nearest tick.
    TimeRounded, "time/rounded", Note;
    /// `hold until` a time that is past.
    TimePast, "time/past", Error;
    /// A morph or hold shorter than half a tick.
    TimeShort, "time/short", Error;
    /// A file given as a log that is none.
    AuditLog, "audit/log", Error;
    /// Lines of a log that are no samples.
    AuditLines, "audit/lines", Warning;
    /// A log that fits the show at no moment.
    AuditNoMatch, "audit/no-match", Error;
    /// Samples or pulses that are missing, late or doubled.
    AuditSamples, "audit/samples", Warning;
    /// Time stamps that step.
    AuditTimeStep, "audit/time-step", Warning;
    /// A controller's clock that is far from the logger's.
    AuditClock, "audit/clock", Note;
    /// A cue about which the log says too little.
    AuditUnseen, "audit/unseen", Note;
    /// A figure whose pose turns.
    DriftPose, "drift/pose", Warning;
    /// Mirrors that ran in another ratio than the figure's.
    DriftRatio, "drift/ratio", Error;
    /// Rotors that do not keep their ratio over the log.
    DriftRotors, "drift/rotors", Warning;
    /// A rotor that left its place in a transition.
    DriftJump, "drift/jump", Warning;
    /// A figure that began in another pose than planned.
    DriftOffset, "drift/offset", Warning;
    /// The lit spot rests on the wall.
    StillSpot, "still/spot", Warning;
    /// The beam leaves the second mirror.
    OpticsWalkOff, "optics/walk-off", Warning;
    /// A curve is not drawn in its true shape.
    OpticsShape, "optics/shape", Note;
    /// The rig does not tell what a check of the light needs.
    OpticsSkipped, "optics/skipped", Note;
}
