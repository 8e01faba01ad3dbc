//! The product of two matrices on all cores.
//!
//! Not here: anything that knows what the matrices mean.

use faer::{Accum, MatMut, MatRef, Par, linalg::matmul::matmul};
use ndarray::{Array2, ArrayView2};
use rayon::prelude::*;

/// Most rows a thread takes at a time. Blocks depend on the size alone, so that sums do not depend on the threads.
const ROWS: usize = 512;

/// a·b, with blocks of rows of `a` spread over the threads.
#[must_use]
pub fn product(a: ArrayView2<'_, f64>, b: ArrayView2<'_, f64>) -> Array2<f64> {
    let (n_rows, n_columns) = (a.nrows(), b.ncols());
    if n_rows == 0 || n_columns == 0 || a.ncols() == 0 {
        return Array2::zeros((n_rows, n_columns));
    }
    // Halves of equal size keep two cores busy to the end.
    let n_blocks = (n_rows.div_ceil(ROWS)).next_multiple_of(2);
    let rows = n_rows.div_ceil(n_blocks).next_multiple_of(8);
    let (left, right) = (a.as_standard_layout(), standard(b));
    let mut values = vec![0.0; n_rows * n_columns];
    if let Some(left) = left.as_slice() {
        values.par_chunks_mut(rows * n_columns).zip(left.par_chunks(rows * a.ncols())).for_each(|(target, block)| {
            let n = block.len() / a.ncols();
            matmul(
                MatMut::from_row_major_slice_mut(target, n, n_columns),
                Accum::Replace,
                MatRef::from_row_major_slice(block, n, a.ncols()),
                right.view(),
                1.0,
                Par::Seq,
            );
        });
    }
    Array2::from_shape_vec((n_rows, n_columns), values).unwrap_or_default()
}

/// A matrix that lies row by row or column by column in memory; any other is copied.
enum Standard<'a> {
    Rows(ArrayView2<'a, f64>),
    Columns(ArrayView2<'a, f64>),
    Copied(Array2<f64>),
}

fn standard(matrix: ArrayView2<'_, f64>) -> Standard<'_> {
    if matrix.is_standard_layout() {
        Standard::Rows(matrix)
    } else if matrix.t().is_standard_layout() {
        Standard::Columns(matrix.reversed_axes())
    } else {
        Standard::Copied(matrix.as_standard_layout().into_owned())
    }
}

impl Standard<'_> {
    fn view(&self) -> MatRef<'_, f64> {
        let of = |rows: &ArrayView2<'_, f64>| (rows.nrows(), rows.ncols());
        let rows = match self {
            Self::Rows(matrix) | Self::Columns(matrix) => matrix.view(),
            Self::Copied(matrix) => matrix.view(),
        };
        let (n, m) = of(&rows);
        let slice = rows.to_slice().unwrap_or_default();
        let matrix = MatRef::from_row_major_slice(slice, n, m);
        if matches!(self, Self::Columns(_)) { matrix.transpose() } else { matrix }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use ndarray::s;

    fn same(ours: &Array2<f64>, theirs: &Array2<f64>) {
        assert_eq!(ours.dim(), theirs.dim());
        for (ours, theirs) in ours.iter().zip(theirs) {
            assert_relative_eq!(ours, theirs, epsilon = 1e-12);
        }
    }

    #[test]
    fn every_layout_gives_the_product_of_another_library() {
        let make = |n: usize, m: usize| Array2::from_shape_fn((n, m), |(i, j)| ((7 * i + 3 * j) % 11) as f64 - 4.5);
        for (n, k, m) in [(1, 1, 1), (3, 5, 2), (600, 7, 9), (1100, 3, 1), (0, 3, 2), (2, 0, 2)] {
            let (a, b) = (make(n, k), make(k, m));
            same(&product(a.view(), b.view()), &a.dot(&b));
            let (a, b) = (make(k, n), make(m, k));
            same(&product(a.t(), b.t()), &a.t().dot(&b.t()));
        }
        let (a, b) = (make(8, 12), make(12, 10));
        let (a, b) = (a.slice(s![..;2, ..;3]), b.slice(s![..;3, ..;2]));
        same(&product(a, b), &a.dot(&b));
    }
}
