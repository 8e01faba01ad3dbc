//! An operation on orbitals.
//!
//! Two paths. [`Turning`]: atoms land on like atoms, shells change places and turn; right also for nuclei a hair off.
//! [`overlap_with_turned`]: any operation, whether or not it carries atoms onto atoms, by true overlaps.
//! Not here: finding operations (`group::detect`), what follows from ⟨i|R|i⟩ (`labelling`).

use super::basis::Basis;
use super::cartesian::{L_MAX, shell_rotation};
use super::overlap::overlap_between;
use nalgebra::{DMatrix, Matrix3, Point3};
use ndarray::{Array2, ArrayView1, ArrayViewMut1, Axis, parallel::prelude::*};
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
        Ok(Self { moves, matrices: kinds_of_matrices(basis, matrix) })
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

/// One matrix for each kind of shell, 2l + (1 when pure); empty for kinds that the basis has not.
pub(super) fn kinds_of_matrices(basis: &Basis, matrix: &Matrix3<f64>) -> Vec<DMatrix<f64>> {
    let used = |kind: usize| basis.shells().iter().any(|shell| 2 * shell.l + usize::from(shell.pure) == kind);
    (0..2 * (L_MAX + 1))
        .map(|kind| if used(kind) { shell_rotation(kind / 2, kind % 2 == 1, matrix) } else { DMatrix::zeros(0, 0) })
        .collect()
}

/// ⟨μ|R|ν⟩ for the operation `matrix` (file axes) about `centre`: n_functions × n_functions.
///
/// Atoms need not land on atoms. A core function that misses its image by a few hundredths of a bohr hardly overlaps
/// with it: where a permutation of atoms exists, [`Turning`] is the path to take. Costs one overlap, n².
///
/// # Holds
/// The matrix of the inverse operation is the transpose.
#[must_use]
pub fn overlap_with_turned(basis: &Basis, matrix: &Matrix3<f64>, centre: &Point3<f64>) -> Array2<f64> {
    let matrices = kinds_of_matrices(basis, matrix);
    let mut overlap = overlap_between(basis, &basis.with_turned_centres(matrix, centre));
    // R ν is a combination of the functions of its own shell on the turned centre.
    overlap.axis_iter_mut(Axis(0)).into_par_iter().for_each(|mut row| {
        let mut values = Vec::new();
        for shell in basis.shells() {
            let turn = &matrices[2 * shell.l + usize::from(shell.pure)];
            values.clear();
            values.extend(shell.range().map(|k| row[k]));
            for (column, place) in turn.column_iter().zip(shell.range()) {
                row[place] = column.iter().zip(&values).map(|(factor, value)| factor * value).sum();
            }
        }
    });
    overlap
}
