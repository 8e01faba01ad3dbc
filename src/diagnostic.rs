//! What is wrong with an input, where it stands, and what to do about it.
//!
//! Here: byte spans, severities, the diagnostic as a value, its drawing with line, column and caret.
//! Not here: any knowledge of a file format; nothing is printed, drawing gives a `String`.

use std::ops::Range;

/// A range of bytes in the input.
pub type Span = Range<usize>;

/// Whether reading can go on with a usable result.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The result stands, but the person should know.
    Warning,
    /// No result can be trusted.
    Error,
}

/// One finding about the input.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// Error or warning.
    pub severity: Severity,
    /// The bytes it is about; empty at the end of the input when something is missing.
    pub span: Span,
    /// What was expected and what was found, in one line.
    pub message: String,
    /// What to do, where there is something to do.
    pub help: Option<String>,
}
