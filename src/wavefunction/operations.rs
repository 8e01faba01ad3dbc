//! The operations of a group on orbitals, by permutation of atoms or truly turned in space.
//!
//! Here: ⟨i|R|j⟩ for orbitals i, j and every operation R, whichever path an operation takes.
//! Not here: one operation by permutation (`wavefunction::turn`), one truly turned (`wavefunction::turned`).

use super::product;
use super::turn::{LANES, Lanes, Turning};
use super::turned::Turned;
use ndarray::{Array2, ArrayView1, ArrayView2, Axis, parallel::prelude::*};
use rayon::slice::ParallelSlice;

/// Orbitals of one spin: coefficients and the rows of S·C, both n_orbitals × n_functions.
#[derive(Debug, Clone, Copy)]
pub struct Rows<'a> {
    /// Canonical coefficients.
    pub coefficients: ArrayView2<'a, f64>,
    /// Rows of S·C.
    pub products: ArrayView2<'a, f64>,
}

/// One operation an element of a group, or a fixed sample of the full rotation group.
#[derive(Debug)]
pub enum Operations {
    /// Every atom lands on its like.
    Permuting(Vec<Turning>),
    /// Some atoms land nowhere: their functions are turned in space.
    Turned(Turned),
}

/// A bra and a ket, as rows.
pub type Pair = (usize, usize);

impl Operations {
    /// How many there are.
    #[must_use]
    pub fn count(&self) -> usize {
        match self {
            Self::Permuting(turnings) => turnings.len(),
            Self::Turned(turned) => turned.count(),
        }
    }

    /// ⟨i|R|i⟩ of every orbital i under every operation R: n_orbitals × n_operations.
    ///
    /// # Holds
    /// The column of the identity is 1 for normalised orbitals.
    #[must_use]
    pub fn expectations(&self, rows: Rows<'_>) -> Array2<f64> {
        let pairs: Vec<Pair> = (0..rows.coefficients.nrows()).map(|i| (i, i)).collect();
        self.between(rows, &pairs)
    }

    /// Mean over the operations of ⟨i|R|j⟩² for each pair of a bra i and a ket j.
    ///
    /// # Holds
    /// For two partners of one irrep of dimension d it is 1/d, however the partners are turned (Schur's
    /// lemma); for orbitals of different irreps, or of different sets of one irrep, it is 0.
    #[must_use]
    pub fn connections(&self, rows: Rows<'_>, pairs: &[Pair]) -> Vec<f64> {
        let scale = 1.0 / self.count().max(1) as f64;
        let mean = |row: ArrayView1<'_, f64>| scale * row.iter().map(|value| value * value).sum::<f64>();
        self.between(rows, pairs).outer_iter().map(mean).collect()
    }

    /// ⟨i|R|j⟩ of every pair under every operation: n_pairs × n_operations.
    fn between(&self, rows: Rows<'_>, pairs: &[Pair]) -> Array2<f64> {
        let Rows { coefficients, products } = rows;
        let mut values = Array2::zeros((pairs.len(), self.count()));
        if pairs.is_empty() {
            return values;
        }
        match self {
            Self::Permuting(turnings) => {
                values.axis_chunks_iter_mut(Axis(0), LANES).into_par_iter().zip(pairs.par_chunks(LANES)).for_each_init(
                    || [Vec::new(), Vec::new()],
                    |[kets, bras], (mut values, pairs)| {
                        gather(coefficients, pairs.iter().map(|pair| pair.1), kets);
                        gather(products, pairs.iter().map(|pair| pair.0), bras);
                        for (mut column, turning) in values.axis_iter_mut(Axis(1)).zip(turnings) {
                            let sums = turning.between(kets, bras);
                            column.iter_mut().zip(sums).for_each(|(value, sum)| *value = sum);
                        }
                    },
                );
            }
            // One matrix of functions at a time, so that memory stays that of one overlap.
            Self::Turned(turned) => {
                for (element, mut column) in values.axis_iter_mut(Axis(1)).enumerate() {
                    let images = product(coefficients, turned.matrix(element).view());
                    column
                        .axis_iter_mut(Axis(0))
                        .into_par_iter()
                        .zip(pairs)
                        .for_each(|(mut value, &(bra, ket))| value.fill(images.row(bra).dot(&coefficients.row(ket))));
                }
            }
        }
        values
    }

    /// ⟨i|R|j⟩ for all bras i and kets j of one operation: n_bras × n_kets.
    #[must_use]
    pub fn elements(&self, element: usize, bras: Rows<'_>, kets: Rows<'_>) -> Array2<f64> {
        match self {
            Self::Permuting(turnings) => {
                let mut images = Array2::zeros(kets.coefficients.dim());
                for (row, image) in kets.coefficients.outer_iter().zip(images.outer_iter_mut()) {
                    turnings[element].apply(row, image);
                }
                product(bras.products, images.t())
            }
            Self::Turned(turned) => {
                let images = product(bras.coefficients, turned.matrix(element).view());
                product(images.view(), kets.coefficients.t())
            }
        }
    }
}

/// Up to [`LANES`] rows side by side: one entry a function.
fn gather(rows: ArrayView2<'_, f64>, chosen: impl Iterator<Item = usize>, lanes: &mut Vec<Lanes>) {
    lanes.clear();
    lanes.resize(rows.ncols(), [0.0; LANES]);
    for (lane, row) in chosen.enumerate() {
        for (entry, value) in lanes.iter_mut().zip(rows.row(row)) {
            entry[lane] = *value;
        }
    }
}
