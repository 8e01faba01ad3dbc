//! Where each `[Section]` begins and ends.
//!
//! ```text
//! file    = { blank-line } { section }
//! section = "[" name "]" rest-of-line { line }
//! ```
//! A section ends where the next line opens with a bracket. Not here: what stands in a section.

use crate::diagnostic::Span;

/// One section of the file.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Section {
    /// Name in capitals without blanks at its ends.
    pub name: String,
    /// From bracket to bracket.
    pub header: Span,
    /// What follows the bracket on its line.
    pub argument: Span,
    /// All lines up to the next section.
    pub body: Span,
}

/// Longest name a bracket can hold; longer ones are no section.
const NAME_LIMIT: usize = 64;

/// All sections in order, from the brackets that open a line.
#[must_use]
pub fn sections(bytes: &[u8], brackets: &[usize]) -> Vec<Section> {
    let mut found: Vec<Section> = Vec::new();
    for &at in brackets {
        let line_start = memchr::memrchr(b'\n', &bytes[..at]).map_or(0, |newline| newline + 1);
        let line_end = memchr::memchr(b'\n', &bytes[at..]).map_or(bytes.len(), |step| at + step);
        let reach = line_end.min(at + NAME_LIMIT);
        let Some(close) = memchr::memchr(b']', &bytes[at..reach]).map(|step| at + step) else { continue };
        let name = String::from_utf8_lossy(&bytes[at + 1..close]).trim().to_uppercase();
        if let Some(last) = found.last_mut() {
            // Behind [Title] a line such as `[Fe(CN)6]4-` is the title, not a section.
            let untitled = last.name == "TITLE" && bytes[last.body.start..line_start].trim_ascii().is_empty();
            if untitled && !name.chars().all(|sign| sign.is_ascii_alphanumeric() || " -_".contains(sign)) {
                continue;
            }
            last.body.end = line_start;
        }
        found.push(Section {
            name,
            header: at..close + 1,
            argument: close + 1..line_end,
            body: (line_end + 1).min(bytes.len())..bytes.len(),
        });
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn sections_end_where_the_next_begins() {
        let text = b"  [Molden Format]\n[Atoms] AU\nH 1 1 0 0 0\n x [no]\n\t[GTO]\r\n";
        let names: Vec<(String, &[u8])> = sections(text, &crate::grammar::marks::marks(text, &|_| ()).brackets)
            .into_iter()
            .map(|section| (section.name, &text[section.body]))
            .collect();
        assert_eq!(names[1], ("ATOMS".to_owned(), &b"H 1 1 0 0 0\n x [no]\n"[..]));
        assert_eq!(names.iter().map(|entry| entry.0.as_str()).collect::<Vec<_>>(), ["MOLDEN FORMAT", "ATOMS", "GTO"]);
    }
}
