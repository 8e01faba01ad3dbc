//! `[Atoms]`, `[CORE]`, `[PSEUDO]`, `[NVAL]` and the like: one atom a line.
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
    /// Running number, second word.
    pub number: usize,
    /// Third word: atomic number, or an effective charge.
    pub charge: f64,
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
/// atom = name number atomic-number x y z
/// ```
pub fn atoms(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<RawAtom> {
    let mut atoms = Vec::new();
    for line in lines(bytes, section.body.clone()) {
        let words = words(bytes, line.clone());
        if words.is_empty() {
            continue;
        }
        if words.len() < 6 {
            findings.error(
                trimmed(&words),
                format!("expected name, number, atomic number, x, y, z; found {} words", words.len()),
                "each line of [Atoms] has six entries",
            );
            continue;
        }
        let number = whole(&bytes[words[1].clone()]);
        if number.is_none() {
            findings.expected(bytes, words[1].clone(), "the atom's running number");
        }
        let mut value = |at: usize, what: &str| {
            let found = real(&bytes[words[at].clone()]);
            if found.is_none() {
                findings.expected(bytes, words[at].clone(), what);
            }
            found
        };
        let charge = value(2, "an atomic number");
        let position = [value(3, "x, a real number"), value(4, "y, a real number"), value(5, "z, a real number")];
        if let (Some(number), Some(charge), [Some(x), Some(y), Some(z)]) = (number, charge, position) {
            atoms.push(RawAtom { line, name: words[0].clone(), number, charge, position: [x, y, z] });
        }
    }
    atoms
}

/// The words' extent.
pub fn trimmed(words: &[Span]) -> Span {
    words.first().map_or(0, |word| word.start)..words.last().map_or(0, |word| word.end)
}

/// ```text
/// core = atom-number ":" electrons | element ":" electrons
/// ```
/// Returns (first word, electrons); lines of another form are passed over.
pub fn cores(bytes: &[u8], section: &Section) -> Vec<(Span, usize)> {
    lines(bytes, section.body.clone())
        .filter_map(|line| {
            let colon = memchr::memchr(b':', &bytes[line.clone()])? + line.start;
            let who = words(bytes, line.start..colon).into_iter().next()?;
            let count = words(bytes, colon + 1..line.end).into_iter().next()?;
            Some((who, whole(&bytes[count])?))
        })
        .collect()
}
