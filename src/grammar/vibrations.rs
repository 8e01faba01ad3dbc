//! `[FREQ]`, `[INT]`, `[FR-COORD]`, `[FR-NORM-COORD]`: normal modes as the file gives them.
//!
//! Not here: which modes are translations, what the displacements' norm means.

use super::Findings;
use super::atoms::trimmed;
use super::numbers::{lines, real, words};
use super::sections::Section;
use crate::diagnostic::Span;

/// One real number a line; empty lines are passed over, further words ignored.
pub fn column(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<f64> {
    let mut values = Vec::new();
    for line in lines(bytes, section.body.clone()) {
        let Some(first) = words(bytes, line).into_iter().next() else { continue };
        match real(&bytes[first.clone()]) {
            Some(value) => values.push(value),
            None => findings.expected(bytes, first, "a real number"),
        }
    }
    values
}

/// ```text
/// coordinate = symbol x y z
/// ```
/// In bohr whatever the unit of `[Atoms]` (common practice of the engines).
pub fn coordinates(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<(Span, [f64; 3])> {
    let mut atoms = Vec::new();
    for line in lines(bytes, section.body.clone()) {
        let words = words(bytes, line);
        if words.is_empty() {
            continue;
        }
        match words.get(1..4).and_then(|words| triple(bytes, words)) {
            Some(position) => atoms.push((words[0].clone(), position)),
            None => findings.expected(bytes, trimmed(&words), "a symbol and x, y, z"),
        }
    }
    atoms
}

/// ```text
/// modes = { "vibration" number { dx dy dz } }
/// ```
/// One list of 3 numbers an atom for each mode.
pub fn displacements(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<Vec<f64>> {
    let mut modes: Vec<Vec<f64>> = Vec::new();
    for line in lines(bytes, section.body.clone()) {
        let words = words(bytes, line);
        let Some(first) = words.first() else { continue };
        if bytes[first.clone()].eq_ignore_ascii_case(b"vibration") {
            modes.push(Vec::new());
            continue;
        }
        match (modes.last_mut(), words.get(..3).and_then(|words| triple(bytes, words))) {
            (Some(mode), Some(displacement)) => mode.extend(displacement),
            (None, _) => findings.expected(bytes, trimmed(&words), "the word vibration and a number"),
            (_, None) => findings.expected(bytes, trimmed(&words), "three displacements, or the word vibration"),
        }
    }
    modes
}

fn triple(bytes: &[u8], words: &[Span]) -> Option<[f64; 3]> {
    let mut values = [0.0; 3];
    for (value, word) in values.iter_mut().zip(words) {
        *value = real(&bytes[word.clone()])?;
    }
    Some(values)
}
