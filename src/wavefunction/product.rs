//! The product of two matrices on all cores.
//!
//! Not here: anything that knows what the matrices mean.

use ndarray::{Array2, ArrayView2, Axis, linalg::general_mat_mul, parallel::prelude::*};

/// Rows a thread takes at a time: fixed, so that sums do not depend on the number of threads.
const ROWS: usize = 128;

/// a·b, with blocks of rows of `a` spread over the threads.
#[must_use]
pub fn product(a: ArrayView2<'_, f64>, b: ArrayView2<'_, f64>) -> Array2<f64> {
    let mut result = Array2::zeros((a.nrows(), b.ncols()));
    result
        .axis_chunks_iter_mut(Axis(0), ROWS)
        .into_par_iter()
        .zip(a.axis_chunks_iter(Axis(0), ROWS).into_par_iter())
        .for_each(|(mut rows, block)| general_mat_mul(1.0, &block, &b, 0.0, &mut rows));
    result
}
