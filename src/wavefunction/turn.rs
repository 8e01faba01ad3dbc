//! An operation on orbitals whose atoms land on like atoms: shells change places and turn.
//!
//! Not here: operations that carry atoms onto nothing.

use super::basis::Basis;
use super::cartesian::{L_MAX, shell_rotation};
use nalgebra::{DMatrix, Matrix3};
use ndarray::{ArrayView1, ArrayViewMut1};
use thiserror::Error;

/// An operation that does not carry the basis onto itself.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Error)]
pub enum TurningError {
    /// The shells of two atoms differ.
    #[error("an operation carries atom {} onto atom {}, which has other basis functions", from + 1, to + 1)]
    UnlikeShells {
        /// Atom, from 0.
        from: usize,
        /// Its image.
        to: usize,
    },
}

/// One operation on rows of coefficients.
#[derive(Debug, Clone, PartialEq)]
pub struct Turning {
    /// (offset of the source shell, offset of its image, kind of matrix) for every shell.
    moves: Vec<(usize, usize, usize)>,
    /// Matrices of the kinds of shells: 2l + (1 when pure).
    matrices: Vec<DMatrix<f64>>,
}

impl Turning {
    /// The operation `matrix` (file axes) which carries atom a to atom `permutation[a]`.
    ///
    /// # Errors
    /// [`TurningError::UnlikeShells`] when the image has other shells.
    pub fn by_permutation(basis: &Basis, permutation: &[usize], matrix: &Matrix3<f64>) -> Result<Self, TurningError> {
        let mut of_atom: Vec<Vec<usize>> = vec![Vec::new(); permutation.len()];
        for (shell_idx, shell) in basis.shells().iter().enumerate() {
            of_atom[shell.atom_idx].push(shell_idx);
        }
        let mut moves = vec![(0, 0, 0); basis.shells().len()];
        for (from, shells) in of_atom.iter().enumerate() {
            let to = permutation[from];
            let unlike = TurningError::UnlikeShells { from, to };
            if of_atom[to].len() != shells.len() {
                return Err(unlike);
            }
            for (&source, &image) in shells.iter().zip(&of_atom[to]) {
                let (source_shell, image_shell) = (&basis.shells()[source], &basis.shells()[image]);
                if (source_shell.l, source_shell.pure) != (image_shell.l, image_shell.pure) {
                    return Err(unlike);
                }
                let kind = 2 * source_shell.l + usize::from(source_shell.pure);
                moves[source] = (source_shell.offset, image_shell.offset, kind);
            }
        }
        let used = |kind: usize| basis.shells().iter().any(|shell| 2 * shell.l + usize::from(shell.pure) == kind);
        let matrices = (0..2 * (L_MAX + 1))
            .map(|kind| if used(kind) { shell_rotation(kind / 2, kind % 2 == 1, matrix) } else { DMatrix::zeros(0, 0) })
            .collect();
        Ok(Self { moves, matrices })
    }

    /// Coefficients of the turned orbital.
    pub fn apply(&self, row: ArrayView1<'_, f64>, mut image: ArrayViewMut1<'_, f64>) {
        for &(source, target, kind) in &self.moves {
            let matrix = &self.matrices[kind];
            for k in 0..matrix.nrows() {
                image[target + k] = (0..matrix.ncols()).map(|j| matrix[(k, j)] * row[source + j]).sum();
            }
        }
    }

    /// ⟨i|R|i⟩ from an orbital's coefficients and its row of S·C.
    #[must_use]
    pub fn expectation(&self, row: ArrayView1<'_, f64>, product: ArrayView1<'_, f64>) -> f64 {
        let mut sum = 0.0;
        for &(source, target, kind) in &self.moves {
            let matrix = &self.matrices[kind];
            for j in 0..matrix.ncols() {
                let image: f64 = (0..matrix.nrows()).map(|k| product[target + k] * matrix[(k, j)]).sum();
                sum += image * row[source + j];
            }
        }
        sum
    }
}
