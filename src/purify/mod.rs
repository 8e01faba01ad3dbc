//! Symmetry-adapted orbitals nearest to those given: projected, orthonormal, partners aligned.
//!
//! Orbitals of one occupation change among themselves only, so that the density changes as little as it can. Reading
//! order: `projector` (irreps and partners), `linear` (small eigenproblems), `shell` (orbitals of one occupation), then the
//! whole here. Not here: writing a file (`grammar::write`).

mod linear;
mod projector;
mod shell;

use crate::group::GroupName;
use crate::labelling::Labelled;
use crate::model::{Molecule, Spin};
use crate::wavefunction::{Operations, product};
use ndarray::{Array2, Axis, s};
use projector::Projector;
use shell::{Above, Shell};
use thiserror::Error;

/// Why orbitals cannot be made symmetry-adapted.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum PurifyError {
    /// Atoms that land nowhere.
    #[error(
        "{atoms} atoms land on no like atom: turned functions lie outside the basis; choose a group that the nuclei have \
         within the tolerance"
    )]
    Turned {
        /// How many.
        atoms: usize,
    },
    /// A single atom.
    #[error("the rotations of an atom are infinitely many; name a finite group with --group, such as Oh")]
    Sphere,
    /// Orbitals that projection makes dependent.
    #[error(
        "{spin:?} orbitals with {occupation} electrons do not reach {wanted} symmetry-adapted ones: smallest weight \
         {weight:.1e}, limit {limit:.0e}"
    )]
    Dependent {
        /// Their spin.
        spin: Spin,
        /// Electrons in each.
        occupation: f64,
        /// How many there are.
        wanted: usize,
        /// Smallest norm² left by projection and orthogonalisation.
        weight: f64,
        /// The limit.
        limit: f64,
    },
    /// An eigenproblem that did not converge.
    #[error("an eigenproblem of {size} orbitals did not converge")]
    Eigen {
        /// Its size.
        size: usize,
    },
}

/// New orbitals of one spin.
#[derive(Debug, Clone, PartialEq)]
pub struct PureSpin {
    /// Alpha or beta.
    pub spin: Spin,
    /// Canonical coefficients, n_orbitals × n_functions, in the places of the old ones.
    pub coefficients: Array2<f64>,
    /// Energies: means over sets.
    pub energies: Vec<Option<f64>>,
    /// Electrons.
    pub occupations: Vec<Option<f64>>,
}

/// How much has changed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Changes {
    /// Largest loss 1 − Σ⟨old|new⟩² of an orbital on those that took the place of its set.
    pub overlap_loss: f64,
    /// The orbital that lost it, from 0, and its spin.
    pub overlap_loss_at: (Spin, usize),
    /// Electrons that the old density has outside the new one.
    pub density_electrons: f64,
    /// Sets with all partners, aligned.
    pub aligned_sets: usize,
    /// Orbitals of degenerate irreps that stand without their partners, or whose partners no operation tells apart.
    pub loose: usize,
    /// Largest |CᵀSC − 1| of the new orbitals.
    pub residual: f64,
}

/// What comes out.
#[derive(Debug, Clone, PartialEq)]
pub struct Purified {
    /// Alpha, then beta.
    pub spins: Vec<PureSpin>,
    /// How much has changed.
    pub changes: Changes,
}

/// Occupations nearer than this are one.
const ONE_OCCUPATION: f64 = 1e-4;

