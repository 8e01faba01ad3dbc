//! Operations that carry some atoms onto nothing: functions truly turned in space.
//!
//! Atoms that every operation of the group carries onto like atoms are permuted, as in `wavefunction::turn`; the
//! functions of all others are turned, and what is left of them is their overlap with the basis as it stands.
//! Not here: which atoms those are (`labelling::placement`).

use super::basis::Basis;
use super::turn::{kinds_of_matrices, overlap_with_turned};
use nalgebra::{Matrix3, Point3};
use ndarray::{Array2, Axis, parallel::prelude::*};

/// Where an operation takes every atom: onto an atom, or, for those truly turned, to no atom.
pub type PartialPermutation = Vec<Option<usize>>;

/// All operations of a group on one basis.
///
/// Law: truly turned functions follow an exact unitary representation, so weights are not negative and add up to one
/// whatever the nuclei; permuted ones do so to within the tolerance.
#[derive(Debug)]
pub struct Turned {
    basis: Basis,
    overlap: Array2<f64>,
    centre: Point3<f64>,
    elements: Vec<(Matrix3<f64>, PartialPermutation)>,
}

impl Turned {
    /// Matrices in the axes of the file about `centre`, with what they do to the atoms; `overlap` is that of the basis.
    #[must_use]
    pub fn new(
        basis: Basis,
        overlap: Array2<f64>,
        centre: Point3<f64>,
        elements: Vec<(Matrix3<f64>, PartialPermutation)>,
    ) -> Self {
        Self { basis, overlap, centre, elements }
    }

    /// Number of operations.
    #[must_use]
    pub fn count(&self) -> usize {
        self.elements.len()
    }

    /// ⟨μ|R|ν⟩ of one operation: n_functions × n_functions.
    ///
    /// Costs two overlaps at most, n². Built anew at each call: all of them at once would fill memory.
    #[must_use]
    pub fn matrix(&self, element: usize) -> Array2<f64> {
        let (matrix, permutation) = &self.elements[element];
        let mut result = if permutation.iter().all(Option::is_some) {
            Array2::zeros(self.overlap.dim())
        } else {
            overlap_with_turned(&self.basis, matrix, &self.centre)
        };
        let matrices = kinds_of_matrices(&self.basis, matrix);
        let shells = self.basis.shells();
        let mut of_atom: Vec<Vec<usize>> = vec![Vec::new(); permutation.len()];
        for (shell_idx, shell) in shells.iter().enumerate() {
            of_atom[shell.atom_idx].push(shell_idx);
        }
        // Column of a permuted function: that of its image's shell, turned.
        let moves: Vec<(usize, usize)> = permutation
            .iter()
            .enumerate()
            .filter_map(|(from, to)| to.map(|to| (from, to)))
            .flat_map(|(from, to)| of_atom[from].iter().copied().zip(of_atom[to].iter().copied()))
            .collect();
        result.axis_iter_mut(Axis(0)).into_par_iter().zip(self.overlap.axis_iter(Axis(0)).into_par_iter()).for_each(
            |(mut row, overlap)| {
                for &(source, image) in &moves {
                    let (source, image) = (&shells[source], &shells[image]);
                    let turn = &matrices[2 * source.l + usize::from(source.pure)];
                    for (column, place) in turn.column_iter().zip(source.range()) {
                        row[place] = column.iter().zip(image.range()).map(|(factor, k)| factor * overlap[k]).sum();
                    }
                }
            },
        );
        result
    }
}
