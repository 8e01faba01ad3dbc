//! Sums, products and squares of representations, and the irreps of x, y, z, of rotations and of products of two coordinates.

use super::atomic::HIGHEST_L;
use super::character_table::{self, CharacterTable, Row};
use super::elements::LINEAR_AXIS_ORDER;
use super::error::GroupError;
use super::functions::{Space, harmonic_character};
use super::irrep_name::{IrrepName, Parity};
use super::operation::axis_angle;
use super::point_group::{Class, Irrep, PointGroup};

pub use super::character_table::{Decomposition, WHOLE};

impl CharacterTable for PointGroup {
    fn title(&self) -> String {
        self.name().to_string()
    }

    fn n_classes(&self) -> usize {
        self.classes().len()
    }

    fn weight(&self, class: usize) -> f64 {
        self.classes()[class].weight
    }

    fn n_irreps(&self) -> usize {
        self.irreps().len()
    }

    fn irrep_name(&self, irrep: usize) -> String {
        self.irreps()[irrep].name.to_string()
    }

    fn row(&self, irrep: usize) -> Row<'_> {
        let Irrep { dimension, constituents, ref characters, .. } = self.irreps()[irrep];
        Row { dimension, constituents, characters }
    }

    fn character_of_power(&self, irrep: usize, class: usize, k: usize) -> f64 {
        let irrep = &self.irreps()[irrep];
        if let IrrepName::Atomic { l, parity } = irrep.name {
            // Classes of the quadrature have no elements: the angle tells.
            let (angle, proper) = self.angle(class);
            let sign = if proper || parity == Parity::Even || k.is_multiple_of(2) { 1.0 } else { -1.0 };
            return sign * harmonic_character(usize::from(l), angle * k as f64);
        }
        let member = self.classes()[class].members.first().copied().unwrap_or(0);
        let power = (0..k).fold(0, |power, _| self.multiply(member, power));
        irrep.characters[self.elements()[power].class_idx]
    }

    fn reach(&self, irrep: usize) -> Option<(u32, u32)> {
        match self.irreps()[irrep].name {
            IrrepName::Linear { m, .. } => Some((2 * u32::from(m), LINEAR_AXIS_ORDER - 2)),
            IrrepName::Atomic { l, .. } => Some((2 * u32::from(l), 2 * u32::from(HIGHEST_L))),
            IrrepName::Mulliken { .. } => None,
        }
    }
}

impl PointGroup {
    /// How often each irrep occurs in a representation: (irrep, multiplicity), only those that occur.
    ///
    /// `characters` has one real entry per class. A pair of complex conjugates counts once when both occur once.
    ///
    /// # Errors
    /// [`GroupError::ClassCount`]; [`GroupError::NotWhole`] when a multiplicity is no whole number; [`GroupError::Incomplete`] when
    /// the irreps found do not make up the dimension, as with |m| > 12 in linear groups.
    pub fn decompose(&self, characters: &[f64]) -> Result<Decomposition, GroupError> {
        character_table::decompose(self, characters)
    }

    /// The irreps in a ⊗ b with multiplicities.
    ///
    /// # Errors
    /// [`GroupError::BeyondTable`] for continuous groups where the product leaves the irreps kept.
    pub fn product(&self, a: usize, b: usize) -> Result<Decomposition, GroupError> {
        character_table::product(self, a, b)
    }

    /// The irreps in the symmetric square of a.
    ///
    /// # Errors
    /// As [`Self::product`].
    pub fn symmetric_square(&self, a: usize) -> Result<Decomposition, GroupError> {
        character_table::square(self, a, 1, 1.0)
    }

    /// The irreps in the antisymmetric square {a²}.
    ///
    /// # Errors
    /// As [`Self::product`].
    pub fn antisymmetric_square(&self, a: usize) -> Result<Decomposition, GroupError> {
        character_table::square(self, a, 1, -1.0)
    }

    /// Characters of the antisymmetrised powers Λ⁰, Λ¹, … of an irrep, as `[power][class]`: of electrons of one spin in its orbitals.
    ///
    /// # Holds
    /// Λ^d has characters ±1 (the determinant); Λ² is [`Self::antisymmetric_square`].
    #[must_use]
    pub fn exterior_powers(&self, a: usize) -> Vec<Vec<f64>> {
        character_table::exterior_powers(self, a)
    }