/// Makes every orbital belong to one irrep and, where its partners are there, to one partner.
///
/// `overlap` is that of the canonical functions, on the nuclei that the new orbitals are for.
///
/// # Holds
/// Each new orbital is unchanged by the projector of its irrep, so its weight is its norm, 1. A second run changes nothing.
/// # Errors
/// [`PurifyError`] when atoms are not permuted, or too little is left of an orbital.
/// # Source
/// Symmetric orthonormalisation: J. Chem. Phys. 18, 365 (1950); projection and transfer operators: any textbook of group
/// theory in chemistry (common practice).
pub fn purify(molecule: &Molecule, labelled: &Labelled, overlap: &Array2<f64>) -> Result<Purified, PurifyError> {
    let Operations::Permuting(turnings) = &labelled.operations else {
        return Err(PurifyError::Turned { atoms: labelled.derivation.turned.len() });
    };
    if labelled.symmetry.group.name() == GroupName::K {
        return Err(PurifyError::Sphere);
    }
    let projector = Projector { group: &labelled.symmetry.group, turnings };
    let first = molecule.orbital_sets.first().map_or(Spin::Alpha, |set| set.spin);
    let mut changes = Changes {
        overlap_loss: 0.0,
        overlap_loss_at: (first, 0),
        density_electrons: 0.0,
        aligned_sets: 0,
        loose: 0,
        residual: 0.0,
    };
    let mut spins = Vec::new();
    for (set, labels) in molecule.orbital_sets.iter().zip(&labelled.spins) {
        let mut new = PureSpin {
            spin: set.spin,
            coefficients: set.coefficients.clone(),
            energies: set.orbitals.iter().map(|orbital| orbital.energy).collect(),
            occupations: set.orbitals.iter().map(|orbital| orbital.occupation).collect(),
        };
        let mut above = Above::default();
        for orbitals in by_occupation(&new.occupations) {
            let shell = Shell { projector: &projector, overlap, labels, set, orbitals: &orbitals };
            let adapted = shell.adapted(&mut above)?;
            changes.aligned_sets += adapted.aligned_sets;
            changes.loose += adapted.loose;
            for (place, row) in adapted.rows {
                new.coefficients.row_mut(place).assign(&row);
            }
            for (place, energy) in adapted.energies {
                new.energies[place] = energy;
            }
            changes.compare(&set.coefficients, &new, overlap, &orbitals, &adapted.groups);
        }
        let mut gram = product(product(new.coefficients.view(), overlap.view()).view(), new.coefficients.t());
        gram.diag_mut().map_inplace(|value| *value -= 1.0);
        changes.residual = gram.iter().fold(changes.residual, |worst, value| worst.max(value.abs()));
        spins.push(new);
    }
    Ok(Purified { spins, changes })
}

/// Orbitals by occupation, most electrons first; occupations that hardly differ are one.
fn by_occupation(occupations: &[Option<f64>]) -> Vec<Vec<usize>> {
    let electrons = |i: usize| occupations[i].unwrap_or(0.0);
    let mut order: Vec<usize> = (0..occupations.len()).collect();
    order.sort_by(|&a, &b| electrons(b).total_cmp(&electrons(a)).then(a.cmp(&b)));
    let mut shells: Vec<Vec<usize>> =
        order.chunk_by(|&a, &b| electrons(a) - electrons(b) <= ONE_OCCUPATION).map(<[usize]>::to_vec).collect();
    for shell in &mut shells {
        shell.sort_unstable();
    }
    shells
}

impl Changes {
    /// Takes in the orbitals of one occupation; `groups` are places that were exchanged among themselves.
    fn compare(
        &mut self,
        old: &Array2<f64>,
        new: &PureSpin,
        overlap: &Array2<f64>,
        orbitals: &[usize],
        groups: &[Vec<usize>],
    ) {
        let before = old.select(Axis(0), orbitals);
        let after = new.coefficients.select(Axis(0), orbitals);
        let overlaps = product(product(before.view(), overlap.view()).view(), after.t());
        let place = |orbital: &usize| orbitals.binary_search(orbital).unwrap_or(0);
        for group in groups {
            let places: Vec<usize> = group.iter().map(place).collect();
            for &i in &places {
                let loss = 1.0 - places.iter().map(|&j| overlaps[(i, j)].powi(2)).sum::<f64>();
                if loss > self.overlap_loss {
                    self.overlap_loss = loss;
                    self.overlap_loss_at = (new.spin, orbitals[i]);
                }
            }
        }
        for (i, orbital) in orbitals.iter().enumerate() {
            let electrons = new.occupations[*orbital].unwrap_or(0.0);
            let kept: f64 = overlaps.slice(s![i, ..]).iter().map(|value| value * value).sum();
            self.density_electrons += electrons * (1.0 - kept).max(0.0);
        }
    }
}
