//! From what a Molden file says to what it means: units settled, indices checked, coefficients filled.
//!
//! Not here: the grammar; normalisation, order and sign of functions.

use super::atoms::{AtomsByNumber, mean_atom, named_atom, set_cores};
use super::{ANGSTROM_PER_BOHR, Atom, Mode, Molecule, Orbital, OrbitalSet, Shell, Spin, Vibrations};
use crate::diagnostic::{Diagnostic, Span};
use crate::grammar::atoms::LengthUnit;
use crate::grammar::orbitals::{Beyond, Met, RawOrbital, fill_row};
use crate::grammar::{self, Findings, RawMolden, numbers};
use nalgebra::Point3;
use ndarray::Array2;
use rayon::prelude::*;

/// A result with warnings, or all findings with at least one error.
pub type Reading = Result<(Molecule, Vec<Diagnostic>), Vec<Diagnostic>>;

/// Coefficients may need this many bytes for each byte of the file, beside [`SPARSE_FLOOR`]: a listed
/// coefficient takes at least 4 bytes, but zeros may be left out.
const SPARSE_RATIO: usize = 64;
const SPARSE_FLOOR: usize = 64 << 20;
/// Letters of the shells by angular momentum.
const SHELL_LETTERS: [char; 7] = ['s', 'p', 'd', 'f', 'g', 'h', 'i'];

/// Reads a Molden file.
///
/// # Errors
/// All findings, in the order of the file, when one of them is an error.
pub fn read_molden(bytes: &[u8]) -> Reading {
    read_molden_passing(bytes, &|_| ())
}

/// As [`read_molden`]; `passed` is told each stretch of the input that is not needed again, but for messages.
///
/// # Errors
/// As [`read_molden`].
pub fn read_molden_passing(bytes: &[u8], passed: &dyn Fn(Span)) -> Reading {
    let (raw, mut findings) = grammar::read(bytes, passed);
    let molecule = mean(bytes, &raw, passed, &mut findings);
    match molecule.filter(|_| !findings.any_error()) {
        Some(molecule) => Ok((molecule, findings.into_sorted())),
        None => Err(findings.into_sorted()),
    }
}

fn mean(bytes: &[u8], raw: &RawMolden, passed: &dyn Fn(Span), findings: &mut Findings) -> Option<Molecule> {
    let text = |span: &Span| String::from_utf8_lossy(&bytes[span.clone()]).into_owned();
    let scale = if raw.unit == Some(LengthUnit::Angstrom) { 1.0 / ANGSTROM_PER_BOHR } else { 1.0 };
    let mut atoms: Vec<Atom> =
        raw.atoms.iter().map(|atom| mean_atom(&text(&atom.name), atom, scale, bytes, findings)).collect();
    if atoms.is_empty() && !findings.any_error() {
        if raw.mode_atoms.is_empty() {
            let at = raw.atoms_header.clone().unwrap_or(0..0);
            findings.error(at, "expected atoms: [Atoms] is missing or empty", "every use of the file needs its nuclei");
            return None;
        }
        // A file of normal modes alone: its coordinates are the nuclei, in bohr.
        atoms = raw.mode_atoms.iter().map(|(name, position)| named_atom(&text(name), *position)).collect();
    }
    let by_number = AtomsByNumber::new(&raw.atoms);
    set_cores(bytes, raw, &by_number, &mut atoms, findings);
    let shells = mean_shells(raw, &by_number, findings);
    if findings.any_error() {
        // What is wrong with the orbitals' keys is worth telling all the same.
        let _ = raw.headers(bytes).map(|headers| headers.all(findings));
        return None;
    }
    let mut molecule = Molecule {
        title: raw.title.as_ref().map(text).unwrap_or_default(),
        atoms,
        shells,
        orbital_sets: Vec::new(),
        vibrations: mean_vibrations(bytes, raw, findings),
    };
    molecule.orbital_sets = mean_orbitals(bytes, raw, &molecule.shells, passed, findings);
    (!findings.any_error()).then_some(molecule)
}

