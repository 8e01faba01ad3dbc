//! Plain XYZ: a count, a comment, then one atom a line in ångström.
//!
//! ```text
//! xyz  = count newline comment newline { atom }
//! atom = ( symbol | atomic-number ) x y z …
//! ```
//! Further columns are ignored. Not here: which element a symbol means.

use super::Findings;
use super::atoms::trimmed;
use super::numbers::{lines, real, whole, words};
use crate::diagnostic::Span;

/// The comment line and the atoms of the first frame, positions in ångström.
#[must_use]
pub fn read(bytes: &[u8]) -> (Span, Vec<(Span, [f64; 3])>, Findings) {
    let mut findings = Findings::default();
    let mut all = lines(bytes, 0..bytes.len());
    let first = all.next().map(|line| words(bytes, line)).unwrap_or_default();
    let count = first.first().and_then(|word| whole(&bytes[word.clone()])).filter(|_| first.len() == 1);
    let Some(count) = count else {
        findings.expected(bytes, trimmed(&first), "the number of atoms alone on the first line, or a Molden file");
        return (0..0, Vec::new(), findings);
    };
    let comment = all.next().unwrap_or(bytes.len()..bytes.len());
    let mut atoms = Vec::new();
    while atoms.len() < count {
        let Some(line) = all.next() else {
            findings.error(
                bytes.len()..bytes.len(),
                format!("expected {count} atoms, found {} before the file ends", atoms.len()),
                "the file may be cut short, or its first line wrong",
            );
            break;
        };
        let words = words(bytes, line.clone());
        let mut position = [0.0; 3];
        let mut sound = words.len() >= 4;
        for (value, word) in position.iter_mut().zip(words.iter().skip(1)) {
            match real(&bytes[word.clone()]) {
                Some(number) => *value = number,
                None => sound = false,
            }
        }
        if sound {
            atoms.push((words[0].clone(), position));
        } else {
            let span = if words.is_empty() { line } else { trimmed(&words) };
            findings.expected(bytes, span, "a symbol and x, y, z");
            break;
        }
    }
    if let Some(words) = all.map(|line| words(bytes, line)).find(|words| !words.is_empty()) {
        findings.warning(trimmed(&words), "only the first frame is read", "give each frame its own file");
    }
    (comment, atoms, findings)
}
