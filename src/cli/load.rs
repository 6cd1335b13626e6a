//! Reading shows and the rigs they name, within the limits on input.

use super::Failure;
use crate::check::planned;
use crate::finding::{Code, Finding, Place, Sources};
use crate::language::{MOST_FILE_BYTES, parse_show, read_rig, resolve_show};
use crate::plan::Plan;
use crate::rig::Rig;
use crate::show::Show;
use sha2::{Digest, Sha256};
use std::collections::BTreeMap;
use std::fs::File;
use std::io::{self, Read};
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The most shows in one run: each keeps its text until the findings are printed, and files are counted in 16 bits.
const MOST_SHOWS: usize = 10_000;

/// Reads shows and rigs; a rig that several shows name is read, and found fault with, once.
#[derive(Debug)]
pub(super) struct Loader {
    /// Every file read so far.
    pub(super) sources: Sources,
    rig_option: Option<PathBuf>,
    rigs: BTreeMap<PathBuf, Option<Arc<Rig>>>,
}

/// A show with its rig, as far as they could be read.
#[derive(Debug)]
pub(super) struct Loaded {
    /// The show; `None` where its file could not be read.
    pub(super) show: Option<Arc<Show>>,
    /// The rig; `None` where there is none or it has errors.
    pub(super) rig: Option<Arc<Rig>>,
    /// Everything found on the way.
    pub(super) findings: Vec<Finding>,
}

/// What a file holds.
struct Content {
    text: String,
    /// Lower-case hexadecimal, of the bytes as they are.
    sha256: String,
}

/// Why a file could not be used.
struct Unreadable {
    code: Code,
    /// Goes on after the name of the file: `is a folder`.
    what: String,
    help: Option<String>,
    /// What could be read of it: all that stands before a fault inside.
    before: String,
}

impl Loader {
    /// A loader for the shows of a command line, with its `--rig`.
    pub(super) fn new(rig_option: Option<PathBuf>, shows: &[PathBuf]) -> Result<Self, Failure> {
        let rig_is_stdin = rig_option.as_deref().is_some_and(is_standard_input);
        let show_count = shows.iter().filter(|show| is_standard_input(show)).count();
        if show_count + usize::from(rig_is_stdin) > 1 {
            let sentence = "standard input `-` can be read only once";
            return Err(Failure::Usage(sentence.to_owned()));
        }
        if shows.len() > MOST_SHOWS {
            let sentence = format!("at most {MOST_SHOWS} shows in one run");
            return Err(Failure::Usage(sentence));
        }
        Ok(Self {
            sources: Sources::default(),
            rig_option,
            rigs: BTreeMap::new(),
        })
    }

    /// Reads a show and its rig.
    pub(super) fn load(&mut self, path: &Path, stdin: &mut dyn Read) -> Loaded {
        let name = path.display().to_string();
        let content = match read(path, true, stdin) {
            Ok(content) => content,
            Err(fault) => return self.unreadable_show(&name, fault),
        };
        let show_file = self.sources.add(name, content.text.clone());
        let (script, mut findings) = parse_show(show_file, &content.text);
        let named = script
            .rig_file()
            .map(|(rig, place)| (beside(path, rig), place));
        let (show, found) = resolve_show(&script, content.sha256, self.rig_option.is_some());
        findings.extend(found);
        let rig = match (self.rig_option.clone(), named) {
            (Some(path), _) => self.rig(&path, None, stdin, &mut findings),
            (None, Some((path, place))) => self.rig(&path, Some(place), stdin, &mut findings),
            (None, None) => None,
        };
        Loaded {
            show: Some(Arc::new(show)),
            rig,
            findings,
        }
    }

    /// Reads, plans and checks a show from cue `from` on (from its first one, where `None`); the plan is there where
    /// every cue is good.
    pub(super) fn plan(
        &mut self,
        path: &Path,
        from: Option<u32>,
        stdin: &mut dyn Read,
    ) -> Result<(Option<Plan>, Vec<Finding>), Failure> {
        let mut loaded = self.load(path, stdin);
        let Some((show, rig)) = loaded.show.zip(loaded.rig) else {
            return Ok((None, loaded.findings));
        };
        let sound = !loaded.findings.iter().any(Finding::is_error);
        if let (Some(from), true) = (from, sound) {
            let cues = show.order.len();
            if from == 0 || from as usize > cues {
                let sentence = format!("`--from {from}`: the show has cues 1 to {cues}");
                return Err(Failure::Usage(sentence));
            }
        }
        let (plan, found) = planned(&show, &rig, from);
        loaded.findings.extend(found);
        Ok((plan, loaded.findings))
    }

    fn unreadable_show(&mut self, name: &str, fault: Unreadable) -> Loaded {
        let show_file = self.sources.add(name, fault.before);
        let end = self
            .sources
            .get(show_file)
            .map_or(0, |file| file.text.len());
        let place = Place {
            file: show_file,
            start: end,
            end,
        };
        let message = format!("the show `{name}` {}", fault.what);
        Loaded {
            show: None,
            rig: None,
            findings: vec![Finding::new(fault.code, place, message).help_if(fault.help)],
        }
    }

