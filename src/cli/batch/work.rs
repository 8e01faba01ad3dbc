//! One file of a batch: its hash, and its record unless one is kept.
//!
//! Nothing that a file holds can stop the others: what cannot be read or labelled, even a fault of this program, is a
//! record with its error.

use super::super::arguments::Placing;
use super::super::input::{self, Bytes};
use super::super::verbs::{self, Labelling};
use super::super::{CliError, Status};
use super::arguments::Batch;
use super::journal::{Geometry, Head, Kept, Place};
use crate::diagnostic::{Diagnostic, Severity};
use crate::group::GroupName;
use crate::labelling::Thresholds;
use crate::model::{self, ANGSTROM_PER_BOHR};
use crate::report::document::Document;
use crate::report::record::{FindingEntry, Record, RecordHead};
use std::any::Any;
use std::io;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::Path;

/// What decides a record beside the file.
#[derive(Debug)]
pub struct Settings<'a> {
    thresholds: Thresholds,
    placing: &'a Placing,
    character: bool,
    /// All of it with the program's version, as bytes to hash.
    text: String,
}

impl<'a> Settings<'a> {
    /// As asked for.
    ///
    /// # Errors
    /// [`CliError::Usage`] for a group that is none.
    pub fn new(arguments: &'a Batch) -> Result<Self, CliError> {
        let placing = &arguments.placing;
        if let Some(group) = &placing.group {
            group.parse::<GroupName>().map_err(|error| CliError::Usage(error.to_string()))?;
        }
        let thresholds = Thresholds {
            tolerance_bohr: arguments.tolerance / ANGSTROM_PER_BOHR,
            degeneracy_hartree: arguments.degeneracy,
            purity: arguments.purity,
            ..Thresholds::STANDARD
        };
        let character = arguments.character;
        let text = format!("{} {thresholds:?} {placing:?} {character}", env!("CARGO_PKG_VERSION"));
        Ok(Self { thresholds, placing, character, text })
    }

    /// Tells a file and its settings from any other, whatever the file's name.
    fn hash(&self, bytes: &[u8]) -> String {
        let mut hasher = blake3::Hasher::new();
        hasher.update(self.text.as_bytes()).update(&[0]).update(bytes);
        hasher.finalize().to_hex().to_string()
    }
}

/// What became of one file.
#[derive(Debug)]
pub enum Outcome {
    /// A new record as a line with its newline.
    Made {
        /// JSON and a newline.
        line: Vec<u8>,
        /// What the summary needs.
        head: Head,
    },
    /// A record that was there already.
    Kept {
        /// Where.
        place: Place,
        /// What the summary needs.
        head: Head,
    },
}

/// The record of a file, made or kept.
pub fn outcome(path: &Path, settings: &Settings<'_>, kept: &Kept) -> Outcome {
    let file = path.display().to_string();
    let bytes = match read(path) {
        Ok(bytes) => bytes,
        Err(error) => return made(failure(head(&file, None), &error)),
    };
    let hash = settings.hash(&bytes);
    if let Some((place, head)) = kept.find(&file, &hash) {
        return Outcome::Kept { place, head };
    }
    let mut head = head(&file, Some(hash));
    let record = match guarded(|| label(path, bytes, settings, &mut head)) {
        Ok(Ok(document)) => Record::labelled(head, document),
        Ok(Err(error)) => failure(head, &error),
        Err(fault) => {
            head.exit_status = Status::NumbersFail as u8;
            Record::failed(head, fault)
        }
    };
    made(record)
}

/// The hash that the record of a file has, where the file can be read.
#[cfg(feature = "parquet")]
pub fn hash(path: &Path, settings: &Settings<'_>) -> Option<String> {
    read(path).ok().map(|bytes| settings.hash(&bytes))
}

fn head(file: &str, hash: Option<String>) -> RecordHead {
    RecordHead { file: file.to_owned(), hash, exit_status: Status::Done as u8, diagnostics: Vec::new() }
}

