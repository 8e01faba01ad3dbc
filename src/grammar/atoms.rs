//! `[Atoms]`: one atom a line.
//!
//! Not here: which element a name means (`model::elements`).

use super::Findings;
use super::numbers::{lines, real, whole, words};
use super::sections::Section;
use crate::diagnostic::Span;

/// Unit of the coordinates.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LengthUnit {
    /// Atomic units.
    Bohr,
    /// Ångström.
    Angstrom,
}

/// One line of `[Atoms]`.
#[derive(Debug, Clone, PartialEq)]
pub struct RawAtom {
    /// The whole line.
    pub line: Span,
    /// First word.
    pub name: Span,
    /// Running number, where the line has one.
    pub number: Option<usize>,
    /// Atomic number or effective charge, where the line has one.
    pub charge: Option<f64>,
    /// In the unit of the section.
    pub position: [f64; 3],
}

/// ```text
/// atoms-header = "[Atoms]" [ "(" ] ( "AU" | "Angs" … ) [ ")" ]
/// ```
/// Without a unit the numbers are taken as atomic units.
pub fn length_unit(bytes: &[u8], section: &Section, findings: &mut Findings) -> LengthUnit {
    let text = String::from_utf8_lossy(&bytes[section.argument.clone()]).to_uppercase();
    let word = text.trim_matches(|sign: char| sign.is_whitespace() || sign == '(' || sign == ')');
    if word.starts_with("ANG") {
        LengthUnit::Angstrom
    } else {
        if !(word.starts_with("AU") || word.starts_with("BOHR")) {
            findings.warning(
                section.header.start..section.argument.end.max(section.header.end),
                "expected AU or Angs after [Atoms]; the coordinates are taken as atomic units",
                "write [Atoms] AU or [Atoms] Angs",
            );
        }
        LengthUnit::Bohr
    }
}

/// ```text
/// atom = name [ number atomic-number ] x y z
/// ```
/// A line of four words has no number columns. Words behind z are left alone.
pub fn atoms(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<RawAtom> {
    let found = lines(bytes, section.body.clone()).map(|line| words(bytes, line)).filter(|words| !words.is_empty());
    found.filter_map(|words| atom(bytes, &words, findings)).collect()
}

fn atom(bytes: &[u8], words: &[Span], findings: &mut Findings) -> Option<RawAtom> {
    let line = trimmed(words);
    let (columns, coordinates) = match words {
        [_, coordinates @ ..] if coordinates.len() == 3 => (None, coordinates),
        [_, number, charge, coordinates @ ..] if coordinates.len() >= 3 => (Some((number, charge)), coordinates),
        _ => {
            findings.error(
                line,
                format!("expected name, number, atomic number, x, y, z; found {} words", words.len()),
                "each line of [Atoms] has six entries, or four where both numbers are left out",
            );
            return None;
        }
    };
    let mut value = |word: &Span, what: &str| {
        let found = real(&bytes[word.clone()]);
        if found.is_none() {
            findings.expected(bytes, word.clone(), what);
        }
        found
    };
    let charge = columns.map(|(_, word)| value(word, "an atomic number"));
    let position = [
        value(&coordinates[0], "x, a real number"),
        value(&coordinates[1], "y, a real number"),
        value(&coordinates[2], "z, a real number"),
    ];
    let number = columns.map(|(word, _)| (word, whole(&bytes[word.clone()])));
    if let Some((word, None)) = number {
        findings.expected(bytes, word.clone(), "the atom's running number");
        return None;
    }
    let [Some(x), Some(y), Some(z)] = position else { return None };
    let charge = match charge {
        Some(None) => return None,
        Some(charge) => charge,
        None => None,
    };
    let number = number.and_then(|(_, number)| number);
    Some(RawAtom { line, name: words[0].clone(), number, charge, position: [x, y, z] })
}

/// The words' extent.
#[must_use]
pub fn trimmed(words: &[Span]) -> Span {
    words.first().map_or(0, |word| word.start)..words.last().map_or(0, |word| word.end)
}