    /// Reads a rig; `named_at` is the `rig` statement that names it, if one does.
    /// Reads a rig that the command line (or, at a place, a show) names; what is found goes to `findings`.
    pub(super) fn rig(
        &mut self,
        path: &Path,
        named_at: Option<Place>,
        stdin: &mut dyn Read,
        findings: &mut Vec<Finding>,
    ) -> Option<Arc<Rig>> {
        if let Some(known) = self.rigs.get(path) {
            return known.clone();
        }
        let name = path.display().to_string();
        // A rig that a show names as `-` is a file of that name; only the command line means standard input.
        match read(path, named_at.is_none(), stdin) {
            Ok(content) => {
                let file = self.sources.add(name, content.text.clone());
                let (rig, found) = read_rig(file, &content.text, content.sha256);
                findings.extend(found);
                let rig = rig.map(Arc::new);
                self.rigs.insert(path.to_owned(), rig.clone());
                rig
            }
            Err(fault) => {
                findings.push(self.unreadable_rig(&name, named_at, fault));
                // Every show that names it is told; what the command line names is reported once.
                if named_at.is_none() {
                    self.rigs.insert(path.to_owned(), None);
                }
                None
            }
        }
    }

    fn unreadable_rig(
        &mut self,
        name: &str,
        named_at: Option<Place>,
        fault: Unreadable,
    ) -> Finding {
        let message = format!("the rig `{name}` {}", fault.what);
        let at_end = |file, text: &str| Place {
            file,
            start: text.len(),
            end: text.len(),
        };
        let finding = match named_at {
            Some(place) if fault.before.is_empty() => Finding::new(fault.code, place, message),
            Some(place) => {
                let file = self.sources.add(name, fault.before.clone());
                let second = at_end(file, &fault.before);
                Finding::new(fault.code, place, message).also(second, "here")
            }
            None => {
                let file = self.sources.add(name, fault.before.clone());
                Finding::new(fault.code, at_end(file, &fault.before), message)
            }
        };
        finding.help_if(fault.help)
    }
}

/// Whether a path of the command line means standard input or output.
pub(super) fn is_standard_input(path: &Path) -> bool {
    path.as_os_str() == "-"
}

/// A rig's path, which is relative to the folder of the show; to the current one for a show on standard input.
fn beside(show: &Path, rig: &str) -> PathBuf {
    match show.parent() {
        Some(folder) if !is_standard_input(show) => folder.join(rig),
        _ => PathBuf::from(rig),
    }
}

/// Reads a whole file (or standard input, where `-` means that) of at most [`MOST_FILE_BYTES`].
fn read(path: &Path, dash_is_stdin: bool, stdin: &mut dyn Read) -> Result<Content, Unreadable> {
    let bytes = if dash_is_stdin && is_standard_input(path) {
        read_bounded(stdin)
    } else {
        open(path).and_then(|mut file| read_bounded(&mut file))
    }?;
    let sha256 = hexadecimal(&Sha256::digest(&bytes));
    match String::from_utf8(bytes) {
        Ok(text) => Ok(Content { text, sha256 }),
        Err(fault) => {
            let at = fault.utf8_error().valid_up_to();
            let mut bytes = fault.into_bytes();
            bytes.truncate(at);
            Err(Unreadable {
                code: Code::TextFile,
                what: format!("is not UTF-8 text: byte {at}, counted from 0, does not belong"),
                help: Some("save it again as UTF-8".to_owned()),
                before: String::from_utf8(bytes).unwrap_or_default(),
            })
        }
    }
}

fn open(path: &Path) -> Result<File, Unreadable> {
    let file = File::open(path).map_err(cannot_read)?;
    let metadata = file.metadata().map_err(cannot_read)?;
    if metadata.is_dir() {
        return Err(Unreadable {
            code: Code::TextFile,
            what: "is a folder, not a file".to_owned(),
            help: None,
            before: String::new(),
        });
    }
    if metadata.len() > MOST_FILE_BYTES {
        return Err(too_large());
    }
    Ok(file)
}

/// Reads to the end, but never much past the limit: a pipe or a device does not tell its size.
fn read_bounded(from: &mut dyn Read) -> Result<Vec<u8>, Unreadable> {
    let mut bytes = Vec::new();
    from.take(MOST_FILE_BYTES + 1)
        .read_to_end(&mut bytes)
        .map_err(cannot_read)?;
    if bytes.len() as u64 > MOST_FILE_BYTES {
        return Err(too_large());
    }
    Ok(bytes)
}

fn cannot_read(error: io::Error) -> Unreadable {
    let what = match error.kind() {
        io::ErrorKind::NotFound => "does not exist".to_owned(),
        io::ErrorKind::PermissionDenied => "may not be read: permission denied".to_owned(),
        io::ErrorKind::IsADirectory => "is a folder, not a file".to_owned(),
        _ => format!("cannot be read: {error}"),
    };
    Unreadable {
        code: Code::TextFile,
        what,
        help: None,
        before: String::new(),
    }
}

fn too_large() -> Unreadable {
    Unreadable {
        code: Code::TextTooMuch,
        what: format!("is larger than {} MiB", MOST_FILE_BYTES / (1024 * 1024)),
        help: None,
        before: String::new(),
    }
}

fn hexadecimal(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}