/// The bytes of a regular file: a pipe or a device could keep a batch waiting forever.
fn read(path: &Path) -> Result<Vec<u8>, CliError> {
    let failed = |source: io::Error| CliError::Read { path: path.to_owned(), source };
    if !std::fs::metadata(path).map_err(failed)?.is_file() {
        return Err(failed(io::Error::new(io::ErrorKind::InvalidInput, "not a regular file")));
    }
    // Small files come faster this way than through a map, and one that is cut short meanwhile does no harm.
    std::fs::read(path).map_err(failed)
}

/// The document of `label`; findings go to `head`.
fn label(path: &Path, bytes: Vec<u8>, settings: &Settings<'_>, head: &mut RecordHead) -> Result<Document, CliError> {
    let bytes = input::unpacked(Bytes::Owned(bytes), path)?;
    let (molecule, findings) = match model::read_molden(&bytes) {
        Ok((molecule, warnings)) => (Ok(molecule), warnings),
        Err(findings) => (Err(CliError::Input { drawn: first_error(&findings, &bytes) }), findings),
    };
    head.diagnostics = findings.iter().map(|finding| FindingEntry::new(finding, &bytes)).collect();
    drop(bytes);
    let Settings { thresholds, placing, character, .. } = *settings;
    let asked = Labelling { thresholds, placing, window: None, character };
    verbs::labels(path, &mut molecule?, asked)
}

/// In one line; the rest stands in the diagnostics.
fn first_error(findings: &[Diagnostic], bytes: &[u8]) -> String {
    let mut mistakes = findings.iter().filter(|finding| finding.severity == Severity::Error);
    let Some(first) = mistakes.next() else {
        return "the file cannot be used".to_owned();
    };
    let (line, column) = crate::diagnostic::position(first, bytes);
    match mistakes.count() {
        0 => format!("{line}:{column}: {}", first.message),
        more => format!("{line}:{column}: {} (and {more} more)", first.message),
    }
}

fn failure(mut head: RecordHead, error: &CliError) -> Record {
    head.exit_status = error.status() as u8;
    let message = match error {
        // The record names its file already.
        CliError::Read { source, .. } => format!("cannot read: {source}"),
        CliError::Label { source, .. } => source.to_string(),
        other => other.to_string(),
    };
    Record::failed(head, message)
}

/// Runs `job`; a panic becomes a message.
fn guarded<T>(job: impl FnOnce() -> T) -> Result<T, String> {
    catch_unwind(AssertUnwindSafe(job)).map_err(|payload: Box<dyn Any + Send>| {
        let words = payload.downcast_ref::<&str>().map(ToString::to_string);
        let words = words.or_else(|| payload.downcast_ref::<String>().cloned());
        format!("a fault of this program, please report it: {}", words.unwrap_or_default())
    })
}

fn made(record: Record) -> Outcome {
    let head = match &record {
        Record::Labelled(labelled) => Head::new(&labelled.head, Some(&labelled.document.geometry.point_group), None),
        Record::Failed(failed) => Head::new(&failed.head, None, Some(&failed.error)),
    };
    let mut line = serde_json::to_vec(&record).expect("a record has text keys and no map that could fail");
    line.push(b'\n');
    Outcome::Made { line, head }
}

impl Head {
    fn new(head: &RecordHead, group: Option<&str>, error: Option<&str>) -> Self {
        Self {
            file: head.file.clone(),
            hash: head.hash.clone(),
            exit_status: head.exit_status,
            error: error.map(ToOwned::to_owned),
            geometry: group.map(|group| Geometry { point_group: group.to_owned() }),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_fault_of_the_program_becomes_a_message() {
        let text = guarded(|| -> usize { panic!("number {}", 7) });
        assert_eq!(text, Err("a fault of this program, please report it: number 7".to_owned()));
        let word = guarded(|| -> usize { panic!("plain") });
        assert_eq!(word, Err("a fault of this program, please report it: plain".to_owned()));
        assert_eq!(guarded(|| 3), Ok(3));
    }
}
