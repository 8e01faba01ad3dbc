//! Löwdin populations: squares of coefficients over symmetrically orthogonalised functions.
//!
//! Not here: how functions are grouped (`labelling::composition`).

use super::convention::Settled;
use super::product;
use crate::model::Molecule;
use faer::{Mat, Par, Side};
use ndarray::Array2;

/// |S^½C|² of each spin: n_orbitals × n_functions, every row sums to one for a normalised orbital.
///
/// Costs one symmetric eigenproblem of the overlap and two products, all n³.
///
/// # Source
/// "On the non-orthogonality problem connected with the use of atomic wave functions in the theory of molecules and
/// crystals", J. Chem. Phys. 18, 365 (1950).
#[must_use]
pub fn lowdin(settled: &Settled, molecule: &Molecule) -> Option<Vec<Array2<f64>>> {
    let n = settled.basis.n_functions();
    // The library splits its sums by this degree, not by the threads there are: the same bytes on any machine.
    faer::set_global_parallelism(Par::rayon(2));
    let matrix = Mat::from_fn(n, n, |i, j| settled.overlap[(i, j)]);
    let eigen = matrix.self_adjoint_eigen(Side::Lower).ok()?;
    let (vectors, values) = (eigen.U(), eigen.S());
    // Each column times λ^¼, so that one product with its transpose gives the square root.
    let quarter = Array2::from_shape_fn((n, n), |(i, k)| vectors[(i, k)] * values[k].max(0.0).powf(0.25));
    let root = product(quarter.view(), quarter.t());
    let squares =
        |coefficients: &Array2<f64>| product(coefficients.view(), root.view()).mapv_into(|value| value * value);
    Some(molecule.orbital_sets.iter().map(|set| squares(&set.coefficients)).collect())
}