/// Pure or Cartesian by degree: Cartesian unless a tag says otherwise; what a tag says outright wins over
/// what another implies.
fn kinds(raw: &RawMolden, findings: &mut Findings) -> [bool; 7] {
    let mut said: [Option<bool>; 7] = [None; 7];
    for tag in &raw.tags {
        for &(l, says) in tag.says {
            if let Some(before) = said[l].filter(|before| *before != says) {
                let word = |pure: bool| if pure { "pure" } else { "Cartesian" };
                findings.error(
                    tag.span.clone(),
                    format!(
                        "this tag says that {} shells are {}, an earlier one that they are {}",
                        SHELL_LETTERS[l],
                        word(says),
                        word(before)
                    ),
                    "keep one of the tags",
                );
            }
            said[l] = Some(says);
        }
    }
    let mut pure = [false; 7];
    for &(l, says) in raw.tags.iter().flat_map(|tag| tag.implies) {
        pure[l] = says;
    }
    for (pure, says) in pure.iter_mut().zip(said) {
        *pure = says.unwrap_or(*pure);
    }
    pure
}

fn mean_shells(raw: &RawMolden, by_number: &AtomsByNumber, findings: &mut Findings) -> Vec<Shell> {
    let pure = kinds(raw, findings);
    // Where an atom's line could not be read, its shells are no mistake of their own.
    let atoms_are_sound = !findings.any_error();
    raw.shells
        .iter()
        .filter_map(|shell| {
            let Some(atom_idx) = by_number.place(shell.atom) else {
                if atoms_are_sound {
                    findings.error(
                        shell.atom_line.clone(),
                        format!("expected an atom of [Atoms], found number {}", shell.atom),
                        "atoms are counted by the second column of [Atoms]",
                    );
                }
                return None;
            };
            if shell.coefficients.iter().all(|value| *value == 0.0) {
                findings.error(
                    shell.line.clone(),
                    "expected a coefficient other than 0 in a shell",
                    "a shell of zeros has no norm",
                );
                return None;
            }
            Some(Shell {
                atom_idx,
                l: shell.l,
                pure: shell.l > 1 && pure[shell.l],
                exponents: shell.exponents.clone(),
                coefficients: shell.coefficients.clone(),
            })
        })
        .collect()
}

/// What may be wrong when the orbitals use more functions than the shells have.
fn missing_functions(shells: &[Shell], used: usize) -> String {
    let n_functions: usize = shells.iter().map(Shell::n_functions).sum();
    let all_cartesian: usize = shells.iter().map(|shell| (shell.l + 1) * (shell.l + 2) / 2).sum();
    if all_cartesian == used {
        return "all shells Cartesian would make up that number: a tag such as [5D] may be wrong".to_owned();
    }
    let missing = used - n_functions;
    let dropped = [(11, "pure h"), (21, "Cartesian h"), (13, "pure i")]
        .iter()
        .find(|(size, _)| missing.is_multiple_of(*size))
        .map(|(size, name)| (missing / size, name));
    match dropped {
        Some((1, name)) => {
            format!("{missing} functions are missing, one shell {name}: some engines drop h and higher shells")
        }
        Some((n, name)) => {
            format!("{missing} functions are missing, {n} shells {name}: some engines drop h and higher shells")
        }
        None => format!("{missing} functions are missing: shells may have been lost, or a tag such as [5D] is wrong"),
    }
}

/// Orbitals of one spin as they are read.
struct Growing {
    spin: Spin,
    orbitals: Vec<Orbital>,
    /// Rows one after the other.
    coefficients: Vec<f64>,
    beyond: Option<Beyond>,
}

impl Growing {
    fn new(spin: Spin) -> Self {
        Self { spin, orbitals: Vec::new(), coefficients: Vec::new(), beyond: None }
    }

