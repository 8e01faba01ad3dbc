//! The orthogonal matrices that belong to permutations of sites, made an exact group.
//!
//! Not here: which permutations there are (`group::matching`).

use super::arrangement::Arrangement;
use super::multiplication::Multiplication;
use nalgebra::{Matrix3, Vector3};

/// The orthogonal matrix M with determinant +1 (`proper`) or −1 for which Σ|M·from − onto|² is least.
///
/// # Source
/// Best rotation between two sets of vectors: Acta Cryst. A32, 922 (1976); by singular values, common practice.
pub(super) fn best_turn<'a>(
    pairs: impl Iterator<Item = (&'a Vector3<f64>, &'a Vector3<f64>)>,
    proper: bool,
) -> Option<Matrix3<f64>> {
    let covariance: Matrix3<f64> = pairs.map(|(from, onto)| onto * from.transpose()).sum();
    nearest_orthogonal(&covariance, Some(proper))
}

/// The orthogonal matrix nearest to `matrix`, with the determinant asked for or the one nearest by.
pub(super) fn nearest_orthogonal(matrix: &Matrix3<f64>, proper: Option<bool>) -> Option<Matrix3<f64>> {
    let svd = matrix.try_svd(true, true, f64::EPSILON, 200)?;
    let (mut u, v_t) = (svd.u?, svd.v_t?);
    if let Some(proper) = proper
        && (u.determinant() * v_t.determinant() > 0.0) != proper
    {
        // Singular values descend: the last direction costs least.
        u.column_mut(2).neg_mut();
    }
    Some(u * v_t)
}

/// Turns matrices that multiply nearly as `group` does into matrices that do so exactly.
///
/// The mean over h of M(gh)·M(h)⁻¹ is nearer to a representation than M(g) is; the error is squared in each round.
pub(super) fn made_exact(mut matrices: Vec<Matrix3<f64>>, group: &Multiplication) -> Option<Vec<Matrix3<f64>>> {
    const ROUNDS: usize = 12;
    let order = group.order();
    for _ in 0..ROUNDS {
        let mut change = 0.0_f64;
        let next: Vec<Matrix3<f64>> = (0..order)
            .map(|g| {
                let sum: Matrix3<f64> =
                    (0..order).map(|h| matrices[group.product(g, h)] * matrices[h].transpose()).sum();
                let mean = nearest_orthogonal(&sum, None)?;
                change = change.max((mean - matrices[g]).amax());
                Some(mean)
            })
            .collect::<Option<_>>()?;
        matrices = next;
        if change < 1e-13 {
            break;
        }
    }
    Some(matrices)
}

/// The axes nearest to `axes` with `standard[k]·axes = axes·matrices[k]` for all k.
pub(super) fn intertwiner(
    axes: &Matrix3<f64>,
    matrices: &[Matrix3<f64>],
    standard: &[Matrix3<f64>],
) -> Option<Matrix3<f64>> {
    let sum: Matrix3<f64> = standard.iter().zip(matrices).map(|(s, m)| s.transpose() * axes * m).sum();
    nearest_orthogonal(&sum, Some(true))
}

/// Where each site lies on average over the group: (1/|G|) Σ M(g)⁻¹ x(π_g(i)).
pub(super) fn symmetrised<'a>(
    arrangement: &Arrangement,
    operations: impl Iterator<Item = (&'a Matrix3<f64>, &'a [u32])>,
) -> Vec<Vector3<f64>> {
    let mut sums = vec![Vector3::zeros(); arrangement.n_sites()];
    let mut order = 0_u32;
    for (matrix, permutation) in operations {
        order += 1;
        for (sum, &image) in sums.iter_mut().zip(permutation) {
            *sum += matrix.tr_mul(&arrangement.positions[image as usize]);
        }
    }
    sums.into_iter().map(|sum| sum / f64::from(order)).collect()
}
