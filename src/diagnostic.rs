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

/// Line and column of the first byte that a finding is about, both from 1, the column in bytes.
#[must_use]
pub fn position(finding: &Diagnostic, bytes: &[u8]) -> (usize, usize) {
    let start = finding.span.start.min(bytes.len());
    let line_start = memchr::memrchr(b'\n', &bytes[..start]).map_or(0, |newline| newline + 1);
    (memchr::memchr_iter(b'\n', &bytes[..line_start]).count() + 1, start - line_start + 1)
}

/// Longest part of a line that is drawn, in characters.
const DRAWN: usize = 100;

/// A finding with file, line, column, the line itself, a caret and help.
///
/// ```text
/// x.molden:3:8: error: expected a real number, found `0.12,5`
///   |
/// 3 |   17   0.12,5
///   |        ^^^^^^
///   = help: Molden files write a decimal point, not a comma
/// ```
/// Lines and columns count from 1, columns in bytes; bytes that are no UTF-8 are shown as �.
#[must_use]
pub fn draw(finding: &Diagnostic, file: &str, bytes: &[u8]) -> String {
    let start = finding.span.start.min(bytes.len());
    let end = finding.span.end.clamp(start, bytes.len());
    let (number, column) = position(finding, bytes);
    let line_start = start + 1 - column;
    let line_end = memchr::memchr(b'\n', &bytes[start..]).map_or(bytes.len(), |step| start + step);
    // Of an endless line only the part around the finding is drawn.
    let from = if start - line_start > DRAWN / 2 { start - DRAWN / 2 } else { line_start };
    let to = line_end.min(from + DRAWN);
    let show = |range: Span| -> String {
        String::from_utf8_lossy(&bytes[range]).chars().map(|sign| if sign.is_control() { ' ' } else { sign }).collect()
    };
    let line = show(from..to);
    let before = show(from..start).chars().count();
    let carets = show(start..end.min(to)).chars().count().max(1);
    let word = match finding.severity {
        Severity::Warning => "warning",
        Severity::Error => "error",
    };
    let margin = " ".repeat(number.to_string().len());
    let mut text = format!(
        "{file}:{number}:{column}: {word}: {}\n{margin} |\n{number} | {}\n{margin} | {}{}",
        finding.message,
        line.trim_end(),
        " ".repeat(before),
        "^".repeat(carets)
    );
    if let Some(help) = &finding.help {
        text.extend(["\n", &margin, " = help: ", help]);
    }
    text
}