    /// Reads the numbers of more orbitals, on all cores.
    fn extend(&mut self, bytes: &[u8], more: &[&RawOrbital], n_functions: usize, findings: &mut Findings) {
        let filled = self.coefficients.len();
        self.coefficients.resize(filled + more.len() * n_functions, 0.0);
        let mistakes: Vec<(Findings, Option<Beyond>)> = self.coefficients[filled..]
            .par_chunks_exact_mut(n_functions)
            .zip(more)
            .map_init(Met::default, |met, (row, orbital)| {
                let mut findings = Findings::default();
                let beyond = fill_row(bytes, orbital.numbers.clone(), row, met, &mut findings);
                if findings.is_empty() && beyond.is_none() && row.iter().all(|value| *value == 0.0) {
                    findings.error(
                        orbital.header.clone(),
                        "expected coefficients of this orbital, found none but zeros",
                        "the file may be cut short",
                    );
                }
                (findings, beyond)
            })
            .collect();
        for (mistakes, far) in mistakes {
            findings.append(mistakes);
            if let Some(far) = far {
                let first = self.beyond.get_or_insert_with(|| far.clone());
                first.largest = first.largest.max(far.largest);
            }
        }
        self.orbitals.extend(more.iter().map(|orbital| Orbital {
            energy: orbital.energy,
            occupation: orbital.occupation,
            symmetry: orbital.symmetry.as_ref().map(|span| String::from_utf8_lossy(&bytes[span.clone()]).into_owned()),
            header: orbital.header.clone(),
            symmetry_value: orbital.symmetry.clone(),
        }));
    }

    /// The whole set, None without orbitals.
    fn finish(self, shells: &[Shell], n_functions: usize, findings: &mut Findings) -> Option<OrbitalSet> {
        if let Some(beyond) = self.beyond {
            findings.error(
                beyond.line,
                format!("the orbitals use {} functions, [GTO] has {n_functions}", beyond.largest),
                missing_functions(shells, beyond.largest),
            );
        }
        let mut coefficients = self.coefficients;
        coefficients.shrink_to_fit();
        let coefficients = Array2::from_shape_vec((self.orbitals.len(), n_functions), coefficients).ok()?;
        (!self.orbitals.is_empty()).then_some(OrbitalSet { spin: self.spin, orbitals: self.orbitals, coefficients })
    }
}

/// Bytes of `[MO]` that are read at a time.
const STRETCH: usize = 16 << 20;

fn mean_orbitals(
    bytes: &[u8],
    raw: &RawMolden,
    shells: &[Shell],
    passed: &dyn Fn(Span),
    findings: &mut Findings,
) -> Vec<OrbitalSet> {
    let n_functions: usize = shells.iter().map(Shell::n_functions).sum();
    let (Some(section), Some(mut headers)) = (&raw.orbitals, raw.headers(bytes)) else { return Vec::new() };
    let room = bytes.len().saturating_mul(SPARSE_RATIO).saturating_add(SPARSE_FLOOR);
    let needed = |n_orbitals: usize| n_orbitals.saturating_mul(n_functions).saturating_mul(8);
    let mut n_orbitals = 0;
    let mut spins = [Growing::new(Spin::Alpha), Growing::new(Spin::Beta)];
    while let Some(orbitals) = headers.next_orbitals(STRETCH, findings) {
        n_orbitals += orbitals.len();
        if n_functions > 0 && needed(n_orbitals) <= room {
            for (growing, beta) in spins.iter_mut().zip([false, true]) {
                let of_spin: Vec<&RawOrbital> = orbitals.iter().filter(|orbital| orbital.beta == beta).collect();
                growing.extend(bytes, &of_spin, n_functions, findings);
            }
        }
        if let (Some(first), Some(last)) = (orbitals.first(), orbitals.last()) {
            passed(first.header.start..last.numbers.end);
        }
    }
    if n_orbitals > 0 && n_functions == 0 {
        findings.error(
            section.header.clone(),
            "[MO] stands without basis functions: [GTO] is missing or empty",
            "labels need the functions of the orbitals",
        );
    }
    if needed(n_orbitals) > room {
        findings.error(
            section.header.clone(),
            format!(
                "{n_orbitals} orbitals over {n_functions} functions need {} bytes, too many for a file of {} bytes",
                needed(n_orbitals),
                bytes.len()
            ),
            "most coefficients are missing from the file",
        );
        return Vec::new();
    }
    spins.into_iter().filter_map(|growing| growing.finish(shells, n_functions, findings)).collect()
}

