//! How much of each irrep, and of each partner of it, is in an orbital.
//!
//! Here: weights by projection from ⟨i|R|i⟩. Not here: those values (`wavefunction::operations`), what counts as pure or
//! as one set (`labelling::sets`).
//!
//! The sums run over operations, not classes: the expectation values of an orbital that breaks the
//! symmetry are no class function.

use crate::group::PointGroup;
use ndarray::{Array2, ArrayView1};

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
