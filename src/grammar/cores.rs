//! `[CORE]`, `[PSEUDO]`, `[NVAL]`: electrons replaced by pseudopotentials.
//!
//! Here: their lines; one that cannot be read is a warning, for the sections are extensions of the format.
//! Not here: to which atoms they apply.

use super::Findings;
use super::atoms::trimmed;
use super::numbers::{lines, whole, words};
use super::sections::Section;
use crate::diagnostic::Span;

/// Whom a line is about.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum CoreOwner {
    /// The atom with this running number.
    Atom(usize),
    /// Every atom of the element with this symbol.
    Symbol(Span),
}

/// What a line's number counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CoreCount {
    /// Electrons in the core: `[CORE]`.
    InCore(u32),
    /// The charge that is left: `[PSEUDO]`, `[NVAL]`.
    Left(u32),
}

/// One line of one of the three sections.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RawCore {
    /// The line.
    pub line: Span,
    /// Whom it is about.
    pub owner: CoreOwner,
    /// What it says.
    pub count: CoreCount,
}

/// ```text
/// core   = ( atom-number | symbol ) [ ":" ] electrons      [CORE], [NVAL]
/// pseudo = name atom-number charge-left                    [PSEUDO]
/// ```
pub fn cores(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<RawCore> {
    let mut found = Vec::new();
    for line in lines(bytes, section.body.clone()) {
        let line = trimmed(&words(bytes, line));
        if line.is_empty() {
            continue;
        }
        let entries: Vec<Span> = match memchr::memchr(b':', &bytes[line.clone()]).map(|step| line.start + step) {
            Some(colon) => {
                words(bytes, line.start..colon).into_iter().chain(words(bytes, colon + 1..line.end)).collect()
            }
            None => words(bytes, line.clone()),
        };
        let number = |span: &Span| whole(&bytes[span.clone()]);
        let owner = |span: &Span| number(span).map_or_else(|| CoreOwner::Symbol(span.clone()), CoreOwner::Atom);
        let read = match (section.name.as_str(), entries.as_slice()) {
            ("PSEUDO", [_, atom, left]) => number(atom).map(CoreOwner::Atom).zip(number(left)),
            ("CORE" | "NVAL", [who, count]) => number(count).map(|count| (owner(who), count)),
            _ => None,
        };
        let Some((owner, Ok(electrons))) = read.map(|(owner, electrons)| (owner, u32::try_from(electrons))) else {
            findings.warning(
                line,
                "this line on core electrons is not understood and is passed over",
                "core electrons are then taken from the atomic-number column",
            );
            continue;
        };
        let count = if section.name == "CORE" { CoreCount::InCore(electrons) } else { CoreCount::Left(electrons) };
        found.push(RawCore { line, owner, count });
    }
    found
}
