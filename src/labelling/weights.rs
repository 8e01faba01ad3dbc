//! How much of each irrep, and of each partner of it, is in an orbital.
//!
//! Here: ⟨i|R|i⟩ for every orbital and operation, weights by projection, and the mean connection of
//! two orbitals. Not here: what counts as pure or as one set (`labelling::sets`).
//!
//! The sums run over operations, not classes: the expectation values of an orbital that breaks the
//! symmetry are no class function.

use crate::group::PointGroup;
use crate::wavefunction::Turning;
use ndarray::{Array1, Array2, ArrayView1, ArrayView2, Axis, parallel::prelude::*};

/// ⟨i|R|i⟩ of every orbital i under every operation R.
///
/// # Shapes
/// `coefficients` and `products` (the rows of S·C) are n_orbitals × n_functions, `turnings` holds one
/// entry an operation: the result is n_orbitals × n_operations.
/// # Holds
/// The column of the identity is 1 for normalised orbitals.
#[must_use]
pub fn expectations(
    turnings: &[Turning],
    coefficients: ArrayView2<'_, f64>,
    products: ArrayView2<'_, f64>,
) -> Array2<f64> {
    let mut values = Array2::zeros((coefficients.nrows(), turnings.len()));
    values
        .axis_iter_mut(Axis(0))
        .into_par_iter()
        .zip(coefficients.axis_iter(Axis(0)))
        .zip(products.axis_iter(Axis(0)))
        .for_each(|((mut row, c), sc)| {
            for (value, turning) in row.iter_mut().zip(turnings) {
                *value = turning.expectation(c, sc);
            }
        });
    values
}

/// The matrix that turns expectation values into weights: n_operations × n_irreps.
///
/// Entry (R, Γ) is d/(c·|G|) χ_Γ(R), with c = 2 where Γ is a real pair of complex-conjugate irreps.
///
/// # Holds
/// Rows times weights: Σ_Γ w(Γ) = ⟨i|E|i⟩, as Σ_Γ d χ_Γ/c is |G| at the identity and 0 elsewhere.
/// # Source
/// Projection onto an irrep by its characters: any textbook of group theory in chemistry (common practice).
#[must_use]
pub fn projection(group: &PointGroup) -> Array2<f64> {
    let (elements, irreps) = (group.elements(), group.irreps());
    let scale = 1.0 / elements.len() as f64;
    Array2::from_shape_fn((elements.len(), irreps.len()), |(r, g)| {
        let irrep = &irreps[g];
        irrep.dimension as f64 / irrep.constituents as f64 * irrep.characters[elements[r].class_idx] * scale
    })
}

/// Weight of each partner of one irrep in an orbital with these expectation values.
///
/// None for a real pair of complex-conjugate irreps: there the group alone does not fix partners.
#[must_use]
pub fn partner_weights(group: &PointGroup, irrep_idx: usize, expectations: ArrayView1<'_, f64>) -> Option<Vec<f64>> {
    let irrep = &group.irreps()[irrep_idx];
    if irrep.constituents > 1 {
        return None;
    }
    let scale = irrep.dimension as f64 / expectations.len() as f64;
    let weights = (0..irrep.dimension).map(|k| {
        scale * irrep.matrices.iter().zip(expectations).map(|(matrix, value)| matrix[(k, k)] * value).sum::<f64>()
    });
    Some(weights.collect())
}

/// Mean over the operations of ⟨i|R|j⟩² for each i in `bras`.
///
/// # Holds
/// For two partners of one irrep of dimension d it is 1/d, however the partners are turned (Schur's
/// lemma); for orbitals of different irreps, or of different sets of one irrep, it is 0.
#[must_use]
pub fn connections(
    turnings: &[Turning],
    coefficients: ArrayView2<'_, f64>,
    products: ArrayView2<'_, f64>,
    ket: usize,
    bras: &[usize],
) -> Vec<f64> {
    let ket = coefficients.row(ket);
    let mut turned = Array1::zeros(ket.len());
    let mut sums = vec![0.0; bras.len()];
    for turning in turnings {
        turning.apply(ket, turned.view_mut());
        for (sum, &bra) in sums.iter_mut().zip(bras) {
            *sum += products.row(bra).dot(&turned).powi(2);
        }
    }
    let scale = 1.0 / turnings.len() as f64;
    sums.into_iter().map(|sum| sum * scale).collect()
}
