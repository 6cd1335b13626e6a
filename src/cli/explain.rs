//! `explain`: the page of a finding.

use super::{CLEAN, Failure, Streams};
use crate::finding::Code;
use clap::Args;

/// Explain a finding: what it means, an example, how to mend it
#[derive(Args, Debug)]
pub(super) struct Explain {
    /// The code as findings show it, such as `limit/speed`; without one, all codes are listed
    #[arg(value_name = "CODE")]
    code: Option<String>,
}

impl Explain {
    pub(super) fn run(&self, streams: &mut Streams) -> Result<u8, Failure> {
        match &self.code {
            Some(text) => {
                let code = find(text)?;
                streams.stdout.write_all(code.page().as_bytes())?;
            }
            None => list(streams)?,
        }
        Ok(CLEAN)
    }
}

fn find(text: &str) -> Result<Code, Failure> {
    let wanted = text.trim().to_lowercase();
    if let Some(code) = Code::named(&wanted) {
        return Ok(code);
    }
    let nearest = Code::ALL
        .iter()
        .copied()
        .max_by(|one, other| likeness(&wanted, *one).total_cmp(&likeness(&wanted, *other)));
    let hint = match nearest {
        Some(code) if likeness(&wanted, code) >= 0.6 => {
            format!("did you mean `{}`?", code.text())
        }
        _ => "`phasewright explain` lists all codes".to_owned(),
    };
    Err(Failure::Usage(format!(
        "no finding has the code `{text}`; {hint}"
    )))
}

/// From 0 to 1: how much what was asked for resembles a code, or the part of it after the slash.
fn likeness(wanted: &str, code: Code) -> f64 {
    let text = code.text();
    let what = text.split_once('/').map_or(text, |(_, what)| what);
    let whole = strsim::normalized_damerau_levenshtein(wanted, text);
    let part = strsim::normalized_damerau_levenshtein(wanted, what);
    whole.max(part * 0.99)
}

fn list(streams: &mut Streams) -> Result<(), Failure> {
    let widest = Code::ALL.iter().map(|code| code.text().len()).max();
    let width = widest.unwrap_or_default();
    for code in Code::ALL {
        let (text, severity) = (code.text(), code.severity().word());
        let summary = code.summary();
        writeln!(streams.stdout, "{text:width$}  {severity:7}  {summary}")?;
    }
    Ok(())
}
