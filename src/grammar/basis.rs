//! `[GTO]`: contracted Gaussians, atom by atom.
//!
//! ```text
//! gto       = { atom-line { shell } }
//! atom-line = atom-number [ "0" ]
//! shell     = label primitives [ scale ] { exponent coefficient [ coefficient ] }
//! label     = "s" | "p" | "d" | "f" | "g" | "h" | "i" | "sp"
//! ```
//! Blank lines may stand anywhere. Not here: normalisation, pure or Cartesian.

use super::Findings;
use super::atoms::trimmed;
use super::numbers::{lines, real, whole, words};
use super::sections::Section;
use crate::diagnostic::Span;

/// One shell; an sp shell has been split, s then p.
#[derive(Debug, Clone, PartialEq)]
pub struct RawShell {
    /// The label's line.
    pub line: Span,
    /// Atom number as written, from 1.
    pub atom: usize,
    /// Where the atom number stands.
    pub atom_line: Span,
    /// Angular momentum.
    pub l: usize,
    /// Exponents and coefficients as written.
    pub exponents: Vec<f64>,
    /// One an exponent.
    pub coefficients: Vec<f64>,
}

/// A shell being read: how many primitives are still to come.
struct Open {
    l: usize,
    sp: bool,
    line: Span,
    expected: usize,
    exponents: Vec<f64>,
    coefficients: Vec<f64>,
    p_coefficients: Vec<f64>,
    sound: bool,
}

/// Angular momentum of a label; `Some((0, true))` for sp.
fn label(word: &[u8]) -> Option<(usize, bool)> {
    let word = word.to_ascii_lowercase();
    if word == b"sp" || word == b"l" {
        return Some((0, true));
    }
    let [letter] = word[..] else { return None };
    b"spdfghi".iter().position(|other| *other == letter).map(|l| (l, false))
}

/// All shells of the section in its order.
pub fn shells(bytes: &[u8], section: &Section, findings: &mut Findings) -> Vec<RawShell> {
    let mut shells = Vec::new();
    let mut atom: Option<(usize, Span)> = None;
    let mut open: Option<Open> = None;
    // Below a shell line that cannot be read its primitives are no mistakes of their own.
    let mut passing_over = false;
    for line in lines(bytes, section.body.clone()) {
        let words = words(bytes, line.clone());
        let Some(first) = words.first().cloned() else { continue };
        if let Some(shell) = open.as_mut().filter(|shell| shell.exponents.len() < shell.expected) {
            if label(&bytes[first.clone()]).is_none() {
                primitive(bytes, &words, shell, findings);
                continue;
            }
            findings.error(
                trimmed(&words),
                format!("expected {} primitives, found the next shell after {}", shell.expected, shell.exponents.len()),
                "the number after the shell's label must match its lines",
            );
        }
        close(open.take(), atom.as_ref(), &mut shells);
        if let Some((l, sp)) = label(&bytes[first.clone()]) {
            if atom.is_none() {
                findings.error(
                    first,
                    "expected an atom number before its first shell",
                    "[GTO] goes atom by atom: number, then shells",
                );
                atom = Some((0, line.clone()));
            }
            open = header(bytes, &words, l, sp, findings);
            passing_over = open.is_none();
        } else if let Some(number) = whole(&bytes[first.clone()]).filter(|_| words.len() <= 2) {
            atom = Some((number, first));
            passing_over = false;
        } else if bytes[first.clone()].iter().all(u8::is_ascii_alphabetic) {
            findings.expected(bytes, first, "a shell label: s, p, d, f, g, h, i or sp");
            passing_over = true;
        } else if !passing_over {
            findings.expected(bytes, trimmed(&words), "an atom number or a shell label");
        }
    }
    if let Some(shell) = open.as_ref().filter(|shell| shell.exponents.len() < shell.expected) {
        findings.error(
            shell.line.clone(),
            format!("expected {} primitives, found {} before [GTO] ends", shell.expected, shell.exponents.len()),
            "the file may be cut short",
        );
    }
    close(open, atom.as_ref(), &mut shells);
    shells
}

fn header(bytes: &[u8], words: &[Span], l: usize, sp: bool, findings: &mut Findings) -> Option<Open> {
    let Some(count) = words.get(1) else {
        findings.error(
            trimmed(words),
            "expected the number of primitives after the shell's label",
            "such as: s 3 1.00",
        );
        return None;
    };
    let Some(expected) = whole(&bytes[count.clone()]) else {
        findings.expected(bytes, count.clone(), "the number of primitives, a whole number");
        return None;
    };
    if expected == 0 {
        findings.error(count.clone(), "expected at least one primitive, found 0", "leave an empty shell out");
    }
    if let Some(scale) = words.get(2).map(|word| (word.clone(), real(&bytes[word.clone()])))
        && scale.1.is_none_or(|value| value != 0.0 && (value - 1.0).abs() > 1e-12)
    {
        findings.warning(
            scale.0,
            "the scale factor of a shell has lost its function in the format and is not applied",
            "should the exponents look wrong, multiply them by its square",
        );
    }
    Some(Open {
        l,
        sp,
        line: trimmed(words),
        expected,
        exponents: Vec::new(),
        coefficients: Vec::new(),
        p_coefficients: Vec::new(),
        sound: true,
    })
}

fn primitive(bytes: &[u8], words: &[Span], shell: &mut Open, findings: &mut Findings) {
    let wanted = if shell.sp { 3 } else { 2 };
    let mut numbers = [0.0; 3];
    if words.len() < wanted {
        let what = if shell.sp { "an exponent and two coefficients (sp)" } else { "an exponent and a coefficient" };
        findings.expected(bytes, trimmed(words), what);
        shell.sound = false;
    }
    for (number, word) in numbers.iter_mut().zip(words.iter().take(wanted)) {
        if let Some(value) = real(&bytes[word.clone()]) {
            *number = value;
        } else {
            findings.expected(bytes, word.clone(), "a real number");
            shell.sound = false;
        }
    }
    if shell.sound && numbers[0] <= 0.0 {
        findings.error(
            words[0].clone(),
            "expected an exponent above zero",
            "a Gaussian with such an exponent has no norm",
        );
        shell.sound = false;
    }
    shell.exponents.push(numbers[0]);
    shell.coefficients.push(numbers[1]);
    shell.p_coefficients.push(numbers[2]);
}

/// Keeps a shell that is complete and sound.
fn close(open: Option<Open>, atom: Option<&(usize, Span)>, shells: &mut Vec<RawShell>) {
    let (Some(open), Some((atom, atom_line))) = (open, atom) else { return };
    if !open.sound || open.exponents.len() < open.expected || open.expected == 0 {
        return;
    }
    let shell = |l: usize, coefficients: Vec<f64>| RawShell {
        line: open.line.clone(),
        atom: *atom,
        atom_line: atom_line.clone(),
        l,
        exponents: open.exponents.clone(),
        coefficients,
    };
    if open.sp {
        shells.push(shell(0, open.coefficients.clone()));
        shells.push(shell(1, open.p_coefficients.clone()));
    } else {
        shells.push(shell(open.l, open.coefficients.clone()));
    }
}
