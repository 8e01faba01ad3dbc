//! From what a Molden file says to what it means: units settled, indices checked, coefficients filled.
//!
//! Not here: the grammar; normalisation, order and sign of functions.

use super::elements;
use super::{ANGSTROM_PER_BOHR, Atom, Mode, Molecule, Orbital, OrbitalSet, Shell, Spin, Vibrations};
use crate::diagnostic::{Diagnostic, Severity, Span};
use crate::grammar::atoms::{LengthUnit, RawAtom};
use crate::grammar::orbitals::{RawOrbital, fill_row};
use crate::grammar::{self, Findings, RawMolden, numbers};
use nalgebra::Point3;
use ndarray::{Array2, Axis, parallel::prelude::*};

/// A result with warnings, or all findings with at least one error.
pub type Reading = Result<(Molecule, Vec<Diagnostic>), Vec<Diagnostic>>;

/// Coefficients may need this many bytes for each byte of the file, beside [`SPARSE_FLOOR`]: a listed
/// coefficient takes at least 4 bytes, but zeros may be left out.
const SPARSE_RATIO: usize = 64;
const SPARSE_FLOOR: usize = 64 << 20;
/// An atomic-number column may name no more than this.
const CHARGE_LIMIT: f64 = 200.0;

/// Reads a Molden file.
///
/// # Errors
/// All findings, in the order of the file, when one of them is an error.
pub fn read_molden(bytes: &[u8]) -> Reading {
    let (raw, mut findings) = grammar::read(bytes);
    let molecule = mean(bytes, &raw, &mut findings);
    let mut list = findings.0;
    list.sort_by_key(|finding| (finding.span.start, finding.severity));
    match molecule {
        Some(molecule) if list.iter().all(|finding| finding.severity == Severity::Warning) => Ok((molecule, list)),
        _ => Err(list),
    }
}

fn mean(bytes: &[u8], raw: &RawMolden, findings: &mut Findings) -> Option<Molecule> {
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
    for (who, electrons) in &raw.cores {
        let name = text(who);
        let electrons = u32::try_from(*electrons).unwrap_or(0);
        match name.parse::<usize>() {
            Ok(number) => {
                if let Some(at) = raw.atoms.iter().position(|atom| atom.number == number) {
                    atoms[at].core_electrons = electrons;
                }
            }
            Err(_) => {
                let element = elements::atomic_number(&name);
                for atom in atoms.iter_mut().filter(|atom| atom.element == element) {
                    atom.core_electrons = electrons;
                }
            }
        }
    }
    let shells = mean_shells(raw, findings);
    if findings.any_error() {
        return None;
    }
    let mut molecule = Molecule {
        title: raw.title.as_ref().map(text).unwrap_or_default(),
        atoms,
        shells,
        orbital_sets: Vec::new(),
        vibrations: mean_vibrations(bytes, raw, findings),
    };
    molecule.orbital_sets = mean_orbitals(bytes, raw, molecule.n_functions(), findings);
    (!findings.any_error()).then_some(molecule)
}

/// An atom known by its name alone; a ghost where the name means no element. Position in bohr.
#[must_use]
pub fn named_atom(name: &str, position: [f64; 3]) -> Atom {
    let element = elements::atomic_number(name);
    Atom {
        name: name.to_owned(),
        element,
        charge: f64::from(element),
        ghost: element == 0,
        core_electrons: 0,
        position: Point3::from(position),
    }
}

/// The name wins over the number, which may be an effective charge; a ghost is named so or has charge 0.
fn mean_atom(name: &str, raw: &RawAtom, scale: f64, bytes: &[u8], findings: &mut Findings) -> Atom {
    let lower = name.to_lowercase();
    let ghost_word = ["ghost", "gh", "bq"]
        .iter()
        .find(|word| lower.starts_with(**word))
        .filter(|_| elements::atomic_number(name) == 0);
    let inner: &str = ghost_word.map_or(name, |word| name[word.len()..].trim_start_matches(['(', '-', '_', ':']));
    let mut element = elements::atomic_number(inner);
    if !(0.0..=CHARGE_LIMIT).contains(&raw.charge) {
        findings.expected(bytes, raw.line.clone(), "an atomic number from 0 up in the third column");
    }
    let ghost = ghost_word.is_some() || raw.charge == 0.0 || (element == 0 && lower.starts_with('x'));
    if element == 0 && !ghost {
        // No element by name: the number decides, where it is one.
        element = if raw.charge.fract() == 0.0 && (1.0..=118.0).contains(&raw.charge) { raw.charge as u8 } else { 0 };
        findings.warning(
            raw.name.clone(),
            format!("`{name}` names no element; the atomic number {} is used", raw.charge),
            "name atoms by their symbols",
        );
    }
    let below = f64::from(element) - raw.charge;
    if !ghost && below < 0.0 {
        findings.error(
            raw.line.clone(),
            format!("{} has atomic number {element}, found {}", elements::symbol(element), raw.charge),
            "name and atomic number of an atom must agree, unless the number is an effective charge below it",
        );
    }
    let core_electrons = if ghost || below <= 0.0 || below.fract() != 0.0 { 0 } else { below as u32 };
    Atom {
        name: name.to_owned(),
        element,
        charge: raw.charge,
        ghost,
        core_electrons,
        position: Point3::from(raw.position.map(|x| x * scale)),
    }
}

