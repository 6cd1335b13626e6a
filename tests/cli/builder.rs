//! One run of the program in a folder of its own.

use std::fs;
use std::io::Write;
use std::path::Path;
use std::process::{Command, Stdio};
use tempfile::TempDir;

/// A rig that can do all that the tests ask for, without warnings.
pub(crate) const RIG: &str = include_str!("../../src/finding/pages/example.rig");

/// A show of two cues that is free of findings on [`RIG`].
pub(crate) const SHOW: &str = "\
show \"Harbour Hall\"
rig \"north-wall.rig\"

cue deltoid morph 4 s hold 20 s
cue 5:-4 morph 4 s hold 20 s
loop morph 4 s
";

/// A run in the making: arguments, files, standard input.
pub(crate) struct Run {
    folder: TempDir,
    command: Command,
    stdin: Vec<u8>,
}

/// What a run left behind.
pub(crate) struct Ran {
    folder: TempDir,
    /// Standard output.
    pub(crate) stdout: String,
    /// Standard error.
    pub(crate) stderr: String,
    /// Exit status.
    pub(crate) code: i32,
}

impl Run {
    /// The program with these arguments, in an empty folder, with nothing in its environment that asks for colour.
    pub(crate) fn new(arguments: &[&str]) -> Self {
        let folder = TempDir::new().unwrap();
        let mut command = Command::new(env!("CARGO_BIN_EXE_phasewright"));
        command.args(arguments).current_dir(folder.path());
        command.env_remove("NO_COLOR").env_remove("CLICOLOR_FORCE");
        Self {
            folder,
            command,
            stdin: Vec::new(),
        }
    }
    /// With [`SHOW`] as `harbour.show` and [`RIG`] as `north-wall.rig`.
    pub(crate) fn with_harbour(self) -> Self {
        self.with("harbour.show", SHOW).with("north-wall.rig", RIG)
    }
    /// With a file, its folders made where they are not there.
    pub(crate) fn with(self, name: &str, content: impl AsRef<[u8]>) -> Self {
        let path = self.folder.path().join(name);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, content).unwrap();
        self
    }
    /// With an empty folder.
    pub(crate) fn with_folder(self, name: &str) -> Self {
        fs::create_dir_all(self.folder.path().join(name)).unwrap();
        self
    }
    /// With whatever else is to be done in its folder.
    pub(crate) fn prepared(self, prepare: impl FnOnce(&Path)) -> Self {
        prepare(self.folder.path());
        self
    }
    /// With something on standard input.
    pub(crate) fn stdin(mut self, content: impl AsRef<[u8]>) -> Self {
        self.stdin = content.as_ref().to_vec();
        self
    }
    /// With a variable of the environment.
    pub(crate) fn env(mut self, name: &str, value: &str) -> Self {
        self.command.env(name, value);
        self
    }
    /// Runs it.
    pub(crate) fn run(mut self) -> Ran {
        self.command
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped());
        let mut child = self.command.spawn().unwrap();
        let mut stdin = child.stdin.take().unwrap();
        let content = std::mem::take(&mut self.stdin);
        // A program that does not read its input is gone before all of it is written.
        let writer = std::thread::spawn(move || drop(stdin.write_all(&content)));
        let output = child.wait_with_output().unwrap();
        writer.join().unwrap();
        Ran {
            folder: self.folder,
            stdout: String::from_utf8(output.stdout).unwrap(),
            stderr: String::from_utf8(output.stderr).unwrap(),
            code: output.status.code().expect("ended by a signal"),
        }
    }
}

impl Ran {
    /// Asserts all three at once, so that a failure shows all three.
    #[track_caller]
    pub(crate) fn is(&self, code: i32, stdout: &str, stderr: &str) -> &Self {
        let got = (self.code, self.stdout.as_str(), self.stderr.as_str());
        assert!(got == (code, stdout, stderr), "{}", self.report());
        self
    }
    /// Asserts the exit status, and that some words are on standard output and on standard error.
    ///
    /// No words at all stand for an empty stream.
    #[track_caller]
    pub(crate) fn says(&self, code: i32, stdout: &[&str], stderr: &[&str]) -> &Self {
        assert_eq!(self.code, code, "{}", self.report());
        for (stream, words) in [(&self.stdout, stdout), (&self.stderr, stderr)] {
            assert_eq!(stream.is_empty(), words.is_empty(), "{}", self.report());
            for word in words {
                assert!(stream.contains(word), "no {word:?}: {}", self.report());
            }
        }
        self
    }
    /// The bytes of a file that must be there.
    pub(crate) fn bytes(&self, name: &str) -> Vec<u8> {
        fs::read(self.folder.path().join(name)).unwrap()
    }
    /// The content of a file in the run's folder.
    pub(crate) fn file(&self, name: &str) -> Option<String> {
        fs::read_to_string(self.folder.path().join(name)).ok()
    }
    /// The names in the run's folder, in order.
    pub(crate) fn files(&self) -> Vec<String> {
        let entries = fs::read_dir(self.folder.path()).unwrap();
        let mut names: Vec<String> = entries
            .map(|entry| entry.unwrap().file_name().into_string().unwrap())
            .collect();
        names.sort();
        names
    }
    /// The run's folder.
    pub(crate) fn folder(&self) -> &Path {
        self.folder.path()
    }

    fn report(&self) -> String {
        format!(
            "exit status {}\n--- stdout\n{}\n--- stderr\n{}",
            self.code, self.stdout, self.stderr
        )
    }
}
