//! The operations of a group on orbitals, by permutation of atoms or truly turned in space.
//!
//! Here: ⟨i|R|j⟩ for orbitals i, j and every operation R, whichever path an operation takes.
//! Not here: one operation by permutation (`wavefunction::turn`), one truly turned (`wavefunction::turned`).

use super::product;
use super::turn::Turning;
use super::turned::Turned;
use ndarray::{Array1, Array2, ArrayView2, Axis, parallel::prelude::*};

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

/// An orbital and those it may be connected with.
pub type Candidates = (usize, Vec<usize>);

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
        let Rows { coefficients, products } = rows;
        let mut values = Array2::zeros((coefficients.nrows(), self.count()));
        match self {
            Self::Permuting(turnings) => values
                .axis_iter_mut(Axis(0))
                .into_par_iter()
                .zip(coefficients.axis_iter(Axis(0)))
                .zip(products.axis_iter(Axis(0)))
                .for_each(|((mut row, c), sc)| {
                    for (value, turning) in row.iter_mut().zip(turnings) {
                        *value = turning.expectation(c, sc);
                    }
                }),
            // One matrix of functions at a time, so that memory stays that of one overlap.
            Self::Turned(turned) => {
                for (element, mut column) in values.axis_iter_mut(Axis(1)).enumerate() {
                    let images = product(coefficients, turned.matrix(element).view());
                    for ((value, image), c) in column.iter_mut().zip(images.outer_iter()).zip(coefficients.outer_iter())
                    {
                        *value = image.dot(&c);
                    }
                }
            }
        }
        values
    }

    /// Mean over the operations of ⟨i|R|j⟩² for each ket j and each of its candidates i.
    ///
    /// # Holds
    /// For two partners of one irrep of dimension d it is 1/d, however the partners are turned (Schur's
    /// lemma); for orbitals of different irreps, or of different sets of one irrep, it is 0.
    #[must_use]
    pub fn connections(&self, rows: Rows<'_>, candidates: &[Candidates]) -> Vec<Vec<f64>> {
        let scale = 1.0 / self.count().max(1) as f64;
        let Rows { coefficients, products } = rows;
        match self {
            Self::Permuting(turnings) => candidates
                .par_iter()
                .map(|(ket, bras)| {
                    let ket = coefficients.row(*ket);
                    let mut turned = Array1::zeros(ket.len());
                    let mut sums = vec![0.0; bras.len()];
                    for turning in turnings.iter().filter(|_| !bras.is_empty()) {
                        turning.apply(ket, turned.view_mut());
                        for (sum, &bra) in sums.iter_mut().zip(bras) {
                            *sum += products.row(bra).dot(&turned).powi(2) * scale;
                        }
                    }
                    sums
                })
                .collect(),
            Self::Turned(turned) => {
                let mut sums: Vec<Vec<f64>> = candidates.iter().map(|(_, bras)| vec![0.0; bras.len()]).collect();
                if candidates.iter().all(|(_, bras)| bras.is_empty()) {
                    return sums;
                }
                for element in 0..turned.count() {
                    let images = product(coefficients, turned.matrix(element).view());
                    for (sums, (ket, bras)) in sums.iter_mut().zip(candidates) {
                        for (sum, &bra) in sums.iter_mut().zip(bras) {
                            *sum += images.row(bra).dot(&coefficients.row(*ket)).powi(2) * scale;
                        }
                    }
                }
                sums
            }
        }
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