fn mean_shells(raw: &RawMolden, findings: &mut Findings) -> Vec<Shell> {
    // Cartesian unless a tag says otherwise; [9G] speaks for h and i too, unless they have their own.
    let mut pure = [false; 7];
    let mut said: [Option<(bool, usize)>; 7] = [None; 7];
    for (place, tag) in raw.tags.iter().enumerate() {
        for &(l, says) in &tag.says {
            let implied = l > 4 && tag.says.len() > 2;
            if let Some((before, _)) = said[l].filter(|(before, _)| *before != says && !implied) {
                let word = |pure: bool| if pure { "pure" } else { "Cartesian" };
                findings.error(
                    tag.span.clone(),
                    format!("this tag says {} for a degree that an earlier one says {} for", word(says), word(before)),
                    "keep one of the tags",
                );
            }
            if said[l].is_none() || !implied {
                said[l] = Some((says, place));
                pure[l] = says;
            }
        }
    }
    raw.shells
        .iter()
        .filter_map(|shell| {
            let Some(atom_idx) = raw.atoms.iter().position(|atom| atom.number == shell.atom) else {
                findings.error(
                    shell.atom_line.clone(),
                    format!("expected an atom of [Atoms], found number {}", shell.atom),
                    "atoms are counted by the second column of [Atoms]",
                );
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

fn mean_orbitals(bytes: &[u8], raw: &RawMolden, n_functions: usize, findings: &mut Findings) -> Vec<OrbitalSet> {
    let Some(header) = raw.orbitals_header.clone() else { return Vec::new() };
    if raw.orbitals.is_empty() {
        return Vec::new();
    }
    if n_functions == 0 {
        findings.error(
            header,
            "[MO] stands without basis functions: [GTO] is missing or empty",
            "labels need the functions of the orbitals",
        );
        return Vec::new();
    }
    let needed = raw.orbitals.len().saturating_mul(n_functions).saturating_mul(8);
    if needed > bytes.len().saturating_mul(SPARSE_RATIO).saturating_add(SPARSE_FLOOR) {
        findings.error(
            header,
            format!(
                "{} orbitals over {n_functions} functions need {needed} bytes, too many for a file of {} bytes",
                raw.orbitals.len(),
                bytes.len()
            ),
            "most coefficients are missing from the file",
        );
        return Vec::new();
    }
    let mut sets = Vec::new();
    for (spin, beta) in [(Spin::Alpha, false), (Spin::Beta, true)] {
        let of_spin: Vec<&RawOrbital> = raw.orbitals.iter().filter(|orbital| orbital.beta == beta).collect();
        if of_spin.is_empty() {
            continue;
        }
        let mut coefficients = Array2::zeros((of_spin.len(), n_functions));
        let mistakes: Vec<Findings> = coefficients
            .axis_iter_mut(Axis(0))
            .into_par_iter()
            .zip(&of_spin)
            .map(|(mut row, orbital)| {
                let mut findings = Findings::default();
                if let Some(row) = row.as_slice_mut() {
                    fill_row(bytes, orbital.numbers.clone(), row, &mut findings);
                }
                if findings.0.is_empty() && row.iter().all(|value| *value == 0.0) {
                    findings.error(
                        orbital.header.clone(),
                        "expected coefficients of this orbital, found none but zeros",
                        "the file may be cut short",
                    );
                }
                findings
            })
            .collect();
        for finding in mistakes.into_iter().flat_map(|mistakes| mistakes.0) {
            findings.push(finding.severity, finding.span, finding.message, finding.help);
        }
        let orbitals = of_spin
            .iter()
            .map(|orbital| Orbital {
                energy: orbital.energy,
                occupation: orbital.occupation,
                symmetry: orbital
                    .symmetry
                    .as_ref()
                    .map(|span| String::from_utf8_lossy(&bytes[span.clone()]).into_owned()),
                header: orbital.header.clone(),
                symmetry_value: orbital.symmetry.clone(),
            })
            .collect();
        sets.push(OrbitalSet { spin, orbitals, coefficients });
    }
    sets
}

fn mean_vibrations(bytes: &[u8], raw: &RawMolden, findings: &mut Findings) -> Option<Vibrations> {
    let n_modes = raw.frequencies.len().max(raw.displacements.len());
    if n_modes == 0 {
        return None;
    }
    let atoms: Vec<(String, Point3<f64>)> = raw
        .mode_atoms
        .iter()
        .map(|(name, position)| (String::from_utf8_lossy(&bytes[name.clone()]).into_owned(), Point3::from(*position)))
        .collect();
    if !raw.displacements.is_empty() && !raw.frequencies.is_empty() && raw.displacements.len() != raw.frequencies.len()
    {
        findings.warning(
            0..0,
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
            0..0,
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
        return Err(findings.0);
    }
    let title = String::from_utf8_lossy(&bytes[comment]).trim().to_owned();
    Ok((Molecule { title, atoms, shells: Vec::new(), orbital_sets: Vec::new(), vibrations: None }, findings.0))
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
    let mut edits: Vec<(Span, String)> = Vec::new();
    for (orbital, label) in
        molecule.orbital_sets.iter().zip(labels).flat_map(|(set, labels)| set.orbitals.iter().zip(labels))
    {
        match &orbital.symmetry_value {
            Some(value) if value.is_empty() => edits.push((value.clone(), format!(" {label}"))),
            Some(value) => edits.push((value.clone(), label.clone())),
            None => edits.push((orbital.header.start..orbital.header.start, format!(" Sym= {label}\n"))),
        }
    }
    edits.sort_by_key(|edit| edit.0.start);
    let mut out = Vec::with_capacity(bytes.len() + 16 * edits.len());
    let mut at = 0;
    for (span, text) in edits {
        out.extend_from_slice(&bytes[at..span.start]);
        out.extend_from_slice(text.as_bytes());
        at = span.end;
    }
    out.extend_from_slice(&bytes[at..]);
    out
}
