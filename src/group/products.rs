//! Sums, products and squares of representations.

use super::error::GroupError;
use super::point_group::PointGroup;

impl PointGroup {
    /// How often each irrep occurs in a representation: (irrep, multiplicity), only those that occur.
    ///
    /// `characters` has one real entry per class. A pair of complex conjugates counts once when both occur once.
    ///
    /// # Errors
    /// [`GroupError::NotWhole`] when a multiplicity is no whole number, [`GroupError::ClassCount`].
    pub fn decompose(&self, characters: &[f64]) -> Result<Vec<(usize, usize)>, GroupError> {
        let _ = characters;
        todo!()
    }

    /// The irreps in a ⊗ b with multiplicities.
    ///
    /// # Errors
    /// [`GroupError::BeyondTable`] for continuous groups where the product leaves the irreps kept.
    pub fn product(&self, a: usize, b: usize) -> Result<Vec<(usize, usize)>, GroupError> {
        let _ = (a, b);
        todo!()
    }

    /// The irreps in the symmetric square [a²].
    ///
    /// # Errors
    /// As [`Self::product`].
    pub fn symmetric_square(&self, a: usize) -> Result<Vec<(usize, usize)>, GroupError> {
        let _ = a;
        todo!()
    }

    /// The irreps in the antisymmetric square {a²}.
    ///
    /// # Errors
    /// As [`Self::product`].
    pub fn antisymmetric_square(&self, a: usize) -> Result<Vec<(usize, usize)>, GroupError> {
        let _ = a;
        todo!()
    }

    /// Index of the totally symmetric irrep.
    #[must_use]
    pub fn totally_symmetric(&self) -> usize {
        0
    }

    /// The irreps of x, y, z.
    ///
    /// # Errors
    /// As [`Self::decompose`].
    pub fn vector_irreps(&self) -> Result<Vec<(usize, usize)>, GroupError> {
        todo!()
    }

    /// The irreps of Rx, Ry, Rz.
    ///
    /// # Errors
    /// As [`Self::decompose`].
    pub fn rotation_irreps(&self) -> Result<Vec<(usize, usize)>, GroupError> {
        todo!()
    }

    /// The irreps of x², y², z², xy, xz, yz.
    ///
    /// # Errors
    /// As [`Self::decompose`].
    pub fn quadratic_irreps(&self) -> Result<Vec<(usize, usize)>, GroupError> {
        todo!()
    }
    /// What χ(R)⟨i|R|i⟩ of each element is multiplied with and summed to give the weight of irrep `a` in function i:
    /// (d/constituents) χ(R)/|G|, one entry per element.
    #[must_use]
    pub fn projector_coefficients(&self, a: usize) -> Vec<f64> {
        let _ = a;
        todo!()
    }
}
