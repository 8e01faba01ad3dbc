//! The orbitals of a set turned among themselves into the standard partners of its irrep.
//!
//! Here: combinations of a set's own orbitals, nothing from outside it. Not here: orbitals made pure (`purify`), labels.

use super::{Labelled, SetLabel};
use crate::wavefunction::Rows;
use nalgebra::{DMatrix, DVector};
use ndarray::{ArrayView2, Axis};

/// Combinations that should be orthonormal may miss it by this much; beyond, the set is not whole.
const ORTHONORMAL: f64 = 0.05;
/// Occupations this near count as equal.
const EQUAL: f64 = 1e-6;

/// Columns of combinations: partner k of the irrep is Σⱼ U(j, k) times orbital j of the set.
///
/// From ⟨i|R|j⟩ within the set by d/|G| Σ D(R)ₖ₁ R, which carries partner 1 to partner k and all else to nothing. The sign is that which
/// makes the largest coefficient of the first partner positive.
///
/// None where the set has one orbital, is not whole, where its occupations differ (a combination of a filled and an empty orbital is neither),
/// or where no operation tells its partners apart (pairs of complex conjugates). `coefficients` are those of the spin.
///
/// # Holds
/// The result is orthogonal.
#[must_use]
pub fn standard_partners(
    labelled: &Labelled,
    spin_idx: usize,
    set: &SetLabel,
    coefficients: ArrayView2<'_, f64>,
    occupations: &[Option<f64>],
) -> Option<DMatrix<f64>> {
    let group = &labelled.symmetry.group;
    let irrep = &group.irreps()[set.irrep?];
    let d = irrep.dimension;
    let alike = set.orbitals.windows(2).all(|pair| match (occupations[pair[0]], occupations[pair[1]]) {
        (Some(a), Some(b)) => (a - b).abs() <= EQUAL,
        (a, b) => a == b,
    });
    let whole = set.complete && set.orbitals.len() == d;
    let told_apart = irrep.constituents == 1 && labelled.operations.count() == irrep.matrices.len();
    if d < 2 || !alike || !whole || !told_apart {
        return None;
    }
    let own = coefficients.select(Axis(0), &set.orbitals);
    let products = labelled.settled.products[spin_idx].select(Axis(0), &set.orbitals);
    let rows = Rows { coefficients: own.view(), products: products.view() };
    let scale = d as f64 / irrep.matrices.len() as f64;
    let mut transfers = vec![DMatrix::<f64>::zeros(d, d); d];
    for (element, matrix) in irrep.matrices.iter().enumerate() {
        let between = labelled.operations.elements(element, rows, rows);
        let between = DMatrix::from_fn(d, d, |i, j| between[(i, j)]);
        for (k, transfer) in transfers.iter_mut().enumerate() {
            *transfer += &between * (scale * matrix[(k, 0)]);
        }
    }
    // The projector onto the first partner is u uᵀ: its longest column is along u.
    let longest = (0..d).fold(0, |best, column| {
        if transfers[0].column(column).norm() > transfers[0].column(best).norm() + 1e-6 { column } else { best }
    });
    let first: DVector<f64> = transfers[0].column(longest).clone_owned().try_normalize(1e-3)?;
    let mut combinations = DMatrix::zeros(d, d);
    for (k, transfer) in transfers.iter().enumerate() {
        combinations.set_column(k, &(transfer * &first));
    }
    let missed = (combinations.transpose() * &combinations - DMatrix::<f64>::identity(d, d)).amax();
    if missed > ORTHONORMAL {
        return None;
    }
    // The nearest orthogonal matrix.
    let parts = combinations.svd(true, true);
    Some(parts.u? * parts.v_t?)
}