    /// How often the totally symmetric irrep occurs in a product: above zero where an integral may differ from zero.
    ///
    /// Each factor has one character per class.
    #[must_use]
    pub fn mean(&self, factors: &[&[f64]]) -> f64 {
        character_table::mean(self, factors)
    }

    /// Index of the totally symmetric irrep.
    #[must_use]
    pub fn totally_symmetric(&self) -> usize {
        let symmetric = |characters: &[f64]| characters.iter().all(|character| (character - 1.0).abs() < WHOLE);
        self.irreps().iter().position(|irrep| symmetric(&irrep.characters)).unwrap_or(0)
    }

    /// The irreps whose functions of the given kind are not empty, with how often.
    fn with_functions(&self, count: impl Fn(&super::functions::Functions) -> usize) -> Decomposition {
        let counted = self.irreps().iter().map(|irrep| count(&irrep.functions)).enumerate();
        counted.filter(|(_, n)| *n > 0).collect()
    }

    /// The irreps of x, y, z.
    #[must_use]
    pub fn vector_irreps(&self) -> Decomposition {
        self.with_functions(|functions| functions.linear.len())
    }

    /// The irreps of Rx, Ry, Rz.
    #[must_use]
    pub fn rotation_irreps(&self) -> Decomposition {
        self.with_functions(|functions| functions.rotations.len())
    }

    /// The irreps of x², y², z², xy, xz, yz.
    #[must_use]
    pub fn quadratic_irreps(&self) -> Decomposition {
        self.with_functions(|functions| functions.quadratic.len())
    }

    /// The characters, one per class, of the functions of degree l about a centre: an s, p, d … shell.
    #[must_use]
    pub fn shell_characters(&self, l: usize) -> Vec<f64> {
        let space = Space::Harmonics(l);
        let of_irrep = self.orbital_irrep(l).map(|irrep| self.irreps()[irrep].characters.clone());
        of_irrep.unwrap_or_else(|| {
            let of_class = |class: &Class| {
                class
                    .members
                    .first()
                    .map_or(f64::NAN, |&member| space.character(self.elements()[member].operation.matrix()))
            };
            self.classes().iter().map(of_class).collect()
        })
    }

    /// For an atom the irrep of its functions of degree l, of parity (−1)^l; `None` for other groups and beyond the l held.
    #[must_use]
    pub fn orbital_irrep(&self, l: usize) -> Option<usize> {
        let l = u8::try_from(l).ok()?;
        let parity = if l % 2 == 0 { Parity::Even } else { Parity::Odd };
        self.irrep_idx(&IrrepName::Atomic { parity, l }).ok()
    }

    /// What ⟨i|R|i⟩ of each element is multiplied with, and summed, to give the weight of irrep `a` in function i.
    ///
    /// One entry per element: (d/constituents) χ(R)/|G|. Not for atoms, whose elements are only a sample.
    #[must_use]
    pub fn projector_coefficients(&self, a: usize) -> Vec<f64> {
        let irrep = &self.irreps()[a];
        let factor = irrep.dimension as f64 / irrep.constituents as f64 / self.order() as f64;
        self.elements().iter().map(|element| factor * irrep.characters[element.class_idx]).collect()
    }

    /// The angle (0 to π) by which the rotations of a class turn, improper ones taken times inversion, and whether they are proper.
    #[must_use]
    pub(super) fn angle(&self, class: usize) -> (f64, bool) {
        if let Some(&member) = self.classes()[class].members.first() {
            let matrix = self.elements()[member].operation.matrix();
            let proper = matrix.determinant() > 0.0;
            return (axis_angle(&if proper { *matrix } else { -matrix }).1, proper);
        }
        // A class of the quadrature for atoms: (Rx, Ry, Rz) has the trace 1 + 2cos(angle), S_u the sign.
        let character = |l, parity| {
            self.irrep_idx(&IrrepName::Atomic { parity, l }).map_or(f64::NAN, |at| self.irreps()[at].characters[class])
        };
        let cosine = (character(1, Parity::Even) - 1.0) / 2.0;
        (cosine.clamp(-1.0, 1.0).acos(), character(0, Parity::Odd) > 0.0)
    }
}
