//! Sums, products and squares of representations, and the irreps of x, y, z, of rotations and of products of two coordinates.

use super::atomic::HIGHEST_L;
use super::elements::LINEAR_AXIS_ORDER;
use super::error::GroupError;
use super::functions::Space;
use super::irrep_name::{IrrepName, Parity};
use super::point_group::{Class, PointGroup};

/// How far a multiplicity may lie from a whole number.
pub const WHOLE: f64 = 1e-6;

/// Irreps by index, each with how often it occurs; ascending.
pub type Decomposition = Vec<(usize, usize)>;

impl PointGroup {
    /// How often each irrep occurs in a representation: (irrep, multiplicity), only those that occur.
    ///
    /// `characters` has one real entry per class. A pair of complex conjugates counts once when both occur once.
    ///
    /// # Errors
    /// [`GroupError::ClassCount`]; [`GroupError::NotWhole`] when a multiplicity is no whole number; [`GroupError::Incomplete`] when
    /// the irreps found do not make up the dimension, as with |m| > 12 in linear groups.
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a small whole number, not negative")]
    pub fn decompose(&self, characters: &[f64]) -> Result<Decomposition, GroupError> {
        let classes = self.classes();
        if characters.len() != classes.len() {
            return Err(GroupError::ClassCount { found: characters.len(), expected: classes.len() });
        }
        let mut found = Vec::new();
        let mut dimension = 0.0;
        for (at, irrep) in self.irreps().iter().enumerate() {
            let products =
                irrep.characters.iter().zip(characters).zip(classes).map(|((a, b), class)| a * b * class.weight);
            let multiplicity = products.sum::<f64>() / irrep.constituents as f64;
            let nearest = multiplicity.round().max(0.0);
            let deviation = (multiplicity - nearest).abs();
            // NaN is refused too.
            if !(deviation <= WHOLE) {
                let irrep = irrep.name.to_string();
                return Err(GroupError::NotWhole { irrep, multiplicity, deviation, limit: WHOLE });
            }
            if nearest > 0.0 {
                dimension += nearest * irrep.dimension as f64;
                found.push((at, nearest as usize));
            }
        }
        let expected = characters.first().copied().unwrap_or(0.0);
        if (dimension - expected).abs() > 0.5 {
            return Err(GroupError::Incomplete { group: self.name().to_string(), found: dimension, expected });
        }
        Ok(found)
    }

    /// The irreps in a ⊗ b with multiplicities.
    ///
    /// # Errors
    /// [`GroupError::BeyondTable`] for continuous groups where the product leaves the irreps kept.
    pub fn product(&self, a: usize, b: usize) -> Result<Decomposition, GroupError> {
        self.check_reach(a, b)?;
        let (a, b) = (&self.irreps()[a], &self.irreps()[b]);
        self.decompose(&a.characters.iter().zip(&b.characters).map(|(x, y)| x * y).collect::<Vec<_>>())
    }

    /// The irreps in the symmetric square [a²].
    ///
    /// # Errors
    /// As [`Self::product`].
    pub fn symmetric_square(&self, a: usize) -> Result<Decomposition, GroupError> {
        self.square(a, 1.0)
    }

    /// The irreps in the antisymmetric square {a²}.
    ///
    /// # Errors
    /// As [`Self::product`].
    pub fn antisymmetric_square(&self, a: usize) -> Result<Decomposition, GroupError> {
        self.square(a, -1.0)
    }

    /// Characters (χ(R)² ± χ(R²))/2.
    fn square(&self, a: usize, sign: f64) -> Result<Decomposition, GroupError> {
        self.check_reach(a, a)?;
        let irrep = &self.irreps()[a];
        if let IrrepName::Atomic { l, .. } = irrep.name {
            // L = 2l, 2l − 2, … are symmetric, the others antisymmetric; all even.
            let wanted = |name: IrrepName| matches!(name, IrrepName::Atomic { parity: Parity::Even, l: total } if total <= 2 * l && (total % 2 == 0) == (sign > 0.0));
            return Ok((0..self.irreps().len())
                .filter(|&at| wanted(self.irreps()[at].name))
                .map(|at| (at, 1))
                .collect());
        }
        let squared = self.classes().iter().zip(&irrep.characters).map(|(class, character)| {
            let square = class.members.first().map_or(0, |&member| self.multiply(member, member));
            let of_square = irrep.characters[self.elements()[square].class_idx];
            f64::midpoint(character * character, sign * of_square)
        });
        self.decompose(&squared.collect::<Vec<_>>())
    }

    fn check_reach(&self, a: usize, b: usize) -> Result<(), GroupError> {
        let (a, b) = (self.irreps()[a].name, self.irreps()[b].name);
        let (reach, limit) = match (a, b) {
            (IrrepName::Linear { m: a, .. }, IrrepName::Linear { m: b, .. }) => {
                (u32::from(a) + u32::from(b), (LINEAR_AXIS_ORDER - 1) / 2)
            }
            (IrrepName::Atomic { l: a, .. }, IrrepName::Atomic { l: b, .. }) => {
                (u32::from(a) + u32::from(b), u32::from(HIGHEST_L))
            }
            _ => return Ok(()),
        };
        if reach <= limit {
            Ok(())
        } else {
            Err(GroupError::BeyondTable { a: a.to_string(), b: b.to_string(), reach, limit })
        }
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
}
