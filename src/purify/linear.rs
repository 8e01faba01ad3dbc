//! Small symmetric eigenproblems, and symmetric orthonormalisation of rows.
//!
//! Not here: anything of symmetry in space.

use super::PurifyError;
use crate::wavefunction::product;
use faer::{Mat, Side};
use ndarray::{Array1, Array2};

/// Eigenvalues from small to large, eigenvectors as columns, the largest entry of each positive.
pub fn eigen(matrix: &Array2<f64>) -> Result<(Array1<f64>, Array2<f64>), PurifyError> {
    let n = matrix.nrows();
    if n == 0 {
        return Ok((Array1::zeros(0), Array2::zeros((0, 0))));
    }
    let mean = Mat::from_fn(n, n, |i, j| 0.5 * (matrix[(i, j)] + matrix[(j, i)]));
    let eigen = mean.self_adjoint_eigen(Side::Lower).map_err(|_| PurifyError::Eigen { size: n })?;
    let (vectors, values) = (eigen.U(), eigen.S());
    let mut columns = Array2::from_shape_fn((n, n), |(i, k)| vectors[(i, k)]);
    for mut column in columns.columns_mut() {
        // Of entries that are equal to rounding the first decides.
        let largest = column.iter().fold(0.0_f64, |largest, value| largest.max(value.abs()));
        if column.iter().find(|value| value.abs() > largest - 1e-9).is_some_and(|value| *value < 0.0) {
            column.map_inplace(|value| *value = -*value);
        }
    }
    Ok((Array1::from_shape_fn(n, |k| values[k]), columns))
}

/// Rows made orthonormal in `overlap` with the least change, and the smallest eigenvalue of their overlaps.
///
/// The rows come back unchanged when that eigenvalue is not above `limit`.
pub fn orthonormalised(
    rows: &Array2<f64>,
    overlap: &Array2<f64>,
    limit: f64,
) -> Result<(Array2<f64>, f64), PurifyError> {
    if rows.nrows() == 0 {
        return Ok((rows.clone(), 1.0));
    }
    let gram = product(product(rows.view(), overlap.view()).view(), rows.t());
    let (values, vectors) = eigen(&gram)?;
    let smallest = values[0];
    if smallest.is_nan() || smallest <= limit {
        return Ok((rows.clone(), smallest));
    }
    let scaled = Array2::from_shape_fn(vectors.dim(), |(i, k)| vectors[(i, k)] / values[k].sqrt());
    let root = product(scaled.view(), vectors.t());
    Ok((product(root.view(), rows.view()), smallest))
}
