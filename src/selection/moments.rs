//! One-electron strengths of a pair of sets: squares of moments summed over partners, axis by axis in the standard frame.
//!
//! Here: sums that do not depend on how partners are turned. Not here: integrals (`wavefunction::moments`), rules
//! (`selection::rules`).

use super::pairs::{Pair, gap};
use crate::labelling::{Labelled, SetLabel};
use crate::model::Molecule;
use crate::wavefunction::{Moments, moments};
use nalgebra::{Matrix3, Vector3};
use ndarray::{Array2, Axis};

/// Σ over partners of squared moments about the centre of the group, atomic units.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Strengths {
    /// ⟨i|r|j⟩² along x, y, z.
    pub length: [f64; 3],
    /// ⟨i|∇|j⟩² along x, y, z.
    pub velocity: [f64; 3],
    /// ⟨i|r × ∇|j⟩² about x, y, z.
    pub magnetic: [f64; 3],
    /// ⟨i|ab − δ r²/3|j⟩² of xx, yy, zz, xy, xz, yz.
    pub quadrupole: [f64; 6],
    /// Electrons an orbital of the first set holds, times the room (0 to 1) of one of the second.
    pub occupation: f64,
    /// Difference of orbital energies, hartree.
    pub energy: Option<f64>,
}

impl Strengths {
    /// (2/3) ΔE Σ|⟨r⟩|² times the occupation factor; None without a positive ΔE.
    ///
    /// A one-electron estimate: orbital energies in place of the energies of states.
    #[must_use]
    pub fn oscillator_length(&self) -> Option<f64> {
        let energy = self.energy.filter(|energy| *energy > 0.0)?;
        Some(2.0 / 3.0 * energy * self.length.iter().sum::<f64>() * self.occupation)
    }

    /// (2/3) Σ|⟨∇⟩|²/ΔE times the occupation factor; None without a positive ΔE.
    #[must_use]
    pub fn oscillator_velocity(&self) -> Option<f64> {
        let energy = self.energy.filter(|energy| *energy > 0.0)?;
        Some(2.0 / 3.0 * self.velocity.iter().sum::<f64>() / energy * self.occupation)
    }

    /// Σ over all nine components.
    #[must_use]
    pub fn quadrupole_total(&self) -> f64 {
        self.quadrupole[..3].iter().sum::<f64>() + 2.0 * self.quadrupole[3..].iter().sum::<f64>()
    }
}

/// Mean occupation of a set's orbitals; None where the file gives none.
fn mean_occupation(set: &SetLabel) -> Option<f64> {
    Some(set.electrons? / set.orbitals.len() as f64)
}

/// Strengths of each pair, in the order given.
#[must_use]
pub fn strengths(molecule: &Molecule, labelled: &Labelled, pairs: &[Pair]) -> Vec<Strengths> {
    let capacity = if labelled.spins.len() > 1 { 1.0 } else { 2.0 };
    let mut found = vec![Strengths::default(); pairs.len()];
    for (spin_idx, spin) in labelled.spins.iter().enumerate() {
        let of_spin: Vec<usize> = (0..pairs.len()).filter(|&at| pairs[at].spin_idx == spin_idx).collect();
        if of_spin.is_empty() {
            continue;
        }
        let orbitals = |set_of: fn(&Pair) -> usize| {
            let mut rows: Vec<usize> =
                of_spin.iter().flat_map(|&at| spin.sets[set_of(&pairs[at])].orbitals.iter().copied()).collect();
            rows.sort_unstable();
            rows.dedup();
            rows
        };
        let (bras, kets) = (orbitals(|pair| pair.from), orbitals(|pair| pair.to));
        let coefficients = &molecule.orbital_sets[spin_idx].coefficients;
        let rows = |rows: &[usize]| coefficients.select(Axis(0), rows);
        let frame = &labelled.symmetry.frame;
        let moments = moments(&labelled.settled.basis, &frame.centre, rows(&bras).view(), rows(&kets).view());
        for at in of_spin {
            let pair = pairs[at];
            let (from, to) = (&spin.sets[pair.from], &spin.sets[pair.to]);
            let mut sum = Strengths { energy: gap(&labelled.spins, pair), ..Strengths::default() };
            for i in places(&from.orbitals, &bras) {
                for j in places(&to.orbitals, &kets) {
                    add(&mut sum, &moments, i, j, &frame.axes);
                }
            }
            let room = |set: &SetLabel| mean_occupation(set).map_or(1.0, |occupation| 1.0 - occupation / capacity);
            sum.occupation = mean_occupation(from).unwrap_or(capacity) * room(to);
            found[at] = sum;
        }
    }
    found
}

/// Where orbitals stand in a sorted list that holds them.
fn places<'a>(orbitals: &'a [usize], sorted: &'a [usize]) -> impl Iterator<Item = usize> + 'a {
    orbitals.iter().filter_map(|orbital| sorted.binary_search(orbital).ok())
}

fn add(sum: &mut Strengths, moments: &Moments, i: usize, j: usize, axes: &Matrix3<f64>) {
    let vector = |parts: &[Array2<f64>; 3]| axes * Vector3::from_fn(|axis, _| parts[axis][(i, j)]);
    for (target, parts) in [
        (&mut sum.length, &moments.position),
        (&mut sum.velocity, &moments.gradient),
        // Axial: the sign under improper axes does not survive the square.
        (&mut sum.magnetic, &moments.angular),
    ] {
        let turned = vector(parts);
        for axis in 0..3 {
            target[axis] += turned[axis] * turned[axis];
        }
    }
    let [xx, yy, zz, xy, xz, yz] = std::array::from_fn(|part| moments.second[part][(i, j)]);
    let tensor = Matrix3::new(xx, xy, xz, xy, yy, yz, xz, yz, zz);
    let traceless = axes * (tensor - Matrix3::identity() * (tensor.trace() / 3.0)) * axes.transpose();
    for (part, (a, b)) in [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)].into_iter().enumerate() {
        sum.quadrupole[part] += traceless[(a, b)] * traceless[(a, b)];
    }
}
