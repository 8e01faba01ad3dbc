//! One record a file of `batch`: the label document, or why there is none, with the file's name and hash.
//!
//! Here: the keys of a line of JSON Lines. Not here: rows of tables (`rows`), how records are kept and merged.

use super::document::{Document, SCHEMA};
use crate::diagnostic::{self, Diagnostic, Severity};
use schemars::JsonSchema;
use serde::Serialize;

/// One line of `batch`.
#[derive(Debug, Clone, Serialize, JsonSchema)]
#[serde(untagged)]
pub enum Record {
    /// The file has its labels.
    Labelled(Box<LabelledRecord>),
    /// It has none.
    Failed(FailedRecord),
}

/// A file with its labels.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct LabelledRecord {
    /// Name, hash, status, warnings.
    #[serde(flatten)]
    pub head: RecordHead,
    /// The document that `label` gives for this file.
    #[serde(flatten)]
    pub document: Document,
}

/// A file without labels.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct FailedRecord {
    /// Name, hash, status, findings.
    #[serde(flatten)]
    pub head: RecordHead,
    /// [`SCHEMA`].
    pub schema: &'static str,
    /// Why, in one line.
    pub error: String,
}

/// What every record says first.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct RecordHead {
    /// File name as given.
    pub file: String,
    /// BLAKE3 of the file's bytes, the options that decide the record and the program's version, hexadecimal;
    /// null where the file could not be read.
    pub hash: Option<String>,
    /// The exit status that `label` would have had: 0 labels, 2 the group or frame asked for is not to be had here,
    /// 3 unreadable or inconsistent, 4 numbers that fail their own check.
    pub exit_status: u8,
    /// Warnings and mistakes found in the file, in its order.
    pub diagnostics: Vec<FindingEntry>,
}

/// One finding about the file.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct FindingEntry {
    /// `warning` or `error`.
    pub severity: &'static str,
    /// From 1.
    pub line: usize,
    /// From 1, in bytes.
    pub column: usize,
    /// What was expected and what was found.
    pub message: String,
    /// What to do, where there is something to do.
    pub help: Option<String>,
}

impl FindingEntry {
    /// The finding with its place in `bytes`.
    #[must_use]
    pub fn new(finding: &Diagnostic, bytes: &[u8]) -> Self {
        let (line, column) = diagnostic::position(finding, bytes);
        let severity = match finding.severity {
            Severity::Warning => "warning",
            Severity::Error => "error",
        };
        Self { severity, line, column, message: finding.message.clone(), help: finding.help.clone() }
    }
}

impl Record {
    /// The record of a file that has its labels.
    #[must_use]
    pub fn labelled(head: RecordHead, document: Document) -> Self {
        Self::Labelled(Box::new(LabelledRecord { head, document }))
    }

    /// The record of a file that has none.
    #[must_use]
    pub fn failed(head: RecordHead, error: String) -> Self {
        Self::Failed(FailedRecord { head, schema: SCHEMA, error })
    }
}
