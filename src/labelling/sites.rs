//! Atoms as sites: which are alike, which are bonded.
//!
//! Not here: the search for operations (`group::detect`).

use super::LabelError;
use crate::group::{self, DetectSettings, Detection, Site, Symmetry};
use crate::model::{Atom, Molecule, Shell, elements};

/// Two atoms are bonded when they are nearer than this times the sum of their covalent radii (common practice).
const BOND_FACTOR: f64 = 1.3;

/// Atoms as sites: of one kind when element, ghost status, core and shells are alike.
#[must_use]
pub fn sites(molecule: &Molecule) -> Vec<Site> {
    let mut shells_of: Vec<Vec<&Shell>> = vec![Vec::new(); molecule.atoms.len()];
    for shell in &molecule.shells {
        shells_of[shell.atom_idx].push(shell);
    }
    let alike = |a: usize, b: usize| {
        let (first, second): (&Atom, &Atom) = (&molecule.atoms[a], &molecule.atoms[b]);
        (first.element, first.ghost, first.core_electrons) == (second.element, second.ghost, second.core_electrons)
            && first.charge.to_bits() == second.charge.to_bits()
            && shells_of[a].len() == shells_of[b].len()
            && shells_of[a].iter().zip(&shells_of[b]).all(|(s, t)| {
                (s.l, s.pure, &s.exponents, &s.coefficients) == (t.l, t.pure, &t.exponents, &t.coefficients)
            })
    };
    // A kind is named by its element and the running number of its variety, so the numbers do not depend on the order of atoms of one sort.
    let mut examples: Vec<usize> = Vec::new();
    (0..molecule.atoms.len())
        .map(|atom| {
            let variety = examples.iter().position(|&example| alike(example, atom)).unwrap_or_else(|| {
                examples.push(atom);
                examples.len() - 1
            });
            let element = u32::from(molecule.atoms[examples[variety]].element);
            Site {
                kind: element << 16 | u32::try_from(variety).unwrap_or(u32::MAX),
                position: molecule.atoms[atom].position,
            }
        })
        .collect()
}

/// Pairs of atoms nearer than 1.3 times the sum of their covalent radii, each pair once, first index smaller.
#[must_use]
pub fn bonds(molecule: &Molecule) -> Vec<(usize, usize)> {
    let atoms: Vec<(usize, f64)> = molecule
        .atoms
        .iter()
        .enumerate()
        .filter(|(_, atom)| !atom.ghost)
        .filter_map(|(i, atom)| Some((i, elements::covalent_radius_bohr(atom.element)?)))
        .collect();
    let longest = 2.0 * BOND_FACTOR * atoms.iter().map(|atom| atom.1).fold(0.0, f64::max);
    // Sorted along x, so that only near neighbours are compared.
    let x = |i: usize| molecule.atoms[i].position.x;
    let mut along_x = atoms;
    along_x.sort_by(|a, b| x(a.0).total_cmp(&x(b.0)));
    let mut bonds = Vec::new();
    for (at, &(i, radius)) in along_x.iter().enumerate() {
        for &(j, other) in along_x[at + 1..].iter().take_while(|other| x(other.0) - x(i) <= longest) {
            let distance = (molecule.atoms[i].position - molecule.atoms[j].position).norm();
            if distance <= BOND_FACTOR * (radius + other) {
                bonds.push((i.min(j), i.max(j)));
            }
        }
    }
    bonds.sort_unstable();
    bonds
}

/// Groups are listed up to this displacement of a nucleus, bohr (0.3 Å).
const LADDER_BOHR: f64 = 0.3 / crate::model::ANGSTROM_PER_BOHR;

/// Finds the groups near the nuclei and places the highest one within the tolerance.
///
/// # Errors
/// [`LabelError::Geometry`] when there is no atom or two like atoms coincide.
pub fn place(molecule: &Molecule, tolerance_bohr: f64) -> Result<(Detection, Symmetry), LabelError> {
    let sites = sites(molecule);
    let detection = group::detect(&sites, &DetectSettings { limit_bohr: LADDER_BOHR.max(tolerance_bohr) })?;
    let symmetry = detection.place(detection.at(tolerance_bohr), &sites, Some(&bonds(molecule)))?;
    Ok((detection, symmetry))
}
