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

/// One shell carried onto another.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
struct Move {
    /// First function of the shell.
    source: usize,
    /// First function of its image.
    target: usize,
    /// Place of the matrix: 2l + (1 when pure).
    kind: usize,
}

/// One operation on rows of coefficients.
#[derive(Debug, Clone, PartialEq)]
pub struct Turning {
    moves: Vec<Move>,
    /// Matrices of the kinds of shells, row by row; empty for kinds that the basis has not.
    matrices: Vec<Vec<f64>>,
    n_functions: usize,
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
        let mut moves = vec![Move { source: 0, target: 0, kind: 0 }; basis.shells().len()];
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
                moves[source] = Move { source: source_shell.offset, target: image_shell.offset, kind };
            }
        }
        let matrices = kinds_of_matrices(basis, matrix);
        // Column by column of the transpose is row by row of the matrix.
        let matrices = matrices.iter().map(|matrix| matrix.transpose().as_slice().to_vec()).collect();
        Ok(Self { moves, matrices, n_functions: basis.n_functions() })
    }

    /// Coefficients of the turned orbital.
    pub fn apply(&self, row: ArrayView1<'_, f64>, mut image: ArrayViewMut1<'_, f64>) {
        for &Move { source, target, kind } in &self.moves {
            let matrix = &self.matrices[kind];
            let size = matrix.len().isqrt();
            for (k, factors) in matrix.chunks_exact(size).enumerate() {
                image[target + k] = factors.iter().enumerate().map(|(j, factor)| factor * row[source + j]).sum();
            }
        }
    }

    /// ⟨i|R|j⟩ of [`LANES`] pairs at once: function by function the coefficients of the kets j and the rows of S·C
    /// of the bras i.
    pub(super) fn between(&self, kets: &[Lanes], bras: &[Lanes]) -> Lanes {
        // The widest vectors that the processor at hand has; sums run in the same order on any.
        pulp::Arch::new().dispatch(
            #[inline(always)]
            || self.sums(kets, bras),
        )
    }

    #[expect(clippy::inline_always, reason = "compiled once for each width of vectors only where it is inlined")]
    #[inline(always)]
    fn sums(&self, kets: &[Lanes], bras: &[Lanes]) -> Lanes {
        let mut sums = [0.0; LANES];
        if kets.len() < self.n_functions || bras.len() < self.n_functions {
            return sums;
        }
        for &Move { source, target, kind } in &self.moves {
            let matrix = &self.matrices[kind][..];
            let (kets, bras) = (&kets[source..], &bras[target..]);
            match matrix.len() {
                1 => shell::<1>(matrix, kets, bras, &mut sums),
                9 => shell::<3>(matrix, kets, bras, &mut sums),
                25 => shell::<5>(matrix, kets, bras, &mut sums),
                36 => shell::<6>(matrix, kets, bras, &mut sums),
                49 => shell::<7>(matrix, kets, bras, &mut sums),
                81 => shell::<9>(matrix, kets, bras, &mut sums),
                100 => shell::<10>(matrix, kets, bras, &mut sums),
                121 => shell::<11>(matrix, kets, bras, &mut sums),
                169 => shell::<13>(matrix, kets, bras, &mut sums),
                225 => shell::<15>(matrix, kets, bras, &mut sums),
                441 => shell::<21>(matrix, kets, bras, &mut sums),
                _ => shell::<28>(matrix, kets, bras, &mut sums),
            }
        }
        sums
    }
}

/// Pairs of orbitals that are worked on together.
pub(super) const LANES: usize = 16;
/// One number a pair.
pub(super) type Lanes = [f64; LANES];

/// Adds Σ over k, j of bra_k D_kj ket_j of one shell of `N` functions.
#[expect(clippy::inline_always, reason = "compiled once for each width of vectors only where it is inlined")]
#[inline(always)]
fn shell<const N: usize>(matrix: &[f64], kets: &[Lanes], bras: &[Lanes], sums: &mut Lanes) {
    let (Some(kets), Some(bras)) = (kets.first_chunk::<N>(), bras.first_chunk::<N>()) else { return };
    for (factors, bra) in matrix.chunks_exact(N).zip(bras) {
        let mut image = [0.0; LANES];
        for (factor, ket) in factors.iter().zip(kets) {
            for (image, value) in image.iter_mut().zip(ket) {
                *image += factor * value;
            }
        }
        for ((sum, image), value) in sums.iter_mut().zip(&image).zip(bra) {
            *sum += image * value;
        }
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
