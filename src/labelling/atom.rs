//! The one group without a finite surrogate: all rotations and the inversion of a single atom.
//!
//! Weights come from projection onto angular momentum within each shell, connections from a fixed
//! sample of rotations.

use crate::group::{GroupName, PointGroup, Symmetry};
use crate::wavefunction::{Basis, Turning, TurningError, angular_projector};
use nalgebra::{Matrix3, Quaternion, UnitQuaternion};
use ndarray::{Array2, ArrayView2};

/// Rotations in the sample: the mean of ⟨i|R|j⟩² over them is 1/(2l + 1) roughly (0.27 has been seen for a d set), which is
/// far above the least link.
const SAMPLE: usize = 48;

/// Operations on orbitals: one an element of the group, or the fixed sample for a single atom.
pub fn turnings(basis: &Basis, symmetry: &Symmetry) -> Result<Vec<Turning>, TurningError> {
    if symmetry.group.name() == GroupName::K {
        return sample().iter().map(|matrix| Turning::by_permutation(basis, &[0], matrix)).collect();
    }
    (0..symmetry.group.elements().len())
        .map(|element| Turning::by_permutation(basis, &symmetry.permutations[element], &symmetry.matrix(element)))
        .collect()
}

/// Evenly spread rotations, the identity first: unit quaternions from a Weyl sequence on the 3-sphere.
fn sample() -> Vec<Matrix3<f64>> {
    let turn = std::f64::consts::TAU;
    (0..SAMPLE)
        .map(|k| {
            if k == 0 {
                return Matrix3::identity();
            }
            // Uniform on the 3-sphere from three fractions ("Uniform random rotations", Graphics Gems III, 1992, p. 124).
            let fraction = |step: f64| (k as f64 * step).fract();
            let (u, v, w) = (fraction(0.819_172_513), fraction(0.671_043_607), fraction(0.549_700_478));
            let (a, b) = ((1.0 - u).sqrt(), u.sqrt());
            let quaternion =
                Quaternion::new(a * (turn * v).sin(), a * (turn * v).cos(), b * (turn * w).sin(), b * (turn * w).cos());
            UnitQuaternion::from_quaternion(quaternion).to_rotation_matrix().into_inner()
        })
        .collect()
}

/// Weight of each irrep (angular momentum with its natural parity) in each orbital of an atom.
///
/// # Shapes
/// `coefficients` and `products` (rows of S·C) are n_orbitals × n_functions; the result is
/// n_orbitals × n_irreps.
pub fn weights(
    basis: &Basis,
    group: &PointGroup,
    coefficients: ArrayView2<'_, f64>,
    products: ArrayView2<'_, f64>,
) -> Array2<f64> {
    let mut weights = Array2::zeros((coefficients.nrows(), group.irreps().len()));
    for shell in basis.shells() {
        // A Cartesian shell of degree l also holds l − 2, l − 4, …
        let lowest = if shell.pure { shell.l } else { shell.l % 2 };
        for l in (lowest..=shell.l).step_by(2) {
            let Some(irrep) = group.orbital_irrep(l) else { continue };
            let projector = angular_projector(shell.l, shell.pure, l);
            let range = shell.offset..shell.offset + shell.n_functions();
            for (i, (c, sc)) in coefficients.outer_iter().zip(products.outer_iter()).enumerate() {
                let weight: f64 = range
                    .clone()
                    .enumerate()
                    .flat_map(|(row, mu)| range.clone().enumerate().map(move |(column, nu)| (row, mu, column, nu)))
                    .map(|(row, mu, column, nu)| sc[mu] * projector[(row, column)] * c[nu])
                    .sum();
                weights[(i, irrep)] += weight;
            }
        }
    }
    weights
}