fn mean_vibrations(bytes: &[u8], raw: &RawMolden, findings: &mut Findings) -> Option<Vibrations> {
    let n_modes = raw.frequencies.len().max(raw.displacements.len());
    if n_modes == 0 {
        return None;
    }
    let header = raw.modes_header.clone().unwrap_or(0..0);
    let atoms: Vec<(String, Point3<f64>)> = raw
        .mode_atoms
        .iter()
        .map(|(name, position)| (String::from_utf8_lossy(&bytes[name.clone()]).into_owned(), Point3::from(*position)))
        .collect();
    if !raw.displacements.is_empty() && !raw.frequencies.is_empty() && raw.displacements.len() != raw.frequencies.len()
    {
        findings.warning(
            header.clone(),
            format!(
                "[FREQ] lists {} wavenumbers, [FR-NORM-COORD] {} modes",
                raw.frequencies.len(),
                raw.displacements.len()
            ),
            "modes are paired in order as far as both go",
        );
    }
    if let Some(mode) = raw.displacements.iter().position(|mode| mode.len() != 3 * atoms.len()) {
        findings.error(
            header,
            format!(
                "vibration {} has {} displacements, expected three for each of {} atoms of [FR-COORD]",
                mode + 1,
                raw.displacements[mode].len(),
                atoms.len()
            ),
            "the file may be cut short",
        );
        return None;
    }
    let modes = (0..n_modes)
        .map(|mode| Mode {
            wavenumber: raw.frequencies.get(mode).copied(),
            intensity: raw.intensities.get(mode).copied(),
            displacements: raw.displacements.get(mode).cloned().unwrap_or_default(),
        })
        .collect();
    Some(Vibrations { atoms, modes })
}

/// Reads a plain XYZ file: nuclei only.
///
/// # Errors
/// As [`read_molden`].
pub fn read_xyz(bytes: &[u8]) -> Reading {
    let (comment, raw, mut findings) = grammar::xyz::read(bytes);
    let mut atoms = Vec::with_capacity(raw.len());
    for (name, position) in raw {
        let text = String::from_utf8_lossy(&bytes[name.clone()]).into_owned();
        let by_number = numbers::whole(text.as_bytes()).and_then(|number| u8::try_from(number).ok());
        let mut atom = named_atom(&text, position.map(|x| x / ANGSTROM_PER_BOHR));
        if let Some(number) = by_number.filter(|number| (1..=118).contains(number)) {
            (atom.element, atom.charge, atom.ghost) = (number, f64::from(number), false);
        } else if atom.element == 0 && !text.to_lowercase().starts_with('x') {
            findings.expected(bytes, name, "a symbol or an atomic number");
        }
        atoms.push(atom);
    }
    if findings.any_error() {
        return Err(findings.into_sorted());
    }
    let title = String::from_utf8_lossy(&bytes[comment]).trim().to_owned();
    Ok((
        Molecule { title, atoms, shells: Vec::new(), orbital_sets: Vec::new(), vibrations: None },
        findings.into_sorted(),
    ))
}

/// Whether a file opens like one in Molden format: its first line with anything on it starts with a bracket.
#[must_use]
pub fn looks_like_molden(bytes: &[u8]) -> bool {
    numbers::lines(bytes, 0..bytes.len())
        .find_map(|line| bytes[line].iter().copied().find(|&byte| !numbers::is_blank(byte)))
        .is_some_and(|byte| byte == b'[')
}

/// The same file with every orbital's `Sym=` line filled, all other bytes untouched.
///
/// `labels` holds one text an orbital, spin by spin, in file order; an orbital without a `Sym=` line gets one
/// before its other keys.
#[must_use]
pub fn write_labels(bytes: &[u8], molecule: &Molecule, labels: &[Vec<String>]) -> Vec<u8> {
    let crlf = memchr::memchr(b'\n', bytes).is_some_and(|at| at > 0 && bytes[at - 1] == b'\r');
    let line_end = if crlf { "\r\n" } else { "\n" };
    let mut edits: Vec<(Span, String)> = Vec::new();
    for (orbital, label) in
        molecule.orbital_sets.iter().zip(labels).flat_map(|(set, labels)| set.orbitals.iter().zip(labels))
    {
        match &orbital.symmetry_value {
            Some(value) if value.is_empty() => edits.push((value.clone(), format!(" {label}"))),
            Some(value) => edits.push((value.clone(), label.clone())),
            None => edits.push((orbital.header.start..orbital.header.start, format!(" Sym= {label}{line_end}"))),
        }
    }
    edits.sort_by_key(|edit| edit.0.start);
    grammar::write::splice(bytes, &edits)
}
