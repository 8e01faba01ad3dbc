//! Writing a Molden file again with other orbitals or nuclei; every other byte stays.
//!
//! Here: blocks of `[MO]`, coordinates of `[Atoms]`. Not here: in which convention coefficients are written
//! (`wavefunction::convention`), symmetry labels alone (`model::write_labels`).

use super::atoms::LengthUnit;
use super::{Findings, RawMolden};
use crate::diagnostic::Span;
use std::fmt::Write as _;

/// An orbital to be written in the place of one of the file.
#[derive(Debug, Clone, PartialEq)]
pub struct Replacement<'a> {
    /// `Sym=`.
    pub symmetry: &'a str,
    /// `Ene=`, hartree, where the file gives energies.
    pub energy: Option<f64>,
    /// `Occup=`, where the file gives occupations.
    pub occupation: Option<f64>,
    /// One coefficient a function, in the order and norm of the file.
    pub coefficients: &'a [f64],
}

/// The file with all orbitals replaced, in the order of the file, and the nuclei where they are given (bohr).
///
/// `orbitals` are those of alpha, then of beta, each in the order of the file, as `RawMolden` holds them by spin.
#[must_use]
pub fn rewrite(
    bytes: &[u8],
    raw: &RawMolden,
    orbitals: &[Vec<Replacement<'_>>],
    nuclei: Option<&[[f64; 3]]>,
    angstrom_per_bohr: f64,
) -> Vec<u8> {
    let crlf = memchr::memchr(b'\n', bytes).is_some_and(|at| at > 0 && bytes[at - 1] == b'\r');
    let line_end = if crlf { "\r\n" } else { "\n" };
    let mut edits: Vec<(Span, String)> = Vec::new();
    if let Some(nuclei) = nuclei {
        let scale = if raw.unit == Some(LengthUnit::Angstrom) { angstrom_per_bohr } else { 1.0 };
        for (atom, place) in raw.atoms.iter().zip(nuclei) {
            edits.push((coordinates(bytes, &atom.line), row(&place.map(|x| x * scale))));
        }
    }
    let mut next = [0_usize; 2];
    let orbitals_of_file = raw.headers(bytes).map(|headers| headers.all(&mut Findings::default())).unwrap_or_default();
    for orbital in &orbitals_of_file {
        // A file may hold beta orbitals alone: they are the first set then.
        let spin = usize::from(orbital.beta && orbitals.len() > 1);
        let Some(new) = orbitals.get(spin).and_then(|of_spin| of_spin.get(next[spin])) else { continue };
        next[spin] += 1;
        let start = line_start(bytes, orbital.header.start);
        edits.push((start..orbital.numbers.end, block(new, orbital.beta, line_end)));
    }
    splice(bytes, &edits)
}

/// The bytes with each span replaced by its text; spans ascend and do not overlap.
#[must_use]
pub fn splice(bytes: &[u8], edits: &[(Span, String)]) -> Vec<u8> {
    let mut out = Vec::with_capacity(bytes.len() + edits.iter().map(|edit| edit.1.len()).sum::<usize>());
    let mut at = 0;
    for (span, text) in edits {
        out.extend_from_slice(&bytes[at..span.start]);
        out.extend_from_slice(text.as_bytes());
        at = span.end;
    }
    out.extend_from_slice(&bytes[at..]);
    out
}

fn line_start(bytes: &[u8], at: usize) -> usize {
    memchr::memrchr(b'\n', &bytes[..at]).map_or(0, |newline| newline + 1)
}

/// From the first of the last three words to the end of the line.
fn coordinates(bytes: &[u8], line: &Span) -> Span {
    let words = super::numbers::words(bytes, line.clone());
    let count = words.len();
    // A line of four words has x first, one of six or more has it fourth.
    let first = if count == 4 { 1 } else { 3 };
    let start = words.get(first).map_or(line.end, |word| word.start);
    let end = words.get(first + 2).map_or(line.end, |word| word.end);
    start..end
}

fn row(place: &[f64; 3]) -> String {
    place.iter().map(|x| format!("{x:.14}")).collect::<Vec<_>>().join("  ")
}

fn block(orbital: &Replacement<'_>, beta: bool, line_end: &str) -> String {
    let mut text = String::with_capacity(32 * orbital.coefficients.len() + 96);
    let _ = write!(text, " Sym= {}{line_end}", orbital.symmetry);
    if let Some(energy) = orbital.energy {
        let _ = write!(text, " Ene= {}{line_end}", scientific(energy));
    }
    let _ = write!(text, " Spin= {}{line_end}", if beta { "Beta" } else { "Alpha" });
    if let Some(occupation) = orbital.occupation {
        let _ = write!(text, " Occup= {occupation:.8}{line_end}");
    }
    for (function, value) in orbital.coefficients.iter().enumerate() {
        let _ = write!(text, "{:6} {}{line_end}", function + 1, scientific(*value));
    }
    text
}

/// All digits of a double in a form that Fortran and C read: ` 1.2345678901234567E-01`.
fn scientific(value: f64) -> String {
    let text = format!("{value:.16e}");
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    let (sign, digits) = exponent.strip_prefix('-').map_or(('+', exponent), |digits| ('-', digits));
    let padded = format!("{mantissa}E{sign}{digits:0>2}");
    format!("{padded:>23}")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_written_as_fortran_reads_them() {
        for (value, text) in
            [(0.125, " 1.2500000000000000E-01"), (-20.5, "-2.0500000000000000E+01"), (0.0, " 0.0000000000000000E+00")]
        {
            assert_eq!(scientific(value), text);
        }
        for value in [1e-120, -1.0 / 3.0, 1e200] {
            assert_eq!(scientific(value).trim().parse(), Ok(value));
        }
    }

    #[test]
    fn only_orbitals_and_coordinates_change() {
        let text = b"[Molden Format]\n[Atoms] Angs\nH 1 1 0.0 0.0 0.5 kept\n[GTO]\n1 0\ns 1\n1.0 1.0\n\n[MO]\n\
                     Ene= 1.0\nOccup= 2\n1 1.0\n[FREQ]\n 12.0\n";
        let (raw, findings) = crate::grammar::read(text, &|_| ());
        assert!(!findings.any_error());
        let new = Replacement { symmetry: "1a1", energy: Some(-0.5), occupation: Some(2.0), coefficients: &[0.25] };
        let out = rewrite(text, &raw, &[vec![new]], Some(&[[0.0, 0.0, 2.0]]), 0.5);
        let out = String::from_utf8(out).expect("ASCII");
        assert!(out.starts_with("[Molden Format]\n[Atoms] Angs\nH 1 1 "), "{out}");
        assert!(
            out.contains("1.00000000000000 kept\n[GTO]\n1 0\ns 1\n1.0 1.0\n\n[MO]\n Sym= 1a1\n Ene= -5.0"),
            "{out}"
        );
        assert!(out.ends_with("     1  2.5000000000000000E-01\n[FREQ]\n 12.0\n"), "{out}");
    }
}
