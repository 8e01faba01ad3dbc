//! Projection onto irreps and transfer between partners, in the space of coefficients.
//!
//! Permutations of shells with their turns form an exact representation there, whatever the nuclei, so what is projected is
//! pure to rounding. Not here: overlaps.

use crate::group::PointGroup;
use crate::wavefunction::Turning;
use ndarray::{Array1, Array2, ArrayView1};

/// The operations of a group on coefficients.
pub struct Projector<'a> {
    /// The group.
    pub group: &'a PointGroup,
    /// One an element.
    pub turnings: &'a [Turning],
}

impl Projector<'_> {
    /// The orbital under every operation: n_elements × n_functions.
    pub fn images(&self, row: ArrayView1<'_, f64>) -> Array2<f64> {
        let mut images = Array2::zeros((self.turnings.len(), row.len()));
        for (turning, image) in self.turnings.iter().zip(images.outer_iter_mut()) {
            turning.apply(row, image);
        }
        images
    }

    /// Its part in an irrep: d/(c|G|) Σ χ(R) R, with c = 2 for a real pair of complex conjugates.
    pub fn onto_irrep(&self, irrep: usize, images: &Array2<f64>) -> Array1<f64> {
        let of_group = &self.group.irreps()[irrep];
        let scale = of_group.dimension as f64 / of_group.constituents as f64 / self.turnings.len() as f64;
        let elements = self.group.elements().iter();
        let weights: Array1<f64> = elements.map(|element| scale * of_group.characters[element.class_idx]).collect();
        weights.dot(images)
    }

    /// d/|G| Σ D(R)ₖⱼ R: takes partner j to partner k and all else to nothing.
    pub fn transfer(&self, irrep: usize, to: usize, from: usize, images: &Array2<f64>) -> Array1<f64> {
        let of_group = &self.group.irreps()[irrep];
        let scale = of_group.dimension as f64 / self.turnings.len() as f64;
        let weights: Array1<f64> = of_group.matrices.iter().map(|matrix| scale * matrix[(to, from)]).collect();
        weights.dot(images)
    }

    /// Whether the group alone tells the irrep's partners apart.
    pub fn has_partners(&self, irrep: usize) -> bool {
        self.group.irreps()[irrep].constituents == 1
    }

    /// Number of partners.
    pub fn dimension(&self, irrep: usize) -> usize {
        self.group.irreps()[irrep].dimension
    }
}
